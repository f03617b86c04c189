//! Head sensors over a wall of one metre width.

use crate::cases::problem::BoundAsk;
use crate::envelope::{Bound, Head};
use crate::limit::place_of_largest;
use crate::liquid::{Layer, Liquid, Pressure};
use crate::plane::PlanePart;
use crate::shape::Shape;

pub(super) fn answer(wall_m: f64, head: &Head, ask: &BoundAsk) -> f64 {
    let wall = PlanePart::new(Shape::Rectangle { width: 1.0, length: wall_m }, 0.0, 90.0);
    let at_interface = |interface: f64| wall.force(&two_layers(head, interface));
    let at_density = |density: f64| wall.force(&one_liquid(head, density));
    let band = head.density_kg_m3;
    let least = || place_of_largest(band.low, band.high, 200, |density| -at_density(density));
    match *ask {
        BoundAsk::ForceAtInterface(interface) => at_interface(interface),
        BoundAsk::LargestOverInterfaces(low, high) => {
            at_interface(place_of_largest(low, high, 200, at_interface))
        }
        BoundAsk::ForceAtDensity(density) => at_density(density),
        BoundAsk::LeastOverDensities => at_density(least()),
        BoundAsk::DensityOfLeast => least(),
        BoundAsk::LargestOverProfiles => wall.force(&Bound::Upper(*head)),
        BoundAsk::LargestPressure(height) => Bound::Upper(*head).at(height),
        BoundAsk::PressureAtDensity(density, height) => one_liquid(head, density).at(height),
    }
}

/// One liquid whose pressure at the sensor is the reading.
fn one_liquid(head: &Head, density: f64) -> Liquid {
    let excess = head.pressure_pa.high - head.gas_pa.high;
    let surface_m = head.at_m + excess / (density * head.gravity_m_s2);
    let layers = vec![Layer { surface_m, density_kg_m3: density }];
    Liquid { gravity_m_s2: head.gravity_m_s2, gas_pa: head.gas_pa.high, layers, outside: None }
}

/// The lightest liquid of the band over the heaviest, with the reading at the sensor.
fn two_layers(head: &Head, interface: f64) -> Liquid {
    let band = head.density_kg_m3;
    if interface <= head.at_m {
        let mut state = one_liquid(head, band.low);
        state.layers.push(Layer { surface_m: interface, density_kg_m3: band.high });
        return state;
    }
    let mut state = one_liquid(head, band.high);
    let surface = state.surface_m();
    if surface > interface {
        // Above the interface the same pressure carries a taller column of the lighter liquid.
        let surface_m = interface + (surface - interface) * band.high / band.low;
        state.layers = vec![
            Layer { surface_m, density_kg_m3: band.low },
            Layer { surface_m: interface, density_kg_m3: band.high },
        ];
    }
    state
}
