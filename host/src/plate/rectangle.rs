//! Checked points of a rectangle.

use super::{Direction, Edges, POINT_STRETCHES, Place, float};

/// Highest checked point of a side below a free top, as a share of the length: in the corner itself
/// thin-plate theory gives no finite moment.
pub(super) const BELOW_FREE_CORNER: f64 = 0.9375;

/// Where moments are taken: up the middle line in both directions, up a clamped side across it, and
/// in the corners of a supported plate, which alone are twisted where they are not bent.
pub(super) fn moments(width_m: f64, length_m: f64, edges: Edges) -> Vec<(Place, Direction)> {
    let half_m = 0.5 * width_m;
    let mut found = Vec::new();
    for i in 0..=POINT_STRETCHES {
        let share = float(i) / float(POINT_STRETCHES);
        let s_m = share * length_m;
        let at_end = i == 0 || i == POINT_STRETCHES;
        let middle = Place { x_m: 0.0, s_m };
        let side = Place { x_m: half_m, s_m };
        match edges {
            Edges::Supported if at_end => found.push((side, Direction::Twist)),
            Edges::Supported => {
                found.push((middle, Direction::Up));
                found.push((middle, Direction::Level));
            }
            Edges::Clamped | Edges::TopFree => {
                let free = edges == Edges::TopFree && i == POINT_STRETCHES;
                if !free {
                    found.push((middle, Direction::Up));
                }
                if !at_end || free {
                    found.push((middle, Direction::Level));
                }
                if !at_end && (edges == Edges::Clamped || share <= BELOW_FREE_CORNER) {
                    found.push((side, Direction::Level));
                }
            }
        }
    }
    found
}

/// Where deflections are taken: up the middle line.
pub(super) fn deflections(length_m: f64) -> Vec<Place> {
    let heights = (1..=POINT_STRETCHES).map(|i| float(i) / float(POINT_STRETCHES));
    heights.map(|share| Place { x_m: 0.0, s_m: share * length_m }).collect()
}
