//! A weighting along the slope, straight between rows.

use super::linear::tridiagonal;

/// `w(s)` at rising `s`, straight between them and zero outside. Its integrals are exact.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    rows: Vec<Row>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct Row {
    s_m: f64,
    w: f64,
    /// `integral w` up to here.
    area: f64,
    /// `integral (s_m - s) w` up to here.
    ramp: f64,
}

/// A table with its positive and its negative part.
#[derive(Clone, Debug)]
pub struct Weighted {
    /// The weighting.
    pub whole: Table,
    /// `max(w, 0)`.
    pub positive: Table,
    /// `max(-w, 0)`.
    pub negative: Table,
}

impl Table {
    /// From points with rising `s`.
    #[must_use]
    pub fn new(points: impl IntoIterator<Item = (f64, f64)>) -> Self {
        let mut rows: Vec<Row> = Vec::new();
        for (s_m, w) in points {
            let (area, ramp) = rows.last().map_or((0.0, 0.0), |last| last.ahead(s_m, w));
            rows.push(Row { s_m, w, area, ramp });
        }
        Self { rows }
    }

    /// Even rows over `0..=length_m` from the integrals of `w` against each row's hat function: the
    /// best fit in the mean square, which keeps `integral w` and `integral s w`.
    pub(super) fn fitted(length_m: f64, against_hats: &[f64]) -> Self {
        let step_m = length_m / super::float(against_hats.len().saturating_sub(1).max(1));
        let last = against_hats.len().saturating_sub(1);
        let diagonal =
            |i: usize| if i == 0 || i == last { step_m / 3.0 } else { 2.0 * step_m / 3.0 };
        let values = tridiagonal(diagonal, step_m / 6.0, against_hats);
        Self::new(values.into_iter().enumerate().map(|(i, w)| (step_m * super::float(i), w)))
    }

    /// `integral w ds`.
    #[must_use]
    pub fn total(&self) -> f64 {
        self.rows.last().map_or(0.0, |last| last.area)
    }

    /// `W_cum(h) = integral over s < h of w ds`.
    #[must_use]
    pub fn area(&self, h_m: f64) -> f64 {
        let above = self.rows.partition_point(|row| row.s_m <= h_m);
        let Some(row) = above.checked_sub(1).and_then(|i| self.rows.get(i)) else { return 0.0 };
        match self.rows.get(above) {
            None => row.area,
            Some(next) => {
                let slope = (next.w - row.w) / (next.s_m - row.s_m);
                row.ahead(h_m, row.w + slope * (h_m - row.s_m)).0
            }
        }
    }

    /// `M(h) = integral over s < h of (h - s) w ds`; above the last row it goes on with the slope
    /// `total`.
    #[must_use]
    pub fn ramp(&self, h_m: f64) -> f64 {
        let above = self.rows.partition_point(|row| row.s_m <= h_m);
        let Some(row) = above.checked_sub(1).and_then(|i| self.rows.get(i)) else { return 0.0 };
        let over_m = h_m - row.s_m;
        match self.rows.get(above) {
            None => row.ramp + row.area * over_m,
            Some(next) => {
                let slope = (next.w - row.w) / (next.s_m - row.s_m);
                row.ahead(h_m, row.w + slope * over_m).1
            }
        }
    }

    /// The rows: `(s, w)`.
    pub fn points(&self) -> impl Iterator<Item = (f64, f64)> + '_ {
        self.rows.iter().map(|row| (row.s_m, row.w))
    }

    /// `max(sign w, 0)`, with rows where `w` changes sign.
    #[must_use]
    pub fn part(&self, sign: f64) -> Self {
        let mut points: Vec<(f64, f64)> = Vec::new();
        let mut before: Option<(f64, f64)> = None;
        for (s_m, w) in self.points() {
            if let Some((s0_m, w0)) = before
                && w0 * w < 0.0
            {
                points.push((s0_m + (s_m - s0_m) * w0 / (w0 - w), 0.0));
            }
            points.push((s_m, (sign * w).max(0.0)));
            before = Some((s_m, w));
        }
        Self::new(points)
    }

    /// With both parts beside it.
    #[must_use]
    pub fn split(&self) -> Weighted {
        Weighted { whole: self.clone(), positive: self.part(1.0), negative: self.part(-1.0) }
    }
}

impl Row {
    /// Both integrals at a point ahead, `w` straight up to there.
    fn ahead(&self, s_m: f64, w: f64) -> (f64, f64) {
        let d = s_m - self.s_m;
        let area = self.area + 0.5 * d * (self.w + w);
        let ramp = self.ramp + d * self.area + d * d * (2.0 * self.w + w) / 6.0;
        (area, ramp)
    }
}
