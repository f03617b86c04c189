//! A random cover, as a tank file states it and as statics sees it.

use super::Straight;
use crate::core_engine::narrow;
use crate::product::file::{Tank, outline};
use std::f64::consts::TAU;
use std::fmt::Write as _;
use strake_oracle::liquid::Liquid;
use strake_oracle::random::Random;
use strake_oracle::securing::{bolt_circle, bolt_shares};
use strake_oracle::shape::Shape;

/// A cover.
pub(super) struct Drawn {
    /// Its `[[hatch]]`.
    pub text: String,
    /// The outline of its gasket line.
    pub sealed: Shape,
    pub slope_deg: f64,
    pub holding: Holding,
    /// Weight along the outward normal, N, and whether it may relieve.
    pub weight_n: f64,
    pub weighed: bool,
}

/// What holds it; places are taken from the centroid, s up the slope.
#[derive(Clone, Debug)]
pub(super) enum Holding {
    /// Bolts at (x, s).
    Bolts(Vec<(f64, f64)>),
    /// A level line at `line_s`; `up` 1 where a positive moment opens what lies above it, else -1;
    /// levers of the latches.
    Line { line_s: f64, up: f64, levers: Vec<f64> },
    /// A line up the slope `arm` beside the centroid; latches by lever and s; pins by s.
    Side { arm: f64, latches: Vec<(f64, f64)>, pins: Option<[f64; 2]> },
}

/// One reaction or moment: forces with their place give it by statics.
pub(super) struct Reaction<'a> {
    of: Box<dyn Fn(f64, f64) -> f64 + 'a>,
}

impl<'a> Reaction<'a> {
    fn of(of: impl Fn(f64, f64) -> f64 + 'a) -> Self {
        Self { of: Box::new(of) }
    }

    /// Its weighting, from two unit forces.
    pub(super) fn straight(&self, centroid_s: f64) -> Straight {
        let at_centroid = (self.of)(1.0, 0.0);
        Straight { at_centroid, slope: (self.of)(1.0, 1.0) - at_centroid, centroid_s }
    }
}

impl Drawn {
    /// What the core computes of it, in the core's order: moment and both weightings, or of bolts
    /// the lowest and the highest. Each is a function of the force and the place of its line above
    /// the centroid.
    pub(super) fn reactions(&self) -> Vec<Reaction<'_>> {
        match &self.holding {
            Holding::Bolts(bolts) => {
                let by_height = |a: &usize, b: &usize| bolts[*a].1.total_cmp(&bolts[*b].1);
                let lowest = (0..bolts.len()).min_by(by_height).unwrap_or(0);
                let highest = (0..bolts.len()).max_by(by_height).unwrap_or(0);
                let of = |index: usize| {
                    Reaction::of(move |force, s| {
                        let shares = bolt_shares(bolts, force, 0.0, force * s);
                        shares.map_or(f64::NAN, |all| all[index])
                    })
                };
                vec![of(lowest), of(highest)]
            }
            Holding::Line { line_s, up, levers } => {
                let squares: f64 = levers.iter().map(|lever| lever * lever).sum();
                let moment = move |force: f64, s: f64| up * force * (s - line_s);
                // Latches turn with the cover: each in proportion to its lever.
                let latches = move |force: f64, s: f64| {
                    let turn = if squares > 0.0 { moment(force, s) / squares } else { 0.0 };
                    levers.iter().map(|lever| lever * turn).sum::<f64>()
                };
                vec![Reaction::of(moment), Reaction::of(move |force, s| force - latches(force, s))]
            }
            Holding::Side { arm, latches, pins } => {
                let squares: f64 = latches.iter().map(|(lever, _)| lever * lever).sum();
                let pulls = move |force: f64| {
                    latches.iter().map(move |(lever, s)| (arm * force * lever / squares, *s))
                };
                let left = move |force: f64| force - pulls(force).map(|one| one.0).sum::<f64>();
                let mut all = vec![Reaction::of(move |force, _| arm * force)];
                let Some([lower, upper]) = *pins else {
                    all.push(Reaction::of(move |force, _| left(force)));
                    return all;
                };
                // Moments about the level line through the other pin.
                let pin = move |at: f64, other: f64| {
                    Reaction::of(move |force, s| {
                        let of_latches: f64 =
                            pulls(force).map(|(pull, place)| pull * (place - other)).sum();
                        (force * (s - other) - of_latches) / (at - other)
                    })
                };
                all.push(pin(lower, upper));
                all.push(pin(upper, lower));
                all
            }
        }
    }
}

fn single(value: f64) -> f64 {
    f64::from(narrow(value))
}

/// An outline and the same, larger by a share.
fn outlines(random: &mut Random, middle: bool) -> [Shape; 2] {
    let (a, b) = (random.ratio_between(0.1, 4.0), random.ratio_between(0.1, 4.0));
    let top = a * random.between(0.3, 2.0);
    let larger = if random.one_in(4) { 1.0 } else { random.between(1.01, 1.3) };
    let kind = random.below(if middle { 4 } else { 6 });
    let apex_up = random.one_in(2);
    [1.0, larger].map(|by| {
        let [a, b, top] = [a, b, top].map(|side| single(by * side));
        match kind {
            0 => Shape::Circle { diameter: a },
            1 => Shape::Ellipse { width: a, length: b },
            2 => Shape::Obround { width: a, length: b },
            3 => Shape::Rectangle { width: a, length: b },
            4 => Shape::Triangle { base: a, height: b, apex_up },
            _ => Shape::Trapezoid { top, bottom: a, length: b },
        }
    })
}

/// Width, length and centroid above the lowest point.
fn sizes(shape: &Shape) -> (f64, f64, f64) {
    let (low, high) = shape.extent();
    let plane = strake_oracle::plane::PlanePart::new(shape.clone(), 0.0, 90.0);
    let width = match shape {
        Shape::Circle { diameter } => *diameter,
        Shape::Ellipse { width, .. }
        | Shape::Obround { width, .. }
        | Shape::Rectangle { width, .. } => *width,
        Shape::Triangle { base, .. } => *base,
        Shape::Trapezoid { top, bottom, .. } => top.max(*bottom),
        Shape::HalfDisc { .. } | Shape::Polygon { .. } => f64::NAN,
    };
    (width, high - low, plane.centroid().1 - low)
}

/// A random cover about a height.
pub(super) fn cover(random: &mut Random, index: usize, near_m: f64) -> Drawn {
    let bolted = random.one_in(3);
    let [opening, sealed] = outlines(random, bolted);
    let slope_deg = match random.below(6) {
        0..=2 => 90.0,
        3 => [0.0, 180.0][random.below(2) as usize],
        _ => single(random.between(5.0, 175.0)),
    };
    let sine = slope_deg.to_radians().sin();
    let level = !(1.0..=179.0).contains(&slope_deg);
    let centre = single(near_m + random.between(-1.0, 2.0));
    let (text, holding) = if bolted {
        bolts(random, sizes(&opening))
    } else {
        let place = Place { centre, sine, level };
        hinged(random, sizes(&opening), &place)
    };
    let mut all = format!(
        "[[hatch]]\nname = \"cover {index}\"\nshape = {}\nsealed_to = {}\ncentre = \"{centre:?} m\"\n\
         slope = \"{slope_deg:?} deg\"\nopens = \"{}\"\nsecured = {text}\n\
         capacity = [ {{ none = \"loads only\" }} ]\n",
        outline(&opening).expect("an outline of a file"),
        outline(&sealed).expect("an outline of a file"),
        ["outward", "inward"][random.below(2) as usize],
    );
    let (mut weight_n, mut weighed) = (0.0, false);
    if random.one_in(3) {
        let mass = single(random.between(1.0, 400.0));
        weighed = random.one_in(2);
        let upright = (slope_deg - 90.0).abs() < 1e-9;
        let share = if upright { 0.0 } else { slope_deg.to_radians().cos() };
        weight_n = mass * f64::from(narrow(9.806_65)) * share;
        let _ = if weighed {
            let basis = "surveyed 2026-04";
            writeln!(all, "cover_mass = {{ mass = \"{mass:?} kg\", basis = \"{basis}\" }}")
        } else {
            writeln!(all, "cover_mass = \"{mass:?} kg\"")
        };
    }
    Drawn { text: all, sealed, slope_deg, holding, weight_n, weighed }
}

fn bolts(random: &mut Random, (width, length, _): (f64, f64, f64)) -> (String, Holding) {
    let count = 3 + random.below(38);
    let astride = random.one_in(2);
    let first = if astride { "astride" } else { "lowest" };
    let wider = random.between(1.02, 1.5);
    if random.one_in(2) {
        let diameter = single(wider * width.hypot(length));
        let text = format!(
            "{{ bolts = {count}, bolt_circle_diameter = \"{diameter:?} m\", first_bolt = \"{first}\" }}"
        );
        return (text, Holding::Bolts(bolt_circle(count, diameter, (0.0, 0.0), astride)));
    }
    let (w, l) = (single(wider * width), single(wider * length));
    let text = format!(
        "{{ bolts = {count}, bolt_rectangle = {{ width = \"{w:?} m\", length = \"{l:?} m\" }}, \
         first_bolt = \"{first}\" }}"
    );
    (text, Holding::Bolts(along_rectangle(count, (w, l), astride)))
}

/// Evenly along the line, from the middle of the lower side to the right and round.
fn along_rectangle(count: u32, (w, l): (f64, f64), astride: bool) -> Vec<(f64, f64)> {
    let line = 2.0 * (w + l);
    let start = if astride { 0.5 } else { 0.0 };
    let place = |along: f64| match along {
        a if a <= 0.5 * w => (a, -0.5 * l),
        a if a <= 0.5 * w + l => (0.5 * w, a - 0.5 * w - 0.5 * l),
        a if a <= 1.5 * w + l => (0.5 * w - (a - 0.5 * w - l), 0.5 * l),
        a if a <= 1.5 * w + 2.0 * l => (-0.5 * w, 0.5 * l - (a - 1.5 * w - l)),
        a => (a - line, -0.5 * l),
    };
    (0..count).map(|i| place(line * (start + f64::from(i)) / f64::from(count))).collect()
}

/// Where a cover stands.
struct Place {
    centre: f64,
    sine: f64,
    level: bool,
}

fn quoted(values: &[f64]) -> String {
    let all: Vec<String> = values.iter().map(|value| format!("\"{value:?} m\"")).collect();
    format!("[{}]", all.join(", "))
}

fn hinged(
    random: &mut Random,
    (width, length, below): (f64, f64, f64),
    place: &Place,
) -> (String, Holding) {
    let above = length - below;
    let offset = if random.one_in(3) { 0.0 } else { single(length * random.between(0.0, 0.3)) };
    let count = 1 + random.below(3);
    let kind = random.below(if place.level { 3 } else { 5 });
    let across = if kind == 2 || kind == 3 { width } else { length };
    let levers: Vec<f64> = (0..count)
        .map(|_| {
            // The far end is a place of its own.
            let share = if random.one_in(3) { 1.0 } else { random.between(0.3, 1.2) };
            single(offset + across * share)
        })
        .collect();
    let latch_at = quoted(&levers);
    let up_to = |height: f64| (height - place.centre) / place.sine;
    match kind {
        0 | 1 => {
            let top = kind == 0;
            let (edge, line_s, up) = if top {
                ("top", above + offset, -1.0)
            } else {
                ("bottom", -(below + offset), 1.0)
            };
            let text = format!(
                "{{ hinge = \"{edge}\", offset = \"{offset:?} m\", latch_at = {latch_at} }}"
            );
            (text, Holding::Line { line_s, up, levers })
        }
        2 => {
            let text =
                format!("{{ hinge = \"side\", offset = \"{offset:?} m\", latch_at = {latch_at} }}");
            let latches = levers.into_iter().map(|lever| (lever, 0.0)).collect();
            (text, Holding::Side { arm: 0.5 * width + offset, latches, pins: None })
        }
        3 => {
            let mut at = |share: f64| {
                single(place.centre + place.sine * length * random.between(share - 0.2, share))
            };
            let pins = [at(-0.1), at(0.6)];
            let heights: Vec<f64> = levers.iter().map(|_| at(0.3)).collect();
            let text = format!(
                "{{ hinge = \"side\", offset = \"{offset:?} m\", pins = {}, latch_at = {latch_at}, \
                 latch_height = {} }}",
                quoted(&pins),
                quoted(&heights)
            );
            let latches = levers.into_iter().zip(heights.into_iter().map(up_to)).collect();
            let pins = Some(pins.map(up_to));
            (text, Holding::Side { arm: 0.5 * width + offset, latches, pins })
        }
        _ => pivot(random, (below, above), place),
    }
}

fn pivot(random: &mut Random, (below, above): (f64, f64), place: &Place) -> (String, Holding) {
    let at = |share: f64| {
        let s = if share < 0.0 { share * below } else { share * above };
        single(place.centre + place.sine * s)
    };
    let share = random.between(-0.8, 0.8);
    let height = at(share);
    let count = random.below(3);
    let over = random.one_in(2);
    let latches: Vec<f64> = (0..count)
        .map(|_| at(if over { random.between(0.85, 1.3) } else { random.between(-1.3, -0.85) }))
        .collect();
    let up_to = |height: f64| (height - place.centre) / place.sine;
    let line_s = up_to(height);
    let up = if latches.is_empty() || over { 1.0 } else { -1.0 };
    let levers = latches.iter().map(|latch| (up_to(*latch) - line_s).abs()).collect();
    let text = if latches.is_empty() {
        format!("{{ pivot = \"{height:?} m\" }}")
    } else {
        format!("{{ pivot = \"{height:?} m\", latch_height = {} }}", quoted(&latches))
    };
    (text, Holding::Line { line_s, up, levers })
}

/// A hinge along one edge and a latch at the other: the weighting of the hinge line is zero at the
/// very end of the cover, where rounding puts it on either side.
#[test]
fn a_latch_at_the_far_edge_is_taken() {
    let mut random = Random::new(3);
    for _ in 0..400 {
        let mut text = String::new();
        for index in 0..super::TOGETHER {
            let [_, shape] = outlines(&mut random, false);
            let (_, length, _) = sizes(&shape);
            let shape = outline(&shape).expect("an outline of a file");
            let edge = ["top", "bottom"][random.below(2) as usize];
            let _ = writeln!(
                text,
                "[[hatch]]\nname = \"cover {index}\"\nshape = {shape}\nsealed_to = {shape}\n\
                 centre = \"{:?} m\"\nslope = \"{:?} deg\"\nopens = \"outward\"\n\
                 secured = {{ hinge = \"{edge}\", offset = \"0 m\", latch_at = \"{length:?} m\" }}\n\
                 capacity = [ {{ none = \"loads only\" }} ]",
                single(random.between(0.0, 9.0)),
                single(random.between(5.0, 175.0)),
            );
        }
        let tank = Tank::of(&Liquid::uniform(1000.0, 0.0), text);
        assert_eq!(tank.desk().plan().parts.len(), super::TOGETHER);
    }
}

/// Bolts along a rectangle go round once.
#[test]
fn bolts_go_round_once() {
    let bolts = along_rectangle(40, (2.0, 1.0), false);
    let turn: f64 = (0..40)
        .map(|i| {
            let ((x, s), (to_x, to_s)) = (bolts[i], bolts[(i + 1) % 40]);
            (x * to_s - s * to_x).atan2(x * to_x + s * to_s)
        })
        .sum();
    assert!((turn - TAU).abs() < 1e-9, "{turn}");
    assert!(bolts.iter().map(|bolt| bolt.1).sum::<f64>().abs() < 1e-9);
}
