//! Rectangles supported at all edges: Lévy's single series (Timoshenko and Woinowsky-Krieger,
//! art. 30).
//!
//! The pressure varies up the slope alone, `p = sum p_n sin(a_n s)` with `a_n = n pi / L`; across
//! the width each term has the closed form
//!
//! ```text
//! w_n = p_n / (D a^4) (1 - A cosh(a x) + B a x sinh(a x))
//! A = (2 + u tanh u) / (2 cosh u),  B = 1 / (2 cosh u),  u = a b / 2
//! ```

use super::{
    DeflectionAt, Direction, Edge, Edges, MomentAt, POINT_STRETCHES, Place, ReactionAt, STRETCHES,
    Solution, Table, difference, float, rectangle,
};
use std::f64::consts::PI;

/// Terms; the shorter sum shows what the cut costs.
const TERMS: [usize; 2] = [512, 256];

pub(super) fn solve(width_m: f64, length_m: f64, poisson: f64) -> Solution {
    let [fine, coarse] = TERMS.map(|terms| Series::new(width_m, length_m, poisson, terms));
    let moments = fine.moments();
    let series_error = difference(&moments, &coarse.moments(), length_m);
    let (deflections, reactions) = (fine.deflections(), fine.reactions());
    Solution { moments, deflections, reactions, series_error }
}

/// The part across the width of one term at one place, times `a^4` (value), `a^3` (first), ...
struct Across {
    value: f64,
    first: f64,
    second: f64,
    third: f64,
}

impl Across {
    /// `u` is `a b / 2`, `v` is `a x`, `0 <= v <= u`.
    fn new(u: f64, v: f64) -> Self {
        let (near, far) = ((v - u).exp(), (-u - v).exp());
        let whole = 1.0 + (-2.0 * u).exp();
        // cosh v / cosh u and sinh v / cosh u without overflow.
        let (cosh, sinh) = ((near + far) / whole, (near - far) / whole);
        let a = 0.5 * (2.0 + u * u.tanh());
        Self {
            value: 1.0 - a * cosh + 0.5 * v * sinh,
            first: -a * sinh + 0.5 * (sinh + v * cosh),
            second: -a * cosh + 0.5 * (2.0 * cosh + v * sinh),
            third: -a * sinh + 0.5 * (3.0 * sinh + v * cosh),
        }
    }
}

pub(super) struct Series {
    width_m: f64,
    length_m: f64,
    poisson: f64,
    terms: usize,
    /// `sin(k pi / STRETCHES)` over a whole turn.
    sines: Vec<f64>,
}

impl Series {
    pub(super) fn new(width_m: f64, length_m: f64, poisson: f64, terms: usize) -> Self {
        let turn = 2 * STRETCHES;
        let sines = (0..turn).map(|k| (PI * float(k) / float(STRETCHES)).sin()).collect();
        Self { width_m, length_m, poisson, terms, sines }
    }

    fn moments(&self) -> Vec<MomentAt> {
        let places = rectangle::moments(self.width_m, self.length_m, Edges::Supported);
        places.into_iter().map(|(place, direction)| self.moment(place, direction)).collect()
    }

    fn moment(&self, place: Place, direction: Direction) -> MomentAt {
        let nu = self.poisson;
        let weight = self.table(place, |alpha, across, phase| {
            let (level, up) = (-across.second, across.value);
            let (sine, cosine) = phase.sin_cos();
            let factor = match direction {
                Direction::Up => sine * (up + nu * level),
                Direction::Level => sine * (level + nu * up),
                Direction::Twist => (1.0 - nu) * across.first * cosine,
            };
            factor / (alpha * alpha)
        });
        MomentAt { place, direction, weight }
    }

    fn deflections(&self) -> Vec<DeflectionAt> {
        // At the upper edge nothing moves.
        let places = rectangle::deflections(self.length_m);
        let at = |place: Place| {
            let weight = self
                .table(place, |alpha, across, phase| phase.sin() * across.value / alpha.powi(4));
            DeflectionAt { place, weight }
        };
        places.into_iter().map(at).collect()
    }

    fn reactions(&self) -> Vec<ReactionAt> {
        let half_m = 0.5 * self.width_m;
        let at = |edge, x_m, s_m| self.reaction(edge, Place { x_m, s_m });
        let mut found = vec![at(Edge::Base, 0.0, 0.0), at(Edge::Top, 0.0, self.length_m)];
        let heights = (1..POINT_STRETCHES).map(|i| float(i) / float(POINT_STRETCHES));
        found.extend(heights.map(|share| at(Edge::Side, half_m, share * self.length_m)));
        found.push(at(Edge::LowerCorner, half_m, 0.0));
        found.push(at(Edge::UpperCorner, half_m, self.length_m));
        found
    }

    /// `V = -D (w_nnn + (2 - nu) w_ntt)` of an edge, n its outward normal (art. 22, eq. g); the
    /// corner force `2 D (1 - nu) w_xs` (eq. i), as it holds the corner down.
    pub(super) fn reaction(&self, edge: Edge, place: Place) -> ReactionAt {
        let nu = self.poisson;
        let weight = self.table(place, |alpha, across, phase| {
            let (sine, cosine) = phase.sin_cos();
            match edge {
                Edge::Side => sine * (across.third - (2.0 - nu) * across.first) / alpha,
                Edge::Base => (across.value - (2.0 - nu) * across.second) / alpha,
                Edge::Top => -cosine * (across.value - (2.0 - nu) * across.second) / alpha,
                Edge::LowerCorner | Edge::UpperCorner => {
                    let sign = if edge == Edge::LowerCorner { -1.0 } else { 1.0 };
                    sign * 2.0 * (1.0 - nu) * across.first * cosine / (alpha * alpha)
                }
            }
        });
        ReactionAt { edge, place, weight }
    }

    /// `w(s) = 2/L sum k_n sin(a_n s)` as a table; `pick` gives `k_n`.
    fn table(&self, place: Place, pick: impl Fn(f64, &Across, f64) -> f64) -> Table {
        let step_m = self.length_m / float(STRETCHES);
        let mut against = vec![0.0; STRETCHES + 1];
        for n in 1..=self.terms {
            let alpha = float(n) * PI / self.length_m;
            let across = Across::new(0.5 * alpha * self.width_m, alpha * place.x_m.abs());
            let k = 2.0 / self.length_m * pick(alpha, &across, alpha * place.s_m);
            // Integrals of the sine against the hats, in closed form.
            let (sine, cosine) = (alpha * step_m).sin_cos();
            let hat = 2.0 * (1.0 - cosine) / (alpha * alpha * step_m);
            let end = (1.0 - sine / (alpha * step_m)) / alpha;
            for (i, against) in against.iter_mut().enumerate().take(STRETCHES).skip(1) {
                *against += k * hat * self.sines[(n * i) % (2 * STRETCHES)];
            }
            against[0] += k * end;
            against[STRETCHES] += if n % 2 == 1 { k * end } else { -k * end };
        }
        Table::fitted(self.length_m, &against)
    }
}
