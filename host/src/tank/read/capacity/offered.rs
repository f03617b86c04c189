//! Which capacities mean something for which part.

use super::Bearer;
use crate::tank::model::PartKind;

/// The kind as a word for a sentence.
pub(super) const fn noun(kind: PartKind) -> &'static str {
    match kind {
        PartKind::Curved => "curved part",
        _ => kind.as_str(),
    }
}

/// The capacities that mean something for this part and this side.
pub(super) fn offered(bearer: Bearer, inward: bool) -> &'static [&'static str] {
    match (bearer.kind, inward) {
        (PartKind::Curved, false) if bearer.shell => &["tension", "force", "pressure", "none"],
        (PartKind::Curved, true) if bearer.shell => &["compression", "pressure", "none"],
        (PartKind::Course, false) => &["plate", "hoop_tension", "designed_for", "pressure", "none"],
        (PartKind::Course | PartKind::Curved, true) => &["pressure", "none"],
        (PartKind::Panel, false) => &["plate", "force", "pressure", "designed_for", "none"],
        (PartKind::Panel, true) => &["plate", "force", "pressure", "none"],
        (PartKind::Curved, false) => &["force", "pressure", "none"],
        (PartKind::Hatch, false) => &[
            "bolt",
            "latch",
            "hinge",
            "force",
            "moment",
            "pressure",
            "cover",
            "designed_for",
            "none",
        ],
        (PartKind::Hatch, true) => {
            &["bolt", "latch", "hinge", "force", "moment", "pressure", "cover", "none"]
        }
    }
}

/// Kind of part, whether inward, and every capacity that such a part may have.
#[cfg(test)]
pub(in crate::tank) fn all() -> Vec<(&'static str, bool, std::collections::BTreeSet<&'static str>)>
{
    let kinds = [PartKind::Course, PartKind::Panel, PartKind::Hatch, PartKind::Curved];
    let sides = kinds.into_iter().flat_map(|kind| [(kind, false), (kind, true)]);
    let of = |(kind, inward): (PartKind, bool)| {
        let bearer = Bearer::plain(kind);
        let shell = Bearer { shell: true, ..bearer };
        let both = [bearer, shell].map(|bearer| offered(bearer, inward));
        (kind.as_str(), inward, both.into_iter().flatten().copied().collect())
    };
    sides.map(of).collect()
}
