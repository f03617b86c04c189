//! Vector files for the device, and the words that it gives back.

use std::error::Error;
use std::sync::Arc;

use crate::flash_file::{FlashFile, PLANS_OFFSET};
use crate::image::Image;
use crate::machine::Setup;

use super::cases::Case;
use super::expected::Words;
use super::vectors::{FILE_MAGIC, RESULT_HEAD_BYTES, RESULT_MAGIC};

/// A vector file and its results fit the journal's flash.
const ROOM_BYTES: u64 = PLANS_OFFSET;
/// Part number field of the identification register, and that of a Cortex-M4 by Arm (Armv7-M,
/// B3.2.3; Cortex-M4 technical reference manual, 4.1).
const PART_MASK: u32 = 0xFF00_FFF0;
const CORTEX_M4: u32 = 0x4100_C240;

/// What the device computed.
#[derive(Debug)]
pub(super) struct Results {
    pub(super) processor_id: u32,
    /// Words per plan.
    pub(super) words: Vec<Vec<u32>>,
    pub(super) runs: usize,
}

/// Evaluates the cases on the device, as many at a time as fit its flash.
pub(super) fn run(
    image: &Arc<Image>,
    cases: &[Case],
    expected: &[Words],
) -> Result<Results, Box<dyn Error>> {
    let mut results = Results { processor_id: 0, words: Vec::new(), runs: 0 };
    let mut rest = (cases, expected);
    while !rest.0.is_empty() {
        let fitting = fitting(rest.0, rest.1);
        let (cases, expected) = (&rest.0[..fitting], &rest.1[..fitting]);
        let (processor_id, words) = run_file(image, &file(cases)?)?;
        let due: usize = expected.iter().map(|words| words.words.len()).sum();
        if words.len() != due {
            return Err(format!("the device gave {} words of {due}", words.len()).into());
        }
        let mut words = words.as_slice();
        for one in expected {
            let (of_plan, behind) = words.split_at(one.words.len());
            results.words.push(of_plan.to_vec());
            words = behind;
        }
        results.processor_id = processor_id;
        results.runs += 1;
        rest = (&rest.0[fitting..], &rest.1[fitting..]);
    }
    Ok(results)
}

/// How many of the cases fit one file with their results; at least one.
fn fitting(cases: &[Case], expected: &[Words]) -> usize {
    let mut room = ROOM_BYTES - 64;
    let mut count = 0;
    for (case, words) in cases.iter().zip(expected) {
        let bytes = 12 + case.bytes.len() + 20 * case.inputs.len() + 4 * words.words.len();
        let bytes = bytes as u64;
        if bytes > room {
            break;
        }
        room -= bytes;
        count += 1;
    }
    count.max(1)
}

fn file(cases: &[Case]) -> Result<Vec<u8>, Box<dyn Error>> {
    let mut body = Vec::new();
    for case in cases {
        for length in [case.bytes.len(), case.inputs.len()] {
            body.extend(u32::try_from(length)?.to_le_bytes());
        }
        body.extend(&case.bytes);
        body.resize(body.len().next_multiple_of(4), 0);
        for word in case.inputs.iter().flat_map(super::vectors::Input::encode) {
            body.extend(word.to_le_bytes());
        }
    }
    let results = u32::try_from(12 + body.len())?;
    let head = [FILE_MAGIC, u32::try_from(cases.len())?, results];
    Ok(head.iter().flat_map(|word| word.to_le_bytes()).chain(body).collect())
}

/// The processor's identification and the words.
fn run_file(image: &Arc<Image>, file: &[u8]) -> Result<(u32, Vec<u32>), Box<dyn Error>> {
    let flash = FlashFile::erased()?;
    flash.overwrite(0, file)?;
    let mut machine = Setup::new(image).flash(flash).start()?;
    let line = machine.receive_line()?;
    let count: usize =
        line.strip_prefix("done ").ok_or(format!("the device says {line}"))?.parse()?;
    let flash = machine.cut_power();
    let head_bytes = RESULT_HEAD_BYTES as usize;
    let bytes = flash.read(file.len() as u64, head_bytes + 4 * count)?;
    let (words, _) = bytes.as_chunks();
    let mut words = words.iter().map(|word| u32::from_le_bytes(*word));
    let head: Vec<u32> = words.by_ref().take(head_bytes / 4).collect();
    match head[..] {
        [RESULT_MAGIC, id, stored] if id & PART_MASK == CORTEX_M4 && stored as usize == count => {
            Ok((id, words.collect()))
        }
        _ => Err(format!("no results of a Cortex-M4: {head:#x?}").into()),
    }
}
