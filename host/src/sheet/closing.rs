//! What closes the sheet: conditions to be ticked, what is not judged and not covered, how it was
//! worked out, and blank lines for those who sign.

use super::Context;
use super::measure::short;
use super::model::{Block, Words};
use crate::assess::{FIELD_CHECK, not_judged, plates_not_judged};
use crate::inverse::Step;

/// What no figure of the sheet knows.
const NOT_COVERED: [&str; 16] = [
    "wind, earthquake (API 650 Annex E), snow and other outside loads",
    "foundation, settlement, anchors and uplift",
    "buckling, unless an inward capacity is given",
    "brittle fracture (API 653 section 5), and fatigue of repeated fillings",
    "nozzles, manways, their reinforcement and local stress",
    "the roof beyond the parts named here, and venting (API 2000): vacuum and pressure surges",
    "corrosion under insulation, pitting, and loss of thickness since the survey",
    "thermal stress; sloshing and other motion of the liquid",
    "welds, bolts and gaskets beyond the capacities stated; preload and gasket seating",
    "concrete, where cracking and reinforcement decide (EN 1992-3), and plastics, whose strength \
     falls with time (EN 12573)",
    "pressure vessels, which belong to the law and codes of pressure equipment",
    "grain and powder, which do not press like a liquid",
    "a blocked vent tube, slow drift of a sensor, a wrong product, a wrong drawing",
    "overfill prevention: an independent high-high alarm with its proof tests (API 2350, IEC 61511)",
    "explosive atmospheres, entry permits, and the opening of hatches",
    "legal measurement and custody transfer",
];

/// The file's own conditions, to be ticked by hand.
pub(super) fn conditions(context: &Context<'_>, blocks: &mut Vec<Block>) {
    let conditions = &context.file.conditions;
    blocks.push(Block::Section("Conditions".to_owned()));
    if conditions.is_empty() {
        blocks.push(Block::text("The tank file states no conditions."));
        return;
    }
    blocks.push(Block::text("The results hold only if these are met:"));
    let each = conditions
        .iter()
        .map(|condition| format!("{} (line {})", condition.value, context.line(condition.span)));
    blocks.push(Block::Checks(each.collect()));
}

/// What is not judged, what is not covered, how it was rounded and compared.
pub(super) fn limits_of_the_method(
    context: &Context<'_>,
    (compared, share): (usize, f64),
    blocks: &mut Vec<Block>,
) {
    let mut found = not_judged(context.file, &context.assessment.desk, context.units);
    found.extend(plates_not_judged(&context.assessment.document.parts));
    blocks.push(Block::Section("Not judged".to_owned()));
    if found.is_empty() {
        blocks.push(Block::text("Every stated part is judged in the directions it may be loaded."));
    } else {
        let each = found.iter().map(|one| Words::from(format!("{}: {}", one.name, one.why)));
        blocks.push(Block::List(each.collect()));
    }
    let cautions = context.cautions();
    if !cautions.is_empty() {
        blocks.push(Block::Section("Cautions".to_owned()));
        blocks.push(Block::List(cautions.into_iter().map(Words::from).collect()));
    }
    blocks.push(Block::Section("Not covered".to_owned()));
    blocks.push(Block::List(NOT_COVERED.into_iter().map(Words::from).collect()));
    blocks.push(Block::Section("How it was worked out".to_owned()));
    let step = Step::of(context.units).name();
    blocks.push(Block::List(
        [
            "First method: closed-form W and M of each part in single precision, error at most 2e-6 \
             of ∫ |p| |w| dz; it is the arithmetic of the device and of the replay."
                .to_owned(),
            format!(
                "Second method: the pressure read straight off the tank file in double precision and \
                 integrated numerically over the dimensions; equilibrium for what holds a cover, finite \
                 elements for the bending of plates. {compared} \
                 figures were compared; the largest difference is {} of what is allowed for its \
                 load. Allowed is the error of the first method and what rounding the file's \
                 decimals to single precision may cost.",
                short(share)
            ),
            format!(
                "Rounding: calculated limit levels down to {step}, lowest levels up, required \
                 thicknesses up, all after conversion; other figures to the nearest digit shown."
            ),
            "Where a rule is named, the formula is as in that rule; its other requirements are not \
             checked."
                .to_owned(),
            format!("{FIELD_CHECK}. It computes from what it is given and certifies no tank."),
        ]
        .into_iter()
        .map(Words::from)
        .collect(),
    ));
}

/// Blank lines: the program signs nothing.
pub(super) fn signatures(blocks: &mut Vec<Block>) {
    blocks.push(Block::Together(vec![
        Block::Section("Signatures".to_owned()),
        Block::Signatures(vec!["prepared", "checked", "approved", "valid until"]),
    ]));
}
