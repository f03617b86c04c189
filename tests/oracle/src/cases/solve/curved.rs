//! Curved parts.

use std::f64::consts::{FRAC_PI_2, TAU};

use crate::cases::Reason;
use crate::cases::problem::{CurvedAsk, CurvedPart};
use crate::limit::{place_of_largest, root};
use crate::liquid::Liquid;
use crate::membrane::{Tensions, bowl, cone};
use crate::patch::{
    Meridian, Patch, Resultant, Wetted, arc, drawn, ellipsoid, frustum, resultant, triangle,
};
use crate::vector::norm;

/// The part as patches in space.
fn patches(part: &CurvedPart) -> Vec<Patch> {
    let sphere = |radius, centre, polar, turn| {
        vec![ellipsoid(radius, radius, centre, polar, turn, Wetted::Inside)]
    };
    match part {
        CurvedPart::Arc { radius, length, axis_m, angles_deg: (from, to), wetted } => {
            arc(*radius, *length, *axis_m, (from.to_radians(), to.to_radians()), *wetted)
        }
        CurvedPart::Cone { base_radius, height, apex_m } => {
            vec![frustum((0.0, *apex_m), (*base_radius, apex_m + height), Wetted::Inside)]
        }
        CurvedPart::Bowl { radius, equator_m } => {
            sphere(*radius, *equator_m, (-FRAC_PI_2, 0.0), (0.0, TAU))
        }
        CurvedPart::WallDome { radius, centre_m } => {
            let quarter = FRAC_PI_2;
            sphere(*radius, *centre_m, (-quarter, quarter), (-quarter, quarter))
        }
        CurvedPart::FloorDome { radius, base_m, hole_diameter } => {
            let rim = (0.5 * hole_diameter / radius).acos();
            sphere(*radius, *base_m, (0.0, rim), (0.0, TAU))
        }
        CurvedPart::CubicProfile { constant, height, length } => {
            let a = *constant;
            let profile =
                move |x: f64| Meridian { r: x, z: x.powi(3) / a, dr: 1.0, dz: 3.0 * x * x / a };
            vec![drawn((0.0, (a * height).cbrt()), *length, profile)]
        }
        CurvedPart::Mesh { triangles } => {
            triangles.iter().flat_map(|corners| triangle(*corners)).collect()
        }
    }
}

pub(super) fn answer(part: &CurvedPart, liquid: &Liquid, ask: &CurvedAsk) -> Result<f64, Reason> {
    let surface = patches(part);
    let found = resultant(&surface, liquid, [0.0; 3]);
    let [x, y, z] = found.force_n;
    let z_at =
        |level: f64| resultant(&surface, &liquid.clone().filled_to(level), [0.0; 3]).force_n[2];
    match *ask {
        CurvedAsk::X => Ok(x),
        CurvedAsk::Z => Ok(z),
        CurvedAsk::Horizontal => Ok(x.hypot(y)),
        CurvedAsk::Vertical => Ok(z.abs()),
        CurvedAsk::Resultant => Ok(norm(found.force_n)),
        CurvedAsk::AngleFromHorizontal => Ok(z.abs().atan2(x.hypot(y)).to_degrees()),
        CurvedAsk::AngleFromVertical => Ok(x.hypot(y).atan2(z.abs()).to_degrees()),
        CurvedAsk::HorizontalDepth => Ok(liquid.surface_m() - line_height(&found)),
        CurvedAsk::HorizontalBelow(height) => Ok(height - line_height(&found)),
        CurvedAsk::VerticalLine => Ok((found.x_of_fz_nm / z).abs()),
        CurvedAsk::MomentAboutY(point) => Ok(resultant(&surface, liquid, point).moment_nm[1]),
        CurvedAsk::PerBolt { weight_n, bolts } => Ok((z - weight_n) / bolts),
        CurvedAsk::LargestZ(level) => {
            let lowest = lowest(part);
            Ok(z_at(place_of_largest(lowest, level, 200, z_at)))
        }
        CurvedAsk::ZeroZLevel(low, high) => root(low, high, z_at).ok_or("force keeps its sign"),
        CurvedAsk::LargestHoop
        | CurvedAsk::LargestMeridional
        | CurvedAsk::HoopAt(_)
        | CurvedAsk::MeridionalAt(_)
        | CurvedAsk::RimPull => tension(part, liquid, ask),
    }
}

fn line_height(found: &Resultant) -> f64 {
    found.z_of_fx_nm / found.force_n[0]
}

fn lowest(part: &CurvedPart) -> f64 {
    match part {
        CurvedPart::Arc { radius, axis_m, .. } => axis_m - radius,
        _ => 0.0,
    }
}

fn tension(part: &CurvedPart, liquid: &Liquid, ask: &CurvedAsk) -> Result<f64, Reason> {
    match *part {
        CurvedPart::Cone { base_radius, height, apex_m } => {
            let at = |y: f64| cone(base_radius, height, apex_m, y, liquid);
            let largest = |pick: fn(&Tensions) -> f64| {
                let place = place_of_largest(1e-6 * height, height, 60, |y| pick(&at(y)));
                pick(&at(place))
            };
            match ask {
                CurvedAsk::LargestHoop => Ok(largest(|t| t.hoop_n_m)),
                CurvedAsk::LargestMeridional => Ok(largest(|t| t.meridional_n_m)),
                CurvedAsk::RimPull => {
                    let sine = base_radius / base_radius.hypot(height);
                    Ok(at(height).meridional_n_m * sine)
                }
                _ => Err("not asked of a cone"),
            }
        }
        CurvedPart::Bowl { radius, equator_m } => {
            let at = |angle: f64| bowl(radius, equator_m, angle.to_radians(), liquid);
            match *ask {
                CurvedAsk::HoopAt(angle) => Ok(at(angle).hoop_n_m),
                CurvedAsk::MeridionalAt(angle) => Ok(at(angle).meridional_n_m),
                _ => Err("not asked of a bowl"),
            }
        }
        _ => Err("no membrane tension of this part"),
    }
}
