//! One part under the three pressure states: its loads and its utilisation.

use super::{
    Capacities, Cover, Curved, DESIGN_PRESSURE_FLOOR_PA, DesignState, Geometry, Part, Stated,
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
#[inline]
pub(crate) fn evaluate_into<const N: usize>(
    plan: &Plan,
    part: &Part,
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    if part.outside == 0 {
        judge(plan, part, states, loads);
    } else {
        judge_against_outside(plan, part, states, loads);
    }
}

/// Rare, and its copy of the states needs room: apart from the others.
#[cold]
#[inline(never)]
fn judge_against_outside<const N: usize>(
    plan: &Plan,
    part: &Part,
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    judge(plan, part, &acting(plan, part, states), loads);
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

#[inline]
fn judge<const N: usize>(plan: &Plan, part: &Part, states: &States<N>, loads: &mut PartLoads<N>) {
    match &part.geometry {
        Geometry::Course { half_diameter_m, design_point_m, .. } => {
            judge_course(part, [*half_diameter_m, *design_point_m], states, loads);
        }
        Geometry::Plane { shape, cover, .. } => {
            let face = Face { shape, numbers: &plan.numbers, bottom_m: part.bottom_m };
            judge_plane(part, &face, cover.as_ref(), states, loads);
        }
        Geometry::Curved(curved) => judge_curved(plan, part, curved, states, loads),
    }
}

/// The loads of a course of half a diameter (m) at its design point (m).
#[inline(never)]
fn judge_course<const N: usize>(
    part: &Part,
    [half_diameter_m, design_point_m]: [f32; 2],
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    let States { estimate, upper, lower, .. } = states;
    let point_m = Lane::splat(design_point_m);
    loads.estimate.put_course(estimate.at(point_m), half_diameter_m);
    loads.outward.put_course(upper.at(point_m), half_diameter_m);
    loads.inward.put_course(lower.at(point_m), half_diameter_m);

    let mut largest = [Lane::ZERO; 2];
    let tensions = [&loads.estimate, &loads.outward].map(|loads| loads.hoop_tension_n_m);
    compare(&mut largest, part.outward.hoop_tension_n_m, tensions);
    if part.outward.pressure_pa.is_some() {
        // The stated pressure of a course holds for all of it, not for its design point alone.
        let pressures = [estimate, upper].map(|state| course_pressure(part, state));
        compare(&mut largest, part.outward.pressure_pa, pressures);
    }
    [loads.utilisation, loads.utilisation_bound] = outward(part, [estimate, upper], largest);
    loads.utilisation_inward = Lane::ZERO;
    if part.judged_inward() {
        // The design point is the worst of a course outwards; inwards that is where least stands
        // against the gas.
        let pressure_pa = least_pressure(part, lower);
        let mut largest = [Lane::ZERO];
        compare(&mut largest, part.inward.pressure_pa, [-pressure_pa]);
        compare(&mut largest, part.inward.hoop_tension_n_m, [-(pressure_pa * half_diameter_m)]);
        loads.utilisation_inward = within(largest);
    }
}

#[inline(never)]
fn judge_plane<const N: usize>(
    part: &Part,
    face: &Face<'_>,
    cover: Option<&Cover>,
    states: &States<N>,
    loads: &mut PartLoads<N>,
) {
    let States { estimate, upper, lower, .. } = states;
    let cuts = cover.map_or([None; 2], Cover::cuts);
    let middle = &estimate.on(face);
    let most = &upper.on_pieces(face, cuts);
    let least = &lower.on_pieces(face, cuts);
    loads.estimate.put_plane(largest_pressure(part, estimate, middle), middle.force_n);
    loads.estimate.moment_centroid_n_m = middle.moment_n_m;
    loads.outward.put_plane(largest_pressure(part, upper, most), most.force_n);
    loads.inward.put_plane(least_pressure(part, lower), least.force_n);
    let [moment, held] = match cover {
        None => [[Lane::ZERO; 3]; 2],
        Some(cover) => cover.reactions(face, states, [middle, most, least]),
    };
    [loads.estimate.bolt_n, loads.outward.bolt_n, loads.inward.bolt_n] = held;
    [loads.estimate.moment_n_m, loads.outward.moment_n_m, loads.inward.moment_n_m] = moment;
    utilise(part, states, loads);
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
    [_, loads.estimate.pressure_pa] = extremes(part, estimate);
    [_, loads.outward.pressure_pa] = extremes(part, upper);
    [loads.inward.pressure_pa, _] = extremes(part, lower);
    if curved.places > 0 {
        let tensions = |hoop| curved.tensions(hoop, &plan.numbers, part.bottom_m, states);
        let found = tensions(true).with(&tensions(false));
        [loads.estimate.hoop_tension_n_m, _] = found.estimate;
        loads.outward.hoop_tension_n_m = found.most;
        loads.inward.hoop_tension_n_m = found.least;
    }
    utilise(part, states, loads);
}

/// Largest pressure on a plane part. Without liquid outside the pressure falls with height, and the
/// foot is enough.
#[inline]
fn largest_pressure<const N: usize>(
    part: &Part,
    state: &Pressure<N>,
    whole: &Resultant<N>,
) -> Lane<N> {
    if part.outside == 0 {
        return whole.foot_pa;
    }
    let [_, most] = extremes(part, state);
    most
}

/// Least pressure on a part; without liquid outside it stands at the top.
#[inline]
fn least_pressure<const N: usize>(part: &Part, state: &Pressure<N>) -> Lane<N> {
    if part.outside == 0 {
        return state.at(Lane::splat(part.top_m));
    }
    let [least, _] = extremes(part, state);
    least
}

/// Least and largest pressure difference on a part: each stands at an end or at a surface between
/// them.
#[inline(never)]
fn extremes<const N: usize>(part: &Part, state: &Pressure<N>) -> [Lane<N>; 2] {
    let (bottom, top) = (Lane::splat(part.bottom_m), Lane::splat(part.top_m));
    let at_bottom = state.at(bottom);
    let (mut least, mut most) = (at_bottom, at_bottom);
    let mut take = |z_m| {
        let found = state.at(z_m);
        least = least.at_most(found);
        most = most.at_least(found);
    };
    take(top);
    for surface in state.surfaces() {
        take(surface.height_m.at_least(bottom).at_most(top));
    }
    [least, most]
}

#[inline(never)]
fn course_pressure<const N: usize>(part: &Part, state: &Pressure<N>) -> Lane<N> {
    if part.outside == 0 {
        return state.at(Lane::splat(part.bottom_m));
    }
    let [_, most] = extremes(part, state);
    most
}

/// The utilisations of a plane or curved part by its loads; zero where no capacity is stated.
#[inline(never)]
fn utilise<const N: usize>(part: &Part, states: &States<N>, loads: &mut PartLoads<N>) {
    let bounding = [&loads.estimate, &loads.outward];
    let mut largest = [Lane::ZERO; 2];
    compare_all(&mut largest, &part.outward, bounding, |load| load);
    [loads.utilisation, loads.utilisation_bound] =
        outward(part, [&states.estimate, &states.upper], largest);
    let mut largest = [Lane::ZERO];
    if part.judged_inward() {
        compare_all(&mut largest, &part.inward, [&loads.inward], |load| -load);
    }
    loads.utilisation_inward = within(largest);
}

/// [`compare`] for every load that plane and curved parts have.
#[inline]
fn compare_all<const N: usize, const K: usize>(
    largest: &mut [Lane<N>; K],
    capacities: &Capacities,
    loads: [&Loads<N>; K],
    signed: impl Fn(Lane<N>) -> Lane<N>,
) {
    compare(largest, capacities.pressure_pa, loads.map(|loads| signed(loads.pressure_pa)));
    compare(largest, capacities.hoop_tension_n_m, loads.map(|l| signed(l.hoop_tension_n_m)));
    compare(largest, capacities.force_n, loads.map(|loads| signed(loads.force_n)));
    compare(largest, capacities.bolt_n, loads.map(|loads| signed(loads.bolt_n)));
    compare(largest, capacities.moment_n_m, loads.map(|loads| signed(loads.moment_n_m)));
}

/// The largest so far, or the ratio of a load to its capacity where that is larger.
#[inline]
fn compare<const N: usize, const K: usize>(
    largest: &mut [Lane<N>; K],
    capacity: Option<Stated>,
    loads: [Lane<N>; K],
) {
    let Some(capacity) = capacity else { return };
    for (largest, load) in largest.iter_mut().zip(loads) {
        *largest = largest.at_least(load / Lane::splat(capacity.get()));
    }
}

/// Outward utilisations by the capacities and by the states that the part was designed for.
#[inline]
fn outward<const N: usize>(
    part: &Part,
    states: [&Pressure<N>; 2],
    mut largest: [Lane<N>; 2],
) -> [Lane<N>; 2] {
    if !part.designed_for.is_empty() {
        for (largest, state) in largest.iter_mut().zip(states) {
            *largest = largest.at_least(design_ratio(part, state));
        }
    }
    largest.map(|largest| within([largest]))
}

#[inline]
fn within<const N: usize>([utilisation]: [Lane<N>; 1]) -> Lane<N> {
    utilisation.at_most(Lane::splat(UTILISATION_MAX))
}

/// Largest ratio of the pressure to a design pressure over the heights of the part, not below zero.
/// Both are straight between their kinks, so the ratio is extreme at a kink of either or at an end.
#[inline(never)]
fn design_ratio<const N: usize>(part: &Part, state: &Pressure<N>) -> Lane<N> {
    let mut largest = Lane::ZERO;
    for design in &part.designed_for {
        // Where the floor of the design pressure sets in.
        let floor_m = design.level_m
            - crate::lane::ramp(DESIGN_PRESSURE_FLOOR_PA - design.gas_pa) / design.weight_n_m3;
        let own = [part.bottom_m, part.top_m, design.level_m, floor_m].map(Lane::splat);
        let surfaces = state.surfaces().iter().map(|surface| surface.height_m);
        for height_m in own.into_iter().chain(surfaces) {
            largest = largest.at_least(design_ratio_at(part, state, design, height_m));
        }
    }
    largest
}

/// The ratio at a height, or at the part's end that is nearest to it.
#[inline(never)]
fn design_ratio_at<const N: usize>(
    part: &Part,
    state: &Pressure<N>,
    design: &DesignState,
    height_m: Lane<N>,
) -> Lane<N> {
    let (bottom, top) = (Lane::splat(part.bottom_m), Lane::splat(part.top_m));
    let z_m = height_m.at_least(bottom).at_most(top);
    let designed = (Lane::splat(design.level_m) - z_m).ramp() * design.weight_n_m3 + design.gas_pa;
    state.at(z_m) / designed.at_least(Lane::splat(DESIGN_PRESSURE_FLOOR_PA))
}

#[cfg(test)]
mod tests;
