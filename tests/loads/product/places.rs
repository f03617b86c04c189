//! Gravity at a place, volumes and densities, from the file to the device's table.

use super::file::{Tank, WALL, read};
use strake::assess::{Overrides, Request};
use strake::compile;
use strake_core::signal::{Channel, Sight, resolve};
use strake_oracle::cases::{Reason, Row, open_rows};
use strake_oracle::liquid::Liquid;

const UNREAD: Reason = "inputs not understood";

/// Files state a place; which ellipsoid is taken is the tool's choice.
pub(super) fn gravity(row: &Row) -> Result<f64, Reason> {
    let place = match (row.get("model"), row.number("latitude_deg")) {
        (Some("standard"), _) => String::new(),
        (Some("GRS80"), Some(latitude)) => at(latitude),
        // Three decimals do not tell the ellipsoids apart.
        (Some(_), Some(latitude)) if row.is("note", "3_decimals") => at(latitude),
        (Some("WGS84"), _) => return Err("another ellipsoid than GRS80"),
        (Some("GRS80_series_9.780327"), _) => {
            return Err("a series with a rounded value at the equator, not the closed formula");
        }
        _ => return Err(UNREAD),
    };
    let text = format!(
        "[tank]\nname = \"case\"\n{}[gas]\nvented = true\n{place}{WALL}",
        liquid("density = \"1000 kg/m3\"\nexpansion = \"none\"\n", 15.0, [10.0, 20.0])
    );
    Ok(read(&text).gravity.m_s2())
}

fn at(latitude_deg: f64) -> String {
    format!("[site]\nlatitude = \"{latitude_deg:?} deg\"\nelevation = \"0 m\"\n")
}

fn liquid(density: &str, at_c: f64, [cold_c, hot_c]: [f64; 2]) -> String {
    format!(
        "[liquid]\nname = \"liquid\"\n{density}temperature = \"{at_c:?} degC\"\n\
         range = [\"{cold_c:?} degC\", \"{hot_c:?} degC\"]\nuncertainty = \"0 %\"\n"
    )
}

/// Volume below a level by the vessel, or by a strapping table.
pub(super) fn volume(row: &Row) -> Result<f64, Reason> {
    let number = |key: &str| row.number(key).ok_or(UNREAD);
    let vessel = match (row.get("tank"), row.get("heads")) {
        (Some("horizontal"), Some("flat")) => format!(
            "lying = {{ diameter = \"{:?} m\", length = \"{:?} m\", heads = \"flat\" }}",
            number("D_m")?,
            number("L_m")?
        ),
        (Some("horizontal"), _) => return Err("heads other than flat ones are not offered"),
        (Some(_), _) => return Err("volumes of bottoms come from a strapping table"),
        (None, _) if row.is("rule", "strapping_table_linear") => format!(
            "strapping = [[\"0 m\", \"0 m3\"], [\"{:?} m\", \"{:?} m3\"], [\"{:?} m\", \"{:?} m3\"]]",
            number("h1_m")?,
            number("V1_m3")?,
            number("h2_m")?,
            number("V2_m3")?
        ),
        _ => return Err(UNREAD),
    };
    let tank = Tank { vessel, ..Tank::of(&Liquid::uniform(1000.0, 0.0), WALL.to_owned()) };
    tank.read().volume_m3(number("h_m")?).ok_or("no volume is given")
}

/// Published densities stated as a table: the sheet's density at the temperature of a row; the band
/// that the device takes by its temperature sensor holds it too.
///
/// The tool knows no liquid by itself, so what is held here is every step between the table and the
/// density that a load is taken with.
pub(super) fn density(row: &Row) -> Result<f64, Reason> {
    if row.has("VCF") {
        return Err("a mass in air by a factor read in a table is not given");
    }
    let celsius = |row: &Row| row.number("t_C").or_else(|| row.number("t68_C"));
    let at_c = celsius(row).ok_or(UNREAD)?;
    let same = |other: &Row| {
        other.topic == "density"
            && ["liquid", "rule", "S_psu"].iter().all(|key| other.get(key) == row.get(key))
    };
    let mut table: Vec<(f64, f64)> = open_rows()
        .iter()
        .filter(|other| same(other))
        .filter_map(|other| celsius(other).zip(other.expected.parse().ok()))
        .collect();
    table.sort_by(|a, b| a.0.total_cmp(&b.0));
    let [(cold_c, density), .., (hot_c, _)] = table[..] else {
        return Err("one published value makes no table");
    };
    let rows: Vec<String> =
        table.iter().map(|(t, rho)| format!("[\"{t:?} degC\", \"{rho:?} kg/m3\"]")).collect();
    // Counts of 1/16 K from 0 degC hold every temperature of the rows.
    let stated = format!(
        "density = \"{density:?} kg/m3\"\ndensity_table = [{}]\n\
         temperature_signal = {{ scale = \"0.0625 K\", uncertainty = \"0 K\" }}\n",
        rows.join(", ")
    );
    let of_file = liquid(&stated, cold_c, [cold_c, hot_c]);
    let text = format!("[tank]\nname = \"case\"\n{of_file}[gas]\nvented = true\n{WALL}{DEVICE}");
    let file = read(&text);
    let plan = compile::for_device(&file).unwrap_or_else(|e| panic!("{}", e.to_text(false))).plan;
    #[expect(clippy::cast_possible_truncation, reason = "sixteenths of counts of 1/16 K")]
    let count_16 = (at_c * 256.0).round() as i32;
    let mut sight = Sight::NONE;
    let level = Channel::good(4_000 * 16);
    let found = resolve(&plan, &mut sight, 0, level, Channel::good(count_16)).density;
    // The device keeps fewer rows and widens its band by what they leave out.
    let (low, high) = (f64::from(found.low_kg_m3), f64::from(found.high_kg_m3));
    let expected: f64 = row.expected.parse().map_err(|_| UNREAD)?;
    let last_bit = 1e-7 * expected;
    assert!(low - last_bit <= expected && expected <= high + last_bit, "{} {found:?}", row.id);
    assert!(high - low <= 3e-4 * expected, "{} {found:?}", row.id);
    let overrides = Overrides { temperature_c: Some(at_c), ..Overrides::default() };
    let request = Request::new(&file, overrides).map_err(|_| "no such state")?;
    Ok(request.contents.density_kg_m3())
}

/// What a device needs beside a liquid.
const DEVICE: &str = r#"
[fill]
closed = false
overflow = "2 m"
highest_rise = "0.1 mm/s"
highest_fall = "0.1 mm/s"
[level]
sensor = "innage"
at = "0 m"
signal = { current_loop = ["0 m", "4 m"] }
uncertainty = "10 mm"
failed_after = "60 s"
[alarm]
warn = { utilisation = 0.8, deadband = 0.02, on_delay = "10 s", off_delay = "60 s" }
alarm = { utilisation = 0.9, deadband = 0.02, on_delay = "5 s", off_delay = "60 s" }
response_time = "3 min"
sounds_again_after = "10 min"
[logging]
interval = "10 s"
idle_interval = "60 s"
flush_after = "60 s"
"#;
