//! One half of a rectangle, its middle line an axis of symmetry: bicubic elements.

use super::banded::Banded;
use super::{GAUSS, Influence, Wanted, float, hermite};
use crate::plate::{Direction, Edges, POINT_STRETCHES};

/// Unknowns of a node: deflection, slope level, slope up, twist.
const UNKNOWNS: usize = 4;
/// Functions of an element: in either direction value and slope at both ends.
const FUNCTIONS: usize = 16;

/// The influence surface, summed across the width, at each level line of nodes.
pub(super) struct Lines {
    step_m: f64,
    /// Value and slope.
    lines: Vec<[f64; 2]>,
}

impl Influence for Lines {
    fn at(&self, s_m: f64) -> f64 {
        let mut index = 0;
        while index + 2 < self.lines.len() && float(index + 1) * self.step_m <= s_m {
            index += 1;
        }
        let t = s_m / self.step_m - float(index);
        let [shape, ..] = hermite(t, self.step_m);
        let ends = [self.lines[index], self.lines[index + 1]];
        let values = ends.as_flattened().iter();
        values.zip(shape).map(|(value, shape)| value * shape).sum()
    }

    fn turns(&self) -> Vec<f64> {
        (0..self.lines.len()).map(|index| float(index) * self.step_m).collect()
    }
}

/// The mesh over half the width.
struct Mesh {
    across: usize,
    up: usize,
    h_x: f64,
    h_s: f64,
}

impl Mesh {
    fn node(&self, i: usize, j: usize) -> usize {
        j * (self.across + 1) + i
    }

    fn unknowns(&self) -> usize {
        UNKNOWNS * (self.across + 1) * (self.up + 1)
    }

    /// The unknowns of an element, in the order of [`functions`].
    fn of(&self, i: usize, j: usize) -> [usize; FUNCTIONS] {
        let mut found = [0; FUNCTIONS];
        for (place, slot) in found.iter_mut().enumerate() {
            let (a, b) = (place % 4, place / 4);
            let node = self.node(i + a / 2, j + b / 2);
            *slot = UNKNOWNS * node + (a % 2) + 2 * (b % 2);
        }
        found
    }
}

/// The functions of an element at a place in it: second derivatives level, up and mixed.
fn functions(mesh: &Mesh, [u, v]: [f64; 2]) -> [[f64; 3]; FUNCTIONS] {
    let (level, up) = (hermite(u, mesh.h_x), hermite(v, mesh.h_s));
    let mut found = [[0.0; 3]; FUNCTIONS];
    for (place, slot) in found.iter_mut().enumerate() {
        let (a, b) = (place % 4, place / 4);
        *slot = [level[2][a] * up[0][b], level[0][a] * up[2][b], level[1][a] * up[1][b]];
    }
    found
}

pub(super) fn solve([width_m, length_m]: [f64; 2], wanted: Wanted, fine: u8) -> Option<Lines> {
    // The checked points lie on level lines of nodes.
    let up = POINT_STRETCHES * usize::from(fine);
    let across = up / 2;
    let mesh = Mesh { across, up, h_x: 0.5 * width_m / float(across), h_s: length_m / float(up) };
    let mut matrix = Banded::new(mesh.unknowns(), UNKNOWNS * (mesh.across + 3));
    let element = stiffness(&mesh, wanted.poisson);
    for j in 0..mesh.up {
        for i in 0..mesh.across {
            let at = mesh.of(i, j);
            for (row, values) in at.iter().zip(&element) {
                for (column, value) in at.iter().zip(values) {
                    matrix.add(*row, *column, *value);
                }
            }
        }
    }
    let mut right = functional(&mesh, wanted);
    for held in held(&mesh, wanted.edges) {
        matrix.hold(held);
        right[held] = 0.0;
    }
    let found = matrix.solve(right)?;
    Some(Lines { step_m: mesh.h_s, lines: lines(&mesh, &found) })
}

/// Twice the energy of an element: `integral (w_xx + w_ss)² - 2 (1 - nu)(w_xx w_ss - w_xs²)`.
fn stiffness(mesh: &Mesh, nu: f64) -> [[f64; FUNCTIONS]; FUNCTIONS] {
    let mut found = [[0.0; FUNCTIONS]; FUNCTIONS];
    for (u, weight_u) in GAUSS {
        for (v, weight_v) in GAUSS {
            let weight = weight_u * weight_v * mesh.h_x * mesh.h_s;
            let bent = functions(mesh, [u, v]);
            for (row, a) in found.iter_mut().zip(&bent) {
                for (cell, b) in row.iter_mut().zip(&bent) {
                    let mean = (a[0] + a[1]) * (b[0] + b[1]);
                    let gauss = a[0] * b[1] + a[1] * b[0] - 2.0 * a[2] * b[2];
                    *cell += weight * (mean - (1.0 - nu) * gauss);
                }
            }
        }
    }
    found
}

/// Unknowns that the edges hold, and the axis of symmetry.
fn held(mesh: &Mesh, edges: Edges) -> Vec<usize> {
    let mut found = Vec::new();
    for j in 0..=mesh.up {
        for i in 0..=mesh.across {
            let node = UNKNOWNS * mesh.node(i, j);
            let mut hold = |unknowns: &[usize]| found.extend(unknowns.iter().map(|one| node + one));
            let (side, foot, head) = (i == mesh.across, j == 0, j == mesh.up);
            if i == 0 {
                hold(&[1, 3]);
            }
            match edges {
                Edges::Clamped if side || foot || head => hold(&[0, 1, 2, 3]),
                Edges::TopFree if side || foot => hold(&[0, 1, 2, 3]),
                Edges::Supported => {
                    if side {
                        hold(&[0, 2]);
                    }
                    if foot || head {
                        hold(&[0, 1]);
                    }
                }
                Edges::Clamped | Edges::TopFree => {}
            }
        }
    }
    found
}

/// The wanted moment of a unit rigidity as a sum over the unknowns: the mean of the elements that
/// meet at the point.
fn functional(mesh: &Mesh, wanted: Wanted) -> Vec<f64> {
    let mut right = vec![0.0; mesh.unknowns()];
    let nu = wanted.poisson;
    let i = if wanted.place.x_m > 0.0 { mesh.across } else { 0 };
    let mut j = 0;
    while j < mesh.up && (float(j) + 0.5) * mesh.h_s < wanted.place.s_m {
        j += 1;
    }
    let columns = if i == 0 { vec![(0, 0.0)] } else { vec![(mesh.across - 1, 1.0)] };
    let mut rows = Vec::new();
    if j > 0 {
        rows.push((j - 1, 1.0));
    }
    if j < mesh.up {
        rows.push((j, 0.0));
    }
    let share = 1.0 / float(rows.len().max(1));
    for (column, u) in columns {
        for &(row, v) in &rows {
            let bent = functions(mesh, [u, v]);
            for (place, [level, up, mixed]) in mesh.of(column, row).into_iter().zip(bent) {
                right[place] -= share
                    * match wanted.direction {
                        Direction::Up => up + nu * level,
                        Direction::Level => level + nu * up,
                        Direction::Twist => (1.0 - nu) * mixed,
                    };
            }
        }
    }
    right
}

/// Across half the width, element by element: its cubic integrates in closed form. The functional
/// belongs to the half plate, whose energy is half; so half the width is all there is.
fn lines(mesh: &Mesh, found: &[f64]) -> Vec<[f64; 2]> {
    let at = |i: usize, j: usize, unknown: usize| found[UNKNOWNS * mesh.node(i, j) + unknown];
    let across = |j: usize, value: usize, slope: usize| -> f64 {
        let each = (0..mesh.across).map(|i| {
            let values = at(i, j, value) + at(i + 1, j, value);
            let slopes = at(i, j, slope) - at(i + 1, j, slope);
            0.5 * mesh.h_x * values + mesh.h_x * mesh.h_x / 12.0 * slopes
        });
        each.sum()
    };
    (0..=mesh.up).map(|j| [across(j, 0, 1), across(j, 2, 3)]).collect()
}
