//! Elements against published coefficients.

use super::{Influence, Wanted, rectangle, round};
use crate::plate::{Direction, Edges, Place};
use crate::sheet::second::quadrature::{integral, stretches};

fn even(influence: &dyn Influence, length_m: f64) -> f64 {
    let [sum] = integral(&stretches(0.0, length_m, influence.turns()), |s| [influence.at(s)]);
    sum
}

fn drawn_out(of: impl Fn(u8) -> f64) -> f64 {
    let (coarse, fine) = (of(1), of(2));
    fine + (fine - coarse) / 3.0
}

/// Timoshenko and Woinowsky-Krieger, Theory of Plates and Shells, tables 8 and 35, nu = 0.3; the
/// last digits by the exact series.
#[test]
fn squares_under_an_even_pressure() {
    let middle = Place { x_m: 0.0, s_m: 0.5 };
    let side = Place { x_m: 0.5, s_m: 0.5 };
    for (edges, place, direction, wanted) in [
        (Edges::Supported, middle, Direction::Up, 0.047_886),
        (Edges::Supported, middle, Direction::Level, 0.047_886),
        (Edges::Clamped, middle, Direction::Up, 0.022_905),
        (Edges::Clamped, side, Direction::Level, -0.051_334),
    ] {
        let asked = Wanted { edges, poisson: 0.3, place, direction };
        let found =
            drawn_out(|fine| even(&rectangle::solve([1.0, 1.0], asked, fine).unwrap(), 1.0));
        let off = (found - wanted).abs() / wanted.abs();
        assert!(off < 5e-4, "{edges:?} {direction:?}: {found} for {wanted}");
    }
}

/// Theory of Plates and Shells, art. 16: (3 + nu) p a² / 16 in the middle of a supported circle,
/// (1 + nu) p a² / 16 in that of a clamped one, -p a² / 8 at its edge.
#[test]
fn circles_under_an_even_pressure() {
    let nu = 0.3;
    let at = |s_m: f64| Place { x_m: 0.0, s_m };
    for (edges, place, direction, wanted) in [
        (Edges::Supported, at(1.0), Direction::Up, (3.0 + nu) / 16.0),
        (Edges::Clamped, at(1.0), Direction::Level, (1.0 + nu) / 16.0),
        (Edges::Clamped, at(0.0), Direction::Up, -0.125),
        (Edges::Supported, at(0.5), Direction::Up, (3.0 + nu) / 16.0 * 0.75),
    ] {
        let asked = Wanted { edges, poisson: nu, place, direction };
        let found = drawn_out(|fine| even(&round::solve(1.0, asked, fine).unwrap(), 2.0));
        let off = (found - wanted).abs() / wanted.abs();
        assert!(off < 5e-4, "{edges:?} {direction:?} {place:?}: {found} for {wanted}");
    }
}
