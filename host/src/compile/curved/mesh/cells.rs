//! The height of a mesh in cells, and the row for some of them.

use super::super::ExactRow;
use super::super::fit::even;
use super::{NOTHING, Tent};
use crate::compile::number::single;
use strake_core::part::curved::RowKind;

/// A triangle no higher than this lies level, m. A row cannot be much shorter.
pub(super) const LEVEL_M: f64 = 1e-5;
/// Cells of one force; a mesh of more heights is cut at some of them.
const CELLS: usize = 400;

/// A stretch of the height with the moments of `w` about its lower end.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Cell {
    pub(super) low_m: f64,
    pub(super) length_m: f64,
    /// `integral (z - low)^k w dz`, k from 0 to 2.
    pub(super) moments: [f64; 3],
}

impl Cell {
    pub(super) fn end_m(&self) -> f64 {
        self.low_m + self.length_m
    }

    /// Its moments about another height.
    pub(super) fn about(&self, origin_m: f64) -> [f64; 3] {
        let d = self.low_m - origin_m;
        let [m0, m1, m2] = self.moments;
        [m0, m1 + d * m0, m2 + d * (2.0 * m1 + d * m0)]
    }

    /// `w` at its ends, were it straight.
    fn ends(&self) -> [f64; 2] {
        let (m0, m1) = (self.moments[0] / self.length_m, self.moments[1] / self.length_m.powi(2));
        [4.0 * m0 - 6.0 * m1, 6.0 * m1 - 2.0 * m0]
    }

    /// `integral of (middle - z) w dz` up to its middle, were `w` straight.
    pub(super) fn under_middle(&self) -> f64 {
        let [low, high] = self.ends();
        self.length_m.powi(2) * (low / 8.0 + (high - low) / 48.0)
    }

    /// Where `w` changes its sign.
    fn turn_m(&self) -> Option<f64> {
        let [low, high] = self.ends();
        let at = low / (low - high);
        let inside = low * high < 0.0 && at > 1e-6 && at < 1.0 - 1e-6;
        inside.then_some(self.low_m + at * self.length_m)
    }
}

/// The cells of one force.
#[derive(Clone, Debug)]
pub(super) struct Cells<'a> {
    tents: &'a [Tent],
    axis: usize,
    cuts_m: Vec<f64>,
    /// From the lowest up, without a gap.
    pub(super) list: Vec<Cell>,
    least_m2: f64,
}

impl<'a> Cells<'a> {
    pub(super) fn of(tents: &'a [Tent], axis: usize, rise_m: f64) -> Self {
        let area: f64 =
            tents.iter().map(|tent| tent.area_m2.map(f64::abs).iter().sum::<f64>()).sum();
        let cuts_m = cuts(tents, axis, rise_m);
        let mut cells = Self { tents, axis, cuts_m, list: Vec::new(), least_m2: NOTHING * area };
        cells.fill();
        cells
    }

    /// Cut where the weighting changes its sign, too.
    pub(super) fn signed(mut self) -> Self {
        let real = self.list.iter().filter(|cell| !self.is_nothing(cell));
        let turns: Vec<f64> = real.filter_map(Cell::turn_m).collect();
        if !turns.is_empty() {
            self.cuts_m.extend(turns);
            self.cuts_m.sort_by(f64::total_cmp);
            self.cuts_m = spaced(&self.cuts_m);
            self.fill();
        }
        self
    }

    /// Whether a cell holds rounding only; in one that turns its sign the two sides may cancel.
    pub(super) fn is_nothing(&self, cell: &Cell) -> bool {
        let [m0, m1, _] = cell.moments;
        m0.abs().max(m1.abs() / cell.length_m) <= self.least_m2
    }

    /// `M` at a height above all cells, all weights counted as positive.
    pub(super) fn weight_under(&self, h: f64) -> f64 {
        let real = self.list.iter().filter(|cell| !self.is_nothing(cell));
        real.map(|cell| ((h - cell.low_m) * cell.moments[0] - cell.moments[1]).abs()).sum()
    }

    fn fill(&mut self) {
        let pairs = self.cuts_m.windows(2);
        self.list = pairs
            .map(|pair| Cell { low_m: pair[0], length_m: pair[1] - pair[0], moments: [0.0; 3] })
            .collect();
        for tent in self.tents {
            let area_m2 = tent.area_m2[self.axis];
            let [low, _, high] = tent.corners_m;
            let first = self.list.partition_point(|cell| cell.end_m() <= low);
            for cell in self.list.iter_mut().skip(first).take_while(|cell| cell.low_m <= high) {
                let (from, to) = (cell.low_m, cell.low_m + cell.length_m);
                let moments = tent.moments(from, to, from);
                for (sum, one) in cell.moments.iter_mut().zip(moments) {
                    *sum += area_m2 * one;
                }
            }
        }
    }
}

/// Heights between which a weighting is straight, or some of them where there are many. A level
/// triangle stands in the middle of a cell of its own.
fn cuts(tents: &[Tent], axis: usize, rise_m: f64) -> Vec<f64> {
    let mut cuts = vec![-0.5 * LEVEL_M, rise_m + 0.5 * LEVEL_M];
    for tent in tents.iter().filter(|tent| tent.area_m2[axis].abs() > 0.0) {
        match tent.level_m() {
            Some(z) => cuts.extend([z - 0.5 * LEVEL_M, z + 0.5 * LEVEL_M]),
            None => cuts.extend(tent.corners_m),
        }
    }
    cuts.sort_by(f64::total_cmp);
    let cuts = spaced(&cuts);
    if cuts.len() <= CELLS {
        return cuts;
    }
    // Of each equal stretch the first height.
    let mut kept: Vec<f64> = Vec::new();
    let step_m = rise_m / 300.0;
    for &cut in &cuts {
        if kept.last().is_none_or(|last| ((cut / step_m).floor() - (last / step_m).floor()) >= 1.0)
        {
            kept.push(cut);
        }
    }
    kept.extend(cuts.last());
    spaced(&kept)
}

/// Rising heights without those that lie together; the first and the last stay.
fn spaced(cuts: &[f64]) -> Vec<f64> {
    let mut kept: Vec<f64> = Vec::new();
    for &cut in cuts {
        if kept.last().is_none_or(|last| cut - last > 0.4 * LEVEL_M) {
            kept.push(cut);
        }
    }
    if let (Some(last), Some(end)) = (kept.last_mut(), cuts.last()) {
        *last = last.max(*end);
    }
    kept
}

/// The row over a stretch with these moments about its lower end.
///
/// It keeps the integral and the first moment. Where no row of one sign over the whole stretch
/// does, an even one stands about the mean height.
pub(super) fn row_of(low_m: f64, end_m: f64, moments: [f64; 3]) -> ExactRow {
    let length_m = end_m - low_m;
    let [m0, m1, m2] = moments;
    let per = [m0 / length_m, m1 / length_m.powi(2), m2 / length_m.powi(3)];
    // The second moment of a straight weighting with the two before it.
    let straight = [per[0], per[1], per[1] - per[0] / 6.0];
    let kept = |row: &ExactRow| {
        let (_, [_, x, c0, c1, c2]) = *row;
        let first = x * x * (c0 / 2.0 + x * (c1 / 3.0 + x * c2 / 4.0));
        (first - m1).abs() <= 1e-5 * (m0 * x).abs()
    };
    let rows = [per, straight].map(|per| even(low_m, length_m, per));
    if let Some(row) = rows.into_iter().find(|row| kept(row) && keeps_sign(row)) {
        return row;
    }
    let mean = (m1 / (m0 * length_m)).clamp(0.0, 1.0);
    let half_m = (mean.min(1.0 - mean) * length_m).max(0.1 * LEVEL_M);
    let middle_m = low_m + mean * length_m;
    (RowKind::Even, [middle_m - half_m, 2.0 * half_m, m0 / (2.0 * half_m), 0.0, 0.0])
}

/// Whether the row keeps its sign as the plan checks it, in f32.
fn keeps_sign((_, row): &ExactRow) -> bool {
    let [_, x, c0, c1, c2] = row.map(single);
    let (middle, end) = (c0 + 0.5 * c1 * x, c0 + x * (c1 + c2 * x));
    c0 * middle >= 0.0 && c0 * end >= 0.0 && middle * end >= 0.0
}
