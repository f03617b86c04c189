use proptest::prelude::*;

use super::{Quantity as Q, UnitError, format_si, format_us, parse, table};

/// Texts with the value that NIST SP 811 (2008), appendix B.8, prints for the unit.
const PUBLISHED: &[(&str, Q, f64)] = &[
    ("1 psi", Q::Pressure, 6.894_757e3),
    ("1 ksi", Q::Pressure, 6.894_757e6),
    ("1 psf", Q::Pressure, 4.788_026e1),
    ("1 inH2O", Q::Pressure, 2.490_889e2),
    ("1 ftH2O", Q::Pressure, 2.989_067e3),
    ("1 mmH2O", Q::Pressure, 9.806_65),
    ("1 mbar", Q::Pressure, 1e2),
    ("1 lbf", Q::Force, 4.448_222),
    ("1 kip", Q::Force, 4.448_222e3),
    ("1 kgf", Q::Force, 9.806_65),
    ("1 lbf/ft", Q::LineLoad, 1.459_390e1),
    ("1 lbf/in", Q::LineLoad, 1.751_268e2),
    ("1 lbf ft", Q::Moment, 1.355_818),
    ("1 lbf in", Q::Moment, 1.129_848e-1),
    ("1 lb/ft3", Q::Density, 1.601_846e1),
    ("1 lb/US gal", Q::Density, 1.198_264e2),
    ("1 lb/imp gal", Q::Density, 9.977_637e1),
    ("1 US gal", Q::Volume, 3.785_412e-3),
    ("1 imp gal", Q::Volume, 4.546_09e-3),
    ("1 ft3", Q::Volume, 2.831_685e-2),
    ("1 bbl", Q::Volume, 1.589_873e-1),
    ("1 US gal/min", Q::Flow, 6.309_020e-5),
    ("1 lb", Q::Mass, 4.535_924e-1),
    ("1 mil", Q::Length, 2.54e-5),
    ("1 ft/min", Q::Speed, 5.08e-3),
    ("1 ft/h", Q::Speed, 8.466_667e-5),
    ("1 ft/s2", Q::Acceleration, 3.048e-1),
];

#[test]
fn factors_are_the_published_ones() {
    for &(text, quantity, expected) in PUBLISHED {
        let got = parse(text, quantity).unwrap();
        assert!((got / expected - 1.0).abs() < 5e-7, "{text}: {got} against {expected}");
    }
}

#[test]
fn decimals_are_rounded_once() {
    let exact = [
        ("8.0 m", Q::Length, 8.0),
        ("4.6 mm", Q::Length, 0.0046),
        ("26 ft 3 in", Q::Length, 8.001),
        ("-1 ft 6 in", Q::Length, -0.4572),
        ("1 ft", Q::Length, 0.3048),
        ("3/8 in", Q::Length, 0.009_525),
        ("5 1/2 in", Q::Length, 0.1397),
        ("1280 kg/m3", Q::Density, 1280.0),
        ("1280 kg/m³", Q::Density, 1280.0),
        ("1280 kg / m^3", Q::Density, 1280.0),
        ("1.28 g/cm3", Q::Density, 1280.0),
        ("SG 1.2", Q::Density, 1200.0),
        ("1.2 SG", Q::Density, 1200.0),
        ("RD 0.95", Q::Density, 950.0),
        ("0.5 %", Q::Ratio, 0.005),
        ("20 degC", Q::Temperature, 20.0),
        ("−20 °C", Q::Temperature, -20.0),
        ("212 degF", Q::Temperature, 100.0),
        ("-40 °F", Q::Temperature, -40.0),
        ("1 K", Q::TemperatureDifference, 1.0),
        ("4.0e-4 /K", Q::PerKelvin, 4.0e-4),
        ("4.0e-4 1/K", Q::PerKelvin, 4.0e-4),
        ("5 /degF", Q::PerKelvin, 9.0),
        ("0.2 mm/s", Q::Speed, 0.0002),
        ("31.536 mm/year", Q::Speed, 1e-9),
        ("15 min", Q::Time, 900.0),
        ("137 MPa", Q::Pressure, 137e6),
        ("137 N/mm²", Q::Pressure, 137e6),
        ("419 kN/m", Q::LineLoad, 419e3),
        ("18 kN", Q::Force, 18e3),
        ("250 N m", Q::Moment, 250.0),
        ("250 N·m", Q::Moment, 250.0),
        ("12 mA", Q::Current, 0.012),
        ("19 Ah", Q::Charge, 68_400.0),
        ("12 V", Q::Voltage, 12.0),
        ("59.9 deg", Q::AngleDegrees, 59.9),
        ("59.9°", Q::AngleDegrees, 59.9),
        ("9.80665 m/s2", Q::Acceleration, 9.80665),
        ("+.5 m", Q::Length, 0.5),
        ("26' 3\"", Q::Length, 8.001),
        ("26'3\"", Q::Length, 8.001),
        ("26\u{2032} 3\u{2033}", Q::Length, 8.001),
        ("5' 4 1/2\"", Q::Length, 1.6383),
        ("-2'", Q::Length, -0.6096),
        ("3/8\"", Q::Length, 0.009_525),
        ("2 kPa(g)", Q::Pressure, 2e3),
        ("2 kPag", Q::Pressure, 2e3),
        ("2 kPa g", Q::Pressure, 2e3),
        ("0.5 barg", Q::Pressure, 5e4),
        ("-3 mbar gauge", Q::Pressure, -300.0),
        ("1 kgf/cm2", Q::Pressure, 98_066.5),
        ("1 t/m2", Q::Pressure, 9806.65),
        ("2 mmWC", Q::Pressure, 19.6133),
        ("101.325 kPa(a)", Q::AbsolutePressure, 101_325.0),
        ("1 bara", Q::AbsolutePressure, 1e5),
        ("97 kPa", Q::AbsolutePressure, 97e3),
        ("1.28 t/m³", Q::Density, 1280.0),
        ("8m", Q::Length, 8.0),
    ];
    for (text, quantity, expected) in exact {
        assert_eq!(parse(text, quantity), Ok(expected), "{text}");
    }
}

#[test]
fn every_mistake_has_its_error() {
    let missing = UnitError::MissingUnit { quantity: Q::Length };
    assert_eq!(parse("8.0", Q::Length), Err(missing));
    assert_eq!(parse("  ", Q::Length), Err(UnitError::Empty));
    assert_eq!(parse("NaN m", Q::Length), Err(UnitError::NotFinite));
    assert_eq!(parse("-inf m", Q::Length), Err(UnitError::NotFinite));
    assert_eq!(parse("1e999 m", Q::Length), Err(UnitError::NotFinite));
    assert_eq!(parse("1e308 GPa", Q::Pressure), Err(UnitError::NotFinite));
    assert_eq!(parse("1/0 in", Q::Length), Err(UnitError::ZeroDenominator));
    let not = UnitError::NotANumber { text: "about".to_owned() };
    assert_eq!(parse("about 8 m", Q::Length), Err(not));
    let comma = UnitError::Separator { text: "1,280".to_owned() };
    assert_eq!(parse("1,280 kg/m3", Q::Density), Err(comma));
    let inches = UnitError::InchesOutOfRange { inches: "12".to_owned() };
    assert_eq!(parse("5 ft 12 in", Q::Length), Err(inches));
    let wrong =
        UnitError::WrongDimension { unit: "kg".to_owned(), found: Q::Mass, wanted: Q::Density };
    assert_eq!(parse("1280 kg", Q::Density), Err(wrong));
    assert!(matches!(parse("5 ft 3 in", Q::Time), Err(UnitError::WrongDimension { .. })));
}

#[test]
fn gauge_is_not_absolute() {
    for text in ["15.7 psia", "103 kPa(a)", "1.02 bar a", "103 kPa abs", "1 bara"] {
        let error = parse(text, Q::Pressure).unwrap_err();
        assert!(matches!(error, UnitError::Absolute { .. }), "{text}: {error}");
        assert!(error.to_string().contains("subtract the pressure of the air"), "{error}");
    }
    let error = parse("1 psig", Q::AbsolutePressure).unwrap_err();
    let remedy = "add the pressure of the air at the site and write the sum in psi(a)";
    assert!(error.to_string().ends_with(remedy), "{error}");
    // A mark is one of pressures only.
    assert!(matches!(parse("3 mg", Q::Length), Err(UnitError::UnknownUnit { .. })));
}

/// Relative densities at 60 degF; common practice, from memory.
#[test]
fn hydrometers_give_densities_at_60_degf() {
    let relative = |text: &str| parse(text, Q::Density).unwrap() / 999.016;
    for (text, expected) in [
        ("50 Baume heavy", 1.5263),
        ("50 °Bé (heavy)", 1.5263),
        ("0 degBe heavy", 1.0),
        ("10 Baume light", 1.0),
        ("40 degrees Baume, light", 0.8235),
        ("35 degAPI", 0.8498),
        ("35 °API", 0.8498),
        ("10 API", 1.0),
        ("60 degTw", 1.3),
        ("60 Twaddell", 1.3),
        ("60 °Tw", 1.3),
    ] {
        assert!((relative(text) - expected).abs() < 5e-5, "{text}: {}", relative(text));
    }
    assert!(matches!(parse("50 Baume", Q::Density), Err(UnitError::TwoScales { .. })));
    assert!(matches!(parse("145 Baume heavy", Q::Density), Err(UnitError::OffScale { .. })));
    assert!(matches!(parse("-131.5 degAPI", Q::Density), Err(UnitError::OffScale { .. })));
    assert!(matches!(parse("35 degAPI", Q::Length), Err(UnitError::WrongDimension { .. })));
}

/// Slips that public pages print: the right figures stand beside them; published pages, common
/// practice.
#[test]
fn slips_of_published_pages_come_out_right() {
    let density = |text: &str| parse(text, Q::Density).unwrap();
    let near = |got: f64, right: f64, within: f64| assert!((got - right).abs() < within, "{got}");
    // Water at 8.24 lb/gal; it is 8.345 to the US and 10.022 to the imperial gallon.
    near(1000.0 / density("1 lb/US gal"), 8.345, 5e-4);
    near(1000.0 / density("1 lb/imperial gal"), 10.022, 5e-4);
    // 0.424, 0.443 and 0.5 psi per foot; it is 0.4331 at 62.37 lb/ft3.
    let psi = parse("1 psi", Q::Pressure).unwrap();
    let foot = parse("1'", Q::Length).unwrap();
    near(density("62.37 lb/ft3") * 9.80665 * foot / psi, 0.4331, 5e-5);
    // 346 psi under 25 ft of water: pounds of mass times g, read as pounds of force.
    near(density("62.37 lb/ft3") * 9.80665 * 25.0 * foot / psi, 10.83, 5e-3);
    near(density("62.37 lb/ft3") * 9.80665 * 25.0 * foot, 74.66e3, 5.0);
    // 11 and 12.5 and 15.8 lb/gal of fertiliser.
    near(density("11 lb/US gal"), 1318.1, 0.05);
    near(density("11 lb/imp gal"), 1097.5, 0.05);
    near(density("12.5 lb/US gal"), 1497.8, 0.05);
    near(density("15.8 lb/US gal"), 1893.3, 0.05);
    // A round cover of 1.0 m under 9.2 m of a liquid of 950: in tonnes-force.
    let t_m2 = parse("1 t/m2", Q::Pressure).unwrap();
    let pressure = 950.0 * 9.80665 * 9.2;
    near(pressure / t_m2, 8.74, 5e-3);
    let force = pressure * std::f64::consts::FRAC_PI_4;
    near(force / 9806.65, 6.864, 5e-4);
    near(force, 67.32e3, 5.0);
}

#[test]
fn an_unknown_unit_names_the_nearest() {
    let near = |text, quantity| match parse(text, quantity) {
        Err(UnitError::UnknownUnit { nearest, .. }) => nearest,
        other => panic!("{text}: {other:?}"),
    };
    assert_eq!(near("137 mPa", Q::Pressure), Some("MPa"));
    assert_eq!(near("1280 kg/m", Q::Density), Some("kg/m3"));
    assert_eq!(near("11 lb/gal", Q::Density), Some("lb/US gal"));
    assert_eq!(near("8 metres", Q::Length), None);
    assert_eq!(near("15 mins", Q::Time), Some("min"));
}

#[test]
fn every_name_is_spelled_as_it_is_read_and_means_one_thing() {
    for (i, unit) in table::all().iter().enumerate() {
        for name in unit.names {
            let text = format!("1 {name}");
            assert!(parse(&text, unit.quantity).is_ok(), "{text}");
            let again = table::all().iter().skip(i + 1);
            let twin = again
                .filter(|other| other.quantity == unit.quantity)
                .any(|other| other.names.contains(name));
            assert!(!twin, "{name} stands twice");
        }
    }
}

#[test]
fn si_text_has_sensible_digits() {
    assert_eq!(format_si(8.6491, Q::Length), "8.649 m");
    assert_eq!(format_si(0.0046, Q::Length), "4.60 mm");
    assert_eq!(format_si(0.0, Q::Length), "0.000 m");
    assert_eq!(format_si(-0.000_04, Q::Density), "0.0 kg/m3");
    assert_eq!(format_si(112_962.0, Q::Pressure), "113.0 kPa");
    assert_eq!(format_si(137e6, Q::Pressure), "137.0 MPa");
    assert_eq!(format_si(-735.5, Q::Pressure), "-735.5 Pa");
    assert_eq!(format_si(419_220.0, Q::LineLoad), "419.2 kN/m");
    assert_eq!(format_si(900.0, Q::Time), "15.0 min");
    assert_eq!(format_si(0.0002, Q::Speed), "0.2000 mm/s");
    assert_eq!(format_si(0.5e-4 / 31_536_000.0, Q::Speed), "0.05000 mm/year");
    assert_eq!(format_si(9.80665, Q::Acceleration), "9.80665 m/s2");
    assert_eq!(format_si(0.925, Q::Ratio), "92.5 %");
    assert_eq!(format_si(0.0148, Q::Current), "14.80 mA");
}

#[test]
fn us_text_is_in_feet_and_eighths() {
    assert_eq!(format_us(8.001, Q::Length), "26 ft 3 in");
    assert_eq!(format_us(0.3048 + 0.0254 * 4.5, Q::Length), "1 ft 4 1/2 in");
    assert_eq!(format_us(0.3048 * 2.0 - 1e-6, Q::Length), "2 ft 0 in");
    assert_eq!(format_us(0.0254 * 0.25, Q::Length), "0.250 in");
    assert_eq!(format_us(-0.6096, Q::Length), "-2 ft 0 in");
    assert_eq!(format_us(6894.757, Q::Pressure), "1.000 psi");
    assert_eq!(format_us(1000.0, Q::Density), "62.43 lb/ft3");
    assert_eq!(format_us(20.0, Q::Temperature), "68.0 degF");
    assert_eq!(format_us(18_000.0, Q::Force), "4047 lbf");
}

#[test]
fn feet_of_water_and_pounds_per_gallon_come_out_in_si() {
    // 25 ft of water of 62.37 lb/ft3 press with 10.83 psi, 74.66 kPa.
    let depth = parse("25 ft", Q::Length).unwrap();
    let density = parse("62.37 lb/ft3", Q::Density).unwrap();
    let pressure = density * 9.80665 * depth;
    assert!((pressure - 74.66e3).abs() < 5.0);
    assert_eq!(format_us(pressure, Q::Pressure), "10.83 psi");
    // The two gallons are a fifth apart.
    assert_eq!(format_si(parse("11 lb/US gal", Q::Density).unwrap(), Q::Density), "1318.1 kg/m3");
    assert_eq!(format_si(parse("11 lb/imp gal", Q::Density).unwrap(), Q::Density), "1097.5 kg/m3");
}

proptest! {
    #[test]
    fn any_text_gives_a_value_or_an_error(text in "\\PC{0,24}") {
        for quantity in [Q::Length, Q::Density, Q::Pressure, Q::Temperature, Q::Ratio] {
            if let Ok(value) = parse(&text, quantity) {
                prop_assert!(value.is_finite());
            }
        }
    }

    #[test]
    fn a_written_value_reads_back_to_its_digits(value in 1e-2_f64..1e5) {
        for quantity in [Q::Length, Q::Force, Q::LineLoad, Q::Pressure, Q::Density, Q::Moment] {
            for text in [format_si(value, quantity), format_us(value, quantity)] {
                let again = parse(&text, quantity);
                prop_assert!(again.is_ok(), "{text}: {again:?}");
                // Four digits at least, or an eighth of an inch, or a tenth of the unit.
                let apart = (again.unwrap_or(f64::NAN) - value).abs();
                prop_assert!(apart <= 5.1e-4 * value + 0.1, "{text} for {value}");
            }
        }
    }
}
