//! Bottoms and heads of revolution about a vertical axis, wetted on their hollow side.

use super::Table;
use std::f64::consts::PI;
use strake_core::part::curved::RowKind;

/// Places at which the tensions are looked at, beside the apex. Between two of them a tension that
/// peaks there, a parabola, is missed by the square of one over this number, of its peak just full.
pub const PLACES: u16 = 12;

/// The meridian of a shell.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Profile {
    /// A straight line.
    Cone,
    /// A circle whose centre lies on the axis.
    Sphere,
    /// A quarter of an ellipse.
    Ellipsoid,
}

/// What a place of a shell has: radius, sine of the angle between normal and axis, radius of
/// curvature around (m), one over that along the meridian (1/m).
struct Curvature {
    radius: f64,
    sine: f64,
    around: f64,
    per_along: f64,
}

/// A shell of `base_radius_m` at its rim and `height_m`, hung or standing at that rim. Forces are
/// exact; tensions see [`PLACES`].
#[must_use]
pub fn revolved(profile: Profile, base_radius_m: f64, height_m: f64, apex_up: bool) -> Table {
    let (a, h) = (base_radius_m, height_m);
    // Area in plan within s of the apex, by its growth at the apex and the growth of that.
    let (first, second) = match profile {
        Profile::Cone => (0.0, 2.0 * PI * a * a / (h * h)),
        Profile::Sphere => (PI * (a * a + h * h) / h, -2.0 * PI),
        Profile::Ellipsoid => (2.0 * PI * a * a / h, -2.0 * PI * a * a / (h * h)),
    };
    let row = if apex_up {
        // From the rim up: s = h - t.
        let at_rim = first + second * h;
        [0.0, h, if at_rim.abs() < 1e-9 * a { 0.0 } else { at_rim }, -second, 0.0]
    } else {
        [0.0, h, -first, -second, 0.0]
    };
    let row = closed(row);
    let side = if apex_up { 1.0 } else { -1.0 };
    let places = (0..=PLACES).map(|place| {
        let s = h * f64::from(place) / f64::from(PLACES);
        let y = if apex_up { h - s } else { s };
        let at = curvature(profile, a, h, s);
        if place == 0 {
            // Alike in all directions; the tip of a cone carries nothing.
            return [y, 0.0, 0.5 * at.around, 0.0];
        }
        let along = side / (2.0 * PI * at.radius * at.sine);
        [y, along, at.around, along * at.around * at.per_along]
    });
    Table {
        rows: [Vec::new(), vec![(RowKind::Even, row)]],
        places: places.collect(),
        apex_up,
        rise_m: h,
        ..Table::default()
    }
}

/// An ellipsoid's weighting ends at nothing: keeps rounding from turning its sign.
fn closed(mut row: [f64; 5]) -> [f64; 5] {
    let [_, length, c0, c1, _] = row;
    let end = c0 + c1 * length;
    if end.abs() < 1e-6 * c0.abs() {
        row[3] = -c0 * (1.0 - 1e-7) / length;
    }
    row
}

fn curvature(profile: Profile, a: f64, h: f64, s: f64) -> Curvature {
    match profile {
        Profile::Cone => {
            let slant = a.hypot(h);
            let (radius, sine) = (a * s / h, h / slant);
            Curvature { radius, sine, around: radius / sine, per_along: 0.0 }
        }
        Profile::Sphere => {
            let r = (a * a + h * h) / (2.0 * h);
            let radius = (s * (2.0 * r - s)).max(0.0).sqrt();
            Curvature { radius, sine: radius / r, around: r, per_along: 1.0 / r }
        }
        Profile::Ellipsoid => {
            let zeta = h - s;
            let radius = a * (1.0 - zeta * zeta / (h * h)).max(0.0).sqrt();
            let around = (a.powi(4) * zeta * zeta + h.powi(4) * radius * radius).sqrt() / (h * h);
            let per_along = a.powi(4) / (around.powi(3) * h * h);
            Curvature { radius, sine: radius / around, around, per_along }
        }
    }
}
