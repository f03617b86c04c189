//! What holds a cover, and what each thing that holds it carries.
//!
//! The cover is rigid. Bolts are equal and equally stiff (elastic bolt group; common practice in
//! joint design); hinge, pins and latches follow from equilibrium. So every reaction is a linear
//! functional of the pressure with a weighting that is straight along the slope,
//! `w = foot + slope t`, `t` up the slope from the lowest point: `R = foot F + slope M_foot`. The
//! desk works the two numbers out. They are shares of the load alone, without preload, gasket
//! seating and prying.
//!
//! Where the weighting changes sign on the cover (beyond the bolts' kern, the hinge line or the
//! latch) the pressure on one side of that line relieves. A bound takes the upper pressure on the
//! one side and the lower on the other: `integral w+ p_upper - integral w- p_lower`.

mod numbers;

pub use numbers::{BOLTS_MAX, BoltPattern, CoverNumbers, Held, WeightingNumbers};

use super::plate;
use crate::lane::Lane;
use crate::liquid::States;
use crate::pressure::{Pressure, Resultant};
use crate::shape::{Cut, Face, Shape};

/// A weighting along a cover.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Weighting {
    /// At the lowest point.
    foot: f32,
    /// Per metre up the slope.
    slope: f32,
    /// Where it changes sign, if that lies on the cover.
    cut: Option<Cut>,
}

/// A pressure on a cover and its resultant.
pub(crate) type Pressing<'a, const N: usize> = (&'a Pressure<N>, &'a Resultant<N>);

/// A reaction under the estimate, its largest and its least signed value.
pub(crate) type Reaction<const N: usize> = [Lane<N>; 3];

/// The cover of an opening.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cover {
    held: Held,
    /// Its weight may be counted where it relieves.
    weight_is_measured: bool,
    sill_above_m: f32,
    weight_n: f32,
    arm_m: f32,
    weightings: [Weighting; 2],
}

/// Two numbers of a straight weighting on a resultant.
#[inline]
fn straight<const N: usize>(foot: f32, slope: f32, [force, moment]: [Lane<N>; 2]) -> Lane<N> {
    force * foot + moment * slope
}

/// Whether each number lies in its range; one that is none does not.
#[inline(never)]
fn all_within(numbers: &[(f32, [f32; 2])]) -> bool {
    numbers.iter().all(|&(value, [least, most])| value >= least && value <= most)
}

impl Weighting {
    /// A weighting on a shape.
    #[must_use]
    pub fn new(numbers: &WeightingNumbers, face: &Face<'_>) -> Self {
        let cut =
            numbers.cut.map(|[y_m, area_m2, static_m3]| Cut::new(face, y_m, area_m2, static_m3));
        Self { foot: numbers.foot, slope: numbers.slope, cut }
    }

    fn numbers(&self) -> WeightingNumbers {
        let cut = self.cut.map(|cut| [cut.y_m, cut.area_m2, cut.static_m3]);
        WeightingNumbers { foot: self.foot, slope: self.slope, cut }
    }

    /// Its load under one resultant.
    #[must_use]
    #[inline]
    pub fn of<const N: usize>(&self, whole: &Resultant<N>) -> Lane<N> {
        straight(self.foot, self.slope, [whole.force_n, whole.foot_moment_n_m])
    }

    /// `M` of the one formula: its load under a liquid of unit weight that stands `y_m` above the
    /// lowest point of a shape.
    #[must_use]
    pub fn wetted(&self, face: &Face<'_>, y_m: f32) -> f32 {
        let wetted = face.wetted(Lane([y_m]));
        straight(self.foot, self.slope, [wetted.q0, wetted.q2]).lane(0)
    }

    /// Its load on a shape under each state: of the estimate, largest and least.
    #[must_use]
    pub fn under<const N: usize>(&self, face: &Face<'_>, states: &States<N>) -> [Lane<N>; 3] {
        let States { estimate, upper, lower, .. } = states;
        let [most, least] = [upper, lower].map(|state| state.on(face));
        let [most, least] = self.bounds(face, [(upper, &most), (lower, &least)]);
        [self.of(&estimate.on(face)), most, least]
    }

    /// Largest and least signed load between an upper and a lower pressure on the shape.
    fn bounds<const N: usize>(
        &self,
        face: &Face<'_>,
        bounding: [Pressing<'_, N>; 2],
    ) -> [Lane<N>; 2] {
        let whole = bounding.map(|(_, whole)| self.of(whole));
        let (ordered, positive_first) = match &self.cut {
            None => (whole, self.foot + self.slope * face.shape.centroid_up_m() >= 0.0),
            Some(cut) => {
                let [below_upper, below_lower] = bounding.map(|(pressure, _)| {
                    straight(self.foot, self.slope, pressure.below(cut, face))
                });
                let [of_upper, of_lower] = whole;
                // The first is the largest where the weighting is positive below the cut.
                let crossed = [
                    below_upper + (of_lower - below_lower),
                    below_lower + (of_upper - below_upper),
                ];
                (crossed, self.slope < 0.0)
            }
        };
        let [first, second] = ordered;
        if positive_first { ordered } else { [second, first] }
    }

    /// Whether it is in range and its cut lies where it changes sign: a bound needs it there.
    /// `sine` is that of the slope.
    fn is_sound(&self, shape: &Shape, sine: f32) -> bool {
        let length_m = shape.length_m();
        // Here the weighting is zero; far away where it is even, not a number where it is nothing.
        let zero_m = -self.foot / self.slope;
        let slack_m = 1.0e-4 * length_m;
        let area_m2 = shape.area_m2();
        let (far, off_m) = ([-1.0e6, 1.0e6], slack_m * sine);
        all_within(&[(self.foot, far), (self.slope, far)])
            && match &self.cut {
                None => !(zero_m > slack_m && zero_m < length_m - slack_m),
                // A level cover has none.
                Some(cut) => all_within(&[
                    (sine, [f32::MIN_POSITIVE, 1.0]),
                    (cut.y_m - zero_m * sine, [-off_m, off_m]),
                    (cut.area_m2, [0.0, area_m2]),
                    (cut.static_m3, [-area_m2 * length_m, 0.0]),
                ]),
            }
    }
}

impl Cover {
    /// The cover on a shape.
    #[must_use]
    pub fn new(numbers: &CoverNumbers, face: &Face<'_>) -> Self {
        Self {
            held: numbers.held,
            weight_is_measured: numbers.weight_is_measured,
            sill_above_m: numbers.sill_above_m,
            weight_n: numbers.weight_n,
            arm_m: numbers.arm_m,
            weightings: numbers.weightings.map(|one| Weighting::new(&one, face)),
        }
    }

    /// The numbers from which it was made.
    #[must_use]
    pub fn numbers(&self) -> CoverNumbers {
        CoverNumbers {
            held: self.held,
            weight_is_measured: self.weight_is_measured,
            sill_above_m: self.sill_above_m,
            weight_n: self.weight_n,
            arm_m: self.arm_m,
            weightings: self.weightings.map(|one| one.numbers()),
        }
    }

    /// Its two weightings, see [`Held`].
    #[must_use]
    pub const fn weightings(&self) -> &[Weighting; 2] {
        &self.weightings
    }

    /// What holds it.
    #[must_use]
    #[inline]
    pub const fn held(&self) -> Held {
        self.held
    }

    /// Height of the opening's lowest point above that of the gasket line, m.
    #[must_use]
    pub const fn sill_above_m(&self) -> f32 {
        self.sill_above_m
    }

    /// Whether every number is in its range and each cut lies where its weighting changes sign.
    /// `sine` is that of the slope.
    #[must_use]
    pub fn is_sound(&self, shape: &Shape, sine: f32) -> bool {
        let arm_m = if self.held == Held::Side { [1.0e-3, 200.0] } else { [0.0; 2] };
        let held = match self.held {
            Held::Bolts(count) => (3..=BOLTS_MAX).contains(&count),
            Held::Otherwise | Held::Line | Held::Side | Held::Plate(_) => true,
        };
        held && all_within(&[
            (self.arm_m, arm_m),
            (self.sill_above_m, [0.0, shape.rise_m()]),
            (self.weight_n, [-1.0e7, 1.0e7]),
        ]) && self.weightings.iter().all(|one| one.is_sound(shape, sine))
    }

    /// The reaction with a weighting: of the estimate, largest and least. The weight of the cover
    /// acts at the centroid; where it relieves it counts only when it was measured.
    #[inline]
    pub(crate) fn reaction<const N: usize>(
        &self,
        weighting: &Weighting,
        face: &Face<'_>,
        pressings: &[Pressing<'_, N>; 3],
    ) -> Reaction<N> {
        let [middle, upper, lower] = *pressings;
        let [most, least] = weighting.bounds(face, [upper, lower]);
        let mut found = [weighting.of(middle.1), most, least];
        if self.weight_n != 0.0 {
            self.add_weight(weighting, face, &mut found);
        }
        found
    }

    /// The weight of the cover acts at the centroid; where it relieves it counts only when it was
    /// measured.
    #[inline(never)]
    fn add_weight<const N: usize>(
        &self,
        weighting: &Weighting,
        face: &Face<'_>,
        found: &mut Reaction<N>,
    ) {
        let at_centroid = weighting.foot + weighting.slope * face.shape.centroid_up_m();
        let added_n = at_centroid * self.weight_n;
        for (index, sum) in found.iter_mut().enumerate() {
            // The least value is relieved by what adds to the others.
            let adds = if index == 2 { added_n < 0.0 } else { added_n > 0.0 };
            if adds || self.weight_is_measured {
                *sum = *sum + added_n;
            }
        }
    }

    /// Moment about the hinge or pivot and both weightings, each of the estimate, largest and
    /// least: for the desk, which names what each bolt, pin and latch carries.
    #[must_use]
    pub fn each<const N: usize>(&self, face: &Face<'_>, states: &States<N>) -> [[Lane<N>; 3]; 3] {
        let States { estimate, upper, lower, .. } = states;
        let wholes = [estimate, upper, lower].map(|state| state.on(face));
        let [middle, most, least] = &wholes;
        let pressings = [(estimate, middle), (upper, most), (lower, least)];
        let [first, second] = self.weightings.map(|one| self.reaction(&one, face, &pressings));
        let [moment, _] = self.reactions(face, &pressings);
        [moment, first, second]
    }

    /// Moment about the hinge or pivot, and what the bolts or pins carry: the largest and, last,
    /// the least. Zero where there is none.
    pub(crate) fn reactions<const N: usize>(
        &self,
        face: &Face<'_>,
        pressings: &[Pressing<'_, N>; 3],
    ) -> [Reaction<N>; 2] {
        let none = [Lane::ZERO; 3];
        match self.held {
            Held::Otherwise => return [none; 2],
            Held::Plate(nodes) => {
                let states = pressings.map(|(state, _)| state);
                return [plate::moments(nodes.of(face.numbers), face.bottom_m, states), none];
            }
            Held::Bolts(_) | Held::Line | Held::Side => {}
        }
        let [first, second] = &self.weightings;
        let first = self.reaction(first, face, pressings);
        let second = self.reaction(second, face, pressings);
        if self.held == Held::Line {
            return [first, second];
        }
        let [[a, a_most, a_least], [b, b_most, b_least]] = [first, second];
        let held = [a.at_least(b), a_most.at_least(b_most), a_least.at_most(b_least)];
        let moment = if self.held == Held::Side {
            let even = Weighting { foot: self.arm_m, slope: 0.0, cut: None };
            self.reaction(&even, face, pressings)
        } else {
            none
        };
        [moment, held]
    }
}
