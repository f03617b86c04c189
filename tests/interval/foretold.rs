//! The interval follows from the journal alone: the entries, applied in order as a replay applies
//! them, say when the next sample comes.

use crate::bench::{DAY_MS, HOUR_MS, MINUTE_MS, Path, brine_plan, run};
use strake::sim::machine::Happening;
use strake::sim::sensor::Failure;
use strake_core::evaluate::{Pace, State, step};
use strake_core::journal::Entry;

#[test]
fn every_sample_comes_when_the_journal_says() {
    let plan = brine_plan(&[("idle_interval = \"60 s\"", "idle_interval = \"120 s\"")]);
    // Rests near and far from its thresholds, slow and fast moves, an alarm.
    let points = vec![
        (0, 4.0),
        (3 * HOUR_MS, 4.0),
        (9 * HOUR_MS, 7.2),
        (12 * HOUR_MS, 7.2),
        (18 * HOUR_MS, 8.3),
        (19 * HOUR_MS, 8.3),
        (22 * HOUR_MS, 5.4),
        (DAY_MS, 5.3),
        (30 * HOUR_MS, 5.3),
    ];
    let happenings = [
        (5 * HOUR_MS + 7, Happening::WarmRestart),
        (11 * HOUR_MS, Happening::Sensor(Some(Failure::Silent))),
        (11 * HOUR_MS + 10 * MINUTE_MS, Happening::Sensor(None)),
        (26 * HOUR_MS, Happening::PowerOff),
        (26 * HOUR_MS + 5 * MINUTE_MS, Happening::PowerOn),
    ];
    let logged = run(&plan, Box::new(Path(points)), 0.05, &happenings, 30 * HOUR_MS);
    let (mut state, mut pace) = (State::default(), Pace::default());
    let (mut begun_ms, mut due_ms) = (0, None);
    let (mut foretold, mut far) = (0, 0);
    for entry in &logged.entries {
        match entry {
            Entry::Sample(sample) => {
                let tick_ms = sample.tick_ms;
                if let Some(due_ms) = due_ms {
                    assert_eq!(tick_ms, due_ms, "sample {}", state.samples);
                    foretold += 1;
                }
                let resolved = step(&plan, &mut state, sample, |_| {});
                let next_ms = u64::from(pace.next_ms(&plan, &resolved, tick_ms));
                let interval_ms = u64::from(plan.logging.interval_ms);
                far += usize::from(next_ms > interval_ms);
                let beat_ms = tick_ms - (tick_ms - begun_ms) % interval_ms + next_ms;
                let expiry_ms = state.next_expiry_ms(&plan, tick_ms);
                let expiry_ms = expiry_ms.map(|wait_ms| tick_ms + u64::from(wait_ms.max(1)));
                due_ms = Some(beat_ms.min(expiry_ms.unwrap_or(u64::MAX)));
            }
            Entry::StartUp { tick_ms, .. } => {
                state.restart(*tick_ms);
                (pace, begun_ms, due_ms) = (Pace::default(), *tick_ms, None);
            }
            Entry::PlanChange { tick_ms, .. } => {
                state.change_plan(*tick_ms);
                (pace, begun_ms, due_ms) = (Pace::default(), *tick_ms, None);
            }
            Entry::Fault { tick_ms, cause, .. } => state.report(&plan, *cause, *tick_ms, |_| {}),
            Entry::Acknowledge { tick_ms, .. } => state.acknowledge(*tick_ms, |_| {}),
            Entry::Transition(_) | Entry::ClockFix { .. } | Entry::Gap { .. } => {}
        }
    }
    println!("{foretold} samples foretold, {far} of them far ahead");
    assert!(foretold > 4_000 && far > 250, "{foretold} {far}");
}
