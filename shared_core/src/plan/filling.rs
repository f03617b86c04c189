//! The volume curve, and what the time to limit is judged by.

use super::Plan;
use crate::liquid::PRODUCTS_MAX;

/// Most rows of a volume curve.
pub const CURVE_ROWS_MAX: usize = 32;
/// One level for a tank whose product is not confirmed, one for the plan's liquid, one per product.
pub const LIMITS_MAX: usize = PRODUCTS_MAX + 2;

/// How full the tank is, and up to where; its levels and rows stand behind the parts' own in the
/// plan's numbers. Without rows the plan states none of it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Filling {
    /// Time over which the inflow is taken, ms.
    pub window_ms: u32,
    /// Place of its first number.
    pub(super) first: u16,
    /// Limit levels.
    pub(super) limits: u8,
    /// Rows of the curve, two numbers each.
    pub(super) rows: u8,
}

impl Filling {
    /// Nothing is stated.
    pub const NONE: Self = Self { window_ms: 0, first: 0, limits: 0, rows: 0 };

    /// Whether the plan has a volume curve.
    #[must_use]
    pub const fn is_stated(&self) -> bool {
        self.rows > 0
    }
}

impl Plan {
    /// States the volume curve and the limit levels, behind all parts; `None` when they do not fit,
    /// and the plan then states none.
    ///
    /// `limits_m` are estimated levels at which the first part's outward bound reaches its
    /// capacity, m above the datum: while the product is not confirmed, with the plan's liquid,
    /// with each product. `curve` has heights above the datum, m, and the volumes below them, m³;
    /// both rise, with straight lines between.
    #[must_use]
    pub fn state_filling(
        &mut self,
        window_ms: u32,
        limits_m: &[f32],
        curve: &[[f32; 2]],
    ) -> Option<()> {
        let before = self.numbers.len();
        let stated = self.push_filling(window_ms, limits_m, curve);
        if stated.is_none() {
            self.numbers.truncate(before);
            self.filling = Filling::NONE;
        }
        stated
    }

    fn push_filling(&mut self, window_ms: u32, limits_m: &[f32], curve: &[[f32; 2]]) -> Option<()> {
        let first = u16::try_from(self.numbers.len()).ok()?;
        let limits = u8::try_from(limits_m.len()).ok().filter(|_| limits_m.len() <= LIMITS_MAX)?;
        let rows = u8::try_from(curve.len()).ok().filter(|_| curve.len() <= CURVE_ROWS_MAX)?;
        self.numbers.extend_from_slice(limits_m).ok()?;
        self.numbers.extend_from_slice(curve.as_flattened()).ok()?;
        self.filling = Filling { window_ms, first, limits, rows };
        Some(())
    }

    /// The limit levels of [`Plan::state_filling`].
    #[must_use]
    pub fn limits_m(&self) -> &[f32] {
        let Filling { first, limits, .. } = self.filling;
        let own = self.numbers.get(usize::from(first)..).unwrap_or_default();
        own.get(..usize::from(limits)).unwrap_or_default()
    }

    /// The volume curve of [`Plan::state_filling`].
    #[must_use]
    pub fn curve(&self) -> &[[f32; 2]] {
        let Filling { first, limits, rows, .. } = self.filling;
        let start = usize::from(first) + usize::from(limits);
        let own = self.numbers.get(start..).unwrap_or_default();
        own.as_chunks().0.get(..usize::from(rows)).unwrap_or_default()
    }

    /// Volume below a level, m³; held at the curve's ends.
    #[must_use]
    #[inline(never)]
    pub fn volume_m3(&self, level_m: f32) -> f32 {
        let mut below: Option<[f32; 2]> = None;
        for &[height_m, volume_m3] in self.curve() {
            if level_m < height_m {
                return below.map_or(volume_m3, |[from_m, from_m3]| {
                    let share = (level_m - from_m) / (height_m - from_m);
                    from_m3 + share * (volume_m3 - from_m3)
                });
            }
            below = Some([height_m, volume_m3]);
        }
        below.map_or(0.0, |[_, volume_m3]| volume_m3)
    }

    /// The limit level while this product is confirmed (0 the plan's liquid, then its products), or
    /// none is, m; `None` without a curve.
    #[must_use]
    pub fn limit_m(&self, product: Option<u8>) -> Option<f32> {
        let index = product.map_or(0, |product| usize::from(product) + 1);
        let limits_m = self.limits_m();
        limits_m.get(index).or(limits_m.first()).copied()
    }
}
