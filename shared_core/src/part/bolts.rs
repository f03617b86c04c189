//! Equal bolts that hold a cover.
//!
//! Rigid cover on `n >= 3` equal, equally stiff bolts: bolt `i` at `s_i` up the slope from the
//! centroid carries `F / n + Mc s_i / sum s_j²` (elastic bolt group; common practice in joint
//! design). This is the share of the liquid load, without preload, gasket seating and prying.
//!
//! Its weighting along the cover, `(1 + s s_i n / sum s_j²) / n`, changes sign where the cover
//! reaches beyond the bolts' kern: there pressure relieves the bolt. A bound must take the upper
//! pressure on one side of that line and the lower on the other.

use crate::lane::Lane;
use crate::pressure::{Pressure, Resultant};
use crate::shape::{Cut, Face, Shape};

/// One extreme bolt: the lowest or the highest.
#[derive(Clone, Copy, Debug, PartialEq)]
struct ExtremeBolt {
    /// `s_i / sum s_j²`, 1/m.
    per_moment: f32,
    /// Where its weighting changes sign, if that lies on the cover.
    cut: Option<Cut>,
}

/// The bolts of a cover: only the lowest and the highest can carry the largest share.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bolts {
    count: u16,
    per_bolt: f32,
    lowest: ExtremeBolt,
    highest: ExtremeBolt,
}

/// Numbers from which [`Bolts`] are made; they stand in the plan.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BoltPattern {
    /// Number of bolts, at least three.
    pub count: u16,
    /// `s / sum s_j²` of the lowest bolt (not positive) and the highest (not negative), 1/m.
    pub per_moment: [f32; 2],
    /// Cut lines of the two weightings: height above the cover's lowest point (m), area below (m²)
    /// and first moment of that area (m³). `None` where the weighting keeps its sign.
    pub cuts: [Option<[f32; 3]>; 2],
}

impl Bolts {
    /// The bolts of a pattern on a cover.
    #[must_use]
    pub fn new(pattern: &BoltPattern, face: &Face<'_>) -> Self {
        let [lowest, highest] = pattern.per_moment;
        let [low_cut, high_cut] = pattern.cuts;
        let cut = |numbers: Option<[f32; 3]>| {
            numbers.map(|[y_m, area_m2, static_m3]| Cut::new(face, y_m, area_m2, static_m3))
        };
        Self {
            count: pattern.count,
            per_bolt: 1.0 / f32::from(pattern.count),
            lowest: ExtremeBolt { per_moment: lowest, cut: cut(low_cut) },
            highest: ExtremeBolt { per_moment: highest, cut: cut(high_cut) },
        }
    }

    /// The numbers from which these bolts were made.
    #[must_use]
    pub fn pattern(&self) -> BoltPattern {
        let numbers = |cut: Option<Cut>| cut.map(|cut| [cut.y_m, cut.area_m2, cut.static_m3]);
        BoltPattern {
            count: self.count,
            per_moment: [self.lowest.per_moment, self.highest.per_moment],
            cuts: [numbers(self.lowest.cut), numbers(self.highest.cut)],
        }
    }

    /// Largest share of a resultant, N: of the lowest or the highest bolt.
    #[must_use]
    #[inline]
    pub fn largest<const N: usize>(&self, whole: &Resultant<N>) -> Lane<N> {
        self.share(&self.lowest, whole).at_least(self.share(&self.highest, whole))
    }

    #[inline]
    fn share<const N: usize>(&self, bolt: &ExtremeBolt, r: &Resultant<N>) -> Lane<N> {
        r.force_n * self.per_bolt + r.moment_n_m * bolt.per_moment
    }

    /// Bounds of the largest and the least share, N: `[largest, least]`.
    #[must_use]
    #[inline]
    pub fn bounds<const N: usize>(
        &self,
        face: &Face<'_>,
        upper: (&Pressure<N>, &Resultant<N>),
        lower: (&Pressure<N>, &Resultant<N>),
    ) -> [Lane<N>; 2] {
        let [low_most, low_least] = self.bolt_bounds(&self.lowest, face, upper, lower);
        let [high_most, high_least] = self.bolt_bounds(&self.highest, face, upper, lower);
        [low_most.at_least(high_most), low_least.at_most(high_least)]
    }

    /// `[largest, least]` share of one bolt.
    fn bolt_bounds<const N: usize>(
        &self,
        bolt: &ExtremeBolt,
        face: &Face<'_>,
        upper: (&Pressure<N>, &Resultant<N>),
        lower: (&Pressure<N>, &Resultant<N>),
    ) -> [Lane<N>; 2] {
        let (whole_upper, whole_lower) = (self.share(bolt, upper.1), self.share(bolt, lower.1));
        let Some(cut) = &bolt.cut else { return [whole_upper, whole_lower] };
        let below_upper = self.share(bolt, &upper.0.below(cut, face));
        let below_lower = self.share(bolt, &lower.0.below(cut, face));
        let above_upper = whole_upper - below_upper;
        let above_lower = whole_lower - below_lower;
        // The lowest bolt's weighting is positive below its cut, the highest's above.
        if bolt.per_moment < 0.0 {
            [below_upper + above_lower, below_lower + above_upper]
        } else {
            [above_upper + below_lower, above_lower + below_upper]
        }
    }
}

impl BoltPattern {
    /// Whether every number is in its range and each cut lies where its weighting changes sign: a
    /// bound needs it there. `sine` is that of the slope.
    #[must_use]
    pub fn is_sound(&self, shape: &Shape, sine: f32) -> bool {
        let half_m = if sine > 0.0 { 0.5 * shape.rise_m() / sine } else { 0.0 };
        let slack_m = 1.0e-4 * half_m;
        let first_m3 = shape.area_m2() * half_m;
        let cut_is_sound = |per_moment: f32, cut: Option<[f32; 3]>| {
            // Here `1 + n s s_i / sum s_j²` is zero; far away where no bolt stands off the
            // centroid.
            let zero_m = -1.0 / (f32::from(self.count) * per_moment);
            match cut {
                None => zero_m.abs() >= half_m - slack_m,
                Some([y_m, area_m2, static_m3]) => {
                    (y_m - (half_m + zero_m) * sine).abs() <= slack_m * sine
                        && (0.0..=shape.area_m2()).contains(&area_m2)
                        && (-first_m3..=0.0).contains(&static_m3)
                }
            }
        };
        let [lowest, highest] = self.per_moment;
        let [low_cut, high_cut] = self.cuts;
        self.count >= 3
            && (-1.0e4..=0.0).contains(&lowest)
            && (0.0..=1.0e4).contains(&highest)
            && cut_is_sound(lowest, low_cut)
            && cut_is_sound(highest, high_cut)
    }
}
