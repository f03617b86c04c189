//! Covers, what holds them, and parts known by their design state, through the file.

use super::file::{Tank, outline};
use strake::assess::PartRow;
use strake::inverse::{Against, By, lines};
use strake_oracle::cases::{
    Answer, DesignedForAsk, DoorAsk, Line, PlaneAsk, Problem, Reason, Row, Securing, problem_of,
};
use strake_oracle::limit::{place_of_largest, root};
use strake_oracle::liquid::Liquid;
use strake_oracle::plane::PlanePart;
use strake_oracle::securing::Door;

const UNREAD: Reason = "inputs not understood";

/// A cover by its own outline, held by `secured`, with capacities.
fn cover(part: &PlanePart, secured: &str, opens: &str, capacities: &str) -> Result<String, Reason> {
    let shape = outline(&part.shape).ok_or("the outline is none of a tank file")?;
    let (bottom_m, _) = part.heights();
    Ok(format!(
        "[[hatch]]\nname = \"cover\"\nshape = {shape}\nsealed_to = {shape}\n\
         bottom = \"{bottom_m:?} m\"\nslope = \"{:?} deg\"\nopens = \"{opens}\"\n\
         secured = {secured}\n{capacities}\n",
        part.slope_deg
    ))
}

const UNRATED: &str = "capacity = [ { none = \"loads only\" } ]";

/// The hinge line of a row, with a latch at `lever_m` from it on the side that opens.
fn held(part: &PlanePart, line: Line, lever_m: Option<f64>) -> String {
    let (low, high) = part.shape.extent();
    let far = if line.upper_out { high - line.s } else { line.s - low };
    let lever_m = lever_m.unwrap_or(far);
    let (edge, offset_m) = if line.s >= high - 1e-12 {
        ("top", line.s - high)
    } else if line.s <= low + 1e-12 {
        ("bottom", low - line.s)
    } else {
        let up = if line.upper_out { lever_m } else { -lever_m };
        let (pivot_m, latch_m) = (part.height_of(line.s), part.height_of(line.s + up));
        return format!("{{ pivot = \"{pivot_m:?} m\", latch_height = \"{latch_m:?} m\" }}");
    };
    let offset_m = offset_m.max(0.0);
    format!("{{ hinge = \"{edge}\", offset = \"{offset_m:?} m\", latch_at = \"{lever_m:?} m\" }}")
}

fn row_of(tank: &Tank, level_m: f64) -> Result<PartRow, Reason> {
    tank.assessed(level_m).parts.into_iter().next().ok_or("no part")
}

/// What the product says of a question about a cover.
pub(crate) fn plane(part: &PlanePart, liquid: &Liquid, ask: &PlaneAsk) -> Result<f64, Reason> {
    match *ask {
        PlaneAsk::Latch(securing) | PlaneAsk::Hinge(securing) | PlaneAsk::Seat(securing) => {
            reaction(part, liquid, &securing, ask)
        }
        PlaneAsk::Door(door, hinge_x, which) => self::door(part, liquid, &door, hinge_x, which),
        PlaneAsk::Lift { friction, weight_n } => {
            let secured = "{ bolts = 8, bolt_circle_diameter = \"9 m\" }";
            let tank = Tank::of(liquid, cover(part, secured, "outward", UNRATED)?);
            let force = row_of(&tank, liquid.surface_m())?.loads.force_n.ok_or("no force")?;
            Ok(friction * f64::from(force) + weight_n)
        }
        PlaneAsk::Moment(line) => Turning::new(part, liquid, line)?.moment(liquid.surface_m()),
        PlaneAsk::ZeroMomentLevel(line) => {
            let turning = Turning::new(part, liquid, line)?;
            let top = part.heights().1;
            root(top, top + 50.0, |level| turning.moment(level).unwrap_or(f64::NAN))
                .ok_or("moment does not change sign")
        }
        PlaneAsk::LeastMomentLevel(line) => Ok(Turning::new(part, liquid, line)?.least().0),
        PlaneAsk::LeastMoment(line) => Ok(Turning::new(part, liquid, line)?.least().1),
        PlaneAsk::LimitLevel(line, capacity) => limit(part, liquid, line, capacity),
        PlaneAsk::LevelOfForce(force_n) => lowest(part, liquid, force_n),
        _ => Err(UNREAD),
    }
}

/// A cover that turns about a line.
struct Turning {
    tank: Tank,
    heights_m: (f64, f64),
}

impl Turning {
    fn new(part: &PlanePart, liquid: &Liquid, line: Line) -> Result<Self, Reason> {
        let secured = held(part, line, None);
        let tank = Tank::of(liquid, cover(part, &secured, "outward", UNRATED)?);
        // Positive opens the side of the latch, which stands where the row's sign opens.
        Ok(Self { tank, heights_m: part.heights() })
    }

    fn moment(&self, level_m: f64) -> Result<f64, Reason> {
        let row = row_of(&self.tank, level_m)?;
        row.loads.moment_n_m.map(f64::from).ok_or("no moment is given")
    }

    /// Level and value of the least moment while filling. At a flat extreme f32 tells two levels
    /// apart by their slopes only.
    fn least(&self) -> (f64, f64) {
        const BESIDE_M: f64 = 5e-3;
        let (low, high) = self.heights_m;
        let moment = |level: f64| self.moment(level).unwrap_or(f64::NAN);
        let about = place_of_largest(low, 2.0 * high - low, 60, |level| -moment(level));
        let slope = |level: f64| moment(level + BESIDE_M) - moment(level - BESIDE_M);
        let at = root(about - 0.02, about + 0.02, slope).unwrap_or(about);
        (at, moment(at))
    }
}

fn reaction(
    part: &PlanePart,
    liquid: &Liquid,
    securing: &Securing,
    ask: &PlaneAsk,
) -> Result<f64, Reason> {
    let secured = held(part, securing.hinge, Some(securing.latch_lever_m));
    let opens = if securing.opens_inward { "inward" } else { "outward" };
    let tank = Tank::of(liquid, cover(part, &secured, opens, UNRATED)?);
    let loads = row_of(&tank, liquid.surface_m())?.loads;
    let latch = f64::from(loads.latch_n.ok_or("no latch")?);
    let hinge: f64 = loads.hinge_n.iter().copied().map(f64::from).sum();
    // Tension against outward motion counts positive; rows of covers that open inward count what
    // keeps them shut.
    let sign = if securing.opens_inward { -1.0 } else { 1.0 };
    Ok(match ask {
        PlaneAsk::Latch(_) => sign * latch,
        PlaneAsk::Hinge(_) => sign * hinge,
        _ => f64::from(loads.force_n.ok_or("no force")?) - latch - hinge,
    })
}

fn door(
    part: &PlanePart,
    liquid: &Liquid,
    door: &Door,
    hinge_x: f64,
    which: DoorAsk,
) -> Result<f64, Reason> {
    let (low, high) = part.shape.extent();
    let offset_m = -hinge_x - 0.5 * part.area() / (high - low);
    let (lower, upper) = door.pins_m;
    let secured = format!(
        "{{ hinge = \"side\", offset = \"{offset_m:?} m\", \
         pins = [\"{lower:?} m\", \"{upper:?} m\"], latch_at = \"{:?} m\", \
         latch_height = \"{:?} m\" }}",
        door.latch_lever_m, door.latch_height_m
    );
    let tank = Tank::of(liquid, cover(part, &secured, "outward", UNRATED)?);
    let loads = row_of(&tank, liquid.surface_m())?.loads;
    let found = match which {
        DoorAsk::Latch => loads.latch_n,
        DoorAsk::LowerPin => loads.hinge_n.first().copied(),
        DoorAsk::UpperPin => loads.hinge_n.get(1).copied(),
    };
    found.map(f64::from).ok_or("no reaction is given")
}

/// Highest level reached from empty without passing a moment in either direction.
fn limit(part: &PlanePart, liquid: &Liquid, line: Line, capacity: f64) -> Result<f64, Reason> {
    let secured = held(part, line, None);
    let capacities = format!(
        "capacity = [ {{ moment = \"{capacity:?} N m\", basis = \"drawing\" }} ]\n\
         capacity_inward = [ {{ moment = \"{capacity:?} N m\", basis = \"drawing\" }} ]"
    );
    let tank = Tank::of(liquid, cover(part, &secured, "outward", &capacities)?);
    let limits = row_of(&tank, 0.0)?.judgement.limits.ok_or("no limit is given")?;
    limits.limit_level_m.map(f64::from).ok_or("no level is admissible")
}

/// Lowest level at which the inward force stays within a capacity.
fn lowest(part: &PlanePart, liquid: &Liquid, force_n: f64) -> Result<f64, Reason> {
    let capacities = format!(
        "capacity = [ {{ force = \"1000 kN\", basis = \"drawing\" }} ]\n\
         capacity_inward = [ {{ force = \"{:?} N\", basis = \"drawing\" }} ]",
        force_n.abs().max(1e-3)
    );
    let secured = "{ bolts = 8, bolt_circle_diameter = \"9 m\" }";
    let tank = Tank::of(liquid, cover(part, secured, "outward", &capacities)?);
    let lowest = row_of(&tank, liquid.surface_m())?.judgement.lowest.ok_or("no lowest level")?;
    lowest.lowest_level_m.map(f64::from).ok_or("no level is admissible")
}

/// A panel known by its design state.
pub(super) fn designed_for(row: &Row) -> Result<Answer, Reason> {
    let Problem::DesignedFor { design, now, edges_m: (bottom, top), ask } = problem_of(row)? else {
        return Err(UNREAD);
    };
    let [layer] = design.layers[..] else { return Err("a design state of several layers") };
    let rest = format!(
        "[[panel]]\nname = \"wall\"\nshape = {{ rectangle = {{ width = \"1 m\", \
         length = \"{:?} m\" }} }}\nbottom = \"{bottom:?} m\"\nslope = \"90 deg\"\n\
         capacity = [ {{ designed_for = {{ level = \"{:?} m\", density = \"{:?} kg/m3\", \
         gas = \"{:?} Pa\" }}, remaining = 1.0, basis = \"drawing\" }} ]\n",
        top - bottom,
        layer.surface_m,
        layer.density_kg_m3,
        design.gas_pa
    );
    let tank = Tank::of(&now, rest);
    let by = match ask {
        DesignedForAsk::LargestRatio => {
            let judged = row_of(&tank, now.surface_m())?.judgement;
            let ratio = judged.utilisation.ok_or("no utilisation is given")?;
            return Ok(Answer::Number(ratio.into()));
        }
        DesignedForAsk::LimitByPressure => By::Pressure,
        DesignedForAsk::LimitByForce => By::Force,
        DesignedForAsk::LimitByMoment => By::Moment,
    };
    let desk = tank.desk();
    let part = desk.plan().parts.first().ok_or("no part")?;
    let found = lines(&desk, part);
    let line = found.iter().find(|line| line.by == by && line.against == Against::DesignState);
    Ok(match line.ok_or("no such line")?.level_m {
        Some(level_m) => Answer::Number(level_m.into()),
        None => Answer::Text("none".into()),
    })
}

/// Rules about covers.
pub(super) fn rule(row: &Row) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    match row.get("rule") {
        Some("UG34_bolted") => {}
        Some("end_force_0.785G2P") => return Err("the rule rounds a quarter of pi to 0.785"),
        _ => return Err("seating loads of gaskets are not the liquid's"),
    }
    let (gasket_m, arm_m) = (number("d_m")?, number("hG_m")?);
    let (stress_pa, share) = (number("S_Pa")?, number("E")?);
    let (factor, bolts_n, asked_pa) = (number("C")?, number("W_bolt_N")?, number("P_Pa")?);
    // The rule turned about: the thickness whose calculated pressure is the one asked for.
    let calculated_pa = |thickness_m: f64| {
        let shape = format!("{{ circle = {{ diameter = \"{gasket_m:?} m\" }} }}");
        let rest = format!(
            "[[hatch]]\nname = \"cover\"\nshape = {shape}\nsealed_to = {shape}\n\
             bottom = \"0 m\"\nslope = \"90 deg\"\nopens = \"outward\"\n\
             secured = {{ bolts = 8, bolt_circle_diameter = \"{:?} m\" }}\n\
             capacity = [ {{ cover = {{ thickness = \"{thickness_m:?} m\", \
             allowable_stress = \"{stress_pa:?} Pa\", joint_efficiency = {share:?}, \
             attachment_factor = {factor:?}, bolt_load = \"{bolts_n:?} N\" }}, \
             basis = \"drawing\" }} ]\n",
            gasket_m + 2.0 * arm_m
        );
        let tank = Tank::of(&Liquid::uniform(1000.0, 0.0), rest);
        let stated = tank.sheet().parts.into_iter().next().and_then(|row| {
            row.capacity.iter().find(|one| one.load == "pressure_pa").map(|one| one.value)
        });
        stated.map_or(0.0, f64::from)
    };
    root(0.01, 0.1, |thickness_m| calculated_pa(thickness_m) - asked_pa)
        .ok_or("no thickness gives that pressure")
}
