//! One part under the three pressure states: its loads and its utilisation.

use super::{
    Capacities, Curved, DESIGN_PRESSURE_FLOOR_PA, DesignState, Geometry, Part, Stated,
    UTILISATION_MAX,
};
use crate::lane::Lane;
use crate::liquid::States;
use crate::plan::Plan;
use crate::pressure::{Pressure, Resultant};
use crate::shape::Face;

/// Loads of a part under one state. What a part does not have stays zero.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Loads<const N: usize> {
    /// At the design point of a course, else the largest on the part (the least under the inward
    /// bound), Pa gauge.
    pub pressure_pa: Lane<N>,
    /// Hoop tension of a course, N/m; of a shell of revolution the largest tension in any
    /// direction and place, under the inward bound the least.
    pub hoop_tension_n_m: Lane<N>,
    /// Force on a plane part, N, positive from the liquid outwards; of a curved part its size.
    pub force_n: Lane<N>,
    /// Force on a curved part along angle 0, N.
    pub force_x_n: Lane<N>,
    /// Force on a curved part upwards, N.
    pub force_z_n: Lane<N>,
    /// Moment about the level line through the centroid, N m; of the estimate only.
    pub moment_centroid_n_m: Lane<N>,
    /// Largest share of a bolt, or force on a pin or hinge line (the least under the inward bound),
    /// N, positive in tension against outward motion.
    pub bolt_n: Lane<N>,
    /// Moment about the hinge or pivot, N m, positive when it turns the cover outward; about a
    /// pivot, when it pushes the upper side outward. Of a panel the largest bending moment of its
    /// plate, N m/m, positive as pressure from the liquid bends it.
    pub moment_n_m: Lane<N>,
}

/// What is computed of a part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PartLoads<const N: usize> {
    /// Under the estimated state.
    pub estimate: Loads<N>,
    /// Largest signed loads over all states that the reading allows.
    pub outward: Loads<N>,
    /// Least signed loads over all states that the reading allows.
    pub inward: Loads<N>,
    /// Outward utilisation of the estimate.
    pub utilisation: Lane<N>,
    /// Outward utilisation of the bound.
    pub utilisation_bound: Lane<N>,
    /// Inward utilisation of the bound; zero without an inward capacity.
    pub utilisation_inward: Lane<N>,
}

impl<const N: usize> Loads<N> {
    const NONE: Self = Self {
        pressure_pa: Lane::ZERO,
        hoop_tension_n_m: Lane::ZERO,
        force_n: Lane::ZERO,
        force_x_n: Lane::ZERO,
        force_z_n: Lane::ZERO,
        moment_centroid_n_m: Lane::ZERO,
        bolt_n: Lane::ZERO,
        moment_n_m: Lane::ZERO,
    };

    /// Hoop tension `p D / 2` at the design point (thin cylinder; Timoshenko, Strength of
    /// Materials).
    #[inline]
    fn put_course(&mut self, pressure_pa: Lane<N>, half_diameter_m: f32) {
        self.pressure_pa = pressure_pa;
        self.hoop_tension_n_m = pressure_pa * half_diameter_m;
    }

    #[inline]
    fn put_plane(&mut self, pressure_pa: Lane<N>, force_n: Lane<N>) {
        self.pressure_pa = pressure_pa;
        self.force_n = force_n;
    }
}

impl<const N: usize> PartLoads<N> {
    /// No load.
    pub(crate) const NONE: Self = Self {
        estimate: Loads::NONE,
        outward: Loads::NONE,
        inward: Loads::NONE,
        utilisation: Lane::ZERO,
        utilisation_bound: Lane::ZERO,
        utilisation_inward: Lane::ZERO,
    };
}

/// All loads and utilisations of one part.
///
/// Error of each load against the exact integral: 2e-6 of `integral |p| |w| dz`, the pressures of
/// gas, liquid inside and liquid outside counted apart (a vacuum may cancel the others). Where the
/// surface follows from a head sensor, also what one f32 step of its height adds.
#[must_use]
pub fn evaluate<const N: usize>(plan: &Plan, part: &Part, states: &States<N>) -> PartLoads<N> {
    let mut loads = PartLoads::NONE;
    evaluate_into(plan, part, states, &mut loads);
    loads
}

/// [`evaluate`] into room that is already there: on the device a copy costs as much as a part. The
/// room must come from [`PartLoads::NONE`] or from a part of the same kind: what the kind does not
/// have is not written.
#[inline(never)]
pub(crate) fn evaluate_into<const N: usize>(
    plan: &Plan,
    part: &Part,
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    let less;
    let states = if part.outside == 0 {
        states
    } else {
        less = acting(plan, part, states);
        &less
    };
    judge(plan, part, states, loads);
}

/// The states as they act on one part: those of the tank, less the liquid that stands against the
/// part's outside.
#[must_use]
pub fn acting<const N: usize>(plan: &Plan, part: &Part, states: &States<N>) -> States<N> {
    let mut with = states.clone();
    for (bit, outside) in plan.outside.iter().enumerate() {
        if part.outside & (1 << bit) == 0 {
            continue;
        }
        let g = plan.gravity_m_s2;
        let relief_m = Lane::splat(outside.lowest_m);
        let band = outside.density;
        // Relief counts at the proven lowest level only, load from outside at the highest.
        with.estimate.add(relief_m, Lane::splat(-(band.estimate_kg_m3 * g)));
        with.upper.add(relief_m, Lane::splat(-(band.low_kg_m3 * g)));
        with.lower.add(Lane::splat(outside.highest_m), Lane::splat(-(band.high_kg_m3 * g)));
    }
    with
}

fn judge<const N: usize>(plan: &Plan, part: &Part, states: &States<N>, loads: &mut PartLoads<N>) {
    let States { estimate, upper, lower, .. } = states;
    match &part.geometry {
        Geometry::Course { half_diameter_m, design_point_m, .. } => {
            let point_m = Lane::splat(*design_point_m);
            loads.estimate.put_course(estimate.at(point_m), *half_diameter_m);
            loads.outward.put_course(upper.at(point_m), *half_diameter_m);
            loads.inward.put_course(lower.at(point_m), *half_diameter_m);
        }
        Geometry::Plane { shape, cover, .. } => {
            let face = Face { shape, numbers: &plan.numbers, bottom_m: part.bottom_m };
            let middle = estimate.on(&face);
            let most = upper.on(&face);
            let least = lower.on(&face);
            loads.estimate.put_plane(largest_pressure(part, estimate, &middle), middle.force_n);
            loads.estimate.moment_centroid_n_m = middle.moment_n_m;
            loads.outward.put_plane(largest_pressure(part, upper, &most), most.force_n);
            loads.inward.put_plane(least_pressure(part, lower), least.force_n);
            let pressings = [(estimate, &middle), (upper, &most), (lower, &least)];
            let [moment, held] = match cover {
                None => [[Lane::ZERO; 3]; 2],
                Some(cover) => cover.reactions(&face, &pressings),
            };
            [loads.estimate.bolt_n, loads.outward.bolt_n, loads.inward.bolt_n] = held;
            [loads.estimate.moment_n_m, loads.outward.moment_n_m, loads.inward.moment_n_m] = moment;
        }
        Geometry::Curved(curved) => judge_curved(plan, part, curved, states, loads),
    }
    // Zero where no capacity is stated.
    [loads.utilisation, loads.utilisation_bound] =
        outward_utilisation(part, [estimate, upper], [&loads.estimate, &loads.outward]);
    loads.utilisation_inward = if part.judged_inward() {
        inward_utilisation(part, lower, &loads.inward)
    } else {
        Lane::ZERO
    };
}

/// `sqrt(a² + b²)` of two that are not negative; the squares would not fit.
#[inline]
fn across<const N: usize>(a: Lane<N>, b: Lane<N>) -> Lane<N> {
    let (larger, smaller) = (a.at_least(b), a.at_most(b));
    let ratio = smaller / larger.at_least(Lane::splat(1.0e-30));
    larger * (ratio * ratio + 1.0).root()
}

/// The loads of a part of tables.
#[inline(never)]
fn judge_curved<const N: usize>(
    plan: &Plan,
    part: &Part,
    curved: &Curved,
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    let States { estimate, upper, lower, .. } = states;
    let three = [estimate, upper, lower];
    let (mut size, mut largest) = (Lane::ZERO, Lane::ZERO);
    for force in 0..2 {
        let [middle, most, least] = curved.force(force, &plan.numbers, part.bottom_m, three);
        let all = [&mut loads.estimate, &mut loads.outward, &mut loads.inward];
        for (loads, found) in all.into_iter().zip([middle, most, least]) {
            let slot = if force == 0 { &mut loads.force_x_n } else { &mut loads.force_z_n };
            *slot = found;
        }
        size = across(size, middle.magnitude());
        largest = across(largest, most.magnitude().at_least(least.magnitude()));
    }
    loads.estimate.force_n = size;
    loads.outward.force_n = largest;
    loads.estimate.pressure_pa = extremes(part, estimate, Lane::at_least);
    loads.outward.pressure_pa = extremes(part, upper, Lane::at_least);
    loads.inward.pressure_pa = extremes(part, lower, Lane::at_most);
    if curved.places > 0 {
        let tensions = |hoop| curved.tensions(hoop, &plan.numbers, part.bottom_m, states);
        let found = tensions(true).with(&tensions(false));
        [loads.estimate.hoop_tension_n_m, _] = found.estimate;
        loads.outward.hoop_tension_n_m = found.most;
        loads.inward.hoop_tension_n_m = found.least;
    }
}

/// Largest pressure on a plane part. Without liquid outside the pressure falls with height, and the
/// foot is enough.
#[inline]
fn largest_pressure<const N: usize>(
    part: &Part,
    state: &Pressure<N>,
    whole: &Resultant<N>,
) -> Lane<N> {
    if part.outside == 0 { whole.foot_pa } else { extremes(part, state, Lane::at_least) }
}

/// Least pressure on a part; without liquid outside it stands at the top.
#[inline]
fn least_pressure<const N: usize>(part: &Part, state: &Pressure<N>) -> Lane<N> {
    if part.outside == 0 {
        state.at(Lane::splat(part.top_m))
    } else {
        extremes(part, state, Lane::at_most)
    }
}

/// The extreme pressure difference on a part: it stands at an end or at a surface between them.
fn extremes<const N: usize>(
    part: &Part,
    state: &Pressure<N>,
    pick: impl Fn(Lane<N>, Lane<N>) -> Lane<N>,
) -> Lane<N> {
    let (bottom, top) = (Lane::splat(part.bottom_m), Lane::splat(part.top_m));
    let mut found = pick(state.at(bottom), state.at(top));
    for surface in state.surfaces() {
        found = pick(found, state.at(surface.height_m.at_least(bottom).at_most(top)));
    }
    found
}

/// Largest ratio of a load to its capacity under each state; zero where the loads act inwards.
#[inline]
fn outward_utilisation<const N: usize, const K: usize>(
    part: &Part,
    states: [&Pressure<N>; K],
    loads: [&Loads<N>; K],
) -> [Lane<N>; K] {
    let mut pressure_pa = loads.map(|loads| loads.pressure_pa);
    if let Geometry::Course { .. } = part.geometry
        && part.outward.pressure_pa.is_some()
    {
        // The stated pressure of a course holds for all of it, not for its design point alone.
        pressure_pa = states.map(|state| course_pressure(part, state));
    }
    let mut utilisation = ratio(&part.outward, pressure_pa, loads, 1.0);
    for design in &part.designed_for {
        for (largest, state) in utilisation.iter_mut().zip(states) {
            *largest = largest.at_least(design_ratio(part, state, design));
        }
    }
    utilisation.map(|largest| largest.at_most(Lane::splat(UTILISATION_MAX)))
}

#[inline(never)]
fn course_pressure<const N: usize>(part: &Part, state: &Pressure<N>) -> Lane<N> {
    if part.outside == 0 {
        state.at(Lane::splat(part.bottom_m))
    } else {
        extremes(part, state, Lane::at_least)
    }
}

#[inline(never)]
fn inward_utilisation<const N: usize>(
    part: &Part,
    state: &Pressure<N>,
    loads: &Loads<N>,
) -> Lane<N> {
    let pressure_pa = least_pressure(part, state);
    let mut loads = *loads;
    if let Geometry::Course { half_diameter_m, .. } = part.geometry {
        // The design point is the worst of a course outwards; inwards that is where least stands
        // against the gas.
        loads.hoop_tension_n_m = pressure_pa * half_diameter_m;
    }
    let [largest] = ratio(&part.inward, [pressure_pa], [&loads], -1.0);
    largest.at_most(Lane::splat(UTILISATION_MAX))
}

/// `max over the stated capacities of sign * load / capacity`, not below zero, for each of the
/// loads.
#[inline]
fn ratio<const N: usize, const K: usize>(
    capacities: &Capacities,
    pressure_pa: [Lane<N>; K],
    loads: [&Loads<N>; K],
    sign: f32,
) -> [Lane<N>; K] {
    let mut largest = [Lane::ZERO; K];
    let mut compare = |capacity: Option<Stated>, loads: [Lane<N>; K]| {
        let Some(capacity) = capacity else { return };
        for (largest, load) in largest.iter_mut().zip(loads) {
            *largest = largest.at_least(load * sign / Lane::splat(capacity.get()));
        }
    };
    compare(capacities.pressure_pa, pressure_pa);
    compare(capacities.hoop_tension_n_m, loads.map(|loads| loads.hoop_tension_n_m));
    compare(capacities.force_n, loads.map(|loads| loads.force_n));
    compare(capacities.bolt_n, loads.map(|loads| loads.bolt_n));
    compare(capacities.moment_n_m, loads.map(|loads| loads.moment_n_m));
    largest
}

/// Largest ratio of the pressure to the design pressure over the heights of the part. Both are
/// straight between their kinks, so the ratio is extreme at a kink of either or at an end.
fn design_ratio<const N: usize>(part: &Part, state: &Pressure<N>, design: &DesignState) -> Lane<N> {
    let (bottom, top) = (Lane::splat(part.bottom_m), Lane::splat(part.top_m));
    let at = |z_m: Lane<N>| {
        let designed =
            (Lane::splat(design.level_m) - z_m).ramp() * design.weight_n_m3 + design.gas_pa;
        state.at(z_m) / designed.at_least(Lane::splat(DESIGN_PRESSURE_FLOOR_PA))
    };
    let mut largest = at(bottom).at_least(at(top));
    largest = largest.at_least(at(Lane::splat(design.level_m).at_least(bottom).at_most(top)));
    // Where the floor of the design pressure sets in.
    let floor_m = design.level_m
        - crate::lane::ramp(DESIGN_PRESSURE_FLOOR_PA - design.gas_pa) / design.weight_n_m3;
    largest = largest.at_least(at(Lane::splat(floor_m).at_least(bottom).at_most(top)));
    for surface in state.surfaces() {
        largest = largest.at_least(at(surface.height_m.at_least(bottom).at_most(top)));
    }
    largest.ramp()
}

#[cfg(test)]
mod tests;
