//! The limit level by each load for itself: pressure, force, moment, what secures a cover (its
//! bolts, its latch, its hinge or pivot).
//!
//! Of a part that was *designed for* a state, the pressure at every height decides: a load with a
//! weighting that is nowhere negative is then within its value in that state. The levels at which
//! resulting force, moment and largest bolt share come to theirs lie higher, and who takes one of
//! them for the limit overloads the foot of the part; they are shown beside it.

use super::limits::{Which, Within, is_plate, kinks};
use super::{Criterion, intervals};
use crate::assess::Desk;
use crate::tank::{Axis, Part as Stated, Secured};
use strake_core::lane::Lane;
use strake_core::liquid::States;
use strake_core::part::Held as Fastened;
use strake_core::part::{Capacities, DesignState, Geometry, Loads, Part, evaluate};
use strake_core::pressure::Pressure;
use strake_core::shape::{Rectangle, Shape};

/// A load in general words.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum By {
    /// Pressure; in a design state at every height of the part.
    Pressure,
    /// Hoop tension at the design point of a course.
    HoopTension,
    /// Resulting force; of a course on a strip of the wall, one metre wide.
    Force,
    /// Moment about the part's lower edge; of a course on the same strip.
    Moment,
    /// The bolt that carries most.
    Securing,
    /// The moment that a cover's latches carry, or that a hinge or pivot is rated by.
    Turning,
    /// The pin of a hinge that carries most, or the whole hinge line or pivot.
    Pins,
    /// Largest bending moment of a panel's plate.
    Bending,
}

impl By {
    /// The word that stands in documents.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Pressure => "pressure",
            Self::HoopTension => "hoop_tension",
            Self::Force => "force",
            Self::Moment => "moment",
            Self::Securing => "securing",
            Self::Turning => "turning",
            Self::Pins => "pins",
            Self::Bending => "bending",
        }
    }

    /// The same of a part that is known: of a cover its latch, its hinge, its pivot.
    #[must_use]
    pub fn of(self, stated: &Stated) -> &'static str {
        let Stated::Hatch(hatch) = stated else { return self.as_str() };
        let Some(Secured::Hinged(hinged)) = hatch.secured.as_ref().map(|one| &one.value) else {
            return self.as_str();
        };
        let pivot = matches!(hinged.axis, Axis::Pivot { .. });
        // The latches carry the moment; where it is rated by itself, that is said.
        let rated = hatch.capacity.iter().any(|one| one.capacity.value.key() == "moment");
        match self {
            Self::Turning if pivot && rated => "pivot_moment",
            Self::Turning if rated => "hinge_moment",
            Self::Turning => "latch",
            Self::Pins if pivot => "pivot",
            Self::Pins => "hinge",
            _ => self.as_str(),
        }
    }
}

/// What a load is held against.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Against {
    /// A capacity of the file.
    Capacity,
    /// The same load in a state that the part was designed for.
    DesignState,
}

impl Against {
    /// The word that stands in documents.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Capacity => "capacity",
            Self::DesignState => "design_state",
        }
    }
}

/// The limit level by one load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// The load.
    pub by: By,
    /// What it is held against.
    pub against: Against,
    /// Highest level up to which it is kept on the whole way up; `None` when no level is.
    pub level_m: Option<f32>,
    /// Whether it ends the way up; otherwise overflow or shell top come first.
    pub reached: bool,
    /// Whether the limit of the part may rest on it; a force or moment of a design state may not.
    pub decides: bool,
}

/// Error of a load, relative; two values within it are the same load (see [`evaluate`]).
const LOAD_ERROR: f32 = 2e-6;

/// The lines of a part, outward; empty of a part without an outward capacity.
#[must_use]
pub fn lines(desk: &Desk, part: &Part) -> Vec<Line> {
    let bare = Part {
        outward: Capacities::default(),
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        ..part.clone()
    };
    let none = Capacities::default();
    let Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m } = part.outward;
    let turning = if is_plate(part) { By::Bending } else { By::Turning };
    let stated = [
        (By::Pressure, Capacities { pressure_pa, ..none }),
        (By::HoopTension, Capacities { hoop_tension_n_m, ..none }),
        (By::Force, Capacities { force_n, ..none }),
        (if bolted(part) { By::Securing } else { By::Pins }, Capacities { bolt_n, ..none }),
        (turning, Capacities { moment_n_m, ..none }),
    ];
    let mut found = Vec::new();
    for (by, outward) in stated.into_iter().filter(|(_, one)| !one.is_empty()) {
        let alone = Part { outward, ..bare.clone() };
        let line = end(desk, part, &within(desk, &alone), by, Against::Capacity, true);
        found.push(turned_back(desk, &bare, part.inward, line));
    }
    for state in &part.designed_for {
        let mut alone = bare.clone();
        // There is room for one.
        let _ = alone.designed_for.push(*state);
        let against = Against::DesignState;
        found.push(end(desk, part, &within(desk, &alone), By::Pressure, against, true));
        for (by, pick) in resultants(part) {
            let Some(held) = Held::new(desk, &bare, state, pick) else { continue };
            found.push(end(desk, part, &held, by, against, false));
        }
    }
    found
}

/// A reaction whose weighting changes its sign may reach its inward capacity on the way up.
fn turned_back(desk: &Desk, bare: &Part, inward: Capacities, line: Line) -> Line {
    let Capacities { bolt_n, moment_n_m, .. } = inward;
    let inward = match line.by {
        By::Pins => Capacities { bolt_n, ..Capacities::default() },
        By::Turning => Capacities { moment_n_m, ..Capacities::default() },
        _ => return line,
    };
    let alone = Part { inward, ..bare.clone() };
    let range = desk.range();
    let criterion = Within { desk, part: &alone, which: Which::Inward };
    let found = intervals(&criterion, range, kinks(desk, &alone));
    // Where it does not hold from the floor on, a lowest level is what it sets.
    let first = found.first().filter(|one| !inward.is_empty() && one.low_m <= range.low_m);
    match (first, line.level_m) {
        (Some(one), Some(level_m)) if one.high_m < level_m => {
            Line { level_m: Some(one.high_m), reached: true, ..line }
        }
        _ => line,
    }
}

const fn within<'a>(desk: &'a Desk, part: &'a Part) -> Within<'a> {
    Within { desk, part, which: Which::Estimate }
}

fn end(
    desk: &Desk,
    part: &Part,
    criterion: &impl Criterion,
    by: By,
    against: Against,
    decides: bool,
) -> Line {
    let range = desk.range();
    let found = intervals(criterion, range, kinks(desk, part));
    let level_m = found.first().filter(|one| one.low_m <= range.low_m).map(|one| one.high_m);
    let reached = level_m.is_none_or(|level_m| level_m < range.high_m);
    Line { by, against, level_m, reached, decides }
}

/// One of the loads of a plane part, from all of them and the distance from its lower edge to its
/// centroid, m.
type Pick = fn(&Loads<1>, f32) -> f32;

/// The loads beside the pressure that a design state is compared by.
fn resultants(part: &Part) -> Vec<(By, Pick)> {
    let mut found: Vec<(By, Pick)> = vec![(By::Force, |loads, _| loads.force_n.lane(0))];
    let level = matches!(part.geometry, Geometry::Plane { sine, .. } if sine == 0.0);
    if !level {
        found.push((By::Moment, |loads, up_m| {
            loads.force_n.lane(0) * up_m + loads.moment_centroid_n_m.lane(0)
        }));
    }
    match held(part) {
        Fastened::Otherwise => {}
        Fastened::Plate(_) => found.push((By::Bending, |loads, _| loads.moment_n_m.lane(0))),
        Fastened::Bolts(_) => {
            found.push((By::Securing, |loads, _| loads.bolt_n.lane(0)));
        }
        // The latch carries in proportion to the moment.
        Fastened::Line | Fastened::Side => {
            found.push((By::Turning, |loads, _| loads.moment_n_m.lane(0)));
        }
    }
    found
}

fn held(part: &Part) -> Fastened {
    match &part.geometry {
        Geometry::Plane { cover: Some(cover), .. } => cover.held(),
        _ => Fastened::Otherwise,
    }
}

fn bolted(part: &Part) -> bool {
    matches!(held(part), Fastened::Bolts(_))
}

/// A load held against its value in a design state.
struct Held<'a> {
    desk: &'a Desk,
    part: Part,
    up_m: f32,
    pick: Pick,
    limit: f32,
}

impl<'a> Held<'a> {
    /// `None` when the load is nothing in the design state: then no ratio follows.
    fn new(desk: &'a Desk, bare: &Part, state: &DesignState, pick: Pick) -> Option<Self> {
        let part = strip(bare);
        let up_m = match &part.geometry {
            Geometry::Plane { centroid_above_m, sine, .. } if *sine > 0.0 => {
                centroid_above_m / sine
            }
            _ => 0.0,
        };
        let mut designed = Pressure::gas(Lane([state.gas_pa]));
        designed.add(Lane([state.level_m]), Lane([state.weight_n_m3]));
        let states = States {
            estimate: designed.clone(),
            upper: designed.clone(),
            lower: designed,
            ..desk.at_true_level(Lane([state.level_m]))
        };
        // The design state knows of no liquid outside.
        let alone = Part { outside: 0, ..part.clone() };
        let loads = evaluate(desk.plan(), &alone, &states).estimate;
        let limit = pick(&loads, up_m);
        (limit > 0.0).then_some(Self { desk, part, up_m, pick, limit })
    }
}

/// A course as a strip of its wall, one metre wide; any other part as it is.
fn strip(part: &Part) -> Part {
    let Geometry::Course { height_m, .. } = part.geometry else { return part.clone() };
    let shape = Shape::Rectangle(Rectangle::new(1.0, height_m, 1.0));
    Part { geometry: Geometry::plane(shape, 1.0, None), ..part.clone() }
}

impl Criterion for Held<'_> {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        level_m.0.map(|level_m| {
            let states = self.desk.at_true_level(Lane([level_m]));
            let loads = evaluate(self.desk.plan(), &self.part, &states).estimate;
            (self.pick)(&loads, self.up_m) <= self.limit * (1.0 + LOAD_ERROR)
        })
    }
}
