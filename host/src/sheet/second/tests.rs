//! Both methods over every example, at many levels.

use super::{compare, worst};
use crate::assess::{Overrides, Request, assess};
use crate::tank;
use std::path::Path;

const EXAMPLES: [(&str, &[u8]); 9] = [
    ("brine_day_tank", include_bytes!("../../../../configs/brine_day_tank.toml")),
    ("curved_parts", include_bytes!("../../../../configs/curved_parts.toml")),
    ("hatch_test_tank", include_bytes!("../../../../configs/hatch_test_tank.toml")),
    ("laboratory_tank", include_bytes!("../../../../configs/laboratory_tank.toml")),
    ("mesh_parts", include_bytes!("../../../../configs/mesh_parts.toml")),
    ("odd_shapes", include_bytes!("../../../../configs/odd_shapes.toml")),
    ("plate_box", include_bytes!("../../../../configs/plate_box.toml")),
    ("rinse_basin", include_bytes!("../../../../configs/rinse_basin.toml")),
    ("wine_drum", include_bytes!("../../../../configs/wine_drum.toml")),
];

#[test]
fn both_methods_agree_on_every_load_of_every_example() {
    let configs = Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/../configs"));
    for (name, bytes) in EXAMPLES {
        let file = tank::parse_in(configs, name, bytes).unwrap();
        let top_m = file.fill.overflow_m.unwrap().value;
        // Elements of plates take their time.
        let levels = if name == "plate_box" { 2_u8 } else { 6 };
        for level in 0..=levels {
            let level_m = Some(top_m * f64::from(level) / f64::from(levels));
            let overrides = Overrides { level_m, ..Overrides::default() };
            let request = Request::new(&file, overrides).unwrap();
            let assessment = assess(&file, &request).unwrap();
            let found = compare(&file, &request, &assessment);
            for (part, list) in file.parts.iter().zip(&found) {
                for one in list {
                    for (state, pair) in one.states.iter().enumerate() {
                        let Some(pair) = pair else { continue };
                        assert!(
                            pair.share() <= 1.0,
                            "{name} at {level_m:?}, {} {} state {state}: {pair:?}",
                            part.name(),
                            one.load
                        );
                    }
                }
            }
            let (count, _) = worst(&found);
            assert!(count >= 4 * file.parts.len(), "{name}: {count} figures");
        }
    }
}

/// A fault on purpose: a level that is 5 mm off in one of the two shows on every wetted part of
/// every example.
#[test]
fn a_difference_of_five_millimetres_shows() {
    let configs = Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/../configs"));
    for (name, bytes) in EXAMPLES {
        let file = tank::parse_in(configs, name, bytes).unwrap();
        let top_m = file.fill.overflow_m.unwrap().value;
        let at = |level_m: f64| {
            let overrides = Overrides { level_m: Some(level_m), ..Overrides::default() };
            Request::new(&file, overrides).unwrap()
        };
        let assessment = assess(&file, &at(0.9 * top_m)).unwrap();
        let found = compare(&file, &at(0.9 * top_m + 0.005), &assessment);
        for (part, list) in file.parts.iter().zip(&found) {
            let wetted = part.heights().bottom_m < 0.8 * top_m;
            let pairs = list.iter().flat_map(|one| one.states.iter().flatten());
            let seen = pairs.filter(|pair| pair.share() > 1.0).count();
            assert!(!wetted || seen > 0, "{name}, {}", part.name());
        }
    }
}
