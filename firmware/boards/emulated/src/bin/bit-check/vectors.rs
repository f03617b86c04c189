//! The vector file, and the words that come of it: one source for the device and for the host.
//!
//! Little endian throughout. The file stands at the beginning of the journal's flash:
//!
//! | bytes | what |
//! | --- | --- |
//! | 4 | magic `SKBV` |
//! | 4 | number of plans |
//! | 4 | offset R of the results, a multiple of 4; erased flash from there on |
//! | per plan: 4, 4 | bytes of the plan, number of inputs |
//! | | the plan's bytes, filled up to a multiple of 4 |
//! | 20 each | the inputs, see [`Input`] |
//! | at R: 4 | marker `SKBR`, programmed last |
//! | 4 | the processor's identification register |
//! | 4 | number of words |
//! | 4 each | the words: per plan those of each input, then those of the whole state |

use strake_core::alarm::FaultCause;
use strake_core::evaluate::{CHECKPOINT_BYTES_MAX, State};
use strake_core::journal::Sample;
use strake_core::part::PartLoads;
use strake_core::plan::Plan;
use strake_core::signal::{Channel, Quality, Resolved};
use strake_firmware::arithmetic::{levels_m, loads, step};

pub(crate) const FILE_MAGIC: u32 = u32::from_le_bytes(*b"SKBV");
pub(crate) const RESULT_MAGIC: u32 = u32::from_le_bytes(*b"SKBR");
/// Bytes ahead of the result's words.
pub(crate) const RESULT_HEAD_BYTES: u32 = 12;
pub(crate) const INPUT_WORDS: usize = 5;

/// What moves the state. First word: kind, then three bytes of detail; then the tick in two words,
/// the level count, the temperature count.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Input {
    /// Kind 0; details: the two qualities.
    Sample(Sample),
    /// Kind 1: a person's press.
    Acknowledge { tick_ms: u64 },
    /// Kind 2: the controller starts anew.
    Restart { tick_ms: u64 },
    /// Kind 3; details: 1 and the product, or 0.
    Product(Option<u8>),
    /// Kind 4; detail: the cause that the device reports.
    Report { tick_ms: u64, cause: FaultCause },
}

impl Input {
    #[cfg_attr(target_os = "none", expect(dead_code, reason = "the host writes the file"))]
    pub(crate) fn encode(&self) -> [u32; INPUT_WORDS] {
        let words = |head: [u8; 4], tick_ms: u64, counts: [i32; 2]| {
            let [level, temperature] = counts.map(i32::cast_unsigned);
            let [low, high] = halves(tick_ms);
            [u32::from_le_bytes(head), low, high, level, temperature]
        };
        match *self {
            Self::Sample(Sample { tick_ms, level, temperature, .. }) => {
                let head = [0, level.quality.number(), temperature.quality.number(), 0];
                words(head, tick_ms, [level.count_16, temperature.count_16])
            }
            Self::Acknowledge { tick_ms } => words([1, 0, 0, 0], tick_ms, [0; 2]),
            Self::Restart { tick_ms } => words([2, 0, 0, 0], tick_ms, [0; 2]),
            Self::Product(product) => {
                words([3, u8::from(product.is_some()), product.unwrap_or(0), 0], 0, [0; 2])
            }
            Self::Report { tick_ms, cause } => words([4, cause.number(), 0, 0], tick_ms, [0; 2]),
        }
    }

    #[cfg_attr(not(target_os = "none"), expect(dead_code, reason = "the device reads the file"))]
    pub(crate) fn decode(
        [head, low, high, level, temperature]: [u32; INPUT_WORDS],
    ) -> Option<Self> {
        let tick_ms = u64::from(high) << 32 | u64::from(low);
        let channel = |quality, count: u32| {
            let quality = Quality::from_number(quality)?;
            Some(Channel { count_16: count.cast_signed(), quality })
        };
        Some(match head.to_le_bytes() {
            [0, first, second, 0] => {
                let (level, temperature) = (channel(first, level)?, channel(second, temperature)?);
                Self::Sample(Sample { tick_ms, level, temperature, ..Sample::default() })
            }
            [1, 0, 0, 0] => Self::Acknowledge { tick_ms },
            [2, 0, 0, 0] => Self::Restart { tick_ms },
            [3, stated, product, 0] => Self::Product((stated == 1).then_some(product)),
            [4, cause, 0, 0] => Self::Report { tick_ms, cause: FaultCause::from_number(cause)? },
            _ => return None,
        })
    }
}

fn halves(number: u64) -> [u32; 2] {
    let [b0, b1, b2, b3, b4, b5, b6, b7] = number.to_le_bytes();
    [u32::from_le_bytes([b0, b1, b2, b3]), u32::from_le_bytes([b4, b5, b6, b7])]
}

/// Takes one input and puts out all that it leads to.
pub(crate) fn take(plan: &Plan, state: &mut State, input: &Input, put: &mut impl FnMut(u32)) {
    if let Input::Sample(sample) = input {
        let resolved = step(plan, state, sample, &mut |_| {});
        put_reading(plan, &resolved, put);
        loads(plan, &resolved, &mut |_, part| put_part(part, 0, put));
    }
    take_event(plan, state, input);
    put_hash(state, put);
}

/// The part of [`take`] for all but samples.
pub(crate) fn take_event(plan: &Plan, state: &mut State, input: &Input) {
    match *input {
        Input::Sample(_) => {}
        Input::Acknowledge { tick_ms } => state.acknowledge(tick_ms, |_| {}),
        Input::Restart { tick_ms } => state.restart(tick_ms),
        Input::Product(product) => state.sight.product = product,
        Input::Report { tick_ms, cause } => state.report(plan, cause, tick_ms, |_| {}),
    }
}

/// The reading with its bounds and the heights it allows.
pub(crate) fn put_reading(plan: &Plan, resolved: &Resolved, put: &mut impl FnMut(u32)) {
    let fault = resolved.fault.map_or(u8::MAX, FaultCause::number);
    put(u32::from_le_bytes([resolved.class as u8, fault, 0, 0]));
    let density = resolved.density;
    for number in [
        resolved.estimate,
        resolved.low,
        resolved.high,
        density.estimate_kg_m3,
        density.low_kg_m3,
        density.high_kg_m3,
    ] {
        put(number.to_bits());
    }
    for level_m in levels_m(plan, resolved) {
        put(level_m.to_bits());
    }
}

/// Every load, bound and utilisation of one part, as computed: the sign of a zero counts.
pub(crate) fn put_part<const N: usize>(
    part: &PartLoads<N>,
    lane: usize,
    put: &mut impl FnMut(u32),
) {
    for loads in [&part.estimate, &part.outward, &part.inward] {
        for load in [
            &loads.pressure_pa,
            &loads.hoop_tension_n_m,
            &loads.force_n,
            &loads.moment_centroid_n_m,
            &loads.bolt_n,
            &loads.moment_n_m,
        ] {
            put(load.lane(lane).to_bits());
        }
    }
    for utilisation in [&part.utilisation, &part.utilisation_bound, &part.utilisation_inward] {
        put(utilisation.lane(lane).to_bits());
    }
}

/// The running hash.
pub(crate) fn put_hash(state: &State, put: &mut impl FnMut(u32)) {
    halves(state.hash).into_iter().for_each(put);
}

/// The whole state as a checkpoint holds it: every machine that is not normal.
pub(crate) fn put_state(state: &State, put: &mut impl FnMut(u32)) {
    let mut bytes = [0xFF; CHECKPOINT_BYTES_MAX.next_multiple_of(4)];
    let used = state.encode(&mut bytes).unwrap_or(0);
    let (words, _) = bytes.as_chunks();
    for word in words.iter().take(used.div_ceil(4)) {
        put(u32::from_le_bytes(*word));
    }
}
