//! Surfaces in space as sets of patches, and the force and moment of a pressure on them.
//!
//! A patch is swept by level lines: its first parameter u alone fixes the height, its second
//! parameter v runs along the line. The load follows its definition, F = - integral p n dA and
//! M = - integral r x p n dA, with n from the wall into the liquid.

use std::f64::consts::TAU;
use std::fmt;

use crate::liquid::Pressure;
use crate::quadrature::visit;
use crate::vector::{Vec3, add_scaled, cross, norm};

type OneParameter<T> = Box<dyn Fn(f64) -> T>;
type TwoParameters<T> = Box<dyn Fn(f64, f64) -> T>;

/// A smooth piece of surface swept by level lines.
pub struct Patch {
    /// Range of u. The height is monotone over it.
    pub range: (f64, f64),
    /// Height at u, m.
    pub height: OneParameter<f64>,
    /// Range of v at u.
    pub across: OneParameter<(f64, f64)>,
    /// Point at (u, v), m.
    pub point: TwoParameters<Vec3>,
    /// Normal into the liquid times dA/(du dv) at (u, v).
    pub into_liquid: TwoParameters<Vec3>,
}

impl fmt::Debug for Patch {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Patch").field("range", &self.range).finish_non_exhaustive()
    }
}

/// Force and moment about a point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Resultant {
    /// Force on the wall, N.
    pub force_n: Vec3,
    /// Moment about the reference point, N m.
    pub moment_nm: Vec3,
    /// Integral of z dFx from the reference point, N m: over Fx it gives the height of the line of
    /// the horizontal component.
    pub z_of_fx_nm: f64,
    /// Integral of x dFz from the reference point, N m.
    pub x_of_fz_nm: f64,
    /// For each axis the integral of |p| |w|, w being the projected width of a patch summed along
    /// its level line, N. Where two patches share a height this is at least the integral over the
    /// height.
    pub pressed_by_axis_n: Vec3,
    /// Integral of |p| dA, N: the scale against which errors are judged.
    pub pressed_n: f64,
}

/// Force on the patches and its moment about `about`.
#[must_use]
pub fn resultant(patches: &[Patch], pressure: &dyn Pressure, about: Vec3) -> Resultant {
    let mut sum = Resultant::default();
    for patch in patches {
        let breaks = patch.breaks(&crate::liquid::kinks_and_zeros(pressure));
        visit(patch.range.0, patch.range.1, &breaks, |u, du| {
            let p = pressure.at((patch.height)(u));
            let (low, high) = (patch.across)(u);
            // A turn is cut in four so that the sines stay within the order of the rule.
            let quarters = [0.25, 0.5, 0.75].map(|part| low + part * (high - low));
            let mut across = [0.0; 3];
            visit(low, high, &quarters, |v, dv| {
                let area = (patch.into_liquid)(u, v);
                across = add_scaled(across, dv, area);
                let push = area.map(|a| -p * a * du * dv);
                let arm = add_scaled((patch.point)(u, v), -1.0, about);
                sum.force_n = add_scaled(sum.force_n, 1.0, push);
                sum.moment_nm = add_scaled(sum.moment_nm, 1.0, cross(arm, push));
                sum.z_of_fx_nm += arm[2] * push[0];
                sum.x_of_fz_nm += arm[0] * push[2];
                sum.pressed_n += p.abs() * norm(area) * du * dv;
            });
            let weighed = across.map(f64::abs);
            sum.pressed_by_axis_n = add_scaled(sum.pressed_by_axis_n, p.abs() * du, weighed);
        });
    }
    sum
}

impl Patch {
    /// Height of its lowest point, m.
    #[must_use]
    pub fn lowest_m(&self) -> f64 {
        (self.height)(self.range.0).min((self.height)(self.range.1))
    }

    /// Parameters u at which the height passes one of `heights`, by bisection.
    fn breaks(&self, heights: &[f64]) -> Vec<f64> {
        heights.iter().filter_map(|z| self.parameter_at(*z)).collect()
    }

    fn parameter_at(&self, z_m: f64) -> Option<f64> {
        let (mut low, mut high) = self.range;
        let rising = (self.height)(high) > (self.height)(low);
        let above = |u: f64| ((self.height)(u) > z_m) == rising;
        if above(low) || !above(high) {
            return None;
        }
        for _ in 0..90 {
            let middle = 0.5 * (low + high);
            if above(middle) {
                high = middle;
            } else {
                low = middle;
            }
        }
        Some(0.5 * (low + high))
    }
}

/// Which side of a curved wall the liquid stands on.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wetted {
    /// The side of the axis or centre.
    Inside,
    /// The side away from the axis or centre.
    Outside,
}

impl Wetted {
    /// +1 where the normal into the liquid points away from the axis or centre.
    fn away(self) -> f64 {
        match self {
            Self::Inside => -1.0,
            Self::Outside => 1.0,
        }
    }
}

/// Part of a cylinder about a level axis along y through (0, 0, `axis_m`), from angle `from_rad`
/// to `to_rad`, counter-clockwise from the x axis towards z, of the given length.
#[must_use]
pub fn arc(
    radius: f64,
    length: f64,
    axis_m: f64,
    (from_rad, to_rad): (f64, f64),
    wetted: Wetted,
) -> Vec<Patch> {
    let away = wetted.away();
    let mut ends = vec![from_rad];
    // The height turns at odd multiples of a quarter turn: cut there so that it is monotone.
    let mut quarter = -8.0;
    while quarter <= 8.0 {
        let turn = quarter * 0.25 * TAU;
        if turn > from_rad && turn < to_rad {
            ends.push(turn);
        }
        quarter += 1.0;
    }
    ends.push(to_rad);
    let piece = |range: (f64, f64)| Patch {
        range,
        height: Box::new(move |a| axis_m + radius * a.sin()),
        across: Box::new(move |_| (-0.5 * length, 0.5 * length)),
        point: Box::new(move |a, y| [radius * a.cos(), y, axis_m + radius * a.sin()]),
        into_liquid: Box::new(move |a, _| [away * radius * a.cos(), 0.0, away * radius * a.sin()]),
    };
    ends.windows(2).map(|pair| piece((pair[0], pair[1]))).collect()
}

/// Part of a surface of revolution about the z axis: the meridian is r(u), z(u) for u in `range`
/// with both derivatives, the azimuth runs over `turn`. z must rise with u; the normal into the
/// liquid points to the axis for `Wetted::Inside`.
#[must_use]
pub fn revolved(
    range: (f64, f64),
    turn: (f64, f64),
    meridian: impl Fn(f64) -> Meridian + Copy + 'static,
    wetted: Wetted,
) -> Patch {
    let away = wetted.away();
    Patch {
        range,
        height: Box::new(move |u| meridian(u).z),
        across: Box::new(move |_| turn),
        point: Box::new(move |u, v| {
            let at = meridian(u);
            [at.r * v.cos(), at.r * v.sin(), at.z]
        }),
        into_liquid: Box::new(move |u, v| {
            let at = meridian(u);
            [away * at.r * at.dz * v.cos(), away * at.r * at.dz * v.sin(), -away * at.r * at.dr]
        }),
    }
}

/// A point of a meridian with its derivatives by the parameter.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Meridian {
    /// Distance from the axis, m.
    pub r: f64,
    /// Height, m.
    pub z: f64,
    /// dr/du.
    pub dr: f64,
    /// dz/du.
    pub dz: f64,
}

/// Part of an ellipsoid of revolution with a vertical axis, from polar angle `from_rad` to
/// `to_rad` measured from the equator (-quarter turn at the lowest point).
#[must_use]
pub fn ellipsoid(
    radius: f64,
    half_height: f64,
    centre_m: f64,
    (from_rad, to_rad): (f64, f64),
    turn: (f64, f64),
    wetted: Wetted,
) -> Patch {
    let meridian = move |u: f64| Meridian {
        r: radius * u.cos(),
        z: centre_m + half_height * u.sin(),
        dr: -radius * u.sin(),
        dz: half_height * u.cos(),
    };
    revolved((from_rad, to_rad), turn, meridian, wetted)
}

/// Cone or cylinder between radius `low_radius` at `low_m` and `high_radius` at `high_m`.
#[must_use]
pub fn frustum(
    (low_radius, low_m): (f64, f64),
    (high_radius, high_m): (f64, f64),
    wetted: Wetted,
) -> Patch {
    let (dr, dz) = (high_radius - low_radius, high_m - low_m);
    let meridian = move |u: f64| Meridian { r: low_radius + u * dr, z: low_m + u * dz, dr, dz };
    revolved((0.0, 1.0), (0.0, TAU), meridian, wetted)
}

/// A level profile x(u), z(u) drawn along y over `length`; liquid on the side of smaller x when
/// z rises with u.
#[must_use]
pub fn drawn(
    range: (f64, f64),
    length: f64,
    profile: impl Fn(f64) -> Meridian + Copy + 'static,
) -> Patch {
    Patch {
        range,
        height: Box::new(move |u| profile(u).z),
        across: Box::new(move |_| (0.0, length)),
        point: Box::new(move |u, y| [profile(u).r, y, profile(u).z]),
        into_liquid: Box::new(move |u, _| {
            let at = profile(u);
            [-at.dz, 0.0, at.dr]
        }),
    }
}

/// A flat triangle whose corners run counter-clockwise as seen from the liquid.
#[must_use]
pub fn triangle(corners: [Vec3; 3]) -> Vec<Patch> {
    let mut sorted = corners;
    sorted.sort_by(|a, b| a[2].total_cmp(&b[2]));
    let [low, middle, high] = sorted;
    let normal =
        cross(add_scaled(corners[1], -1.0, corners[0]), add_scaled(corners[2], -1.0, corners[0]));
    let rise = high[2] - low[2];
    if rise == 0.0 {
        return vec![half_triangle(low, middle, high, normal)];
    }
    // Cut along the level line through the middle corner.
    let on_long = add_scaled(low, (middle[2] - low[2]) / rise, add_scaled(high, -1.0, low));
    let part = |share: f64| normal.map(|n| n * share);
    let lower = (middle[2] - low[2]) / rise;
    vec![
        half_triangle(low, middle, on_long, part(lower)),
        half_triangle(high, middle, on_long, part(1.0 - lower)),
    ]
}

/// Triangle with the level side a-b opposite the corner `tip`; `normal` is twice its area vector.
fn half_triangle(tip: Vec3, a: Vec3, b: Vec3, normal: Vec3) -> Patch {
    let point = move |u: f64, v: f64| {
        let left = add_scaled(tip, u, add_scaled(a, -1.0, tip));
        let right = add_scaled(tip, u, add_scaled(b, -1.0, tip));
        add_scaled(left, v, add_scaled(right, -1.0, left))
    };
    Patch {
        range: (0.0, 1.0),
        height: Box::new(move |u| tip[2] + u * (a[2] - tip[2])),
        across: Box::new(|_| (0.0, 1.0)),
        point: Box::new(point),
        into_liquid: Box::new(move |u, _| normal.map(|n| n * u)),
    }
}
