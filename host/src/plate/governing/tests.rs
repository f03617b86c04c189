use super::{Checked, Governing, choose};
use crate::plate::{Edges, Outline, Solution, Table, solve};

/// Moments of a plate, all against one capacity.
fn checked(solution: &Solution) -> Vec<Checked<'_>> {
    let moments = solution.moments.iter();
    moments.map(|one| Checked { weight: &one.weight, scale: 1.0 }).collect()
}

/// A sum of loads: even, and linear from surfaces down.
fn load(weight: &Table, even: f64, surfaces: &[(f64, f64)]) -> f64 {
    surfaces.iter().fold(even * weight.total(), |sum, (h, step)| sum + step * weight.ramp(*h))
}

fn judged(governing: &Governing, sine: f64, even: f64, surfaces: &[(f64, f64)]) -> f64 {
    let points = governing.tables(sine);
    points.map(|one| load(&one, even, surfaces)).fold(f64::NEG_INFINITY, f64::max)
}

const SIDES: [(f64, f64); 5] = [(1.0, 1.2), (1.0, 2.4), (1.0, 1.0), (3.0, 1.0), (1.0, 6.0)];

/// Layers, gas and levels drawn at random: no checked moment, either way, is above the worst of the
/// points; and what the points say too much stays within what is stated.
#[test]
fn no_checked_point_carries_more_under_any_stable_pressure() {
    let (mut seed, mut plates) = (1_u64, 0);
    let mut random = || {
        seed = seed.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        f64::from(u32::try_from(seed >> 33).unwrap()) / f64::from(1_u32 << 31)
    };
    let mut worst = (0.0_f64, 0.0_f64, 0.0_f64);
    for edges in [Edges::Clamped, Edges::Supported, Edges::TopFree] {
        for (width_m, length_m) in SIDES {
            let sine = if width_m > 1.0 { 0.6 } else { 1.0 };
            let solution = solve(Outline::Rectangle { width_m, length_m }, edges, 0.3).unwrap();
            let all = checked(&solution);
            let governing = choose(&all, (length_m, sine), 64).unwrap();
            assert!(2 * governing.nodes() <= 64, "{}", governing.nodes());
            plates += 1;
            worst.0 = worst.0.max(governing.excess);
            for _ in 0..400 {
                let even = if random() < 0.5 { 0.0 } else { random() };
                let count = if random() < 0.5 { 1 } else { 3 };
                let surfaces: Vec<(f64, f64)> =
                    (0..count).map(|_| (2.0 * length_m * random().powi(2), random())).collect();
                let most = |sign: f64| {
                    let loads = all.iter().map(|one| sign * load(one.weight, even, &surfaces));
                    loads.fold(0.0, f64::max)
                };
                let due = most(1.0).max(most(-1.0));
                let found = judged(&governing, sine, even, &surfaces);
                worst.1 = worst.1.max(due / found - 1.0);
            }
            for share in [0.5, 0.7, 1.0, 3.0] {
                let surfaces = [(share * length_m, 1.0)];
                let due = all.iter().map(|one| load(one.weight, 0.0, &surfaces).abs());
                let due = due.fold(0.0, f64::max);
                let found = judged(&governing, sine, 0.0, &surfaces);
                worst.2 = worst.2.max(found / due - 1.0 - governing.excess);
            }
        }
    }
    println!("{plates} plates: excess up to {:.3}, missed {:.1e}", worst.0, worst.1);
    assert!(worst.1 < 2e-6, "missed {}", worst.1);
    assert!(worst.0 < 0.08 && worst.2 < 2e-4, "{worst:?}");
}

/// Round plates, and one whose deflection counts for more than its moments.
#[test]
fn round_and_slender_plates_are_covered() {
    for edges in [Edges::Clamped, Edges::Supported] {
        let solution = solve(Outline::Circle { diameter_m: 0.8 }, edges, 0.3).unwrap();
        let mut all = checked(&solution);
        let slender = 40.0;
        all.extend(
            solution.deflections.iter().map(|one| Checked { weight: &one.weight, scale: slender }),
        );
        let governing = choose(&all, (0.8, 1.0), 64).unwrap();
        for h in [0.1, 0.3, 0.5, 0.8, 2.0] {
            let due = all.iter().map(|one| (one.scale * one.weight.ramp(h)).abs());
            let due = due.fold(0.0, f64::max);
            let found = judged(&governing, 1.0, 0.0, &[(h, 1.0)]);
            assert!(found >= due * (1.0 - 2e-6), "{edges:?} at {h}: {found} {due}");
        }
    }
}

/// Too few numbers give none, never a table that misses something.
#[test]
fn too_few_numbers_give_no_table() {
    let outline = Outline::Rectangle { width_m: 1.0, length_m: 1.2 };
    let solution = solve(outline, Edges::Supported, 0.3).unwrap();
    assert!(choose(&checked(&solution), (1.2, 1.0), 20).is_none());
    assert!(choose(&[], (1.2, 1.0), 64).is_none());
}

/// The shares of the linear programme: a target between two points is covered half by each.
#[test]
fn the_programme_finds_the_best_shares() {
    let chosen: [&[f64]; 2] = [&[1.0, 0.0, 0.5], &[0.0, 1.0, 0.5]];
    let shares = super::programme::shares(&[0.6, 0.4, 0.5], &chosen, &[1.0, 1.0, 1.0]);
    assert!((shares[0] - 0.6).abs() < 1e-9 && (shares[1] - 0.4).abs() < 1e-9, "{shares:?}");
    // Beyond what both can: as even as possible.
    let shares = super::programme::shares(&[2.0, 2.0, 2.0], &chosen, &[1.0, 1.0, 1.0]);
    assert!((shares.iter().sum::<f64>() - 1.0).abs() < 1e-9, "{shares:?}");
    let short = |load: usize| 2.0 - shares[0] * chosen[0][load] - shares[1] * chosen[1][load];
    assert!((short(0) - 1.5).abs() < 1e-9 && (short(1) - 1.5).abs() < 1e-9, "{shares:?}");
}
