//! Quantities: factors against their definitions, round trips, what people write, and what is refused.
//!
//! Definitions are those of NIST Special Publication 811 (2008), appendix B, from memory of its exact entries:
//! 1 in = 0.0254 m, 1 ft = 0.3048 m, 1 lb = 0.453 592 37 kg, standard gravity 9.806 65 m/s2, 1 bar = 1e5 Pa,
//! 1 barrel (42 US gallons) = 0.158 987 294 928 m3, 1 lbf/in2 = 6894.757 293 168 Pa.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use proptest::prelude::*;
use wane::units::{Dimension, Scale, UnitSystem, parse, parse_flow_coefficient, parse_number, units, units_of};

const ATMOSPHERE_PSIA: f64 = 14.696;

fn read(text: &str, dimension: Dimension) -> f64 {
    parse(text, dimension, ATMOSPHERE_PSIA).unwrap_or_else(|error| panic!("{text}: {error}"))
}

fn near(what: &str, found: f64, expected: f64, relative: f64) {
    assert!((found / expected - 1.0).abs() <= relative, "{what}: {found} is not {expected}");
}

#[test]
fn factors_follow_from_the_definitions() {
    use Dimension as D;
    // Published figures have 13 digits, so nothing beyond 1e-12 can be asked of them.
    let published = 1.0e-12;
    near("psi in Pa", 1.0e3 / read("1 kPa", D::Pressure), 6_894.757_293_168, published);
    near("bar", read("1 bar", D::Pressure), 1.0e5 / 6_894.757_293_168, published);
    near("MPa", read("1 MPa", D::Pressure), 1.0e6 / 6_894.757_293_168, published);
    near("atm", read("1 atm", D::Pressure), 101_325.0 / 6_894.757_293_168, published);
    near("m in ft", read("0.3048 m", D::Length), 1.0, published);
    near("mm in in", read("25.4 mm", D::Diameter), 1.0, published);
    near("in in ft", read("12 in", D::Length), 1.0, published);
    near("Sm3 in scf", read("1 Sm3", D::GasVolume), 1.0 / 0.028_316_846_592, published);
    near("kg/m3", read("1 kg/m3", D::Density), 0.028_316_846_592 / 0.453_592_37, published);
    near("1/bar", read("1 1/bar", D::Compressibility), 6_894.757_293_168 / 1.0e5, published);
    near("kPa/m", read("1 kPa/m", D::PressureGradient), 1.0e3 / 6_894.757_293_168 * 0.3048, published);
    near("bar/m", read("1 bar/m", D::PressureGradient), 1.0e5 / 6_894.757_293_168 * 0.3048, published);
    // The program's barrel is 5.614583 ft3 by its conventions, 6e-8 below the defined one.
    let barrel = 1.0e-7;
    near("Sm3 in STB", read("0.158987294928 Sm3", D::LiquidVolume), 1.0, barrel);
    near("Sm3/d", read("0.158987294928 Sm3/d", D::LiquidRate), 1.0, barrel);
    near("Sm3/Sm3", read("1 Sm3/Sm3", D::GasOilRatio), 0.158_987_294_928 / 0.028_316_846_592, barrel);
    let index = 6_894.757_293_168 / 1.0e5 / 0.158_987_294_928;
    near("Sm3/d/bar", read("1 Sm3/d/bar", D::ProductivityIndex), index, barrel);
}

/// Every unit but those of temperature and oil gravity, which have tests of their own, in units of the SI.
#[test]
fn every_factor_is_that_of_the_definition() {
    use Dimension as D;
    let (foot, inch, pound) = (0.3048_f64, 0.0254_f64, 0.453_592_37_f64);
    let psi = pound * 9.806_65 / (inch * inch);
    let (cubic_foot, day, year) = (foot.powi(3), 86_400.0, 365.2425 * 86_400.0);
    // 9702 cubic inches.
    let barrel = 9702.0 * inch.powi(3);
    let kilo = 1.0e3;
    // The Btu of the international steam tables (NIST SP 811).
    let btu = 1_055.055_852_62;
    let table: Vec<(D, Vec<(&str, f64)>)> = vec![
        (
            D::Pressure,
            vec![
                ("psia", psi),
                ("psig", psi),
                ("bar", 1e5),
                ("barg", 1e5),
                ("kPa", 1e3),
                ("kPag", 1e3),
                ("MPa", 1e6),
                ("MPag", 1e6),
                ("atm", 101_325.0),
                ("kgf/cm2", 98_066.5),
            ],
        ),
        (D::PressureDifference, vec![("psi", psi), ("bar", 1e5), ("kPa", 1e3), ("MPa", 1e6)]),
        (D::Length, vec![("ft", foot), ("m", 1.0), ("km", kilo), ("in", inch)]),
        (
            D::Diameter,
            vec![
                ("in", inch),
                ("mm", 1e-3),
                ("cm", 1e-2),
                ("m", 1.0),
                ("ft", foot),
                ("/64 in", inch / 64.0),
                ("um", 1e-6),
            ],
        ),
        (
            D::LiquidVolume,
            vec![
                ("STB", barrel),
                ("MSTB", 1e3 * barrel),
                ("MMSTB", 1e6 * barrel),
                ("Sm3", 1.0),
                ("thousand Sm3", 1e3),
                ("million Sm3", 1e6),
            ],
        ),
        (
            D::GasVolume,
            vec![
                ("scf", cubic_foot),
                ("Mscf", 1e3 * cubic_foot),
                ("MMscf", 1e6 * cubic_foot),
                ("Bscf", 1e9 * cubic_foot),
                ("Sm3", 1.0),
                ("thousand Sm3", 1e3),
                ("million Sm3", 1e6),
            ],
        ),
        (
            D::LiquidRate,
            vec![
                ("STB/d", barrel / day),
                ("MSTB/d", 1e3 * barrel / day),
                ("Sm3/d", 1.0 / day),
                ("thousand Sm3/d", 1e3 / day),
            ],
        ),
        (
            D::GasRate,
            vec![
                ("scf/d", cubic_foot / day),
                ("Mscf/d", 1e3 * cubic_foot / day),
                ("MMscf/d", 1e6 * cubic_foot / day),
                ("Sm3/d", 1.0 / day),
                ("thousand Sm3/d", 1e3 / day),
                ("million Sm3/d", 1e6 / day),
            ],
        ),
        (
            D::GasOilRatio,
            vec![("scf/STB", cubic_foot / barrel), ("Mscf/STB", 1e3 * cubic_foot / barrel), ("Sm3/Sm3", 1.0)],
        ),
        (D::Viscosity, vec![("cp", 1e-3), ("mPa.s", 1e-3), ("Pa.s", 1.0)]),
        (D::Compressibility, vec![("1/psi", 1.0 / psi), ("1/bar", 1e-5), ("1/kPa", 1e-3), ("1/MPa", 1e-6)]),
        (D::PressureGradient, vec![("psi/ft", psi / foot), ("kPa/m", 1e3), ("bar/m", 1e5), ("bar/10m", 1e4)]),
        (
            D::ProductivityIndex,
            vec![
                ("STB/d/psi", barrel / day / psi),
                ("Sm3/d/bar", 1e-5 / day),
                ("Sm3/d/kPa", 1e-3 / day),
                ("Sm3/d/MPa", 1e-6 / day),
            ],
        ),
        (
            D::GasInjectivity,
            vec![
                ("scf/d/psi", cubic_foot / day / psi),
                ("Mscf/d/psi", 1e3 * cubic_foot / day / psi),
                ("MMscf/d/psi", 1e6 * cubic_foot / day / psi),
                ("Sm3/d/bar", 1e-5 / day),
                ("thousand Sm3/d/bar", 1e-2 / day),
            ],
        ),
        (D::Turbulence, vec![("psi/(STB/d)^2", psi * (day / barrel).powi(2)), ("bar/(Sm3/d)^2", 1e5 * day.powi(2))]),
        (D::Permeability, vec![("mD", 1.0), ("D", 1e3)]),
        (D::Density, vec![("lb/ft3", pound / cubic_foot), ("kg/m3", 1.0), ("g/cm3", 1e3)]),
        (D::Salinity, vec![("ppm", 1e-6), ("%", 1e-2), ("g/kg", 1e-3)]),
        (D::Time, vec![("days", day), ("months", year / 12.0), ("years", year), ("hours", 3600.0)]),
        (D::Velocity, vec![("ft/s", foot), ("m/s", 1.0)]),
        (D::LiquidVolumeFactor, vec![("rb/STB", 1.0), ("rm3/Sm3", 1.0)]),
        (D::GasVolumeFactor, vec![("rb/scf", barrel / cubic_foot), ("rm3/Sm3", 1.0)]),
        (D::Angle, vec![("deg", std::f64::consts::PI / 180.0), ("rad", 1.0)]),
        (D::HeatConductivity, vec![("Btu/h/ft/degF", btu / 3600.0 / foot * 1.8), ("W/m/K", 1.0)]),
        (D::HeatTransfer, vec![("Btu/h/ft2/degF", btu / 3600.0 / foot.powi(2) * 1.8), ("W/m2/K", 1.0)]),
        (
            D::Diffusivity,
            vec![("ft2/h", foot * foot / 3600.0), ("ft2/d", foot * foot / day), ("m2/s", 1.0), ("mm2/s", 1e-6)],
        ),
    ];
    let mut checked = 0;
    for (dimension, rows) in table {
        let own = rows[0].1;
        assert_eq!(units_of(dimension).count(), rows.len(), "{dimension:?}: a unit has no definition here");
        for (name, si) in rows {
            // One unit more, so that the zero of gauge units falls out. 1e-7 because of the program's barrel.
            let one = read(&format!("2 {name}"), dimension) - read(&format!("1 {name}"), dimension);
            // A rate squared has the barrel twice.
            let times = if dimension == D::Turbulence { 2.0 } else { 1.0 };
            near(name, one, si / own, times * 1.0e-7);
            checked += 1;
        }
    }
    let others = units_of(D::Temperature).count() + units_of(D::OilGravity).count();
    assert_eq!(checked + others, units().len());
}

#[test]
fn temperatures_meet_at_the_fixed_points() {
    // Ice and steam points at 32 and 212 degF, absolute zero at -459.67 degF (NIST SP 811 B.9).
    let read = |text| read(text, Dimension::Temperature);
    for (text, degf) in
        [("0 degC", 32.0), ("100 °C", 212.0), ("-40 C", -40.0), ("273.15 K", 32.0), ("519.67 degR", 60.0)]
    {
        assert!((read(text) - degf).abs() < 1.0e-10, "{text}");
    }
}

#[test]
fn gauge_pressures_stand_on_the_scenarios_atmosphere() {
    let psia = |text, atmosphere| parse(text, Dimension::Pressure, atmosphere).unwrap();
    assert_eq!(psia("220 psig", 14.696), 234.696);
    assert_eq!(psia("220 psig", 12.0), 232.0);
    near("barg", psia("0 barg", 13.5), 13.5, 1.0e-15);
    near("kPag", psia("100 kPag", 14.0), psia("1 bar", 14.0) + 14.0, 1.0e-14);
}

#[test]
fn oil_gravity_by_density_is_that_of_the_api_definition() {
    // API = 141.5/SG - 131.5, so water at 60 degF (62.366 lb/ft3 here, 999.01 kg/m3) is 10 API.
    near("water", read("999.0076 kg/m3", Dimension::OilGravity), 10.0, 1.0e-5);
    near("34 API", read("854.4 kg/m3", Dimension::OilGravity), 33.95, 2.0e-4);
    assert_eq!(read("34 °API", Dimension::OilGravity), 34.0);
}

#[test]
fn what_people_write_is_understood() {
    use Dimension as D;
    let same = [
        (
            D::Pressure,
            "3600 psia",
            vec!["3600psia", " 3600  PSIA ", "3.6e3 Psia", "+3600 psia", "3600.0 psia", "3_600 psia"],
        ),
        (D::Pressure, "250 bar", vec!["250 bara", "250 Bar", "25 MPa", "25000 kPa"]),
        (
            D::LiquidVolume,
            "42 MMSTB",
            vec!["42 mmstb", "42,000,000 STB", "42e6 bbl", "42000 MSTB", "42 million STB", "42000 kstb"],
        ),
        (
            D::LiquidVolume,
            "5 million Sm3",
            vec!["5e6 Sm3", "5000 thousand Sm3", "5e6 Sm^3", "5e6 sm³", "5000 10^3 Sm3"],
        ),
        (
            D::LiquidRate,
            "1800 STB/d",
            vec![
                "1800 bbl/d",
                "1800 bopd",
                "1800 BPD",
                "1800 stb/day",
                "1.8 MSTB/d",
                "1800 bbl per day",
                "1800 STB / D",
            ],
        ),
        (D::GasRate, "2 MMscf/d", vec!["2000 Mscf/d", "2000 kscf/d", "2 mmscfd", "2e6 scf/d", "2 MMSCF/day"]),
        (D::GasOilRatio, "620 scf/STB", vec!["620 scf/bbl", "0.62 Mscf/STB", "620 SCF/STB", "620 scf per STB"]),
        (D::Temperature, "190 degF", vec!["190 F", "190 °F", "190 deg F", "190 DEGF"]),
        (D::Compressibility, "4e-6 1/psi", vec!["4E-6 1/psia", "4e-6 psi^-1", "4e-6 psi-1", "4e-6 psi⁻¹", "4e-6 /psi"]),
        (D::ProductivityIndex, "12 STB/d/psi", vec!["12 stb/d/psia", "12 bbl/day/psi", "12 STB/(d.psi)", "12 bpd/psi"]),
        (D::Viscosity, "0.8 cp", vec!["0.8 cP", "0.8 mPa.s", "0.8 mPa·s", "0.8 mPa s"]),
        (D::Salinity, "35000 ppm", vec!["3.5 %", "35 g/kg", "3.5 wt%"]),
        (D::Time, "2 years", vec!["24 months", "2 yr", "730.485 days"]),
        (D::Diameter, "2.441 in", vec!["2.441 inch", "2.441\"", "62.0014 mm", "6.20014 cm"]),
        (D::Diameter, "0.375 in", vec!["24/64 in", "24/64\"", "24/64"]),
        (D::Length, "8600 ft", vec!["8600 feet", "8600'", "2621.28 m"]),
        (D::Permeability, "80 mD", vec!["80 md", "0.08 D"]),
        (D::Density, "62.4 lb/ft3", vec!["62.4 lb/ft^3", "62.4 lbm/ft³"]),
    ];
    for (dimension, first, others) in same {
        let expected = read(first, dimension);
        for other in others {
            near(&format!("{other} as {first}"), read(other, dimension), expected, 1.0e-12);
        }
    }
}

#[test]
fn gas_and_liquid_share_the_spelling_of_cubic_metres() {
    let liquid = read("1 Sm3", Dimension::LiquidVolume) * 5.614_583;
    near("one cubic metre", read("1 Sm3", Dimension::GasVolume), liquid, 1.0e-12);
}

#[test]
fn refusals_say_what_was_found_and_what_is_known() {
    use Dimension as D;
    let cases = [
        (
            D::Pressure,
            "1200 psi",
            "`psi` leaves open whether the pressure is absolute or gauge",
            "\"1200 psia\" or \"1200 psig\"",
        ),
        (
            D::Pressure,
            "190 degF",
            "`degF` is the unit of a temperature, a pressure is expected",
            "psia, psig, bar, barg, kPa",
        ),
        (D::Pressure, "190 furlong", "`furlong` is not a known unit", "psia, psig, bar, barg, kPa"),
        (D::Pressure, "3600", "`3600` has no unit", "\"3600 psia\""),
        (D::Pressure, "psia", "`psia` does not begin with a number", "\"3600 psia\""),
        (D::Pressure, "", "nothing is written here", "a pressure is a number and a unit"),
        (D::Pressure, "nan psia", "`nan psia` is not a finite number", "a number and a unit"),
        (D::Pressure, "-inf psia", "`-inf psia` is not a finite number", "a number and a unit"),
        (D::Pressure, "1e999 psia", "`1e999` is too large a number", "a number and a unit"),
        (D::Pressure, "1,200 psia", "leaves open whether it is 1200 or 1.2", "a number and a unit"),
        (D::Pressure, "3,5 bar", "`3,5` has a comma where a decimal point is expected", "a number and a unit"),
        (D::LiquidVolume, "3 MSm3", "`MSm3` is read as a thousand by some and as a million by others", "thousand Sm3"),
        (D::LiquidRate, "3 MMscf/d", "`MMscf/d` is the unit of a gas rate, a liquid rate is expected", "STB/d"),
    ];
    for (dimension, text, message, help) in cases {
        let error = parse(text, dimension, ATMOSPHERE_PSIA).unwrap_err();
        assert!(error.message.contains(message), "{text}: {}", error.message);
        assert!(error.help.clone().unwrap_or_default().contains(help), "{text}: {:?}", error.help);
    }
}

#[test]
fn a_refusal_lists_every_unit_of_the_dimension() {
    for dimension in Dimension::ALL {
        let help = parse("1 furlong", dimension, ATMOSPHERE_PSIA).unwrap_err().help.unwrap();
        for unit in units_of(dimension) {
            assert!(help.contains(unit.name), "{} is not in: {help}", unit.name);
        }
    }
}

#[test]
fn numbers_with_separators_are_read_where_they_are_clear() {
    assert_eq!(parse_number("12,500,000"), Ok(12.5e6));
    assert_eq!(parse_number("1,250.5"), Ok(1250.5));
    assert_eq!(parse_number("-2e-3"), Ok(-0.002));
    assert_eq!(parse_number(".5"), Ok(0.5));
    for wrong in ["1,25", "12,50,000", "1,2,3", "1.2.3", "--3", "3 4", "0x10"] {
        assert!(parse_number(wrong).is_err(), "{wrong}");
    }
}

#[test]
fn flow_coefficients_convert_with_their_exponent() {
    assert_eq!(parse_flow_coefficient("0.00079 STB/d/psi^2n", 0.85), Ok(0.00079));
    // By hand: q = C*(p2)^n is the same rate in both units when C carries (psi per bar)^2n.
    let (psi_per_bar, stb_per_sm3) = (1.0e5_f64 / 6_894.757_293_168, 1.0 / 0.158_987_294_928);
    for n in [0.5_f64, 0.85, 1.0] {
        let expected = 0.03 * stb_per_sm3 / psi_per_bar.powf(2.0 * n);
        near("C", parse_flow_coefficient("0.03 Sm3/d/bar^2n", n).unwrap(), expected, 1.0e-7);
        near("C", parse_flow_coefficient("0.03 sm3/day/bara2n", n).unwrap(), expected, 1.0e-7);
    }
    for wrong in ["0.03 STB/d/psi", "0.03", "0.03 STB/d/psi^2", "STB/d/psi^2n", "0.03 psia/psi^2n"] {
        assert!(parse_flow_coefficient(wrong, 1.0).is_err(), "{wrong}");
    }
}

#[test]
fn a_spelling_means_one_unit_of_a_dimension() {
    for dimension in Dimension::ALL {
        let rows: Vec<_> = units_of(dimension).collect();
        for (i, unit) in rows.iter().enumerate() {
            let read = parse(&format!("7 {}", unit.name), dimension, ATMOSPHERE_PSIA).unwrap();
            near(unit.name, read, unit.to_inside(7.0, ATMOSPHERE_PSIA), 1.0e-14);
            for alias in unit.aliases {
                let read = parse(&format!("7 {alias}"), dimension, ATMOSPHERE_PSIA).unwrap();
                near(alias, read, unit.to_inside(7.0, ATMOSPHERE_PSIA), 1.0e-14);
                assert!(rows[..i].iter().all(|other| !other.aliases.contains(alias)), "{alias} stands twice");
            }
        }
    }
}

#[test]
fn the_first_unit_of_a_dimension_is_the_programs_own() {
    for dimension in Dimension::ALL {
        let first = units_of(dimension).next().unwrap();
        assert_eq!(first.to_inside(7.0, ATMOSPHERE_PSIA), 7.0, "{}", first.name);
    }
}

#[test]
fn outputs_have_a_unit_for_every_dimension_and_never_a_bare_m() {
    for system in [UnitSystem::Field, UnitSystem::Metric] {
        for dimension in Dimension::ALL {
            let unit = system.unit(dimension);
            assert!(unit.factor.is_finite() && unit.offset.is_finite(), "{dimension:?} in {}", system.name());
            assert!(!unit.suffix.is_empty() && !unit.suffix.contains(|c: char| c.is_uppercase() || c == ' '));
            // A bare M or MM: the letter before a volume (metres and millimetres are lower case).
            for label in [unit.suffix, unit.label] {
                assert!(!label.starts_with("MM") && !label.starts_with("MS") && !label.starts_with("Ms"), "{label}");
                assert!(!label.contains("mstb") && !label.contains("mscf"), "{label}");
            }
        }
    }
}

#[test]
fn output_columns_are_those_that_other_programs_read() {
    use Dimension as D;
    let expected = [
        (D::Pressure, "reservoir_pressure_psia", "reservoir_pressure_bara"),
        (D::PressureDifference, "reservoir_pressure_psi", "reservoir_pressure_bar"),
        (D::LiquidVolume, "reservoir_pressure_stb", "reservoir_pressure_sm3"),
        (D::GasVolume, "reservoir_pressure_scf", "reservoir_pressure_sm3"),
        (D::LiquidRate, "reservoir_pressure_stb_d", "reservoir_pressure_sm3_d"),
        (D::GasOilRatio, "reservoir_pressure_scf_stb", "reservoir_pressure_sm3_sm3"),
    ];
    for (dimension, field, metric) in expected {
        assert_eq!(UnitSystem::Field.unit(dimension).column("reservoir_pressure"), field);
        assert_eq!(UnitSystem::Metric.unit(dimension).column("reservoir_pressure"), metric);
    }
}

#[test]
fn outputs_invert_inputs() {
    use Dimension as D;
    let metric = |dimension, value| UnitSystem::Metric.to_output(dimension, value);
    near("pressure", metric(D::Pressure, read("183 bar", D::Pressure)), 183.0, 1.0e-12);
    near("temperature", metric(D::Temperature, read("88 degC", D::Temperature)), 88.0, 1.0e-12);
    near("oil", metric(D::LiquidVolume, read("183 Sm3", D::LiquidVolume)), 183.0, 1.0e-12);
    near("gas", metric(D::GasVolume, read("183 Sm3", D::GasVolume)), 183.0, 1.0e-12);
    near("gas-oil ratio", metric(D::GasOilRatio, read("110 Sm3/Sm3", D::GasOilRatio)), 110.0, 1.0e-12);
    assert_eq!(UnitSystem::Field.to_output(D::Pressure, 3600.0), 3600.0);
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    /// There and back in every unit, to 1e-12 of the value or, with an offset, of the offset.
    #[test]
    fn every_unit_comes_back(mantissa in 1.0..10.0_f64, exponent in -6..7_i32) {
        let value = mantissa * 10.0_f64.powi(exponent);
        for unit in units() {
            // A density is only a gravity where oils are: 0.65 to 1.1 of water's.
            let value = match unit.scale {
                Scale::Gravity { water } => water * (0.6 + mantissa / 20.0),
                _ => value,
            };
            let inside = unit.to_inside(value, ATMOSPHERE_PSIA);
            let back = unit.from_inside(inside, ATMOSPHERE_PSIA);
            let scale = value.abs().max(unit.from_inside(0.0, ATMOSPHERE_PSIA).abs().min(1.0e4));
            prop_assert!((back - value).abs() <= 1.0e-12 * scale, "{}: {value} came back as {back}", unit.name);
            let again = parse(&format!("{value:e} {}", unit.name), unit.dimension, ATMOSPHERE_PSIA).unwrap();
            prop_assert!((again - inside).abs() <= 1.0e-12 * inside.abs().max(1.0e-300), "{}", unit.name);
        }
    }

    /// Any text at all gives a value or a refusal.
    #[test]
    fn any_text_is_answered(text in "\\PC{0,30}") {
        for dimension in Dimension::ALL {
            if let Err(error) = parse(&text, dimension, ATMOSPHERE_PSIA) {
                prop_assert!(!error.message.is_empty());
            }
        }
        let _ = parse_flow_coefficient(&text, 0.8);
        let _ = parse_number(&text);
    }
}
