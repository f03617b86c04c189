//! Findings as text with the line and a caret. The only file that knows the snippet renderer.

use std::fmt::Write as _;

use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};

use super::finding::Findings;

/// Width that wrapped source lines are cut to.
const WIDTH: usize = 120;

pub(super) fn text(findings: &Findings, coloured: bool) -> String {
    let renderer = if coloured { Renderer::styled() } else { Renderer::plain() };
    let renderer = renderer.term_width(WIDTH);
    let mut out = String::new();
    for finding in findings.list() {
        let span = finding.span.start..finding.span.end;
        let snippet = Snippet::source(findings.text())
            .path(findings.path())
            .annotation(AnnotationKind::Primary.span(span));
        let group = Level::ERROR
            .primary_title(&finding.message)
            .id(finding.code.as_str())
            .element(snippet)
            .element(Level::HELP.message(&finding.hint));
        out.push_str(&renderer.render(&[group]));
        out.push_str("\n\n");
    }
    let count = findings.list().len();
    let noun = if count == 1 { "finding" } else { "findings" };
    // Writing to a String cannot fail.
    let _ = write!(out, "{}: {count} {noun}", findings.path());
    if findings.omitted() > 0 {
        let _ = write!(out, " shown, {} more left out", findings.omitted());
    }
    out.push('\n');
    out
}
