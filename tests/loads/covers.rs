//! Random hatches: what bolts, hinges, pins and latches carry, against rigid-body statics.
//!
//! Each cover goes the whole way: it is written as a tank file, read, compiled and evaluated in
//! f32. The reference integrates the pressure in f64 and solves the equilibrium of the rigid cover;
//! it takes heights and slope as the plan's f32 have them.

mod bounds;
mod draw;
mod statics;

use crate::core_engine::{narrow, plan_of};
use crate::product::file::{Tank, read};
use strake::compile::{self, Compiled};
use strake_core::part::{Cover, Geometry, Part};
use strake_core::plan::Plan;
use strake_core::shape::{Face, Shape};
use strake_oracle::liquid::Liquid;
use strake_oracle::plane::PlanePart;
use strake_oracle::random::Random;

/// Hatches in one file.
const TOGETHER: usize = 10;

/// A drawn cover where the plan has it.
struct Placed {
    drawn: draw::Drawn,
    plane: PlanePart,
    part: Part,
}

impl Placed {
    fn cover(&self) -> (&Cover, &Shape) {
        match &self.part.geometry {
            Geometry::Plane { shape, cover: Some(cover), .. } => (cover, shape),
            other => panic!("no cover: {other:?}"),
        }
    }

    fn face<'a>(&'a self, plan: &'a Plan) -> Face<'a> {
        let (_, shape) = self.cover();
        Face { shape, numbers: &plan.numbers, bottom_m: self.part.bottom_m }
    }

    /// The weightings of what is checked, from the centroid's line.
    fn weightings(&self) -> Vec<Straight> {
        let centroid_s = self.plane.centroid().1;
        self.drawn.reactions().iter().map(|one| one.straight(centroid_s)).collect()
    }
}

/// `w = at_centroid + slope (s - centroid)`.
#[derive(Clone, Copy, Debug)]
struct Straight {
    at_centroid: f64,
    slope: f64,
    centroid_s: f64,
}

impl Straight {
    /// Where it is zero.
    fn zero(&self) -> f64 {
        self.centroid_s - self.at_centroid / self.slope
    }

    /// Its load under a pressure whose force and moment about the centroid are given.
    fn load(&self, [force, moment]: [f64; 2]) -> f64 {
        self.at_centroid * force + self.slope * moment
    }

    /// Its largest size on a cover.
    fn largest(&self, plane: &PlanePart) -> f64 {
        let (low, high) = plane.shape.extent();
        let at = |s: f64| (self.at_centroid + self.slope * (s - self.centroid_s)).abs();
        at(low).max(at(high))
    }

    /// `integral |p| |w| dA`.
    fn pressed(&self, plane: &PlanePart, pressure: &dyn strake_oracle::liquid::Pressure) -> f64 {
        let flat = self.slope.abs() * 1e3 * plane.shape.extent().1 < self.at_centroid.abs();
        if flat || plane.rise() <= 0.0 {
            // Nearly even: the zero lies far away. A level cover has one height, so one weighting.
            return self.at_centroid.abs() * plane.pressed_force(pressure);
        }
        self.slope.abs() * plane.pressed_moment(pressure, self.zero())
    }
}

/// A file full of random hatches around one height, and a plan that holds them under a liquid.
fn drawn(random: &mut Random, liquid: &Liquid, near_m: f64) -> (Plan, Vec<Placed>) {
    let covers: Vec<draw::Drawn> =
        (0..TOGETHER).map(|index| draw::cover(random, index, near_m)).collect();
    let text: String = covers.iter().map(|cover| cover.text.as_str()).collect();
    // Files hold no layer below the floor; the liquid comes in behind the compiler.
    let water = Liquid { gravity_m_s2: liquid.gravity_m_s2, ..Liquid::uniform(1000.0, 0.0) };
    let file = read(&Tank::of(&water, text).text());
    let contents = compile::Contents::of(&file);
    let Compiled { plan: compiled, .. } = compile::for_desk(&file, &contents)
        .unwrap_or_else(|found| panic!("{}\n{}", found.to_text(false), file.text()));
    let (mut plan, _) = plan_of(liquid).expect("a plan for the liquid");
    plan.numbers = compiled.numbers;
    let parts = compiled.parts.iter().map(|part| Part { outside: 1, ..part.clone() });
    let parts: Vec<Part> = parts.collect();
    let placed = covers.into_iter().zip(parts).map(|(drawn, part)| {
        let Geometry::Plane { sine, .. } = part.geometry else { panic!("no plane part") };
        let mut plane = PlanePart::new(drawn.sealed.clone(), 0.0, drawn.slope_deg);
        if plane.rise() > 0.0 {
            let steep = f64::from(sine).asin().to_degrees();
            plane.slope_deg = if drawn.slope_deg > 90.0 { 180.0 - steep } else { steep };
        }
        plane.bottom_m = f64::from(part.bottom_m) - plane.heights().0;
        assert!((plane.heights().0 - f64::from(part.bottom_m)).abs() < 1e-12);
        Placed { drawn, plane, part }
    });
    let placed = placed.collect();
    (plan, placed)
}

/// A height that an f32 holds.
fn height(random: &mut Random) -> f64 {
    f64::from(narrow(random.between(0.0, 10.0)))
}
