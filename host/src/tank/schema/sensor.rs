//! `[level]`, and the temperature sensor of `[liquid]`.

use super::{Holds, Is, LENGTH, Rule, TIME, Table, When, may, need, plain};
use crate::units::Quantity::{AbsolutePressure, Length, Pressure, Ratio, TemperatureDifference};

pub(super) static LEVEL: Table = Table {
    name: "level",
    about: "The level sensor.",
    keys: &[&[
        need(
            "sensor",
            Holds::Words(&["head", "innage", "ullage"]),
            "What it senses: pressure at its place, level above a zero, distance down from above.",
        ),
        need(
            "at",
            LENGTH,
            "The height of the diaphragm, of the zero, or that distances count from.",
        ),
        may(
            "reference",
            Holds::Words(&["atmosphere", "gas space", "absolute"]),
            "Against what a pressure transmitter measures.",
        ),
        may(
            "atmosphere",
            Holds::Pair(&[AbsolutePressure]),
            "The lowest and the highest pressure of the air at the site.",
        ),
        need(
            "uncertainty",
            Holds::Quantity(&[Pressure, Length]),
            "The half-width that a reading never exceeds, in the unit sensed.",
        ),
        may(
            "uncertainty_of_distance",
            Holds::Quantity(&[Ratio]),
            "The part of the uncertainty that grows with the distance.",
        ),
        may("signal", Holds::Table(&SIGNAL), "How the reading reaches the device."),
        may("failed_after", TIME, "Without a valid reading until \"cannot see\"."),
    ]],
    refused: &["check"],
    rules: &[
        Rule::When(When {
            needs: &["reference"],
            else_forbids: &["reference", "atmosphere"],
            ..When::new("sensor", Is::Word(&["head"]))
        }),
        Rule::When(When {
            needs: &["uncertainty_of_distance"],
            else_forbids: &["uncertainty_of_distance"],
            ..When::new("sensor", Is::Word(&["ullage"]))
        }),
        Rule::When(When {
            needs: &["atmosphere"],
            else_forbids: &["atmosphere"],
            ..When::new("reference", Is::Word(&["absolute"]))
        }),
    ],
};

static SIGNAL: Table = Table {
    name: "signal",
    about: "How the reading reaches the device.",
    keys: &[&[
        may(
            "current_loop",
            Holds::Pair(&[Pressure, AbsolutePressure, Length]),
            "What it senses at 4 mA and at 20 mA.",
        ),
        may("modbus", Holds::Table(&MODBUS), "A register on a Modbus line."),
    ]],
    refused: &[],
    rules: &[Rule::OneOf(&["current_loop", "modbus"])],
};

static MODBUS: Table = plain(
    "modbus",
    "A register on a Modbus line.",
    &[&[
        need("unit", Holds::Integer(1, 247), "The address of the unit."),
        need("function", Holds::Integer(3, 4), "3 for holding registers, 4 for input registers."),
        need("register", Holds::Integer(0, 65_535), "The first register, counted from zero."),
        need("count", Holds::Words(&["u16", "i16", "u32", "f32"]), "How the number is coded."),
        need(
            "scale",
            Holds::Quantity(&[Pressure, Length, TemperatureDifference]),
            "The value of one count.",
        ),
    ]],
);

pub(super) static TEMPERATURE_SIGNAL: Table = Table {
    name: "temperature_signal",
    about: "A temperature sensor in the liquid, on the bus or on the board.",
    keys: &[&[
        may("modbus", Holds::Table(&MODBUS), "A register on a Modbus line."),
        may("scale", Holds::Quantity(&[TemperatureDifference]), "The value of one count."),
        need(
            "uncertainty",
            Holds::Quantity(&[TemperatureDifference]),
            "The half-width that a reading never exceeds.",
        ),
    ]],
    refused: &[],
    rules: &[Rule::OneOf(&["modbus", "scale"])],
};
