//! `[alarm]`, `[logging]`, `[device]` and `[power]`.

use super::{CURRENT, Holds, TIME, Table, VOLTAGE, may, need, plain};
use crate::units::Quantity::Charge;

pub(super) static ALARM: Table = plain(
    "alarm",
    "Thresholds of the loads, as shares of the capacities, and the response time.",
    &[&[
        need("warn", Holds::Table(&THRESHOLD), "The lower threshold."),
        need("alarm", Holds::Table(&THRESHOLD), "The upper threshold."),
        may("inward", Holds::Table(&THRESHOLD), "That of the inward capacities."),
        need("response_time", TIME, "From the alarm until the filling has stopped."),
        may("sounds_again_after", TIME, "After an acknowledgement while the condition stands."),
        may("inflow_window", TIME, "Over which the inflow is taken for the time to limit."),
    ]],
);

static THRESHOLD: Table = plain(
    "threshold",
    "A threshold of the loads.",
    &[&[
        need("utilisation", Holds::Ratio, "The share of the capacity."),
        need("deadband", Holds::Ratio, "How far below the threshold it has gone again."),
        need("on_delay", TIME, "How long the load stands above before it counts."),
        need("off_delay", TIME, "How long it stands below before it has gone."),
        may("latch", Holds::Flag, "Whether it stays until somebody resets it."),
    ]],
);

pub(super) static LOGGING: Table = plain(
    "logging",
    "How often the device samples and writes.",
    &[&[
        need("interval", TIME, "Between samples while the level moves."),
        need("idle_interval", TIME, "Between samples at rest."),
        need("flush_after", TIME, "How long a sample may wait in memory that a power cut empties."),
    ]],
);

pub(super) static DEVICE: Table = plain(
    "device",
    "The one device that may load the plan.",
    &[&[need("id", Holds::Text, "As the device reports it; at most 24 bytes.")]],
);

pub(super) static POWER: Table = plain(
    "power",
    "Inputs of the estimate of the battery's life.",
    &[&[
        need("cell", Holds::Table(&CELL), "The cell."),
        need("sensor", Holds::Table(&SUPPLY), "What the level sensor takes."),
        may("relay_current", CURRENT, "That holds a relay in while all is well."),
    ]],
);

static CELL: Table = plain(
    "cell",
    "A cell or battery.",
    &[&[
        need("capacity", Holds::Quantity(&[Charge]), "Its capacity."),
        need("voltage", VOLTAGE, "Its voltage."),
        need("efficiency", Holds::Ratio, "The share of its energy that reaches the circuit."),
    ]],
);

static SUPPLY: Table = plain(
    "sensor_supply",
    "What the level sensor takes.",
    &[&[
        need("voltage", VOLTAGE, "Its supply."),
        need("current", CURRENT, "What it takes while it is on."),
        need("warm_up", TIME, "From switching on to a valid reading."),
    ]],
);
