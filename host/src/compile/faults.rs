//! What the plan cannot hold, with the place in the file.

use crate::tank::{Code, Finding, Located, Span};
use crate::units::{Quantity, format_si};
use strake_core::plan::PlanError;

/// Findings of the compilation.
#[derive(Default)]
pub(super) struct Faults(Vec<Finding>);

impl Faults {
    pub(super) fn push(&mut self, finding: Finding) {
        self.0.push(finding);
    }

    pub(super) fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    pub(super) fn into_list(self) -> Vec<Finding> {
        self.0
    }

    pub(super) fn report(
        &mut self,
        code: Code,
        span: Span,
        message: impl Into<String>,
        hint: impl Into<String>,
    ) {
        self.push(Finding { code, span, message: message.into(), hint: hint.into() });
    }

    /// Reports a value outside what the plan holds.
    pub(super) fn within(
        &mut self,
        value: Located<f64>,
        (low, high): (f64, f64),
        quantity: Quantity,
        what: &str,
    ) {
        if (low..=high).contains(&value.value) {
            return;
        }
        let write = |value: f64| format_si(value, quantity);
        let message = format!(
            "{what} is {}; a plan holds {} to {}",
            write(value.value),
            write(low),
            write(high)
        );
        self.report(Code::OutOfRange, value.span, message, "check the number and its unit");
    }

    pub(super) fn too_many(&mut self, span: Span, what: &str, limit: usize) {
        let message = format!("more {what} than a plan holds; the limit is {limit}");
        self.report(Code::TooMany, span, message, "keep those that govern");
    }

    /// A rule of the plan that no check of the file foresaw.
    pub(super) fn not_in_plan(&mut self, span: Span, error: PlanError) {
        let hint = "look for a number with a wrong unit in that part of the file";
        self.report(Code::OutOfRange, span, error.to_string(), hint);
    }
}
