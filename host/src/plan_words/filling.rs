//! The volume curve and what belongs to it.

use super::Words;
use crate::units::Quantity::{Length, Volume};
use strake_core::plan::Plan;

impl Words {
    pub(super) fn filling(&mut self, plan: &Plan) {
        let (window_ms, limits_m, curve) = (plan.filling.window_ms, plan.limits_m(), plan.curve());
        if !plan.filling.is_stated() {
            return;
        }
        self.section("filling");
        self.line("inflow over", &window_ms, self.time(window_ms));
        for (number, limit_m) in (0_usize..).zip(limits_m) {
            let label = match number {
                0 => "limit, liquid not confirmed".to_owned(),
                1 => "limit, the liquid".to_owned(),
                product => format!("limit, other liquid {}", product - 1),
            };
            self.quantity(&label, *limit_m, Length);
        }
        let row = |&[height_m, volume_m3]: &[f32; 2]| {
            format!("{} at {}", self.show(volume_m3, Volume), self.show(height_m, Length))
        };
        let rows: Vec<String> = match curve {
            [first, .., last] if curve.len() > 4 => vec![row(first), "..".to_owned(), row(last)],
            few => few.iter().map(row).collect(),
        };
        let value = format!("{}, {} rows", rows.join(", "), curve.len());
        self.line("volume", &curve, value);
    }

    pub(super) fn accepted_margin(&mut self, reason: Option<&String>) {
        if let Some(reason) = reason {
            self.section("alarm");
            self.line("short margin accepted", reason, reason.clone());
        }
    }
}
