//! The digest sees every bit of every result; the fold keeps them apart.

use super::{Digest, fold};
use crate::lane::Lane;
use crate::part::{Loads, Part, PartLoads};
use crate::plan::builder::{bolted_disc, course, disc, hinged_disc};

fn loads(first: f32) -> Loads<1> {
    let mut next = first;
    let mut number = || {
        next *= 1.37;
        Lane([next])
    };
    Loads {
        pressure_pa: number(),
        hoop_tension_n_m: number(),
        force_n: number(),
        force_x_n: number(),
        force_z_n: number(),
        moment_centroid_n_m: number(),
        bolt_n: number(),
        moment_n_m: number(),
    }
}

fn all() -> PartLoads<1> {
    PartLoads {
        estimate: loads(3.1),
        outward: loads(-71.7),
        inward: loads(907.3),
        utilisation: Lane([0.31]),
        utilisation_bound: Lane([0.47]),
        utilisation_inward: Lane([0.03]),
    }
}

fn digest(part: &Part, loads: &PartLoads<1>) -> u64 {
    let mut digest = Digest::new();
    digest.add(part, loads);
    // What follows must not bring two digests together again.
    digest.add(part, &all());
    digest.lane(0)
}

type Field = fn(&mut PartLoads<1>) -> &mut Lane<1>;

const COURSE: [Field; 3] = [
    |l| &mut l.estimate.hoop_tension_n_m,
    |l| &mut l.outward.hoop_tension_n_m,
    |l| &mut l.inward.hoop_tension_n_m,
];
const PLANE: [Field; 7] = [
    |l| &mut l.estimate.moment_centroid_n_m,
    |l| &mut l.estimate.pressure_pa,
    |l| &mut l.outward.pressure_pa,
    |l| &mut l.inward.pressure_pa,
    |l| &mut l.estimate.force_n,
    |l| &mut l.outward.force_n,
    |l| &mut l.inward.force_n,
];
const BOLTS: [Field; 3] =
    [|l| &mut l.estimate.bolt_n, |l| &mut l.outward.bolt_n, |l| &mut l.inward.bolt_n];
const MOMENT: [Field; 3] =
    [|l| &mut l.estimate.moment_n_m, |l| &mut l.outward.moment_n_m, |l| &mut l.inward.moment_n_m];
const EVERY: [Field; 3] =
    [|l| &mut l.utilisation, |l| &mut l.utilisation_bound, |l| &mut l.utilisation_inward];

fn sees_every_bit(part: &Part, fields: &[&[Field]]) {
    let before = digest(part, &all());
    for field in fields.iter().copied().flatten() {
        for bit in 0..32 {
            let mut changed = all();
            let number = field(&mut changed);
            *number = Lane([f32::from_bits(number.lane(0).to_bits() ^ 1 << bit)]);
            assert_ne!(digest(part, &changed), before, "bit {bit}");
        }
    }
}

#[test]
fn every_bit_of_every_result_counts() {
    sees_every_bit(&course(0.0, 2.4, 4.0, 0.3), &[&COURSE, &EVERY]);
    sees_every_bit(&disc(0.5, 0.3, 1.0), &[&PLANE, &EVERY]);
    sees_every_bit(&bolted_disc(0.5, 0.3, 1.0, 8, 0.35), &[&PLANE, &BOLTS, &EVERY]);
    sees_every_bit(&hinged_disc(0.5, 0.3, 1.0), &[&PLANE, &BOLTS, &MOMENT, &EVERY]);
}

#[test]
fn the_two_zeros_are_one() {
    let part = disc(0.5, 0.3, 1.0);
    let with = |zero: f32| {
        let mut loads = all();
        loads.inward.force_n = Lane([zero]);
        digest(&part, &loads)
    };
    assert_eq!(with(0.0), with(-0.0));
}

#[test]
fn lanes_do_not_touch_each_other() {
    let mut two = Digest::<2>::new();
    two.word(Lane([1.5, -2.5]));
    two.word(Lane([0.25, 7.0]));
    for (lane, words) in [[1.5, 0.25], [-2.5, 7.0]].into_iter().enumerate() {
        let mut one = Digest::<1>::new();
        for word in words {
            one.word(Lane([word]));
        }
        assert_eq!(two.lane(lane), one.lane(0));
    }
    assert_eq!(two.lane(2), 0);
}

#[test]
fn the_fold_depends_on_every_bit_and_on_the_order() {
    let folded = fold(0x0123_4567_89AB_CDEF, 0xFEDC_BA98_7654_3210);
    for bit in 0..64 {
        assert_ne!(fold(0x0123_4567_89AB_CDEF ^ 1 << bit, 0xFEDC_BA98_7654_3210), folded);
        assert_ne!(fold(0x0123_4567_89AB_CDEF, 0xFEDC_BA98_7654_3210 ^ 1 << bit), folded);
    }
    assert_ne!(fold(fold(0, 1), 2), fold(fold(0, 2), 1));
    // Worked by hand: 1 times the multiplier, and its top bits folded back.
    assert_eq!(fold(0, 1), 0x9E37_79B9_7F4A_7C15 ^ 0x9E37_79B9_7F4A_7C15 >> 29);
}
