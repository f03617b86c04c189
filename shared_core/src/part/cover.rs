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
    sign: Sign,
}

/// What a bound has to know of a weighting.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Sign {
    /// Of its load, which is all that counts where it is the same on the whole cover.
    Positive,
    Negative,
    /// Where it changes on the cover.
    Changes(Cut),
}

/// Force and moment about the level line through the lowest point.
type Pair<const N: usize> = [Lane<N>; 2];

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
        let WeightingNumbers { foot, slope, cut } = *numbers;
        let sign = match cut {
            Some([y_m, area_m2, static_m3]) => {
                Sign::Changes(Cut::new(face, y_m, area_m2, static_m3))
            }
            None if foot + slope * face.shape.centroid_up_m() >= 0.0 => Sign::Positive,
            None => Sign::Negative,
        };
        Self { foot, slope, sign }
    }

    fn numbers(&self) -> WeightingNumbers {
        let cut = self.cut().map(|cut| [cut.y_m, cut.area_m2, cut.static_m3]);
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
        let on = |state: &Pressure<N>| state.on_pieces(face, [self.cut(), None]);
        let wholes = [estimate, upper, lower].map(on);
        let [_, below_upper, below_lower] = wholes.map(|whole| whole.below);
        let ([below_upper, _], [below_lower, _]) = (below_upper, below_lower);
        self.reaction(wholes.each_ref(), [below_upper, below_lower])
    }

    /// Its load of the estimate, the largest and the least signed one between the upper and the
    /// lower pressure; `below` is what both put on the piece below the cut.
    #[inline]
    fn reaction<const N: usize>(
        &self,
        [middle, upper, lower]: [&Resultant<N>; 3],
        below: [Pair<N>; 2],
    ) -> Reaction<N> {
        let (middle, upper, lower) = (self.of(middle), self.of(upper), self.of(lower));
        match &self.sign {
            Sign::Positive => [middle, upper, lower],
            Sign::Negative => [middle, lower, upper],
            Sign::Changes(_) => {
                let [of_upper, of_lower] = below.map(|pair| straight(self.foot, self.slope, pair));
                // The first is the largest where the weighting is positive below the cut.
                let first = of_upper + (lower - of_lower);
                let second = of_lower + (upper - of_upper);
                if self.slope < 0.0 { [middle, first, second] } else { [middle, second, first] }
            }
        }
    }

    const fn cut(&self) -> Option<&Cut> {
        match &self.sign {
            Sign::Changes(cut) => Some(cut),
            Sign::Positive | Sign::Negative => None,
        }
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
            && match self.cut() {
                None => !(zero_m > slack_m && zero_m < length_m - slack_m),
                // A level cover has none.
                Some(cut) => all_within(&[
                    (sine, [f32::MIN_POSITIVE, 1.0]),
                    (cut.y_m - zero_m * sine, [-off_m, off_m]),
                    (cut.area_m2, [0.0, area_m2]),
                    (cut.static_m3, [0.0, area_m2 * length_m]),
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

    /// The weight of the cover acts at the centroid; where it relieves it counts only when it was
    /// measured.
    #[inline(never)]
    fn add_weight<const N: usize>(
        &self,
        [foot, slope]: [f32; 2],
        face: &Face<'_>,
        found: &mut Reaction<N>,
    ) {
        let at_centroid = foot + slope * face.shape.centroid_up_m();
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
        let wholes = [
            estimate.on(face),
            upper.on_pieces(face, self.cuts()),
            lower.on_pieces(face, self.cuts()),
        ];
        let [first, second] = self.both(face, wholes.each_ref());
        let [moment, _] = self.reactions(face, states, wholes.each_ref());
        [moment, first, second]
    }

    /// Where its two weightings change sign.
    #[inline]
    pub(crate) const fn cuts(&self) -> [Option<&Cut>; 2] {
        let [first, second] = &self.weightings;
        [first.cut(), second.cut()]
    }

    /// The reactions with the two weightings.
    #[inline]
    fn both<const N: usize>(
        &self,
        face: &Face<'_>,
        wholes: [&Resultant<N>; 3],
    ) -> [Reaction<N>; 2] {
        let [_, upper, lower] = wholes;
        let pieces = upper.below.into_iter().zip(lower.below);
        let mut found = [[Lane::ZERO; 3]; 2];
        let weightings = self.weightings.iter().zip(pieces);
        for (found, (weighting, (of_upper, of_lower))) in found.iter_mut().zip(weightings) {
            *found = weighting.reaction(wholes, [of_upper, of_lower]);
            if self.weight_n != 0.0 {
                self.add_weight([weighting.foot, weighting.slope], face, found);
            }
        }
        found
    }

    /// Moment about the hinge or pivot, and what the bolts or pins carry: the largest and, last,
    /// the least. Zero where there is none. The resultants are those of the estimate, the upper and
    /// the lower of the states, the last two with the pieces below [`Self::cuts`].
    pub(crate) fn reactions<const N: usize>(
        &self,
        face: &Face<'_>,
        states: &States<N>,
        wholes: [&Resultant<N>; 3],
    ) -> [Reaction<N>; 2] {
        let none = [Lane::ZERO; 3];
        match self.held {
            Held::Otherwise => return [none; 2],
            Held::Plate(nodes) => {
                let States { estimate, upper, lower, .. } = states;
                let three = [estimate, upper, lower];
                return [plate::moments(nodes.of(face.numbers), face.bottom_m, three), none];
            }
            Held::Bolts(_) | Held::Line | Held::Side => {}
        }
        let [first, second] = self.both(face, wholes);
        if self.held == Held::Line {
            return [first, second];
        }
        let [[a, a_most, a_least], [b, b_most, b_least]] = [first, second];
        let held = [a.at_least(b), a_most.at_least(b_most), a_least.at_most(b_least)];
        let moment = if self.held == Held::Side { self.about_side(face, wholes) } else { none };
        [moment, held]
    }

    /// Moment about a hinge line at the side: an even weighting.
    #[inline(never)]
    fn about_side<const N: usize>(
        &self,
        face: &Face<'_>,
        wholes: [&Resultant<N>; 3],
    ) -> Reaction<N> {
        let mut found = [Lane::ZERO; 3];
        for (found, whole) in found.iter_mut().zip(wholes) {
            *found = whole.force_n * self.arm_m;
        }
        if self.weight_n != 0.0 {
            self.add_weight([self.arm_m, 0.0], face, &mut found);
        }
        found
    }
}
