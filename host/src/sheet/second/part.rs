//! The loads of one part by the second method, each beside what is reported.

use super::plane::{ERROR, Flat, Straight};
use super::profile::Profiles;
use super::{Compared, Figure, Pair, curved, plate, quadrature, secured};
use crate::assess::{Centre, Loads, PartRow, Request};
use crate::compile::{self, Bending, Bent};
use crate::tank::{
    Curved, Hatch, Panel, Part as Stated, Plane, Secured, Surface, TankFile, Vessel,
};
use crate::units::Quantity;
use std::f64::consts::PI;

/// A load's name in the documents and for people.
type Name = (&'static str, &'static str);

pub(super) fn compared(
    file: &TankFile,
    request: &Request,
    stated: &Stated,
    row: &PartRow,
    bent: &[[Bent; 2]],
) -> Vec<Compared> {
    let profiles = Profiles::of(file, request, Some(stated.name()));
    let mut found = Found { row, list: Vec::new() };
    match stated {
        Stated::Course(course) => {
            if let Vessel::Cylinder { diameter_m, .. } = file.vessel {
                found.course(course.design_height_m(), diameter_m.value, &profiles);
            }
        }
        Stated::Panel(panel) => {
            found.plane(&panel.plane, &Flat::new(&panel.plane, &profiles));
            found.plates(stated, panel, &profiles, bent);
        }
        Stated::Hatch(hatch) => {
            let flat = Flat::new(&hatch.sealed, &profiles);
            found.plane(&hatch.sealed, &flat);
            found.hatch(hatch, file.gravity.m_s2(), &flat);
        }
        Stated::Curved(part) => found.curved(part, &profiles),
    }
    found.list
}

/// The comparisons of one part.
struct Found<'a> {
    row: &'a PartRow,
    list: Vec<Compared>,
}

/// A pressure with what the first method may be off.
fn pressure(pa: f64, z_m: f64, profiles: &Profiles) -> Figure {
    Figure { value: pa, allowed: ERROR * pa.abs() + profiles.rounding_pa(z_m) }
}

/// Largest pressure of the estimate and of the upper bound between two heights, least of the lower.
fn extremes([bottom_m, top_m]: [f64; 2], profiles: &Profiles) -> [Figure; 3] {
    let kinks = profiles.kinks().into_iter().filter(|kink| (bottom_m..=top_m).contains(kink));
    let places: Vec<f64> = kinks.chain([bottom_m, top_m]).collect();
    let [estimate, upper, lower] = profiles.all().map(|profile| {
        places.iter().map(|&z_m| pressure(profile.at(z_m), z_m, profiles)).collect::<Vec<_>>()
    });
    let most = |all: Vec<Figure>| all.into_iter().reduce(Figure::larger);
    let least = lower.into_iter().reduce(Figure::smaller);
    [most(estimate), most(upper), least].map(|one| one.unwrap_or(Figure::NONE))
}

impl Found<'_> {
    /// Puts a load beside where it is reported.
    fn put(
        &mut self,
        (load, label): Name,
        quantity: Quantity,
        pick: impl Fn(&Loads) -> Option<f32>,
        second: [Figure; 3],
    ) {
        let row = self.row;
        let reported = [&row.loads, &row.loads_outward_bound, &row.loads_inward_bound];
        let mut second = second.into_iter();
        let states = reported.map(|loads| {
            let second = second.next()?;
            pick(loads).map(|first| Pair { first: first.into(), second })
        });
        if states.iter().any(Option::is_some) {
            self.list.push(Compared { load, label, quantity, states });
        }
    }

    /// The ring in two halves: each side carries half of what presses them apart.
    fn course(&mut self, z_m: f64, diameter_m: f64, profiles: &Profiles) {
        let at_point = profiles.all().map(|one| pressure(one.at(z_m), z_m, profiles));
        let name = ("pressure_pa", "pressure at the design point");
        self.put(name, Quantity::Pressure, |loads| Some(loads.pressure_pa), at_point);
        let [apart] = quadrature::integral(&[0.0, 0.5 * PI, PI], |angle| [angle.sin()]);
        let tension = at_point.map(|one| one.times(0.25 * diameter_m * apart));
        let name = ("hoop_tension_n_m", "hoop tension");
        self.put(name, Quantity::LineLoad, |loads| loads.hoop_tension_n_m, tension);
    }

    fn plane(&mut self, plane: &Plane, flat: &Flat<'_>) {
        let ends = [plane.heights.bottom_m, plane.heights.top_m];
        let largest = extremes(ends, flat.profiles);
        let name = ("pressure_pa", "pressure, largest (inward: least)");
        self.put(name, Quantity::Pressure, |loads| Some(loads.pressure_pa), largest);
        let force = flat.load(Straight { alpha: 1.0, beta: 0.0 });
        self.put(("force_n", "force"), Quantity::Force, |loads| loads.force_n, force);
        let moment = flat.load(Straight { alpha: 0.0, beta: 1.0 });
        let name = ("moment_centroid_n_m", "moment about the centroid");
        self.put(name, Quantity::Moment, |loads| loads.moment_centroid_n_m, moment);
        if let Some(centre) = self.row.loads.centre {
            self.centre(&centre, plane, flat, (force[0], moment[0]));
        }
    }

    fn place(&mut self, (load, label): Name, first: Option<f64>, second: Figure) {
        let Some(first) = first else { return };
        let states = [Some(Pair { first, second }), None, None];
        self.list.push(Compared { load, label, quantity: Quantity::Length, states });
    }

    fn centre(
        &mut self,
        centre: &Centre,
        plane: &Plane,
        flat: &Flat<'_>,
        (force, moment): (Figure, Figure),
    ) {
        let force_n = force.value.abs();
        let up_m = moment.value / force.value;
        let off_m = (moment.allowed + up_m.abs() * force.allowed) / force_n;
        let height = Figure {
            value: flat.area.height_m(flat.area.centroid_m + up_m),
            allowed: off_m * flat.area.sine + 1e-12 * (1.0 + plane.heights.top_m.abs()),
        };
        let name = ("centre_of_pressure_m", "centre of pressure, height");
        self.place(name, centre.centre_of_pressure_m, height);
        let down = Figure { value: -up_m, allowed: off_m };
        let name = ("centre_of_pressure_slope_m", "centre of pressure, down the slope");
        self.place(name, centre.centre_of_pressure_slope_m, down);
        if centre.centre_of_pressure_sideways_m.is_some() {
            // The cut of a round opening costs the first method 1e-6 of this integral.
            let [first, size] = flat.sideways();
            let x_m = first / force.value;
            let off = (2.0 * ERROR * size + x_m.abs() * force.allowed) / force_n;
            let name = ("centre_of_pressure_sideways_m", "centre of pressure, sideways");
            let sideways = Figure { value: x_m, allowed: off };
            self.place(name, centre.centre_of_pressure_sideways_m, sideways);
        }
    }

    /// The largest bending stress of its plates, each at the point that the first method found: of
    /// the estimate, and of the bound.
    fn plates(&mut self, stated: &Stated, panel: &Panel, profiles: &Profiles, bent: &[[Bent; 2]]) {
        let plates = Bending::of_part(stated);
        let judged = plates.iter().zip(&self.row.plates).zip(bent);
        let mut largest: Option<[Figure; 3]> = None;
        for ((bending, row), [now, bound]) in judged.filter(|((_, row), _)| row.bent.is_some()) {
            let per_moment = 6.0 / bending.plate.sound_m().powi(2);
            let both = |bent: &Bent| {
                let wanted = plate::Wanted {
                    edges: bending.plate.edges.value,
                    poisson: row.poisson_ratio,
                    place: bent.place,
                    direction: bent.direction,
                };
                plate::moments(&panel.plane, wanted, profiles, row.series_error)
            };
            let Some(at_now) = both(now) else { continue };
            let same = now.place == bound.place && now.direction == bound.direction;
            let Some(at_bound) = (if same { Some(at_now) } else { both(bound) }) else { continue };
            let [now, bound] = [at_now[0], at_bound[1]].map(|one| one.times(per_moment));
            let three = [now, bound, Figure::NONE];
            largest = Some(match largest {
                None => three,
                Some([a, b, c]) => [a.larger(three[0]), b.larger(three[1]), c],
            });
        }
        if let Some(stress) = largest {
            let name = ("stress_pa", "bending stress, largest");
            self.put(name, Quantity::Pressure, |loads| loads.stress_pa, stress);
        }
    }

    fn hatch(&mut self, hatch: &Hatch, gravity_m_s2: f64, flat: &Flat<'_>) {
        match hatch.secured.as_ref().map(|secured| &secured.value) {
            None => {}
            Some(Secured::Bolts(bolts)) => {
                if let Some(share) = secured::bolts(flat, bolts, hatch, gravity_m_s2) {
                    let name = ("bolt_n", "bolt, largest share (inward: least)");
                    self.put(name, Quantity::Force, |loads| loads.bolt_n, share);
                }
            }
            Some(Secured::Hinged(hinged)) => {
                let held = secured::hinged(flat, hinged, hatch, gravity_m_s2);
                let name = if hatch.pivots() {
                    "moment about the pivot"
                } else {
                    "moment about the hinge"
                };
                let name = ("moment_n_m", name);
                self.put(name, Quantity::Moment, |loads| loads.moment_n_m, held.moment);
                if let Some(latch) = held.latch {
                    let name = ("latch_n", "latch, largest share");
                    self.put(name, Quantity::Force, |loads| loads.latch_n, latch);
                }
                let names: &[&str] = match held.pins.len() {
                    2 => &["lower pin", "upper pin"],
                    _ if hatch.pivots() => &["pivot"],
                    _ => &["hinge line"],
                };
                for ((index, pin), label) in held.pins.into_iter().enumerate().zip(names) {
                    let pick = |loads: &Loads| loads.hinge_n.get(index).copied();
                    self.put(("hinge_n", label), Quantity::Force, pick, pin);
                }
            }
        }
    }

    fn curved(&mut self, part: &Curved, profiles: &Profiles) {
        let heights = part.heights;
        let largest = extremes([heights.bottom_m, heights.top_m], profiles);
        let name = ("pressure_pa", "pressure, largest (inward: least)");
        self.put(name, Quantity::Pressure, |loads| Some(loads.pressure_pa), largest);
        let table = compile::table(&part.surface);
        let rows = [table.error * table.rise_m, table.error_m3];
        let [x, z] = curved::forces(&part.surface, heights.centre_m, profiles, rows);
        self.put(("force_x_n", "force along angle 0"), Quantity::Force, |loads| loads.force_x_n, x);
        self.put(("force_z_n", "force upwards"), Quantity::Force, |loads| loads.force_z_n, z);
        self.put(("force_n", "force, size"), Quantity::Force, |loads| loads.force_n, size(x, z));
        if let Surface::Revolved { .. } = part.surface
            && let Some(found) = curved::tensions(&part.surface, heights.centre_m, profiles)
        {
            let [estimate, bound] = found.tension;
            let tension = [estimate, bound, Figure::NONE];
            let name = ("tension_n_m", "tension, largest");
            self.put(name, Quantity::LineLoad, |loads| loads.tension_n_m, tension);
            let [estimate, bound] = found.compression;
            let compression = [estimate, Figure::NONE, bound];
            let name = ("compression_n_m", "compression, largest");
            self.put(name, Quantity::LineLoad, |loads| loads.compression_n_m, compression);
        }
    }
}

/// Size of a force by its two components; of the bound the largest either way.
fn size(x: [Figure; 3], z: [Figure; 3]) -> [Figure; 3] {
    let across = |a: Figure, b: Figure| Figure {
        value: a.value.hypot(b.value),
        allowed: a.allowed + b.allowed,
    };
    let either = |[_, most, least]: [Figure; 3]| Figure {
        value: most.value.abs().max(least.value.abs()),
        allowed: most.allowed.max(least.allowed),
    };
    [across(x[0], z[0]), across(either(x), either(z)), Figure::NONE]
}
