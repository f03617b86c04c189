//! Problems put to the core: the plan's own way from a reading to the loads, in f32.

use strake::compile::{self, plane_shape};
use strake::tank;
use strake_core::lane::Lane;
use strake_core::liquid::{Band, Gas, Layer as Below, Outside, Readings, States, states};
use strake_core::part::{Capacities, Geometry, Part, PartLoads, evaluate};
use strake_core::plan::{LevelSensor, NUMBERS_MAX, Plan, Reference};
use strake_core::shape::{Rectangle, Shape};
use strake_oracle::cases::Reason;
use strake_oracle::liquid::{Layer, Liquid};
use strake_oracle::plane::PlanePart;
use strake_oracle::shape::Shape as Outline;

/// The plan's numbers.
pub(crate) type Numbers = heapless::Vec<f32, NUMBERS_MAX>;

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
    // Without a liquid the tank is dry.
    let dry = Layer { surface_m: -50.0, density_kg_m3: 1000.0 };
    let (top, below) = liquid.layers.split_first().unwrap_or((&dry, &[]));
    plan.liquid.top = exactly(top.density_kg_m3);
    for layer in below {
        let layer = Below {
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

/// An outline as a tank file states it.
fn outline_of(outline: &Outline) -> Result<tank::Shape, Reason> {
    use tank::Shape::{Circle, Ellipse, Obround, Polygon, Rectangle, Trapezoid, Triangle};
    Ok(match *outline {
        Outline::Circle { diameter } => Circle { diameter_m: diameter },
        Outline::Ellipse { width, length } => Ellipse { width_m: width, length_m: length },
        Outline::Obround { width, length } => Obround { width_m: width, length_m: length },
        Outline::Rectangle { width, length } => Rectangle { width_m: width, length_m: length },
        Outline::Triangle { base, height, apex_up } => {
            Triangle { base_m: base, height_m: height, apex_up }
        }
        Outline::Trapezoid { top, bottom, length } => {
            Trapezoid { top_m: top, bottom_m: bottom, length_m: length }
        }
        Outline::Polygon { ref corners } => {
            let corners: Vec<[f64; 2]> = corners.iter().map(|&(x, s)| [x, s]).collect();
            Polygon(tank::Corners::new(&corners).ok_or("more corners than a file may have")?)
        }
        Outline::HalfDisc { .. } => return Err("half discs are no outline of a tank file"),
    })
}

/// A flat part as a tank file states it.
pub(crate) fn plane_of(part: &PlanePart) -> Result<tank::Plane, Reason> {
    let hole = match &part.holes[..] {
        [] => None,
        [hole] => {
            let lowest = hole.origin.1 + hole.shape.extent().0 - part.shape.extent().0;
            let shape = outline_of(&hole.shape)?;
            Some(tank::Hole { shape, at_m: [hole.origin.0, lowest], carried_elsewhere: true })
        }
        _ => return Err("one hole at most"),
    };
    let shape = outline_of(&part.shape)?;
    Ok(tank::Plane::standing(shape, hole, part.slope_deg, part.heights().0))
}

/// A flat part of the core by the compiler's own way, with its numbers.
pub(crate) fn part_of(plane: &PlanePart) -> Result<(Part, Numbers), Reason> {
    let stated = plane_of(plane)?;
    let mut numbers = Numbers::new();
    let shape = plane_shape(&stated, &mut compile::Numbers { list: &mut numbers })
        .ok_or("more numbers than a plan holds")?;
    let bottom_m = narrow(plane.heights().0);
    let top_m = bottom_m + shape.rise_m();
    Ok((bare(Geometry::plane(shape, narrow(stated.sine()), None), bottom_m, top_m), numbers))
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

pub(crate) fn bare(geometry: Geometry, bottom_m: f32, top_m: f32) -> Part {
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
    loads_with(part, &Numbers::new(), liquid)
}

/// The loads of a part with numbers of its own under a liquid.
pub(crate) fn loads_with(
    part: &Part,
    numbers: &Numbers,
    liquid: &Liquid,
) -> Result<PartLoads<1>, Reason> {
    let (mut plan, level_m) = plan_of(liquid)?;
    plan.numbers.clone_from(numbers);
    Ok(evaluate(&plan, part, &at_level(&plan, level_m)))
}
