//! One of the fuzz targets under libFuzzer. The variable `STRAKE_TARGET` names it; the engine keeps
//! the command line for itself.
//!
//! Every input goes in as it is and with its check sums mended. The targets are those of the plain
//! tests and speak to `strake` and `strake_core` only.
#![no_main]

#[path = "../../mend.rs"]
mod mend;
#[path = "../../targets.rs"]
mod targets;

use libfuzzer_sys::{Corpus, fuzz_target};
use std::sync::OnceLock;

type Pair = (fn(&[u8]) -> String, fn(&[u8]) -> Vec<u8>);

static CHOSEN: OnceLock<Pair> = OnceLock::new();

fn choose() -> Pair {
    match std::env::var("STRAKE_TARGET").unwrap_or_default().as_str() {
        "sector" => (targets::sector, mend::sector),
        "block" => (targets::block, mend::block),
        "plan" => (targets::plan, <[u8]>::to_vec),
        "plan_file" => (targets::plan_file, mend::plan_file),
        "frame" => (targets::frame, mend::frame),
        "device" => (targets::device, mend::frame),
        "tank" => (targets::tank, mend::tank),
        "journal_file" => (targets::journal_file, mend::journal_file),
        other => panic!("STRAKE_TARGET: {other:?} is no target"),
    }
}

fuzz_target!(|bytes: &[u8]| -> Corpus {
    let (target, mend) = CHOSEN.get_or_init(choose);
    target(bytes);
    let mended = mend(bytes);
    if mended != bytes {
        target(&mended);
    }
    Corpus::Keep
});
