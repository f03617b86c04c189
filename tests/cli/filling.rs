//! The time to limit at an inflow that is given.

use crate::figures::near;
use crate::tank_text::TankText;
use crate::{document, run};

/// A basin of 10 m2 whose wall, a metre wide, carries what water makes of 6 m.
fn basin() -> TankText {
    let force_n = 1000.0 * 9.806_65 * 6.0 * 6.0 / 2.0;
    TankText::new(&format!(
        "[tank]\nname = \"basin\"\nbox = {{ length = \"10 m\", width = \"1 m\", height = \"8 m\" }}\n\
         [liquid]\nname = \"water\"\ndensity = \"1000 kg/m3\"\ntemperature = \"20 degC\"\n\
         range = [\"5 degC\", \"35 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n\
         [gas]\nvented = true\n[[panel]]\nname = \"wall\"\nslope = \"90 deg\"\nbottom = \"0 m\"\n\
         shape = {{ rectangle = {{ width = \"1 m\", length = \"8 m\" }} }}\n\
         capacity = [ {{ force = \"{force_n} N\", basis = \"drawing\" }} ]\n"
    ))
}

/// Half a metre an hour from 4 m: four hours. The force, carried on in a straight line, would be
/// at its capacity after five.
#[test]
fn a_wall_is_reached_by_its_level_not_by_its_load() {
    let tank = basin();
    let asked = ["assess", &tank.path(), "--level", "4 m", "--inflow", "5 m3/h"];
    let (_, found) = document(&asked);
    let filling = &found["filling"];
    assert_eq!(filling["state"], "filling");
    near(&filling["inflow_m3_s"], 5.0 / 3600.0, 1e-12);
    for way in ["to_limit", "to_bound"] {
        near(&filling[way]["level_m"], 6.0, 1e-5);
        near(&filling[way]["volume_m3"], 20.0, 1e-4);
        near(&filling[way]["time_s"], 4.0 * 3600.0, 0.1);
    }
    let text = run(&asked).stdout;
    assert!(text.contains("Time to limit at an inflow of"), "{text}");
    let at_limit = document(&["assess", &tank.path(), "--level", "7 m", "--inflow", "5 m3/h"]).1;
    near(&at_limit["filling"]["to_limit"]["time_s"], 0.0, 0.0);
}

/// 20 m3/h into a drum of 2.4 by 6 m, from 1.5 to 2.2 m: 24.65 min. The rate of the level where it
/// begins gives 29.28: late.
#[test]
fn a_drum_narrows_towards_its_top() {
    let tank = TankText::example("wine_drum", |text| text.replace("\"2.3 m\"", "\"2.2 m\""));
    let asked = ["assess", &tank.path(), "--level", "1.5 m", "--inflow", "20 m3/h"];
    let (_, found) = document(&asked);
    let way = &found["filling"]["to_overflow"];
    near(&way["level_m"], 2.2, 1e-12);
    near(&way["time_s"], 24.65 * 60.0, 0.3);
}

#[test]
fn nothing_that_flows_in_is_a_state_of_its_own() {
    let tank = basin();
    for inflow in ["0 m3/h", "-3 m3/h"] {
        let asked = ["assess", &tank.path(), "--level", "4 m", "--inflow", inflow];
        let (status, found) = document(&asked);
        assert_eq!((status, &found["filling"]["state"]), (0, &"not_filling".into()));
        assert!(found["filling"]["to_limit"]["time_s"].is_null());
        let text = run(&asked).stdout;
        assert!(text.contains("not filling: 20.00 m3 up to 6.000 m"), "{text}");
    }
}

#[test]
fn the_response_time_is_held_against_it() {
    let ask = |inflow: &str| {
        let asked =
            ["assess", "configs/brine_day_tank.toml", "--level", "7.2 m", "--inflow", inflow];
        document(&asked).1["filling"].clone()
    };
    // The highest rise of the file: 0.2 mm/s on 8 m.
    let filling = ask("36.19 m3/h");
    assert_eq!(filling["enough"], true);
    near(&filling["response_time_s"], 900.0, 0.0);
    let area_m2 = std::f64::consts::PI * 16.0;
    let alarm_m = filling["to_alarm"]["level_m"].as_f64().unwrap();
    near(&filling["to_alarm"]["volume_m3"], area_m2 * (alarm_m - 7.2), 1e-6);
    assert_eq!(ask("150 m3/h")["enough"], false);
}

#[test]
fn loose_parts_have_no_volume() {
    let tank = TankText::new(
        &std::fs::read_to_string(basin().path())
            .unwrap()
            .replace("box = { length = \"10 m\", width = \"1 m\", height = \"8 m\" }\n", ""),
    );
    let ran = run(&["assess", &tank.path(), "--level", "4 m", "--inflow", "5 m3/h"]);
    assert_eq!(ran.status, 2, "{}", ran.stdout);
    assert!(ran.stderr.contains("the file describes no volume"), "{}", ran.stderr);
}
