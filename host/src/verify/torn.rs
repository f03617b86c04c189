//! A block without a right check: was it torn while it was written, or whole once?
//!
//! Only a loss of power or a refusing flash tears a block, and nothing is written behind it in its
//! page; what follows in the sector after a loss of power is a start, ahead of which stand but the
//! samples that it carried over. A block that others were written behind was whole then: its
//! entries were durable, and the medium lost them. The numbers in the headers alone do not tell:
//! a device that starts again in the same sector counts on from what it can read.

use super::damage::What;
use strake_core::journal::block::{Blocks, Place};
use strake_core::journal::{Damage, DamageKind, Entry, Item, SectorHeader, SectorReader};

const PAGE_BYTES: usize = 256;

/// What is wrong with a damaged block of the sector in `bytes`; `behind` reads on from there.
pub(crate) fn of_block(
    bytes: &[u8],
    header: &SectorHeader,
    damage: Damage,
    behind: SectorReader<'_>,
) -> What {
    let was_whole = damage.kind == DamageKind::Torn
        && (blocks_behind(bytes, header, damage.offset) || goes_on_without_a_start(behind));
    if was_whole { What::Decayed } else { What::Block(damage.kind) }
}

/// Whether a block with a right check stands behind `offset` in its page.
fn blocks_behind(bytes: &[u8], header: &SectorHeader, offset: u16) -> bool {
    let offset = usize::from(offset);
    let page = offset - offset % PAGE_BYTES;
    let end = bytes.len().min(page + PAGE_BYTES);
    let Some(content) = bytes.get(page..end) else { return false };
    let Ok(place_offset) = u16::try_from(page) else { return false };
    let place = Place { sequence: header.sequence, offset: place_offset, word: header.word };
    (offset % PAGE_BYTES + header.word.bytes()..content.len())
        .step_by(header.word.bytes())
        .any(|at| matches!(Blocks::new(content, at, place).next(), Some(Ok(_))))
}

/// Whether more samples follow than the next start carried over.
fn goes_on_without_a_start(behind: SectorReader<'_>) -> bool {
    let mut samples = 0_u32;
    for item in behind {
        match item {
            Item::Entry(Entry::Sample(_)) => samples += 1,
            // Of starts that share an entry an earlier one may have carried them.
            Item::Entry(Entry::StartUp { carried, count, .. }) => {
                return count <= 1 && samples > u32::from(carried);
            }
            // Whether that one was torn decides on this one, too.
            Item::Damage(_) => return false,
            Item::Entry(_) | Item::State { .. } => {}
        }
    }
    // The numbers of the next header or of the head tell.
    false
}
