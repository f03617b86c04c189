//! A weighting with few nodes in the place of one with many.
//!
//! What counts is not the weighting but its loads: under linear pressure from any surface on the
//! plate, and under even pressure. Nodes are set one by one where they serve best and then moved
//! about; the weights there follow by least squares over those loads.

use super::super::linear::Factor;
use super::{Loads, Table, float};

/// Places where a node may stand: this many stretches and one.
const PLACES: usize = 48;
/// Most nodes, before those where the sign changes.
const NODES_MAX: usize = 9;
/// Levels over which the loads are compared.
const LEVELS: usize = 96;
/// How often the even load counts.
const EVEN: f64 = 8.0;
/// How far a node is moved at once.
const MOVE: usize = 3;
/// Weights below this share of the largest are taken as none.
const NONE: f64 = 5e-3;

pub(super) struct Fitter {
    length_m: f64,
    loads: Loads,
    /// Loads of `(s - s_i)+` for each place.
    ramps: Vec<Vec<f64>>,
    /// Their products with each other.
    products: Vec<Vec<f64>>,
}

/// What is fitted: its loads, and their products with those of each place.
struct Target {
    loads: Vec<f64>,
    products: Vec<f64>,
}

/// Weights of up to three places: the ramps whose sum is a node.
type Hat = [(usize, f64); 3];

/// Nodes at places, with what they give.
#[derive(Clone)]
struct Fit {
    places: Vec<usize>,
    weights: Vec<f64>,
    off: f64,
}

impl Fitter {
    pub(super) fn new(length_m: f64) -> Self {
        let loads = Loads::new(LEVELS, length_m);
        let place_m = |i: usize| length_m * float(i) / float(PLACES);
        let ramp = |i: usize| {
            let above_m = |h_m: f64| (h_m - place_m(i)).max(0.0);
            let wetted = loads.levels_m.iter().map(|&h_m| above_m(h_m).powi(3) / (6.0 * h_m));
            wetted.chain([0.5 * above_m(length_m).powi(2)]).collect::<Vec<f64>>()
        };
        let ramps: Vec<Vec<f64>> = (0..=PLACES).map(ramp).collect();
        let products =
            ramps.iter().map(|a| ramps.iter().map(|b| product(a, b)).collect()).collect();
        Self { length_m, loads, ramps, products }
    }

    /// Nodes `(s, w)` whose loads differ by at most `within` under unit pressure at the foot, where
    /// so many nodes reach that. A load at the held lowest edge bends nothing: the first weight is
    /// zero; the last, too, unless it stands on a free upper edge.
    pub(super) fn fit(&self, weight: &Table, scale: f64, within: f64) -> Vec<(f64, f64)> {
        let loads = self.loads.under(weight, scale);
        let products = self.ramps.iter().map(|ramp| product(ramp, &loads)).collect();
        let target = Target { loads, products };
        let mut best = self.solved(vec![0, PLACES / 4, PLACES], &target);
        best = self.moved(best, &target);
        while best.places.len() < NODES_MAX && best.off > within {
            let grown = (1..PLACES).filter(|place| !best.places.contains(place)).map(|place| {
                let mut with = best.places.clone();
                with.push(place);
                with.sort_unstable();
                self.solved(with, &target)
            });
            let Some(grown) = grown.min_by(|a, b| a.off.total_cmp(&b.off)) else { break };
            best = self.moved(grown, &target);
        }
        self.nodes(&best)
    }

    /// The nodes moved one by one, as long as it serves.
    fn moved(&self, mut best: Fit, target: &Target) -> Fit {
        for _ in 0..4 {
            let before = best.off;
            for node in 1..best.places.len() {
                let low = best.places[node - 1] + 1;
                let high = best.places.get(node + 1).map_or(PLACES, |next| next - 1);
                let own = best.places[node];
                for place in low.max(own.saturating_sub(MOVE))..=high.min(own + MOVE) {
                    let mut places = best.places.clone();
                    places[node] = place;
                    let one = self.solved(places, target);
                    if one.off < best.off {
                        best = one;
                    }
                }
            }
            if best.off > 0.98 * before {
                break;
            }
        }
        best
    }

    /// The node at a place between two others; of the last one half of it.
    fn hat(&self, places: &[usize], node: usize) -> Hat {
        let slope = |a: usize, b: usize| float(PLACES) / (float(b - a) * self.length_m);
        let (before, own) = (places[node - 1], places[node]);
        let rising = slope(before, own);
        match places.get(node + 1) {
            Some(&after) => {
                let falling = slope(own, after);
                [(before, rising), (own, -rising - falling), (after, falling)]
            }
            // Up to the upper edge alone.
            None => [(before, rising), (own, -rising), (own, 0.0)],
        }
    }

    fn solved(&self, places: Vec<usize>, target: &Target) -> Fit {
        let free_end = places.last() == Some(&PLACES);
        let unknown = if free_end { places.len() - 1 } else { places.len() - 2 };
        let hats: Vec<Hat> = (1..=unknown).map(|node| self.hat(&places, node)).collect();
        let over = |hat: &Hat, of: &dyn Fn(usize) -> f64| -> f64 {
            hat.iter().map(|&(place, share)| share * of(place)).sum()
        };
        let mut weights: Vec<f64> =
            hats.iter().map(|hat| over(hat, &|place| target.products[place])).collect();
        let factor = Factor::new(unknown, |row, column| {
            let product = over(&hats[row], &|a| over(&hats[column], &|b| self.products[a][b]));
            if row == column { product * (1.0 + 1e-12) } else { product }
        });
        let Some(factor) = factor else {
            return Fit { places, weights: Vec::new(), off: f64::INFINITY };
        };
        factor.solve(&mut weights);
        let mut left = target.loads.clone();
        for (hat, w) in hats.iter().zip(&weights) {
            for &(place, share) in hat {
                for (left, ramp) in left.iter_mut().zip(&self.ramps[place]) {
                    *left -= w * share * ramp;
                }
            }
        }
        let off = left.iter().fold(0.0_f64, |most, x| most.max(x.abs()));
        Fit { places, weights, off }
    }

    /// The nodes, and those where the weighting changes its sign.
    fn nodes(&self, fit: &Fit) -> Vec<(f64, f64)> {
        let largest = fit.weights.iter().fold(0.0_f64, |most, w| most.max(w.abs()));
        let weights = fit.weights.iter().map(|&w| if w.abs() < NONE * largest { 0.0 } else { w });
        let weights = [0.0].into_iter().chain(weights).chain([0.0]);
        let mut nodes: Vec<(f64, f64)> = Vec::new();
        for (&place, w) in fit.places.iter().zip(weights) {
            let s_m = self.length_m * float(place) / float(PLACES);
            if let Some(&(before_m, before)) = nodes.last()
                && before * w < 0.0
            {
                nodes.push((before_m + (s_m - before_m) * before / (before - w), 0.0));
            }
            nodes.push((s_m, w));
        }
        // Nothing stands above the last weight.
        while let [.., (_, a), (_, b)] = nodes.as_slice()
            && a.abs() + b.abs() <= 0.0
        {
            nodes.pop();
        }
        nodes
    }
}

fn product(a: &[f64], b: &[f64]) -> f64 {
    let even = a.last().zip(b.last()).map_or(0.0, |(a, b)| (EVEN - 1.0) * a * b);
    a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>() + even
}
