//! The tables at the top of the file, `[tank]`, `[fill]`, `[gas]`, `[[outside]]` and `[site]`.

use super::liquid::{LIQUID, PRODUCT};
use super::part::{COURSE, CURVED, HATCH, PANEL};
use super::sensor::LEVEL;
use super::service::{ALARM, DEVICE, LOGGING, POWER};
use super::{
    ANGLE, DENSITY, Holds, Is, LENGTH, PRESSURE, Rule, SPEED, Table, When, may, need, plain,
};
use crate::units::Quantity::{Acceleration, Length, Volume};

/// The file.
pub(crate) static ROOT: Table = Table {
    name: "file",
    about: "A tank, its liquid, and the parts that carry it. Every quantity is a text with its \
            unit.",
    keys: &[&[
        need("tank", Holds::Table(&TANK), "The tank: its name and its shape inside."),
        may("fill", Holds::Table(&FILL), "Levels and how fast they change."),
        need("liquid", Holds::Table(&LIQUID), "The liquid that the tank holds."),
        may("product", Holds::Tables(&PRODUCT), "Another liquid that the tank may hold."),
        need("gas", Holds::Table(&GAS), "The gas above the liquid."),
        may("outside", Holds::Tables(&OUTSIDE), "Liquid against the outside of parts."),
        may("site", Holds::Table(&SITE), "Gravity at the site; standard gravity when left out."),
        may("level", Holds::Table(&LEVEL), "The level sensor."),
        may("course", Holds::Tables(&COURSE), "A ring of the shell, from the bottom up."),
        may("panel", Holds::Tables(&PANEL), "A flat wall, floor or roof."),
        may("hatch", Holds::Tables(&HATCH), "A cover over an opening."),
        may("curved", Holds::Tables(&CURVED), "A curved wall, bottom, head or dome."),
        may("alarm", Holds::Table(&ALARM), "Thresholds of the loads, and the response time."),
        may("logging", Holds::Table(&LOGGING), "How often the device samples and writes."),
        may("device", Holds::Table(&DEVICE), "The one device that may load the plan."),
        may("power", Holds::Table(&POWER), "Inputs of the estimate of the battery's life."),
    ]],
    refused: &[],
    rules: &[Rule::AnyOf(&["course", "panel", "hatch", "curved"])],
};

static TANK: Table = Table {
    name: "tank",
    about: "The tank: its name and its shape inside. Without a shape the parts stand loose.",
    keys: &[&[
        need("name", Holds::Text, "The name that people on site use; at most 24 bytes."),
        may("cylinder", Holds::Table(&CYLINDER), "An upright cylinder."),
        may("box", Holds::Table(&BOX), "A box."),
        may("lying", Holds::Table(&LYING), "A cylinder on its side with flat heads."),
        may(
            "strapping",
            Holds::Rows(Length, Volume),
            "Rows of height above the datum and volume, both rising; 2 to 32 rows.",
        ),
        may("conditions", Holds::Texts(0), "What must hold for the result; printed everywhere."),
    ]],
    refused: &[],
    rules: &[Rule::AtMostOne(&["cylinder", "box", "lying"])],
};

static CYLINDER: Table = plain(
    "cylinder",
    "An upright cylinder.",
    &[&[
        need("diameter", LENGTH, "Inside diameter of the shell."),
        need("height", LENGTH, "From the inside bottom to the top of the shell."),
    ]],
);

static BOX: Table = plain(
    "box",
    "A box, measured inside.",
    &[&[
        need("length", LENGTH, "Inside length."),
        need("width", LENGTH, "Inside width."),
        need("height", LENGTH, "Height of the walls."),
    ]],
);

static LYING: Table = plain(
    "lying",
    "A cylinder on its side.",
    &[&[
        need("diameter", LENGTH, "Inside diameter."),
        need("length", LENGTH, "Inside length."),
        need("heads", Holds::Words(&["flat"]), "Its heads; dished ones need a strapping table."),
    ]],
);

static FILL: Table = plain(
    "fill",
    "Levels above the datum and how fast they change.",
    &[&[
        may("overflow", LENGTH, "The level at which it runs over."),
        may("maximum", LENGTH, "The highest level of normal service."),
        may("lowest", LENGTH, "The lowest level of normal service."),
        may("highest_rise", SPEED, "How fast the level rises at most while filling."),
        may("highest_fall", SPEED, "How fast it falls at most while emptying, without a sign."),
        may("closed", Holds::Flag, "Whether the tank is closed, so that it can be over-full."),
    ]],
);

static GAS: Table = Table {
    name: "gas",
    about: "The gas above the liquid, gauge: vented, or the settings that bound it.",
    keys: &[&[
        may("vented", Holds::Flag, "Whether it is open to the air and holds no pressure."),
        may("lowest", PRESSURE, "The vacuum setting, gauge."),
        may("pressure", PRESSURE, "The pressure in normal service, gauge."),
        may("highest", PRESSURE, "The relief setting, gauge."),
    ]],
    refused: &["signal"],
    rules: &[Rule::When(When {
        forbids: &["lowest", "pressure", "highest"],
        else_needs: &["lowest", "pressure", "highest"],
        ..When::new("vented", Is::True)
    })],
};

static OUTSIDE: Table = plain(
    "outside",
    "Liquid against the outside: a flooded bund, the next compartment.",
    &[&[
        need("highest", LENGTH, "The level that it may reach."),
        may("lowest", LENGTH, "The level that is proven to stand always; else none relieves."),
        need("density", DENSITY, "Its density."),
        may("parts", Holds::Texts(1), "Names of the parts that it touches; else all."),
    ]],
);

static SITE: Table = Table {
    name: "site",
    about: "Gravity at the site: stated, or from latitude and elevation.",
    keys: &[&[
        may("gravity", Holds::Quantity(&[Acceleration]), "Gravity at the site."),
        may("latitude", ANGLE, "From -90 deg (south) to 90 deg (north)."),
        may("elevation", LENGTH, "Above sea level."),
    ]],
    refused: &[],
    rules: &[
        Rule::OneOf(&["gravity", "latitude"]),
        Rule::When(When {
            needs: &["elevation"],
            else_forbids: &["elevation"],
            ..When::new("latitude", Is::There)
        }),
    ],
};
