//! Numbers on the wire: pinned, never reused.

use crate::wire::{ErrorCode, FRAME_UNITS_MAX, Kind, PROTOCOL_VERSION, Text};

#[test]
fn kinds() {
    let table: Vec<String> =
        Kind::ALL.iter().map(|kind| format!("{:02X} {kind:?}", kind.number())).collect();
    assert_eq!(
        table,
        [
            "01 Hello",
            "02 StatusRequest",
            "03 PartStatusRequest",
            "04 FaultStatusRequest",
            "05 FillingRequest",
            "10 PlanBegin",
            "11 PlanChunk",
            "12 PlanCommit",
            "13 PlanListRequest",
            "14 PlanRead",
            "20 ClockSet",
            "21 Acknowledge",
            "30 JournalBoundsRequest",
            "31 HeadRequest",
            "32 SectorRequest",
            "81 Identity",
            "82 Status",
            "83 PartStatus",
            "84 FaultStatus",
            "85 FillingStatus",
            "90 PlanReply",
            "93 PlanList",
            "94 PlanData",
            "A0 Done",
            "B0 JournalBounds",
            "B1 Head",
            "B2 SectorData",
            "B3 SectorEnd",
            "FF ErrorReply",
        ]
    );
    for number in 0..=u8::MAX {
        let known = Kind::from_number(number);
        assert_eq!(known.map(Kind::number), known.map(|_| number));
        assert_eq!(known.is_some(), Kind::ALL.iter().any(|kind| kind.number() == number));
    }
    assert_eq!((PROTOCOL_VERSION, FRAME_UNITS_MAX), (1, 8));
}

#[test]
fn error_codes() {
    let table: Vec<String> =
        ErrorCode::ALL.iter().map(|code| format!("{} {code:?}: {code}", code.number())).collect();
    assert_eq!(table.join("\n"), include_str!("error_codes.txt").trim_end());
    for number in 0..=u8::MAX {
        let known = ErrorCode::from_number(number);
        assert_eq!(known.map(ErrorCode::number), known.map(|_| number));
        assert_eq!(known.is_some(), (1..=19).contains(&number));
    }
}

#[test]
fn texts() {
    let longest = "12345678901234567890123456789012";
    assert_eq!(Text::new(longest).unwrap().as_str(), longest);
    assert_eq!(Text::new("123456789012345678901234567890123"), None);
    assert_eq!(Text::new("Behälter").unwrap().to_string(), "Behälter");
    assert!(Text::default().is_empty());
}

/// Struct fields with attributes of serde compile and then break the format.
#[test]
fn no_serde_attributes() {
    for source in [
        include_str!("../identity.rs"),
        include_str!("../status.rs"),
        include_str!("../plan.rs"),
        include_str!("../orders.rs"),
        include_str!("../journal.rs"),
        include_str!("../error_code.rs"),
    ] {
        assert!(!source.contains("#[serde"));
        assert!(source.contains("Deserialize)]"));
    }
}
