//! What makes a plan a plan: every number in its range, every reference met.

use super::{
    AlarmPlan, CURVE_ROWS_MAX, Filling, LevelPlan, LevelSensor, LoggingPlan, Plan, Reference,
    ThresholdPlan,
};
use crate::liquid::Band;
use crate::part::curved::{RowKind, weight};
use crate::part::{Capacities, Cover, Curved, Geometry, Held, Part, Stated};
use crate::shape::{Pieces, Shape};
use core::fmt;

/// Why bytes are no plan. The numbers travel over the link and never change.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum PlanError {
    /// The first bytes are not a plan's.
    NotAPlan = 1,
    /// A format this version does not know.
    Format = 2,
    /// The bytes end early, or a field holds a value no version writes.
    Damaged = 3,
    /// More than fits.
    TooLarge = 4,
    /// A name is missing, too long, or there is not one per part.
    Names = 5,
    /// A number of the site is out of range.
    Site = 6,
    /// A density, its band or a layer is out of range.
    Liquid = 7,
    /// Gas pressures are out of range or order.
    Gas = 8,
    /// Liquid outside is out of range.
    Outside = 9,
    /// The level sensor's numbers are out of range.
    Level = 10,
    /// An alarm setting is out of range.
    Alarm = 11,
    /// A logging setting is out of range.
    Logging = 12,
    /// There is no part.
    NoPart = 13,
    /// A part's geometry is out of range.
    Geometry = 14,
    /// A part's capacity is out of range, or does not belong to its kind.
    Capacity = 15,
    /// The volume curve or a limit level is out of range or order.
    Filling = 16,
}

impl PlanError {
    /// The number that travels over the link.
    #[must_use]
    pub const fn number(self) -> u8 {
        self as u8
    }
}

impl fmt::Display for PlanError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::NotAPlan => "these bytes are no plan",
            Self::Format => "the plan has a format this version does not know",
            Self::Damaged => "the plan is damaged",
            Self::TooLarge => "the plan is larger than 3840 bytes",
            Self::Names => "the plan's names are missing or longer than 24 bytes",
            Self::Site => "a height, rate or gravity of the plan is out of range",
            Self::Liquid => "a density or layer of the plan is out of range",
            Self::Gas => "the plan's gas pressures are out of range or order",
            Self::Outside => "the plan's liquid outside is out of range",
            Self::Level => "the plan's level sensor is out of range",
            Self::Alarm => "an alarm setting of the plan is out of range",
            Self::Logging => "a logging setting of the plan is out of range",
            Self::NoPart => "the plan has no part",
            Self::Geometry => "a part's geometry is out of range",
            Self::Capacity => "a part's capacity is out of range or not of its kind",
            Self::Filling => "the plan's volume curve is out of range or order",
        })
    }
}

impl core::error::Error for PlanError {}

/// Largest height, length or level, m.
const LENGTH_M_MAX: f32 = 200.0;
/// Largest pressure, Pa.
const PRESSURE_PA_MAX: f32 = 1.0e7;
/// Least sine of a slope; what lies flatter is level.
const SINE_MIN: f32 = 1.0e-4;
/// Largest difference of two statements of one length, m.
const LENGTH_SLACK_M: f32 = 1.0e-3;
/// Largest volume, m³.
const VOLUME_M3_MAX: f32 = 1.0e7;
/// Shortest and longest window of the inflow, ms: ticks in it are exact in f32.
const WINDOW_MS: core::ops::RangeInclusive<u32> = 1_000..=4 * 3_600_000;
/// Longest delay, ms (24 days: half the range of a 32-bit tick).
const DELAY_MS_MAX: u32 = 24 * 86_400_000;

#[inline(never)]
fn within(value: f32, low: f32, high: f32) -> bool {
    low <= value && value <= high
}

fn length(value: f32) -> bool {
    within(value, -LENGTH_M_MAX, LENGTH_M_MAX)
}

fn pressure(value: f32) -> bool {
    within(value, -PRESSURE_PA_MAX, PRESSURE_PA_MAX)
}

fn band(band: &Band) -> bool {
    within(band.low_kg_m3, 1.0, 25_000.0)
        && within(band.estimate_kg_m3, band.low_kg_m3, band.high_kg_m3)
        && within(band.high_kg_m3, band.low_kg_m3, 25_000.0)
}

fn require(holds: bool, error: PlanError) -> Result<(), PlanError> {
    if holds { Ok(()) } else { Err(error) }
}

impl Plan {
    /// Checks every number against its range. A comparison with a number that is not one fails.
    ///
    /// # Errors
    /// The first rule broken.
    #[inline(never)]
    pub fn check(&self) -> Result<(), PlanError> {
        self.check_site()?;
        self.check_liquid()?;
        let gas = &self.gas;
        require(
            pressure(gas.lowest_pa)
                && within(gas.nominal_pa, gas.lowest_pa, gas.highest_pa)
                && pressure(gas.highest_pa),
            PlanError::Gas,
        )?;
        for outside in &self.outside {
            require(
                length(outside.highest_m)
                    && length(outside.lowest_m)
                    && outside.lowest_m <= outside.highest_m
                    && band(&outside.density),
                PlanError::Outside,
            )?;
        }
        check_level(&self.level, self.shell_top_m)?;
        check_alarm(&self.alarm)?;
        check_logging(self.logging)?;
        check_filling(self)?;
        require(!self.parts.is_empty(), PlanError::NoPart)?;
        for part in &self.parts {
            self.check_part(part)?;
        }
        Ok(())
    }

    fn check_site(&self) -> Result<(), PlanError> {
        require(
            within(self.gravity_m_s2, 9.7, 9.9)
                && length(self.shell_top_m)
                && length(self.floor_m)
                && self.floor_m < self.shell_top_m
                && within(self.overflow_m, self.floor_m, LENGTH_M_MAX)
                && (self.closed || self.overflow_m <= self.shell_top_m)
                && within(self.highest_rise_m_s, 0.0, 1.0)
                && within(self.highest_fall_m_s, 0.0, 1.0),
            PlanError::Site,
        )
    }

    fn check_liquid(&self) -> Result<(), PlanError> {
        let liquid = &self.liquid;
        let mut sound = band(&liquid.top)
            && within(liquid.table_uncertainty, 0.0, 0.5)
            && liquid.products.iter().all(band)
            && liquid
                .table
                .points()
                .iter()
                .all(|&(t, rho)| within(t, -273.15, 1000.0) && within(rho, 1.0, 25_000.0));
        if let Some(sensor) = &liquid.temperature {
            sound &= !liquid.table.points().is_empty()
                && within(sensor.celsius_at_zero, -1.0e4, 1.0e4)
                && within(sensor.celsius_per_count_16, -100.0, 100.0)
                && within(sensor.uncertainty_k, 0.0, 100.0);
        }
        let mut above = (LENGTH_M_MAX, liquid.top.estimate_kg_m3);
        for layer in &liquid.below {
            sound &= band(&layer.density)
                && length(layer.surface_m)
                && within(layer.surface_uncertainty_m, 0.0, LENGTH_M_MAX)
                && layer.surface_m < above.0
                && layer.density.estimate_kg_m3 >= above.1;
            above = (layer.surface_m, layer.density.estimate_kg_m3);
        }
        require(sound, PlanError::Liquid)
    }

    #[inline(never)]
    fn check_part(&self, part: &Part) -> Result<(), PlanError> {
        let known = (1_u16 << self.outside.len()) - 1;
        require(u16::from(part.outside) & !known == 0, PlanError::Outside)?;
        require(
            length(part.bottom_m) && length(part.top_m) && part.bottom_m <= part.top_m,
            PlanError::Geometry,
        )?;
        let stated_rise_m = part.top_m - part.bottom_m;
        let (rise_m, tension, held) = match &part.geometry {
            Geometry::Course { half_diameter_m, design_point_m, height_m } => {
                require(
                    within(*half_diameter_m, 0.01, LENGTH_M_MAX)
                        && within(*design_point_m, part.bottom_m, part.top_m)
                        && within(*height_m, 0.001, LENGTH_M_MAX),
                    PlanError::Geometry,
                )?;
                (*height_m, true, None)
            }
            Geometry::Plane { shape, sine, cover, .. } => {
                let cover = cover.as_ref();
                let held = cover.map_or(Held::Otherwise, Cover::held);
                require(
                    check_shape(shape, *sine, &self.numbers)
                        && cover.is_none_or(|cover| cover.is_sound(shape, *sine))
                        && check_plate(held, stated_rise_m, &self.numbers),
                    PlanError::Geometry,
                )?;
                (shape.rise_m(), false, Some(held))
            }
            Geometry::Curved(curved) => {
                require(check_curved(curved, stated_rise_m, &self.numbers), PlanError::Geometry)?;
                // The size of a force has no direction that could be judged inward.
                require(part.inward.force_n.is_none(), PlanError::Capacity)?;
                (stated_rise_m, curved.places > 0, Some(Held::Otherwise))
            }
        };
        require((stated_rise_m - rise_m).abs() <= LENGTH_SLACK_M, PlanError::Geometry)?;
        for capacities in [&part.outward, &part.inward] {
            check_capacities(capacities, tension, held)?;
        }
        for state in &part.designed_for {
            require(
                length(state.level_m)
                    && within(state.weight_n_m3, 1.0, 2.5e5)
                    && pressure(state.gas_pa),
                PlanError::Capacity,
            )?;
        }
        require(!part.judged_inward() || self.alarm.inward.is_some(), PlanError::Alarm)
    }
}

/// Smallest and largest width over length of an ellipse or a disc.
const ASPECT: [f32; 2] = [1.0e-3, 1.0e3];
/// Largest share by which what is stated of a shape may differ from what its pieces give.
const PIECES_SLACK: f32 = 1.0e-3;

fn size(length_m: f32) -> bool {
    within(length_m, 0.001, LENGTH_M_MAX)
}

fn check_shape(shape: &Shape, sine: f32, numbers: &[f32]) -> bool {
    let (sized, sloped) = match shape {
        Shape::Circle(circle) => {
            let [low, high] = ASPECT;
            (size(circle.radius_m()) && within(circle.aspect(), low, high), true)
        }
        Shape::Rectangle(rectangle) => {
            let [width_m, length_m] = rectangle.sides_m();
            (size(width_m) && size(length_m), true)
        }
        Shape::Pieces(pieces) => (check_pieces(pieces, numbers), true),
        Shape::Level { area_m2 } => (within(*area_m2, 1.0e-6, 1.0e5), false),
    };
    sized && if sloped { within(sine, SINE_MIN, 1.0) } else { within(sine, 0.0, 0.0) }
}

/// Every piece in its place, and together the area and the centroid that are stated.
#[inline(never)]
fn check_pieces(pieces: &Pieces, numbers: &[f32]) -> bool {
    let Pieces { area_m2, length_m, centroid_m, .. } = *pieces;
    let [strips, discs] = pieces.pieces(numbers);
    let [area, first_m3] = pieces.moments(numbers);
    let mut sound = size(length_m)
        && within(centroid_m, 0.0, length_m)
        && within(area_m2, 1.0e-6, 1.0e5)
        && 4 * (strips.len() + discs.len()) == pieces.count()
        && (area - area_m2).abs() <= PIECES_SLACK * area_m2
        && first_m3.abs() <= PIECES_SLACK * area_m2 * length_m;
    let most_m = length_m + PIECES_SLACK * length_m;
    let inside = |low_m: f32, long_m: f32| {
        within(low_m, 0.0, length_m) && long_m >= 0.0 && low_m + long_m <= most_m
    };
    for &[low_m, long_m, width_m, growth] in strips {
        sound &= inside(low_m, long_m) && length(width_m) && length(width_m + growth * long_m);
    }
    for &[low_m, radius_m, aspect, middle_m] in discs {
        let [least, most] = ASPECT;
        sound &= size(radius_m)
            && within(aspect.abs(), least, most)
            && within(middle_m, 0.0, length_m)
            && inside(low_m, 2.0 * radius_m + middle_m);
    }
    sound
}

/// Every row inside the part and of one sign, every place on it.
#[inline(never)]
fn check_curved(curved: &Curved, rise_m: f32, numbers: &[f32]) -> bool {
    let own = curved.numbers(numbers);
    let mut sound = own.len() == curved.count()
        && (curved.places == 0 || curved.rows[1] == [1, 0, 0])
        && own.iter().all(|&one| within(one, -1.0e12, 1.0e12));
    let inside = |y_m: f32| within(y_m, -LENGTH_SLACK_M, rise_m + LENGTH_SLACK_M);
    for force in 0..2 {
        for (kind, row) in curved.rows_of(force, numbers) {
            let [low_m, length_m, c0, c1, c2] = *row;
            let x = length_m.abs();
            // Bernstein's coefficients: a polynomial lies between the least and the largest.
            let (middle, end) = (c0 + 0.5 * c1 * x, c0 + x * (c1 + c2 * x));
            let one_sign = c0 * middle >= 0.0 && c0 * end >= 0.0 && middle * end >= 0.0;
            let is_disc = kind == RowKind::Disc;
            let high_m = low_m + if is_disc { 2.0 * length_m } else { length_m };
            sound &= inside(low_m)
                && inside(high_m)
                && one_sign
                && (!is_disc || (within(c1, 0.0, 0.0) && within(c2, 0.0, 0.0)))
                && (length_m > 0.0 || kind == RowKind::Root)
                && x >= 1.0e-6
                && within(weight(kind, row), -1.0e5, 1.0e5);
        }
    }
    for &[y_m, along, around, taken] in curved.places_of(numbers) {
        let span = [along, around, taken].into_iter().all(|one| within(one, -1.0e6, 1.0e6));
        sound &= inside(y_m) && span && around >= 0.0;
    }
    sound
}

/// Every node of a plate on it, and the weighting of one sign between two.
#[inline(never)]
fn check_plate(held: Held, rise_m: f32, numbers: &[f32]) -> bool {
    let Held::Plate(nodes) = held else { return true };
    let own = nodes.of(numbers);
    let mut sound = own.len() == usize::from(nodes.count);
    let mut below = [f32::INFINITY; 2];
    for &[y_m, w] in own {
        let rise = y_m - below[0];
        sound &= within(y_m, -LENGTH_SLACK_M, rise_m + LENGTH_SLACK_M)
            && w.abs() <= 1.0e5
            && (rise <= 0.0 || rise >= 1.0e-6 && w * below[1] >= 0.0);
        below = [y_m, w];
    }
    sound && !own.is_empty()
}

/// `tension`: whether it has one; `held`: how a cover is held, none for a course.
fn check_capacities(
    capacities: &Capacities,
    tension: bool,
    held: Option<Held>,
) -> Result<(), PlanError> {
    let turns = matches!(held, Some(Held::Line | Held::Side));
    let bears = turns || matches!(held, Some(Held::Bolts(_)));
    let positive =
        |capacity: Option<Stated>| capacity.is_none_or(|one| within(one.get(), 1.0e-3, 1.0e12));
    require(
        positive(capacities.pressure_pa)
            && positive(capacities.hoop_tension_n_m)
            && positive(capacities.force_n)
            && positive(capacities.bolt_n)
            && positive(capacities.moment_n_m)
            && (tension || capacities.hoop_tension_n_m.is_none())
            && (held.is_some() || capacities.force_n.is_none())
            && (bears || capacities.bolt_n.is_none())
            && (turns || matches!(held, Some(Held::Plate(_))) || capacities.moment_n_m.is_none()),
        PlanError::Capacity,
    )
}

fn check_level(level: &LevelPlan, shell_top_m: f32) -> Result<(), PlanError> {
    let sensor = match level.sensor {
        LevelSensor::Surface => true,
        LevelSensor::Head { at_m, reference } => {
            let offsets = match reference {
                Reference::GasSpace => true,
                Reference::Atmosphere { offset_pa: [nominal, lowest, highest] } => {
                    pressure(lowest) && pressure(highest) && within(nominal, lowest, highest)
                }
            };
            length(at_m) && at_m < shell_top_m && offsets
        }
    };
    require(
        sensor
            && pressure(level.value_at_zero)
            && within(level.value_per_count_16, -1.0e6, 1.0e6)
            && level.value_per_count_16 != 0.0
            && within(level.uncertainty, 0.0, PRESSURE_PA_MAX)
            && within(level.uncertainty_per_distance, 0.0, 1.0)
            && length(level.reference_m)
            && (1..=DELAY_MS_MAX).contains(&level.failed_after_ms),
        PlanError::Level,
    )
}

fn check_threshold(threshold: &ThresholdPlan) -> bool {
    within(threshold.utilisation, 0.01, 1.0)
        && within(threshold.deadband, 0.0, 1.0)
        // Nothing is below zero: such an alarm would never return.
        && threshold.utilisation - threshold.deadband > 0.0
        && threshold.on_delay_ms <= DELAY_MS_MAX
        && threshold.off_delay_ms <= DELAY_MS_MAX
}

fn check_alarm(alarm: &AlarmPlan) -> Result<(), PlanError> {
    require(
        check_threshold(&alarm.warn)
            && check_threshold(&alarm.alarm)
            && alarm.inward.as_ref().is_none_or(check_threshold)
            && alarm.warn.utilisation < alarm.alarm.utilisation
            && alarm.response_time_ms <= DELAY_MS_MAX
            && (1..=DELAY_MS_MAX).contains(&alarm.sounds_again_after_ms),
        PlanError::Alarm,
    )
}

fn check_logging(logging: LoggingPlan) -> Result<(), PlanError> {
    require(
        (100..=86_400_000).contains(&logging.interval_ms)
            && (logging.interval_ms..=86_400_000).contains(&logging.idle_interval_ms)
            && logging.flush_after_ms <= 86_400_000,
        PlanError::Logging,
    )
}

fn check_filling(plan: &Plan) -> Result<(), PlanError> {
    let (limits_m, curve) = (plan.limits_m(), plan.curve());
    let Filling { window_ms, limits, rows, .. } = plan.filling;
    if rows == 0 {
        return Ok(());
    }
    let mut sound = curve.len() == usize::from(rows)
        && (2..=CURVE_ROWS_MAX).contains(&curve.len())
        && limits_m.len() == usize::from(limits)
        && limits_m.len() == plan.liquid.products.len() + 2
        && WINDOW_MS.contains(&window_ms)
        && limits_m.iter().all(|&limit_m| length(limit_m));
    let mut below = [f32::NEG_INFINITY; 2];
    for &[height_m, volume_m3] in curve {
        sound &= height_m > below[0] && volume_m3 > below[1] && volume_m3 >= 0.0;
        below = [height_m, volume_m3];
    }
    // They rise: the last ones are the largest.
    let first_m = curve.first().map_or(0.0, |row| row[0]);
    sound &= length(first_m) && length(below[0]) && below[1] <= VOLUME_M3_MAX;
    require(sound, PlanError::Filling)
}

#[cfg(test)]
mod tests;
