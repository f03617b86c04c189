//! Arcs about a level axis.
//!
//! With `v` the height above the axis, `dA_x/dz` is the length of the part and `dA_z/dz` is that
//! times `|v| / sqrt(R² - v²)`: a root near the lowest and the highest line.

use super::fit::{even, prism, root, unit_integral};
use super::{ExactRow, Table};
use std::f64::consts::FRAC_PI_2;
use strake_core::part::curved::RowKind;

/// Share of the radius that a root row covers at most.
const ROOT: f64 = 0.25;
/// Growth of the distance from the level line over one row.
const GROWTH: f64 = 1.42;
/// Levels at which the error is measured.
const LEVELS: u16 = 512;

/// An arc of `radius_m` and `length_m` between two angles from the horizontal, counter-clockwise,
/// x along angle 0; heights count from its lowest point.
///
/// The force along x is exact. The error of the upward force is measured here and stated in the
/// table: 3e-6 or less between quarter turns, up to 1.5e-4 where an end lies close to one.
#[must_use]
pub fn arc(radius_m: f64, length_m: f64, from_deg: f64, to_deg: f64, inside: bool) -> Table {
    let quarters = quarters(from_deg, to_deg);
    let height = |angle: f64| radius_m * sine(angle);
    let ends = quarters.iter().flat_map(|&(a, b)| [height(a), height(b)]);
    let low = ends.clone().fold(f64::INFINITY, f64::min);
    let high = ends.fold(f64::NEG_INFINITY, f64::max);
    let away = if inside { 1.0 } else { -1.0 };
    let mut table = Table { rise_m: high - low, ..Table::default() };
    for (a, b) in quarters {
        let middle = (0.5 * (a + b)).to_radians();
        let (bottom, top) = (height(a).min(height(b)), height(a).max(height(b)));
        let across = away * length_m * middle.cos().signum();
        join(&mut table.rows[0], [bottom - low, top - bottom, across, 0.0, 0.0]);
        let up = away * length_m * middle.sin().signum();
        table.rows[1].extend(lying(radius_m, [bottom, top], up, -low));
    }
    let [worst, scale] = error(&table, radius_m, low, from_deg, to_deg, away * length_m);
    table.error_m3 = worst;
    table.error = if scale > 0.0 { worst / scale } else { 0.0 };
    table
}

/// The arc cut at the quarter turns.
fn quarters(from_deg: f64, to_deg: f64) -> Vec<(f64, f64)> {
    let mut ends = vec![from_deg];
    let mut next = (from_deg / 90.0).floor() * 90.0 + 90.0;
    while next < to_deg - 1e-9 {
        if next > from_deg + 1e-9 {
            ends.push(next);
        }
        next += 90.0;
    }
    ends.push(to_deg);
    ends.windows(2).map(|pair| (pair[0], pair[1])).collect()
}

/// Exact at quarter turns.
fn sine(angle_deg: f64) -> f64 {
    let quarter = angle_deg / 90.0;
    if (quarter - quarter.round()).abs() < 1e-12 {
        return match quarter.round().rem_euclid(4.0) {
            turn if turn < 0.5 => 0.0,
            turn if turn < 1.5 => 1.0,
            turn if turn < 2.5 => 0.0,
            _ => -1.0,
        };
    }
    angle_deg.to_radians().sin()
}

/// A row on top of the one before it when both weigh the same.
fn join(rows: &mut Vec<ExactRow>, row: [f64; 5]) {
    for (_, before) in rows.iter_mut() {
        let [low, length, weight, ..] = *before;
        let same = (weight - row[2]).abs() <= 0.0;
        if same && (low + length - row[0]).abs() < 1e-12 {
            before[1] += row[1];
            return;
        }
        if same && (row[0] + row[1] - low).abs() < 1e-12 {
            before[0] = row[0];
            before[1] += row[1];
            return;
        }
    }
    rows.push((RowKind::Even, row));
}

/// Rows of the upward force on a piece between two heights from the axis, on one side of it.
fn lying(radius: f64, [bottom, top]: [f64; 2], weight: f64, shift: f64) -> Vec<ExactRow> {
    let below = top <= 0.0;
    // Distance from the level line at -R or R: from the nearer to the farther end.
    let (near, far) =
        if below { (bottom + radius, top + radius) } else { (radius - top, radius - bottom) };
    let w = |t: f64| weight * (radius - t) / (t * (2.0 * radius - t)).sqrt();
    let height = |t: f64| if below { t - radius + shift } else { radius - t + shift };
    let mut rows = Vec::new();
    let mut t = near;
    if near < 1e-12 * radius {
        let most = if below { far } else { 0.5 * far };
        let span = most.min(ROOT * radius);
        let smooth = |t: f64| weight * (radius - t) / (2.0 * radius - t).sqrt();
        rows.push(root(height(0.0), if below { span } else { -span }, smooth));
        t = span;
    }
    while t < far * (1.0 - 1e-12) {
        let left = (far / t).ln() / GROWTH.ln();
        let next = if left <= 1.0 { far } else { t * (far / t).powf(1.0 / left.ceil()) };
        let (low, length) = (height(t).min(height(next)), next - t);
        let at = |u: f64| w(if below { t + u * length } else { next - u * length });
        let moments = [0, 1, 2].map(|k| unit_integral(|u| at(u) * u.powi(k)));
        rows.push(even(low, length, moments));
        t = next;
    }
    rows
}

/// Largest error of the upward force, and the largest force when all rows count as positive, m³.
fn error(table: &Table, radius: f64, low: f64, from: f64, to: f64, weight: f64) -> [f64; 2] {
    // M_z = integral of the distance from the end, by the area under the circle.
    let area = |v: f64| {
        let u = (v / radius).clamp(-1.0, 1.0);
        0.5 * radius * radius * (u * (1.0 - u * u).sqrt() + u.asin() + FRAC_PI_2)
    };
    let chord = |v: f64| (radius * radius - v * v).max(0.0).sqrt();
    let mut worst = 0.0_f64;
    let mut scale = 0.0_f64;
    for level in 1..=LEVELS {
        let y = table.rise_m * f64::from(level) / f64::from(LEVELS);
        let (mut exact, mut all) = (0.0, 0.0);
        for (a, b) in quarters(from, to) {
            let ends = [radius * sine(a), radius * sine(b)];
            let (bottom, top) = (ends[0].min(ends[1]), ends[0].max(ends[1]));
            let h = y + low;
            let reached = h.clamp(bottom, top);
            // integral of (h - z) |dx|: of the widths between, and of the head above the top.
            let between = area(reached) - area(bottom);
            let moved = chord(reached) - chord(bottom);
            let under = between - chord(bottom) * (reached - bottom) + moved * (h - reached);
            let sign = (0.5 * (a + b)).to_radians().sin().signum();
            exact += sign * weight * under.abs();
            all += weight.abs() * under.abs();
        }
        worst = worst.max((prism(&table.rows[1], y) - exact).abs());
        scale = scale.max(all);
    }
    [worst, scale]
}
