//! The host's series of plates against finite elements, strips and the laws of linear bending.

use strake::plate::{Direction, Edges, MomentAt, Outline, Solution, solve};
use strake_oracle::bending::{Bent, Held, Sheet};

const EDGES: [Edges; 3] = [Edges::Clamped, Edges::Supported, Edges::TopFree];

fn held(edges: Edges) -> [Held; 3] {
    match edges {
        Edges::Clamped => [Held::Clamped; 3],
        Edges::Supported => [Held::Supported; 3],
        Edges::TopFree => [Held::Clamped, Held::Clamped, Held::Free],
    }
}

fn plate(width_m: f64, length_m: f64, edges: Edges) -> Solution {
    solve(Outline::Rectangle { width_m, length_m }, edges, 0.3).unwrap()
}

/// Moments of the series and of the elements at the nodes that are checked points, under a pressure
/// that falls from one at the base to zero at `level`.
fn pairs(
    solution: &Solution,
    bent: &Bent,
    (mesh_across, mesh_up): (usize, usize),
    length_m: f64,
    level: f64,
) -> Vec<(MomentAt, f64, f64)> {
    let mut found = Vec::new();
    for one in &solution.moments {
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a node")]
        let j = (one.place.s_m / length_m * 32.0).round() as usize;
        if !(j * mesh_up).is_multiple_of(32) {
            continue;
        }
        let i = if one.place.x_m == 0.0 { 0 } else { mesh_across };
        let moments = bent.moments(i, j * mesh_up / 32);
        let by_elements = match one.direction {
            Direction::Up => moments.up,
            Direction::Level => moments.level,
            Direction::Twist => moments.twist,
        };
        found.push((one.clone(), one.weight.ramp(level) / level, by_elements));
    }
    found
}

/// Share of the length within which the elements do not resolve the corner of a free top, where
/// thin-plate theory has no finite moment.
const CORNER: f64 = 0.15;

/// Largest difference of the series from the elements, extrapolated from two meshes (their error
/// falls with the square of the width), as a share of the largest moment: away from the corners of
/// a free top, and there.
fn off_elements(edges: Edges, width_m: f64, level: f64) -> [f64; 2] {
    let solution = plate(width_m, 1.0, edges);
    let pressure = |s: f64| (1.0 - s / level).max(0.0);
    let run = |mesh: (usize, usize)| {
        let sheet = Sheet { width: width_m, length: 1.0, poisson: 0.3, held: held(edges), mesh };
        pairs(&solution, &sheet.bent(pressure, &[level]), mesh, 1.0, level)
    };
    // Square elements.
    let (narrow, wide) = if width_m < 0.75 {
        (4, 8)
    } else if width_m < 1.5 {
        (8, 16)
    } else {
        (16, 32)
    };
    let (coarse, fine) = (run((narrow, 16)), run((wide, 32)));
    let largest = fine.iter().map(|(_, series, _)| series.abs()).fold(0.0, f64::max);
    let mut off = [0.0_f64; 2];
    for (one, series, coarse) in &coarse {
        let same = |other: &&(MomentAt, f64, f64)| {
            other.0.place == one.place && other.0.direction == one.direction
        };
        let fine = fine.iter().find(same).unwrap().2;
        let elements = fine + (fine - coarse) / 3.0;
        let free = edges == Edges::TopFree && one.place.x_m > 0.0;
        let corner = usize::from(free && one.place.s_m > 1.0 - CORNER);
        off[corner] = off[corner].max((series - elements).abs() / largest);
    }
    off
}

#[test]
fn every_checked_moment_agrees_with_finite_elements() {
    let mut worst = [0.0_f64; 2];
    for edges in EDGES {
        for width_m in [0.5, 1.0, 2.0] {
            for level in [0.375, 0.75, 1.0] {
                let off = off_elements(edges, width_m, level);
                worst = [worst[0].max(off[0]), worst[1].max(off[1])];
            }
        }
    }
    println!("largest difference, share of the largest moment: {worst:?} (near a free corner)");
    assert!(worst[0] < 4e-3 && worst[1] < 4e-3, "{worst:?}");
}

/// The largest principal moment anywhere on the plate is met by the checked points, short of what
/// the mesh misses and of the corner under a free top.
#[test]
fn no_other_place_is_worse_than_the_checked_ones() {
    let mut worst = 0.0_f64;
    for edges in EDGES {
        for (width_m, across) in [(0.5, 8), (1.0, 16), (2.0, 32)] {
            let solution = plate(width_m, 1.0, edges);
            for level in [0.25, 0.5, 0.75, 1.0, 4.0] {
                let pressure = |s: f64| (1.0 - s / level).max(0.0);
                let mesh = (across, 32);
                let sheet =
                    Sheet { width: width_m, length: 1.0, poisson: 0.3, held: held(edges), mesh };
                let bent = sheet.bent(pressure, &[level]);
                let mut anywhere = 0.0_f64;
                for j in 0..=32 {
                    for i in 0..=across {
                        let corner = edges == Edges::TopFree && i == across && j > 30;
                        if !corner {
                            anywhere = anywhere.max(bent.moments(i, j).principal());
                        }
                    }
                }
                let checked =
                    solution.moments.iter().map(|one| one.weight.ramp(level).abs() / level);
                let checked = checked.fold(0.0, f64::max);
                worst = worst.max(anywhere / checked - 1.0);
            }
        }
    }
    println!("largest moment missed by the checked points: {worst:.2e}");
    assert!(worst < 8e-3, "{worst}");
}
