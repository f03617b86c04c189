//! Flat parts.

use crate::cases::Reason;
use crate::cases::problem::{DoorAsk, Line, PlaneAsk, Securing};
use crate::limit::{Limit, limit_level, place_of_largest, root};
use crate::liquid::Liquid;
use crate::plane::PlanePart;
use crate::securing::held;
use crate::shape::Shape;

pub(super) fn answer(part: &PlanePart, liquid: &Liquid, ask: &PlaneAsk) -> Result<f64, Reason> {
    let force = part.force(liquid);
    let moment = |line: Line, state: &Liquid| {
        let upper_out = part.moment(state, line.s);
        if line.upper_out { upper_out } else { -upper_out }
    };
    match *ask {
        PlaneAsk::Force => Ok(force),
        PlaneAsk::Horizontal => Ok(force * part.rise()),
        PlaneAsk::MeanPressure => Ok(force / part.area()),
        PlaneAsk::CentreDepth
        | PlaneAsk::CentreHeight
        | PlaneAsk::CentreBelowCentroid
        | PlaneAsk::CentreDownSlope
        | PlaneAsk::CentreSideways => centre(part, liquid, ask),
        PlaneAsk::Moment(line) => Ok(moment(line, liquid)),
        PlaneAsk::SidewaysMoment(x) => Ok(part.sideways_moment(liquid, x)),
        PlaneAsk::Latch(securing) | PlaneAsk::Hinge(securing) | PlaneAsk::Seat(securing) => {
            Ok(reaction(force, moment(securing.hinge, liquid), securing, ask))
        }
        PlaneAsk::Door(door, hinge_x, which) => {
            let lower_pin = (door.pins_m.0 - part.bottom_m) / part.rise();
            let opening = part.sideways_moment(liquid, hinge_x);
            let found = door.held(force, opening, part.moment(liquid, lower_pin));
            Ok(match which {
                DoorAsk::Latch => found.latch_n,
                DoorAsk::UpperPin => found.upper_pin_n,
                DoorAsk::LowerPin => found.lower_pin_n,
            })
        }
        PlaneAsk::Lift { friction, weight_n } => Ok(friction * force + weight_n),
        PlaneAsk::StripBottom(k, n) => strip_bottom(part, liquid, k, n),
        PlaneAsk::StripCentre(k, n) => {
            let (above, below) =
                (strip_bottom(part, liquid, k - 1, n)?, strip_bottom(part, liquid, k, n)?);
            let strip = band(part, liquid, above, below);
            centre(&strip, liquid, &PlaneAsk::CentreDepth)
        }
        PlaneAsk::ZeroMomentLevel(line) => {
            let top = part.heights().1;
            root(top, top + 50.0, |level| moment(line, &liquid.clone().filled_to(level)))
                .ok_or("moment does not change sign")
        }
        PlaneAsk::LeastMomentLevel(line) => {
            Ok(least_level(part, |level| moment(line, &liquid.clone().filled_to(level))))
        }
        PlaneAsk::LeastMoment(line) => {
            let at = |level: f64| moment(line, &liquid.clone().filled_to(level));
            Ok(at(least_level(part, at)))
        }
        PlaneAsk::LevelOfForce(target) => {
            let low = part.heights().0;
            root(low, low + 50.0, |level| part.force(&liquid.clone().filled_to(level)) - target)
                .ok_or("no level gives that force")
        }
        PlaneAsk::LimitLevel(line, capacity) => {
            let low = part.heights().0;
            let limit = limit_level(low, low + 50.0, 5_000, |level| {
                moment(line, &liquid.clone().filled_to(level)).abs() / capacity
            });
            match limit {
                Limit::Level(level) => Ok(level),
                Limit::None | Limit::Beyond => Err("no limit level in range"),
            }
        }
    }
}

fn centre(part: &PlanePart, liquid: &Liquid, ask: &PlaneAsk) -> Result<f64, Reason> {
    let (x, s) = part.centre_of_pressure(liquid).ok_or("a couple has no centre")?;
    let down_slope = part.centroid().1 - s;
    Ok(match ask {
        PlaneAsk::CentreDepth => liquid.surface_m() - part.height_of(s),
        PlaneAsk::CentreBelowCentroid => down_slope * part.rise(),
        PlaneAsk::CentreDownSlope => down_slope,
        PlaneAsk::CentreSideways => x,
        _ => part.height_of(s),
    })
}

/// A cover that opens inward is held by its latch only under a net inward load; outward it sits
/// on its seat.
fn reaction(force: f64, opening: f64, securing: Securing, ask: &PlaneAsk) -> f64 {
    if securing.opens_inward {
        let inward = held(-force, -opening, securing.latch_lever_m);
        let seated = force > 0.0;
        return match ask {
            PlaneAsk::Seat(_) if seated => force,
            PlaneAsk::Latch(_) if !seated => inward.latch_n,
            PlaneAsk::Hinge(_) if !seated => inward.hinge_n,
            _ => 0.0,
        };
    }
    let found = held(force, opening, securing.latch_lever_m);
    match ask {
        PlaneAsk::Latch(_) => found.latch_n,
        PlaneAsk::Hinge(_) => found.hinge_n,
        _ => 0.0,
    }
}

fn least_level(part: &PlanePart, moment: impl Fn(f64) -> f64) -> f64 {
    let (low, high) = part.heights();
    place_of_largest(low, 2.0 * high - low, 400, |level| -moment(level))
}

/// The part of a wall between two depths below the surface.
fn band(part: &PlanePart, liquid: &Liquid, above: f64, below: f64) -> PlanePart {
    let shape = Shape::Rectangle { width: 1.0, length: below - above };
    PlanePart::hung_at(shape, liquid.surface_m() - above, part.slope_deg)
}

fn strip_bottom(part: &PlanePart, liquid: &Liquid, k: u32, n: u32) -> Result<f64, Reason> {
    let depth = liquid.surface_m() - part.heights().0;
    let share = f64::from(k) / f64::from(n);
    if k == 0 || k == n {
        return Ok(share * depth);
    }
    let whole = band(part, liquid, 0.0, depth).force(liquid);
    root(0.0, depth, |below| band(part, liquid, 0.0, below).force(liquid) - share * whole)
        .ok_or("no strip carries that share")
}
