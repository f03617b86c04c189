//! Covers held in every way a plan knows.

use crate::single;
use std::f64::consts::{FRAC_PI_2, PI};
use strake_core::part::{BoltPattern, Cover, CoverNumbers, Held, WeightingNumbers};
use strake_core::shape::Face;
use strake_oracle::random::Random;

/// The outline of a cover, symmetrical about its centroid.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Outline {
    Disc { radius_m: f64 },
    Rectangle { width_m: f64, half_m: f64 },
}

impl Outline {
    const fn half_m(self) -> f64 {
        match self {
            Self::Disc { radius_m } => radius_m,
            Self::Rectangle { half_m, .. } => half_m,
        }
    }
}

/// A cover of any kind; one in three has a weight, one in two a sill above its gasket.
pub(crate) fn cover(random: &mut Random, outline: Outline, face: &Face<'_>, sine: f64) -> Cover {
    let mut numbers = match random.below(6) {
        0 => CoverNumbers::default(),
        1 | 2 => bolts(random, outline, sine).cover(face.shape),
        3 => level_line(random, outline, sine),
        4 => uneven_bolts(random, outline, sine),
        _ => side(random, outline, sine),
    };
    if random.one_in(3) {
        numbers.weight_n = single(random.between(-900.0, 900.0));
        numbers.weight_is_measured = random.one_in(2);
    }
    if random.one_in(2) {
        numbers.sill_above_m = single(random.between(0.0, 0.2)) * face.shape.rise_m();
    }
    Cover::new(&numbers, face)
}

/// Three to forty bolts on a circle, the lowest at the lowest point or two astride it. For an odd
/// number only one end of the upright diameter has a bolt.
fn bolts(random: &mut Random, outline: Outline, sine: f64) -> BoltPattern {
    let count = 3 + u16::try_from(random.below(38)).unwrap_or(0);
    let n = f64::from(count);
    let first = if random.one_in(2) { 0.0 } else { PI / n };
    let circle_m = outline.half_m() * random.between(0.7, 1.3);
    let heights = (0..count).map(|i| -(first + 2.0 * PI * f64::from(i) / n).cos() * circle_m);
    let heights: Vec<f64> = heights.collect();
    let squares: f64 = heights.iter().map(|s| s * s).sum();
    let lowest = heights.iter().copied().fold(f64::INFINITY, f64::min);
    let highest = heights.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    // Weighting (1 + s s_i n / sum s²) / n of bolt i: its zero.
    let cut_at = |bolt_m: f64| cut(outline, sine, -squares / (n * bolt_m));
    BoltPattern {
        count,
        per_moment: [single(lowest / squares), single(highest / squares)],
        cuts: [cut_at(lowest), cut_at(highest)],
    }
}

/// `alpha + beta s` from the lowest point.
fn weighting(alpha: f64, beta: f64, outline: Outline, sine: f64) -> WeightingNumbers {
    if sine <= 0.0 {
        return WeightingNumbers { foot: single(alpha), slope: 0.0, cut: None };
    }
    WeightingNumbers {
        foot: single(alpha - outline.half_m() * beta),
        slope: single(beta),
        cut: cut(outline, sine, -alpha / beta),
    }
}

/// Bolts whose mean height is not that of the centroid.
fn uneven_bolts(random: &mut Random, outline: Outline, sine: f64) -> CoverNumbers {
    let count = 3 + u16::try_from(random.below(20)).unwrap_or(0);
    let (n, reach_m) = (f64::from(count), outline.half_m());
    let mean_m = reach_m * random.between(-0.3, 0.3);
    let squares = n * reach_m * reach_m * random.between(0.3, 0.8);
    let share = |bolt_m: f64| {
        let beta = (bolt_m - mean_m) / squares;
        weighting(1.0 / n - mean_m * beta, beta, outline, sine)
    };
    let weightings = [share(-1.1 * reach_m), share(1.1 * reach_m)];
    CoverNumbers { held: Held::Bolts(count), weightings, ..CoverNumbers::default() }
}

/// A hinge above, below or across the cover, with or without a latch.
fn level_line(random: &mut Random, outline: Outline, sine: f64) -> CoverNumbers {
    let half_m = outline.half_m();
    let line_m = match random.below(4) {
        0 => half_m * random.between(1.0, 1.4),
        1 => -half_m * random.between(1.0, 1.4),
        2 => half_m * if random.one_in(2) { 1.0 } else { -1.0 },
        _ => half_m * random.between(-0.8, 0.8),
    };
    let sign = if line_m > 0.0 { -1.0 } else { 1.0 };
    let per_moment = if random.one_in(4) { 0.0 } else { 1.0 / (half_m * random.between(0.7, 2.4)) };
    let moment = (-sign * line_m, sign);
    let line = (1.0 - per_moment * moment.0, -per_moment * moment.1);
    let weightings = [moment, line].map(|(alpha, beta)| weighting(alpha, beta, outline, sine));
    CoverNumbers { held: Held::Line, weightings, ..CoverNumbers::default() }
}

/// A door on two pins.
fn side(random: &mut Random, outline: Outline, sine: f64) -> CoverNumbers {
    let half_m = outline.half_m();
    let arm_m = random.between(0.2, 2.0);
    let latches = random.between(0.4, 0.7);
    let latch_m = half_m * random.between(-0.8, 0.8);
    let lower_m = half_m * random.between(-1.0, -0.1);
    let upper_m = half_m * random.between(0.1, 1.0);
    let (apart_m, rest) = (upper_m - lower_m, 1.0 - latches);
    let pins = [
        ((latches * latch_m + upper_m * rest) / apart_m, -1.0 / apart_m),
        (-(latches * latch_m + lower_m * rest) / apart_m, 1.0 / apart_m),
    ];
    CoverNumbers {
        held: Held::Side,
        arm_m: single(arm_m),
        weightings: pins.map(|(alpha, beta)| weighting(alpha, beta, outline, sine)),
        ..CoverNumbers::default()
    }
}

/// Height of a line `s_m` above the centroid, over the lowest point; area and its first moment
/// below. None where the line misses the shape or the part is level.
fn cut(outline: Outline, sine: f64, s_m: f64) -> Option<[f32; 3]> {
    let (half_m, area_m2, static_m3) = match outline {
        Outline::Disc { radius_m: r } if s_m.abs() < r => {
            let t = s_m / r;
            let chord = (1.0 - t * t).sqrt();
            let area_m2 = r * r * (FRAC_PI_2 + t * chord + t.asin());
            (r, area_m2, -2.0 / 3.0 * (r * chord).powi(3))
        }
        Outline::Rectangle { width_m, half_m } if s_m.abs() < half_m => {
            (half_m, width_m * (s_m + half_m), 0.5 * width_m * (s_m * s_m - half_m * half_m))
        }
        _ => return None,
    };
    let first_m3 = static_m3 + half_m * area_m2;
    (sine > 0.0).then(|| [(s_m + half_m) * sine, area_m2, first_m3].map(single))
}
