//! `[[course]]`, `[[panel]]`, `[[hatch]]` and `[[curved]]`.

use super::outline::{CUT, OUTLINE};
use super::rating::{
    COURSE_INWARD, COURSE_OUTWARD, CURVED_INWARD, CURVED_OUTWARD, HATCH_INWARD, HATCH_OUTWARD,
    PANEL_INWARD, PANEL_OUTWARD,
};
use super::{ANGLE, Holds, Is, Key, LENGTH, Rule, SPEED, Table, When, may, need, plain};
use crate::units::Quantity::{Length, Mass};

const NAME: &[Key] =
    &[need("name", Holds::Text, "A name that no other part has; at most 24 bytes.")];
const OUTWARD: &str = "What it can carry outward; the smallest of the list governs.";
const INWARD: &str = "What it can carry inward; the smallest of the list governs.";

/// Where a flat part stands.
const PLACE: &[Key] = &[
    may("centre", LENGTH, "Height of its centroid above the datum."),
    may("bottom", LENGTH, "Height of its lowest point above the datum."),
    may("top", LENGTH, "Height of its highest point above the datum."),
    need("slope", ANGLE, "Through the liquid from the level floor: 0 floor, 90 wall, 180 roof."),
];
const PLACED: Rule = Rule::OneOf(&["centre", "bottom", "top"]);

pub(super) static COURSE: Table = plain(
    "course",
    "A ring of the shell.",
    &[
        NAME,
        &[
            need("bottom", LENGTH, "Height of its lower edge above the datum."),
            need("height", LENGTH, "From its lower to its upper edge."),
            may("design_point", LENGTH, "Above the lower edge, as `rule` allows; else at it."),
            may("rule", Holds::Text, "Standard and clause that allow the design point."),
            need("capacity", Holds::Tables(&COURSE_OUTWARD), OUTWARD),
            may("capacity_inward", Holds::Tables(&COURSE_INWARD), INWARD),
            may("corrosion_rate", SPEED, "The loss of thickness."),
        ],
    ],
);

pub(super) static PANEL: Table = Table {
    name: "panel",
    about: "A flat wall, floor or roof.",
    keys: &[
        NAME,
        PLACE,
        &[
            need("shape", Holds::Table(&CUT), "Its outline, in its own plane."),
            need("capacity", Holds::Tables(&PANEL_OUTWARD), OUTWARD),
            may("capacity_inward", Holds::Tables(&PANEL_INWARD), INWARD),
        ],
    ],
    refused: &[],
    rules: &[PLACED],
};

pub(super) static HATCH: Table = Table {
    name: "hatch",
    about: "A cover over an opening.",
    keys: &[
        NAME,
        PLACE,
        &[
            need("shape", Holds::Table(&OUTLINE), "The clear opening."),
            need(
                "sealed_to",
                Holds::Table(&OUTLINE),
                "The line of the gasket: to it liquid presses.",
            ),
            need("opens", Holds::Words(&["outward", "inward"]), "To which side the cover opens."),
            may("secured", Holds::Table(&SECURED), "What holds the cover."),
            may("cover_mass", Holds::QuantityOrTable(Mass, &COVER_MASS), "What the cover weighs."),
            need("capacity", Holds::Tables(&HATCH_OUTWARD), OUTWARD),
            may("capacity_inward", Holds::Tables(&HATCH_INWARD), INWARD),
        ],
    ],
    refused: &[],
    rules: &[PLACED],
};

static COVER_MASS: Table = plain(
    "cover_mass",
    "What the cover weighs, and where that comes from.",
    &[&[
        need("mass", Holds::Quantity(&[Mass]), "Its mass."),
        need("basis", Holds::Text, "As \"surveyed 2026-05\"; only a weighed one may relieve."),
    ]],
);

static SECURED: Table = Table {
    name: "secured",
    about: "What holds a cover: bolts, a hinge with latches, or a pivot.",
    keys: &[&[
        may("bolts", Holds::Integer(3, 999), "The number of bolts."),
        may("bolt_circle_diameter", LENGTH, "Of the circle through the axes of the bolts."),
        may("bolt_rectangle", Holds::Table(&BOLT_RECTANGLE), "Through the axes of the bolts."),
        may("first_bolt", Holds::Words(&["lowest", "astride"]), "Where the lowest bolt stands."),
        may("hinge", Holds::Words(&["top", "bottom", "side"]), "The edge beside the hinge line."),
        may("offset", LENGTH, "From that edge of the opening outward to the hinge line."),
        may("latch_at", Holds::Several(Length), "Distance of each latch from the hinge line."),
        may("pins", Holds::Pair(&[Length]), "Heights of the pins of a hinge at the side."),
        may("latch_height", Holds::Several(Length), "Height of each latch above the datum."),
        may("pivot", LENGTH, "Height of a pivot across the opening."),
    ]],
    refused: &[],
    rules: &[
        Rule::OneOf(&["bolts", "hinge", "pivot"]),
        Rule::OneOfWith("bolts", &["bolt_circle_diameter", "bolt_rectangle"]),
        Rule::When(When {
            else_forbids: &["bolt_circle_diameter", "bolt_rectangle", "first_bolt"],
            ..When::new("bolts", Is::There)
        }),
        Rule::When(When {
            needs: &["offset", "latch_at"],
            else_forbids: &["offset", "latch_at", "pins"],
            ..When::new("hinge", Is::There)
        }),
        Rule::When(When { needs: &["latch_height"], ..When::new("pins", Is::There) }),
        Rule::When(When {
            forbids: &["pins", "latch_height"],
            ..When::new("hinge", Is::Word(&["top", "bottom"]))
        }),
    ],
};

static BOLT_RECTANGLE: Table = plain(
    "bolt_rectangle",
    "The rectangle through the axes of the bolts.",
    &[&[need("width", LENGTH, "Horizontal."), need("length", LENGTH, "Up the slope.")]],
);

pub(super) static CURVED: Table = Table {
    name: "curved",
    about: "A curved part: an arc, a dome, a bottom or head, or a mesh.",
    keys: &[
        NAME,
        &[
            may("arc", Holds::Table(&ARC), "A wall curved about a horizontal axis."),
            may("axis", LENGTH, "Height of the axis of an arc above the datum."),
            may("dome", Holds::Table(&DOME), "A hemisphere on a vertical wall."),
            may("centre", LENGTH, "Height of the centre of a dome above the datum."),
            may("wetted", WETTED, "The side of a dome that the liquid touches."),
            may("revolved", Holds::Table(&REVOLVED), "A bottom or head about a vertical axis."),
            may("base", LENGTH, "Height of the rim of a bottom or head above the datum."),
            may("mesh", Holds::Text, "An STL file, counted from the folder of the tank file."),
            may("unit", Holds::Words(&["mm", "cm", "m", "in", "ft"]), "Of the mesh's numbers."),
            may("origin", LENGTH, "Height of the mesh's z = 0; without it at the datum."),
            may("normals", NORMALS, "Where those of the mesh point; else into the liquid."),
            may("closed", CLOSED, "What a mesh without a rim is; it is checked."),
            need("capacity", Holds::Tables(&CURVED_OUTWARD), OUTWARD),
            may("capacity_inward", Holds::Tables(&CURVED_INWARD), INWARD),
        ],
    ],
    refused: &[],
    rules: &[
        Rule::OneOf(&["arc", "dome", "revolved", "mesh"]),
        Rule::When(When {
            needs: &["axis"],
            else_forbids: &["axis"],
            ..When::new("arc", Is::There)
        }),
        Rule::When(When {
            needs: &["centre", "wetted"],
            else_forbids: &["centre", "wetted"],
            ..When::new("dome", Is::There)
        }),
        Rule::When(When {
            needs: &["base"],
            else_forbids: &["base"],
            ..When::new("revolved", Is::There)
        }),
        Rule::When(When {
            needs: &["unit"],
            else_forbids: &["unit", "origin", "normals", "closed"],
            ..When::new("mesh", Is::There)
        }),
    ],
};

const NORMALS: Holds = Holds::Words(&["into the liquid", "out of the liquid"]);
const CLOSED: Holds = Holds::Words(&["vessel", "body"]);
const WETTED: Holds = Holds::Words(&["inside", "outside"]);

static ARC: Table = plain(
    "arc",
    "A wall curved about a horizontal axis.",
    &[&[
        need("radius", LENGTH, "Its radius."),
        need("length", LENGTH, "Along the axis."),
        need("from", ANGLE, "From the horizontal, counter-clockwise."),
        need("to", ANGLE, "From the horizontal, counter-clockwise."),
        need("wetted", WETTED, "The side that the liquid touches; inside is that of the axis."),
    ]],
);

static DOME: Table =
    plain("dome", "A hemisphere on a vertical wall.", &[&[need("radius", LENGTH, "Its radius.")]]);

static REVOLVED: Table = plain(
    "revolved",
    "A bottom or head about a vertical axis.",
    &[&[
        need("kind", Holds::Words(&["cone", "sphere", "ellipsoid"]), "Its profile."),
        need("base_radius", LENGTH, "Radius of its rim."),
        need("height", LENGTH, "From the rim to the apex."),
        need("apex", Holds::Words(&["up", "down"]), "Down of a bottom, up of a roof."),
    ]],
);
