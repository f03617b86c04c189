use super::{Contents, cover, for_desk, for_device, liquid, number};
use crate::tank::{self, BoltLine, Bolts, FirstBolt, Plane, Shape, TankFile};
use std::f64::consts::PI;
use strake_core::part::Stated;
use strake_core::plan::{LevelSensor, Reference, SignalKind, codec};

const BRINE: &str = include_str!("../../../configs/brine_day_tank.toml");
const LABORATORY: &str = include_str!("../../../configs/laboratory_tank.toml");
const BASIN: &str = include_str!("../../../configs/rinse_basin.toml");

fn parse(text: &str) -> TankFile {
    tank::parse("tank.toml", text.as_bytes()).unwrap_or_else(|findings| panic!("{findings}"))
}

fn near(a: impl Into<f64>, b: f64, relative: f64) -> bool {
    let a = a.into();
    (a - b).abs() <= relative * b.abs()
}

#[test]
fn the_plan_survives_its_bytes() {
    for text in [BRINE, LABORATORY] {
        let compiled = for_device(&parse(text)).unwrap();
        let (header, plan) = codec::decode(&compiled.encode(7).unwrap()).unwrap();
        assert_eq!(plan, compiled.plan);
        assert_eq!(header.serial, 7);
    }
}

#[test]
fn a_band_runs_from_the_hot_end_to_the_cold_end() {
    // 1280 / (1 + 4e-4 x 15) x 0.995 and 1280 / (1 - 4e-4 x 15) x 1.005.
    let top = for_desk(&parse(BRINE), &Contents::of(&parse(BRINE))).unwrap().plan.liquid.top;
    assert!(near(top.low_kg_m3, 1_266.003_976_143_141, 1e-7), "{top:?}");
    assert!(near(top.estimate_kg_m3, 1280.0, 1e-9));
    assert!(near(top.high_kg_m3, 1_294.164_989_939_638, 1e-7), "{top:?}");
}

#[test]
fn an_override_widens_a_band_and_never_narrows_it() {
    let file = parse(BRINE);
    let mut contents = Contents::of(&file);
    contents.take_density(1200.0);
    let (low, high) = contents.band_kg_m3();
    assert!(near(low, 1200.0 / 1.006 * 0.995, 1e-12) && near(high, 1200.0 / 0.994 * 1.005, 1e-12));
    contents.temperature_c = 45.0;
    assert!(near(contents.density_kg_m3(), 1200.0 / 1.01, 1e-12));
    let (hot, cold) = contents.band_kg_m3();
    assert!(near(hot, 1200.0 / 1.01 * 0.995, 1e-12) && near(cold, high, 1e-12));
    contents.take_gas(-300.0);
    assert_eq!(contents.gas_pa.map(f64::to_bits), [-300.0, -300.0, 0.0].map(f64::to_bits));
}

#[test]
fn counts_of_a_current_loop_and_of_a_register() {
    let level = for_device(&parse(BRINE)).unwrap().plan.level;
    assert_eq!(level.signal, SignalKind::CurrentLoop);
    assert_eq!(level.zero_count_16, 64_000, "4 mA in sixteenths of a microampere");
    assert!(near(level.value_per_count_16, 150e3 / 256e3, 1e-7));
    let offset_pa = [0.0; 3];
    let reference = Reference::Atmosphere { offset_pa };
    assert_eq!(level.sensor, LevelSensor::Head { at_m: 0.15, reference });

    // Ullage: 1 mm down per count from 2.9 m.
    let file = parse(BASIN);
    let level = for_desk(&file, &Contents::of(&file)).unwrap().plan.level;
    let signal = SignalKind::Register { unit: 1, function: 4, register: 0, coding: 0 };
    assert_eq!(level.signal, signal);
    assert_eq!((level.zero_count_16, level.value_at_zero), (0, 2.9));
    assert!(near(level.value_per_count_16, -0.001 / 16.0, 1e-7));
    assert!(near(level.uncertainty_per_distance, 0.003, 1e-7));
}

#[test]
fn an_absolute_sensor_brings_the_weather() {
    let text =
        BRINE.replace("\"atmosphere\"", "\"absolute\"\natmosphere = [\"97 kPa\", \"105 kPa\"]");
    let LevelSensor::Head { reference, .. } = for_device(&parse(&text)).unwrap().plan.level.sensor
    else {
        panic!("a head sensor");
    };
    assert_eq!(reference, Reference::Atmosphere { offset_pa: [101e3, 97e3, 105e3] });
}

#[test]
fn the_smallest_of_equal_kinds_governs() {
    let text = LABORATORY.replace(
        "{ force = \"60 N\"",
        "{ force = \"80 N\", basis = \"drawing\" }, { force = \"60 N\"",
    );
    let plan = for_device(&parse(&text)).unwrap().plan;
    assert_eq!(plan.parts[1].outward.force_n, Stated::new(60.0));
    assert_eq!(plan.parts[1].outward.pressure_pa, Stated::new(7700.0));
    // 137 MPa x 0.85 x (4.6 - 1) mm.
    let plan = for_device(&parse(BRINE)).unwrap().plan;
    assert!(near(plan.parts[0].outward.hoop_tension_n_m.unwrap().get(), 419_220.0, 1e-7));
}

#[test]
fn a_design_state_keeps_its_remaining_share() {
    let file = parse(BASIN);
    let plan = for_desk(&file, &Contents::of(&file)).unwrap().plan;
    let state = plan.parts[0].designed_for[0];
    assert!(near(state.weight_n_m3, 1000.0 * 9.81 * 0.97, 1e-7));
    assert!(near(state.level_m, 2.2, 1e-7));
    // Walls and drain stand in the pit, the apron does not.
    assert_eq!(plan.parts.iter().map(|part| part.outside).collect::<Vec<_>>(), [1, 1, 0, 1]);
    assert_eq!((plan.outside[0].lowest_m, plan.outside[0].highest_m), (0.0, 0.6));
}

#[test]
fn gravity_of_a_latitude() {
    // GRS80 at 59.9 degrees: 9.8191 m/s2, less 6e-5 for 20 m.
    assert!(near(for_device(&parse(LABORATORY)).unwrap().plan.gravity_m_s2, 9.819_04, 1e-6));
}

/// Bolt heights by walking round the circle, and areas by strips.
#[test]
fn bolts_and_their_cuts_against_counting() {
    let circle = Shape::Circle { diameter_m: 0.66 };
    let rectangle = Shape::Rectangle { width_m: 0.4, length_m: 0.7 };
    for (count, first) in [
        (28, FirstBolt::Lowest),
        (7, FirstBolt::Lowest),
        (7, FirstBolt::Astride),
        (8, FirstBolt::Astride),
    ] {
        let line = BoltLine::Circle { diameter_m: 0.77 };
        let bolts = Bolts { count, line, first };
        for shape in [&circle, &rectangle] {
            // A slope with the sine 0.8.
            let plane = Plane::centred(shape.clone(), 0.8_f64.asin().to_degrees(), 1.0);
            let numbers = &mut heapless::Vec::new();
            let made = super::plane_shape(&plane, &mut super::Numbers { list: numbers }).unwrap();
            let weightings = cover::bolts(&bolts, &plane, &made).weightings;
            let pitch = 2.0 * PI / f64::from(count);
            let start = if first == FirstBolt::Lowest { 0.0 } else { 0.5 * pitch };
            let heights: Vec<f64> =
                (0..count).map(|i| -0.385 * (start + f64::from(i) * pitch).cos()).collect();
            let square_sum: f64 = heights.iter().map(|s| s * s).sum();
            let low = heights.iter().copied().fold(f64::INFINITY, f64::min);
            let high = heights.iter().copied().fold(f64::NEG_INFINITY, f64::max);
            for (s_i, found) in [low, high].into_iter().zip(weightings) {
                assert!(near(found.slope, s_i / square_sum, 1e-6));
                let at_centroid =
                    f64::from(found.foot) + f64::from(found.slope) * 0.5 * shape.length_m();
                assert!(near(at_centroid, 1.0 / f64::from(count), 1e-5));
                let kern = -square_sum / (f64::from(count) * s_i);
                let Some([y_m, area_m2, static_m3]) = found.cut else {
                    assert!(kern.abs() >= 0.5 * shape.length_m(), "a cut is missing");
                    continue;
                };
                let (area, first_moment) = below(shape, kern);
                assert!(near(y_m, (kern + 0.5 * shape.length_m()) * 0.8, 1e-6));
                assert!(near(area_m2, area, 1e-5), "{area_m2} {area}");
                assert!(near(static_m3, first_moment, 1e-4), "{static_m3} {first_moment}");
            }
        }
    }
}

/// Area and first moment about the lowest point below a line, by strips.
fn below(shape: &Shape, s_m: f64) -> (f64, f64) {
    let half = 0.5 * shape.length_m();
    let strips = 200_000;
    let width = (s_m + half) / f64::from(strips);
    let mut sums = (0.0, 0.0);
    for strip in 0..strips {
        let s = (f64::from(strip) + 0.5) * width - half;
        let b = match *shape {
            Shape::Circle { diameter_m } => 2.0 * (0.25 * diameter_m * diameter_m - s * s).sqrt(),
            _ => shape.width_m(),
        };
        sums = (sums.0 + b * width, sums.1 + b * (s + half) * width);
    }
    sums
}

#[test]
fn the_lower_half_of_a_disc() {
    let disc = Plane::centred(Shape::Circle { diameter_m: 0.66 }, 90.0, 1.0);
    let [y_m, area_m2, static_m3] = super::about_centroid(&disc).cut.unwrap();
    assert!(near(y_m, 0.33, 1e-6));
    assert!(near(area_m2, 0.5 * PI * 0.33 * 0.33, 1e-6));
    assert!(near(static_m3, (0.5 * PI - 2.0 / 3.0) * 0.33_f64.powi(3), 1e-6));
}

#[test]
fn a_table_of_many_rows_keeps_eight_points_and_says_what_that_costs() {
    let rows: Vec<String> = (0..=30)
        .map(|t| {
            let density = 1000.0 - 0.005 * f64::from((t - 4) * (t - 4));
            format!("[\"{t} degC\", \"{density} kg/m3\"]")
        })
        .collect();
    let start = LABORATORY.find("density_table").unwrap();
    let end = LABORATORY.find("[gas]").unwrap();
    let text = format!(
        "{}density_table = [{}]\n\n{}",
        LABORATORY[..start].replace("\"998.2 kg/m3\"", "\"998.72 kg/m3\""),
        rows.join(", "),
        &LABORATORY[end..]
    );
    let file = parse(&text);
    let (table, uncertainty) = liquid::table(&file.liquid).unwrap();
    assert_eq!(table.points().len(), 8);
    let left_out = f64::from(uncertainty) - 0.001;
    assert!((1e-7..2e-5).contains(&left_out), "{left_out}");
    for tenth in 150..=300_u16 {
        let celsius = f64::from(tenth) / 10.0;
        let own = file.liquid.density_at(celsius);
        let off = f64::from(table.at(f32::from(tenth) / 10.0).unwrap()) / own - 1.0;
        assert!(off.abs() <= left_out + 1.2e-7, "{celsius}: {off}");
    }
}

/// The device's straight lines stay within what is stated, and that is small.
#[test]
fn tables_of_petroleum_liquids_keep_their_stated_error() {
    let text = include_str!("../../../tests/cli/petroleum.toml");
    let mut worst = 0.0_f64;
    for (group, density, range) in [
        ("crude", 620.0, [-18, 95]),
        ("crude", 850.0, [5, 45]),
        ("refined", 660.0, [-18, 95]),
        ("refined", 780.0, [-18, 125]),
        ("refined", 990.3, [-18, 150]),
        ("lubricating oil", 880.0, [-18, 150]),
    ] {
        let range = range.map(|celsius| format!("\"{celsius} degC\"")).join(", ");
        let text = text
            .replacen("\"850 kg/m3\"", &format!("\"{density} kg/m3\""), 1)
            .replacen("\"5 degC\", \"45 degC\"", &range, 1)
            .replacen("\"crude\"", &format!("\"{group}\""), 1);
        let liquid = parse(&text).liquid;
        let (table, uncertainty) = liquid::table(&liquid).unwrap();
        let (points, stated) = liquid::table_error(&liquid);
        assert_eq!((points, table.points().len()), (8, 8));
        assert!((f64::from(uncertainty) - 0.002 - stated).abs() < 1e-9);
        worst = worst.max(stated);
        let (cold, hot) = (liquid.coldest_c.value, liquid.hottest_c.value);
        for step in 0..=1000_u16 {
            let celsius = number::single(cold + (hot - cold) * f64::from(step) / 1000.0);
            let read = f64::from(table.at(celsius).unwrap());
            let off = read / liquid.density_at(f64::from(celsius)) - 1.0;
            assert!(off.abs() <= stated + 2.0e-7, "{group} {density} at {celsius}: {off:e}");
        }
    }
    println!("largest stated error: {worst:.1e}");
    assert!((1e-6..1e-4).contains(&worst), "{worst:e}");
}

#[test]
fn what_the_device_needs_is_asked_for_at_the_seal_alone() {
    let start = BRINE.find("[alarm]").unwrap();
    let end = BRINE.find("[logging]").unwrap();
    let text = format!("{}{}", &BRINE[..start], &BRINE[end..]);
    let file = parse(&text);
    assert!(for_desk(&file, &Contents::of(&file)).is_ok());
    let findings = for_device(&file).unwrap_err();
    assert_eq!(findings.list()[0].code.as_str(), "needed-for-seal");
}

#[test]
fn what_a_plan_cannot_hold_is_found_with_its_place() {
    let cases = [
        ("highest_rise = \"0.2 mm/s\"", "highest_rise = \"2 m/s\"", "out-of-range"),
        ("gravity = \"9.80665 m/s2\"", "gravity = \"9.95 m/s2\"", "out-of-range"),
        ("failed_after = \"60 s\"", "failed_after = \"30 d\"", "out-of-range"),
        (
            "{ current_loop = [\"0 kPa\", \"150 kPa\"] }",
            "{ modbus = { unit = 1, function = 4, register = 0, count = \"f32\", scale = \"1 Pa\" } }",
            "not-offered",
        ),
    ];
    for (from, to, code) in cases {
        let text = BRINE.replace(from, to);
        assert_ne!(text, BRINE, "{from}");
        let findings = for_device(&parse(&text)).unwrap_err();
        let [finding] = findings.list() else { panic!("{findings}") };
        assert_eq!(finding.code.as_str(), code);
        let (line, _) = findings.position(finding);
        let line = text.lines().nth(line - 1).unwrap();
        assert!(line.contains(to.split(['=', ' ']).next().unwrap()), "{line}");
    }
}

#[test]
fn a_temperature_sensor_brings_its_table() {
    // Sixteenths of 0.0625 K; the table gives the stated density at its temperature.
    let liquid = for_device(&parse(BASIN)).unwrap().plan.liquid;
    assert!(near(liquid.temperature.unwrap().celsius_per_count_16, 0.0625 / 16.0, 1e-7));
    assert_eq!(liquid.table.points().len(), 8);
    assert!(near(liquid.table.at(4.0).unwrap(), 1010.0 / (1.0 - 2.1e-4 * 14.0), 1e-7));
    let at_18 = liquid.table.at(18.0).unwrap();
    assert!(near(at_18, 1010.0, 1e-6), "{at_18}");
}

#[test]
fn a_temperature_register_is_refused_by_name_at_the_seal() {
    let register = "{ modbus = { unit = 2, function = 4, register = 8, count = \"i16\", scale = \
                    \"0.1 K\" }, uncertainty = \"1 K\" }";
    let text = BASIN.replace("{ scale = \"0.0625 K\", uncertainty = \"1 K\" }", register);
    let file = parse(&text);
    assert!(for_desk(&file, &Contents::of(&file)).is_ok());
    let findings = for_device(&file).unwrap_err();
    assert_eq!(findings.list()[0].code.as_str(), "not-offered");
    assert!(findings.list()[0].message.contains("temperature"));
}
