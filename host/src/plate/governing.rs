//! The points of a plate that govern: few enough for a plan, and proof that no other carries more.
//!
//! Liquid standing to any level, layers in it and gas above it press with a sum of loads of three
//! kinds: linear from a surface on the plate down, linear over the whole plate, and even. Every
//! checked moment (and deflection, as a share of the one allowed) is linear in that sum. So a point
//! P needs no table of its own where numbers `a_j >= 0` with sum one exist such that
//!
//! ```text
//! M_P(h) <= sum a_j M_j(h) + k F(h)    for every level h, and for the even load
//! ```
//!
//! for then no such pressure bends P more than the worst of the points j, and `k` times the
//! pressure at the foot. The least `k` is a linear programme with a row for each chosen point. `F`
//! is a weighting at the foot; with `k F` added to every table no checked moment is ever
//! underestimated, and what that costs at the levels that matter is measured. Points are added,
//! the worst first, until `k` is small or the plan's numbers are spent.

mod fit;
mod programme;
#[cfg(test)]
mod tests;

use super::{Table, float};
use fit::Fitter;
use strake_core::part::plate::NODE_NUMBERS;

/// Levels on the plate at which the programme is solved; the proof looks at [`FINE`].
const LEVELS: usize = 48;
/// Levels at which the answer is proved.
const FINE: usize = 768;
/// Aim for `k`, as a share of the largest moment when wetted to the top.
const AIM: f64 = 4e-3;
/// How well the nodes of a point follow its weighting, likewise; tried one after the other.
const FITS: [f64; 3] = [2e-3, 5e-3, 1.2e-2];
/// From this share of the length up the excess is measured.
const COUNTED: f64 = 0.5;
/// Steps from no liquid to no gas in which it is measured.
const GAS: usize = 12;
/// Largest `k` with which the tables are still of use.
const MOST: f64 = 5e-2;
/// Most points.
const POINTS_MAX: usize = 8;

/// A moment or deflection that is judged.
#[derive(Clone, Debug)]
pub struct Checked<'a> {
    /// Its influence function.
    pub weight: &'a Table,
    /// Factor that makes it a moment of the capacity it is held against.
    pub scale: f64,
}

/// Tables of the points that govern.
#[derive(Clone, Debug, PartialEq)]
pub struct Governing {
    /// For each point its nodes: height above the lowest edge and weighting, as the plan has them.
    pub points: Vec<Vec<[f32; 2]>>,
    /// Largest share by which they exceed the largest of all checked ones under one liquid, wetted
    /// from half of the length up, and gas. They never fall below it.
    pub excess: f64,
}

impl Governing {
    /// The weighting of each point up the slope, on a slope with that sine.
    pub fn tables(&self, sine: f64) -> impl Iterator<Item = Table> + '_ {
        self.points.iter().map(move |nodes| table(nodes, sine))
    }

    /// Nodes of all points.
    #[must_use]
    pub fn nodes(&self) -> usize {
        self.points.iter().map(Vec::len).sum()
    }
}

/// Loads of unit pressure at the foot: from surfaces on the plate, and the even one.
struct Loads {
    levels_m: Vec<f64>,
}

impl Loads {
    /// Closer near the foot.
    fn new(count: usize, length_m: f64) -> Self {
        let share = |i: usize| float(i) / float(count);
        Self { levels_m: (1..=count).map(|i| length_m * share(i).powf(1.5)).collect() }
    }

    fn under(&self, weight: &Table, scale: f64) -> Vec<f64> {
        let wetted = self.levels_m.iter().map(|&h_m| scale * weight.ramp(h_m) / h_m);
        wetted.chain([scale * weight.total()]).collect()
    }
}

/// Chooses the points, for a plate of a length up a slope of which `sine` is given, with at most
/// `numbers` numbers; `None` where so few do not serve.
#[must_use]
pub fn choose(
    checked: &[Checked<'_>],
    (length_m, sine): (f64, f64),
    numbers: usize,
) -> Option<Governing> {
    if checked.is_empty() {
        return None;
    }
    // As even pressure bends it.
    let forward = checked.iter().map(|one| one.scale.copysign(one.scale * one.weight.total()));
    let forward: Vec<f64> = forward.collect();
    let mut search = Search::new(checked, &forward, (length_m, sine));
    let fitter = Fitter::new(length_m);
    let mut best: Option<(f64, Governing)> = None;
    for within in FITS {
        let fit = |point: usize, most: f64| {
            fitter.fit(checked[point].weight, forward[point], within * most)
        };
        let Some(proof) = search.run(fit, numbers) else { continue };
        if best.as_ref().is_none_or(|(k, _)| proof.k < *k)
            && let Some(governing) = search.finish(&proof)
        {
            best = Some((proof.k, governing));
        }
        if proof.k <= AIM * search.largest() {
            break;
        }
    }
    best.map(|(_, governing)| governing)
}

/// What is known of a set of points.
struct Proof {
    /// The least `k`.
    k: f64,
    /// The point that needs it.
    worst: usize,
    /// For each checked point, forward then backward, the numbers `a`.
    shares: Vec<[Vec<f64>; 2]>,
}

struct Search {
    loads: [Loads; 2],
    /// The point that carries most when wetted to the top.
    first: usize,
    /// Of each checked point as even pressure bends it, on both sets of levels.
    targets: [Vec<Vec<f64>>; 2],
    chosen: Vec<Chosen>,
    /// Longest first stretch of a table: the foot weighting of least effect.
    first_m: f64,
    scale: (f64, f64),
}

struct Chosen {
    nodes: Vec<[f32; 2]>,
    under: [Vec<f64>; 2],
}

/// The table that the plan's nodes are.
fn table(nodes: &[[f32; 2]], sine: f64) -> Table {
    Table::new(nodes.iter().map(|&[y_m, w]| (f64::from(y_m) / sine, f64::from(w) * sine)))
}

#[expect(clippy::cast_possible_truncation, reason = "numbers of a plan")]
const fn single(value: f64) -> f32 {
    value as f32
}

impl Search {
    fn new(checked: &[Checked<'_>], forward: &[f64], scale: (f64, f64)) -> Self {
        let loads = [Loads::new(LEVELS, scale.0), Loads::new(FINE, scale.0)];
        let under = |loads: &Loads| -> Vec<Vec<f64>> {
            let all = checked.iter().zip(forward);
            all.map(|(one, &scale)| loads.under(one.weight, scale)).collect()
        };
        let targets = [under(&loads[0]), under(&loads[1])];
        let full = |point: &usize| targets[0][*point][LEVELS - 1];
        let first = (0..checked.len()).max_by(|a, b| full(a).total_cmp(&full(b))).unwrap_or(0);
        Self { loads, first, targets, chosen: Vec::new(), first_m: 0.0, scale }
    }

    /// The largest load when wetted to the top, for a unit pressure at the foot.
    fn largest(&self) -> f64 {
        self.targets[0].get(self.first).map_or(0.0, |target| target[LEVELS - 1])
    }

    /// Adds points, the worst first; `None` where so few numbers do not serve.
    fn run(
        &mut self,
        fit: impl Fn(usize, f64) -> Vec<(f64, f64)>,
        numbers: usize,
    ) -> Option<Proof> {
        let largest = self.largest();
        self.keep(0);
        let (mut next, mut spent) = (self.first, 0);
        let mut picked = Vec::new();
        // Least `k`, and the points that it takes: one more may help only with the next.
        let mut best = (f64::INFINITY, 0);
        while self.chosen.len() < POINTS_MAX && !picked.contains(&next) {
            let nodes = fit(next, largest);
            // One more where the weighting at the foot changes its sign.
            let turns = nodes.get(1).is_some_and(|(_, w)| *w < 0.0);
            spent += NODE_NUMBERS * (nodes.len() + usize::from(turns));
            if nodes.len() < 2 || spent > numbers {
                break;
            }
            picked.push(next);
            self.add(&nodes);
            let found = self.proof();
            if found.k < 0.97 * best.0 {
                best = (found.k, self.chosen.len());
            }
            if found.k <= AIM * largest {
                break;
            }
            next = found.worst;
        }
        self.keep(best.1);
        let proof = (best.1 > 0).then(|| self.proof());
        proof.filter(|proof| proof.k <= MOST * largest)
    }

    /// The nodes as the plan has them: heights, and weights per height.
    fn rounded(&self, nodes: &[(f64, f64)]) -> Vec<[f32; 2]> {
        let (_, sine) = self.scale;
        nodes.iter().map(|&(s_m, w)| [single(s_m * sine), single(w / sine)]).collect()
    }

    fn table(&self, nodes: &[[f32; 2]]) -> Table {
        table(nodes, self.scale.1)
    }

    fn add(&mut self, nodes: &[(f64, f64)]) {
        let nodes = self.rounded(nodes);
        let table = self.table(&nodes);
        let under = [0, 1].map(|set: usize| self.loads[set].under(&table, 1.0));
        self.chosen.push(Chosen { nodes, under });
        self.keep(self.chosen.len());
    }

    /// Keeps the first points only.
    fn keep(&mut self, count: usize) {
        self.chosen.truncate(count);
        let first_m = self.chosen.iter().filter_map(|one| one.nodes.get(1));
        let first_m = first_m.map(|node| f64::from(node[0]) / self.scale.1);
        self.first_m = first_m.fold(0.0, f64::max);
    }

    /// A weighting at the foot with unit integral, straight to nothing at the end of the first
    /// stretch.
    fn foot(&self) -> Table {
        Table::new([(0.0, 2.0 / self.first_m), (self.first_m, 0.0)])
    }

    fn proof(&self) -> Proof {
        let foot = self.foot();
        let [coarse, fine] = [0, 1].map(|set: usize| self.loads[set].under(&foot, 1.0));
        let chosen: Vec<&[f64]> = self.chosen.iter().map(|one| &*one.under[0]).collect();
        let mut proof = Proof { k: 0.0, worst: 0, shares: Vec::new() };
        let (mut worst_forward, mut of_worst) = (0, f64::NEG_INFINITY);
        for index in 0..self.targets[0].len() {
            let shares = [1.0, -1.0].map(|sign| {
                let target: Vec<f64> = self.targets[0][index].iter().map(|x| sign * x).collect();
                let shares = programme::shares(&target, &chosen, &coarse);
                let left = self.targets[1][index].iter().enumerate().map(|(load, x)| {
                    let covered: f64 = self
                        .chosen
                        .iter()
                        .zip(&shares)
                        .map(|(one, a)| a * one.under[1][load])
                        .sum();
                    (sign * x - covered) / fine[load]
                });
                let k = left.fold(0.0, f64::max);
                proof.k = proof.k.max(k);
                if sign > 0.0 && k > of_worst {
                    (worst_forward, of_worst) = (index, k);
                }
                shares
            });
            proof.shares.push(shares);
        }
        proof.worst = worst_forward;
        proof
    }

    /// Adds the foot weighting to every table and proves the answer once more as it is rounded.
    fn finish(&self, proof: &Proof) -> Option<Governing> {
        let mut k = proof.k;
        for _ in 0..8 {
            let points: Vec<Vec<[f32; 2]>> =
                self.chosen.iter().map(|one| Self::lifted(one, k)).collect();
            let tables: Vec<Vec<f64>> =
                points.iter().map(|nodes| self.loads[1].under(&self.table(nodes), 1.0)).collect();
            if self.covers(proof, &tables) {
                return Some(Governing { excess: self.excess(&tables), points });
            }
            k = 1.02 * k + 1e-9 * self.targets[1].iter().flatten().fold(0.0, |m, x| x.abs().max(m));
        }
        None
    }

    fn lifted(one: &Chosen, k: f64) -> Vec<[f32; 2]> {
        let mut nodes = one.nodes.clone();
        let &[[_, foot], [first_m, next], ..] = nodes.as_slice() else { return nodes };
        let lifted = foot + single(2.0 * k / f64::from(first_m));
        nodes[0][1] = lifted;
        if next < 0.0 {
            nodes.insert(1, [first_m * (lifted / (lifted - next)), 0.0]);
        }
        nodes
    }

    fn covers(&self, proof: &Proof, tables: &[Vec<f64>]) -> bool {
        let all = self.targets[1].iter().zip(&proof.shares);
        all.into_iter().all(|(target, both)| {
            both.iter().zip([1.0, -1.0]).all(|(shares, sign)| {
                target.iter().enumerate().all(|(load, x)| {
                    let covered: f64 = tables.iter().zip(shares).map(|(t, a)| a * t[load]).sum();
                    sign * x <= covered + 1e-7 * x.abs()
                })
            })
        })
    }

    /// Under one liquid and gas: `t` of the liquid's share of the pressure at the foot, the rest
    /// even.
    fn excess(&self, tables: &[Vec<f64>]) -> f64 {
        let (length_m, _) = self.scale;
        let levels_m = &self.loads[1].levels_m;
        let even = levels_m.len();
        let counted = (0..even).filter(|&load| levels_m[load] >= COUNTED * length_m);
        let excess = counted.step_by(8).chain([even - 1]).flat_map(|load| {
            (0..=GAS).map(move |part| {
                let t = float(part) / float(GAS);
                let most = |all: &[Vec<f64>]| {
                    let each = all.iter().map(|one| t * one[load] + (1.0 - t) * one[even]);
                    each.fold(0.0, |most: f64, x| most.max(x.abs()))
                };
                most(tables) / most(&self.targets[1]) - 1.0
            })
        });
        excess.fold(0.0, f64::max)
    }
}
