//! Parts known only by the state they were designed for.

use crate::cases::problem::DesignedForAsk;
use crate::cases::{Answer, Reason};
use crate::limit::{Limit, limit_level, root};
use crate::liquid::{Liquid, Pressure};
use crate::plane::PlanePart;
use crate::shape::Shape;

pub(super) fn answer(
    design: &Liquid,
    now: &Liquid,
    edges: (f64, f64),
    ask: DesignedForAsk,
) -> Result<Answer, Reason> {
    let (low, high) = edges;
    let wall = PlanePart::new(Shape::Rectangle { width: 1.0, length: high - low }, low, 90.0);
    let at = |level: f64| now.clone().filled_to(level);
    let level_of = |load: &dyn Fn(&Liquid) -> f64| {
        let due = load(design);
        let found = root(low, low + 100.0, |level| load(&at(level)) - due);
        found.map(Answer::Number).ok_or("no level gives the design load")
    };
    match ask {
        DesignedForAsk::LimitByForce => level_of(&|state| wall.force(state)),
        DesignedForAsk::LimitByMoment => level_of(&|state| wall.moment(state, 0.0)),
        DesignedForAsk::LargestRatio => Ok(Answer::Number(largest_ratio(design, now, edges))),
        DesignedForAsk::LimitByPressure => {
            let scale = design.at(low).abs();
            let use_of = |level: f64| 1.0 + largest_excess(design, &at(level), edges) / scale;
            Ok(match limit_level(low, low + 100.0, 2_000, use_of) {
                Limit::Level(level) => Answer::Number(level),
                Limit::None => Answer::Text("none".to_owned()),
                Limit::Beyond => return Err("no limit in range"),
            })
        }
    }
}

/// Heights between which both pressures are linear: there an excess is largest, and a ratio too.
fn heights(design: &Liquid, now: &Liquid, (low, high): (f64, f64)) -> Vec<f64> {
    let kinks = design.kinks().into_iter().chain(now.kinks());
    kinks.filter(|z| low < *z && *z < high).chain([low, high]).collect()
}

fn largest_excess(design: &Liquid, now: &Liquid, edges: (f64, f64)) -> f64 {
    let excess = |z: f64| now.at(z) - design.at(z);
    heights(design, now, edges).into_iter().map(excess).fold(f64::NEG_INFINITY, f64::max)
}

fn largest_ratio(design: &Liquid, now: &Liquid, edges: (f64, f64)) -> f64 {
    let heights = heights(design, now, edges).into_iter();
    let pressed = heights.filter(|z| design.at(*z) > 0.0);
    pressed.map(|z| now.at(z) / design.at(z)).fold(0.0, f64::max)
}
