//! The pressure over the height, and beside it how far the bounds lie from the estimate.

use super::Context;
use super::html::Html;
use super::second::Profiles;
use crate::tank::Part;
use crate::units::{Quantity, UnitSystem};

/// Size of the drawing, mm.
const WIDTH: f64 = 174.0;
const HEIGHT: f64 = 92.0;
/// Lower end of both panels, their height and the room left of each.
const FLOOR: f64 = 78.0;
const TALL: f64 = 70.0;
const LEFT: [f64; 2] = [16.0, 112.0];
const BROAD: [f64; 2] = [82.0, 56.0];

/// A linear scale from a quantity to the drawing.
#[derive(Clone, Copy, Debug)]
pub(super) struct Axis {
    from: f64,
    to: f64,
    at: f64,
    length: f64,
}

impl Axis {
    pub(super) const fn new([from, to]: [f64; 2], at: f64, length: f64) -> Self {
        Self { from, to, at, length }
    }

    pub(super) const fn low(&self) -> f64 {
        self.from
    }

    pub(super) const fn high(&self) -> f64 {
        self.to
    }

    pub(super) fn place(&self, value: f64) -> f64 {
        self.at + self.length * (value - self.from) / (self.to - self.from)
    }

    /// Round values along it, some `count` of them.
    pub(super) fn ticks(&self, count: f64) -> Vec<f64> {
        let step = round_step((self.to - self.from) / count);
        let first = (self.from / step - 1e-9).ceil();
        let mut found = Vec::new();
        let mut number = first;
        while number * step <= self.to + 1e-9 * step {
            found.push(number * step);
            number += 1.0;
        }
        found
    }
}

/// The next of 1, 2, 5 times a power of ten.
fn round_step(at_least: f64) -> f64 {
    let power = 10_f64.powf(at_least.abs().max(1e-12).log10().floor());
    let steps = [1.0, 2.0, 5.0, 10.0].map(|one| one * power);
    steps.into_iter().find(|step| *step >= at_least * (1.0 - 1e-9)).unwrap_or(10.0 * power)
}

/// A number on an axis.
pub(super) fn tick(value: f64) -> String {
    let text = format!("{value:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

/// A place in the drawing, to a hundredth of a millimetre.
pub(super) fn mm(value: f64) -> String {
    format!("{value:.2}")
}

pub(super) fn line(html: &mut Html, from: [f64; 2], to: [f64; 2], stroke: &str, width: f64) {
    let [x1, y1, x2, y2, width] = [from[0], from[1], to[0], to[1], width].map(mm);
    let place = [("x1", x1.as_str()), ("y1", &y1), ("x2", &x2), ("y2", &y2)];
    let look = [("stroke", stroke), ("stroke-width", width.as_str())];
    html.empty("line", &[&place[..], &look[..]].concat());
}

pub(super) fn label(html: &mut Html, [x, y]: [f64; 2], anchor: &str, text: &str) {
    let [x, y] = [x, y].map(mm);
    let attributes = [("x", x.as_str()), ("y", &y), ("text-anchor", anchor), ("font-size", "2.9")];
    html.element("text", &attributes, text);
}

/// Units on the axes: height and pressure, each with what one of it is in SI.
pub(super) const fn axes(units: UnitSystem) -> [(&'static str, f64); 2] {
    match units {
        UnitSystem::Si => [("m", 1.0), ("kPa", 1e3)],
        UnitSystem::UsCustomary => [("ft", 0.3048), ("psi", 6_894.757_293_168)],
    }
}

/// The three curves, each as heights and pressures in the units of the axes.
struct Curves {
    heights: Vec<f64>,
    estimate: Vec<f64>,
    upper: Vec<f64>,
    lower: Vec<f64>,
}

impl Curves {
    fn new(context: &Context<'_>, profiles: &Profiles) -> Self {
        let [(_, metre), (_, pascal)] = axes(context.units);
        let [low, high] = heights_m(context, profiles);
        let mut heights = profiles.kinks();
        heights.retain(|z| (low..=high).contains(z));
        heights.extend([low, high]);
        heights.sort_by(f64::total_cmp);
        let of = |which: usize| -> Vec<f64> {
            heights.iter().map(|&z| profiles.all()[which].at(z) / pascal).collect()
        };
        let (estimate, upper, lower) = (of(0), of(1), of(2));
        let heights = heights.iter().map(|z| z / metre).collect();
        Self { heights, estimate, upper, lower }
    }

    fn points(&self, curve: &[f64], x: Axis, z: Axis) -> String {
        let each = self.heights.iter().zip(curve);
        let each = each.map(|(height, p)| format!("{},{}", mm(x.place(*p)), mm(z.place(*height))));
        each.collect::<Vec<_>>().join(" ")
    }
}

/// From the lowest part or the floor to above the highest surface.
pub(super) fn heights_m(context: &Context<'_>, profiles: &Profiles) -> [f64; 2] {
    let parts = context.file.parts.iter().map(Part::heights);
    let low = parts.clone().map(|heights| heights.bottom_m).fold(0.0, f64::min);
    let tops = parts.map(|heights| heights.top_m);
    let fill = context.file.fill.overflow_m.map(|level| level.value);
    let high = tops
        .chain(context.file.vessel.height_m())
        .chain(fill)
        .chain([context.request.level_m])
        .chain(profiles.estimate.kinks())
        .fold(low + 0.1, f64::max);
    [low, high]
}

fn extent<'a>(curves: impl IntoIterator<Item = &'a f64>) -> [f64; 2] {
    let [low, high] =
        curves.into_iter().fold([0.0_f64, 0.0_f64], |[low, high], &p| [low.min(p), high.max(p)]);
    if high - low > 0.0 { [low, high] } else { [0.0, 1.0] }
}

pub(super) fn pressure(context: &Context<'_>, profiles: &Profiles) -> String {
    let [(height_unit, metre), (pressure_unit, _)] = axes(context.units);
    let curves = Curves::new(context, profiles);
    let [low, high] = heights_m(context, profiles).map(|z| z / metre);
    let z = Axis::new([low, high], FLOOR, -TALL);
    let mut html = Html::default();
    let view = format!("0 0 {WIDTH} {HEIGHT}");
    let (width, height) = (format!("{WIDTH}mm"), format!("{HEIGHT}mm"));
    let size = [("width", width.as_str()), ("height", &height), ("viewBox", &view)];
    let role = [("role", "img"), ("aria-label", "pressure over height with its bounds")];
    html.open("svg", &[&size[..], &role[..]].concat());
    let level = context.request.level_m / metre;
    let all = curves.estimate.iter().chain(&curves.upper).chain(&curves.lower);
    let first = Axis::new(extent(all), LEFT[0], BROAD[0]);
    let off = |bound: &[f64]| -> Vec<f64> {
        bound.iter().zip(&curves.estimate).map(|(bound, estimate)| bound - estimate).collect()
    };
    let (above, below) = (off(&curves.upper), off(&curves.lower));
    let second = Axis::new(extent(above.iter().chain(&below)), LEFT[1], BROAD[1]);
    let names = [format!("p, {pressure_unit}"), format!("bound less estimate, {pressure_unit}")];
    for (axis, name) in [first, second].into_iter().zip(&names) {
        panel(&mut html, axis, z, name, &format!("z, {height_unit}"));
        let y = z.place(level);
        let dashed = [("stroke-dasharray", "0.6 1.2")];
        let ends = [axis.at, y, axis.at + axis.length, y].map(mm);
        let place = [("x1", &ends[0]), ("y1", &ends[1]), ("x2", &ends[2]), ("y2", &ends[3])];
        let place = place.map(|(name, value)| (name, value.as_str()));
        let look = [("stroke", "#1f5fa8"), ("stroke-width", "0.35")];
        html.empty("line", &[&place[..], &look[..], &dashed[..]].concat());
    }
    let right = first.at + first.length;
    let text = format!("level {}", context.show(context.request.level_m, Quantity::Length));
    label(&mut html, [right, z.place(level) - 1.0], "end", &text);
    let curve = |html: &mut Html, points: &str, dash: &str, width: &str| {
        let look = [("fill", "none"), ("stroke", "#111"), ("stroke-width", width)];
        let more = [("points", points), ("stroke-dasharray", dash)];
        html.empty("polyline", &[&look[..], &more[..]].concat());
    };
    for bound in [&curves.upper, &curves.lower] {
        curve(&mut html, &curves.points(bound, first, z), "1.6 1.1", "0.35");
    }
    curve(&mut html, &curves.points(&curves.estimate, first, z), "none", "0.5");
    for bound in [&above, &below] {
        curve(&mut html, &curves.points(bound, second, z), "1.6 1.1", "0.4");
    }
    html.into_text()
}

/// Frame, ticks and names of one panel.
fn panel(html: &mut Html, x: Axis, z: Axis, name: &str, height: &str) {
    let (top, bottom) = (z.at + z.length, z.at);
    for value in z.ticks(7.0) {
        let y = z.place(value);
        line(html, [x.at, y], [x.at + x.length, y], "#ddd", 0.15);
        label(html, [x.at - 1.2, y + 1.0], "end", &tick(value));
    }
    for value in x.ticks(5.0) {
        let at = x.place(value);
        line(html, [at, top], [at, bottom], "#ddd", 0.15);
        label(html, [at, bottom + 3.8], "middle", &tick(value));
    }
    line(html, [x.at, bottom], [x.at + x.length, bottom], "#111", 0.3);
    let zero = x.place(0.0);
    line(html, [zero, top], [zero, bottom], "#111", 0.3);
    label(html, [x.at + 0.5 * x.length, bottom + 8.0], "middle", name);
    label(html, [x.at - 1.2, top - 2.6], "end", height);
}
