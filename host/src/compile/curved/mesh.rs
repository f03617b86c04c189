//! Meshes as tables.
//!
//! A triangle presses along an axis with its projected area, spread over its height as a tent: from
//! nothing at its lowest corner straight to the middle one and straight back to nothing. The sum of
//! all tents, `w(z)`, is straight between the heights of two corners, so `M` is a cubic there. The
//! height is cut at these, and where `w` changes its sign, into **cells**; a row takes as many of
//! them as it can within the error aimed at. Each row keeps the integral and the first moment of
//! its cells, so that at its ends `M` is exact, and `W` always.

mod cells;

use super::fit::prism;
use super::{ExactRow, Table};
use crate::mesh::{Mesh, Point, Triangle, normal};
use cells::{Cell, Cells, row_of};

/// Largest error of a mesh's table, as a share of the force with the surface at its top.
pub const MESH_ERROR_MAX: f64 = 1e-3;
/// Rows of one force that are spent without need, and those that are spent on a rough surface.
const ROWS: [usize; 2] = [12, 24];
/// Errors aimed at first and last with the fewer rows.
const AIM: [f64; 2] = [1e-6, 1e-4];
/// Heights in each row at which the error is measured.
const HEIGHTS: u16 = 32;
/// A force along an axis below this share of the whole area is rounding.
const NOTHING: f64 = 1e-9;

/// A triangle by its projections.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Tent {
    /// Heights of its corners above the lowest point of the mesh, rising.
    corners_m: [f64; 3],
    /// Area projected along the axes, signed as the force of a pressure.
    area_m2: Point,
}

impl Tent {
    fn of(triangle: &Triangle, low_m: f64) -> Self {
        let mut corners_m = triangle.map(|corner| corner[2] - low_m);
        corners_m.sort_by(f64::total_cmp);
        // The normal points into the liquid, the force the other way.
        Self { corners_m, area_m2: normal(triangle).map(|twice| -0.5 * twice) }
    }

    /// Where all of it counts when it lies level.
    fn level_m(&self) -> Option<f64> {
        let [low, middle, high] = self.corners_m;
        (high - low < cells::LEVEL_M).then_some((low + middle + high) / 3.0)
    }

    /// `integral over z < h of (h - z) tent dz` of a tent with the integral 1.
    fn prism(&self, h: f64) -> f64 {
        let [low, _, high] = self.corners_m;
        if let Some(level_m) = self.level_m() {
            return (h - level_m).max(0.0);
        }
        if h <= low {
            return 0.0;
        }
        let [m0, m1, _] = self.moments(low, h.min(high), low);
        (h - low) * m0 - m1
    }

    /// `integral (z - origin)^k tent dz` from `from` to `to`, k from 0 to 2.
    fn moments(&self, from: f64, to: f64, origin: f64) -> [f64; 3] {
        let [low, middle, high] = self.corners_m;
        if let Some(level_m) = self.level_m() {
            let t = level_m - origin;
            let inside = from <= level_m && level_m < to;
            return if inside { [1.0, t, t * t] } else { [0.0; 3] };
        }
        let peak = 2.0 / (high - low);
        let mut sum = [0.0; 3];
        for (start, end, at_start, at_end) in [(low, middle, 0.0, peak), (middle, high, peak, 0.0)]
        {
            let (p, q) = (start.max(from), end.min(to));
            if q <= p {
                continue;
            }
            let at = |z: f64| at_start + (at_end - at_start) * (z - start) / (end - start);
            let (a, l, fp, fq) = (p - origin, q - p, at(p), at(q));
            let m0 = 0.5 * l * (fp + fq);
            let first = l * l * (fp / 6.0 + fq / 3.0);
            sum[0] += m0;
            sum[1] += a * m0 + first;
            sum[2] += a * a * m0 + 2.0 * a * first + l * l * l * (fp / 12.0 + fq / 4.0);
        }
        sum
    }
}

/// A mesh as a table: x along the mesh's own x axis.
///
/// The error is measured against the sum over all triangles and stated in the table; above
/// [`MESH_ERROR_MAX`] the table must not be used.
#[must_use]
pub fn mesh(mesh: &Mesh) -> Table {
    let [low_m, high_m] = mesh.heights_m();
    let rise_m = high_m - low_m;
    let tents: Vec<Tent> = mesh.triangles.iter().map(|one| Tent::of(one, low_m)).collect();
    let all = [0, 2].map(|axis| Cells::of(&tents, axis, rise_m).signed());
    let scale_m3 = all.iter().map(|cells| cells.weight_under(rise_m)).fold(0.0, f64::max);
    let rows = all.each_ref().map(|cells| rows(cells, scale_m3));
    let mut error_m3 = 0.0_f64;
    for (axis, rows) in [0, 2].into_iter().zip(&rows) {
        error_m3 = error_m3.max(error(&tents, axis, rows, rise_m));
    }
    let error = if scale_m3 > 0.0 { error_m3 / scale_m3 } else { 0.0 };
    Table { rows, rise_m, error, error_m3, ..Table::default() }
}

/// Force across, along the mesh's y axis, that its table leaves out: as a share of the area, zero
/// where there is none at any level.
#[must_use]
pub fn sideways(mesh: &Mesh) -> f64 {
    let [low_m, high_m] = mesh.heights_m();
    let tents: Vec<Tent> = mesh.triangles.iter().map(|one| Tent::of(one, low_m)).collect();
    let cells = Cells::of(&tents, 1, high_m - low_m);
    let area: f64 = tents.iter().map(|tent| tent.area_m2.map(f64::abs).iter().sum::<f64>()).sum();
    let across: f64 = cells.list.iter().map(|cell| cell.moments[0].abs()).sum();
    across / area
}

/// The fewest rows that keep the smallest error within reach.
fn rows(cells: &Cells<'_>, scale_m3: f64) -> Vec<ExactRow> {
    let [few, many] = ROWS;
    let mut aim = AIM[0];
    loop {
        let found = greedy(cells, aim * scale_m3);
        let room = if aim < AIM[1] { few } else { many };
        if found.len() <= room || aim > 1.0 {
            return found;
        }
        aim *= 2.0;
    }
}

/// Each row as long as the error allows.
fn greedy(cells: &Cells<'_>, most_m3: f64) -> Vec<ExactRow> {
    let mut rows = Vec::new();
    let mut at = 0;
    while at < cells.list.len() {
        let first = &cells.list[at];
        if cells.is_nothing(first) {
            at += 1;
            continue;
        }
        let mut best = (at + 1, row_of(first.low_m, first.end_m(), first.moments));
        let mut stretch = Stretch::of(first);
        for (index, cell) in cells.list.iter().enumerate().skip(at + 1) {
            if cells.is_nothing(cell) {
                continue;
            }
            if (cell.moments[0] > 0.0) != (first.moments[0] > 0.0) {
                break;
            }
            stretch.take(cell);
            let row = row_of(first.low_m, cell.end_m(), stretch.moments);
            if stretch.error(&cells.list[at..=index], &row) <= most_m3 {
                best = (index + 1, row);
            }
        }
        let (next, row) = best;
        rows.push(row);
        at = next;
    }
    rows
}

/// Cells that one row takes, their moments about the lowest end.
struct Stretch {
    low_m: f64,
    moments: [f64; 3],
}

impl Stretch {
    const fn of(cell: &Cell) -> Self {
        Self { low_m: cell.low_m, moments: cell.moments }
    }

    fn take(&mut self, cell: &Cell) {
        let moved = cell.about(self.low_m);
        for (sum, more) in self.moments.iter_mut().zip(moved) {
            *sum += more;
        }
    }

    /// Largest difference of `M` at the ends and middles of the cells.
    fn error(&self, cells: &[Cell], row: &ExactRow) -> f64 {
        let (mut m0, mut m1, mut worst) = (0.0, 0.0, 0.0_f64);
        for cell in cells {
            let middle_m = cell.low_m + 0.5 * cell.length_m;
            let under = (middle_m - self.low_m) * m0 - m1 + cell.under_middle();
            worst = worst.max((under - prism(&[*row], middle_m)).abs());
            let [c0, c1, _] = cell.about(self.low_m);
            m0 += c0;
            m1 += c1;
            let end_m = cell.end_m();
            let under = (end_m - self.low_m) * m0 - m1;
            worst = worst.max((under - prism(&[*row], end_m)).abs());
        }
        worst
    }
}

/// Largest difference of `M` between rows and triangles over the heights, m³.
fn error(tents: &[Tent], axis: usize, rows: &[ExactRow], rise_m: f64) -> f64 {
    let within = |&(_, [low, length, ..]): &ExactRow| {
        (1..=HEIGHTS).map(move |step| low + length * f64::from(step) / f64::from(HEIGHTS))
    };
    let beyond = [rise_m, 2.0 * rise_m];
    let heights = rows.iter().flat_map(within).chain(beyond);
    let difference = |h: f64| {
        let exact: f64 = tents.iter().map(|tent| tent.area_m2[axis] * tent.prism(h)).sum();
        (exact - prism(rows, h)).abs()
    };
    heights.map(difference).fold(0.0, f64::max)
}
