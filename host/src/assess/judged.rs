//! Which part governs, and whether a bound is above its threshold.

use super::desk::Desk;
use super::document::PartRow;
use crate::tank::TankFile;

/// Name of the part with the lowest limit level: one without any admissible level first; among
/// those that overflow or shell top limit, the one whose capacities alone give the lowest.
pub(super) fn governing(parts: &[PartRow]) -> Option<String> {
    let rank = |row: &PartRow| {
        let limits = row.judgement.limits.as_ref();
        let level_m = limits.and_then(|limits| limits.limit_level_m);
        let alone_m = limits.and_then(|limits| limits.capacity_alone_m);
        (level_m.unwrap_or(f32::NEG_INFINITY), alone_m.unwrap_or(f32::INFINITY))
    };
    let judged = parts.iter().filter(|row| row.judgement.limits.is_some());
    let first = judged.min_by(|a, b| {
        let ((level_a, alone_a), (level_b, alone_b)) = (rank(a), rank(b));
        level_a.total_cmp(&level_b).then(alone_a.total_cmp(&alone_b))
    });
    first.map(|row| row.name.clone())
}

/// The outward and the inward threshold: those of `[alarm]`, else the capacity itself.
pub(super) fn thresholds(file: &TankFile, desk: &Desk) -> (f32, f32) {
    if file.alarm.is_none() {
        return (1.0, 1.0);
    }
    let alarm = &desk.plan().alarm;
    (alarm.alarm.utilisation, alarm.inward.map_or(1.0, |inward| inward.utilisation))
}

/// Parts whose bound is at or above its threshold, with that bound and its direction.
pub(super) fn over<'a>(
    file: &TankFile,
    desk: &Desk,
    parts: &'a [PartRow],
) -> Vec<(&'a PartRow, &'static str, f32)> {
    let (outward, inward) = thresholds(file, desk);
    let mut found = Vec::new();
    for row in parts {
        let pairs = [
            ("outward", row.judgement.utilisation_bound, outward),
            ("inward", row.judgement.utilisation_inward, inward),
        ];
        for (side, bound, threshold) in pairs {
            if let Some(bound) = bound.filter(|&bound| bound >= threshold) {
                found.push((row, side, bound));
            }
        }
    }
    found
}

pub(super) fn above_alarm(file: &TankFile, desk: &Desk, parts: &[PartRow]) -> bool {
    !over(file, desk, parts).is_empty()
}
