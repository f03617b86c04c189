use super::supported;
use super::{Direction, Edge, Edges, Outline, Place, PlateError, Solution, Table, float, solve};

fn rectangle(width_m: f64, length_m: f64, edges: Edges) -> Solution {
    solve(Outline::Rectangle { width_m, length_m }, edges, 0.3).unwrap()
}

fn disc(diameter_m: f64, edges: Edges) -> Solution {
    solve(Outline::Circle { diameter_m }, edges, 0.3).unwrap()
}

/// Weighting of a moment of the middle line or, with `side`, of a side.
fn at(solution: &Solution, direction: Direction, side: bool, s_m: f64) -> &Table {
    let found = solution.moments.iter().find(|one| {
        one.direction == direction
            && (one.place.x_m > 0.0) == side
            && (one.place.s_m - s_m).abs() < 1e-9
    });
    &found.unwrap().weight
}

fn near(a: f64, b: f64, room: f64) -> bool {
    (a - b).abs() <= room
}

/// Value of a table's rows at one of its heights.
fn value(table: &Table, s_m: f64) -> f64 {
    table.points().min_by(|a, b| (a.0 - s_m).abs().total_cmp(&(b.0 - s_m).abs())).unwrap().1
}

/// Closed formulas: Timoshenko and Woinowsky-Krieger, art. 16 and 63.
#[test]
fn discs_wetted_to_the_top_are_exact() {
    let nu = 0.3;
    for radius_m in [0.35, 1.0, 2.5] {
        let (a, length) = (radius_m * radius_m, 2.0 * radius_m);
        let clamped = disc(length, Edges::Clamped);
        let supported = disc(length, Edges::Supported);
        let foot = at(&clamped, Direction::Up, false, 0.0);
        let top = at(&clamped, Direction::Up, false, length);
        // What the quadrature over the chords leaves.
        let room = 2e-7 * a;
        assert!(near(foot.total(), -a / 8.0, room) && near(top.total(), -a / 8.0, room));
        // One at the foot, zero at the top: one half, and one half of the odd part.
        assert!(near(foot.ramp(length) / length, -a * (1.0 / 16.0 + 1.0 / 48.0), room));
        assert!(near(top.ramp(length) / length, -a * (1.0 / 16.0 - 1.0 / 48.0), room));
        let centre = |solution: &Solution| at(solution, Direction::Up, false, radius_m).total();
        assert!(near(centre(&clamped), (1.0 + nu) * a / 16.0, room));
        assert!(near(centre(&supported), (3.0 + nu) * a / 16.0, room));
        let low = 0.5;
        let half = at(&supported, Direction::Up, false, (1.0 - low) * radius_m);
        let even = (3.0 + nu) * a / 16.0 * (1.0 - low * low);
        let odd = (5.0 + nu) * a / 48.0 * (low - low.powi(3));
        assert!(near(half.ramp(length) / length, 0.5 * (even + odd), room));
        let sag = |solution: &Solution| {
            let middle =
                solution.deflections.iter().find(|one| near(one.place.s_m, radius_m, 1e-9));
            middle.unwrap().weight.total()
        };
        assert!(near(sag(&clamped), a * a / 64.0, room * a));
        assert!(near(sag(&supported), (5.0 + nu) / (1.0 + nu) * a * a / 64.0, room * a));
    }
}

/// Turned by a quarter a square is the same plate; upside down all but the free top are.
#[test]
fn plates_keep_their_symmetry() {
    for edges in [Edges::Clamped, Edges::Supported] {
        let square = rectangle(1.2, 1.2, edges);
        let (up, level) =
            [Direction::Up, Direction::Level].map(|d| at(&square, d, false, 0.6).total()).into();
        assert!(near(up, level, 1e-6), "{edges:?} {up} {level}");
        let plate = rectangle(0.7, 1.2, edges);
        for one in &plate.moments {
            let mirror = plate.moments.iter().find(|other| {
                other.direction == one.direction
                    && near(other.place.x_m, one.place.x_m, 1e-9)
                    && near(other.place.s_m, 1.2 - one.place.s_m, 1e-9)
            });
            let turned = if one.direction == Direction::Twist { -1.0 } else { 1.0 };
            let mirror = &mirror.unwrap().weight;
            for ((_, w), (_, v)) in
                one.weight.points().zip(mirror.points().collect::<Vec<_>>().into_iter().rev())
            {
                assert!(near(w, turned * v, 1e-6), "{edges:?} {:?} {w} {v}", one.place);
            }
        }
    }
    let square = rectangle(1.0, 1.0, Edges::Clamped);
    let base = at(&square, Direction::Up, false, 0.0).total();
    let side = at(&square, Direction::Level, true, 0.5).total();
    assert!(near(base, side, 1e-5), "{base} {side}");
}

/// Moments per pressure grow with the square of the size.
#[test]
fn plates_scale_with_their_size() {
    for edges in [Edges::Clamped, Edges::Supported, Edges::TopFree] {
        let (small, large) = (rectangle(0.6, 0.4, edges), rectangle(1.8, 1.2, edges));
        for (a, b) in small.moments.iter().zip(&large.moments) {
            let (a, b) = (a.weight.ramp(0.3), b.weight.ramp(0.9) / 27.0);
            assert!(near(a, b, 1e-7), "{edges:?} {a} {b}");
        }
        for (a, b) in small.deflections.iter().zip(&large.deflections) {
            assert!(near(a.weight.total(), b.weight.total() / 81.0, 1e-8), "{edges:?}");
        }
    }
}

/// Moments of a beam on two supports, from equilibrium alone, under water of unit weight up to
/// `wet` on a span of `span`.
fn beam(span: f64, wet: f64, s: f64) -> f64 {
    let load = 0.5 * wet * wet;
    let top = load * (wet / 3.0) / span;
    let dry = (wet - s).max(0.0);
    // About the cut, from above: the top's reaction less the load above the cut.
    top * (span - s) - dry.powi(3) / 6.0
}

/// The middle of a plate eight times as wide as high is a strip, and equilibrium gives its moments
/// but for those of its ends.
#[test]
fn wide_plates_are_strips_in_balance() {
    for edges in [Edges::Clamped, Edges::Supported] {
        let plate = rectangle(24.0, 3.0, edges);
        for wet in [0.6, 1.5, 2.4, 3.0] {
            let moment = |s: f64| at(&plate, Direction::Up, false, s).ramp(wet);
            let ends = match edges {
                Edges::Supported => [0.0; 2],
                _ => [moment(0.0), moment(3.0)],
            };
            let scale = beam(3.0, wet, 0.3 * wet);
            for i in [1, 4, 8, 16, 24, 31] {
                let s = 3.0 * float(i) / 32.0;
                let expected = beam(3.0, wet, s) + ends[0] + (ends[1] - ends[0]) * s / 3.0;
                assert!(near(moment(s), expected, 2e-3 * scale), "{edges:?} {wet} {s}");
            }
        }
    }
}

/// A strip of 3 m, wet to 1.5 m, water: 3509 N m/m at 0.888 m. Uniform and triangular load over the
/// whole plate, superposed, would give nothing at mid-span.
#[test]
fn a_strip_wet_to_the_middle() {
    let plate = rectangle(24.0, 3.0, Edges::Supported);
    let weight = 9806.65;
    let moments = |s: f64| weight * at(&plate, Direction::Up, false, s).ramp(1.5);
    let heights = (1..32).map(|i| 3.0 * float(i) / 32.0);
    let (place, largest) =
        heights.map(|s| (s, moments(s))).max_by(|a, b| a.1.total_cmp(&b.1)).unwrap();
    assert!(near(largest, 3509.0, 10.0), "{largest} at {place}");
    assert!(near(place, 0.888, 3.0 / 64.0), "{place}");
    let middle = at(&plate, Direction::Up, false, 1.5);
    let superposed =
        weight * (1.5 * middle.total() - 3.0 * (middle.total() - middle.ramp(3.0) / 3.0));
    assert!(near(superposed, 0.0, 1.0), "what the wrong rule says: {superposed}");
    assert!(near(moments(1.5), weight * beam(3.0, 1.5, 1.5), 5.0));
    assert!(moments(1.5) > 2700.0);
}

/// Maxwell: a line load here bends the strip there as much as one there bends it here.
#[test]
fn wide_plates_are_reciprocal() {
    for edges in [Edges::Clamped, Edges::Supported] {
        let plate = rectangle(8.0, 1.0, edges);
        let at = |s: f64| {
            let found = plate.deflections.iter().find(|one| near(one.place.s_m, s, 1e-9));
            &found.unwrap().weight
        };
        for (a, b) in [(0.25, 0.5), (0.25, 0.75), (0.375, 0.875)] {
            let (there, here) = (value(at(a), b), value(at(b), a));
            assert!(near(there, here, 2e-3 * value(at(0.5), 0.5)), "{edges:?} {there} {here}");
        }
    }
}

/// What cutting the series off costs, over the whole domain.
#[test]
fn the_series_have_converged() {
    let mut worst = [("", 0.0_f64); 4];
    let mut note = |at: usize, edges: Edges, error: f64| {
        worst[at] = (edges.as_str(), worst[at].1.max(error));
    };
    for aspect in [0.125, 0.25, 0.5, 1.0, 2.0, 4.0, 8.0] {
        for (at, edges) in
            [Edges::Clamped, Edges::Supported, Edges::TopFree].into_iter().enumerate()
        {
            note(at, edges, rectangle(aspect, 1.0, edges).series_error);
        }
    }
    for edges in [Edges::Clamped, Edges::Supported] {
        note(3, edges, disc(1.0, edges).series_error);
    }
    println!("{worst:?}");
    for ((edges, error), bound) in worst.into_iter().zip([1e-3, 2e-4, 1e-2, 1e-3]) {
        assert!(error > 0.0 && error < bound, "{edges} {error}");
    }
}

#[test]
fn tables_integrate_exactly_and_split_at_their_zeros() {
    let table = Table::new([(0.0, 2.0), (1.0, -2.0), (3.0, 1.0)]);
    // 0 over the first stretch, -1 over the second.
    assert!(near(table.total(), -1.0, 1e-12));
    let parts = table.split();
    assert!(near(parts.positive.total(), 0.5 + 1.0 / 3.0, 1e-12));
    assert!(near(parts.negative.total(), 0.5 + 4.0 / 3.0, 1e-12));
    for i in 0..=50 {
        let h = 0.1 * float(i);
        let sum: f64 = (0..20_000)
            .map(|k| {
                let s = h * (float(k) + 0.5) / 20_000.0;
                let w = match s {
                    s if s < 1.0 => 2.0 - 4.0 * s,
                    s if s < 3.0 => -2.0 + 1.5 * (s - 1.0),
                    _ => 0.0,
                };
                (h - s) * w * h / 20_000.0
            })
            .sum();
        // The strips miss the jump at the end.
        assert!(near(table.ramp(h), sum, 3e-4), "{h}");
        assert!(near(parts.positive.ramp(h) - parts.negative.ramp(h), table.ramp(h), 1e-12));
    }
    assert!(near(table.ramp(-1.0), 0.0, 0.0));
}

#[test]
fn what_is_no_plate_is_refused() {
    let rectangle = |width_m, length_m| Outline::Rectangle { width_m, length_m };
    let circle = Outline::Circle { diameter_m: 1.0 };
    for (outline, edges, nu, error) in [
        (rectangle(9.0, 1.0), Edges::Clamped, 0.3, PlateError::Aspect),
        (rectangle(0.0, 1.0), Edges::Clamped, 0.3, PlateError::Size),
        (rectangle(f64::NAN, 1.0), Edges::Supported, 0.3, PlateError::Size),
        (rectangle(1.0, 1.0), Edges::Supported, 0.6, PlateError::Poisson),
        (circle, Edges::TopFree, 0.3, PlateError::RoundTopFree),
        (Outline::Circle { diameter_m: -1.0 }, Edges::Clamped, 0.3, PlateError::Size),
    ] {
        assert_eq!(solve(outline, edges, nu).unwrap_err(), error);
    }
}

/// The edges carry the load, less what holds the corners down; moments about the base agree, too.
/// Square, uniform: 0.420 q a at the middle of an edge, 0.065 q a² at a corner (Theory of Plates
/// and Shells, table 8).
#[test]
fn the_edges_of_a_supported_plate_carry_its_load() {
    const POINTS: usize = 100;
    for (width_m, level_m) in [(1.0, 1e9), (1.0, 1.0), (1.6, 0.6), (0.5, 1.7)] {
        let series = supported::Series::new(width_m, 1.0, 0.3, 512);
        let load = |weight: &Table| weight.ramp(level_m) / level_m;
        let at = |edge, x_m, s_m| load(&series.reaction(edge, Place { x_m, s_m }).weight);
        // The middle rule, each half of the width counted twice.
        let share = |i: usize| (float(i) + 0.5) / float(POINTS);
        let across = |edge, s_m| -> f64 {
            let each = (0..POINTS).map(|i| at(edge, 0.5 * width_m * share(i), s_m));
            each.sum::<f64>() * width_m / float(POINTS)
        };
        let sides = (0..POINTS).map(|i| (share(i), at(Edge::Side, 0.5 * width_m, share(i))));
        let sides: Vec<(f64, f64)> = sides.collect();
        let side: f64 = 2.0 * sides.iter().map(|one| one.1).sum::<f64>() / float(POINTS);
        let turned: f64 = 2.0 * sides.iter().map(|one| one.0 * one.1).sum::<f64>() / float(POINTS);
        let (base, top) = (across(Edge::Base, 0.0), across(Edge::Top, 1.0));
        let corner = |edge, s_m| 2.0 * at(edge, 0.5 * width_m, s_m);
        let (lower, upper) = (corner(Edge::LowerCorner, 0.0), corner(Edge::UpperCorner, 1.0));
        // Pressure from one at the base to zero at the level.
        let wet = level_m.min(1.0);
        let force = width_m * wet * (1.0 - 0.5 * wet / level_m);
        let moment = width_m * wet * wet * (0.5 - wet / (3.0 * level_m));
        let carried = base + side + top - lower - upper;
        assert!((carried / force - 1.0).abs() < 5e-3, "{width_m} {level_m}: {carried} {force}");
        let about_base = turned + top - upper;
        assert!((about_base / moment - 1.0).abs() < 5e-3, "{about_base} {moment}");
        if (width_m - 1.0).abs() < 1e-9 && level_m > 1e8 {
            for (edge, x_m, s_m) in
                [(Edge::Base, 0.0, 0.0), (Edge::Top, 0.0, 1.0), (Edge::Side, 0.5, 0.5)]
            {
                let found = at(edge, x_m, s_m);
                assert!((found - 0.420).abs() < 1e-3, "{edge:?}: {found}");
            }
            assert!((0.5 * lower - 0.065).abs() < 5e-4 && (0.5 * upper - 0.065).abs() < 5e-4);
        }
    }
}
