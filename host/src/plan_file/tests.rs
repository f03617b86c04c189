use super::{PlanFileError, read, write};
use crate::compile;
use crate::tank;

fn plan() -> Vec<u8> {
    let text = include_bytes!("../../../configs/brine_day_tank.toml");
    let file = tank::parse("brine_day_tank.toml", text).expect("a valid file");
    compile::for_device(&file).expect("a whole plan").encode(1_780_000_000).expect("it fits")
}

#[test]
fn a_plan_comes_back_as_it_went() {
    let plan = plan();
    let back = read(&write(&plan).unwrap()).unwrap();
    assert_eq!(back.bytes, plan);
    assert_eq!(back.header.serial, 1_780_000_000);
    assert_eq!(back.header.device_id.as_str(), "pump house 7");
    assert_eq!(back.tank_name, "brine day tank 3");
    assert_eq!(back.part_names.len(), 6);
    assert_eq!(back.part_names[5], "roof hatch");
    assert_eq!(back.plan.liquid.products.len(), 1);
}

#[test]
fn every_flipped_bit_is_found() {
    let file = write(&plan()).unwrap();
    for place in 0..file.len() {
        for bit in 0..8 {
            let mut bent = file.clone();
            bent[place] ^= 1 << bit;
            assert!(read(&bent).is_err(), "bit {bit} of byte {place}");
        }
    }
}

#[test]
fn a_cut_or_longer_file_is_no_plan() {
    let mut file = write(&plan()).unwrap();
    for length in 0..file.len() {
        assert!(read(&file[..length]).is_err(), "{length} bytes");
    }
    file.push(0);
    assert!(matches!(read(&file), Err(PlanFileError::Length { .. })));
    assert!(matches!(read(b"[tank]"), Err(PlanFileError::NotAPlanFile)));
}

#[test]
fn a_plan_too_large_for_any_device_is_refused() {
    assert!(write(&vec![0; 3841]).is_err());
}
