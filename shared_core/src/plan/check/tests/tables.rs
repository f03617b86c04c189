//! Tables of numbers that bound nothing.

use crate::part::{Geometry, Stated};
use crate::plan::builder::{push_curved, push_plate, water_tank, with_inward_alarm};
use crate::plan::{Plan, PlanError as E};

/// Slips in the rows and places of a table.
#[test]
fn tables_that_bound_nothing() {
    for shell in [true, false] {
        let mut sound = with_inward_alarm(water_tank());
        push_curved(&mut sound, 1.0, shell);
        sound.parts[1].outward.force_n = Stated::new(1e4);
        assert_eq!(sound.check(), Ok(()));
        let broken = |slip: &dyn Fn(&mut Plan), error| {
            let mut plan = sound.clone();
            slip(&mut plan);
            assert_eq!(plan.check(), Err(error), "{:?}", plan.numbers);
        };
        for place in 0..sound.numbers.len() {
            for value in [f32::NAN, f32::INFINITY, 1e13] {
                broken(&|p| p.numbers[place] = value, E::Geometry);
            }
        }
        broken(&|p| p.numbers.truncate(12), E::Geometry);
        broken(&|p| p.parts[1].inward.force_n = Stated::new(1.0), E::Capacity);
        broken(&|p| p.parts[1].outward.bolt_n = Stated::new(1.0), E::Capacity);
        broken(
            &|p| {
                let Geometry::Curved(curved) = &mut p.parts[1].geometry else { return };
                curved.places += 1;
            },
            E::Geometry,
        );
        let mut tension = sound.clone();
        tension.parts[1].inward.hoop_tension_n_m = Stated::new(1e3);
        assert_eq!(tension.check(), if shell { Ok(()) } else { Err(E::Capacity) });
        if shell {
            // A weighting that turns its sign inside the row, a place above the rim.
            broken(&|p| p.numbers[2] = 1.0, E::Geometry);
            broken(&|p| p.numbers[5] = 1.6, E::Geometry);
            broken(&|p| p.numbers[7] = -0.9, E::Geometry);
        } else {
            // A disc that is none, an even row that runs down, a row above the part.
            broken(&|p| p.numbers[3] = 0.1, E::Geometry);
            broken(&|p| p.numbers[6] = -1.5, E::Geometry);
            broken(&|p| p.numbers[5] = 0.2, E::Geometry);
            broken(&|p| p.numbers[8] = 3.0, E::Geometry);
        }
    }
}

/// Slips in the nodes of a plate.
#[test]
fn plates_that_bound_nothing() {
    let mut sound = with_inward_alarm(water_tank());
    push_plate(&mut sound, 1.0, 2.0, 0.8);
    sound.parts[1].inward.moment_n_m = Stated::new(1e3);
    assert_eq!(sound.check(), Ok(()));
    let broken = |slip: &dyn Fn(&mut Plan), error| {
        let mut plan = sound.clone();
        slip(&mut plan);
        assert_eq!(plan.check(), Err(error), "{:?}", plan.numbers);
    };
    for place in 0..sound.numbers.len() {
        for value in [f32::NAN, f32::INFINITY, 1e13] {
            broken(&|p| p.numbers[place] = value, E::Geometry);
        }
    }
    // Too few, a node above the plate, two at one height, a sign that turns between two.
    broken(&|p| p.numbers.truncate(12), E::Geometry);
    broken(&|p| p.numbers[4] = 1.7, E::Geometry);
    broken(&|p| p.numbers[4] = p.numbers[2] + 1e-7, E::Geometry);
    broken(&|p| p.numbers[1] = -0.01, E::Geometry);
    broken(&|p| p.parts[1].outward.bolt_n = Stated::new(1.0), E::Capacity);
    broken(&|p| p.parts[1].outward.hoop_tension_n_m = Stated::new(1.0), E::Capacity);
}
