//! Counts and names against what the device holds.

use crate::tank::finding::{Code, Located};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;
use crate::tank::{MAX_LAYERS, MAX_PARTS, MAX_PRODUCTS};

pub(super) fn counts(draft: &Draft, sink: &Sink) {
    let too_many = |span, count: usize, limit: usize, what: &str, hint: &str| {
        let message = format!("the file has {count} {what}, the limit is {limit}");
        sink.report(Code::TooMany, span, message, hint);
    };
    if let Some(first) = draft.part_names.get(MAX_PARTS) {
        let hint = "split the tank into two files, or leave out parts that others outlast";
        too_many(first.span, draft.part_names.len(), MAX_PARTS, "parts", hint);
    }
    // The liquid itself is the uppermost layer.
    if let Some(first) = draft.below.get(MAX_LAYERS - 1) {
        let count = draft.below.len() + 1;
        let hint = "join neighbouring layers and give the joined one the greater density";
        too_many(first.surface_m.span, count, MAX_LAYERS, "layers", hint);
    }
    if let Some(first) = draft.products.get(MAX_PRODUCTS) {
        let hint = "keep the lightest, the heaviest and the usual ones";
        too_many(first.span, draft.products.len(), MAX_PRODUCTS, "products", hint);
    }
}

pub(super) fn names(draft: &Draft, sink: &Sink) {
    unique(draft.part_names.iter(), "part", sink);
    let liquids = draft.liquid.iter().chain(&draft.products);
    unique(liquids.map(|liquid| &liquid.name), "liquid", sink);
    for outside in &draft.outside {
        for name in &outside.parts {
            if !draft.part_names.iter().any(|part| part.value == name.value) {
                let message = format!("no part has the name `{}`", name.value);
                let known = draft.part_names.iter().map(|part| part.value.as_str());
                let hint = match crate::nearest::nearest(&name.value, known) {
                    Some(near) => format!("write \"{near}\", the nearest name of a part"),
                    None => "write the name of a part as it stands there".to_owned(),
                };
                sink.report(Code::UnknownPart, name.span, message, hint);
            }
        }
    }
}

fn unique<'a>(names: impl Iterator<Item = &'a Located<String>>, what: &str, sink: &Sink) {
    let mut seen: Vec<&str> = Vec::new();
    for name in names {
        if seen.contains(&name.value.as_str()) {
            let message = format!("another {what} has the name `{}` already", name.value);
            sink.report(Code::DuplicateName, name.span, message, "give each its own name");
        } else {
            seen.push(&name.value);
        }
    }
}
