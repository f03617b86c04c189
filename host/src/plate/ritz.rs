//! Rectangles with clamped edges: Ritz's method (Timoshenko and Woinowsky-Krieger, art. 80).
//!
//! `w = sum c_ij f_i(x) g_j(s)`, the polynomials of [`Basis`], even across the width. The energy of
//! bending (art. 80, eq. 180) with rigidity one gives `K c = load`. The moment at a point is
//! `b . c`, so its influence surface is the field of `K^-1 b`.

use super::legendre::{Basis, Jet, Products, nodes};
use super::linear::Factor;
use super::{
    DeflectionAt, Direction, Edges, MomentAt, Place, PlateError, STRETCHES, Solution, Table,
    difference, float, rectangle,
};

/// Functions across the width (even ones) and up the slope: more along a longer side, where a load
/// reaches no further than the shorter one.
fn order(width_m: f64, length_m: f64) -> (usize, usize) {
    let grown = |base: usize, by: usize, ratio: f64| {
        let extra = (1..=7).filter(|&step| ratio > float(step)).count();
        base + by * extra
    };
    (grown(12, 2, width_m / length_m), grown(24, 4, length_m / width_m))
}

pub(super) fn solve(
    width_m: f64,
    length_m: f64,
    edges: Edges,
    poisson: f64,
) -> Result<Solution, PlateError> {
    // The finer is the answer, the coarser shows what the cut costs.
    let (across, up) = order(width_m, length_m);
    let fine = Ritz::new(width_m, length_m, edges, poisson, (across, up))?;
    let coarse = Ritz::new(width_m, length_m, edges, poisson, (across - 2, up - 4))?;
    let moments = fine.moments();
    let series_error = difference(&moments, &coarse.moments(), length_m);
    let deflections = fine.deflections();
    Ok(Solution { moments, deflections, reactions: Vec::new(), series_error })
}

/// A plate of one order.
pub(super) struct Ritz {
    half_m: [f64; 2],
    edges: Edges,
    poisson: f64,
    across: Basis,
    up: Basis,
    areas: Vec<f64>,
    factor: Factor,
    /// For each row the integrals of the functions up the slope against its hat function.
    hats: Vec<Vec<f64>>,
}

impl Ritz {
    pub(super) fn new(
        width_m: f64,
        length_m: f64,
        edges: Edges,
        poisson: f64,
        (count_across, count_up): (usize, usize),
    ) -> Result<Self, PlateError> {
        let across = Basis { first: 2, step: 2, count: count_across };
        let first = if edges == Edges::TopFree { 0 } else { 2 };
        let up = Basis { first, step: 1, count: count_up };
        let half_m = [0.5 * width_m, 0.5 * length_m];
        let (x, y) = (Products::of(across), Products::of(up));
        let factor = stiffness(half_m, poisson, (&x, &y)).ok_or(PlateError::Singular)?;
        let hats = hats(up, half_m[1]);
        Ok(Self { half_m, edges, poisson, across, up, areas: x.area, factor, hats })
    }

    /// Coefficients of the influence surface of what `pick` takes from the two jets at a place.
    fn influence(&self, place: Place, pick: impl Fn(Jet, Jet) -> f64) -> Vec<f64> {
        let [half_x, half_s] = self.half_m;
        let xs = self.across.at(place.x_m / half_x);
        let ys = self.up.at(place.s_m / half_s - 1.0);
        let mut b: Vec<f64> = xs
            .iter()
            .flat_map(|&x| ys.iter().map(move |&y| (x, y)))
            .map(|(x, y)| pick(x, y))
            .collect();
        self.factor.solve(&mut b);
        b
    }

    /// The surface summed across the width, as a table up the slope.
    fn table(&self, coefficients: &[f64]) -> Table {
        let mut up = vec![0.0; self.up.count];
        for (row, area) in coefficients.chunks(self.up.count).zip(&self.areas) {
            for (up, c) in up.iter_mut().zip(row) {
                *up += self.half_m[0] * area * c;
            }
        }
        let against: Vec<f64> =
            self.hats.iter().map(|hat| hat.iter().zip(&up).map(|(a, b)| a * b).sum()).collect();
        Table::fitted(2.0 * self.half_m[1], &against)
    }

    pub(super) fn moments(&self) -> Vec<MomentAt> {
        let [half_x, half_s] = self.half_m;
        let places = rectangle::moments(2.0 * half_x, 2.0 * half_s, self.edges);
        places.into_iter().map(|(place, direction)| self.moment(place, direction)).collect()
    }

    /// The bending moment at a place.
    pub(super) fn moment(&self, place: Place, direction: Direction) -> MomentAt {
        let [half_x, half_s] = self.half_m;
        let (bend_x, bend_s) = (1.0 / (half_x * half_x), 1.0 / (half_s * half_s));
        let nu = self.poisson;
        let pick = |x: Jet, y: Jet| {
            let (across, up) = (x.second * y.value * bend_x, x.value * y.second * bend_s);
            match direction {
                Direction::Up => -(up + nu * across),
                Direction::Level => -(across + nu * up),
                // Twisting moment D (1 - nu) w_xs (art. 21).
                Direction::Twist => (1.0 - nu) * x.first * y.first / (half_x * half_s),
            }
        };
        MomentAt { place, direction, weight: self.table(&self.influence(place, pick)) }
    }

    fn deflections(&self) -> Vec<DeflectionAt> {
        let places = rectangle::deflections(2.0 * self.half_m[1]);
        let at = |place: Place| {
            let surface = self.influence(place, |x, y| x.value * y.value);
            DeflectionAt { place, weight: self.table(&surface) }
        };
        places.into_iter().map(at).collect()
    }
}

/// `K` for rigidity one, factorised.
fn stiffness(
    [half_x, half_s]: [f64; 2],
    nu: f64,
    (x, y): (&Products, &Products),
) -> Option<Factor> {
    let (across, up) = (x.area.len(), y.area.len());
    let area = half_x * half_s;
    let (xx, ss) = (area / half_x.powi(4), area / half_s.powi(4));
    let xs = area / (half_x * half_s).powi(2);
    Factor::new(across * up, |row, column| {
        let ((i, j), (k, l)) = ((row / up, row % up), (column / up, column % up));
        let ([x0, x1, x2], [y0, y1, y2]) = (x.at(i, k), y.at(j, l));
        let ([_, _, x2_t], [_, _, y2_t]) = (x.at(k, i), y.at(l, j));
        let one = |same: bool, value: f64| if same { value } else { 0.0 };
        xx * one(i == k, y0)
            + ss * one(j == l, x0)
            + xs * (nu * (x2_t * y2 + x2 * y2_t) + 2.0 * (1.0 - nu) * x1 * y1)
    })
}

/// Integrals of a basis against the hat function of each row, m.
fn hats(up: Basis, half_m: f64) -> Vec<Vec<f64>> {
    let mut hats = vec![vec![0.0; up.count]; STRETCHES + 1];
    let step = 2.0 / float(STRETCHES);
    for stretch in 0..STRETCHES {
        for (t, weight) in nodes(4) {
            let share = 0.5 * (t + 1.0);
            let jets = up.at(-1.0 + step * (float(stretch) + share));
            let weight = 0.5 * step * half_m * weight;
            for (row, part) in [(stretch, 1.0 - share), (stretch + 1, share)] {
                for (hat, jet) in hats[row].iter_mut().zip(&jets) {
                    *hat += weight * part * jet.value;
                }
            }
        }
    }
    hats
}
