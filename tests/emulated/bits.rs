//! Bit identity: random plans and inputs, evaluated on the target's machine code and on the host,
//! equal in every bit; and on the host with 64 lanes, equal but for the sign of zeros.
//!
//! The words compared are all loads, bounds and utilisations of every part, the reading with its
//! bounds, the running hash behind every input and the whole state at the end of every plan.

mod cases;
mod expected;
mod run;
#[path = "../../firmware/boards/emulated/src/bin/bit-check/vectors.rs"]
mod vectors;

use std::fmt::Write as _;
use std::time::Instant;

use crate::toolchain::{self, image, image_with};
use crate::{Outcome, Test};
use cases::{Case, Coverage};
use expected::{Equal, Words, but_for_zeros, every_bit};

pub(crate) const TESTS: &[Test] = tests![
    device_and_host_give_the_same_bits,
    f32_max_in_place_of_a_comparison_differs,
    an_approximate_root_differs,
];

const PLANS: u32 = 256;
/// The controls differ within the first of them.
const CONTROL_PLANS: u32 = 48;
const INPUTS: u32 = 100;

fn expected(cases: &[Case]) -> Vec<Words> {
    cases.iter().map(expected::one_lane).collect()
}

fn device_and_host_give_the_same_bits() -> Outcome {
    let start = Instant::now();
    let cases = cases::cases(PLANS, INPUTS)?;
    let coverage = Coverage::of(&cases);
    coverage.holds_everything()?;
    let one_lane = expected(&cases);
    let many_lanes: Vec<Vec<u32>> = cases.iter().map(expected::many_lanes).collect();
    equal("64 lanes against one", &one_lane, &many_lanes, but_for_zeros)?;
    let host = start.elapsed();
    let image = image("bit-check")?;
    let start = Instant::now();
    let device = run::run(&image, &cases, &one_lane)?;
    equal("device against host", &one_lane, &device.words, every_bit)?;
    let words: usize = one_lane.iter().map(|words| words.words.len()).sum();
    let mut report = String::new();
    writeln!(report, "image {}", image.sha256)?;
    writeln!(report, "processor {:#010x}", device.processor_id)?;
    writeln!(report, "plans {}, samples {}", coverage.plans, coverage.samples)?;
    let zeros = differing(&one_lane, &many_lanes, every_bit);
    writeln!(report, "words compared, device against host: {words}, equal in every bit")?;
    writeln!(
        report,
        "words compared, 64 lanes against one: {words}, equal but for the sign of {zeros} zeros"
    )?;
    write!(report, "{coverage}")?;
    std::fs::write(toolchain::root().join("target/bit-identity.txt"), &report)?;
    println!("{report}host {host:.1?}, device {:.1?} in {} runs", start.elapsed(), device.runs);
    Ok(())
}

fn equal(what: &str, here: &[Words], there: &[Vec<u32>], equal: Equal) -> Outcome {
    for (number, (here, there)) in here.iter().zip(there).enumerate() {
        if let Some(difference) = here.first_difference(there, equal) {
            return Err(format!("plan {number}: {what}, {difference}").into());
        }
    }
    Ok(())
}

fn differing(here: &[Words], there: &[Vec<u32>], equal: Equal) -> usize {
    here.iter().zip(there).map(|(here, there)| here.differing(there, equal)).sum()
}

/// A build with wrong arithmetic: fails when it differs nowhere by the measure of `equal`.
fn differs(feature: &'static str, equal: Equal) -> Outcome {
    let cases = cases::cases(CONTROL_PLANS, INPUTS)?;
    let expected = expected(&cases);
    let image = image_with("bit-check", feature)?;
    let device = run::run(&image, &cases, &expected)?;
    let compared: usize = expected.iter().map(|words| words.words.len()).sum();
    let [all, beyond] =
        [every_bit, but_for_zeros].map(|equal| differing(&expected, &device.words, equal));
    println!(
        "{feature}, image {}: {all} of {compared} words differ, {beyond} by more than the sign of \
         a zero",
        image.sha256
    );
    let seen = differing(&expected, &device.words, equal);
    if seen == 0 { Err(format!("{feature} was not seen").into()) } else { Ok(()) }
}

fn f32_max_in_place_of_a_comparison_differs() -> Outcome {
    differs("_careless_max", every_bit)
}

fn an_approximate_root_differs() -> Outcome {
    differs("_careless_root", but_for_zeros)
}
