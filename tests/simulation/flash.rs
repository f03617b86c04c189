//! What stands on the journal's flash, read by the public reader alone.

use strake_core::journal::{Entry, Item, SECTOR_BYTES, SectorReader};

/// A sector as it stands.
#[derive(Clone, Debug)]
pub(crate) struct Sector {
    pub(crate) sequence: u32,
    pub(crate) first_entry: u32,
    pub(crate) entries: Vec<Entry>,
}

/// Every sector with a readable header at its place, by rising sequence. `before` is the result of
/// the last look at `old`; what did not change since is taken from there.
pub(crate) fn look(image: &[u8], old: &[u8], before: &[Sector]) -> Vec<Sector> {
    let count = u32::try_from(image.len() / SECTOR_BYTES).unwrap();
    let mut sectors = Vec::new();
    let mut old = old.chunks(SECTOR_BYTES);
    for (place, bytes) in (0..count).zip(image.chunks(SECTOR_BYTES)) {
        if old.next() == Some(bytes) {
            sectors.extend(before.iter().find(|one| one.sequence % count == place).cloned());
        } else {
            sectors.extend(read(bytes).filter(|one| one.sequence % count == place));
        }
    }
    sectors.sort_by_key(|sector| sector.sequence);
    sectors
}

fn read(bytes: &[u8]) -> Option<Sector> {
    let reader = SectorReader::new(bytes).ok()?;
    let (sequence, first_entry) = (reader.header().sequence, reader.header().first_entry);
    let entries = reader.filter_map(|item| match item {
        Item::Entry(entry) => Some(entry),
        Item::State { .. } | Item::Damage(_) => None,
    });
    Some(Sector { sequence, first_entry, entries: entries.collect() })
}
