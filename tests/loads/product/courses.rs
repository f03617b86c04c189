//! Courses: required thickness, stress and remaining life, as `assess` and `rerate` give them.

use super::file::Tank;
use strake_oracle::cases::{Reason, Row};
use strake_oracle::liquid::Liquid;

const UNREAD: Reason = "inputs not understood";

/// A tank with one course whose plate is known.
struct Course<'a> {
    diameter_m: f64,
    design_point: &'a str,
    rule: Option<&'a str>,
    plate: Plate,
    rate_m_per_year: Option<f64>,
}

#[derive(Clone, Copy)]
struct Plate {
    thickness_m: f64,
    stress_pa: f64,
    joint_efficiency: f64,
}

impl Course<'_> {
    fn tank(&self, liquid: &Liquid) -> Tank {
        let height_m = liquid.surface_m().max(1.0);
        let Plate { thickness_m, stress_pa, joint_efficiency } = self.plate;
        let rule = self.rule.map_or(String::new(), |rule| format!("rule = \"{rule}\"\n"));
        let rate = self.rate_m_per_year.map_or(String::new(), |rate| {
            format!("corrosion_rate = \"{:?} mm/year\"\n", 1e3 * rate)
        });
        let rest = format!(
            "[[course]]\nname = \"course\"\nbottom = \"0 m\"\nheight = \"{height_m:?} m\"\n\
             design_point = \"{}\"\n{rule}{rate}capacity = [{{ plate = {{ \
             thickness = \"{thickness_m:?} m\", corrosion_allowance = \"0 mm\", \
             allowable_stress = \"{stress_pa:?} Pa\", joint_efficiency = {joint_efficiency:?} \
             }}, basis = \"drawing\" }}]\n",
            self.design_point
        );
        let vessel = format!(
            "cylinder = {{ diameter = \"{:?} m\", height = \"{height_m:?} m\" }}",
            self.diameter_m
        );
        Tank { vessel, ..Tank::of(liquid, rest) }
    }
}

/// Rows that name a rule.
pub(super) fn rule(row: &Row) -> Result<f64, Reason> {
    match row.get("rule") {
        Some("API653_4.3.3.1") if row.is("quantity", "t_min") => required(row),
        Some("API653_4.3.3.1" | "API650_5.6.2") => {
            Err("allowable stresses are stated by the engineer, not worked out")
        }
        Some("thin_hoop") => hoop(row),
        _ => Err(UNREAD),
    }
}

/// Thickness by the one-foot method with the floor of the rule; the arithmetic is exact, the
/// rule's constant is 0.05 % below.
fn required(row: &Row) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let plate =
        Plate { thickness_m: 0.02, stress_pa: number("S_Pa")?, joint_efficiency: number("E")? };
    let course = Course {
        diameter_m: number("D_m")?,
        design_point: "1 ft",
        rule: Some("API 653 4.3.3.1"),
        plate,
        rate_m_per_year: None,
    };
    let tank = course.tank(&Liquid::uniform(1000.0 * number("G")?, number("H_m")?));
    let document = tank.rerated();
    let thickness = document.parts.first().and_then(|part| part.thickness.as_ref());
    thickness.map(|one| one.new.required_m).ok_or("no thickness is given")
}

/// Thin hoop: the thickness for a state, and the stress as the share of an allowable one.
fn hoop(row: &Row) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let liquid = if let Some(gas_pa) = row.number("p_Pa") {
        Liquid::uniform(1000.0, 0.0).with_gas(gas_pa)
    } else {
        let level_m = number("head_m")?;
        let gravity_m_s2 = Liquid::uniform(1000.0, level_m).gravity_m_s2;
        Liquid::uniform(number("gamma_N_m3")? / gravity_m_s2, level_m)
    };
    let stress_pa = row.number("S_Pa").unwrap_or(100e6);
    let thickness_m = row.number("t_m").unwrap_or(0.02);
    let course = Course {
        diameter_m: number("D_m")?,
        design_point: "0 m",
        rule: None,
        plate: Plate { thickness_m, stress_pa, joint_efficiency: 1.0 },
        rate_m_per_year: None,
    };
    let sheet = course.tank(&liquid).sheet();
    let judged = &sheet.parts.first().ok_or("no part")?.judgement;
    match row.quantity() {
        "t" => judged.thickness_for_state_m.ok_or("no thickness is given"),
        "sigma" => {
            let share = judged.utilisation.ok_or("no utilisation is given")?;
            Ok(f64::from(share) * stress_pa)
        }
        _ => Err(UNREAD),
    }
}

/// Remaining life; the required thickness comes from a gas pressure that asks for it.
pub(super) fn life(row: &Row) -> Result<f64, Reason> {
    const STRESS_PA: f64 = 100e6;
    match row.quantity() {
        "remaining_life" => {}
        "months" => return Err("a life is given in years, and as a date"),
        _ => return Err("the rate is stated by the engineer, not worked out of two surveys"),
    }
    let rate_m_per_year = row.number("rate_m_per_yr").or_else(|| row.number("rate_m_per_year"));
    let spare = row.number("t_margin_m");
    let now_m = row.number("t_actual_m").or(spare.map(|spare| spare + 0.005)).ok_or(UNREAD)?;
    let required_m = row.number("t_required_m").or(spare.map(|_| 0.005)).ok_or(UNREAD)?;
    let diameter_m = 2.0;
    let gas_pa = required_m * STRESS_PA / (0.5 * diameter_m);
    let course = Course {
        diameter_m,
        design_point: "0 m",
        rule: None,
        plate: Plate { thickness_m: now_m, stress_pa: STRESS_PA, joint_efficiency: 1.0 },
        rate_m_per_year: Some(rate_m_per_year.ok_or(UNREAD)?),
    };
    let document = course.tank(&Liquid::uniform(1000.0, 0.0).with_gas(gas_pa)).rerated();
    let thickness = document.parts.first().and_then(|part| part.thickness.as_ref());
    let life = thickness.and_then(|one| one.new.remaining_life.as_ref());
    life.and_then(|life| life.to_retirement_years).ok_or("no life is given")
}
