//! The inverse questions, for the liquid of the file and another one side by side: up to which
//! level, to which density, with which thickness, for how long?
//!
//! Every answer comes from the same loads as an assessment. Levels are true levels of the estimate
//! on the whole way up ([`crate::inverse`]); where layers lie below, their surfaces are held and
//! the liquid on top grows.

mod density;
pub mod document;
mod life;
mod notes;
mod part;
mod tested;
pub mod text;
mod thickness;

pub use document::Document;
pub use tested::Tested;

use crate::assess::{self, Desk, Overrides, Request, RequestError};
use crate::compile;
use crate::tank::{Findings, TankFile};
use crate::units::UnitSystem;
use document::{Liquid, TankLimit};

/// What is asked.
#[derive(Clone, Debug)]
pub struct Question {
    /// The file's own state, at the level of the question.
    pub old: Request,
    /// The same with the other liquid.
    pub new: Request,
    /// Where the level comes from: `command line`, `maximum`, `overflow` or `shell top`.
    pub level_from: &'static str,
    /// A water test to show how far it covers the new liquid.
    pub tested: Option<Tested>,
}

impl Question {
    /// The question with what stands beside the file.
    ///
    /// Without a level the highest one of normal service is taken, else the overflow, else the
    /// shell top.
    ///
    /// # Errors
    /// [`RequestError`] when there is no level, when a state cannot stand in this tank, or when
    /// nothing differs from the file.
    pub fn new(
        file: &TankFile,
        overrides: Overrides,
        tested: Option<Tested>,
    ) -> Result<Self, RequestError> {
        let Overrides { density_kg_m3, temperature_c, gas_pa, product, .. } = &overrides;
        let same = density_kg_m3.is_none()
            && temperature_c.is_none()
            && gas_pa.is_none()
            && product.is_none();
        if same {
            return Err(RequestError {
                message: "nothing differs from the file".to_owned(),
                hint: "state the other liquid: --density \"1.28 SG\", --product NAME, \
                       --temperature or --gas-pressure"
                    .to_owned(),
            });
        }
        let maximum_m = file.fill.maximum_m.map(|level| level.value);
        let level_m = overrides.level_m.or(maximum_m);
        let level_from = match (overrides.level_m, maximum_m, file.fill.overflow_m) {
            (Some(_), ..) => "command line",
            (None, Some(_), _) => "maximum",
            (None, None, Some(_)) => "overflow",
            (None, None, None) => "shell top",
        };
        let old = Request::new(file, Overrides { level_m, ..Overrides::default() })?;
        let new = Request::new(file, Overrides { level_m, ..overrides })?;
        Ok(Self { old, new, level_from, tested })
    }
}

/// The answers, with the plans that gave them.
#[derive(Clone, Debug)]
pub struct Rerating {
    /// The document.
    pub document: Document,
    /// The plan with the new liquid.
    pub desk: Desk,
}

/// Answers for every part.
///
/// # Errors
/// [`Findings`] when the file holds what a plan cannot.
pub fn rerate(file: &TankFile, question: &Question) -> Result<Rerating, Findings> {
    let desk = |request: &Request| {
        compile::for_desk(file, &request.contents).map(|compiled| Desk::new(compiled, file))
    };
    let (old, new) = (desk(&question.old)?, desk(&question.new)?);
    let sides = part::Sides { file, question, old: &old, new: &new };
    let parts = sides.rows();
    let limit =
        |pick: fn(&document::PartRow) -> Option<&document::Side>| TankLimit::of(&parts, pick);
    let (old_limit, new_limit) = (limit(|row| row.old.as_ref()), limit(|row| row.new.as_ref()));
    let top_m = new.range().high_m;
    let instrument_only_m = new_limit
        .as_ref()
        .and_then(|limit| limit.limit_level_m)
        .filter(|&level_m| level_m < top_m)
        .map(|level_m| [level_m, top_m]);
    let liquid = |request: &Request, desk: &Desk, limit: Option<TankLimit>| {
        let (low, high) = request.contents.band_kg_m3();
        Liquid {
            liquid: request.contents.liquid.name.value.clone(),
            density_kg_m3: request.contents.density_kg_m3(),
            density_low_kg_m3: low,
            density_high_kg_m3: high,
            temperature_c: request.contents.temperature_c,
            gas_pressure_pa: request.contents.gas_pa[1],
            sensor_reads: density::head_height(desk).map(|_| desk.reading(sides.level_m())),
            limit,
        }
    };
    let document = Document {
        schema: "strake.rerate/1",
        tank: file.name.value.clone(),
        level_m: question.new.level_m,
        level_from: question.level_from,
        gravity_m_s2: file.gravity.m_s2(),
        grows: (!file.below.is_empty()).then(|| question.new.contents.liquid.name.value.clone()),
        old: liquid(&question.old, &old, old_limit),
        new: liquid(&question.new, &new, new_limit),
        tested: question.tested,
        parts,
        instrument_only_m,
        not_judged: assess::not_judged(file, &new, UnitSystem::Si),
        cautions: notes::cautions(file, question, &new, UnitSystem::Si),
    };
    Ok(Rerating { document, desk: new })
}
