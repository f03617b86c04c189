//! Part by part: what it is, what it may carry, the formulas with numbers put in, `W` and `M`, both
//! methods side by side, and the limit level.

mod curved;
mod flat;
mod formula;
mod held;
mod plate;
mod round;

use super::Context;
use super::measure::{digits, short};
use super::model::{Block, Cell, Row, Table, Words};
use super::pressure;
use super::second::{Compared, Pair};
use crate::assess::{Loads, PartRow, text};
use crate::inverse;
use crate::tank::Part as Stated;
use crate::units::Quantity;
use strake_core::part::Part;

/// One part with all that is known of it.
struct One<'a> {
    context: &'a Context<'a>,
    stated: &'a Stated,
    row: &'a PartRow,
    part: &'a Part,
}

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Parts".to_owned()));
    blocks.push(Block::text(
        "Positive acts from the liquid outwards. In the tables of loads the first line is the \
         figure of this calculation (closed-form W and M in single precision, the arithmetic that \
         the device runs), the second line that of a second method, and the difference is given \
         beside what is allowed for it.",
    ));
    let parts = context.assessment.desk.plan().parts.iter();
    let rows = context.assessment.document.parts.iter();
    let all = context.file.parts.iter().zip(rows).zip(parts).zip(&context.compared);
    for (index, (((stated, row), part), compared)) in all.enumerate() {
        let one = One { context, stated, row, part };
        blocks.push(Block::Part(format!("{}. {}, {}", index + 1, row.name, row.kind)));
        one.write(compared, blocks);
    }
}

/// A load by its name in the documents; of several pins the largest.
fn load(loads: &Loads, key: &str) -> Option<f32> {
    match key {
        "pressure_pa" => Some(loads.pressure_pa),
        "hoop_tension_n_m" => loads.hoop_tension_n_m,
        "tension_n_m" => loads.tension_n_m,
        "compression_n_m" => loads.compression_n_m,
        "force_n" => loads.force_n,
        "bolt_n" => loads.bolt_n,
        "stress_pa" => loads.stress_pa,
        "moment_n_m" => loads.moment_n_m,
        "latch_n" => loads.latch_n,
        "hinge_n" => {
            let pins = loads.hinge_n.iter().copied();
            pins.reduce(|most, one| if one > most { one } else { most })
        }
        _ => None,
    }
}

impl One<'_> {
    fn write(&self, compared: &[Compared], blocks: &mut Vec<Block>) {
        let context = self.context;
        blocks.push(Block::text(text::describe(&context.text(), self.stated)));
        self.rule(blocks);
        if self.part.outside != 0 {
            let states = pressure::states_on(context, self.part);
            blocks
                .push(Block::Minor(Words::from("Pressure on this part, liquid outside taken off")));
            blocks.push(Block::Table(pressure::table(context, &states)));
        }
        match self.stated {
            Stated::Course(course) => round::course(self, course, blocks),
            Stated::Panel(panel) => {
                flat::plane(self, &panel.plane, blocks);
                plate::plates(self, panel, blocks);
            }
            Stated::Hatch(hatch) => {
                flat::plane(self, &hatch.sealed, blocks);
                held::hatch(self, hatch, blocks);
            }
            Stated::Curved(part) => curved::curved(self, part, blocks),
        }
        blocks.push(Block::Together(vec![
            Block::Minor(Words::from("Loads by both methods")),
            Block::Table(both(context, compared)),
        ]));
        self.capacities(blocks);
        self.limits(blocks);
    }

    /// The rule that a formula comes from.
    fn rule(&self, blocks: &mut Vec<Block>) {
        if let Stated::Course(course) = self.stated
            && let Some(rule) = &course.design_point.rule
        {
            let line = self.context.line(rule.span);
            blocks.push(Block::text(format!(
                "Formula as in {} (stated on line {line} of the tank file); other requirements of \
                 that document are not checked.",
                rule.value
            )));
        }
    }

    /// Every capacity with the load that it is compared with.
    fn capacities(&self, blocks: &mut Vec<Block>) {
        let context = self.context;
        let mut table = Table::new("llrrr", &["capacity", "load", "estimate", "bound", "ratio"]);
        let mut keys: Vec<&str> = Vec::new();
        for one in self.row.capacity.iter().chain(&self.row.capacity_inward) {
            if !keys.contains(&one.load) {
                keys.push(one.load);
            }
        }
        for key in keys {
            let words = text::capacity_words(&context.text(), self.stated, self.row, key);
            let outward = self.row.capacity.iter().filter(|one| one.load == key);
            let inward = self.row.capacity_inward.iter().filter(|one| one.load == key);
            let sides = outward.map(|one| (one, true)).chain(inward.map(|one| (one, false)));
            for ((one, outward), words) in sides.zip(words) {
                table.rows.push(self.capacity(one, outward, words));
            }
        }
        if table.rows.is_empty() {
            return;
        }
        let mut inside = vec![Block::Minor(Words::from("Capacities")), Block::Table(table)];
        let judged = &self.row.judgement;
        let used =
            |one: Option<f32>| one.map_or_else(|| "not judged".to_owned(), |u| format!("{u:.3}"));
        inside.push(Block::text(format!(
            "Utilisation, the largest ratio: estimate {}, its bound {}, inward {}.",
            used(judged.utilisation),
            used(judged.utilisation_bound),
            used(judged.utilisation_inward)
        )));
        blocks.push(Block::Together(inside));
    }

    fn capacity(&self, one: &crate::assess::Capacity, outward: bool, words: String) -> Row {
        let context = self.context;
        let quantity = quantity(one.load);
        let ratings = if outward { self.stated.capacity() } else { self.stated.capacity_inward() };
        let key = ratings.get(one.place).map_or("", |rating| rating.capacity.value.key());
        // Pressure at every height, or at other places than the one reported.
        let course = matches!(self.stated, Stated::Course(_));
        let elsewhere = key == "designed_for" || (one.load == "pressure_pa" && course);
        let bound =
            if outward { &self.row.loads_outward_bound } else { &self.row.loads_inward_bound };
        let pair = [load(&self.row.loads, one.load), load(bound, one.load)];
        let shown = |value: Option<f32>| {
            value.map_or_else(|| "-".to_owned(), |value| context.show(value, quantity))
        };
        let ratio = pair[1].filter(|_| !elsewhere).map(|bound| {
            let sign = if outward || one.load == "compression_n_m" { 1.0 } else { -1.0 };
            let ratio = sign * bound / one.value;
            if ratio > 0.0 { ratio } else { 0.0 }
        });
        let ratio = ratio.map_or_else(
            || if elsewhere { "every height".to_owned() } else { "-".to_owned() },
            |ratio| format!("{ratio:.3}"),
        );
        let name = one.load.trim_end_matches("_n_m").trim_end_matches("_n").trim_end_matches("_pa");
        let cells: Vec<Cell> = vec![
            words.into(),
            name.replace('_', " ").into(),
            if outward { shown(pair[0]).into() } else { "-".into() },
            shown(pair[1]).into(),
            ratio.into(),
        ];
        Row::new(cells)
    }

    fn limits(&self, blocks: &mut Vec<Block>) {
        let units = self.context.units;
        let judged = &self.row.judgement;
        if let Some(limits) = &judged.limits {
            let by = limits.limited_by.replace('_', " ");
            let said = match limits.limit_level_m {
                None => format!(
                    "Calculated limit level: none, no level is admissible (limited by {by})"
                ),
                Some(level_m) => format!(
                    "Calculated limit level: {} unrounded, {} rounded down; of the bound {}; \
                     limited by {by}",
                    text::unrounded(units, level_m),
                    text::down(units, Some(level_m)),
                    text::down(units, limits.limit_level_bound_m)
                ),
            };
            let alone = limits.capacity_alone_m.map_or_else(String::new, |alone_m| {
                let alone = text::down(units, Some(alone_m));
                format!("; its capacity alone is reached at {alone}")
            });
            blocks.push(Block::text(format!("{said}{alone}.")));
            if limits.limit_intervals_m.len() > 1 {
                let show = |level_m: f32| self.context.show(level_m, Quantity::Length);
                let stretches = limits.limit_intervals_m.iter();
                let stretches =
                    stretches.map(|[low, high]| format!("{} to {}", show(*low), show(*high)));
                let stretches = stretches.collect::<Vec<_>>().join(" and ");
                blocks.push(Block::text(format!("Within its capacities from {stretches} only.")));
            }
        }
        if let Some(lowest) = judged.lowest {
            let level = text::up(units, lowest.lowest_level_m);
            blocks.push(Block::text(format!(
                "Lowest level that the inward capacities allow: {level}."
            )));
        }
        if let Some(thickness_m) = judged.thickness_for_state_m {
            let thickness = text::thickness_up(&self.context.text(), thickness_m);
            blocks.push(Block::text(format!(
                "Thickness that brings the utilisation of the estimate to one in this state, \
                 allowance included: {thickness}, rounded up."
            )));
        }
        if let Some(opening) = &self.row.opening {
            let words = opening.words(units);
            blocks.push(Block::text(format!(
                "Opening, judged by wetting and never by load: {words}."
            )));
        }
        if self.row.plates.is_empty() {
            self.each_limit(blocks);
        }
    }

    /// The limit level by each load for itself.
    fn each_limit(&self, blocks: &mut Vec<Block>) {
        let lines = inverse::lines(&self.context.assessment.desk, self.part);
        if lines.len() < 2 {
            return;
        }
        let each = lines.iter().map(|line| {
            let level = line.level_m.map_or_else(
                || "no level".to_owned(),
                |level_m| text::unrounded(self.context.units, level_m),
            );
            let reached = if line.reached { "" } else { " (not reached)" };
            let decides = if line.decides { "" } else { ", beside it" };
            let by = line.by.of(self.stated).replace('_', " ");
            let against = line.against.as_str().replace('_', " ");
            format!("{by} against the {against} {level}{reached}{decides}")
        });
        let each = each.collect::<Vec<_>>().join("; ");
        blocks.push(Block::text(format!("By each load for itself: {each}.")));
    }
}

/// In what a load is measured.
fn quantity(load: &str) -> Quantity {
    match load {
        "pressure_pa" | "stress_pa" => Quantity::Pressure,
        "hoop_tension_n_m" | "tension_n_m" | "compression_n_m" => Quantity::LineLoad,
        "moment_n_m" | "moment_centroid_n_m" => Quantity::Moment,
        _ => Quantity::Force,
    }
}

/// Both methods, the difference and what is allowed.
fn both(context: &Context<'_>, compared: &[Compared]) -> Table {
    let titles =
        ["load", "unit", "estimate", "outward bound", "inward bound", "difference", "allowed"];
    let mut table = Table::new("llrrrrr", &titles);
    for one in compared {
        let (unit, factor) = unit(context, one.quantity);
        let cell = |pair: &Option<Pair>| {
            pair.map_or_else(
                || Cell::from("-"),
                |pair| {
                    let lines = [pair.first, pair.second.value];
                    Cell(lines.map(|value| Words::from(digits(value / factor))).to_vec())
                },
            )
        };
        let pairs = one.states.iter().flatten();
        let worst = pairs.max_by(|a, b| a.share().total_cmp(&b.share()));
        let (off, allowed) = worst.map_or((0.0, 0.0), |pair| {
            ((pair.first - pair.second.value).abs() / factor, pair.second.allowed / factor)
        });
        let cells = vec![
            one.label.into(),
            unit.into(),
            cell(&one.states[0]),
            cell(&one.states[1]),
            cell(&one.states[2]),
            short(off).into(),
            short(allowed).into(),
        ];
        table.rows.push(Row::new(cells).marked(one.load));
    }
    table
}

/// The unit in which both methods of a load are shown, and what one of it is in SI.
fn unit(context: &Context<'_>, quantity: Quantity) -> (&'static str, f64) {
    use super::measure::Measure;
    let measure = match quantity {
        Quantity::Length => Measure::LENGTH,
        Quantity::Pressure => Measure::PRESSURE,
        Quantity::LineLoad => Measure::LINE,
        Quantity::Moment => Measure::MOMENT,
        _ => Measure::FORCE,
    };
    (context.unit(measure), measure.factor(context.units))
}
