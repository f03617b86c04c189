//! What needs two tables or two parts to be seen: heights against the shell, courses against each
//! other, temperatures against ranges, thresholds against each other.
//!
//! Every check takes what could be read and leaves the rest, so one run shows all findings.

mod alarm;
pub(super) mod courses;
mod geometry;
mod limits;
mod liquid;
mod plates;
pub(super) mod seal;

use super::read::Draft;
use super::read::section::Sink;

/// Heights from drawings are rounded to the millimetre; so much apart counts as together.
const TOGETHER_M: f64 = 1.0e-3 + 1.0e-9;

pub(super) fn all(draft: &Draft, sink: &Sink) {
    limits::counts(draft, sink);
    limits::names(draft, sink);
    geometry::parts(draft, sink);
    plates::all(draft, sink);
    geometry::fill(draft, sink);
    geometry::outside(draft, sink);
    geometry::strapping(draft, sink);
    courses::stacked(draft, sink);
    liquid::all(draft, sink);
    liquid::layers(draft, sink);
    liquid::gas(draft, sink);
    alarm::thresholds(draft, sink);
    alarm::logging(draft, sink);
}
