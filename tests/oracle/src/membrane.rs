//! Tensions in thin shells, each from a cut and the equilibrium of what it cuts off.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use crate::liquid::Pressure;
use crate::patch::{Wetted, ellipsoid, frustum, resultant};
use crate::quadrature::integral;

/// Tensions per metre of cut, N/m, positive in tension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tensions {
    /// Along the parallels.
    pub hoop_n_m: f64,
    /// Along the meridians.
    pub meridional_n_m: f64,
}

/// Hoop tension of an upright cylinder at height `z_m`, N/m: half a ring is held by two cuts.
#[must_use]
pub fn hoop_tension(diameter_m: f64, z_m: f64, pressure: &dyn Pressure) -> f64 {
    let p = pressure.at(z_m);
    0.5 * integral(-FRAC_PI_2, FRAC_PI_2, &[], |a| p * 0.5 * diameter_m * a.cos())
}

/// Tensions at `y_m` above the apex of a cone, apex down at `apex_m`, hung at its rim.
#[must_use]
pub fn cone(
    base_radius: f64,
    height: f64,
    apex_m: f64,
    y_m: f64,
    pressure: &dyn Pressure,
) -> Tensions {
    let radius = base_radius * y_m / height;
    let cosine = height / height.hypot(base_radius);
    let below = [frustum((0.0, apex_m), (radius, apex_m + y_m), Wetted::Inside)];
    let down = -resultant(&below, pressure, [0.0; 3]).force_n[2];
    Tensions {
        hoop_n_m: pressure.at(apex_m + y_m) * radius / cosine,
        meridional_n_m: down / (TAU * radius * cosine),
    }
}

/// Tensions of a hemispherical bottom hung at its equator, at `angle_rad` from its lowest point.
#[must_use]
pub fn bowl(radius: f64, equator_m: f64, angle_rad: f64, pressure: &dyn Pressure) -> Tensions {
    let to = angle_rad - FRAC_PI_2;
    let turn = (0.0, 2.0 * PI);
    let below = [ellipsoid(radius, radius, equator_m, (-FRAC_PI_2, to), turn, Wetted::Inside)];
    let down = -resultant(&below, pressure, [0.0; 3]).force_n[2];
    let sine = angle_rad.sin();
    let meridional_n_m = down / (TAU * radius * sine * sine);
    let p = pressure.at(equator_m - radius * angle_rad.cos());
    Tensions { meridional_n_m, hoop_n_m: p * radius - meridional_n_m }
}
