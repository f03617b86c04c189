use super::{Criterion, Interval, intervals};
use strake_core::lane::Lane;

/// Something that holds at some levels.
struct Where(fn(f32) -> bool);

impl Criterion for Where {
    fn holds<const N: usize>(&self, level_m: Lane<N>) -> [bool; N] {
        level_m.0.map(self.0)
    }
}

const RANGE: Interval = Interval { low_m: 0.0, high_m: 10.0 };

fn found(holds: fn(f32) -> bool) -> Vec<[f32; 2]> {
    let list = intervals(&Where(holds), RANGE, [3.0, 3.001]);
    list.iter().map(|one| [one.low_m, one.high_m]).collect()
}

#[test]
fn everywhere_and_nowhere() {
    assert_eq!(found(|_| true), [[0.0, 10.0]]);
    assert!(found(|_| false).is_empty());
}

#[test]
fn an_end_is_the_very_last_level_at_which_it_holds() {
    // Neither number is on the grid.
    assert_eq!(found(|h| h <= 4.545_454_5), [[0.0, 4.545_454_5]]);
    assert_eq!(found(|h| h >= 1.409_123), [[1.409_123, 10.0]]);
}

#[test]
fn a_gap_in_the_middle_leaves_two_intervals() {
    assert_eq!(found(|h| h <= 2.1 || h >= 3.9), [[0.0, 2.1], [3.9, 10.0]]);
}

#[test]
fn what_lies_between_two_kinks_is_not_overlooked() {
    // Narrower than the grid's 9.8 mm, but its ends are levels to look at.
    let list = found(|h| !(3.0..=3.001).contains(&h));
    assert_eq!(list, [[0.0, 3.0_f32.next_down()], [3.001_f32.next_up(), 10.0]]);
}

#[test]
fn a_single_level() {
    assert_eq!(found(|h| h <= 0.0), [[0.0, 0.0]]);
}
