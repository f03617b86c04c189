//! What secures a cover: latches, hinges, pins; and what it means for opening it.

use super::desk::Desk;
use super::document::Opening;
use crate::compile::latch_per_moment;
use crate::tank::{Axis, Hatch, Hinged, Opens, Secured};
use crate::units::{Quantity, UnitSystem, format};
use strake_core::lane::{self, Lane};
use strake_core::liquid::States;
use strake_core::part::{Cover, Geometry, OPENING_GAS_PA, Part, Shut};
use strake_core::shape::Face;

/// Reactions of a hinged cover under one state, N and N m, positive in tension against outward
/// motion.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Reactions {
    /// About the hinge, positive when it turns the cover outward.
    pub(crate) moment_n_m: f32,
    /// Of the latch that carries most; none without a latch.
    pub(crate) latch_n: Option<f32>,
    /// Of each pin, the lower first; of the whole line where pins are not stated.
    pub(crate) hinge_n: Vec<f32>,
}

/// Hinge or pivot of a hatch, when it has one.
pub(crate) fn hinged(hatch: &Hatch) -> Option<&Hinged> {
    match hatch.secured.as_ref().map(|secured| &secured.value) {
        Some(Secured::Hinged(hinged)) => Some(hinged),
        _ => None,
    }
}

/// Reactions of a hinged cover: of the estimate, the largest and the least signed ones.
///
/// A cover that the load presses on its seat hangs on nothing: seat and gasket carry all of it.
pub(crate) fn reactions(
    desk: &Desk,
    hatch: &Hatch,
    part: &Part,
    states: &States<1>,
) -> Option<[Reactions; 3]> {
    let hinged = hinged(hatch)?;
    let Geometry::Plane { shape, cover: Some(cover), .. } = &part.geometry else { return None };
    let [moment, first, second] = cover
        .each(&Face { shape, numbers: &desk.plan().numbers, bottom_m: part.bottom_m }, states)
        .map(|one| one.map(|lane| lane.lane(0)));
    let pins: Vec<[f32; 3]> = match hinged.axis {
        Axis::Side { pins_m: Some(_), .. } => vec![first, second],
        _ => vec![second],
    };
    let per_moment = latch_per_moment(hinged, hatch.sealed.sine()).map(super::part::single);
    let pulls = Pulls::of(hatch, moment);
    // Under an even pressure the reactions turn with the moment.
    let even = hatch.sealed.is_level();
    Some([0, 1, 2].map(|state| {
        Reactions {
            moment_n_m: moment[state],
            latch_n: per_moment.map(|per_moment| pulls.latch(moment[state]) * per_moment),
            hinge_n: pins
                .iter()
                .map(|pin| if even { pulls.latch(pin[state]) } else { pulls.pin(pin, state) })
                .collect(),
        }
    }))
}

/// Which way a cover is free to leave its seat, and whether the load pulls it that way.
struct Pulls {
    /// 1 outward, -1 inward, 0 both ways.
    free: f32,
    /// Whether it pulls: by the estimate, by some state, by every state.
    estimate: bool,
    ever: bool,
    always: bool,
}

impl Pulls {
    fn of(hatch: &Hatch, [estimate, most, least]: [f32; 3]) -> Self {
        let free = match hatch.opens.value {
            _ if hatch.pivots() => {
                return Self { free: 0.0, estimate: true, ever: true, always: true };
            }
            Opens::Outward => 1.0,
            Opens::Inward => -1.0,
        };
        let pulled = |moment: f32| moment * free > 0.0;
        let (ever, always) = (pulled(most) || pulled(least), pulled(most) && pulled(least));
        Self { free, estimate: pulled(estimate), ever, always }
    }

    /// Zero where the moment presses the cover on its seat.
    fn latch(&self, moment: f32) -> f32 {
        if self.free == 0.0 || moment * self.free > 0.0 { moment } else { 0.0 }
    }

    /// A pin of the estimate, the largest, the least: on the seat it is free.
    fn pin(&self, pin: &[f32; 3], state: usize) -> f32 {
        let value = pin[state];
        match state {
            0 if self.estimate => value,
            0 => 0.0,
            _ if self.always => value,
            _ if !self.ever => 0.0,
            1 => lane::at_least(value, 0.0),
            _ => lane::at_most(value, 0.0),
        }
    }
}

/// Whether a pin may be pushed against the way in which the cover opens, or a pivot turned inward,
/// at some level: what then has no capacity is not judged.
pub(crate) fn turns_back(desk: &Desk, hatch: &Hatch, part: &Part) -> [bool; 2] {
    let range = desk.range();
    let mut found = [false; 2];
    for step in 0..=64_u16 {
        let share = f32::from(step) / 64.0;
        let level = Lane([range.low_m + share * (range.high_m - range.low_m)]);
        let Some([_, _, least]) = reactions(desk, hatch, part, &desk.acting(part, level)) else {
            break;
        };
        found[0] |= least.hinge_n.iter().any(|pin| *pin < 0.0);
        found[1] |= hatch.pivots() && least.moment_n_m < 0.0;
    }
    found
}

/// Whether the opening of a part must stay shut at a stated level; none of what is no opening.
pub(super) fn opening(desk: &Desk, part: &Part, level_m: f32) -> Option<Opening> {
    Shut::under(desk.plan(), part, desk.highest_surface_m(level_m)).map(Opening::of)
}

impl Opening {
    /// The verdict of the core in words.
    #[must_use]
    pub fn of(shut: Shut) -> Self {
        let why = reasons(shut, UnitSystem::Si);
        let state = if shut.stands() { "do_not_open" } else { "no_liquid_computed" };
        Self { state, says: says(&why), why, shut }
    }

    /// What is said to a person.
    #[must_use]
    pub fn words(&self, units: UnitSystem) -> String {
        says(&reasons(self.shut, units))
    }
}

fn reasons(shut: Shut, units: UnitSystem) -> Vec<String> {
    let most = format(OPENING_GAS_PA.into(), Quantity::Pressure, units);
    let gas = format!("the gas may press on it, more than {most} either way");
    let reasons = [
        (Shut::LIQUID_INSIDE, "liquid may stand above its lowest point"),
        (Shut::LIQUID_OUTSIDE, "liquid outside may stand above its lowest point"),
        (Shut::GAS, gas.as_str()),
        (Shut::NOT_VALID, "the reading is not valid"),
    ];
    let stand = reasons.into_iter().filter(|(bit, _)| shut.0 & bit != 0);
    stand.map(|(_, words)| words.to_owned()).collect()
}

fn says(why: &[String]) -> String {
    if why.is_empty() {
        "no liquid computed at this opening; prove by another means before opening".to_owned()
    } else {
        format!("DO NOT OPEN: {}", why.join("; "))
    }
}

/// The cover of a part.
pub(super) fn cover_of(part: &Part) -> Option<&Cover> {
    match &part.geometry {
        Geometry::Plane { cover, .. } => cover.as_ref(),
        Geometry::Course { .. } | Geometry::Curved(_) => None,
    }
}
