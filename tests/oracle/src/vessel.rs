//! Closed vessels put together from patches, and the volume they hold by closed formula.
//!
//! Over a closed vessel the resultant of all pressures is the weight of the contents, less the
//! weight of the outside liquid it displaces; the gas contributes nothing.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use crate::liquid::Liquid;
use crate::patch::{Patch, Wetted, arc, ellipsoid, frustum};
use crate::plane::{Placement, PlanePart};
use crate::shape::Shape;

/// A vessel closed all round, its lowest point or floor at `base_m`, centred on the z axis.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Vessel {
    /// Box with flat walls, lengths along x, y and z.
    Block {
        /// Along x, y, z in m.
        size: [f64; 3],
        /// Height of the floor, m.
        base_m: f64,
    },
    /// Trough of length `length` along y: level floor, level roof, two sloped walls.
    Trough {
        /// Width of the floor, m.
        floor: f64,
        /// Width of the roof, m; may be less than the floor (overhanging walls).
        roof: f64,
        /// Length along y, m.
        length: f64,
        /// Height, m.
        height: f64,
        /// Height of the floor, m.
        base_m: f64,
    },
    /// Upright cylinder with a flat roof on a cone of depth `cone` (0: flat floor).
    Upright {
        /// Radius, m.
        radius: f64,
        /// Height of the cylinder, m.
        height: f64,
        /// Depth of the cone below it, m.
        cone: f64,
        /// Height of the lowest point, m.
        base_m: f64,
    },
    /// Ellipsoid of revolution with a vertical axis; a sphere when both are equal.
    Ellipsoid {
        /// Radius at the equator, m.
        radius: f64,
        /// Half the height, m.
        half_height: f64,
        /// Height of the lowest point, m.
        base_m: f64,
    },
    /// Lying drum along y with flat or hemispherical heads.
    Drum {
        /// Radius, m.
        radius: f64,
        /// Length of the straight part, m.
        length: f64,
        /// Whether the heads are hemispheres.
        round_heads: bool,
        /// Height of the lowest line, m.
        base_m: f64,
    },
}

impl Vessel {
    /// The whole wall.
    #[must_use]
    pub fn patches(&self) -> Vec<Patch> {
        match *self {
            Self::Block { size: [x, y, z], base_m } => {
                Self::Trough { floor: x, roof: x, length: y, height: z, base_m }.patches()
            }
            Self::Trough { floor, roof, length, height, base_m } => {
                trough(floor, roof, length, height, base_m)
            }
            Self::Upright { radius, height, cone, base_m } => upright(radius, height, cone, base_m),
            Self::Ellipsoid { radius, half_height, base_m } => vec![ellipsoid(
                radius,
                half_height,
                base_m + half_height,
                (-FRAC_PI_2, FRAC_PI_2),
                (0.0, TAU),
                Wetted::Inside,
            )],
            Self::Drum { radius, length, round_heads, base_m } => {
                drum(radius, length, round_heads, base_m)
            }
        }
    }

    /// Lowest and highest point, m.
    #[must_use]
    pub fn heights(&self) -> (f64, f64) {
        match *self {
            Self::Block { size, base_m } => (base_m, base_m + size[2]),
            Self::Trough { height, base_m, .. } => (base_m, base_m + height),
            Self::Upright { height, cone, base_m, .. } => (base_m, base_m + cone + height),
            Self::Ellipsoid { half_height, base_m, .. } => (base_m, base_m + 2.0 * half_height),
            Self::Drum { radius, base_m, .. } => (base_m, base_m + 2.0 * radius),
        }
    }

    /// Volume below `z_m`, m3, by the formulas of solid geometry.
    #[must_use]
    pub fn volume_below(&self, z_m: f64) -> f64 {
        let (low, high) = self.heights();
        let depth = z_m.clamp(low, high) - low;
        match *self {
            Self::Block { size, .. } => size[0] * size[1] * depth,
            Self::Trough { floor, roof, length, height, .. } => {
                length * depth * (floor + 0.5 * (roof - floor) * depth / height)
            }
            Self::Upright { radius, cone, .. } => {
                let filled = depth.min(cone);
                let in_cone = if cone > 0.0 {
                    PI / 3.0 * (radius / cone).powi(2) * filled.powi(3)
                } else {
                    0.0
                };
                in_cone + PI * radius * radius * (depth - filled)
            }
            Self::Ellipsoid { radius, half_height, .. } => {
                let ratio = (radius / half_height).powi(2);
                PI * ratio * depth * depth * (half_height - depth / 3.0)
            }
            Self::Drum { radius, length, round_heads, .. } => {
                let rise = depth - radius;
                let half_chord = (radius * radius - rise * rise).max(0.0).sqrt();
                let segment =
                    radius * radius * (FRAC_PI_2 + (rise / radius).asin()) + rise * half_chord;
                let heads =
                    if round_heads { PI * depth * depth * (radius - depth / 3.0) } else { 0.0 };
                segment * length + heads
            }
        }
    }

    /// Upward force that the liquids must give the closed wall, N.
    #[must_use]
    pub fn weight_balance(&self, liquid: &Liquid) -> f64 {
        let inside: f64 = liquid
            .bodies()
            .iter()
            .map(|(top, bottom, density)| {
                density * (self.volume_below(*top) - self.volume_below(*bottom))
            })
            .sum();
        let outside = liquid
            .outside
            .map_or(0.0, |body| body.density_kg_m3 * self.volume_below(body.surface_m));
        liquid.gravity_m_s2 * (outside - inside)
    }
}

fn wall(shape: Shape, bottom: f64, slope_deg: f64, at: (f64, f64), heading_deg: f64) -> Vec<Patch> {
    PlanePart::new(shape, bottom, slope_deg)
        .patches(Placement { at, heading_rad: heading_deg.to_radians() })
}

fn trough(floor: f64, roof: f64, length: f64, height: f64, base: f64) -> Vec<Patch> {
    let lean = 0.5 * (roof - floor);
    let slant = lean.hypot(height);
    let slope = height.atan2(lean).to_degrees();
    let end = Shape::Trapezoid { top: roof, bottom: floor, length: height };
    let side = Shape::Rectangle { width: length, length: slant };
    let plate = |along: f64| Shape::Rectangle { width: length, length: along };
    [
        wall(side.clone(), base, slope, (0.5 * floor, 0.0), 0.0),
        wall(side, base, slope, (-0.5 * floor, 0.0), 180.0),
        wall(end.clone(), base, 90.0, (0.0, 0.5 * length), 90.0),
        wall(end, base, 90.0, (0.0, -0.5 * length), 270.0),
        wall(plate(floor), base, 0.0, (-0.5 * floor, 0.0), 0.0),
        wall(plate(roof), base + height, 180.0, (0.5 * roof, 0.0), 0.0),
    ]
    .into_iter()
    .flatten()
    .collect()
}

fn upright(radius: f64, height: f64, cone: f64, base: f64) -> Vec<Patch> {
    let disc = Shape::Circle { diameter: 2.0 * radius };
    let rim = base + cone;
    let mut patches = vec![frustum((radius, rim), (radius, rim + height), Wetted::Inside)];
    patches.extend(wall(disc.clone(), rim + height, 180.0, (radius, 0.0), 0.0));
    if cone > 0.0 {
        patches.push(frustum((0.0, base), (radius, rim), Wetted::Inside));
    } else {
        patches.extend(wall(disc, base, 0.0, (-radius, 0.0), 0.0));
    }
    patches
}

fn drum(radius: f64, length: f64, round_heads: bool, base: f64) -> Vec<Patch> {
    let mut patches = arc(radius, length, base + radius, (0.0, TAU), Wetted::Inside);
    let disc = Shape::Circle { diameter: 2.0 * radius };
    for (side, heading) in [(0.5, 90.0), (-0.5, 270.0)] {
        let y = side * length;
        if round_heads {
            patches.push(head(radius, base + radius, y, side > 0.0));
        } else {
            patches.extend(wall(disc.clone(), base, 90.0, (0.0, y), heading));
        }
    }
    patches
}

/// Half sphere closing the drum at y, bulging away from the middle.
fn head(radius: f64, centre: f64, y: f64, far_side: bool) -> Patch {
    let turn = if far_side { (0.0, PI) } else { (PI, TAU) };
    let mut patch =
        ellipsoid(radius, radius, centre, (-FRAC_PI_2, FRAC_PI_2), turn, Wetted::Inside);
    let centred = patch.point;
    patch.point = Box::new(move |u, v| {
        let at = centred(u, v);
        [at[0], at[1] + y, at[2]]
    });
    patch
}

#[cfg(test)]
mod tests;
