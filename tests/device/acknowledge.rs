//! Acknowledging over the link.

use crate::bench::{Swing, commissioned, document, on, run_for};

#[test]
fn what_sounds_is_acknowledged_once_and_stays_shown() {
    let device = commissioned(Swing::still(8.6));
    run_for(&device, 120_000);
    let ran = on(&device, &["acknowledge"]);
    assert_eq!((ran.exit, ran.err.as_str()), (0, ""));
    let moved = "stands, not acknowledged -> stands, acknowledged\n";
    assert!(ran.out.contains(&format!("  course 1, alarm: {moved}")), "{}", ran.out);
    assert!(ran.out.contains("What stands stays shown"), "{}", ran.out);

    let status = document(&on(&device, &["status", "--format", "json"]));
    assert_eq!(status["alarms"][0]["state"], "acknowledged");
    assert_eq!(status["health"], "act_now");

    let again = on(&device, &["acknowledge"]);
    assert_eq!((again.exit, again.out.as_str()), (8, ""));
    assert_eq!(
        again.err,
        "error: acknowledging: there is nothing to acknowledge\n  hint: read the status again\n"
    );
}
