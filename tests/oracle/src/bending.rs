//! Bending of rectangular plates by finite elements: rectangles of Bogner, Fox and Schmit (1965),
//! bicubic, with the slope continuous. An energy method on a mesh; nothing is shared with the
//! series of the host.
//!
//! Half of the plate is meshed; the pressure varies up the slope alone. Rigidity is one, so a
//! deflection is times the plate's rigidity. Moments at nodes err with the square of the mesh
//! width.

use crate::quadrature::{to_f64, visit};

/// How one edge is held.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Held {
    /// Neither moves nor turns.
    Clamped,
    /// Does not move.
    Supported,
    /// Free.
    Free,
}

/// A rectangular plate; the two sides are alike.
#[derive(Clone, Copy, Debug)]
pub struct Sheet {
    /// Level extent.
    pub width: f64,
    /// Extent up the slope.
    pub length: f64,
    /// Poisson's ratio.
    pub poisson: f64,
    /// Base, sides, top.
    pub held: [Held; 3],
    /// Elements across the half width and up the slope.
    pub mesh: (usize, usize),
}

/// Deflections and moments at the nodes of a bent plate.
#[derive(Clone, Debug)]
pub struct Bent {
    sheet: Sheet,
    /// `w`, `w_x`, `w_s`, `w_xs` at each node, from the middle line outwards, row by row.
    values: Vec<f64>,
}

/// Bending moments at a point, positive with tension on the side away from the load.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Moments {
    /// Stress up the slope.
    pub up: f64,
    /// Stress across.
    pub level: f64,
    /// Twist.
    pub twist: f64,
}

impl Moments {
    /// The larger principal moment, by size.
    #[must_use]
    pub fn principal(self) -> f64 {
        let mean = 0.5 * (self.up + self.level);
        mean.abs() + (0.5 * (self.up - self.level)).hypot(self.twist)
    }
}

/// Cubic Hermite functions on `0..=h` at `x`, derivative `order` of each: value and slope at 0, at
/// `h`.
fn hermite(x: f64, h: f64, order: u8) -> [f64; 4] {
    let t = x / h;
    match order {
        0 => [
            1.0 - 3.0 * t * t + 2.0 * t.powi(3),
            h * (t - 2.0 * t * t + t.powi(3)),
            3.0 * t * t - 2.0 * t.powi(3),
            h * (t.powi(3) - t * t),
        ],
        1 => [
            (6.0 * t * t - 6.0 * t) / h,
            1.0 - 4.0 * t + 3.0 * t * t,
            (6.0 * t - 6.0 * t * t) / h,
            3.0 * t * t - 2.0 * t,
        ],
        _ => [
            (12.0 * t - 6.0) / (h * h),
            (6.0 * t - 4.0) / h,
            (6.0 - 12.0 * t) / (h * h),
            (6.0 * t - 2.0) / h,
        ],
    }
}

/// Integrals over one element side of products of derivatives of the orders `a` and `b`.
fn products(h: f64, a: u8, b: u8) -> [[f64; 4]; 4] {
    let mut cells = [[0.0; 4]; 4];
    visit(0.0, h, &[], |x, weight| {
        let (left, right) = (hermite(x, h, a), hermite(x, h, b));
        for (row, left) in cells.iter_mut().zip(left) {
            for (cell, right) in row.iter_mut().zip(right) {
                *cell += weight * left * right;
            }
        }
    });
    cells
}

impl Sheet {
    fn steps(&self) -> (f64, f64) {
        (0.5 * self.width / to_f64(self.mesh.0), self.length / to_f64(self.mesh.1))
    }

    fn node(&self, i: usize, j: usize) -> usize {
        4 * (j * (self.mesh.0 + 1) + i)
    }

    /// Place in the list of unknowns of a local function (number across, number up).
    fn unknown(&self, (i, j): (usize, usize), x: usize, s: usize) -> usize {
        self.node(i + x / 2, j + s / 2) + x % 2 + 2 * (s % 2)
    }

    /// Which of the four values of a node are held at zero.
    fn fixed(&self, i: usize, j: usize) -> [bool; 4] {
        let [base, sides, top] = self.held;
        let mut fixed = [false; 4];
        let mut hold = |held: Held, along: usize| {
            if held != Held::Free {
                // The edge does not move, so it has no slope along itself.
                fixed[0] = true;
                fixed[along] = true;
            }
            if held == Held::Clamped {
                fixed = [true; 4];
            }
        };
        if j == 0 {
            hold(base, 1);
        }
        if j == self.mesh.1 {
            hold(top, 1);
        }
        if i == self.mesh.0 {
            hold(sides, 2);
        }
        if i == 0 {
            // The middle line: nothing crosses it.
            fixed[1] = true;
            fixed[3] = true;
        }
        fixed
    }

    /// Stiffness of one element between local functions.
    fn element(&self) -> Vec<Vec<f64>> {
        let (hx, hs) = self.steps();
        let nu = self.poisson;
        let of = |h: f64| {
            let at = |a, b| products(h, a, b);
            (at(0, 0), at(1, 1), at(2, 2), at(0, 2), at(2, 0))
        };
        let ((x0, x1, x2, x02, x20), (s0, s1, s2, s02, s20)) = (of(hx), of(hs));
        let mut matrix = vec![vec![0.0; 16]; 16];
        for (row, line) in matrix.iter_mut().enumerate() {
            for (column, cell) in line.iter_mut().enumerate() {
                let ((a, b), (c, d)) = ((row % 4, row / 4), (column % 4, column / 4));
                *cell = x2[a][c] * s0[b][d]
                    + x0[a][c] * s2[b][d]
                    + nu * (x20[a][c] * s02[b][d] + x02[a][c] * s20[b][d])
                    + 2.0 * (1.0 - nu) * x1[a][c] * s1[b][d];
            }
        }
        matrix
    }

    /// Bends the plate by a pressure up the slope, straight but for the `breaks`.
    #[must_use]
    pub fn bent(&self, pressure: impl Fn(f64) -> f64, breaks: &[f64]) -> Bent {
        let count = self.node(0, self.mesh.1 + 1);
        let load = self.load(count, pressure, breaks);
        let mut band = Band::new(count, 4 * (self.mesh.0 + 1) + 7);
        let element = self.element();
        for j in 0..self.mesh.1 {
            for i in 0..self.mesh.0 {
                for (row, line) in element.iter().enumerate() {
                    for (column, value) in line.iter().enumerate() {
                        let at = |n: usize| self.unknown((i, j), n % 4, n / 4);
                        band.add(at(row), at(column), *value);
                    }
                }
            }
        }
        let mut right = load;
        for j in 0..=self.mesh.1 {
            for i in 0..=self.mesh.0 {
                for (k, _) in self.fixed(i, j).into_iter().enumerate().filter(|(_, fixed)| *fixed) {
                    band.hold(self.node(i, j) + k);
                    right[self.node(i, j) + k] = 0.0;
                }
            }
        }
        let values = band.solve(right);
        Bent { sheet: *self, values }
    }

    fn load(&self, count: usize, pressure: impl Fn(f64) -> f64, breaks: &[f64]) -> Vec<f64> {
        let (hx, hs) = self.steps();
        let mut across = [0.0; 4];
        visit(0.0, hx, &[], |x, weight| {
            for (sum, value) in across.iter_mut().zip(hermite(x, hx, 0)) {
                *sum += weight * value;
            }
        });
        let mut load = vec![0.0; count];
        for j in 0..self.mesh.1 {
            let foot = hs * to_f64(j);
            let mut up = [0.0; 4];
            visit(foot, foot + hs, breaks, |s, weight| {
                for (sum, value) in up.iter_mut().zip(hermite(s - foot, hs, 0)) {
                    *sum += weight * pressure(s) * value;
                }
            });
            for i in 0..self.mesh.0 {
                for (x, a) in across.iter().enumerate() {
                    for (s, b) in up.iter().enumerate() {
                        load[self.unknown((i, j), x, s)] += a * b;
                    }
                }
            }
        }
        load
    }
}

impl Bent {
    /// Deflection at a node, times the rigidity.
    #[must_use]
    pub fn deflection(&self, i: usize, j: usize) -> f64 {
        self.values[self.sheet.node(i, j)]
    }

    /// Moments at a node: the mean of the elements that meet there.
    #[must_use]
    pub fn moments(&self, i: usize, j: usize) -> Moments {
        let mut mean = Moments::default();
        let mut count = 0.0;
        for (x, ends_x) in [(i.wrapping_sub(1), true), (i, false)] {
            for (s, ends_s) in [(j.wrapping_sub(1), true), (j, false)] {
                if x >= self.sheet.mesh.0 || s >= self.sheet.mesh.1 {
                    continue;
                }
                let one = self.in_element((x, s), ends_x, ends_s);
                mean.up += one.up;
                mean.level += one.level;
                mean.twist += one.twist;
                count += 1.0;
            }
        }
        Moments { up: mean.up / count, level: mean.level / count, twist: mean.twist / count }
    }

    fn in_element(&self, element: (usize, usize), ends_x: bool, ends_s: bool) -> Moments {
        let (hx, hs) = self.sheet.steps();
        let at = |end: bool, h: f64| if end { h } else { 0.0 };
        let (x, s) = (at(ends_x, hx), at(ends_s, hs));
        let sum = |a: u8, b: u8| {
            let (across, up) = (hermite(x, hx, a), hermite(s, hs, b));
            let mut sum = 0.0;
            for (i, a) in across.iter().enumerate() {
                for (j, b) in up.iter().enumerate() {
                    sum += a * b * self.values[self.sheet.unknown(element, i, j)];
                }
            }
            sum
        };
        let (xx, ss, xs) = (sum(2, 0), sum(0, 2), sum(1, 1));
        let nu = self.sheet.poisson;
        Moments { up: -(ss + nu * xx), level: -(xx + nu * ss), twist: (1.0 - nu) * xs }
    }
}

/// Lower half of a symmetric matrix, by diagonals.
#[derive(Clone, Debug)]
struct Band {
    count: usize,
    width: usize,
    cells: Vec<f64>,
}

impl Band {
    fn new(count: usize, width: usize) -> Self {
        Self { count, width, cells: vec![0.0; count * (width + 1)] }
    }

    fn at(&mut self, row: usize, column: usize) -> &mut f64 {
        &mut self.cells[row * (self.width + 1) + self.width + column - row]
    }

    fn add(&mut self, row: usize, column: usize, value: f64) {
        if column <= row {
            *self.at(row, column) += value;
        }
    }

    /// Holds an unknown at zero.
    fn hold(&mut self, at: usize) {
        for column in at.saturating_sub(self.width)..at {
            *self.at(at, column) = 0.0;
        }
        for row in at + 1..self.count.min(at + self.width + 1) {
            *self.at(row, at) = 0.0;
        }
        *self.at(at, at) = 1.0;
    }

    fn row(&self, row: usize) -> &[f64] {
        &self.cells[row * (self.width + 1)..(row + 1) * (self.width + 1)]
    }

    /// Cholesky's factors, then both substitutions.
    fn solve(mut self, mut x: Vec<f64>) -> Vec<f64> {
        let width = self.width;
        for row in 0..self.count {
            let low = row.saturating_sub(width);
            for column in low..=row {
                let from = low.max(column.saturating_sub(width));
                let (a, b) = (self.row(row), self.row(column));
                let left = &a[width + from - row..width + column - row];
                let right = &b[width + from - column..width];
                let sum: f64 = left.iter().zip(right).map(|(a, b)| a * b).sum();
                let value = a[width + column - row] - sum;
                let pivot = b[width];
                *self.at(row, column) = if row == column { value.sqrt() } else { value / pivot };
            }
        }
        for row in 0..self.count {
            let low = row.saturating_sub(width);
            let line = self.row(row);
            let sum: f64 = (low..row).map(|column| line[width + column - row] * x[column]).sum();
            x[row] = (x[row] - sum) / line[width];
        }
        for row in (0..self.count).rev() {
            let line = self.row(row);
            let value = x[row] / line[width];
            x[row] = value;
            for column in row.saturating_sub(width)..row {
                x[column] -= line[width + column - row] * value;
            }
        }
        x
    }
}
