//! What stands behind the names.

use super::{REASON_BYTES_MAX, accepted_margin, append_accepted_margin};
use crate::plan::builder::water_tank;
use crate::plan::codec::{PLAN_BYTES_MAX, decode, encode, names};
use crate::plan::{Filling, Plan, PlanError, PlanHeader};

fn with_curve() -> Plan {
    let mut plan = water_tank();
    plan.state_filling(300_000, &[8.5, 9.0], &[[0.0, 0.0], [10.0, 500.0]]).unwrap();
    plan
}

fn encoded(plan: &Plan) -> Vec<u8> {
    let mut bytes = vec![0; PLAN_BYTES_MAX];
    let used = encode(&PlanHeader::default(), plan, "tank", &["course"], &mut bytes).unwrap();
    bytes.truncate(used);
    bytes
}

#[test]
fn the_bytes_of_a_volume_curve() {
    let (bare, with) = (encoded(&water_tank()), encoded(&with_curve()));
    let section = [
        &[1, 30, 0][..],
        &300_000_u32.to_le_bytes(),
        &[2, 2],
        &8.5_f32.to_le_bytes(),
        &9.0_f32.to_le_bytes(),
        &[0; 8],
        &10.0_f32.to_le_bytes(),
        &500.0_f32.to_le_bytes(),
    ];
    assert_eq!(with, [bare, section.concat()].concat());
    assert_eq!(decode(&with).unwrap().1, with_curve());
    assert_eq!(names(&with, |_, _| {}).unwrap(), "tank");
    assert_eq!(accepted_margin(&with), Ok(None));
}

#[test]
fn a_section_that_is_not_known_or_not_whole_is_refused() {
    let sound = encoded(&with_curve());
    let bare = encoded(&water_tank()).len();
    for length in bare + 1..sound.len() {
        assert_eq!(decode(&sound[..length]), Err(PlanError::Damaged), "{length}");
    }
    let section = &sound[bare..];
    let behind: [&[u8]; 5] =
        [&[0, 0, 0], &[3, 0, 0], &[1, 0, 0], section, &[2, 4, 0, b'a', b'b', b'c']];
    for more in behind {
        let bytes = [&sound, more].concat();
        assert_eq!(decode(&bytes), Err(PlanError::Damaged), "{more:?}");
    }
    let mut longer = sound.clone();
    longer[bare + 1] += 1;
    assert_eq!(decode(&longer), Err(PlanError::Damaged));
    // The reason may not stand ahead of the curve.
    let turned = [&sound[..bare], &[2, 1, 0, b'x'], section].concat();
    assert_eq!(decode(&turned), Err(PlanError::Damaged));
}

#[test]
fn numbers_of_a_curve_are_checked() {
    let refused = |change: &dyn Fn(&mut Plan)| {
        let mut plan = with_curve();
        change(&mut plan);
        assert_eq!(plan.check(), Err(PlanError::Filling), "{:?} {:?}", plan.filling, plan.numbers);
    };
    assert_eq!(with_curve().check(), Ok(()));
    // Two limits, then two rows.
    for (place, value) in [
        (0, f32::INFINITY),
        (1, 201.0),
        (2, f32::NAN),
        (2, 10.0),
        (2, -201.0),
        (3, -0.1),
        (3, f32::NAN),
        (4, 0.0),
        (5, 0.0),
        (5, 2.0e7),
    ] {
        refused(&|plan| plan.numbers[place] = value);
    }
    refused(&|plan| plan.numbers.truncate(5));
    refused(&|plan| plan.filling.rows = 1);
    refused(&|plan| plan.filling.rows = 3);
    refused(&|plan| plan.filling.limits = 1);
    refused(&|plan| plan.filling.window_ms = 999);
    refused(&|plan| plan.filling.window_ms = 4 * 3_600_000 + 1);
    let mut plan = with_curve();
    assert!(plan.state_filling(300_000, &[1.0; 2], &[[0.0; 2]; 33]).is_none());
    assert_eq!((plan.filling, plan.numbers.len()), (Filling::NONE, 6));
    assert!(plan.state_filling(300_000, &[1.0; 11], &[[0.0; 2]; 2]).is_none());
}

#[test]
fn the_reason_for_a_short_margin_travels_with_the_plan() {
    for make in [water_tank, with_curve] {
        let plan = make();
        let mut bytes = vec![0; PLAN_BYTES_MAX];
        let sealed = encoded(&plan);
        bytes[..sealed.len()].copy_from_slice(&sealed);
        let used = append_accepted_margin(&mut bytes, sealed.len(), "a person stands by").unwrap();
        let bytes = &bytes[..used];
        assert_eq!(decode(bytes).unwrap().1, plan);
        assert_eq!(accepted_margin(bytes), Ok(Some("a person stands by")));
    }
    let long = "x".repeat(REASON_BYTES_MAX + 1);
    let mut room = [0; 2 * PLAN_BYTES_MAX];
    assert_eq!(append_accepted_margin(&mut room, 9, &long), Err(PlanError::Names));
    assert_eq!(append_accepted_margin(&mut room, 9, ""), Err(PlanError::Names));
    let late = PLAN_BYTES_MAX - 3;
    assert_eq!(append_accepted_margin(&mut room, late, "x"), Err(PlanError::TooLarge));
    assert_eq!(append_accepted_margin(&mut [0; 3], 0, "x"), Err(PlanError::TooLarge));
}

#[test]
fn a_curve_gives_volumes_between_its_rows_and_ends_with_them() {
    let mut plan = water_tank();
    let rows = [[0.0, 1.0], [3.2, 157.2], [3.3, 163.6]];
    plan.state_filling(300_000, &[8.5, 9.0], &rows).unwrap();
    for (level_m, volume_m3) in
        [(-1.0, 1.0), (0.0, 1.0), (3.2, 157.2), (3.27, 161.68), (9.0, 163.6)]
    {
        assert!((plan.volume_m3(level_m) - volume_m3).abs() < 2e-5 * volume_m3, "{level_m}");
    }
    assert!(water_tank().volume_m3(3.0) <= 0.0);
    assert_eq!(plan.limit_m(None), Some(8.5));
    assert_eq!(plan.limit_m(Some(0)), Some(9.0));
    assert_eq!(plan.limit_m(Some(7)), Some(8.5), "what is not known is taken as unconfirmed");
    assert_eq!(water_tank().limit_m(None), None);
}
