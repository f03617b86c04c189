#!/usr/bin/env python3
"""Reads a Strake journal file from the written format alone and prints counts as JSON.

A second reader beside the product's own, sharing nothing with it but the byte tables: file records,
sector header, blocks, samples in codecs 0 and 1, events. Usage: read_journal.py FILE
"""

import json
import struct
import sys
import zlib

FILE_MAGIC = b"STRAKEJ1"
SECTOR, PAGE, HEADER = 4096, 256, 104
NAMES = {1: "sample", 2: "transition", 3: "fault", 4: "start_up", 5: "clock_fix",
         6: "plan_change", 10: "acknowledgement", 11: "gap"}
FORMS = {0: "samples", 1: "packed", 2: "events", 3: "state"}


class Malformed(Exception):
    """Bytes that the format does not allow."""


class Cursor:
    """Takes numbers off the front of some bytes."""

    def __init__(self, data):
        self.data, self.at = data, 0

    def take(self, count):
        if self.at + count > len(self.data):
            raise Malformed("bytes end early")
        self.at += count
        return self.data[self.at - count:self.at]

    def fixed(self, code):
        return struct.unpack("<" + code, self.take(struct.calcsize("<" + code)))[0]

    def varint(self):
        value = shift = 0
        while True:
            byte = self.take(1)[0]
            value |= (byte & 0x7F) << shift
            if value >> 64:
                raise Malformed("varint is too long")
            if byte < 0x80:
                return value
            shift += 7

    def signed(self):
        folded = self.varint()
        return (folded >> 1) ^ -(folded & 1)

    def text(self):
        return self.take(self.take(1)[0]).decode("utf-8")


def wrap32(value):
    return (value + 2**31) % 2**32 - 2**31


def read_sample(cursor, chain):
    """One sample of codec 0; gives it and the chain for the next one."""
    tick, interval, level, temperature, battery = chain
    interval += cursor.signed()
    tick += interval
    level = wrap32(level + cursor.signed())
    qualities = cursor.take(1)[0]
    temperature = wrap32(temperature + cursor.signed())
    battery += cursor.signed()
    sound = qualities & 15 <= 7 and qualities >> 4 <= 7
    if not (sound and 0 <= tick < 2**48 and 0 <= battery < 2**16):
        raise Malformed("sample out of range")
    sample = {"tick": tick, "level": level, "quality": qualities & 15,
              "temperature": temperature, "temperature_quality": qualities >> 4,
              "battery": battery}
    return sample, (tick, interval, level, temperature, battery)


class Bits:
    """Takes bits off the front of some bytes, lowest first."""

    def __init__(self, data):
        self.value, self.left = int.from_bytes(data, "little"), 8 * len(data)

    def take(self, count):
        if count > self.left:
            raise Malformed("bits end early")
        taken = self.value & ((1 << count) - 1)
        self.value >>= count
        self.left -= count
        return taken

    def number(self):
        length = self.take(6)
        if length == 63:
            return self.take(64)
        return self.take(length - 1) | 1 << (length - 1) if length else 0

    def folded(self):
        number = self.number()
        return (number >> 1) ^ -(number & 1)

    def status(self):
        quality = self.take(3)
        return quality, quality not in (1, 2) and bool(self.take(1))


class Scale:
    """Running mean of what was coded; sets the Rice parameter."""

    def __init__(self, k):
        self.mean = 24 << k

    def read(self, bits):
        k = max((self.mean * 19 >> 8).bit_length() - 1, 0)
        ones = 0
        while ones < 20 and bits.take(1):
            ones += 1
        number = bits.number() if ones == 20 else ones << k | bits.take(k)
        self.mean += (16 * min(number, 2**22) - self.mean) >> 4
        return (number >> 1) ^ -(number & 1)


class Track:
    """A channel of codec 1: its status, its places and what they are expected to be."""

    def begin(self, bits):
        self.base, self.k = 0, 2
        whole = bits.take(1)
        self.step = 16 if whole else self.read_step(bits)
        if not self.status[1]:
            self.base = bits.folded() * (16 if whole else 1)
            self.k = bits.take(4)
        self.scale = Scale(self.k)
        self.last = self.before = self.mean = self.trend = self.slope = 0
        self.n = 1

    @staticmethod
    def read_step(bits):
        step = bits.number()
        if not 0 < step < 2**32:
            raise Malformed("step out of range")
        return step

    def change_step(self, bits):
        old, new = self.step, self.read_step(bits)
        if old == new:
            return
        fine = self.last << 8
        self.base, self.step = self.count(), new
        self.before = (self.before - self.last) * old // new
        self.mean = (self.mean - fine) * old // new
        self.trend = (self.trend - fine) * old // new
        self.slope = self.slope * old // new
        self.scale.mean = min(self.scale.mean * old // new, 16 * 2**22)
        self.last = 0

    def count(self):
        count = self.base + self.last * self.step
        if not -2**31 <= count < 2**31:
            raise Malformed("count out of range")
        return count

    def read(self, bits):
        if self.status[1]:
            return 0
        expected = (self.last, self.last + ((self.last - self.before) * 3 >> 2),
                    (self.mean + 128) >> 8, (self.trend + self.slope + 128) >> 8)[self.predictor]
        place = expected + self.scale.read(bits)
        self.n = min(self.n + 1, 16)
        n, pairs, fine = self.n, self.n * (self.n + 1), place << 8
        self.mean += ((fine - self.mean) * (65536 // n)) >> 16
        off = fine - self.trend - self.slope
        self.trend += self.slope + ((off * (131072 * (2 * n - 1) // pairs)) >> 16)
        self.slope += (off * (393216 // pairs)) >> 16
        self.before, self.last = self.last, place
        return self.count()


class Packed:
    """What the blocks of codec 1 in a page hand on."""

    def __init__(self):
        self.anchored, self.level, self.temperature = False, Track(), Track()

    def tracks(self):
        return self.level, self.temperature

    def sample(self, level, temperature):
        if not (0 <= self.tick < 2**48 and 0 <= self.battery < 2**16):
            raise Malformed("sample out of range")
        return {"tick": self.tick, "level": level, "quality": self.level.status[0],
                "temperature": temperature, "temperature_quality": self.temperature.status[0],
                "battery": self.battery}

    def anchor(self, bits):
        self.tick = bits.number()
        unit = 1000 if bits.take(1) else 1
        self.interval = bits.folded() * unit
        if bits.take(1):
            self.level.status = self.temperature.status = (1, False)
        else:
            self.level.status, self.temperature.status = bits.status(), bits.status()
        for track in self.tracks():
            track.begin(bits)
        self.battery = bits.take(12 if bits.take(1) else 16)
        self.time_scale, self.battery_scale = Scale(3), Scale(4)
        self.anchored = True
        return self.sample(*(track.count() for track in self.tracks()))

    def block(self, data, count):
        """Yields the samples of a block."""
        bits, head = Bits(data), None
        if not self.anchored:
            head = self.anchor(bits)
        if head or bits.take(1):
            for track in self.tracks():
                track.predictor = bits.take(2)
            if not head and bits.take(1):
                for track in self.tracks():
                    track.change_step(bits)
        steady = (1, 1, 1) if bits.take(1) else (bits.take(1), bits.take(1), bits.take(1))
        if head:
            yield head
        for _ in range(count - bool(head)):
            if not steady[0] and bits.take(1):
                self.interval += self.time_scale.read(bits)
            self.tick += self.interval
            if not steady[1] and bits.take(1):
                for track in self.tracks():
                    track.status = bits.status()
            level = self.level.read(bits)
            temperature = self.temperature.read(bits)
            if not steady[2] and bits.take(1):
                self.battery += self.battery_scale.read(bits)
            yield self.sample(level, temperature)


def read_event(cursor):
    """Number of an event and its fields."""
    number, tick = cursor.take(1)[0], cursor.varint()
    fields = {"tick": tick}
    if number == 2:
        fields["machine"], fields["states"], fields["cause"] = cursor.take(3)
        fields["utilisation"], fields["hash"] = cursor.fixed("f"), cursor.fixed("Q")
    elif number == 3:
        fields["cause"], fields["count"], fields["detail"] = \
            cursor.take(1)[0], cursor.varint(), cursor.signed()
    elif number == 4:
        fields["boot"] = cursor.varint()
        fields["cause"], fields["carried"] = cursor.take(2)
        fields["missing_ms_max"], fields["count"] = cursor.varint(), cursor.varint()
    elif number == 5:
        fields["utc"] = cursor.varint()
    elif number == 6:
        fields["fingerprint"], fields["serial"] = cursor.fixed("Q"), cursor.varint()
    elif number == 10:
        fields["by"] = cursor.take(1)[0]
    elif number == 11:
        fields["missing"] = cursor.varint()
    else:
        raise Malformed(f"unknown entry {number}")
    return number, fields


def read_header(sector):
    """Fields of a sector header, or None."""
    head = sector[:HEADER]
    if len(head) < HEADER or struct.unpack("<I", head[100:])[0] != zlib.crc32(head[:100]):
        return None
    if head[:4] != b"SKJ\x01":
        return None
    sequence, plan, first_entry, boot, flags = struct.unpack("<IQIHH", head[4:24])
    return {"sequence": sequence, "plan": plan, "first_entry": first_entry, "boot": boot,
            "word": 1 << (flags & 15), "closed_by_restart": bool(flags & 16),
            "tick": int.from_bytes(head[24:30], "little"),
            "utc": None if head[30:36] == b"\xff" * 6 else int.from_bytes(head[30:36], "little"),
            "signed": head[36:100] != b"\xff" * 64}


class Counts:
    """What the journal holds."""

    def __init__(self):
        self.sectors = self.damaged_sectors = self.damaged = self.states = 0
        self.blocks = {name: 0 for name in [*FORMS.values(), "unknown"]}
        self.entries = {name: 0 for name in NAMES.values()}
        self.first_level = self.last_level = self.last_hash = None
        self.samples_check = 0

    def sample(self, sample):
        self.entries["sample"] += 1
        fields = struct.pack("<QiBiBH", *sample.values())
        self.samples_check = zlib.crc32(fields, self.samples_check)
        if sample["quality"] in (1, 2):
            if self.first_level is None:
                self.first_level = sample["level"]
            self.last_level = sample["level"]

    def event(self, number, fields):
        self.entries[NAMES[number]] += 1
        if number == 2:
            self.last_hash = f"{fields['hash']:016x}"


def read_page(counts, page, offset, skip, header, state):
    """Counts what one page holds."""
    at, chain, packed, chain_broken = skip, (0, 0, 0, 0, 0), Packed(), False
    while at < len(page) and page[at:].strip(b"\xff"):
        length = page[at] * header["word"]
        block = page[at:at + length]
        seed = struct.pack("<IH", header["sequence"], offset + at)
        if length < 6 or len(block) < length \
                or zlib.crc32(seed + block[:-4]) != struct.unpack("<I", block[-4:])[0]:
            counts.damaged += 1
            return
        form, count = block[1] >> 5, (block[1] & 31) + 1
        counts.blocks[FORMS.get(form, "unknown")] += 1
        at += length
        if form == 3:
            take_state(state, count - 1, block[2:-4])
            continue
        if form not in FORMS or (form < 2 and chain_broken):
            counts.damaged += 1
            chain_broken = True
            continue
        cursor = Cursor(block[2:-4])
        try:
            if form == 1:
                for sample in packed.block(block[2:-4], count):
                    counts.sample(sample)
                continue
            for _ in range(count):
                if form == 0:
                    sample, chain = read_sample(cursor, chain)
                    counts.sample(sample)
                else:
                    counts.event(*read_event(cursor))
        except Malformed:
            counts.damaged += 1
            chain_broken |= form < 2


def take_state(state, part, payload):
    """Puts the parts of a checkpoint together."""
    if part != state["next"]:
        return
    if part == 0:
        state["total"], payload = struct.unpack("<H", payload[:2])[0], payload[2:]
    state["bytes"] += payload[:state["total"] - len(state["bytes"])]
    state["next"] += 1


def read_sector(counts, stored):
    """Counts what one sector holds; gives its header, or None."""
    counts.sectors += 1
    header = read_header(stored)
    if header is None:
        counts.damaged_sectors += 1
        return None
    state = {"next": 0, "total": None, "bytes": b""}
    for index in range(SECTOR // PAGE):
        page = stored[index * PAGE:(index + 1) * PAGE]
        read_page(counts, page, index * PAGE, HEADER if index == 0 else 0, header, state)
    counts.states += state["total"] == len(state["bytes"])
    return header


def read_records(data):
    """Yields (tag, payload) of each record of the file."""
    if data[:8] != FILE_MAGIC:
        raise Malformed("no journal file")
    cursor = Cursor(data)
    cursor.take(8)
    while cursor.at < len(data):
        begin = cursor.at
        tag, length = cursor.fixed("B"), cursor.fixed("I")
        payload = cursor.take(length)
        if zlib.crc32(data[begin:cursor.at]) != cursor.fixed("I"):
            raise Malformed(f"record at {begin} has a wrong check")
        yield tag, payload


def read_file(data):
    """All counts of a journal file."""
    counts, report, headers = Counts(), {"plans": []}, []
    for tag, payload in read_records(data):
        cursor = Cursor(payload)
        if tag == 1:
            report["device"], report["firmware"] = cursor.text(), cursor.text()
            report["word"], report["ring_sectors"] = cursor.fixed("B"), cursor.fixed("I")
        elif tag == 2:
            serial, fingerprint = cursor.fixed("Q"), cursor.fixed("Q")
            report["plans"].append({"serial": serial, "fingerprint": f"{fingerprint:016x}",
                                    "bytes": len(payload) - cursor.at})
        elif tag == 3:
            sequence, used = cursor.fixed("I"), cursor.fixed("H")
            header = read_sector(counts, cursor.take(used))
            if header is not None and header["sequence"] != sequence:
                raise Malformed(f"record of sector {sequence} holds {header['sequence']}")
            headers.append(header)
        elif tag == 4:
            report["head"] = {"newest": cursor.fixed("I"), "used": cursor.fixed("H"),
                              "next_entry": cursor.fixed("I"), "hash": f"{cursor.fixed('Q'):016x}",
                              "boot": cursor.fixed("H"), "tick": cursor.fixed("Q")}
    readable = [header for header in headers if header]
    report.update({
        "sectors": counts.sectors, "damaged_sectors": counts.damaged_sectors,
        "checkpoints": counts.states, "blocks": counts.blocks, "entries": counts.entries,
        "samples": counts.entries["sample"], "damaged": counts.damaged,
        "first_level_count_16": counts.first_level, "last_level_count_16": counts.last_level,
        "last_hash": counts.last_hash, "samples_check": f"{counts.samples_check:08x}",
        "first_entry": readable[0]["first_entry"] if readable else None,
        "first_sequence": readable[0]["sequence"] if readable else None,
    })
    return report


def main():
    if len(sys.argv) != 2:
        sys.exit("usage: read_journal.py FILE")
    with open(sys.argv[1], "rb") as file:
        data = file.read()
    try:
        print(json.dumps(read_file(data)))
    except Malformed as error:
        sys.exit(f"read_journal.py: {error}")


if __name__ == "__main__":
    main()
