//! What is wrong with a mesh.

use super::{BYTES_MAX, Closed, Point, REACH_M, RISE_MIN_M, TRIANGLES_MAX};

/// Why a file is no mesh. Triangles are counted from 1 in the order of the file; places are in the
/// file's own unit.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum Fault {
    /// The file cannot be read.
    #[error("cannot be read: {why}")]
    Unreadable {
        /// What the system says.
        why: String,
    },
    /// Larger than any mesh.
    #[error("has {bytes} bytes, the limit is {BYTES_MAX}")]
    TooLarge {
        /// Its size.
        bytes: u64,
    },
    /// Neither form of STL.
    #[error(
        "is no STL file: it neither begins with `solid` nor has the head of a binary one, 84 bytes"
    )]
    NotStl,
    /// A binary file of another length than it says.
    #[error("says {triangles} triangles, which take {due} bytes, and has {bytes}")]
    Length {
        /// Triangles by its head.
        triangles: u32,
        /// Bytes that these take.
        due: u64,
        /// Bytes that there are.
        bytes: usize,
    },
    /// A word of a text file that does not belong there.
    #[error("line {line}: `{found}` stands where {wanted} belongs")]
    Word {
        /// Its line.
        line: usize,
        /// The word.
        found: String,
        /// What belongs there.
        wanted: &'static str,
    },
    /// A text file that ends too early.
    #[error("ends at line {line} where {wanted} belongs")]
    Ends {
        /// The last line.
        line: usize,
        /// What is missing.
        wanted: &'static str,
    },
    /// A second solid in the file.
    #[error("line {line}: something follows the end of the solid")]
    Second {
        /// Its line.
        line: usize,
    },
    /// A coordinate that is no number, or a far one.
    #[error(
        "triangle {triangle}: a coordinate is {value}, within {limit} of this unit is possible"
    )]
    Coordinate {
        /// The triangle.
        triangle: usize,
        /// The coordinate in the file's unit.
        value: f64,
        /// The limit in that unit.
        limit: f64,
    },
    /// More triangles than the limit.
    #[error("has {triangles} triangles, the limit is {TRIANGLES_MAX}")]
    TooMany {
        /// Their number, or one more than the limit.
        triangles: usize,
    },
    /// No triangle at all.
    #[error("has no triangle with an area")]
    Empty,
    /// The corners contradict the stated normal.
    #[error("triangle {triangle}: its normal points against the order of its corners")]
    Normal {
        /// The triangle.
        triangle: usize,
    },
    /// Two neighbours disagree on their sides.
    #[error(
        "triangles {one} and {other} run the same way along their common edge at {}: one of them \
         is flipped",
        place(*at)
    )]
    Flipped {
        /// A triangle.
        one: usize,
        /// Its neighbour.
        other: usize,
        /// An end of the edge.
        at: Point,
    },
    /// More than two triangles at an edge.
    #[error("{triangles} triangles share the edge at {}, two can", place(*at))]
    Shared {
        /// Their number.
        triangles: usize,
        /// An end of the edge.
        at: Point,
    },
    /// Pieces that no edge connects.
    #[error(
        "comes in {pieces} pieces; the one of triangle {triangle} shares no edge with the first"
    )]
    Pieces {
        /// Their number.
        pieces: usize,
        /// The first triangle that is not of the first piece.
        triangle: usize,
    },
    /// Open where it is said to close.
    #[error("is open along {edges} edges, the first at {}", place(*at))]
    Open {
        /// Edges of one triangle alone.
        edges: usize,
        /// An end of the first.
        at: Point,
    },
    /// The wetted side is the wrong one for a closed surface.
    #[error("{}", inside_out(*closed))]
    InsideOut {
        /// What it is said to be.
        closed: Closed,
    },
    /// All of it in one level.
    #[error("is {rise_m:.2e} m high, the least is {RISE_MIN_M} m")]
    Level {
        /// From its lowest to its highest point.
        rise_m: f64,
    },
}

fn place([x, y, z]: Point) -> String {
    format!("({x} {y} {z})")
}

const fn inside_out(closed: Closed) -> &'static str {
    match closed {
        Closed::Vessel => "is a vessel whose liquid would stand around it",
        Closed::Body => "is a body whose liquid would stand inside",
    }
}

impl Fault {
    /// What to do about it.
    #[must_use]
    pub fn hint(&self) -> String {
        match self {
            Self::Unreadable { .. } => {
                "the path counts from the folder of the tank file".to_owned()
            }
            Self::TooLarge { .. } | Self::TooMany { .. } => {
                "export it coarser; a few hundred triangles are enough for most parts".to_owned()
            }
            Self::NotStl => "export the surface as STL, text or binary".to_owned(),
            Self::Length { .. } | Self::Ends { .. } => {
                "the file was cut short or changed; export it again".to_owned()
            }
            Self::Word { .. } => {
                "a facet is: facet normal, outer loop, three times vertex, endloop, endfacet"
                    .to_owned()
            }
            Self::Second { .. } => "write each solid into a file and a part of its own".to_owned(),
            Self::Coordinate { .. } => {
                format!("check the number and `unit`; a plan reaches {REACH_M} m")
            }
            Self::Empty => "export the surface again".to_owned(),
            Self::Normal { .. } | Self::Flipped { .. } => {
                "let the modelling program make all normals point to one side".to_owned()
            }
            Self::Shared { .. } => {
                "keep the wetted surface alone, without walls behind it".to_owned()
            }
            Self::Pieces { .. } => {
                "merge corners that lie together, or write a file and a part for each piece"
                    .to_owned()
            }
            Self::Open { .. } => {
                "merge corners that lie together and close the gap, or leave `closed` out"
                    .to_owned()
            }
            Self::InsideOut { .. } => {
                "change `normals` to the other of \"into the liquid\" and \"out of the liquid\""
                    .to_owned()
            }
            Self::Level { .. } => "check `unit`; write a level part as a [[panel]]".to_owned(),
        }
    }
}
