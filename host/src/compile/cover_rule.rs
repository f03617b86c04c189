//! The flat circular cover: the pressure it is good for.
//!
//! ASME VIII-1 UG-34: `t = d sqrt(C P / (S E) + 1.9 W h_G / (S E d³))` for a bolted cover, without
//! the second term for one that its bolts do not bend. Solved for `P`, which is the pressure at the
//! lowest edge, held to act on all of the cover; `W` is then `P pi d² / 4`, or the load of the
//! bolts that the engineer states where that is more. `d` is the mean diameter of the gasket. Other
//! requirements of that document are not checked.
//!
//! The rule is one of small deflections. Its number is withheld where a simply supported plate
//! (Timoshenko, Theory of Plates and Shells, art. 16) would sag by more than half its thickness
//! under that pressure.

use crate::tank::{BoltLine, CoverPlate, Hatch, Rating, Secured, Shape};
use std::f64::consts::PI;

/// Poisson's ratio of metals.
const POISSON: f64 = 0.3;
/// Modulus of elasticity in units of 1e9 Pa where no metal is named: steel.
const STEEL_GPA: f64 = 200.0;
/// By the first of these words in `material`; the lower end of what handbooks give.
const METALS_GPA: [(&str, f64); 9] = [
    ("steel", STEEL_GPA),
    ("stainless", 190.0),
    ("iron", 100.0),
    ("alumin", 69.0),
    ("copper", 115.0),
    ("brass", 100.0),
    ("bronze", 100.0),
    ("titanium", 105.0),
    ("concrete", 25.0),
];

/// Pressure that the cover is good for in one direction, Pa, or why the rule gives none.
pub(crate) fn pressure_pa(
    plate: &CoverPlate,
    rating: &Rating,
    hatch: &Hatch,
    outward: bool,
) -> Result<f64, String> {
    let Shape::Circle { diameter_m: d } = hatch.sealed.shape else {
        return Err("the flat-cover rule here is for circular covers".to_owned());
    };
    let t = plate.thickness_m.value - plate.corrosion_allowance_m.map_or(0.0, |one| one.value);
    let stress = plate.allowable_stress_pa.value * plate.joint_efficiency.map_or(1.0, |e| e.value);
    let c = plate.attachment_factor.value;
    let arm_m = arm_m(hatch, d, outward)?;
    // S E t² = C P d² + 1.9 W h_G / d.
    let carried = stress * t * t;
    let even = carried / (c * d * d + 1.9 * 0.25 * PI * d * arm_m);
    let stated_n = plate.bolt_load_n.map_or(0.0, |load| load.value);
    let seated = (carried - 1.9 * stated_n * arm_m / d) / (c * d * d);
    let pressure = even.min(seated);
    if pressure <= 0.0 {
        return Err("its bolts alone bend the cover beyond the allowable stress".to_owned());
    }
    let modulus_pa = modulus_gpa(rating) * 1e9;
    let sag_m = 12.0 * (1.0 - POISSON) * (5.0 + POISSON) * pressure * (0.5 * d).powi(4)
        / (64.0 * modulus_pa * t.powi(3));
    if sag_m > 0.5 * t {
        return Err(format!(
            "the cover is too thin for the flat-cover rule: it would sag by {:.1} of its thickness",
            sag_m / t
        ));
    }
    Ok(pressure)
}

/// Arm of the bolts about the gasket; zero where they do not bend the cover.
fn arm_m(hatch: &Hatch, gasket_m: f64, outward: bool) -> Result<f64, String> {
    let secured = hatch.secured.as_ref().map(|secured| &secured.value);
    match secured {
        _ if hatch.seats(outward) => Ok(0.0),
        None => Ok(0.0),
        Some(Secured::Bolts(bolts)) => match bolts.line {
            BoltLine::Circle { diameter_m } => Ok((0.5 * (diameter_m - gasket_m)).max(0.0)),
            BoltLine::Rectangle { .. } => {
                Err("the flat-cover rule needs bolts on a circle".to_owned())
            }
        },
        Some(Secured::Hinged(_)) => Err(
            "the flat-cover rule needs a cover held all round, this one hangs on hinge and latch"
                .to_owned(),
        ),
    }
}

fn modulus_gpa(rating: &Rating) -> f64 {
    let named = rating.material.as_ref().and_then(|material| {
        let lower = material.value.to_lowercase();
        METALS_GPA.iter().find(|(word, _)| lower.contains(word))
    });
    named.map_or(STEEL_GPA, |(_, gpa)| *gpa)
}
