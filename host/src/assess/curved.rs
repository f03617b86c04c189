//! What is told of a curved part beside its loads.

use super::action::action;
use super::document::{LineOfAction, Loads};
use crate::tank::{Part as Stated, Surface};
use strake_core::liquid::States;

/// Where the force of the estimate acts.
pub(super) fn line_of_action(stated: &Stated, states: &States<1>) -> Option<LineOfAction> {
    let Stated::Curved(part) = stated else { return None };
    let found = action(&part.surface, part.heights.centre_m, &states.estimate)?;
    let is_mesh = matches!(part.surface, Surface::Mesh(_));
    let y_n = found.force_n[1];
    let pressed: f64 = found.pressed_n.iter().sum();
    Some(LineOfAction {
        angle_deg: found.angle_deg(),
        force_x_at_m: found.x_acts_at_m(),
        force_z_at_m: found.z_acts_at_m(),
        // Below this it is rounding.
        force_y_n: is_mesh.then_some(if y_n.abs() > 1e-9 * pressed { y_n } else { 0.0 }),
        moment_n_m: is_mesh.then_some(found.moment_n_m),
    })
}

/// The core knows x and z alone: the size of a force that has a y as well is not told.
pub(super) fn withhold(line: Option<&LineOfAction>, loads: [&mut Loads; 2]) {
    let across_n = line.and_then(|line| line.force_y_n);
    if across_n.is_some_and(|y_n| y_n.abs() > 0.0) {
        for loads in loads {
            loads.force_n = None;
        }
    }
}
