//! The burst filter: exact on small bursts, deaf to spikes, total on any counts.

use super::{BURST_COUNTS_MIN, filter};
use crate::signal::{Channel, Quality};
use proptest::prelude::*;

fn filtered(counts: &[i32]) -> Channel {
    filter(&mut counts.to_vec())
}

#[test]
fn small_bursts_by_hand() {
    assert_eq!(filtered(&[]), Channel::default());
    assert_eq!(filtered(&[]).quality, Quality::NotRead);
    assert_eq!(filtered(&[7]), Channel { count_16: 112, quality: Quality::Sparse });
    assert_eq!(filtered(&[4, 7]).count_16, 88);
    assert_eq!(filtered(&[9, 1, 2]).count_16, 64);
    assert_eq!(filtered(&[100, 1, 2, 3]).count_16, 40);
    assert_eq!(filtered(&[100, 1, 2, 3, -50]), Channel::good(32));
    // Middle four of eight: 3, 4, 4, 6 with the mean 4.25; quarters go away from the median.
    assert_eq!(filtered(&[0, 6, 4, 90, 3, -90, 80, 4]).count_16, 72);
    // A third of a count rounds to a half.
    assert_eq!(filtered(&[0, 0, 0, 1, 1]).count_16, 8);
    assert_eq!(filtered(&[0, 0, 0, -1, -1]).count_16, -8);
}

#[test]
fn counts_beyond_the_limit_are_clamped() {
    let limit = 1 << 26;
    assert_eq!(filtered(&[i32::MAX; 5]).count_16, limit * 16);
    assert_eq!(filtered(&[i32::MIN; 5]).count_16, -limit * 16);
    assert_eq!(filtered(&[0, i32::MAX]).count_16, limit * 8);
    assert_eq!(filtered(&[i32::MIN, i32::MAX]).count_16, 0);
}

fn reference(counts: &[i32]) -> f64 {
    let mut sorted: Vec<i64> = counts.iter().map(|&count| i64::from(count)).collect();
    sorted.sort_unstable();
    let quarter = sorted.len() / 4;
    let middle = &sorted[quarter..sorted.len() - quarter];
    let (sum, n) = middle.iter().fold((0_i64, 0_i32), |(sum, n), count| (sum + count, n + 1));
    #[expect(clippy::cast_precision_loss, reason = "sums of sixteen small counts")]
    let sum = sum as f64;
    16.0 * sum / f64::from(n)
}

proptest! {
    #[test]
    fn is_the_mean_of_the_middle_half(
        base in -70_000_i32..70_000,
        noise in prop::collection::vec(-2_000_i32..2_000, 1..=16),
    ) {
        let counts: Vec<i32> = noise.iter().map(|noise| base + noise).collect();
        let channel = filtered(&counts);
        prop_assert!((f64::from(channel.count_16) - reference(&counts)).abs() <= 4.01);
        prop_assert_eq!(channel.count_16 % 8, 0);
        let whole = counts.len() >= BURST_COUNTS_MIN;
        prop_assert_eq!(channel.quality, if whole { Quality::Good } else { Quality::Sparse });
    }

    /// A quarter of the counts may be anything: the rest holds the result between its ends.
    #[test]
    fn spikes_do_not_move_it_out_of_the_sound_counts(
        sound in prop::collection::vec(-1_000_i32..1_000, 6..=12),
        spikes in prop::collection::vec(any::<i32>(), 0..=2),
        seed in any::<u64>(),
    ) {
        let mut counts = sound.clone();
        for spike in spikes {
            let place = usize::try_from(seed % 5).unwrap();
            counts.insert(place, spike);
        }
        // At most 2 of 8 or more: a quarter.
        let channel = filtered(&counts);
        let (low, high) = (sound.iter().min().unwrap() * 16, sound.iter().max().unwrap() * 16);
        if counts.len() / 4 >= counts.len() - sound.len() {
            prop_assert!((low..=high).contains(&channel.count_16));
        }
    }

    #[test]
    fn any_counts_give_a_number_between_their_ends(
        counts in prop::collection::vec(any::<i32>(), 1..=16),
    ) {
        let limit = 1_i64 << 30;
        let clamp = |count: &i32| (i64::from(*count) * 16).clamp(-limit, limit);
        let (low, high) = (counts.iter().min().unwrap(), counts.iter().max().unwrap());
        let channel = filtered(&counts);
        // f32 keeps 24 bits of the sum of the differences.
        let slack = 2_048;
        prop_assert!(i64::from(channel.count_16) >= clamp(low) - slack);
        prop_assert!(i64::from(channel.count_16) <= clamp(high) + slack);
    }
}
