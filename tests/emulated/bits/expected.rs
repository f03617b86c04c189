//! The words as the host computes them: sample by sample, and 64 samples at once.

use strake_core::evaluate::{Judged, State, judge, loads};
use strake_core::journal::Sample;
use strake_core::plan::Plan;
use strake_core::signal::{Resolved, resolve};

use super::cases::Case;
use super::vectors::{Input, put_hash, put_part, put_reading, put_state, take, take_event};

const LANES: usize = 64;

/// Whether two words count as equal.
pub(super) type Equal = fn(u32, u32) -> bool;

/// Equal in every bit.
pub(super) fn every_bit(here: u32, there: u32) -> bool {
    here == there
}

/// Equal but for the sign of a zero, which depends on the number of lanes: a lane alone leaves out
/// surfaces that do not reach a part. The running hash makes the two zeros one for that reason.
pub(super) fn but_for_zeros(here: u32, there: u32) -> bool {
    here == there || (here | there) << 1 == 0
}

/// All words of one plan.
#[derive(Debug, Default)]
pub(super) struct Words {
    pub(super) words: Vec<u32>,
    /// Where those of each input end.
    ends: Vec<usize>,
}

impl Words {
    /// The first difference in words, unless there is none.
    pub(super) fn first_difference(&self, other: &[u32], equal: Equal) -> Option<String> {
        if self.words.len() != other.len() {
            return Some(format!("{} words against {}", other.len(), self.words.len()));
        }
        let at = self.words.iter().zip(other).position(|(here, there)| !equal(*here, *there))?;
        let input = self.ends.partition_point(|&end| end <= at);
        let begin = input.checked_sub(1).map_or(0, |before| self.ends[before]);
        Some(format!(
            "input {input}, word {}: {:#010x} against {:#010x}",
            at - begin,
            other[at],
            self.words[at]
        ))
    }

    /// Words that differ.
    pub(super) fn differing(&self, other: &[u32], equal: Equal) -> usize {
        self.words.iter().zip(other).filter(|(here, there)| !equal(**here, **there)).count()
    }
}

/// One input after the other, as the device does.
pub(super) fn one_lane(case: &Case) -> Words {
    let mut state = State::default();
    let Words { mut words, mut ends } = Words::default();
    for input in &case.inputs {
        take(&case.plan, &mut state, input, &mut |word| words.push(word));
        ends.push(words.len());
    }
    put_state(&state, &mut |word| words.push(word));
    Words { words, ends }
}

/// Samples between other inputs 64 at a time, as the replay does.
pub(super) fn many_lanes(case: &Case) -> Vec<u32> {
    let mut state = State::default();
    let mut words = Vec::new();
    let mut samples = Vec::new();
    for input in &case.inputs {
        if let Input::Sample(sample) = input {
            samples.push(*sample);
            continue;
        }
        batches(&case.plan, &mut state, &samples, &mut words);
        samples.clear();
        take_event(&case.plan, &mut state, input);
        put_hash(&state, &mut |word| words.push(word));
    }
    batches(&case.plan, &mut state, &samples, &mut words);
    put_state(&state, &mut |word| words.push(word));
    words
}

fn batches(plan: &Plan, state: &mut State, samples: &[Sample], words: &mut Vec<u32>) {
    for some in samples.chunks(LANES) {
        batch(plan, state, some, words);
    }
}

fn batch(plan: &Plan, state: &mut State, samples: &[Sample], words: &mut Vec<u32>) {
    let mut sight = state.sight;
    let mut read = |s: &Sample| resolve(plan, &mut sight, s.tick_ms, s.level, s.temperature);
    let resolved: Vec<Resolved> = samples.iter().map(&mut read).collect();
    // Lanes beyond the last sample repeat the first; nobody looks at them.
    let lanes: [Resolved; LANES] =
        std::array::from_fn(|lane| *resolved.get(lane).unwrap_or(&resolved[0]));
    let mut results = vec![(Vec::new(), Vec::<Judged>::new()); samples.len()];
    let digest = loads(plan, &lanes, |_, part| {
        for (lane, (words, judged)) in results.iter_mut().enumerate() {
            put_part(part, lane, &mut |word| words.push(word));
            judged.push((part.utilisation_bound.lane(lane), part.utilisation_inward.lane(lane)));
        }
    });
    for (lane, (sample, (parts, judged))) in samples.iter().zip(&results).enumerate() {
        let resolved = &resolved[lane];
        put_reading(plan, resolved, &mut |word| words.push(word));
        words.extend(parts);
        judge(plan, state, sample.tick_ms, resolved, judged, (&digest, lane), |_| {});
        put_hash(state, &mut |word| words.push(word));
    }
    state.sight = sight;
}
