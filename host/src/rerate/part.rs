//! The row of one part.

use super::document::{ByLoad, PartRow, Side};
use super::{Question, density, tested, thickness};
use crate::assess::Desk;
use crate::inverse::{self, Line};
use crate::tank::{Part as Stated, TankFile};
use strake_core::part::Part;

/// Both plans and what is asked of them.
pub(super) struct Sides<'a> {
    pub(super) file: &'a TankFile,
    pub(super) question: &'a Question,
    pub(super) old: &'a Desk,
    pub(super) new: &'a Desk,
}

impl Sides<'_> {
    /// The level of the question, as the core takes it.
    #[expect(clippy::cast_possible_truncation, reason = "a level for the core")]
    pub(super) const fn level_m(&self) -> f32 {
        self.question.new.level_m as f32
    }

    /// All rows, in the order of the file.
    pub(super) fn rows(&self) -> Vec<PartRow> {
        let parts = self.old.plan().parts.iter().zip(&self.new.plan().parts);
        let parts = self.file.parts.iter().zip(parts).enumerate();
        parts.map(|(index, (stated, both))| self.row(index, stated, both)).collect()
    }

    fn row(&self, index: usize, stated: &Stated, (old, new): (&Part, &Part)) -> PartRow {
        let outward = new.judged_outward();
        PartRow {
            name: stated.name().to_owned(),
            kind: stated.kind().as_str(),
            old: side(self.old, stated, old),
            new: side(self.new, stated, new),
            highest_density: outward.then(|| density::highest(self, index)),
            lowest_density: outward.then(|| density::lowest(self, index)).flatten(),
            thickness: thickness::of(self, stated, (old, new)),
            tested: tested::coverage(self, new),
        }
    }
}

fn side(desk: &Desk, stated: &Stated, part: &Part) -> Option<Side> {
    let limits = inverse::of_part(desk, part)?;
    let by = |line: Line| ByLoad {
        load: line.by.of(stated),
        against: line.against.as_str(),
        limit_level_m: line.level_m,
        reached: line.reached,
        decides: line.decides,
    };
    Some(Side {
        limit_level_m: limits.estimate.level_m,
        limit_level_bound_m: limits.bound.level_m,
        limited_by: limits.estimate.limited_by.as_str(),
        limit_intervals_m: limits.intervals.iter().map(|one| [one.low_m, one.high_m]).collect(),
        capacity_alone_m: limits.estimate.capacity_alone_m,
        lowest_level_m: limits.lowest_m,
        by: inverse::lines(desk, part).into_iter().map(by).collect(),
    })
}
