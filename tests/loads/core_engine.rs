//! Problems put to the core: the plan's own way from a reading to the loads, in f32.

use strake_core::lane::Lane;
use strake_core::liquid::{Band, Gas, Layer, Outside, Readings, States, states};
use strake_core::part::{Capacities, DesignState, Geometry, Part, PartLoads, evaluate};
use strake_core::plan::{LevelSensor, Plan, Reference};
use strake_core::shape::{Circle, Rectangle, Shape};
use strake_oracle::cases::Reason;
use strake_oracle::liquid::Liquid;
use strake_oracle::plane::PlanePart;
use strake_oracle::shape::Shape as Outline;

#[expect(clippy::cast_possible_truncation, reason = "the core takes f32")]
pub(crate) fn narrow(value: f64) -> f32 {
    value as f32
}

/// A density without any doubt.
pub(crate) fn exactly(density_kg_m3: f64) -> Band {
    let density = narrow(density_kg_m3);
    Band { estimate_kg_m3: density, low_kg_m3: density, high_kg_m3: density }
}

/// A plan with a surface sensor that holds these liquids; its level is the top surface.
pub(crate) fn plan_of(liquid: &Liquid) -> Result<(Plan, f32), Reason> {
    let mut plan = Plan::empty();
    plan.gravity_m_s2 = narrow(liquid.gravity_m_s2);
    plan.closed = true;
    plan.shell_top_m = 200.0;
    plan.overflow_m = 200.0;
    let gas = narrow(liquid.gas_pa);
    plan.gas = Gas { lowest_pa: gas, nominal_pa: gas, highest_pa: gas };
    let (top, below) = liquid.layers.split_first().ok_or("no liquid")?;
    plan.liquid.top = exactly(top.density_kg_m3);
    for layer in below {
        let layer = Layer {
            surface_m: narrow(layer.surface_m),
            surface_uncertainty_m: 0.0,
            density: exactly(layer.density_kg_m3),
        };
        plan.liquid.below.push(layer).map_err(|_| "more layers than a plan holds")?;
    }
    if let Some(outside) = liquid.outside {
        let surface_m = narrow(outside.surface_m);
        let density = exactly(outside.density_kg_m3);
        let _ = plan.outside.push(Outside { highest_m: surface_m, lowest_m: surface_m, density });
    }
    Ok((plan, narrow(top.surface_m)))
}

/// The states of a surface sensor that reads this level exactly.
pub(crate) fn at_level(plan: &Plan, level_m: f32) -> States<1> {
    let top = plan.liquid.top;
    let level = Lane([level_m]);
    let density =
        [top.estimate_kg_m3, top.low_kg_m3, top.high_kg_m3].map(|density| Lane([density]));
    states(plan, &Readings { estimate: level, low: level, high: level, density })
}

/// The states of a head sensor at a height, Pa gauge between `low` and `high`.
pub(crate) fn at_head(plan: &Plan, at_m: f64, [estimate, low, high]: [f64; 3]) -> States<1> {
    let mut plan = plan.clone();
    let reference = Reference::Atmosphere { offset_pa: [0.0; 3] };
    plan.level.sensor = LevelSensor::Head { at_m: narrow(at_m), reference };
    let top = plan.liquid.top;
    let readings = Readings {
        estimate: Lane([narrow(estimate)]),
        low: Lane([narrow(low)]),
        high: Lane([narrow(high)]),
        density: [top.estimate_kg_m3, top.low_kg_m3, top.high_kg_m3].map(|d| Lane([d])),
    };
    states(&plan, &readings)
}

/// A plane part of the core; `None` for shapes and holes that it does not have yet.
pub(crate) fn part_of(plane: &PlanePart) -> Result<Part, Reason> {
    if !plane.holes.is_empty() {
        return Err("shape not offered by this version");
    }
    let sine = narrow(plane.rise());
    let shape = match plane.shape {
        Outline::Circle { diameter } => Shape::Circle(Circle::new(narrow(0.5 * diameter), sine)),
        Outline::Rectangle { width, length } => {
            Shape::Rectangle(Rectangle::new(narrow(width), narrow(length), sine))
        }
        _ => return Err("shape not offered by this version"),
    };
    let shape = if sine > 0.0 { shape } else { Shape::Level { area_m2: shape.area_m2() } };
    let bottom_m = narrow(plane.heights().0);
    let top_m = bottom_m + shape.rise_m();
    Ok(bare(Geometry::plane(shape, sine, None), bottom_m, top_m))
}

/// A course judged at one height.
pub(crate) fn course(diameter_m: f64, at_m: f64) -> Part {
    let geometry = Geometry::Course {
        half_diameter_m: narrow(0.5 * diameter_m),
        design_point_m: narrow(at_m),
        height_m: 1.0,
    };
    bare(geometry, narrow(at_m), narrow(at_m))
}

/// An upright wall of one metre width.
pub(crate) fn wall(bottom_m: f64, top_m: f64) -> Part {
    let shape = Shape::Rectangle(Rectangle::new(1.0, narrow(top_m - bottom_m), 1.0));
    bare(Geometry::plane(shape, 1.0, None), narrow(bottom_m), narrow(top_m))
}

fn bare(geometry: Geometry, bottom_m: f32, top_m: f32) -> Part {
    Part {
        geometry,
        bottom_m,
        top_m,
        outward: Capacities::default(),
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        outside: 1,
    }
}

/// The loads of a part under a liquid.
pub(crate) fn loads_of(part: &Part, liquid: &Liquid) -> Result<PartLoads<1>, Reason> {
    let (plan, level_m) = plan_of(liquid)?;
    Ok(evaluate(&plan, part, &at_level(&plan, level_m)))
}

/// The design state of one liquid.
pub(crate) fn design_of(liquid: &Liquid) -> Result<DesignState, Reason> {
    match liquid.layers[..] {
        [layer] => Ok(DesignState {
            level_m: narrow(layer.surface_m),
            weight_n_m3: narrow(layer.density_kg_m3 * liquid.gravity_m_s2),
            gas_pa: narrow(liquid.gas_pa),
        }),
        _ => Err("a design state of several layers"),
    }
}
