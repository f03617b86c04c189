//! Bounds of the tensions in shells: held against states that a reading allows, and reached.

use crate::core_curved::Placed;
use crate::core_engine::{narrow, plan_of};
use std::f64::consts::{FRAC_PI_2, TAU};
use strake::compile::curved::{self, Profile};
use strake_core::lane::Lane;
use strake_core::liquid::{Band, Gas, Readings, States, states};
use strake_core::part::curved::Tensions;
use strake_core::plan::{LevelSensor, Reference};
use strake_oracle::liquid::{Liquid, Pressure as _};
use strake_oracle::patch::{Wetted, ellipsoid, resultant};
use strake_oracle::random::Random;

const G: f64 = 9.806_65;
/// Height of the diaphragm of a head sensor.
const AT_M: f64 = 0.1;

/// A flat head, and what may stand under it: `[least, estimate, largest]`.
#[derive(Debug)]
struct Head {
    radius_m: f64,
    height_m: f64,
    base_m: f64,
    apex_up: bool,
    gas_pa: [f64; 3],
    density_kg_m3: [f64; 3],
    /// Level of a surface sensor, or pressure of a head sensor that counts the gas in.
    read: [f64; 3],
    by_pressure: bool,
}

impl Head {
    /// `narrow` bands have one width alone, that of the gas, and the surface is seen.
    fn random(random: &mut Random, narrow_bands: bool) -> Self {
        let radius_m = f64::from(narrow(random.between(0.5, 4.0)));
        let height_m = radius_m * random.between(0.2, 1.0);
        let base_m = random.between(1.0, 4.0);
        let gas = [random.between(-5e3, 5e3), random.between(5e3, 60e3)];
        let by_pressure = !narrow_bands && random.one_in(2);
        let share = if narrow_bands { 0.0 } else { random.between(0.0, 0.02) };
        let density = random.between(800.0, 1300.0);
        let around = |middle: f64, half: f64| [middle - half, middle, middle + half];
        let level_m = random.between(0.3, base_m + 1.5 * height_m);
        let gas_pa = [gas[0], random.between(gas[0], gas[1]), gas[1]];
        let pressure = gas_pa[1] + density * G * (level_m - AT_M);
        let read = if by_pressure {
            around(pressure, random.between(0.0, 500.0))
        } else {
            around(level_m, if narrow_bands { 0.0 } else { random.between(0.0, 0.02) })
        };
        let apex_up = random.one_in(2);
        let density_kg_m3 = around(density, share * density);
        Self { radius_m, height_m, base_m, apex_up, gas_pa, density_kg_m3, read, by_pressure }
    }

    fn placed(&self) -> Placed {
        let table =
            curved::revolved(Profile::Ellipsoid, self.radius_m, self.height_m, self.apex_up);
        let below_m = if self.apex_up { 0.0 } else { self.height_m };
        Placed { table, bottom_m: self.base_m - below_m }
    }

    fn states(&self) -> States<1> {
        let (mut plan, _) = plan_of(&Liquid::uniform(1000.0, 0.0)).unwrap();
        let [lowest_pa, nominal_pa, highest_pa] = self.gas_pa.map(narrow);
        plan.gas = Gas { lowest_pa, nominal_pa, highest_pa };
        let [low, estimate, high] = self.density_kg_m3.map(narrow);
        plan.liquid.top = Band { estimate_kg_m3: estimate, low_kg_m3: low, high_kg_m3: high };
        plan.gravity_m_s2 = narrow(G);
        if self.by_pressure {
            let reference = Reference::Atmosphere { offset_pa: [0.0; 3] };
            plan.level.sensor = LevelSensor::Head { at_m: narrow(AT_M), reference };
        }
        let density = [estimate, low, high].map(|one| Lane([one]));
        let [low, estimate, high] = self.read.map(|one| Lane([narrow(one)]));
        states(&plan, &Readings { estimate, low, high, density })
    }

    /// A state that the reading allows.
    fn state(&self, gas: usize, density: usize, read: usize) -> Liquid {
        let (gas_pa, density) = (self.gas_pa[gas], self.density_kg_m3[density]);
        let level_m = if self.by_pressure {
            AT_M + (self.read[read] - gas_pa).max(0.0) / (density * G)
        } else {
            self.read[read]
        };
        Liquid { gravity_m_s2: G, ..Liquid::uniform(density, level_m).with_gas(gas_pa) }
    }

    /// Largest and least tension around the axis over the places, by cuts.
    fn around(&self, placed: &Placed, state: &Liquid) -> [f64; 2] {
        let all = placed.table.places.iter().map(|&[y_m, _, around, taken]| {
            let from_rim_m = if self.apex_up { y_m } else { self.height_m - y_m };
            let angle = (from_rim_m / self.height_m).min(1.0).asin();
            let (from, to) = if self.apex_up { (angle, FRAC_PI_2) } else { (-FRAC_PI_2, -angle) };
            let (a, h) = (self.radius_m, self.height_m);
            let cap = ellipsoid(a, h, self.base_m, (from, to), (0.0, TAU), Wetted::Inside);
            let force = resultant(&[cap], state, [0.0; 3]).force_n[2];
            around * state.at(placed.bottom_m + y_m) - taken * force
        });
        all.fold([f64::NEG_INFINITY, f64::INFINITY], |[most, least], one| {
            [most.max(one), least.min(one)]
        })
    }

    /// The extremes over the ends of all bands, and half way.
    fn searched(&self, placed: &Placed) -> [f64; 2] {
        let mut found = [f64::NEG_INFINITY, f64::INFINITY];
        for corner in 0..27 {
            let state = self.state(corner % 3, corner / 3 % 3, corner / 9);
            let [most, least] = self.around(placed, &state);
            found = [found[0].max(most), found[1].min(least)];
        }
        found
    }

    /// Of pressure times radius: what a bound may be off by rounding.
    fn scale(&self) -> f64 {
        let depth_m = self.base_m + 3.0 * self.height_m;
        let most = self.gas_pa.map(f64::abs).into_iter().fold(0.0, f64::max);
        (most + 1300.0 * G * depth_m) * self.radius_m * (self.radius_m / self.height_m).powi(2)
    }
}

fn bounds(head: &Head, placed: &Placed) -> [f64; 2] {
    let (part, numbers, rows) = placed.part();
    let Tensions { most, least, .. } = rows.tensions(true, &numbers, part.bottom_m, &head.states());
    [most.lane(0).into(), least.lane(0).into()]
}

#[test]
fn no_state_that_a_reading_allows_leaves_the_bounds() {
    let mut random = Random::new(31);
    let mut widest = [0.0_f64; 2];
    for _ in 0..60 {
        let head = Head::random(&mut random, false);
        let placed = head.placed();
        let ([most, least], [high, low]) = (bounds(&head, &placed), head.searched(&placed));
        let room = 4e-6 * head.scale();
        assert!(
            high <= most + room && low >= least - room,
            "{high} {low}: {most} {least} {head:?}"
        );
        let wide = ((most - high).max(low - least)) / (high - low).max(room);
        let kind = usize::from(head.by_pressure);
        widest[kind] = widest[kind].max(wide);
    }
    println!(
        "bounds of tensions reach past the ends of the bands by up to {:.2} of what lies between \
         them under a surface sensor, {:.2} under a head sensor that counts the gas in",
        widest[0], widest[1]
    );
}

/// However wide the band of the gas: with nothing else in doubt the bound is a state.
#[test]
fn a_band_of_gas_alone_is_bounded_exactly() {
    let mut random = Random::new(37);
    for _ in 0..60 {
        let head = Head::random(&mut random, true);
        let placed = head.placed();
        let ([most, least], [high, low]) = (bounds(&head, &placed), head.searched(&placed));
        let room = 4e-6 * head.scale();
        assert!((most - high).abs() <= room && (least - low).abs() <= room, "{head:?}");
    }
}

/// A dry head over a tank read by its pressure: the band of the gas is all there is, too.
#[test]
fn a_dry_head_is_bounded_exactly_under_a_head_sensor() {
    let gas_pa = [-2e3, 5e3, 40e3];
    let density_kg_m3 = [990.0, 1000.0, 1010.0];
    let pressure = gas_pa[1] + 1000.0 * G * 1.5;
    let head = Head {
        radius_m: 2.0,
        height_m: 0.8,
        base_m: 9.0,
        apex_up: true,
        gas_pa,
        density_kg_m3,
        read: [pressure - 100.0, pressure, pressure + 100.0],
        by_pressure: true,
    };
    let placed = head.placed();
    let [most, least] = bounds(&head, &placed);
    // N_theta = p r_2 (1 - r_2 / (2 r_1)): at the rim r_2 = R, r_1 = h² / R; R² / (2 h) above.
    let rim = 2.0 * (1.0 - 4.0 / (2.0 * 0.64));
    let apex = 0.5 * 4.0 / 0.8;
    for (found, due) in [(most, 40e3 * apex), (least, 40e3 * rim)] {
        assert!((found - due).abs() <= 2e-6 * due.abs(), "{found} for {due}");
    }
}
