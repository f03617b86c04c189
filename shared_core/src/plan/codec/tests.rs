//! The bytes of format 1, round trips, and bytes that are no plan.

use super::{Fetch, PLAN_BYTES_MAX, decode, decode_into, encode, names};
use crate::liquid::truth::Random;
use crate::part::{DesignState, Stated};
use crate::plan::builder::{
    bolted_disc, course, ellipse, exact, gas, head_sensor, layer, level_cover, on_loop,
    push_curved, push_pieces, push_plate, random, rectangle, surface_sensor, water_tank,
    with_inward_alarm,
};
use crate::plan::{Filling, Plan, PlanError, PlanHeader, Reference};
use proptest::prelude::*;

fn header() -> PlanHeader {
    PlanHeader {
        serial: 0x0102_0304_0506_0708,
        device_id: "north".try_into().unwrap(),
        provisional: false,
    }
}

fn encoded(plan: &Plan) -> Vec<u8> {
    let parts: Vec<String> = (0..plan.parts.len()).map(|index| format!("part {index}")).collect();
    let parts: Vec<&str> = parts.iter().map(String::as_str).collect();
    let mut bytes = [0; PLAN_BYTES_MAX];
    let length = encode(&header(), plan, "tank", &parts, &mut bytes).unwrap();
    bytes[..length].to_vec()
}

/// Bytes from their two digits each.
fn bytes_of(hex: &str) -> Vec<u8> {
    let digits: Vec<u8> =
        hex.chars().map(|c| c.to_digit(16).unwrap().try_into().unwrap()).collect();
    digits.chunks(2).map(|pair| pair[0] << 4 | pair[1]).collect()
}

#[test]
fn the_bytes_of_format_1() {
    let mut plan = water_tank();
    plan.level = on_loop(surface_sensor(), 0.0, 10.0);
    plan.parts[0].outward.hoop_tension_n_m = Stated::new(419_000.0);
    let fields = [
        "534b5001",                           // SKP, format 1
        "0807060504030201",                   // serial
        "056e6f727468",                       // "north"
        "0ae81c41",                           // 9.80665 m/s2
        "000020410000184100000000",           // shell top, overflow, floor
        "6f12833a6f12033b00",                 // rise, fall, open
        "00007a4400007a4400007a44",           // 1000 kg/m3, exact
        "0000000000000000",                   // no table, sensor, layer, product
        "000000000000000000000000",           // vented
        "00",                                 // nothing outside
        "0000",                               // surface sensor, current loop
        "00fa0000000000000ad72338",           // 64000: 0 m, 39 um per sixteenth
        "00000000000000000000000060ea0000",   // uncertainties, reference, 60 s
        "9a99593f0ad7a33c000000000000000000", // warn 0.85, 0.02
        "3333733f0ad7a33c000000000000000001", // alarm 0.95, 0.02, latch
        "00a0bb0d00c0270900",                 // no inward; 15 min, 10 min
        "1027000060ea000060ea0000",           // 10 s, 60 s, 60 s
        "01",                                 // one part
        "00000000009a99194000",               // course, 0 to 2.4 m, nothing outside
        "000080409a99993e9a991940",           // 4 m, 0.3 m, 2.4 m
        "020097cc480000",                     // hoop 419 kN/m; no inward, no design state
        "06706172742030",                     // "part 0"
        "0474616e6b",                         // "tank"
    ];
    assert_eq!(encoded(&plan), bytes_of(&fields.concat()));
    let (who, again) = decode(&encoded(&plan)).unwrap();
    assert_eq!((who, again), (header(), plan));
}

#[test]
fn every_kind_of_thing_comes_back() {
    let mut plan = with_inward_alarm(water_tank());
    plan.closed = true;
    plan.gas = gas(-500.0, 100.0, 2_000.0);
    plan.liquid.below.push(layer(1.0, 0.1, exact(1100.0))).unwrap();
    plan.liquid.products.push(exact(840.0)).unwrap();
    for reference in [Reference::GasSpace, Reference::Atmosphere { offset_pa: [1.0, 0.0, 2.0] }] {
        plan.level = head_sensor(-0.2, reference, 150.0);
        let design = DesignState { level_m: 6.0, weight_n_m3: 9_800.0, gas_pa: 50.0 };
        plan.parts.clear();
        for mut part in [
            course(0.0, 2.4, 4.0, 0.0),
            rectangle(1.0, 0.5, 0.7, 0.8),
            level_cover(9.0, 0.3),
            bolted_disc(0.5, 0.33, 1.0, 28, 0.385),
            ellipse(0.5, 0.3, 0.5, 0.9),
        ] {
            part.inward.pressure_pa = Stated::new(1_500.0);
            part.designed_for.push(design).unwrap();
            plan.parts.push(part).unwrap();
        }
        push_pieces(&mut plan, 1.0, 0.7);
        push_pieces(&mut plan, 0.0, 1.0);
        push_curved(&mut plan, 0.0, true);
        push_curved(&mut plan, 1.0, false);
        push_plate(&mut plan, 1.0, 0.7, 0.9);
        let (_, again) = decode(&encoded(&plan)).unwrap();
        assert_eq!(again, plan);
        plan.numbers.clear();
    }
}

/// Hands out a byte at a time, as a link or a flash might.
struct Slow<'a>(&'a [u8]);

impl Fetch for Slow<'_> {
    fn fetch(&mut self, out: &mut [u8]) -> Option<()> {
        for byte in out {
            self.0.fetch(core::slice::from_mut(byte))?;
        }
        Some(())
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(250))]

    #[test]
    fn plans_come_back(seed in any::<u64>()) {
        let plan = random::plan(&mut Random(seed));
        prop_assert_eq!(plan.check(), Ok(()));
        let bytes = encoded(&plan);
        let (who, again) = decode(&bytes).unwrap();
        prop_assert_eq!(who, header());
        prop_assert_eq!(&again, &plan);
        prop_assert_eq!(encoded(&again), bytes.clone());
        // Over an older plan, from another source.
        let mut over = random::plan(&mut Random(seed ^ 1));
        decode_into(&mut Slow(&bytes), &mut over).unwrap();
        prop_assert_eq!(over, plan);
    }

    /// No bytes panic; whatever is taken passes the check and is written back the same.
    #[test]
    fn decoding_is_total(
        seed in any::<u64>(),
        noise in prop::collection::vec(any::<u8>(), 0..400),
    ) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        let sound = encoded(&plan);
        for _ in 0..40 {
            let mut bytes = sound.clone();
            for _ in 0..=random.below(2) {
                let place = usize::try_from(random.below(1 << 20)).unwrap() % bytes.len();
                bytes[place] ^= u8::try_from(1 + random.below(255)).unwrap();
            }
            if let Ok((who, taken)) = decode(&bytes) {
                prop_assert_eq!(taken.check(), Ok(()));
                let mut out = [0; PLAN_BYTES_MAX];
                let parts = vec![""; taken.parts.len()];
                let length = encode(&who, &taken, "", &parts, &mut out).unwrap();
                let (_, again) = decode(&out[..length]).unwrap();
                prop_assert_eq!(again, taken);
            }
            let _ = names(&bytes, |_, _| {});
        }
        let headed = [b"SKP\x01".as_slice(), &noise].concat();
        let spliced = [&sound[..sound.len() / 2], &noise].concat();
        for bytes in [noise.as_slice(), &headed, &spliced] {
            let taken = decode(bytes);
            prop_assert!(taken.is_err() || taken.is_ok_and(|(_, plan)| plan.check().is_ok()));
        }
    }
}

#[test]
fn every_cut_is_an_error() {
    let mut plan = random::plan(&mut Random(11));
    plan.filling = Filling::NONE;
    let bytes = encoded(&plan);
    for length in 0..bytes.len() {
        let cut = &bytes[..length];
        assert!(names(cut, |_, _| {}).is_err(), "{length}");
        assert!(decode(cut).is_err(), "{length}");
    }
    assert_eq!(decode(&bytes[..3]), Err(PlanError::NotAPlan));
    assert_eq!(decode(b"SKQ\x01"), Err(PlanError::NotAPlan));
    assert_eq!(decode(b"SKP\x02"), Err(PlanError::Format));
    assert_eq!(decode(b"SKP\x01"), Err(PlanError::Damaged));
    let long = [bytes.as_slice(), &[0]].concat();
    assert_eq!(names(&long, |_, _| {}), Err(PlanError::Damaged));
}

#[test]
fn names_come_in_order_and_have_their_limits() {
    let mut plan = water_tank();
    plan.parts.push(level_cover(9.0, 0.3)).unwrap();
    let mut out = [0; PLAN_BYTES_MAX];
    let long = "a name of 24 bytes, just";
    assert_eq!(long.len(), 24);
    let length = encode(&header(), &plan, long, &["shell", "\u{f6}stlich"], &mut out).unwrap();
    let mut read = Vec::new();
    let tank = names(&out[..length], |index, name| read.push((index, name.to_owned()))).unwrap();
    assert_eq!(tank, long);
    assert_eq!(read, [(0, "shell".to_owned()), (1, "\u{f6}stlich".to_owned())]);
    let over = "a name of 25 bytes, alas!";
    assert_eq!(encode(&header(), &plan, "", &["a", over], &mut out), Err(PlanError::Names));
    assert_eq!(encode(&header(), &plan, "", &["a"], &mut out), Err(PlanError::Names));
    assert_eq!(encode(&header(), &plan, "", &["a", "b"], &mut [0; 60]), Err(PlanError::TooLarge));
    plan.gravity_m_s2 = 1.6;
    assert_eq!(encode(&header(), &plan, "", &["a", "b"], &mut out), Err(PlanError::Site));
}

/// Thirty-two bolted hatches fit with their longest names; with all that a part can have they do
/// not.
#[test]
fn the_largest_plan() {
    let mut plan = with_inward_alarm(water_tank());
    let mut out = [0; 2 * PLAN_BYTES_MAX];
    let names = ["twenty-four bytes a name"; 32];
    let mut part = bolted_disc(0.5, 0.33, 1.0, 28, 0.385);
    plan.parts.clear();
    for _ in 0..32 {
        plan.parts.push(part.clone()).unwrap();
    }
    assert!(plan.parts.is_full());
    let length = encode(&header(), &plan, "", &names, &mut out).unwrap();
    assert!(length <= PLAN_BYTES_MAX);
    assert_eq!(decode(&out[..length]).unwrap().1, plan);
    part.outward.pressure_pa = Stated::new(1.0e5);
    part.outward.force_n = Stated::new(1.0e5);
    part.outward.bolt_n = Stated::new(1.0e4);
    part.inward = part.outward;
    let design = DesignState { level_m: 6.0, weight_n_m3: 9_800.0, gas_pa: 50.0 };
    part.designed_for.extend([design; 2]);
    for slot in &mut plan.parts {
        *slot = part.clone();
    }
    assert_eq!(encode(&header(), &plan, "", &names, &mut out), Err(PlanError::TooLarge));
    assert_eq!(decode(&[0; PLAN_BYTES_MAX + 1]), Err(PlanError::TooLarge));
}
