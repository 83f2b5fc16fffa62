//! Exporters on results made by hand: names, numbers, sums.
#![allow(clippy::unwrap_used)]

mod report_support;

use report_support as made;
use serde_json::Value;
use std::collections::HashMap;
use wane::forecast::{Forecast, InjectedFluid, InjectorRow};
use wane::report::*;
use wane::study::{CaseOutcome, Comparison, Shift};

type Row = HashMap<String, String>;

fn read(bytes: &[u8]) -> (Vec<String>, Vec<Row>) {
    let mut reader = csv::Reader::from_reader(bytes);
    let header: Vec<String> = reader.headers().unwrap().iter().map(str::to_owned).collect();
    let rows = reader.records().map(|r| header.iter().cloned().zip(r.unwrap().iter().map(str::to_owned)).collect());
    let rows = rows.collect();
    (header, rows)
}

fn num(row: &Row, column: &str) -> f64 {
    row[column].parse().unwrap_or_else(|_| panic!("{column} is {:?} for {}", row[column], row["name"]))
}

fn of<'a>(rows: &'a [Row], name: &str) -> Vec<&'a Row> {
    rows.iter().filter(|r| r["name"] == name).collect()
}

fn near(a: f64, b: f64, relative: f64, what: &str) {
    assert!((a - b).abs() <= relative * b.abs().max(1e-300), "{what}: {a} against {b}");
}

#[test]
fn the_profile_begins_with_the_fixed_columns_and_holds_the_fixed_names() {
    let (header, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    assert_eq!(&header[..3], ["period_start", "period_end", "name"]);
    // The names that other programs rely on.
    for name in [
        "oil_stb",
        "water_stb",
        "gas_scf",
        "injected_water_stb",
        "injected_gas_scf",
        "oil_cum_stb",
        "water_cum_stb",
        "gas_cum_scf",
        "oil_rate_stb_d",
        "reservoir_pressure_psia",
        "flowing_pressure_psia",
        "wellhead_pressure_psia",
        "gor_scf_stb",
        "water_cut",
        "flow_margin_psi",
        "liquid_rate_stb_d",
        "flowing_days",
        "period_gor_scf_stb",
        "period_water_cut",
    ] {
        assert!(header.iter().any(|h| h == name), "{name} is a column");
    }
    let mut sorted = header.clone();
    sorted.sort();
    sorted.dedup();
    assert_eq!(sorted.len(), header.len(), "no column stands twice");
    // 84 months of two wells, one injector and the tank.
    assert_eq!(rows.len(), 84 * 4);
    let names: Vec<&str> = rows[..4].iter().map(|r| r["name"].as_str()).collect();
    assert_eq!(names, ["OP-1", "OP-2", "OI-1", "tank"]);
    assert_eq!((rows[0]["period_start"].as_str(), rows[0]["period_end"].as_str()), ("2027-01-01", "2027-02-01"));
}

#[test]
fn metric_results_name_metric_units_and_hold_metric_numbers() {
    let forecast = made::forecast();
    let (_, field) = read(&profile_csv(&forecast, UnitSystem::Field).unwrap());
    let (header, metric) = read(&profile_csv(&forecast, UnitSystem::Metric).unwrap());
    for name in ["oil_sm3", "gas_sm3", "reservoir_pressure_bara", "flow_margin_bar", "gor_sm3_sm3", "oil_rate_sm3_d"] {
        assert!(header.iter().any(|h| h == name), "{name} is a column");
    }
    assert!(!header.iter().any(|h| h.ends_with("_psia") || h.ends_with("_stb") || h.ends_with("_scf")));
    // 1 bbl = 0.158987294928 m3, 1 ft3 = 0.028316846592 m3, 1 psi = 0.0689475729317 bar (exact definitions of the inch,
    // the pound and the US gallon). The program's barrel of 5.614583 ft3 is 6e-8 smaller.
    let (f, m) = (&field[3], &metric[3]);
    near(num(m, "oil_sm3"), num(f, "oil_stb") * 0.158_987_294_928, 1e-7, "oil");
    near(num(m, "gas_sm3"), num(f, "gas_scf") * 0.028_316_846_592, 1e-9, "gas");
    near(num(m, "reservoir_pressure_bara"), num(f, "reservoir_pressure_psia") * 0.068_947_572_931_7, 1e-9, "pressure");
    near(num(m, "water_cut"), num(f, "water_cut"), 1e-12, "water cut has no unit");
}

#[test]
fn gas_is_oil_times_the_gas_oil_ratio_of_the_period_in_every_row() {
    let (_, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    let mut seen = 0;
    for row in rows.iter().filter(|r| !r["period_gor_scf_stb"].is_empty()) {
        near(num(row, "oil_stb") * num(row, "period_gor_scf_stb"), num(row, "gas_scf"), 1e-9, "gas");
        let liquid = num(row, "oil_stb") + num(row, "water_stb");
        near(liquid * (1.0 - num(row, "period_water_cut")), num(row, "oil_stb"), 1e-9, "oil");
        seen += 1;
    }
    // OP-1 flows in 70 of 84 months, OP-2 and the tank in all.
    assert_eq!(seen, 70 + 84 + 84);
}

#[test]
fn months_add_up_to_the_cumulatives_and_wells_to_the_tank() {
    let (_, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    for (volume, cumulative) in [("oil_stb", "oil_cum_stb"), ("water_stb", "water_cum_stb"), ("gas_scf", "gas_cum_scf")]
    {
        for name in ["OP-1", "OP-2", "tank"] {
            let rows = of(&rows, name);
            let sum: f64 = rows.iter().map(|r| num(r, volume)).sum();
            near(sum, num(rows.last().unwrap(), cumulative), 1e-9, volume);
        }
        let (a, b, tank) = (of(&rows, "OP-1"), of(&rows, "OP-2"), of(&rows, "tank"));
        for i in 0..tank.len() {
            near(num(a[i], volume) + num(b[i], volume), num(tank[i], volume), 1e-9, volume);
        }
    }
}

#[test]
fn rates_divide_by_the_whole_period_and_producing_day_rates_by_the_days_on_stream() {
    let (_, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    let row = of(&rows, "OP-1")[1];
    near(num(row, "oil_rate_stb_d"), num(row, "oil_stb") / 28.0, 1e-10, "February has 28 days");
    near(num(row, "flowing_days"), 28.0 * 0.94, 1e-10, "uptime");
    near(num(row, "oil_producing_day_rate_stb_d"), num(row, "oil_stb") / (28.0 * 0.94), 1e-10, "producing-day rate");
    near(
        num(row, "liquid_rate_stb_d"),
        num(row, "oil_rate_stb_d") + num(row, "water_rate_stb_d"),
        1e-10,
        "liquid is oil and water",
    );
    // The month of the death: 2100.25 days after the start is October 2032, whose whole 31 days count.
    let (_, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    let last = of(&rows, "OP-1").into_iter().find(|r| r["period_start"] == "2032-10-01").unwrap();
    near(num(last, "oil_rate_stb_d"), num(last, "oil_stb") / 31.0, 1e-10, "rate");
    assert!(num(last, "oil_stb") > 0.0);
    assert_eq!(last["flowing"], "no");
    assert!(last["flowing_pressure_psia"].is_empty() && last["gor_scf_stb"].is_empty(), "no state after the end");
    assert!(num(last, "flow_margin_psi") < 0.0);
}

#[test]
fn cells_that_do_not_apply_are_empty() {
    let (_, rows) = read(&profile_csv(&made::forecast(), UnitSystem::Field).unwrap());
    let (well, injector, tank) = (&rows[0], &rows[2], &rows[3]);
    assert!(well["injected_water_stb"].is_empty() && well["recovery"].is_empty());
    for column in ["oil_stb", "oil_rate_stb_d", "gor_scf_stb", "flowing_days", "injected_gas_scf", "flowing"] {
        assert!(injector[column].is_empty(), "{column} of an injector");
    }
    assert_eq!(injector["injected_water_stb"], "0");
    for column in ["flowing_pressure_psia", "wellhead_pressure_psia", "flow_margin_psi", "flowing_days"] {
        assert!(tank[column].is_empty(), "{column} of the tank");
    }
    near(num(tank, "recovery"), (1e6 + num(tank, "oil_cum_stb")) / 42e6, 1e-10, "recovery counts what was made before");
}

#[test]
fn a_gas_injector_has_gas_columns() {
    let mut forecast = made::forecast();
    forecast.injectors[0].fluid = InjectedFluid::Gas;
    forecast.injectors[0].rows = (1..=84)
        .map(|i| InjectorRow {
            gas_scf: 1e6,
            gas_cum_scf: 1e6 * f64::from(i),
            shortfall: 5.0,
            ..InjectorRow::default()
        })
        .collect();
    let (_, rows) = read(&profile_csv(&forecast, UnitSystem::Field).unwrap());
    assert_eq!(rows[2]["injected_gas_scf"], "1000000");
    assert_eq!(rows[2]["gas_shortfall_scf"], "5");
    assert!(rows[2]["injected_water_stb"].is_empty() && rows[2]["water_shortfall_stb"].is_empty());
}

#[test]
fn rows_stop_with_the_run() {
    let forecast = made::short_forecast();
    let (_, rows) = read(&profile_csv(&forecast, UnitSystem::Field).unwrap());
    let last = rows.last().unwrap();
    // 1500.5 days after 1 January 2027 is 9 February 2031.
    assert_eq!((last["period_start"].as_str(), last["period_end"].as_str()), ("2031-02-01", "2031-03-01"));
    let (_, years) = read(&yearly_csv(&forecast, UnitSystem::Field).unwrap());
    let last = years.last().unwrap();
    assert_eq!((last["period_start"].as_str(), last["period_end"].as_str()), ("2031-01-01", "2032-01-01"));
    near(num(last, "oil_rate_stb_d"), num(last, "oil_stb") / 365.0, 1e-10, "the whole year counts");
}

#[test]
fn years_add_up_the_months_and_keep_the_last_state() {
    let forecast = made::forecast();
    let (header, months) = read(&profile_csv(&forecast, UnitSystem::Field).unwrap());
    let (yearly_header, years) = read(&yearly_csv(&forecast, UnitSystem::Field).unwrap());
    assert_eq!(header, yearly_header);
    assert_eq!(years.len(), 7 * 4);
    let (months, years) = (of(&months, "OP-2"), of(&years, "OP-2"));
    for (y, year) in years.iter().enumerate() {
        let twelve = &months[12 * y..12 * y + 12];
        for column in ["oil_stb", "gas_scf", "flowing_days"] {
            near(num(year, column), twelve.iter().map(|m| num(m, column)).sum(), 1e-9, column);
        }
        for column in ["oil_cum_stb", "reservoir_pressure_psia", "gor_scf_stb", "flow_margin_psi"] {
            assert_eq!(year[column], twelve[11][column], "{column}");
        }
    }
    assert_eq!(years[1]["period_end"], "2029-01-01");
    // 2028 is a leap year.
    near(num(years[1], "oil_rate_stb_d"), num(years[1], "oil_stb") / 366.0, 1e-10, "rate");
}

#[test]
fn events_are_dated_named_and_quoted() {
    let (header, rows) = read(&events_csv(&made::forecast()).unwrap());
    assert_eq!(header, ["date", "days", "name", "event", "reason", "note"]);
    assert_eq!(rows[0]["event"], "bubble point crossed downwards");
    assert_eq!((rows[1]["event"].as_str(), rows[1]["reason"].as_str()), ("end of natural flow", "no crossing"));
    assert_eq!((rows[1]["date"].as_str(), rows[1]["days"].as_str()), ("2032-10-01", "2100.25"));
    assert_eq!(rows[1]["note"], "at 300 STB/d, \"quoted\"");
}

#[test]
fn the_summary_holds_the_fixed_fields() {
    let forecast = made::forecast();
    let json: Value = serde_json::from_slice(&summary_json(&forecast, &made::provenance()).unwrap()).unwrap();
    assert_eq!(json["case"], "base");
    assert_eq!(json["sha256"], "5f".repeat(32));
    let tank = &json["tank"];
    for key in ["pressure_psia", "oil_cum_stb", "recovery", "balance_residual"] {
        assert!(tank[key].is_f64(), "{key}");
    }
    for key in ["depletion", "gas_cap", "rock_and_water", "aquifer", "injection"] {
        assert!(tank["drive_indices"][key].is_f64(), "{key}");
    }
    let (dead, alive) = (&json["wells"][0], &json["wells"][1]);
    let end = &dead["natural_flow_end"];
    assert_eq!((end["date"].as_str(), end["reason"].as_str()), (Some("2032-10-01"), Some("no crossing")));
    assert_eq!(end["days"], 2100.25);
    near(
        end["oil_rate_stb_d"].as_f64().unwrap(),
        forecast.wells[0].natural_flow_end.unwrap().oil_rate_stb_d,
        1e-15,
        "rate",
    );
    assert_eq!(dead["flowing_at_end"], false);
    // 910.25 days after 1 January 2027.
    assert_eq!(dead["plateau_end"], "2029-06-29");
    assert!(alive["natural_flow_end"].is_null());
    assert_eq!(alive["flowing_at_end"], true);
    assert_eq!(dead["tests"][0]["model_rate_stb_d"], 789.5);
    assert_eq!(json["doubts"][0]["kind"], "test mismatch");
    assert_eq!(json["work"]["right_hand_sides"], 800);
    assert_eq!(json["failed_checks"].as_array().unwrap().len(), 0);
    // Metric results name metric units.
    let metric = Provenance { units: UnitSystem::Metric, ..made::provenance() };
    let json: Value = serde_json::from_slice(&summary_json(&forecast, &metric).unwrap()).unwrap();
    assert!(json["tank"]["pressure_bara"].is_f64() && json["wells"][0]["oil_cum_sm3"].is_f64());
}

#[test]
fn no_result_file_holds_a_bare_m_or_a_number_that_is_none() {
    let mut forecast = made::forecast();
    forecast.tank[3].pressure_psia = f64::NAN;
    forecast.wells[0].rows[3].gor_scf_stb = Some(f64::INFINITY);
    let files = forecast_files(&forecast, &made::provenance()).unwrap();
    for file in files.iter().filter(|f| !f.path.ends_with(".png")) {
        let text = String::from_utf8(file.bytes.clone()).unwrap();
        for word in ["NaN", "inf,", "Infinity", "MSTB", "Mscf", "MMscf", "MMSTB"] {
            assert!(!text.contains(word), "{} holds {word}", file.path);
        }
    }
}

#[test]
fn the_same_result_gives_the_same_bytes() {
    let first = forecast_files(&made::forecast(), &made::provenance()).unwrap();
    assert_eq!(first, forecast_files(&made::forecast(), &made::provenance()).unwrap());
    let paths: Vec<&str> = first.iter().map(|f| f.path.as_str()).collect();
    for path in [
        "profile.csv",
        "yearly.csv",
        "events.csv",
        "summary.json",
        "rates.svg",
        "rates.png",
        "pressure.svg",
        "pressure.png",
        "curves-OP-1.svg",
        "curves-OP-2.png",
    ] {
        assert!(paths.contains(&path), "{path} is written");
    }
}

#[test]
fn checks_trip_on_what_they_are_for() {
    assert!(sanity(&made::forecast()).is_empty());
    let trip = |change: fn(&mut Forecast)| {
        let mut forecast = made::forecast();
        change(&mut forecast);
        sanity(&forecast).join("; ")
    };
    assert!(trip(|f| f.balance_residual = 2e-8).contains("balance"));
    assert!(trip(|f| f.balance_residual = f64::NAN).contains("balance"));
    assert!(trip(|f| f.tank[5].drive_indices.as_mut().unwrap().depletion += 2e-6).contains("drive indices"));
    assert!(trip(|f| f.wells[1].rows[7].gas_scf = -1.0).contains("OP-2"));
    assert!(trip(|f| f.injectors[0].rows[40].water_stb = f64::NAN).contains("OI-1"));
    assert_eq!(trip(|f| f.balance_residual = 0.9e-8), "");
}

#[test]
fn well_names_become_safe_and_unlike_file_names() {
    let mut taken = Vec::new();
    assert_eq!(file_stem("OP-1", &mut taken), "OP-1");
    assert_eq!(file_stem("op-1", &mut taken), "op-1-2");
    assert_eq!(file_stem("../up", &mut taken), "_up");
    assert_eq!(file_stem("a/b\\c:d", &mut taken), "a_b_c_d");
    assert_eq!(file_stem("..", &mut taken), "unnamed");
}

fn comparison() -> Comparison {
    let case = |name: &str, forecast: Forecast| CaseOutcome { name: name.to_owned(), forecast };
    let periods = made::months(84, 1e9);
    let more = made::forecast_of(
        vec![made::well("OP-1", &periods, 1800.0, 1e9, 0.35), made::well("OP-2", &periods, 950.0, 1e9, 0.1)],
        periods,
        3000.0,
    );
    Comparison { cases: vec![case("base", made::forecast()), case("none", made::short_forecast()), case("more", more)] }
}

#[test]
fn a_case_against_itself_differs_by_nothing() {
    let base = &comparison().rows()[0];
    assert_eq!((base.oil_increment_stb, base.injected_water_increment_stb), (0.0, 0.0));
    assert_eq!(base.water_per_extra_oil, None);
    assert_eq!(base.wells[0].shift, Shift::Days(0.0));
    // Both still flow: nothing is known of the shift.
    assert_eq!(base.wells[1].shift, Shift::Unknown);
}

#[test]
fn cases_are_set_beside_the_base() {
    let comparison = comparison();
    let rows = comparison.rows();
    // 1500.5 against 2100.25 days.
    assert_eq!(rows[1].wells[0].shift, Shift::Days(1500.5 - 2100.25));
    // Seven years have 2557 days; the base's well ends after 2100.25.
    assert_eq!(rows[2].wells[0].shift, Shift::AtLeast(2557.0 - 2100.25));
    let extra = rows[2].oil_cum_stb - rows[0].oil_cum_stb;
    assert!(extra > 0.0);
    // 1500 STB/d more over the 1826 days from 2029 on.
    near(rows[2].injected_water_increment_stb, 1500.0 * 1826.0, 1e-12, "injected");
    near(rows[2].water_per_extra_oil.unwrap(), 1500.0 * 1826.0 / extra, 1e-12, "barrels per extra barrel");
    // The dry well's last liquid holds no water.
    assert_eq!(rows[1].water_cut, Some(0.0));

    let (_, csv) = read(&compare_csv(&comparison, UnitSystem::Field).unwrap());
    let well = csv.iter().find(|r| r["case"] == "more" && r["name"] == "OP-1").unwrap();
    assert_eq!((well["shift_days"].as_str(), well["shift_bound"].as_str()), ("456.75", "at least"));
    assert_eq!(well["flowing_at_end"], "yes");
    let tank = csv.iter().find(|r| r["case"] == "more" && r["name"] == "tank").unwrap();
    near(tank["oil_increment_stb"].parse().unwrap(), extra, 1e-11, "increment");
    near(tank["injected_water_per_extra_oil"].parse().unwrap(), 1500.0 * 1826.0 / extra, 1e-11, "per extra");
    let json: Value = serde_json::from_slice(&compare_json(&comparison, &made::provenance()).unwrap()).unwrap();
    assert_eq!(json["cases"][1]["wells"][0]["shift_days"], -599.75);
}

#[test]
fn the_terminal_summary_fits_and_answers() {
    for forecast in [made::forecast(), made::short_forecast()] {
        let text = plain(&wane::cli::forecast_text(&forecast, &made::provenance(), Some("results/heron")));
        for line in text.lines() {
            assert!(line.chars().count() <= 100, "too wide: {line}");
        }
        for words in
            ["no crossing", "June 2029", "recovery", "balance residual", "796 STB/d", "What to do", "results/heron"]
        {
            assert!(text.contains(words), "{words} in\n{text}");
        }
    }
    let text = plain(&wane::cli::forecast_text(&made::forecast(), &made::provenance(), None));
    let line = |name: &str| text.lines().find(|l| l.trim_start().starts_with(name)).unwrap().to_owned();
    assert!(line("OP-1").contains("October 2032"), "{text}");
    assert!(line("OP-2").contains("December 2033") && line("OP-2").contains("still flows at the end of the forecast"));
    let text = plain(&wane::cli::compare_text(&comparison(), &made::provenance(), None));
    for line in text.lines() {
        assert!(line.chars().count() <= 100, "too wide: {line}");
    }
    assert!(text.contains("-19.7 months") && text.contains("at least +15.0 months"), "{text}");
}

/// Without the styles that only terminals get.
fn plain(text: &str) -> String {
    let mut out = String::new();
    let mut inside = false;
    for c in text.chars() {
        match c {
            '\u{1b}' => inside = true,
            'm' if inside => inside = false,
            _ if inside => {}
            _ => out.push(c),
        }
    }
    out
}

/// Ends under the other rules and intervals of the fit, in both systems of units. 1 Sm3 = 35.3147/5.614583 bbl, 1 bar = 14.5038 psi.
#[test]
fn the_summary_holds_rules_and_intervals() {
    use wane::forecast::{FutureEnd, ModelOutcome};
    use wane::inflow::{Figure, Fit, Interval, Shape};
    let mut forecast = made::forecast();
    let well = &mut forecast.wells[0];
    let end = well.natural_flow_end.unwrap();
    well.future_rules = vec![
        FutureEnd { rule: "pressure", outcome: ModelOutcome::Ends(end) },
        FutureEnd { rule: "cubic", outcome: ModelOutcome::StillFlows },
    ];
    let interval = |figure, value: f64| Interval { figure, value, low: 0.5 * value, high: 2.0 * value };
    well.inflow_fit = Some(Fit {
        shape: Shape::Fetkovich { n: 1.0 },
        coefficient: 1e-3,
        reference_psia: 3000.0,
        rms_relative: 0.02,
        n_fitted: true,
        intervals: vec![
            interval(Figure::Exponent, 0.8),
            interval(Figure::Coefficient, 1e-3),
            interval(Figure::OpenFlow, 1000.0),
            interval(Figure::Turbulence, 1e-4),
        ],
    });
    let mut provenance = made::provenance();
    for (units, rate, pressure, suffixes) in [
        (UnitSystem::Field, 1.0, 1.0, ["stb_d", "stb_d_psi2n", "psi_d2_stb2"]),
        (UnitSystem::Metric, 0.158_987, 0.068_947_6, ["sm3_d", "sm3_d_bar2n", "bar_d2_sm6"]),
    ] {
        provenance.units = units;
        let found: Value = serde_json::from_slice(&summary_json(&forecast, &provenance).unwrap()).unwrap();
        let well = &found["wells"][0];
        assert_eq!(well["future_rules"][0]["natural_flow_end"], end.date.to_string());
        assert_eq!(
            (&well["future_rules"][1]["rule"], &well["future_rules"][1]["natural_flow_end"]),
            (&"cubic".into(), &Value::Null)
        );
        let fit = &well["inflow_fit"];
        assert_eq!(fit["confidence"], 0.95);
        let list = fit["intervals"].as_array().unwrap();
        assert_eq!((&list[0]["figure"], &list[0]["low"]), (&"n".into(), &0.4.into()));
        let value = |i: usize, key: &str| list[i][key].as_f64().unwrap_or_else(|| panic!("{key}: {}", list[i]));
        near(value(1, &format!("high_{}", suffixes[1])), 2e-3 * rate / (pressure * pressure), 1e-5, "C");
        near(value(2, &format!("low_{}", suffixes[0])), 500.0 * rate, 1e-5, "open flow");
        near(value(3, &format!("value_{}", suffixes[2])), 1e-4 * pressure / (rate * rate), 1e-5, "b");
    }
    assert_eq!(
        serde_json::from_slice::<Value>(&summary_json(&forecast, &provenance).unwrap()).unwrap()["wells"][1]["inflow_fit"],
        Value::Null
    );
}
