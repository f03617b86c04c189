//! Parts whose loads stand in tables: curved surfaces, and whatever has weightings of its own.
//!
//! A load is `R = p_g W + sum step_i M(h_i)` with a weighting `w(z)` that may change its sign. The
//! weighting is a list of **rows**, each over a stretch of the height and of one sign throughout:
//!
//! * even: `w = c0 + c1 t + c2 t²`, `t` above the row's lower end; exact for cones, spheres,
//!   ellipsoids of revolution and, up to the number of rows, for meshes,
//! * root: `w = (c0 + c1 t + c2 t²) / sqrt(t)`, `t` from the end where the surface lies level, up
//!   or down: arcs and whatever is tangent to a level plane,
//! * disc: the widths of a disc times a factor: a hemisphere seen from the side.
//!
//! Rows may overlap; several surfaces are summed. Each row is clipped at the liquid's surface and
//! then integrated. Because a row keeps its sign, the bound `integral w+ p_upper - integral w-
//! p_lower` is a sum over the same rows, rigorous whatever the liquid does between the two states.
//!
//! A shell of revolution hung at its rim carries `N_phi = V / (2 pi r sin phi)` along its meridians
//! and `N_theta = r_2 (p - N_phi / r_1)` around, with `V` the force on what lies between the place
//! and the apex (membrane theory; Timoshenko and Woinowsky-Krieger, Theory of Plates and Shells).
//! They are looked at in a list of places.

use crate::lane::Lane;
use crate::liquid::States;
use crate::pressure::Pressure;
use crate::shape::disc_prism;
use core::f32::consts::PI;

/// Numbers of a row.
pub const ROW_NUMBERS: usize = 5;
/// Numbers of a place.
pub const PLACE_NUMBERS: usize = 4;
/// A row: its lower end (m), its length (m), c0, c1, c2. A root row begins at its level end and
/// has a negative length when it runs down from there. A disc: lowest point, radius, factor.
pub type Row = [f32; ROW_NUMBERS];
/// A place on a shell: its height above the part's lowest point (m), `N_phi` per force (1/m),
/// `N_theta` per pressure (m), `N_theta` per force taken off (1/m).
pub type Place = [f32; PLACE_NUMBERS];

/// How a row is meant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RowKind {
    /// A polynomial.
    Even,
    /// A polynomial over the root.
    Root,
    /// A disc.
    Disc,
}

/// A part of two tables, the force along angle 0 and the force upwards, whose rows stand in
/// [`crate::plan::Plan::numbers`]: even, root and disc rows of the first, then of the second, then
/// the places.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Curved {
    /// Place of the first number.
    pub first: u16,
    /// Even, root and disc rows of each force.
    pub rows: [[u8; 3]; 2],
    /// Places at which the tensions of the shell are looked at.
    pub places: u8,
    /// Whether its apex is its highest point.
    pub apex_up: bool,
}

/// Tensions of a shell at its places, N/m, positive in tension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tensions<const N: usize> {
    /// Largest and least of the estimate.
    pub estimate: [Lane<N>; 2],
    /// The largest that any of the states allows.
    pub most: Lane<N>,
    /// The least.
    pub least: Lane<N>,
}

const KINDS: [RowKind; 3] = [RowKind::Even, RowKind::Root, RowKind::Disc];

/// `integral w dz` of a row.
#[must_use]
pub fn weight(kind: RowKind, &[_, length_m, c0, c1, c2]: &Row) -> f32 {
    let x = if length_m < 0.0 { -length_m } else { length_m };
    match kind {
        RowKind::Even => x * (c0 + x * (c1 * 0.5 + x * (c2 * (1.0 / 3.0)))),
        RowKind::Root => 2.0 * libm::sqrtf(x) * (c0 + x * (c1 * (1.0 / 3.0) + x * (c2 * 0.2))),
        RowKind::Disc => PI * x * x * c0,
    }
}

/// `integral over z < h of (h - z) w dz` of a row; `y_m` is the surface above the part's lowest
/// point.
#[must_use]
#[inline]
pub fn prism<const N: usize>(kind: RowKind, row: &Row, y_m: Lane<N>) -> Lane<N> {
    let [low_m, length_m, c0, c1, c2] = *row;
    let d = y_m - low_m;
    match kind {
        RowKind::Even => {
            let x = d.ramp().at_most(Lane::splat(length_m));
            let (half, third) = (d * 0.5, d * (1.0 / 3.0));
            let second = (third - x * 0.25) * c2;
            let first = (half - x * (1.0 / 3.0)) * c1 + x * second;
            x * ((d - x * 0.5) * c0 + x * first)
        }
        RowKind::Root if length_m > 0.0 => {
            let x = d.ramp().at_most(Lane::splat(length_m));
            rooted([c0, c1, c2], x, d, -1.0)
        }
        RowKind::Root => {
            // From the top down: all of it less what is dry.
            let dry = (-d).ramp().at_most(Lane::splat(-length_m));
            rooted([c0, c1, c2], Lane::splat(-length_m), d, 1.0) - rooted([c0, c1, c2], dry, d, 1.0)
        }
        RowKind::Disc => {
            disc_prism(d / Lane::splat(length_m)) * (c0 * length_m * length_m * length_m)
        }
    }
}

/// `integral from 0 to x of (d + side t) (c0 + c1 t + c2 t²) / sqrt(t) dt`.
#[inline(never)]
fn rooted<const N: usize>([c0, c1, c2]: [f32; 3], x: Lane<N>, d: Lane<N>, side: f32) -> Lane<N> {
    let along = x * side;
    let first = (d * 2.0 + along * (2.0 / 3.0)) * c0;
    let second = (d * (2.0 / 3.0) + along * 0.4) * c1;
    let third = (d * 0.4 + along * (2.0 / 7.0)) * c2;
    x.root() * (first + x * (second + x * third))
}

/// The force of one state on a row.
#[inline(never)]
fn on_row<const N: usize>(
    kind: RowKind,
    row: &Row,
    weight: f32,
    bottom_m: f32,
    state: &Pressure<N>,
) -> Lane<N> {
    let mut sum = state.gas_pa * weight;
    for surface in state.surfaces() {
        let y_m = surface.height_m - bottom_m;
        if !y_m.none_positive() {
            sum = sum + surface.step_n_m3 * prism(kind, row, y_m);
        }
    }
    sum
}

/// Adds what a row carries of the estimate, at most and at least.
#[inline(never)]
pub(super) fn add_row<const N: usize>(
    sums: &mut [Lane<N>; 3],
    kind: RowKind,
    row: &Row,
    bottom_m: f32,
    [estimate, upper, lower]: [&Pressure<N>; 3],
) {
    let weight = weight(kind, row);
    let states = if weight < 0.0 { [estimate, lower, upper] } else { [estimate, upper, lower] };
    for (sum, state) in sums.iter_mut().zip(states) {
        *sum = *sum + on_row(kind, row, weight, bottom_m, state);
    }
}

impl Curved {
    /// How many numbers it has in the plan.
    #[must_use]
    pub fn count(&self) -> usize {
        let rows: usize = self.rows.as_flattened().iter().copied().map(usize::from).sum();
        ROW_NUMBERS * rows + PLACE_NUMBERS * usize::from(self.places)
    }

    /// Its own numbers in the plan; none where the plan is short.
    #[must_use]
    pub fn numbers<'a>(&self, numbers: &'a [f32]) -> &'a [f32] {
        let from = numbers.get(usize::from(self.first)..).unwrap_or(&[]);
        from.get(..self.count()).unwrap_or(&[])
    }

    /// The rows of a force: 0 along angle 0, 1 upwards.
    pub fn rows_of<'a>(
        &self,
        force: usize,
        numbers: &'a [f32],
    ) -> impl Iterator<Item = (RowKind, &'a Row)> + use<'a> {
        let [x, z] = self.rows;
        let sum = |counts: [u8; 3]| counts.into_iter().map(usize::from).sum::<usize>();
        let (skip, counts) = if force == 0 { (0, x) } else { (sum(x), z) };
        let (rows, _) = self.numbers(numbers).as_chunks::<ROW_NUMBERS>();
        let kinds = KINDS.into_iter().zip(counts);
        let kinds = kinds.flat_map(|(kind, count)| core::iter::repeat_n(kind, usize::from(count)));
        kinds.zip(rows.iter().skip(skip))
    }

    /// The places of its tensions.
    #[must_use]
    pub fn places_of<'a>(&self, numbers: &'a [f32]) -> &'a [Place] {
        let own = self.numbers(numbers);
        let rows = own.len().saturating_sub(PLACE_NUMBERS * usize::from(self.places));
        own.get(rows..).map_or(&[], |places| places.as_chunks().0)
    }

    /// A force, N: of the estimate, the largest and the least signed that the states allow.
    ///
    /// Error against the rows: 2e-6 of `integral |p| |w| dz`; that of the rows against the surface
    /// is stated where they are made.
    #[must_use]
    #[inline(never)]
    pub fn force<const N: usize>(
        &self,
        force: usize,
        numbers: &[f32],
        bottom_m: f32,
        [estimate, upper, lower]: [&Pressure<N>; 3],
    ) -> [Lane<N>; 3] {
        let mut sums = [Lane::ZERO; 3];
        for (kind, row) in self.rows_of(force, numbers) {
            add_row(&mut sums, kind, row, bottom_m, [estimate, upper, lower]);
        }
        sums
    }

    /// The tensions around the axis (`hoop`) or along the meridians.
    ///
    /// Exact at the places; between them up to what their host states is missed. The bounds hold
    /// for every gas pressure and every pressure of the liquid between the states, each for
    /// itself. Where a reading ties one to the other and the liquid may reach the shell, they hold
    /// for every pressure of both together, which is wider.
    #[must_use]
    #[inline(never)]
    pub fn tensions<const N: usize>(
        &self,
        hoop: bool,
        numbers: &[f32],
        bottom_m: f32,
        states: &States<N>,
    ) -> Tensions<N> {
        let none = Lane::ZERO;
        let States { estimate, upper, lower, .. } = states;
        let one = Lane::splat(1.0);
        let mut alone = one;
        if let (true, Some(top)) = (states.tied, upper.surfaces().first()) {
            // Under the least gas the surface stands highest.
            let more_pa = upper.gas_pa - lower.gas_pa;
            let highest_m = top.height_m + more_pa / top.step_n_m3;
            alone = (highest_m - bottom_m).positive_selects(none, one);
        }
        let three = [estimate, upper, lower];
        let mut found: Option<Tensions<N>> = None;
        let row = self.rows_of(1, numbers).next().map_or([0.0; ROW_NUMBERS], |(_, row)| *row);
        for place in self.places_of(numbers) {
            let [estimate, upper, lower] =
                at_place(hoop, place, &row, self.apex_up, bottom_m, alone, three);
            let here = Tensions { estimate: [estimate; 2], most: upper, least: lower };
            found = Some(match found {
                None => here,
                Some(so_far) => so_far.with(&here),
            });
        }
        found.unwrap_or(Tensions { estimate: [none; 2], most: none, least: none })
    }
}

impl<const N: usize> Tensions<N> {
    /// The extremes of two places or directions.
    #[must_use]
    pub fn with(&self, other: &Self) -> Self {
        let ([most, least], [other_most, other_least]) = (self.estimate, other.estimate);
        Self {
            estimate: [most.at_least(other_most), least.at_most(other_least)],
            most: self.most.at_least(other.most),
            least: self.least.at_most(other.least),
        }
    }
}

/// A tension at a place: of the estimate, the largest and the least.
///
/// It is `around p - taken V`, along the meridians `along V`. The gas presses alike on all of the
/// shell: taken alone (1, else 0) its share is one number times its pressure, and only what is left
/// is bounded by each term at its own end.
fn at_place<const N: usize>(
    hoop: bool,
    &[y_m, along, around, taken]: &Place,
    &[low_m, length_m, c0, c1, _]: &Row,
    apex_up: bool,
    bottom_m: f32,
    alone: Lane<N>,
    states: [&Pressure<N>; 3],
) -> [Lane<N>; 3] {
    let (per_force, per_pressure) = if hoop { (-taken, around) } else { (along, 0.0) };
    // What lies between the place and the apex.
    let [from, to] = if apex_up { [y_m, low_m + length_m] } else { [low_m, y_m] };
    let row = [from, to - from, c0 + c1 * (from - low_m), c1, 0.0];
    let weight = weight(RowKind::Even, &row);
    let per_gas = per_pressure + per_force * weight;
    let z_m = Lane::splat(bottom_m + y_m);
    let [estimate, upper, lower] = states.map(|state| {
        let gas_pa = state.gas_pa * alone;
        let force = on_row(RowKind::Even, &row, 0.0, bottom_m, state);
        let force = (force + (state.gas_pa - gas_pa) * weight) * per_force;
        [force, (state.at(z_m) - gas_pa) * per_pressure, gas_pa * per_gas]
    });
    let [force, pressure, gas] = estimate;
    let most = upper[0].at_least(lower[0]) + upper[1] + upper[2].at_least(lower[2]);
    let least = upper[0].at_most(lower[0]) + lower[1] + upper[2].at_most(lower[2]);
    [force + pressure + gas, most, least]
}
