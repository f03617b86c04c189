//! The rules of the flash, tried on the last block of a region.

use embedded_storage::nor_flash::{NorFlash, NorFlashErrorKind, ReadNorFlash};
use strake_board_emulated::flash::NorRegion;

use crate::commands::Refused;

/// Bytes of an erase block, stated here again so that the driver's own figure is tried.
const BLOCK: u32 = 4096;

fn expect(held: bool, rule: &'static str) -> Result<(), Refused> {
    if held { Ok(()) } else { Err(Refused(rule)) }
}

pub(crate) fn check(flash: &mut NorRegion) -> Result<(), Refused> {
    let end = u32::try_from(flash.capacity()).unwrap_or(u32::MAX);
    let block = end.saturating_sub(BLOCK);
    let before = block.saturating_sub(BLOCK);
    bits(flash, block, before).map_err(|error| match error {
        Failure::Rule(refused) => refused,
        Failure::Flash => Refused("flash: an access in range was refused"),
    })?;
    let aligned = Err(NorFlashErrorKind::NotAligned);
    let bounds = Err(NorFlashErrorKind::OutOfBounds);
    let mut byte = [0];
    expect(flash.write(block + 2, &[0; 4]) == aligned, "flash: a word off its place was taken")?;
    expect(flash.write(block, &[0; 3]) == aligned, "flash: three bytes were taken")?;
    expect(flash.write(end, &[0; 4]) == bounds, "flash: a word beyond the end was taken")?;
    expect(flash.erase(block, block + 4) == aligned, "flash: a part of a block was erased")?;
    expect(flash.erase(block, end + BLOCK) == bounds, "flash: erased beyond the end")?;
    expect(flash.read(end, &mut byte) == bounds, "flash: read beyond the end")?;
    expect(flash.read(u32::MAX, &mut byte) == bounds, "flash: read far beyond the end")
}

enum Failure {
    Rule(Refused),
    Flash,
}

impl From<Refused> for Failure {
    fn from(refused: Refused) -> Self {
        Self::Rule(refused)
    }
}

impl From<NorFlashErrorKind> for Failure {
    fn from(_: NorFlashErrorKind) -> Self {
        Self::Flash
    }
}

/// Erase sets ones in its block alone; programming clears bits and never sets one.
fn bits(flash: &mut NorRegion, block: u32, before: u32) -> Result<(), Failure> {
    let mut word = [0; 4];
    flash.erase(before, block)?;
    flash.write(block.saturating_sub(4), &[0x11; 4])?;
    flash.erase(block, block + BLOCK)?;
    flash.read(block.saturating_sub(2), &mut word)?;
    expect(word == [0x11, 0x11, 0xFF, 0xFF], "flash: erase left its block")?;
    flash.write(block, &[0x0F, 0xF0, 0xFF, 0x12])?;
    flash.write(block, &[0x3C, 0x3C, 0xFF, 0xFF])?;
    flash.read(block, &mut word)?;
    expect(word == [0x0C, 0x30, 0xFF, 0x12], "flash: programming is not AND")?;
    flash.write(block + 4, &[1, 2, 3, 4, 5, 6, 7, 8])?;
    flash.read(block + 7, &mut word)?;
    expect(word == [4, 5, 6, 7], "flash: bytes off a word read wrong")?;
    every_stretch(flash, block)?;
    flash.erase(block, block + BLOCK)?;
    flash.read(block + 4, &mut word)?;
    expect(word == [0xFF; 4], "flash: erase left bits")?;
    Ok(())
}

/// Every stretch of the nine bytes from `block + 3` on reads as itself.
fn every_stretch(flash: &mut NorRegion, block: u32) -> Result<(), Failure> {
    const CONTENT: [u8; 9] = [0x12, 1, 2, 3, 4, 5, 6, 7, 8];
    for from in 0..CONTENT.len() {
        for until in from..=CONTENT.len() {
            let expected = CONTENT.get(from..until).unwrap_or_default();
            let mut bytes = [0; CONTENT.len()];
            let bytes = bytes.get_mut(from..until).unwrap_or_default();
            flash.read(block + 3 + u32::try_from(from).unwrap_or(0), bytes)?;
            expect(bytes == expected, "flash: a stretch reads wrong")?;
        }
    }
    Ok(())
}
