//! Everything that one step hands to the next, and its bytes in a checkpoint.
//!
//! | checkpoint field, version 1 | bytes |
//! | --- | --- |
//! | version u8 = 1 | 1 |
//! | running hash u64, samples u32 | 12 |
//! | flags u8: 1 level count, 2 temperature count, 4 level ok, 8 product known | 1 |
//! | last level count i32 and tick u64; last temperature count i32; start tick u64; product u8; always present, zero where the flag is off | 25 |
//! | number of machines u8, each: number u8, state u8 (bit 7: pending), since u32, entered u32 | 1 + 10 n |
//!
//! Only machines that are not normal stand in the list, by rising number.
//!
//! Version 2 is written where volumes for the time to limit are known; behind the fields of version
//! 1 it has their number u8 and, oldest first, each: tick u32, volume f32.

use super::digest::{Digest, fold};
use super::trend::{POINTS, Point, Trend};
use crate::alarm::{AlarmState, MACHINES, Machine, MachineId, Move};
use crate::cursor::{Sink, Source};
use crate::signal::Sight;

/// Most bytes of a checkpoint.
pub const CHECKPOINT_BYTES_MAX: usize = 41 + 10 * MACHINES + 8 * POINTS;
const VERSION: u8 = 1;
/// With volumes behind the machines.
const VERSION_WITH_VOLUMES: u8 = 2;
const PENDING: u8 = 0x80;

/// State of [`super::step`].
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct State {
    /// What is remembered of the sensors.
    pub sight: Sight,
    machines: [Machine; MACHINES],
    /// The last volumes, for the time to limit.
    pub(super) trend: Trend,
    /// Running hash of all results.
    pub hash: u64,
    /// Samples evaluated since the journal began.
    pub samples: u32,
}

impl Default for State {
    fn default() -> Self {
        Self::new()
    }
}

impl State {
    /// Nothing is read, every machine is normal. Every bit is zero.
    #[must_use]
    pub const fn new() -> Self {
        Self {
            sight: Sight::NONE,
            machines: [Machine::NORMAL; MACHINES],
            trend: Trend::NONE,
            hash: 0,
            samples: 0,
        }
    }

    /// All machines, by number.
    #[must_use]
    pub const fn machines(&self) -> &[Machine; MACHINES] {
        &self.machines
    }

    /// One machine.
    #[must_use]
    pub fn machine(&self, id: MachineId) -> Machine {
        self.machines.get(usize::from(id.number())).copied().unwrap_or_default()
    }

    pub(super) fn machine_mut(&mut self, id: MachineId) -> Option<&mut Machine> {
        self.machines.get_mut(usize::from(id.number()))
    }

    /// A new start of the controller at `tick_ms` of its own count: nothing is read yet, delays
    /// start anew, every alarm stays as it stands.
    pub fn restart(&mut self, tick_ms: u64) {
        self.sight = Sight { started_ms: tick_ms, product: self.sight.product, ..Sight::default() };
        for machine in &mut self.machines {
            machine.restart(tick_ms);
        }
        // Ticks of another start say nothing of the time between.
        self.trend = Trend::NONE;
    }

    /// Another plan took over: machines belong to the old plan's parts and start anew; faults stay.
    pub fn change_plan(&mut self, tick_ms: u64) {
        self.restart(tick_ms);
        self.sight.product = None;
        for (number, machine) in (0_u8..).zip(&mut self.machines) {
            if MachineId::from_number(number).is_some_and(MachineId::is_load) {
                *machine = Machine::default();
            }
        }
    }

    pub(super) fn fold_sample<const N: usize>(&mut self, digest: &Digest<N>, lane: usize) {
        self.hash = fold(self.hash, digest.lane(lane));
        self.samples = self.samples.wrapping_add(1);
    }

    pub(super) fn fold_move(&mut self, id: MachineId, moved: Move) {
        let bits = u64::from(id.number()) << 16
            | u64::from(moved.from.number()) << 8
            | u64::from(moved.to.number());
        self.hash = fold(self.hash, bits);
    }

    /// Writes the checkpoint; gives its length, or `None` when `out` is too small
    /// ([`CHECKPOINT_BYTES_MAX`] is always enough).
    #[must_use]
    pub fn encode(&self, out: &mut [u8]) -> Option<usize> {
        let mut sink = Sink::new(out);
        let sight = &self.sight;
        let volumes = self.trend.points();
        sink.u8(if volumes.is_empty() { VERSION } else { VERSION_WITH_VOLUMES });
        sink.u64(self.hash);
        sink.u32(self.samples);
        let flags = [
            sight.last_level.is_some(),
            sight.last_temperature.is_some(),
            sight.level_ok,
            sight.product.is_some(),
        ];
        sink.u8(flags.iter().rev().fold(0, |mask, &flag| mask << 1 | u8::from(flag)));
        let (count_16, read_ms) = sight.last_level.unwrap_or_default();
        sink.i32(count_16);
        sink.u64(read_ms);
        sink.i32(sight.last_temperature.unwrap_or_default());
        sink.u64(sight.started_ms);
        sink.u8(sight.product.unwrap_or_default());
        let listed = || (0_u8..).zip(&self.machines).filter(|(_, machine)| !machine.is_normal());
        sink.u8(u8::try_from(listed().count()).unwrap_or(u8::MAX));
        for (number, machine) in listed() {
            sink.u8(number);
            sink.u8(machine.state.number() | if machine.pending { PENDING } else { 0 });
            sink.u32(machine.since_ms);
            sink.u32(machine.entered_ms);
        }
        if !volumes.is_empty() {
            sink.u8(u8::try_from(volumes.len()).unwrap_or(u8::MAX));
        }
        for point in volumes {
            sink.u32(point.tick_ms);
            sink.u32(point.volume_bits);
        }
        sink.finish()
    }

    /// Reads a checkpoint; `None` when the bytes are none or of another version.
    #[must_use]
    pub fn decode(bytes: &[u8]) -> Option<Self> {
        let mut state = Self::new();
        state.read(bytes)?;
        Some(state)
    }

    /// Reads a checkpoint over this state, which is new again when the bytes are none or of another
    /// version. Gives whether they are one. For a device, which has no room for two states.
    pub fn decode_into(&mut self, bytes: &[u8]) -> bool {
        self.clear();
        let read = self.read(bytes).is_some();
        if !read {
            self.clear();
        }
        read
    }

    fn clear(&mut self) {
        self.sight = Sight::NONE;
        self.machines.fill(Machine::NORMAL);
        self.trend = Trend::NONE;
        self.hash = 0;
        self.samples = 0;
    }

    /// Reads a checkpoint into a new state; what stands in it after `None` means nothing.
    fn read(&mut self, bytes: &[u8]) -> Option<()> {
        let mut source = Source(bytes);
        let version = source.u8()?;
        if version != VERSION && version != VERSION_WITH_VOLUMES {
            return None;
        }
        self.hash = source.u64()?;
        self.samples = source.u32()?;
        let flags = source.u8()?;
        if flags > 0b1111 {
            return None;
        }
        let level = (source.i32()?, source.u64()?);
        let temperature = source.i32()?;
        let started_ms = source.u64()?;
        let product = source.u8()?;
        self.sight = Sight {
            last_level: (flags & 1 != 0).then_some(level),
            last_temperature: (flags & 2 != 0).then_some(temperature),
            level_ok: flags & 4 != 0,
            product: (flags & 8 != 0).then_some(product),
            started_ms,
        };
        let mut least = 0;
        for _ in 0..source.u8()? {
            let number = source.u8()?;
            let id = MachineId::from_number(number).filter(|_| number >= least)?;
            least = number + 1;
            let byte = source.u8()?;
            let machine = Machine {
                // A device hides no alarm: these bytes are not its own.
                state: AlarmState::from_number(byte & !PENDING).filter(|one| !one.is_hidden())?,
                pending: byte & PENDING != 0,
                since_ms: source.u32()?,
                entered_ms: source.u32()?,
            };
            if machine.is_normal() {
                return None;
            }
            *self.machine_mut(id)? = machine;
        }
        if version == VERSION_WITH_VOLUMES {
            let count = source.u8()?;
            if !(1..=POINTS).contains(&usize::from(count)) {
                return None;
            }
            for _ in 0..count {
                let point = Point { tick_ms: source.u32()?, volume_bits: source.u32()? };
                self.trend.push(point);
            }
        }
        source.0.is_empty().then_some(())
    }
}

#[cfg(test)]
mod tests;
