//! Outlines of flat parts, and an opening in one.

use super::{Holds, Key, LENGTH, Rule, Table, may, need, plain};
use crate::units::Quantity::Length;

const KINDS: &[Key] = &[
    may("circle", Holds::Table(&CIRCLE), "A circle."),
    may("ellipse", Holds::Table(&SIDES), "An ellipse."),
    may("obround", Holds::Table(&SIDES), "Two half circles and what is between them."),
    may("rectangle", Holds::Table(&SIDES), "A rectangle."),
    may("triangle", Holds::Table(&TRIANGLE), "A triangle with one level side."),
    may("trapezoid", Holds::Table(&TRAPEZOID), "A symmetric trapezoid with two level sides."),
    may("polygon", Holds::Table(&POLYGON), "Any outline of straight sides."),
];

const ONE: &[Rule] = &[Rule::OneOf(&[
    "circle",
    "ellipse",
    "obround",
    "rectangle",
    "triangle",
    "trapezoid",
    "polygon",
])];

/// The outline of a cover or of a gasket.
pub(super) static OUTLINE: Table = Table {
    name: "outline",
    about: "An outline: one of circle, ellipse, obround, rectangle, triangle, trapezoid, polygon.",
    keys: &[KINDS],
    refused: &["hole"],
    rules: ONE,
};

/// The outline of a panel.
pub(super) static CUT: Table = Table {
    name: "outline_with_hole",
    about: "An outline, and the opening in it.",
    keys: &[KINDS, &[may("hole", Holds::Table(&HOLE), "An opening in the panel.")]],
    refused: &[],
    rules: ONE,
};

static HOLE: Table = plain(
    "hole",
    "An opening in a panel.",
    &[&[
        need("shape", Holds::Table(&INSIDE), "Its outline."),
        may(
            "at",
            Holds::Pair(&[Length]),
            "Where its centroid stands, sideways and up the slope from that of the panel.",
        ),
        need(
            "carried_by",
            Holds::Words(&["plate", "elsewhere"]),
            "Whether what closes it hands its load to the plate.",
        ),
    ]],
);

static INSIDE: Table = Table {
    name: "outline_of_hole",
    about: "The outline of an opening.",
    keys: &[KINDS],
    refused: &[],
    rules: ONE,
};

static CIRCLE: Table =
    plain("circle", "A circle.", &[&[need("diameter", LENGTH, "Its diameter.")]]);

static SIDES: Table = plain(
    "width_and_length",
    "Width and length of an outline.",
    &[&[need("width", LENGTH, "Horizontal."), need("length", LENGTH, "Up the slope.")]],
);

static TRIANGLE: Table = plain(
    "triangle",
    "A triangle with one level side.",
    &[&[
        need("base", LENGTH, "The level side."),
        need("height", LENGTH, "Up the slope."),
        need("apex", Holds::Words(&["up", "down"]), "Where the corner opposite points."),
    ]],
);

static TRAPEZOID: Table = plain(
    "trapezoid",
    "A symmetric trapezoid with two level sides.",
    &[&[
        need("top", LENGTH, "The upper level side."),
        need("bottom", LENGTH, "The lower level side."),
        need("length", LENGTH, "Up the slope."),
    ]],
);

static POLYGON: Table = plain(
    "polygon",
    "Any outline of straight sides.",
    &[&[need(
        "points",
        Holds::Rows(Length, Length),
        "Its corners, sideways and up the slope, in the order in which one walks around it.",
    )]],
);
