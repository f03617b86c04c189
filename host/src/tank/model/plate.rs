//! The plate of a panel, as far as it bends.

use super::{Panel, Rating, Shape};
use crate::plate::{Edges, Outline};
use crate::tank::finding::Located;

/// A flat plate between its edges.
#[derive(Clone, Debug, PartialEq)]
pub struct PanelPlate {
    /// Thickness now, as measured or drawn.
    pub thickness_m: Located<f64>,
    /// Part of it that is kept for corrosion; none when not stated.
    pub corrosion_allowance_m: Option<Located<f64>>,
    /// Allowable bending stress.
    pub allowable_stress_pa: Located<f64>,
    /// How its edges are held.
    pub edges: Located<Edges>,
    /// Modulus of elasticity, when stated.
    pub elastic_modulus_pa: Option<Located<f64>>,
    /// Poisson's ratio, when stated.
    pub poisson_ratio: Option<Located<f64>>,
}

/// Modulus of elasticity in `GPa` and Poisson's ratio, the lower end of what handbooks give.
const STEEL: (f64, f64) = (200.0, 0.3);
const METALS: [(&str, (f64, f64)); 8] = [
    ("stainless", (190.0, 0.3)),
    ("steel", STEEL),
    ("iron", (100.0, 0.26)),
    ("alumin", (69.0, 0.33)),
    ("copper", (115.0, 0.34)),
    ("brass", (100.0, 0.34)),
    ("bronze", (100.0, 0.34)),
    ("titanium", (105.0, 0.34)),
];

/// Modulus, Poisson's ratio, and whether one of them is taken and not stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Elastic {
    /// Modulus of elasticity.
    pub modulus_pa: f64,
    /// Poisson's ratio.
    pub poisson: f64,
    /// Neither a key nor the material says it: taken as steel.
    pub taken_as_steel: bool,
}

impl PanelPlate {
    /// Thickness that carries.
    #[must_use]
    pub fn sound_m(&self) -> f64 {
        self.thickness_m.value - self.allowance_m()
    }

    /// Part of the thickness that is kept for corrosion, zero when not stated.
    #[must_use]
    pub fn allowance_m(&self) -> f64 {
        self.corrosion_allowance_m.map_or(0.0, |one| one.value)
    }

    /// Largest moment that it may carry: stress x thickness² / 6 (elastic bending of a rectangular
    /// section).
    #[must_use]
    pub fn moment_n(&self) -> f64 {
        self.allowable_stress_pa.value * self.sound_m().powi(2) / 6.0
    }

    /// What it is made of, as far as it bends: stated, else by its material, else steel.
    #[must_use]
    pub fn elastic(&self, rating: &Rating) -> Elastic {
        let lower = rating.material.as_ref().map(|material| material.value.to_lowercase());
        let named = lower.and_then(|text| METALS.iter().find(|(word, _)| text.contains(word)));
        let (gpa, poisson) = named.map_or(STEEL, |(_, numbers)| *numbers);
        let stated = self.elastic_modulus_pa.is_some() && self.poisson_ratio.is_some();
        Elastic {
            modulus_pa: self.elastic_modulus_pa.map_or(gpa * 1e9, |one| one.value),
            poisson: self.poisson_ratio.map_or(poisson, |one| one.value),
            taken_as_steel: named.is_none() && !stated,
        }
    }
}

/// The outline of a panel, when its bending can be solved.
#[must_use]
pub fn outline(panel: &Panel) -> Option<Outline> {
    match panel.plane.shape {
        _ if panel.plane.hole.is_some() => None,
        Shape::Rectangle { width_m, length_m } => Some(Outline::Rectangle { width_m, length_m }),
        Shape::Circle { diameter_m } => Some(Outline::Circle { diameter_m }),
        _ => None,
    }
}
