//! Samples that wait to be evaluated together, sixty-four lanes at a time.

use strake_core::evaluate::{Judged, Moved, State, judge, loads};
use strake_core::journal::Sample;
use strake_core::part::PartLoads;
use strake_core::plan::Plan;
use strake_core::signal::{Resolved, resolve};

/// Samples evaluated together.
pub(super) const LANES: usize = 64;
/// Fewer samples than this go one by one: a batch costs the same however full it is.
const FEW: usize = 12;

/// What a sample led to.
#[derive(Debug)]
pub(super) struct Taken<'a> {
    pub(super) sample: &'a Sample,
    pub(super) resolved: &'a Resolved,
    /// Utilisations per part: estimate, outward bound, inward bound.
    pub(super) utilisations: &'a [[f32; 3]],
    pub(super) moves: &'a [Moved],
    /// Running hash behind this sample.
    pub(super) hash: u64,
}

/// The waiting samples and room for their results.
#[derive(Debug, Default)]
pub(super) struct Batch {
    samples: Vec<Sample>,
    /// Per lane, per part.
    utilisations: Vec<Vec<[f32; 3]>>,
    judged: Vec<Judged>,
    moves: Vec<Moved>,
}

impl Batch {
    pub(super) fn push(&mut self, sample: Sample) {
        self.samples.push(sample);
    }

    pub(super) fn is_full(&self) -> bool {
        self.samples.len() >= LANES
    }

    pub(super) fn is_empty(&self) -> bool {
        self.samples.is_empty()
    }

    /// Drops what waits, where no plan is at hand to judge it by; gives how many.
    pub(super) fn discard(&mut self) -> usize {
        let count = self.samples.len();
        self.samples.clear();
        count
    }

    /// Evaluates what waits and hands out each sample in order.
    pub(super) fn run(&mut self, plan: &Plan, state: &mut State, mut taken: impl FnMut(Taken<'_>)) {
        let samples = std::mem::take(&mut self.samples);
        let group = if samples.len() < FEW { 1 } else { LANES };
        for some in samples.chunks(group) {
            if group == 1 {
                self.take::<1>(plan, state, some, &mut taken);
            } else {
                self.take::<LANES>(plan, state, some, &mut taken);
            }
        }
        // The room is kept for the next batch.
        self.samples = samples;
        self.samples.clear();
    }

    fn take<const N: usize>(
        &mut self,
        plan: &Plan,
        state: &mut State,
        samples: &[Sample],
        taken: &mut impl FnMut(Taken<'_>),
    ) {
        let Some(last) = samples.last() else { return };
        let mut sight = state.sight;
        let mut resolved = samples
            .iter()
            .map(|s| resolve(plan, &mut sight, s.tick_ms, s.level, s.temperature))
            .collect::<Vec<_>>();
        // Lanes beyond the last sample repeat it; nobody looks at them.
        let filler = resolved.last().copied();
        resolved.extend(std::iter::repeat_n(filler, N).flatten().take(N - samples.len()));
        let Ok(lanes) = <&[Resolved; N]>::try_from(resolved.as_slice()) else { return };

        self.utilisations.resize_with(N.max(self.utilisations.len()), Vec::new);
        for lane in &mut self.utilisations {
            lane.clear();
        }
        let rows = &mut self.utilisations;
        let digest = loads(plan, lanes, |_, part: &PartLoads<N>| {
            let columns = part
                .utilisation
                .0
                .iter()
                .zip(&part.utilisation_bound.0)
                .zip(&part.utilisation_inward.0);
            for (row, ((&estimate, &outward), &inward)) in rows.iter_mut().zip(columns) {
                row.push([estimate, outward, inward]);
            }
        });

        for (lane, (sample, resolved)) in samples.iter().zip(&resolved).enumerate() {
            let utilisations = &self.utilisations[lane];
            self.judged.clear();
            self.judged.extend(utilisations.iter().map(|&[_, outward, inward]| (outward, inward)));
            self.moves.clear();
            let moves = &mut self.moves;
            // The start of "not yet read" is the only part of the sight that judging looks at, and
            // it does not change between restarts.
            judge(plan, state, sample.tick_ms, resolved, &self.judged, (&digest, lane), |moved| {
                moves.push(moved);
            });
            let hash = state.hash;
            taken(Taken { sample, resolved, utilisations, moves: &self.moves, hash });
        }
        debug_assert!(last.tick_ms >= samples[0].tick_ms || samples.len() > 1);
        state.sight = sight;
    }
}
