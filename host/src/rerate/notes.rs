//! What the reader must know beside the numbers.

use super::Question;
use crate::assess::{Desk, FIELD_CHECK, assumed, plate_cautions};
use crate::tank::{Capacity, Part as Stated, TankFile};
use crate::units::Quantity::{Length, Temperature};
use crate::units::{UnitSystem, format};

/// Of every remaining life.
pub(super) const NO_INTERVAL: &str =
    "remaining life by a corrosion rate replaces no inspection interval";

/// The cautions, the most pressing first.
pub(super) fn cautions(
    file: &TankFile,
    question: &Question,
    desk: &Desk,
    units: UnitSystem,
) -> Vec<String> {
    let mut found = Vec::new();
    if file.is_provisional() {
        found.push(format!("PROVISIONAL: {}", assumed(file).join("; ")));
    }
    let liquid = &question.new.contents.liquid;
    let (cold, hot) = (liquid.coldest_c.value, liquid.hottest_c.value);
    let temperature_c = question.new.contents.temperature_c;
    if !(cold..=hot).contains(&temperature_c) {
        found.push(format!(
            "the temperature, {}, lies outside the liquid's range, {} to {}",
            format(temperature_c, Temperature, units),
            format(cold, Temperature, units),
            format(hot, Temperature, units)
        ));
    }
    if let Some(first) = file.below.first() {
        found.push(format!(
            "the surfaces of the layers below are held, the upper one at {}: {} on top grows",
            format(first.surface_m.value, Length, units),
            liquid.name.value
        ));
    }
    designed(file, &mut found);
    found.extend(plate_cautions(file, units, "device and rerate judge"));
    courses(file, &mut found);
    if let Some(overflow) = file.fill.overflow_m.filter(|top| question.new.level_m > top.value) {
        found.push(format!(
            "the level of the question stands above the overflow, {}",
            format(overflow.value, Length, units)
        ));
    }
    if desk.plan().parts.iter().all(|part| !part.judged_outward()) {
        found.push("no part is judged outward".to_owned());
    }
    found.push(FIELD_CHECK.to_owned());
    found
}

fn designed(file: &TankFile, found: &mut Vec<String>) {
    let mut any = false;
    for part in &file.parts {
        for rating in part.capacity() {
            let Capacity::DesignedFor { remaining, .. } = &rating.capacity.value else { continue };
            any = true;
            if remaining.is_none() {
                let name = part.name();
                found.push(format!("{name}: designed-for is taken as new, no loss is stated"));
            }
        }
    }
    if any {
        found.push(
            "designed-for: the pressure at every height decides; at the levels by force, moment \
             and securing the foot of the part carries more than it was designed for"
                .to_owned(),
        );
    }
}

fn courses(file: &TankFile, found: &mut Vec<String>) {
    let courses = file.parts.iter().filter_map(|part| match part {
        Stated::Course(course) => Some(course),
        _ => None,
    });
    let (mut rules, mut rated) = (Vec::new(), false);
    for course in courses {
        rated |= course.corrosion_rate_m_s.is_some();
        if let Some(rule) = &course.design_point.rule
            && course.design_point.above_edge_m > 0.0
            && !rules.contains(&rule.value.as_str())
        {
            rules.push(rule.value.as_str());
        }
    }
    for rule in rules {
        found.push(format!(
            "design point above the edge: by {rule}, for whole courses and no locally thinned \
             place; gravity is that of the site, where the rule's rounded 4.9 and 2.6 would give \
             up to 0.1 % more level; other requirements of that document are not checked"
        ));
    }
    if rated {
        found.push(NO_INTERVAL.to_owned());
    }
}
