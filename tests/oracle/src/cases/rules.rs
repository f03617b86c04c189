//! Short rules of named documents, for rows that check a formula with its constants.

/// A rule and its inputs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Rule {
    /// API 653 4.3.3.1, course height and diameter in feet, stress in psi:
    /// t = 2.6 (H - 1) D G / (S E) in inches, not below a floor.
    CourseThickness {
        /// Diameter, ft.
        diameter_ft: f64,
        /// Height of liquid above the lower edge, ft.
        height_ft: f64,
        /// Specific gravity.
        specific_gravity: f64,
        /// Allowable stress, psi.
        stress_psi: f64,
        /// Joint efficiency.
        joint_efficiency: f64,
        /// Least thickness, m.
        floor_m: f64,
    },
    /// Smaller of two shares of yield and tensile strength, Pa (API 650 5.6.2, API 653 4.3.3.1).
    SmallerShare {
        /// Yield strength, Pa.
        yield_pa: f64,
        /// Tensile strength, Pa.
        tensile_pa: f64,
        /// Share of yield.
        of_yield: f64,
        /// Share of tensile strength.
        of_tensile: f64,
    },
    /// t = p D / (2 S), m.
    HoopThickness {
        /// Pressure, Pa.
        pressure_pa: f64,
        /// Diameter, m.
        diameter_m: f64,
        /// Stress, Pa.
        stress_pa: f64,
    },
    /// Stress p D / (2 t), Pa.
    HoopStress {
        /// Pressure, Pa.
        pressure_pa: f64,
        /// Diameter, m.
        diameter_m: f64,
        /// Thickness, m.
        thickness_m: f64,
    },
    /// Bolted flat cover, ASME VIII-1 UG-34: t = d sqrt(C P/(S E) + 1.9 W h/(S E d^3)), m.
    BoltedCover {
        /// Attachment factor C.
        factor: f64,
        /// Gasket diameter, m.
        diameter_m: f64,
        /// Pressure, Pa.
        pressure_pa: f64,
        /// Stress times joint efficiency, Pa.
        stress_pa: f64,
        /// Bolt load, N.
        bolt_load_n: f64,
        /// Gasket moment arm, m.
        arm_m: f64,
    },
    /// Hydrostatic end force 0.785 G^2 P, N (ASME VIII-1 appendix 2).
    EndForce {
        /// Gasket diameter, m.
        diameter_m: f64,
        /// Pressure, Pa.
        pressure_pa: f64,
    },
    /// Gasket seating load 3.14 b G y, N (ASME VIII-1 appendix 2).
    SeatingLoad {
        /// Effective width, m.
        width_m: f64,
        /// Gasket diameter, m.
        diameter_m: f64,
        /// Seating stress, Pa.
        seating_pa: f64,
    },
    /// Normal gravity on an ellipsoid by Somigliana's formula, m/s2.
    NormalGravity {
        /// At the equator, m/s2.
        equator: f64,
        /// Somigliana's constant k.
        k: f64,
        /// Square of the first eccentricity.
        eccentricity_squared: f64,
        /// Latitude, degrees.
        latitude_deg: f64,
    },
    /// Series 9.780327 (1 + 5.2792e-3 sin^2 + 2.32e-5 sin^4), m/s2 (UNESCO 44, 1983).
    GravitySeries {
        /// Latitude, degrees.
        latitude_deg: f64,
    },
    /// The conventional value, m/s2 (ISO 80000-3).
    StandardGravity,
    /// A quantity read on a 4 to 20 mA loop.
    LoopLevel {
        /// Current, A.
        current_a: f64,
        /// Value at 4 mA and at 20 mA.
        ends: (f64, f64),
    },
    /// start + rate x time, kept between two ends.
    Projected {
        /// Value at the start.
        start: f64,
        /// Change per second.
        rate_per_s: f64,
        /// Time, s.
        time_s: f64,
        /// Least and largest value it can take.
        ends: (f64, f64),
    },
    /// Inflow of an upright cylinder at a rate of rise, m3/s.
    Inflow {
        /// Diameter, m.
        diameter_m: f64,
        /// Rise, m/s.
        rise_m_s: f64,
    },
    /// Limit less a rise less uncertainties, which are added straight or in quadrature, m.
    AlarmLevel {
        /// Limit level, m.
        limit_m: f64,
        /// Rise in the whole delay, m.
        rise_m: f64,
        /// Half-widths of sensor, datum and density, m.
        half_widths_m: [f64; 3],
        /// Whether they are added straight.
        straight: bool,
    },
    /// Largest radial moment of a clamped round plate under pressure linear over its height, on
    /// its lowest edge: q a^2/8 from the mean and q1 a^2/24 from the slope (Timoshenko and
    /// Woinowsky-Krieger, articles 16 and 63), N m/m.
    ClampedDiscMoment {
        /// Radius, m.
        radius_m: f64,
        /// Pressure at the centre, Pa.
        centre_pa: f64,
        /// Rise of the pressure from the centre to the lowest point, Pa.
        rise_pa: f64,
    },
    /// Bending stress 6 M / t^2 of the same plate, Pa.
    ClampedDiscStress {
        /// Radius, m.
        radius_m: f64,
        /// Thickness, m.
        thickness_m: f64,
        /// Pressure at the centre, Pa.
        centre_pa: f64,
        /// Rise of the pressure from the centre to the lowest point, Pa.
        rise_pa: f64,
    },
}

/// The seating load of ASME VIII-1 appendix 2 is written with two decimals of pi.
#[expect(clippy::approx_constant, reason = "the rule states 3.14")]
const PI_OF_RULE: f64 = 3.14;

/// Metres to an inch, exact.
const INCH_M: f64 = 0.0254;

impl Rule {
    /// The value of the rule.
    #[must_use]
    pub fn value(&self) -> f64 {
        match *self {
            Self::CourseThickness {
                diameter_ft,
                height_ft,
                specific_gravity,
                stress_psi,
                joint_efficiency,
                floor_m,
            } => {
                let load = 2.6 * (height_ft - 1.0) * diameter_ft * specific_gravity;
                (load / (stress_psi * joint_efficiency) * INCH_M).max(floor_m)
            }
            Self::SmallerShare { yield_pa, tensile_pa, of_yield, of_tensile } => {
                (yield_pa * of_yield).min(tensile_pa * of_tensile)
            }
            Self::HoopThickness { pressure_pa, diameter_m, stress_pa } => {
                pressure_pa * diameter_m / (2.0 * stress_pa)
            }
            Self::HoopStress { pressure_pa, diameter_m, thickness_m } => {
                pressure_pa * diameter_m / (2.0 * thickness_m)
            }
            Self::BoltedCover {
                factor,
                diameter_m,
                pressure_pa,
                stress_pa,
                bolt_load_n,
                arm_m,
            } => {
                let edge = 1.9 * bolt_load_n * arm_m / (stress_pa * diameter_m.powi(3));
                diameter_m * (factor * pressure_pa / stress_pa + edge).sqrt()
            }
            Self::EndForce { diameter_m, pressure_pa } => 0.785 * diameter_m.powi(2) * pressure_pa,
            Self::SeatingLoad { width_m, diameter_m, seating_pa } => {
                PI_OF_RULE * width_m * diameter_m * seating_pa
            }
            Self::NormalGravity { equator, k, eccentricity_squared, latitude_deg } => {
                let sine2 = latitude_deg.to_radians().sin().powi(2);
                equator * (1.0 + k * sine2) / (1.0 - eccentricity_squared * sine2).sqrt()
            }
            Self::GravitySeries { latitude_deg } => {
                let sine2 = latitude_deg.to_radians().sin().powi(2);
                9.780_327 * (1.0 + (5.2792e-3 + 2.32e-5 * sine2) * sine2)
            }
            Self::StandardGravity => crate::liquid::STANDARD_GRAVITY,
            Self::LoopLevel { current_a, ends: (low, high) } => {
                low + (high - low) * (1e3 * current_a - 4.0) / 16.0
            }
            Self::Projected { start, rate_per_s, time_s, ends: (low, high) } => {
                (start + rate_per_s * time_s).clamp(low, high)
            }
            Self::Inflow { diameter_m, rise_m_s } => {
                std::f64::consts::PI * diameter_m.powi(2) / 4.0 * rise_m_s
            }
            Self::AlarmLevel { limit_m, rise_m, half_widths_m, straight } => {
                let together = if straight {
                    half_widths_m.iter().sum()
                } else {
                    half_widths_m.iter().map(|u| u * u).sum::<f64>().sqrt()
                };
                limit_m - rise_m - together
            }
            Self::ClampedDiscMoment { radius_m, centre_pa, rise_pa } => {
                radius_m * radius_m * (centre_pa / 8.0 + rise_pa / 24.0)
            }
            Self::ClampedDiscStress { radius_m, thickness_m, centre_pa, rise_pa } => {
                let moment = Self::ClampedDiscMoment { radius_m, centre_pa, rise_pa }.value();
                6.0 * moment / (thickness_m * thickness_m)
            }
        }
    }
}
