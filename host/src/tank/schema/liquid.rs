//! `[liquid]`, its layers, and `[[product]]`.

use super::sensor::TEMPERATURE_SIGNAL;
use super::{DENSITY, Holds, Key, LENGTH, Rule, Table, may, need, plain};
use crate::units::Quantity::{Density, PerKelvin, Ratio, Temperature};

/// Keys of every liquid.
const EVERY: &[Key] = &[
    need("name", Holds::Text, "What people call it; at most 24 bytes."),
    need("density", DENSITY, "Its density at `temperature`."),
    need("temperature", Holds::Quantity(&[Temperature]), "At which `density` holds."),
    need("range", Holds::Pair(&[Temperature]), "The coldest and the hottest in service."),
    may(
        "expansion",
        Holds::QuantityWordOrTable(&[PerKelvin], "none", &PETROLEUM),
        "Its coefficient of cubical expansion; none when the density does not change; or a group.",
    ),
    may(
        "density_table",
        Holds::Rows(Temperature, Density),
        "Rows of temperature, rising, and density; 2 to 64 rows.",
    ),
    need(
        "uncertainty",
        Holds::Quantity(&[Ratio]),
        "The half-width that the density never exceeds, in percent.",
    ),
];

static PETROLEUM: Table = plain(
    "petroleum",
    "A group of petroleum liquids, by ASTM D1250 / API MPMS 11.1.",
    &[&[need(
        "petroleum",
        Holds::Words(&["crude", "refined", "lubricating oil"]),
        "Table 54A, 54B or 54D.",
    )]],
);

const THERMAL: &[Rule] = &[Rule::OneOf(&["expansion", "density_table"])];

pub(super) static LIQUID: Table = Table {
    name: "liquid",
    about: "The liquid that the tank holds.",
    keys: &[
        EVERY,
        &[
            may("below", Holds::Tables(&LAYER), "A heavier layer under it, from the top down."),
            may(
                "temperature_signal",
                Holds::Table(&TEMPERATURE_SIGNAL),
                "A temperature sensor in the liquid.",
            ),
        ],
    ],
    refused: &[],
    rules: THERMAL,
};

static LAYER: Table = Table {
    name: "layer",
    about: "A heavier layer under the liquid.",
    keys: &[
        EVERY,
        &[
            need("surface", LENGTH, "The height of the top of this layer above the datum."),
            need("surface_uncertainty", LENGTH, "The half-width that this height never exceeds."),
        ],
    ],
    refused: &[],
    rules: THERMAL,
};

pub(super) static PRODUCT: Table = Table {
    name: "product",
    about: "Another liquid that the tank may hold.",
    keys: &[EVERY],
    refused: &["temperature_signal"],
    rules: THERMAL,
};
