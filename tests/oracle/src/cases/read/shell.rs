//! Rows about courses of upright tanks.

use crate::cases::problem::{CourseAsk, Plate, Problem, Rule};
use crate::cases::{Reason, Row};

use super::{UNREAD, first_word, liquid};

/// Pascals to a pound-force per square inch (NIST SP 811, B.8).
const PSI_PA: f64 = 6_894.757_293_168_36;

pub(super) fn problem(row: &Row) -> Result<Problem, Reason> {
    match row.get("rule") {
        Some("API653_4.3.3.1") if row.is("quantity", "t_min") => course_thickness(row),
        Some("API653_4.3.3.1") => {
            let (of_yield, of_tensile) = match row.quantity() {
                "S_lower_two_courses" => (0.80, 0.429),
                "S_other_courses" => (0.88, 0.472),
                _ => return Err(UNREAD),
            };
            smaller_share(row, of_yield, of_tensile)
        }
        Some("API650_5.6.2") => match row.quantity() {
            "Sd" => smaller_share(row, 2.0 / 3.0, 2.0 / 5.0),
            "St" => smaller_share(row, 3.0 / 4.0, 3.0 / 7.0),
            _ => Err(UNREAD),
        },
        Some("thin_hoop") => thin_hoop(row),
        Some(_) => Err(UNREAD),
        None => course(row),
    }
}

fn course_thickness(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    Ok(Problem::Rule(Rule::CourseThickness {
        diameter_ft: number("D_ft")?,
        height_ft: number("H_ft")?,
        specific_gravity: number("G")?,
        stress_psi: number("S_psi")?,
        joint_efficiency: number("E")?,
        floor_m: number("floor_m")?,
    }))
}

fn smaller_share(row: &Row, of_yield: f64, of_tensile: f64) -> Result<Problem, Reason> {
    let (yield_psi, tensile_psi) = row.number("Fy_psi").zip(row.number("Fu_psi")).ok_or(UNREAD)?;
    let (yield_pa, tensile_pa) = (yield_psi * PSI_PA, tensile_psi * PSI_PA);
    Ok(Problem::Rule(Rule::SmallerShare { yield_pa, tensile_pa, of_yield, of_tensile }))
}

fn thin_hoop(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let head = row.number("head_m").zip(row.number("gamma_N_m3")).map(|(h, weight)| h * weight);
    let pressure_pa = row.number("p_Pa").or(head).ok_or(UNREAD)?;
    let diameter_m = number("D_m")?;
    Ok(Problem::Rule(match row.quantity() {
        "t" => Rule::HoopThickness { pressure_pa, diameter_m, stress_pa: number("S_Pa")? },
        "sigma" => Rule::HoopStress { pressure_pa, diameter_m, thickness_m: number("t_m")? },
        _ => return Err(UNREAD),
    }))
}

fn course(row: &Row) -> Result<Problem, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let ask = match first_word(row) {
        "hoop_tension" => CourseAsk::Tension,
        "utilisation" => CourseAsk::Utilisation,
        "permitted" | "limit_level" => CourseAsk::LimitLevel,
        "thickness" => CourseAsk::Thickness,
        _ => return Err(UNREAD),
    };
    let plate = Plate {
        thickness_m: 1e-3 * row.number_or_zero("thickness_mm"),
        allowance_m: 1e-3 * row.number_or_zero("corrosion_allowance_mm"),
        allowable_pa: 1e6 * row.number_or_zero("allowable_MPa"),
        joint_efficiency: row.number("joint_efficiency").unwrap_or(1.0),
    };
    let at_m = number("course_bottom_m")? + row.number_or_zero("design_point_m");
    Ok(Problem::Course { diameter_m: number("D_m")?, at_m, liquid: liquid(row)?, plate, ask })
}
