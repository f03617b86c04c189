//! A check case free of wording: what stands where, and what is asked.
//!
//! Every problem is set in the coordinates of the tank: z up from a datum, heights in metres.
//! Answers are numbers in SI units, angles in degrees.

use crate::envelope::Head;
use crate::liquid::Liquid;
use crate::patch::Wetted;
use crate::plane::PlanePart;
use crate::securing::Door;
use crate::vector::Vec3;
use crate::vessel::Vessel;

pub use super::rules::Rule;

/// One question.
#[derive(Clone, Debug, PartialEq)]
pub enum Problem {
    /// Load on a flat part.
    Plane {
        /// The part.
        part: PlanePart,
        /// What presses on it.
        liquid: Liquid,
        /// What is asked.
        ask: PlaneAsk,
    },
    /// Load on a curved part.
    Curved {
        /// The part.
        part: CurvedPart,
        /// What presses on it.
        liquid: Liquid,
        /// What is asked.
        ask: CurvedAsk,
    },
    /// Hoop tension of a course and what follows from its plate.
    Course {
        /// Diameter, m.
        diameter_m: f64,
        /// Height of the design point, m.
        at_m: f64,
        /// What presses on it.
        liquid: Liquid,
        /// Plate.
        plate: Plate,
        /// What is asked.
        ask: CourseAsk,
    },
    /// Net pressure at a height, Pa.
    Pressure {
        /// What stands in the tank.
        liquid: Liquid,
        /// Height, m.
        at_m: f64,
    },
    /// What a head sensor allows for an upright wall of one metre width from the datum up.
    Bound {
        /// Height of the wall, m.
        wall_m: f64,
        /// The sensor and its bands; the pressure band has no width.
        head: Head,
        /// What is asked.
        ask: BoundAsk,
    },
    /// Mean density between a head sensor and a surface.
    InferredDensity {
        /// Height of the head sensor and of the surface, m.
        heights_m: (f64, f64),
        /// Pressure and its half-width, Pa.
        pressure_pa: (f64, f64),
        /// Gas pressure and its half-width, Pa.
        gas_pa: (f64, f64),
        /// Half-width of the distance between surface and sensor, m.
        level_half_width_m: f64,
        /// Acceleration of gravity, m/s2.
        gravity_m_s2: f64,
        /// What is asked.
        ask: DensityAsk,
    },
    /// A wall of one metre width held against the state it was designed for.
    DesignedFor {
        /// The state it was designed for.
        design: Liquid,
        /// The state now.
        now: Liquid,
        /// Lower and upper edge, m.
        edges_m: (f64, f64),
        /// What is asked.
        ask: DesignedForAsk,
    },
    /// Time until inflow brings a vessel from one level to another.
    Filling {
        /// The vessel.
        vessel: Vessel,
        /// Levels, m.
        levels_m: (f64, f64),
        /// Inflow, m3/s.
        inflow_m3_s: f64,
    },
    /// Class of a loop current, A.
    LoopClass(f64),
    /// A rule of a document, with its constants.
    Rule(Rule),
}

/// A level line in the plane of a part, and which side of it opens.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// Distance up the slope in the coordinates of the part, m.
    pub s: f64,
    /// True when a positive moment pushes the side above the line outward.
    pub upper_out: bool,
}

/// Hinge and latch of a cover.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Securing {
    /// The hinge line; a positive moment opens an outward-opening cover.
    pub hinge: Line,
    /// Distance of the latch from it, m.
    pub latch_lever_m: f64,
    /// Whether the cover opens inward: then it sits on its seat under outward load.
    pub opens_inward: bool,
}

/// What is asked of a flat part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PlaneAsk {
    /// Force, N.
    Force,
    /// Horizontal component of the force, N.
    Horizontal,
    /// Force over area, Pa.
    MeanPressure,
    /// Depth of the centre of pressure below the top surface, m.
    CentreDepth,
    /// Its height above the datum, m.
    CentreHeight,
    /// Its height below that of the centroid, m.
    CentreBelowCentroid,
    /// Its distance down the slope from the centroid, m.
    CentreDownSlope,
    /// Its sideways coordinate, m.
    CentreSideways,
    /// Moment about a level line, N m.
    Moment(Line),
    /// Moment about an upright line at x, positive when the side of larger x goes outward, N m.
    SidewaysMoment(f64),
    /// Force at the latch, N, positive when it must hold the cover shut.
    Latch(Securing),
    /// Force at the hinge line, N, in the same sense.
    Hinge(Securing),
    /// Force on the seat, N.
    Seat(Securing),
    /// Reactions of a door on a vertical hinge line at x.
    Door(Door, f64, DoorAsk),
    /// Force to lift a sluice: friction times load, plus weight, N.
    Lift {
        /// Coefficient of friction.
        friction: f64,
        /// Weight of the gate, N.
        weight_n: f64,
    },
    /// Depth of the lower edge of the k-th of n level strips of equal load, m.
    StripBottom(u32, u32),
    /// Depth of the centre of pressure of that strip, m.
    StripCentre(u32, u32),
    /// Level at which the moment about the line is zero, part covered, m.
    ZeroMomentLevel(Line),
    /// Level of the least moment about the line while filling, m.
    LeastMomentLevel(Line),
    /// The least moment about the line while filling, N m.
    LeastMoment(Line),
    /// Highest level reached from empty without passing a moment capacity on the way, m.
    LimitLevel(Line, f64),
    /// Lowest level at which the force has a value, N, found from below, m.
    LevelOfForce(f64),
}

/// What is asked of a part known by its design state.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DesignedForAsk {
    /// Highest level up to which no height carries more than in the design state, m, or `none`.
    LimitByPressure,
    /// Level at which the force equals that of the design state, m. Not sufficient.
    LimitByForce,
    /// Level at which the moment about the lower edge equals that of the design state, m. Not
    /// sufficient.
    LimitByMoment,
    /// Largest ratio over the height of the pressure now to that of the design state.
    LargestRatio,
}

/// Reactions of a door.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DoorAsk {
    /// At the latch.
    Latch,
    /// At the upper pin.
    UpperPin,
    /// At the lower pin.
    LowerPin,
}

/// A curved part of a wall.
#[derive(Clone, Debug, PartialEq)]
pub enum CurvedPart {
    /// Arc about a level axis along y.
    Arc {
        /// Radius, m.
        radius: f64,
        /// Length, m.
        length: f64,
        /// Height of the axis, m.
        axis_m: f64,
        /// Angles from the horizontal, counter-clockwise, degrees.
        angles_deg: (f64, f64),
        /// Side of the liquid.
        wetted: Wetted,
    },
    /// Cone bottom, apex down, hung at its rim.
    Cone {
        /// Radius at the rim, m.
        base_radius: f64,
        /// Height, m.
        height: f64,
        /// Height of the apex above the datum, m.
        apex_m: f64,
    },
    /// Hemispherical bottom hung at its equator.
    Bowl {
        /// Radius, m.
        radius: f64,
        /// Height of the equator, m.
        equator_m: f64,
    },
    /// Hemisphere on a vertical wall, bulging outward, wetted inside.
    WallDome {
        /// Radius, m.
        radius: f64,
        /// Height of the centre, m.
        centre_m: f64,
    },
    /// Hemisphere standing on the floor, wetted inside, with a hole at its top.
    FloorDome {
        /// Radius, m.
        radius: f64,
        /// Height of the equator, m.
        base_m: f64,
        /// Diameter of the hole, m.
        hole_diameter: f64,
    },
    /// Profile x = (a z)^(1/3) from z = 0 to the height.
    CubicProfile {
        /// The constant a, m2.
        constant: f64,
        /// Height, m.
        height: f64,
        /// Length along y, m.
        length: f64,
    },
    /// Triangles, corners counter-clockwise as seen from the liquid.
    Mesh {
        /// Triangles.
        triangles: Vec<[Vec3; 3]>,
    },
}

/// What is asked of a curved part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum CurvedAsk {
    /// Component along x, N.
    X,
    /// Component along z, N.
    Z,
    /// Size of the horizontal component, N.
    Horizontal,
    /// Size of the vertical component, N.
    Vertical,
    /// Size of the force, N.
    Resultant,
    /// Angle of the force to the horizontal.
    AngleFromHorizontal,
    /// Angle of the force to the vertical.
    AngleFromVertical,
    /// Depth of the line of the horizontal component below the top surface, m.
    HorizontalDepth,
    /// That line's distance below the height given, m.
    HorizontalBelow(f64),
    /// Distance of the line of the vertical component from the axis, m.
    VerticalLine,
    /// Moment about the y axis through a point, z Fx - x Fz, N m.
    MomentAboutY(Vec3),
    /// Upward force less a weight, shared by a number of bolts, N.
    PerBolt {
        /// Weight, N.
        weight_n: f64,
        /// Number of bolts.
        bolts: f64,
    },
    /// Largest hoop tension of the shell, N/m.
    LargestHoop,
    /// Largest meridional tension of the shell, N/m.
    LargestMeridional,
    /// Hoop tension at an angle from the lowest point, degrees, N/m.
    HoopAt(f64),
    /// Meridional tension at an angle from the lowest point, degrees, N/m.
    MeridionalAt(f64),
    /// Radial inward pull on the rim of a cone, N/m.
    RimPull,
    /// Largest upward force while filling from the lowest point to the level given, N.
    LargestZ(f64),
    /// Level between two at which the vertical component is zero, m.
    ZeroZLevel(f64, f64),
}

/// Plate of a course.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plate {
    /// Thickness, m.
    pub thickness_m: f64,
    /// Corrosion allowance, m.
    pub allowance_m: f64,
    /// Allowable stress, Pa.
    pub allowable_pa: f64,
    /// Joint efficiency.
    pub joint_efficiency: f64,
}

/// What is asked of a course.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum CourseAsk {
    /// Hoop tension, N/m.
    Tension,
    /// Tension over capacity.
    Utilisation,
    /// Level of the upper surface at which the utilisation is 1, lower surfaces held, m.
    LimitLevel,
    /// Thickness, allowance included, at which the utilisation is 1, m.
    Thickness,
}

/// What is asked of a head sensor.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BoundAsk {
    /// Force on the wall with the light liquid over the heavy one at this interface, N/m.
    ForceAtInterface(f64),
    /// Largest force over the interfaces between two heights, N/m.
    LargestOverInterfaces(f64, f64),
    /// Force on the wall with one liquid of this density, N/m.
    ForceAtDensity(f64),
    /// Least force over one liquid of any density in the band, N/m.
    LeastOverDensities,
    /// Density of the least force, kg/m3.
    DensityOfLeast,
    /// Largest force over every stable profile in the band, N/m.
    LargestOverProfiles,
    /// Largest pressure at a height, Pa.
    LargestPressure(f64),
    /// Pressure at a height with one liquid of this density, Pa.
    PressureAtDensity(f64, f64),
}

/// What is asked of an inferred density.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DensityAsk {
    /// Best estimate, kg/m3.
    Estimate,
    /// Largest over the box of half-widths.
    Largest,
    /// Least over the box of half-widths.
    Least,
    /// Root of the sum of squares of the three contributions.
    RootSumSquare,
}
