//! What holds a cover: forces of bolts, latches, pins and hinge lines from the equilibrium of a
//! rigid cover, each worked out for a unit force and a unit moment.

use super::Figure;
use super::outline::Area;
use super::plane::{Flat, Straight};
use crate::tank::{Axis, BoltLine, Bolts, FirstBolt, Hatch, Hinged, Opens, Secured};
use std::f64::consts::TAU;

/// Forces under the estimate, the largest and the least.
pub(super) type Three = [Figure; 3];

/// The reactions of a cover on a hinge or pivot.
pub(super) struct Held {
    pub(super) moment: Three,
    pub(super) latch: Option<Three>,
    /// The lower pin first, or the hinge line.
    pub(super) pins: Vec<Three>,
}

/// Weight of a cover along its normal, outward, N; and whether it was weighed.
pub(crate) fn weight_n(hatch: &Hatch, gravity_m_s2: f64) -> Option<(f64, bool)> {
    let mass = hatch.mass?.value;
    let slope = hatch.sealed.slope_deg;
    // An upright cover hangs in its own plane.
    let along = if (slope - 90.0).abs() < 1e-9 { 0.0 } else { slope.to_radians().cos() };
    Some((mass.kg * gravity_m_s2 * along, mass.measured))
}

/// A reaction with the weight of the cover, which acts at the centroid. Where it relieves, it
/// counts only when it was weighed.
fn with_weight(flat: &Flat<'_>, weighting: Straight, hatch: &Hatch, gravity_m_s2: f64) -> Three {
    let mut found = flat.load(weighting);
    let Some((weight_n, weighed)) = weight_n(hatch, gravity_m_s2) else { return found };
    let added = weighting.alpha * weight_n;
    for (place, figure) in found.iter_mut().enumerate() {
        let adds = if place == 2 { added < 0.0 } else { added > 0.0 };
        if adds || weighed {
            figure.value += added;
            figure.allowed += 2e-6 * added.abs();
        }
    }
    found
}

/// Places of the bolts up the slope from the middle.
fn places(bolts: &Bolts) -> Vec<f64> {
    let astride = match bolts.first {
        FirstBolt::Lowest => 0.0,
        FirstBolt::Astride => 0.5,
    };
    let turns = (0..bolts.count).map(|one| (f64::from(one) + astride) / f64::from(bolts.count));
    match bolts.line {
        BoltLine::Circle { diameter_m } => {
            turns.map(|turn| -0.5 * diameter_m * (TAU * turn).cos()).collect()
        }
        BoltLine::Rectangle { width_m, length_m } => {
            turns.map(|turn| around(turn, width_m, length_m)).collect()
        }
    }
}

/// Walks a share of the way around a rectangle, from the middle of its lower side.
fn around(turn: f64, width_m: f64, length_m: f64) -> f64 {
    let half = 0.5 * length_m;
    // Where each side ends, counted along the way.
    let right = 0.5 * width_m;
    let up = right + length_m;
    let across = up + width_m;
    let down = across + length_m;
    match turn * 2.0 * (width_m + length_m) {
        way if way <= right => -half,
        way if way <= up => way - right - half,
        way if way <= across => half,
        way if way <= down => half - (way - across),
        _ => -half,
    }
}

/// Share of each bolt, the places given: forces that grow evenly along the slope and balance force
/// and moment.
fn shares(places: &[f64]) -> impl Iterator<Item = Straight> + '_ {
    let count: f64 = places.iter().map(|_| 1.0).sum();
    let first: f64 = places.iter().sum();
    let second: f64 = places.iter().map(|s| s * s).sum();
    let determinant = count * second - first * first;
    // [count, first; first, second] [a; b] = [F; M], a bolt at s carries a + b s.
    places.iter().map(move |s| Straight {
        alpha: (second - first * s) / determinant,
        beta: (count * s - first) / determinant,
    })
}

/// The largest bolt of the estimate, the largest and the least of any.
pub(super) fn bolts(
    flat: &Flat<'_>,
    bolts: &Bolts,
    hatch: &Hatch,
    gravity_m_s2: f64,
) -> Option<Three> {
    let places = places(bolts);
    let each = shares(&places).map(|share| with_weight(flat, share, hatch, gravity_m_s2));
    each.reduce(|[a, b, c], [d, e, f]| [a.larger(d), b.larger(e), c.smaller(f)])
}

/// What turns and what holds a cover on a hinge or pivot.
struct Turning {
    moment: Straight,
    pins: Vec<Straight>,
    /// Force of the latch that carries most, per moment; none without a latch.
    latch: Option<f64>,
}

/// Latches carry in proportion to their levers.
fn turning(hinged: &Hinged, hatch: &Hatch) -> Turning {
    let area = Area::new(&hatch.sealed);
    let sine = area.sine;
    let levers: Vec<f64> = hinged.levers_m(sine).collect();
    let squares: f64 = levers.iter().map(|lever| lever * lever).sum();
    // Of all latches together, per moment.
    let all = match levers.as_slice() {
        [] => 0.0,
        some => some.iter().map(|lever| lever.abs()).sum::<f64>() / squares,
    };
    let (moment, pins) = match hinged.axis {
        Axis::Side { offset_m, pins_m } => {
            let arm = 0.5 * hatch.opening.shape.width_m() + offset_m;
            let heights = |height_m: f64| (height_m - hatch.sealed.heights.centre_m) / sine;
            let pins = match pins_m {
                None => vec![Straight { alpha: 1.0 - arm * all, beta: 0.0 }],
                Some(pins_m) => {
                    let latches = hinged.latches.iter().zip(&levers);
                    let turned = latches.filter_map(|(latch, lever)| {
                        latch.height_m.map(|at| lever / squares * heights(at))
                    });
                    two_pins(pins_m.map(heights), arm * all, arm * turned.sum::<f64>())
                }
            };
            (Straight { alpha: arm, beta: 0.0 }, pins)
        }
        axis => {
            let moment = about_level_line(axis, &levers, sine, hatch);
            let line = Straight { alpha: 1.0 - all * moment.alpha, beta: -all * moment.beta };
            (moment, vec![line])
        }
    };
    let longest = levers.iter().map(|lever| lever.abs()).reduce(f64::max);
    Turning { moment, pins, latch: longest.map(|longest| longest / squares) }
}

/// Reactions of a cover on a hinge or pivot.
pub(super) fn hinged(flat: &Flat<'_>, hinged: &Hinged, hatch: &Hatch, gravity_m_s2: f64) -> Held {
    let Turning { moment, pins, latch } = turning(hinged, hatch);
    let moment = with_weight(flat, moment, hatch, gravity_m_s2);
    let seat = Seat::of(hatch, &moment);
    let latch = latch.map(|per_moment| moment.map(|one| seat.latch(one).times(per_moment)));
    let even = flat.area.sine == 0.0;
    let pins = pins.into_iter().map(|pin| with_weight(flat, pin, hatch, gravity_m_s2));
    let pins = pins.map(|pin| seat.pin(pin, even)).collect();
    Held { moment, latch, pins }
}

/// A reaction `alpha F + beta M_c` by its two numbers.
pub(crate) struct Reaction {
    pub(crate) label: &'static str,
    pub(crate) alpha: f64,
    /// 1/m of a force, a pure number of a moment.
    pub(crate) beta: f64,
    pub(crate) is_moment: bool,
}

/// Every reaction of a cover: of bolts the lowest and the highest, which alone can carry most.
pub(crate) fn reactions(hatch: &Hatch) -> Vec<Reaction> {
    let level = hatch.sealed.is_level();
    let of = |label, Straight { alpha, beta }, is_moment| Reaction {
        label,
        alpha,
        // An even pressure turns nothing about the centroid.
        beta: if level { 0.0 } else { beta },
        is_moment,
    };
    match hatch.secured.as_ref().map(|secured| &secured.value) {
        None => Vec::new(),
        Some(Secured::Bolts(bolts)) => {
            let all = places(bolts);
            let lowest = all.iter().copied().fold(f64::INFINITY, f64::min);
            let highest = all.iter().copied().fold(f64::NEG_INFINITY, f64::max);
            let at = |place: f64| {
                let mut each = all.iter().zip(shares(&all));
                each.find(|(one, _)| one.total_cmp(&place).is_eq()).map(|(_, share)| share)
            };
            let pair = [("lowest bolt", at(lowest)), ("highest bolt", at(highest))];
            let found =
                pair.into_iter().filter_map(|(label, share)| Some(of(label, share?, false)));
            found.collect()
        }
        Some(Secured::Hinged(hinged)) => {
            let Turning { moment, pins, latch } = turning(hinged, hatch);
            let about =
                if hatch.pivots() { "moment about the pivot" } else { "moment about the hinge" };
            let mut found = vec![of(about, moment, true)];
            if let Some(per_moment) = latch {
                let Straight { alpha, beta } = moment;
                let share = Straight { alpha: alpha * per_moment, beta: beta * per_moment };
                found.push(of("latch, largest share", share, false));
            }
            let names: &[&'static str] = match pins.len() {
                2 => &["lower pin", "upper pin"],
                _ if hatch.pivots() => &["pivot"],
                _ => &["hinge line"],
            };
            found.extend(names.iter().zip(pins).map(|(name, pin)| of(name, pin, false)));
            found
        }
    }
}

/// The moment about a level hinge or pivot, positive when it opens.
fn about_level_line(axis: Axis, levers: &[f64], sine: f64, hatch: &Hatch) -> Straight {
    let opening = &hatch.opening;
    // Opening and gasket line share their centroid.
    let foot = Area::new(opening).centroid_m;
    match axis {
        Axis::Bottom { offset_m } => Straight { alpha: foot + offset_m, beta: 1.0 },
        Axis::Pivot { height_m } => {
            let pivot = (height_m.value - hatch.sealed.heights.centre_m) / sine;
            let lower = levers.first().is_some_and(|lever| *lever < 0.0);
            if lower {
                Straight { alpha: pivot, beta: -1.0 }
            } else {
                Straight { alpha: -pivot, beta: 1.0 }
            }
        }
        Axis::Top { offset_m } | Axis::Side { offset_m, .. } => {
            let head = Area::new(opening).length_m - foot;
            Straight { alpha: head + offset_m, beta: -1.0 }
        }
    }
}

/// Two pins that carry what the latches leave, and its moment.
fn two_pins([lower, upper]: [f64; 2], latches: f64, turned: f64) -> Vec<Straight> {
    // R_l + R_u = (1 - latches) F and R_l s_l + R_u s_u = M - turned F.
    let solve = |force: f64, moment: f64| {
        let upper_share = (moment - lower * force) / (upper - lower);
        [force - upper_share, upper_share]
    };
    let (force, moment) = (solve(1.0 - latches, -turned), solve(0.0, 1.0));
    let pins = force.into_iter().zip(moment);
    pins.map(|(alpha, beta)| Straight { alpha, beta }).collect()
}

/// A cover that the load presses on its seat hangs on nothing.
struct Seat {
    /// The sign of a moment that lifts it; zero about a pivot, which has no seat.
    lifts: f64,
    lifted: [bool; 3],
}

impl Seat {
    fn of(hatch: &Hatch, moment: &Three) -> Self {
        let lifts = match hatch.opens.value {
            _ if hatch.pivots() => 0.0,
            Opens::Outward => 1.0,
            Opens::Inward => -1.0,
        };
        Self { lifts, lifted: moment.map(|one| lifts == 0.0 || one.value * lifts > 0.0) }
    }

    fn latch(&self, figure: Figure) -> Figure {
        let pulls = self.lifts == 0.0 || figure.value * self.lifts > 0.0;
        if pulls { figure } else { Figure { value: 0.0, ..figure } }
    }

    fn pin(&self, pin: Three, even: bool) -> Three {
        if even {
            return pin.map(|one| self.latch(one));
        }
        let [estimate, most, least] = pin;
        let [now, high, low] = self.lifted;
        let nothing = |figure: Figure| Figure { value: 0.0, ..figure };
        let estimate = if now { estimate } else { nothing(estimate) };
        match (high, low) {
            (true, true) => [estimate, most, least],
            (false, false) => [estimate, nothing(most), nothing(least)],
            _ => [estimate, most.larger(nothing(most)), least.smaller(nothing(least))],
        }
    }
}
