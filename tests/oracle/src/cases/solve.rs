//! The oracle's answers to problems.

mod bound;
mod curved;
mod designed_for;
mod plane;

use crate::limit::root;
use crate::liquid::{Liquid, Pressure};
use crate::membrane::hoop_tension;

use super::problem::{CourseAsk, DensityAsk, Plate, Problem};
use super::{Answer, Reason};

/// What is asked for, in SI units, angles in degrees.
///
/// # Errors
/// The reason when the load has no such quantity, such as a centre of pressure of a couple.
pub fn solve(problem: &Problem) -> Result<Answer, Reason> {
    match problem {
        Problem::LoopClass(current_a) => Ok(Answer::Text(loop_class(*current_a).to_owned())),
        Problem::DesignedFor { design, now, edges_m, ask } => {
            designed_for::answer(design, now, *edges_m, *ask)
        }
        other => number(other).map(Answer::Number),
    }
}

fn number(problem: &Problem) -> Result<f64, Reason> {
    match problem {
        Problem::Plane { part, liquid, ask } => plane::answer(part, liquid, ask),
        Problem::Curved { part, liquid, ask } => curved::answer(part, liquid, ask),
        Problem::Course { diameter_m, at_m, liquid, plate, ask } => {
            course(*diameter_m, *at_m, liquid, plate, *ask)
        }
        Problem::Pressure { liquid, at_m } => Ok(liquid.at(*at_m)),
        Problem::Bound { wall_m, head, ask } => Ok(bound::answer(*wall_m, head, ask)),
        Problem::InferredDensity {
            heights_m,
            pressure_pa,
            gas_pa,
            level_half_width_m,
            gravity_m_s2,
            ask,
        } => {
            let span = heights_m.1 - heights_m.0;
            let boxed = (*pressure_pa, *gas_pa, (span, *level_half_width_m));
            Ok(density(boxed, *gravity_m_s2, *ask))
        }
        Problem::Filling { vessel, levels_m: (from, to), inflow_m3_s } => {
            Ok((vessel.volume_below(*to) - vessel.volume_below(*from)) / inflow_m3_s)
        }
        Problem::Rule(rule) => Ok(rule.value()),
        Problem::LoopClass(_) | Problem::DesignedFor { .. } => Err("not a number"),
    }
}

/// Classes of a loop current (NAMUR NE 43; 0.5 mA as the limit of a broken wire).
fn loop_class(current_a: f64) -> &'static str {
    match 1e3 * current_a {
        ma if ma < 0.5 => "wire_break",
        ma if ma <= 3.6 => "failure_low",
        ma if ma >= 21.0 => "failure_high",
        ma if !(3.8..=20.5).contains(&ma) => "held",
        ma if !(4.0..=20.0).contains(&ma) => "out_of_specification",
        _ => "measurement",
    }
}

fn course(
    diameter_m: f64,
    at_m: f64,
    liquid: &Liquid,
    plate: &Plate,
    ask: CourseAsk,
) -> Result<f64, Reason> {
    let strength = plate.allowable_pa * plate.joint_efficiency;
    let capacity = strength * (plate.thickness_m - plate.allowance_m);
    let tension = |level: f64| hoop_tension(diameter_m, at_m, &liquid.clone().filled_to(level));
    let now = tension(liquid.surface_m());
    match ask {
        CourseAsk::Tension => Ok(now),
        CourseAsk::Utilisation => Ok(now / capacity),
        CourseAsk::Thickness => Ok(now / strength + plate.allowance_m),
        CourseAsk::LimitLevel => root(at_m, at_m + 200.0, |level| tension(level) - capacity)
            .ok_or("no level reaches the capacity"),
    }
}

type Width = (f64, f64);

/// rho = (P - gas) / (g span), its extremes over the corners of the box, and the root-sum-square
/// of differences taken one input at a time.
fn density((pressure, gas, span): (Width, Width, Width), gravity: f64, ask: DensityAsk) -> f64 {
    let rho = |p: f64, gas: f64, span: f64| (p - gas) / (gravity * span);
    let corners = (0..8_u8).map(|corner| {
        let side = |bit: u8| if corner & bit == 0 { -1.0 } else { 1.0 };
        rho(pressure.0 + side(1) * pressure.1, gas.0 + side(2) * gas.1, span.0 + side(4) * span.1)
    });
    match ask {
        DensityAsk::Estimate => rho(pressure.0, gas.0, span.0),
        DensityAsk::Largest => corners.fold(f64::NEG_INFINITY, f64::max),
        DensityAsk::Least => corners.fold(f64::INFINITY, f64::min),
        DensityAsk::RootSumSquare => {
            let slope_of_span = rho(pressure.0, gas.0, span.0) / span.0;
            let by_pressure = pressure.1 / (gravity * span.0);
            let by_gas = gas.1 / (gravity * span.0);
            by_pressure.hypot(by_gas).hypot(slope_of_span * span.1)
        }
    }
}
