#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

use super::{Node, Nodes, moments};
use crate::lane::Lane;
use crate::liquid::truth::Random;
use crate::pressure::Pressure;

/// One sample.
fn pressure(gas_pa: f32, surfaces: &[(f32, f32)]) -> Pressure<1> {
    let mut found = Pressure::gas(Lane([gas_pa]));
    for &(height_m, step_n_m3) in surfaces {
        found.add(Lane([height_m]), Lane([step_n_m3]));
    }
    found
}

/// Points of up to five nodes over a height.
fn nodes(random: &mut Random, rise_m: f64) -> Vec<Node> {
    let mut found = Vec::new();
    for _ in 0..=random.below(3) {
        let (mut y_m, mut sign) = (0.0, 1.0);
        for node in 0..=random.below(4) + 1 {
            let turns = node % 2 == 1 && random.below(2) == 0;
            let w = if turns { 0.0 } else { sign * random.between(0.01, 0.5) };
            sign = if turns { -sign } else { sign };
            found.push([y_m as f32, w as f32]);
            y_m += (rise_m - y_m) * random.between(0.2, 0.9);
        }
    }
    found
}

/// `integral p w dz` of each point in f64, by Simpson's rule between all kinks: exact there.
fn exact(nodes: &[Node], bottom_m: f32, gas_pa: f64, surfaces: &[(f32, f32)]) -> Vec<[f64; 2]> {
    let p = |z: f64, sized: bool| {
        surfaces.iter().fold(if sized { gas_pa.abs() } else { gas_pa }, |p, &(h, step)| {
            let step = f64::from(if sized { step.abs() } else { step });
            p + step * (f64::from(h) - z).max(0.0)
        })
    };
    let mut found = vec![[0.0; 2]];
    for pair in nodes.windows(2) {
        let [[a, wa], [b, wb]] = [pair[0], pair[1]].map(|node| node.map(f64::from));
        if b <= a {
            found.push([0.0; 2]);
            continue;
        }
        let heights = surfaces.iter().map(|one| f64::from(one.0) - f64::from(bottom_m));
        let mut cuts: Vec<f64> = heights.filter(|y| (a..b).contains(y)).chain([a, b]).collect();
        cuts.sort_by(f64::total_cmp);
        for cut in cuts.windows(2) {
            let [low, high] = [cut[0], cut[1]];
            let at = |y: f64, sized: bool| {
                let w = wa + (wb - wa) * (y - a) / (b - a);
                p(f64::from(bottom_m) + y, sized) * if sized { w.abs() } else { w }
            };
            for (sum, sized) in found.last_mut().unwrap().iter_mut().zip([false, true]) {
                let middle = at(0.5 * (low + high), sized);
                *sum += (high - low) / 6.0 * (at(low, sized) + 4.0 * middle + at(high, sized));
            }
        }
    }
    found
}

/// The largest and the least of all points, within 2e-6 of `integral |p| |w| dz`.
#[test]
fn moments_are_the_largest_and_the_least_of_the_points() {
    let mut random = Random(5);
    let mut worst = 0.0_f64;
    for _ in 0..4_000 {
        let bottom_m = random.between(-1.0, 3.0) as f32;
        let nodes = nodes(&mut random, 2.0);
        let gas_pa = random.between(-2e3, 5e3) as f32;
        let surfaces: Vec<(f32, f32)> = (0..=random.below(3))
            .map(|_| (random.between(-1.0, 8.0) as f32, random.between(1e3, 1e4) as f32))
            .collect();
        let state = pressure(gas_pa, &surfaces);
        let [estimate, most, least] = moments(&nodes, bottom_m, [&state; 3]);
        let due = exact(&nodes, bottom_m, gas_pa.into(), &surfaces);
        let size = due.iter().map(|one| one[1]).fold(0.0, f64::max);
        let largest = due.iter().map(|one| one[0]).fold(f64::NEG_INFINITY, f64::max);
        let smallest = due.iter().map(|one| one[0]).fold(f64::INFINITY, f64::min);
        assert_eq!(estimate, most);
        for (found, due) in [(most, largest), (least, smallest)] {
            worst = worst.max((f64::from(found.lane(0)) - due).abs() / size);
        }
    }
    println!("worst error of a moment: {worst:.2e}");
    assert!(worst < 2e-6, "{worst}");
}

/// Any pressure between two states gives no point more than the bound and none less than the
/// least, whatever the signs.
#[test]
fn bounds_hold_for_what_lies_between() {
    let mut random = Random(6);
    for _ in 0..4_000 {
        let nodes = nodes(&mut random, 2.0);
        let tops: [f32; 3] = [(); 3].map(|()| random.between(0.2, 4.0) as f32);
        let of = |share: f32| -> Vec<(f32, f32)> {
            tops.iter().zip([2e3, 3e3, 4e3]).map(|(&h, step)| (h, share * step)).collect()
        };
        let (lower, upper) = (pressure(-500.0, &of(0.7)), pressure(2e3, &of(1.3)));
        let share = random.between(0.7, 1.3) as f32;
        let gas_pa = random.between(-500.0, 2e3) as f32;
        let state = pressure(gas_pa, &of(share));
        let [found, most, least] = moments(&nodes, 0.0, [&state, &upper, &lower]);
        let due = exact(&nodes, 0.0, gas_pa.into(), &of(share));
        let smallest = due.iter().map(|one| one[0]).fold(f64::INFINITY, f64::min);
        let slack = 1e-5 * due.iter().map(|one| one[1]).fold(0.0, f64::max);
        assert!(f64::from(found.lane(0)) <= f64::from(most.lane(0)) + slack);
        assert!(f64::from(least.lane(0)) <= smallest + slack);
    }
}

#[test]
fn a_plan_that_is_short_has_no_nodes() {
    let numbers = [0.0, 1.0, 2.0, 3.0];
    let of = |count, first| Nodes { count, first }.of(&numbers);
    assert_eq!(of(2, 0), [[0.0, 1.0], [2.0, 3.0]]);
    assert_eq!(of(1, 2), [[2.0, 3.0]]);
    assert!(of(2, 1).is_empty() && of(3, 0).is_empty() && of(1, 9).is_empty());
    let state = pressure(1e3, &[]);
    let none = [-f32::MAX, -f32::MAX, f32::MAX].map(|one| Lane([one]));
    assert_eq!(moments(&[], 0.0, [&state; 3]), none);
}
