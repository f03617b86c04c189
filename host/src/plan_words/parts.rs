//! The parts of a plan in words.

use super::Words;
use crate::units::Quantity::{AngleDegrees, Density, Force, Length, LineLoad, Moment, Pressure};
use strake_core::part::plate::Nodes;
use strake_core::part::{
    Capacities, Cover, CoverNumbers, DesignState, Geometry, Held, Part, Stated,
};
use strake_core::shape::{Face, Shape};

impl Words {
    pub(super) fn part(&mut self, part: &Part, numbers: &[f32]) {
        let Part { geometry, bottom_m, top_m, outward, inward, designed_for, outside } = part;
        self.line("is", &exact(geometry, numbers), self.geometry(geometry));
        let heights = format!("{} to {}", self.show(*bottom_m, Length), self.show(*top_m, Length));
        self.line("stands from", &(bottom_m, top_m), heights);
        let mut carries = self.capacities(geometry, outward);
        carries.extend(designed_for.iter().map(|state| self.design_state(state)));
        self.line("carries", &(outward, designed_for), joined(&carries));
        self.line("carries inward", inward, joined(&self.capacities(geometry, inward)));
        if *outside != 0 {
            let numbers: Vec<String> = (0..8)
                .filter(|bit| outside >> bit & 1 == 1)
                .map(|bit| format!("{}", bit + 1))
                .collect();
            self.line("outside against it", outside, numbers.join(" and "));
        }
    }

    fn geometry(&self, geometry: &Geometry) -> String {
        match geometry {
            Geometry::Course { half_diameter_m, design_point_m, height_m } => format!(
                "course, diameter {}, {} high, design point at {}",
                self.show(2.0 * f64::from(*half_diameter_m), Length),
                self.show(*height_m, Length),
                self.show(*design_point_m, Length)
            ),
            Geometry::Curved(curved) => {
                let [x, z] = curved.rows.map(|rows| rows.map(usize::from).iter().sum::<usize>());
                format!(
                    "curved, {x} rows sideways, {z} rows upwards, {} places of tension",
                    curved.places
                )
            }
            Geometry::Plane { shape, sine, centroid_above_m: _, cover } => {
                let shape_words = match shape {
                    Shape::Circle(circle) if (circle.aspect() - 1.0).abs() > 0.0 => {
                        let length_m = 2.0 * f64::from(circle.radius_m());
                        let width_m = length_m * f64::from(circle.aspect());
                        let (width, length) =
                            (self.show(width_m, Length), self.show(length_m, Length));
                        format!("ellipse, {width} wide, {length} up the slope")
                    }
                    Shape::Circle(circle) => {
                        let diameter_m = 2.0 * f64::from(circle.radius_m());
                        format!("circle, diameter {}", self.show(diameter_m, Length))
                    }
                    Shape::Rectangle(rectangle) => {
                        let [width_m, length_m] = rectangle.sides_m();
                        let (width, length) =
                            (self.show(width_m, Length), self.show(length_m, Length));
                        format!("rectangle, {width} wide, {length} up the slope")
                    }
                    Shape::Pieces(pieces) => format!(
                        "{} pieces, {} up the slope, as large as a square of {}",
                        usize::from(pieces.strips) + usize::from(pieces.discs),
                        self.show(pieces.length_m, Length),
                        self.show(f64::from(pieces.area_m2).sqrt(), Length)
                    ),
                    // As a square of the same size, whose side any unit of length can show.
                    Shape::Level { area_m2 } => {
                        let side_m = f64::from(*area_m2).sqrt();
                        format!("level, as large as a square of {}", self.show(side_m, Length))
                    }
                };
                let slope = if matches!(shape, Shape::Level { .. }) {
                    String::new()
                } else {
                    let degrees = f64::from(*sine).asin().to_degrees();
                    format!(", {} from level", self.show(degrees, AngleDegrees))
                };
                let cover = cover.as_ref().map_or_else(String::new, |cover| self.cover(cover));
                format!("{shape_words}{slope}{cover}")
            }
        }
    }

    /// How a cover is held and what it weighs.
    fn cover(&self, cover: &Cover) -> String {
        let numbers = cover.numbers();
        let held = match cover.held() {
            Held::Otherwise => ", a cover".to_owned(),
            Held::Plate(nodes) => format!(", a plate that bends, {} nodes", nodes.count),
            Held::Bolts(count) => format!(", {count} bolts"),
            Held::Line => ", on a level hinge or pivot".to_owned(),
            Held::Side => {
                format!(", on a hinge {} beside its centre", self.show(numbers.arm_m, Length))
            }
        };
        if numbers.weight_n == 0.0 {
            return held;
        }
        let measured = if numbers.weight_is_measured { "measured" } else { "not measured" };
        let weight = self.show(numbers.weight_n, Force);
        format!("{held}, its weight along the outward normal {weight}, {measured}")
    }

    fn capacities(&self, geometry: &Geometry, capacities: &Capacities) -> Vec<String> {
        let held = match geometry {
            Geometry::Plane { cover: Some(cover), .. } => cover.held(),
            _ => Held::Otherwise,
        };
        let each = match held {
            Held::Line => "hinge or pivot",
            Held::Side => "each pin",
            Held::Bolts(_) | Held::Otherwise | Held::Plate(_) => "each bolt",
        };
        // A moment per width is a force.
        let (moment, of) = match held {
            Held::Plate(_) => ("bending moment per width", Force),
            _ => ("moment about the hinge", Moment),
        };
        let Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m } = *capacities;
        let all = [
            ("pressure", pressure_pa, Pressure),
            ("hoop tension", hoop_tension_n_m, LineLoad),
            ("force", force_n, Force),
            (each, bolt_n, Force),
            (moment, moment_n_m, of),
        ];
        let stated = |(name, value, quantity): (&str, Option<Stated>, _)| {
            value.map(|value| format!("{name} {}", self.show(value.get(), quantity)))
        };
        all.into_iter().filter_map(stated).collect()
    }

    /// The plan holds the specific weight; as a density at standard gravity it can be checked.
    fn design_state(&self, state: &DesignState) -> String {
        let DesignState { level_m, weight_n_m3, gas_pa } = *state;
        format!(
            "designed for {} of {} (what is left of it) under {} of gas",
            self.show(level_m, Length),
            self.show(f64::from(weight_n_m3) / 9.80665, Density),
            self.show(gas_pa, Pressure)
        )
    }
}

/// The geometry with its own numbers of the plan, wherever they stand in it.
fn exact<'a>(geometry: &Geometry, numbers: &'a [f32]) -> (Geometry, Vec<&'a [f32]>) {
    let mut geometry = geometry.clone();
    let own = match &mut geometry {
        Geometry::Plane { shape: Shape::Pieces(pieces), .. } => {
            let own = pieces.pieces(numbers).map(<[[f32; 4]]>::as_flattened);
            pieces.first = 0;
            own.to_vec()
        }
        Geometry::Curved(curved) => {
            let own = curved.numbers(numbers);
            curved.first = 0;
            vec![own]
        }
        Geometry::Plane { cover: Some(cover), shape, .. } => {
            let Held::Plate(nodes) = cover.held() else { return (geometry, Vec::new()) };
            let held = Held::Plate(Nodes { first: 0, ..nodes });
            let face = Face { shape, numbers, bottom_m: 0.0 };
            *cover = Cover::new(&CoverNumbers { held, ..cover.numbers() }, &face);
            vec![nodes.of(numbers).as_flattened()]
        }
        _ => Vec::new(),
    };
    (geometry, own)
}

fn joined(all: &[String]) -> String {
    if all.is_empty() { "not judged".to_owned() } else { all.join(", ") }
}
