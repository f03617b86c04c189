//! Flat parts: pressure times width times lever, up the slope.

use super::Figure;
use super::outline::Area;
use super::profile::Profiles;
use super::quadrature::integral;
use crate::tank::Plane;

/// Share of the integral of `|p| |w|` that the first method may be off.
pub(super) const ERROR: f64 = 2e-6;

/// A weighting `alpha + beta s`, `s` up the slope from the centroid.
#[derive(Clone, Copy, Debug)]
pub(super) struct Straight {
    pub(super) alpha: f64,
    pub(super) beta: f64,
}

impl Straight {
    fn at(self, s: f64) -> f64 {
        self.alpha + self.beta * s
    }

    /// Its size term by term: what rounding its two numbers is measured by.
    fn size(self, s: f64) -> f64 {
        self.alpha.abs() + (self.beta * s).abs()
    }
}

/// A flat part under the three pressures.
pub(super) struct Flat<'a> {
    pub(super) area: Area<'a>,
    pub(super) profiles: &'a Profiles,
}

impl<'a> Flat<'a> {
    pub(super) fn new(plane: &'a Plane, profiles: &'a Profiles) -> Self {
        Self { area: Area::new(plane), profiles }
    }

    /// A load with a straight weighting: of the estimate, its largest and its least value. Where
    /// the weighting changes its sign the one pressure stands on the one side, the other on the
    /// other.
    pub(super) fn load(&self, weighting: Straight) -> [Figure; 3] {
        let Self { area, profiles } = self;
        let centroid = area.centroid_m;
        let even = area.sine == 0.0;
        let turn_m = area.height_m(centroid - weighting.alpha / weighting.beta);
        let kinks = profiles.kinks().into_iter().chain([turn_m]).filter(|kink| kink.is_finite());
        let [estimate, most, least, allowed] = integral(&area.stretches(kinks), |s| {
            let z_m = area.height_m(s);
            let [p, upper, lower] = profiles.all().map(|one| one.at(z_m));
            // An even pressure turns nothing about the centroid.
            let up = if even { 0.0 } else { s - centroid };
            let (w, size) = (weighting.at(up), weighting.size(up));
            let (out, back) = if w > 0.0 { (upper, lower) } else { (lower, upper) };
            let width = area.width(s);
            let largest = p.abs().max(upper.abs()).max(lower.abs());
            let off = (ERROR * largest + profiles.rounding_pa(z_m)) * size;
            [p * w * width, out * w * width, back * w * width, off * width]
        });
        [estimate, most, least].map(|value| Figure { value, allowed })
    }

    /// `integral p x dA` and `integral |p| |x| dA` of the estimate.
    pub(super) fn sideways(&self) -> [f64; 2] {
        let Self { area, profiles } = self;
        let estimate = &profiles.estimate;
        integral(&area.stretches(estimate.kinks()), |s| {
            let p = estimate.at(area.height_m(s));
            let first = area.across(s, |[left, right]| 0.5 * (right * right - left * left));
            let size =
                area.across(s, |[left, right]| 0.5 * (right * right.abs() - left * left.abs()));
            [p * first, p.abs() * size]
        })
    }
}
