//! No number of a plan changes unseen.

use super::{changes, lines};
use crate::compile;
use crate::plan_file::PlanFile;
use crate::units::UnitSystem::{Si, UsCustomary};
use strake_core::part::Stated;
use strake_core::plan::Plan;

/// Changes one number.
type Move = fn(&mut Plan);

fn brine() -> PlanFile {
    let text = include_bytes!("../../../configs/brine_day_tank.toml");
    let file = crate::tank::parse("brine_day_tank.toml", text).unwrap();
    let compiled = compile::for_device(&file).unwrap();
    PlanFile::of_plan(&compiled.encode(1_780_000_000).unwrap()).unwrap()
}

#[test]
fn a_plan_reads_as_its_tank_file() {
    let lines = lines(&brine(), Si);
    let value = |section: &str, label: &str| {
        let found = lines.iter().find(|line| line.section == section && line.label == label);
        found.unwrap_or_else(|| panic!("{section}, {label}")).value.as_str()
    };
    // As configs/brine_day_tank.toml states them.
    assert_eq!(value("plan", "tank"), "brine day tank 3");
    assert_eq!(value("plan", "for device"), "pump house 7");
    assert_eq!(value("plan", "sealed"), "2026-05-28 20:26:40 UTC");
    assert_eq!(value("tank", "overflow"), "9.300 m");
    assert_eq!(value("level sensor", "measures"), "pressure at 0.150 m, against the air");
    assert_eq!(value("level sensor", "scaling"), "4 mA is 0.0 Pa, 20 mA is 150.0 kPa");
    assert_eq!(value("level sensor", "uncertainty"), "+-200.0 Pa");
    assert_eq!(
        value("alarm", "alarm"),
        "0.95 of a capacity for 5.0 s, returns 0.02 below for 60.0 s, latched"
    );
    // 3.6 mm x 137 MPa x 0.85.
    assert_eq!(value("course 1", "carries"), "hoop tension 419.2 kN/m");
    assert_eq!(value("course 1", "carries inward"), "not judged");
    assert_eq!(value("ground hatch", "carries"), "force 60.00 kN, each bolt 18.00 kN");
    assert_eq!(
        value("ground hatch", "is"),
        "circle, diameter 0.660 m, 90.0 deg from level, 28 bolts"
    );
}

#[test]
fn every_number_that_moves_is_told_even_below_the_last_digit() {
    let old = brine();
    let moves: &[(&str, Move)] = &[
        ("gravity", |plan| plan.gravity_m_s2 = 9.81),
        ("shell top", |plan| plan.shell_top_m = plan.shell_top_m.next_up()),
        ("overflow", |plan| plan.overflow_m = 9.2),
        ("floor", |plan| plan.floor_m = 0.1),
        ("roof", |plan| plan.closed = true),
        ("highest rise", |plan| plan.highest_rise_m_s *= 2.0),
        ("highest fall", |plan| plan.highest_fall_m_s *= 2.0),
        ("density", |plan| plan.liquid.top.high_kg_m3 = 1300.0),
        ("other liquid 1", |plan| plan.liquid.products.clear()),
        ("gas pressure", |plan| plan.gas.highest_pa = 1.0),
        ("scaling", |plan| plan.level.value_per_count_16 *= 1.000_001),
        ("uncertainty", |plan| plan.level.uncertainty = 201.0),
        ("cannot see after", |plan| plan.level.failed_after_ms = 61_000),
        ("warn", |plan| plan.alarm.warn.on_delay_ms = 1),
        ("alarm", |plan| plan.alarm.alarm.latch = false),
        ("response time", |plan| plan.alarm.response_time_ms = 1),
        ("sounds again", |plan| plan.alarm.sounds_again_after_ms = 1),
        ("while moving", |plan| plan.logging.interval_ms = 1_000),
        ("at rest", |plan| plan.logging.idle_interval_ms = 1_000),
        ("written after", |plan| plan.logging.flush_after_ms = 0),
        ("carries", |plan| plan.parts[0].outward.hoop_tension_n_m = None),
        ("carries inward", |plan| plan.parts[4].inward.force_n = Stated::new(9e3)),
        ("stands from", |plan| plan.parts[1].top_m = 5.0),
    ];
    for (label, change) in moves {
        let mut new = old.clone();
        change(&mut new.plan);
        for units in [Si, UsCustomary] {
            let found = changes(&lines(&old, units), &lines(&new, units));
            let labels: Vec<&str> = found.iter().map(|change| change.label.as_str()).collect();
            assert_eq!(labels, [*label]);
        }
    }
}

#[test]
fn a_part_that_goes_and_one_that_comes_are_told_line_by_line() {
    let old = brine();
    let mut new = old.clone();
    new.part_names[5] = "manway".to_owned();
    let found = changes(&lines(&old, Si), &lines(&new, Si));
    let come: Vec<_> = found.iter().filter(|change| change.old.is_none()).collect();
    let gone: Vec<_> = found.iter().filter(|change| change.new.is_none()).collect();
    assert_eq!((come.len(), gone.len(), found.len()), (4, 4, 8));
    assert!(come.iter().all(|change| change.section == "manway"));
    assert!(gone.iter().all(|change| change.section == "roof hatch"));
    assert!(changes(&lines(&old, Si), &lines(&old, Si)).is_empty());
}
