//! A second method: every reported load once more, by an independent route in f64.
//!
//! The first method is the core's: the one formula with closed-form `W` and `M`, in single
//! precision. Here the pressure at a height is read straight off the tank file and integrated
//! numerically over the drawing's dimensions: along the slope of a flat part, along the angle of a
//! curved one, around the half ring of a course; what holds a cover follows from equilibrium. The
//! two share the tank file and nothing else of the way to a load.
//!
//! How far they may differ is stated for each load: the first method's stated error, 2e-6 of
//! `integral |p| |w| dz`, and what rounding the file's decimals to single precision may cost.

mod contents;
pub(crate) mod curved;
mod mesh;
mod outline;
mod part;
mod plane;
mod plate;
mod profile;
mod quadrature;
pub(crate) mod secured;

pub(crate) use profile::Profiles;

use crate::assess::{Assessment, Request};
use crate::compile::{Bending, Bent};
use crate::tank::{Part as Stated, TankFile};
use crate::units::Quantity;
use strake_core::lane::Lane;
use strake_core::part::{Part, acting};

/// A figure of the second method, and how far the first may be from it.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Figure {
    pub(crate) value: f64,
    pub(crate) allowed: f64,
}

impl Figure {
    const NONE: Self = Self { value: 0.0, allowed: 0.0 };

    fn times(self, factor: f64) -> Self {
        Self { value: self.value * factor, allowed: self.allowed * factor.abs() }
    }

    /// The larger value; either may be the first method's pick.
    fn larger(self, other: Self) -> Self {
        Self { value: self.value.max(other.value), allowed: self.allowed.max(other.allowed) }
    }

    fn smaller(self, other: Self) -> Self {
        Self { value: self.value.min(other.value), allowed: self.allowed.max(other.allowed) }
    }
}

/// Both methods of one load in one state.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Pair {
    /// As reported.
    pub(crate) first: f64,
    /// The second method's.
    pub(crate) second: Figure,
}

impl Pair {
    /// The difference as a share of what is allowed; at most one where the methods agree.
    pub(crate) fn share(&self) -> f64 {
        let off = (self.first - self.second.value).abs();
        let share = if off == 0.0 { 0.0 } else { off / self.second.allowed };
        // What is no number is no agreement.
        if share.is_nan() { f64::INFINITY } else { share }
    }
}

/// One load of a part under the estimate, the outward and the inward bound.
#[derive(Clone, Debug)]
pub(crate) struct Compared {
    /// Its name in the documents.
    pub(crate) load: &'static str,
    /// Its name for people.
    pub(crate) label: &'static str,
    pub(crate) quantity: Quantity,
    pub(crate) states: [Option<Pair>; 3],
}

/// Every reported load of every part, in the order of the file.
pub(crate) fn compare(
    file: &TankFile,
    request: &Request,
    assessment: &Assessment,
) -> Vec<Vec<Compared>> {
    let rows = file.parts.iter().zip(&assessment.document.parts);
    let parts = assessment.desk.plan().parts.iter();
    let each = rows.zip(parts).map(|((stated, row), part)| {
        let bent = bent(assessment, request, (stated, part));
        part::compared(file, request, stated, row, &bent)
    });
    each.collect()
}

/// Where the first method finds the largest moment of each plate of a part, under the estimate and
/// under the bound: there the second one looks.
fn bent(
    assessment: &Assessment,
    request: &Request,
    (stated, part): (&Stated, &Part),
) -> Vec<[Bent; 2]> {
    let plates = Bending::of_part(stated);
    if plates.is_empty() {
        return Vec::new();
    }
    let desk = &assessment.desk;
    let level = Lane([super::pressure::single(request.level_m)]);
    let states = acting(desk.plan(), part, &desk.as_seen(level));
    let both = |one: &Bending| [one.under(&states.estimate, 0), one.bound(&states, 0)];
    plates.iter().map(both).collect()
}

/// The pair that uses up most of what is allowed, and how many there are.
pub(crate) fn worst(all: &[Vec<Compared>]) -> (usize, f64) {
    let pairs = all.iter().flatten().flat_map(|one| one.states.iter().flatten());
    pairs.fold((0, 0.0), |(count, worst), pair| (count + 1, worst.max(pair.share())))
}

#[cfg(test)]
mod tests;
