//! `capacity` and `capacity_inward` of each kind of part.

use super::{
    DENSITY, FORCE, Holds, Is, Key, LENGTH, LINE_LOAD, MOMENT, PRESSURE, Rule, Table, When, may,
    need, plain,
};

/// Keys of every capacity.
const EVERY: &[Key] = &[
    may(
        "basis",
        Holds::Text,
        "Where it comes from; begins with surveyed, drawing, code default or assumed.",
    ),
    may("material", Holds::Text, "The metal, or concrete."),
    may("none", Holds::Text, "Why there is none."),
    may("pressure", PRESSURE, "The largest pressure on the part."),
];

const FORCES: Key = may("force", FORCE, "The force on the whole part.");

const DESIGN: &[Key] = &[
    may("designed_for", Holds::Table(&DESIGNED_FOR), "The state that it was designed for."),
    may("remaining", Holds::Ratio, "Thickness now as a share of that when new."),
];

const HOLDING: &[Key] = &[
    FORCES,
    may("bolt", FORCE, "The force on one bolt."),
    may("latch", FORCE, "The force on one latch."),
    may("hinge", FORCE, "The force on one pin of the hinge."),
    may("moment", MOMENT, "The moment about the hinge."),
    may("cover", Holds::Table(&COVER), "The cover as a flat plate."),
];

/// Names that the reader knows for any part, to say which of them this one may have.
const REFUSED: &[&str] = &[
    "valid",
    "remaining",
    "plate",
    "hoop_tension",
    "designed_for",
    "bolt",
    "force",
    "pressure",
    "none",
    "latch",
    "hinge",
    "moment",
    "cover",
    "tension",
    "compression",
];

/// A basis is needed for everything but `none`.
const BASED: Rule = Rule::When(When { else_needs: &["basis"], ..When::new("none", Is::There) });
const REMAINS: Rule =
    Rule::When(When { else_forbids: &["remaining"], ..When::new("designed_for", Is::There) });

const fn rating(
    name: &'static str,
    keys: &'static [&'static [Key]],
    rules: &'static [Rule],
) -> Table {
    Table {
        name,
        about: "What a part can carry, and where that comes from.",
        keys,
        refused: REFUSED,
        rules,
    }
}

pub(super) static COURSE_OUTWARD: Table = rating(
    "capacity_of_course",
    &[
        EVERY,
        DESIGN,
        &[
            may("plate", Holds::Table(&COURSE_PLATE), "The plate of the course."),
            may("hoop_tension", LINE_LOAD, "The hoop tension."),
        ],
    ],
    &[Rule::OneOf(&["plate", "hoop_tension", "designed_for", "pressure", "none"]), BASED, REMAINS],
);

pub(super) static COURSE_INWARD: Table =
    rating("inward_capacity_of_course", &[EVERY], &[Rule::OneOf(&["pressure", "none"]), BASED]);

pub(super) static PANEL_OUTWARD: Table = rating(
    "capacity_of_panel",
    &[
        EVERY,
        DESIGN,
        &[FORCES, may("plate", Holds::Table(&PANEL_PLATE), "The panel as a flat plate.")],
    ],
    &[Rule::OneOf(&["plate", "force", "pressure", "designed_for", "none"]), BASED, REMAINS],
);

pub(super) static PANEL_INWARD: Table = rating(
    "inward_capacity_of_panel",
    &[EVERY, &[FORCES, may("plate", Holds::Table(&PANEL_PLATE), "The panel as a flat plate.")]],
    &[Rule::OneOf(&["plate", "force", "pressure", "none"]), BASED],
);

pub(super) static HATCH_OUTWARD: Table = rating(
    "capacity_of_hatch",
    &[EVERY, DESIGN, HOLDING],
    &[
        Rule::OneOf(&[
            "bolt",
            "latch",
            "hinge",
            "force",
            "moment",
            "pressure",
            "cover",
            "designed_for",
            "none",
        ]),
        BASED,
        REMAINS,
    ],
);

pub(super) static HATCH_INWARD: Table = rating(
    "inward_capacity_of_hatch",
    &[EVERY, HOLDING],
    &[
        Rule::OneOf(&["bolt", "latch", "hinge", "force", "moment", "pressure", "cover", "none"]),
        BASED,
    ],
);

pub(super) static CURVED_OUTWARD: Table = rating(
    "capacity_of_curved",
    &[EVERY, &[FORCES, may("tension", LINE_LOAD, "The tension of a shell, in any direction.")]],
    &[Rule::OneOf(&["tension", "force", "pressure", "none"]), BASED],
);

pub(super) static CURVED_INWARD: Table = rating(
    "inward_capacity_of_curved",
    &[EVERY, &[may("compression", LINE_LOAD, "The compression of a shell, by a buckling check.")]],
    &[Rule::OneOf(&["compression", "pressure", "none"]), BASED],
);

const THICKNESS: Key = need("thickness", LENGTH, "As measured or drawn.");
const STRESS: Key = need("allowable_stress", PRESSURE, "Of the plate, by the design code.");
const ALLOWANCE: &str = "Kept for corrosion.";

static COURSE_PLATE: Table = Table {
    name: "plate_of_course",
    about: "The plate of a course.",
    keys: &[&[
        THICKNESS,
        need("corrosion_allowance", LENGTH, ALLOWANCE),
        STRESS,
        need("joint_efficiency", Holds::Ratio, "By the design code and the radiographs."),
    ]],
    refused: &["edges"],
    rules: &[],
};

static PANEL_PLATE: Table = plain(
    "plate_of_panel",
    "A panel as a flat plate.",
    &[&[
        THICKNESS,
        may("corrosion_allowance", LENGTH, ALLOWANCE),
        STRESS,
        need(
            "edges",
            Holds::Words(&["clamped", "supported", "top free"]),
            "How its edges are held; top free has base and sides clamped.",
        ),
        may("elastic_modulus", PRESSURE, "That of the material."),
        may("poisson_ratio", Holds::Ratio, "That of the material."),
    ]],
);

static COVER: Table = plain(
    "cover",
    "A cover as a flat plate, by the rule for flat heads.",
    &[&[
        THICKNESS,
        may("corrosion_allowance", LENGTH, ALLOWANCE),
        STRESS,
        may("joint_efficiency", Holds::Ratio, "Of a seam in the cover."),
        need("attachment_factor", Holds::Ratio, "The rule's factor C for how it is attached."),
        may("bolt_load", FORCE, "Of all bolts, where it exceeds the load of the liquid."),
    ]],
);

static DESIGNED_FOR: Table = plain(
    "designed_for",
    "The state that a part was designed for.",
    &[&[
        need("level", LENGTH, "The level of the design, above the datum."),
        need("density", DENSITY, "The density of the design."),
        need("gas", PRESSURE, "The gas pressure of the design, gauge."),
    ]],
);
