//! Results made by hand: reports are tested without running the engine.
#![allow(dead_code, clippy::unwrap_used)]

use jiff::civil::{Date, date};
use wane::forecast::*;
use wane::report::Provenance;

pub fn provenance() -> Provenance {
    Provenance {
        title: "Heron terrace".to_owned(),
        case: None,
        scenario_name: "heron.toml".to_owned(),
        sha256: "5f".repeat(32),
        version: "0.0.0".to_owned(),
        settings: vec![("tubing".to_owned(), "hasan-kabir".to_owned())],
        ..Provenance::default()
    }
}

fn days(from: Date, to: Date) -> f64 {
    f64::from(from.until(to).unwrap().get_days())
}

/// Calendar months from January 2027; the last one contains the end of the run when `stop_days` lies inside it.
pub fn months(count: i32, stop_days: f64) -> Vec<Period> {
    let first = date(2027, 1, 1);
    let at = |i: i32| date((2027 + i / 12) as i16, (i % 12 + 1) as i8, 1);
    (0..count)
        .map(|i| {
            let (start_days, end_days) = (days(first, at(i)), days(first, at(i + 1)));
            Period { start: at(i), end: at(i + 1), start_days, end_days, run_days: end_days.min(stop_days) }
        })
        .filter(|p| p.start_days < stop_days)
        .collect()
}

/// A well on a plateau of `plateau` STB/d liquid that then declines, with rising gas-oil ratio and water cut,
/// and dies after `life` days.
pub fn well(name: &str, periods: &[Period], plateau: f64, life: f64, wet: f64) -> WellResult {
    let rate = |t: f64| plateau * (1.35 - t / 2600.0).clamp(0.28, 1.0);
    let gor = |t: f64| 620.0 + 900.0 * ((t - 500.0) / 1500.0).clamp(0.0, 1.3).powi(2) - 40.0 * (t / 400.0).min(1.0);
    let cut = |t: f64| wet * ((t - 900.0) / 1400.0).clamp(0.0, 1.0);
    let (mut oil_cum_stb, mut water_cum_stb, mut gas_cum_scf) = (0.0, 0.0, 0.0);
    let mut peak = 0.0_f64;
    let rows: Vec<WellRow> = periods
        .iter()
        .map(|p| {
            let to = p.run_days.min(life).max(p.start_days);
            let flowing_days = 0.94 * (to - p.start_days);
            let middle = (p.start_days + to) / 2.0;
            let liquid = rate(middle) * flowing_days;
            let water_stb = liquid * cut(middle);
            let oil_stb = liquid - water_stb;
            let gas_scf = oil_stb * gor(middle);
            oil_cum_stb += oil_stb;
            water_cum_stb += water_stb;
            gas_cum_scf += gas_scf;
            let flowing = p.run_days < life;
            let some = |v: f64| flowing.then_some(v);
            let t = p.run_days;
            if flowing {
                peak = peak.max(gor(t));
            }
            WellRow {
                oil_stb,
                water_stb,
                gas_scf,
                oil_cum_stb,
                water_cum_stb,
                gas_cum_scf,
                flowing_days,
                flowing,
                flowing_pressure_psia: some(2300.0 - 0.5 * t),
                wellhead_pressure_psia: some(220.0 + (800.0 - t).max(0.0) * 0.2),
                liquid_rate_stb_d: some(rate(t)),
                gor_scf_stb: some(gor(t)),
                water_cut: some(cut(t)),
                flow_margin_psi: Some((life - t) * 0.3),
                restart_margin_psi: Some((0.7 * life - t) * 0.2),
                stability_margin: some(0.5),
                slope_margin: some(1.4),
                wellhead_velocity_ft_s: some(12.0 + 0.01 * t),
                line_pressure_psia: some(200.0),
                choke_size_in: None,
                choke_critical: None,
            }
        })
        .collect();
    let end = (life < periods.last().unwrap().end_days).then(|| FlowEnd {
        date: date(2027, 1, 1).checked_add(jiff::ToSpan::days(life as i64)).unwrap(),
        days: life,
        reason: StopReason::NoCrossing,
        liquid_rate_stb_d: rate(life),
        oil_rate_stb_d: rate(life) * (1.0 - cut(life)),
        flow_margin_psi: 0.004,
        reservoir_pressure_psia: 1850.0,
    });
    WellResult {
        name: name.to_owned(),
        natural_flow_end: end,
        flowing_at_end: rows.last().unwrap().flowing,
        rows,
        plateau_end: Some(910.25),
        restart_until: Some(0.7 * life),
        spread: None,
        future_rules: Vec::new(),
        peak_gor_scf_stb: peak,
        choke_text: None,
        inflow_text: "Fetkovich, C = 7.9e-4 STB/d/psi^2n, n = 0.85 fitted to 3 tests".to_owned(),
        inflow_fit: None,
        tests: vec![TestCheck {
            on: Some(date(2026, 11, 3)),
            reservoir_psia: 3600.0,
            flowing_psia: 3170.0,
            computed: false,
            rate_stb_d: 796.0,
            model_rate_stb_d: 789.5,
        }],
        curves: curves(),
    }
}

/// Parabolic curves whose gap closes.
pub fn curves() -> Vec<CurveSet> {
    let instants = [
        ("start", 0.0, 3600.0, 900.0),
        ("mid-life", 1000.0, 2700.0, 700.0),
        ("end of natural flow", 2100.0, 1990.0, 0.0),
    ];
    instants
        .into_iter()
        .map(|(label, t, reservoir, _)| {
            let open = 2600.0 * (reservoir / 3600.0_f64).powi(2);
            let inflow = |q: f64| reservoir * (1.0 - 0.2 * q / open - 0.8 * (q / open).powi(2)).max(0.0).sqrt();
            let tubing = |q: f64| 1250.0 + 4.5e5 / (q + 350.0) + 0.18 * q;
            let grid: Vec<f64> = (0..=60).map(|i| open * (0.005 + 0.994 * f64::from(i) / 60.0)).collect();
            // Shift the last tubing curve so that it only touches.
            let margin = grid.iter().map(|&q| inflow(q) - tubing(q)).fold(f64::NEG_INFINITY, f64::max);
            let shift = if label.starts_with("end") { margin } else { 0.0 };
            let points: Vec<_> = grid.iter().map(|&q| (q, inflow(q), tubing(q) + shift)).collect();
            let last = points.iter().rfind(|p| p.1 >= p.2).copied();
            CurveSet {
                label: label.to_owned(),
                date: date(2027, 1, 1).checked_add(jiff::ToSpan::days(t as i64)).unwrap(),
                days: t,
                reservoir_psia: reservoir,
                points,
                operating_point: match label {
                    "start" => Some((900.0, inflow(900.0))),
                    _ => last.map(|p| (p.0, p.1)),
                },
                flow_margin_psi: margin - shift,
            }
        })
        .collect()
}

/// A forecast of `wells` over `count` months, stopped after `stop_days`, with one water injector from 2029.
pub fn forecast_of(wells: Vec<WellResult>, periods: Vec<Period>, injected_stb_d: f64) -> Forecast {
    let stop = periods.last().unwrap().run_days;
    let whole = periods.last().unwrap().end_days;
    let mut injected_cum = 0.0;
    let injector: Vec<InjectorRow> = periods
        .iter()
        .map(|p| {
            let water_stb = if p.start_days < 731.0 { 0.0 } else { injected_stb_d * (p.run_days - p.start_days) };
            injected_cum += water_stb;
            InjectorRow { water_stb, water_cum_stb: injected_cum, ..InjectorRow::default() }
        })
        .collect();
    let tank: Vec<TankRow> = periods
        .iter()
        .enumerate()
        .map(|(i, p)| {
            let sum = |pick: fn(&WellRow) -> f64| wells.iter().map(|w| pick(&w.rows[i])).sum::<f64>();
            let flows = wells.iter().any(|w| w.rows[i].flowing);
            let first = wells.iter().find(|w| w.rows[i].flowing).map(|w| w.rows[i]);
            TankRow {
                oil_stb: sum(|r| r.oil_stb),
                water_stb: sum(|r| r.water_stb),
                gas_scf: sum(|r| r.gas_scf),
                injected_water_stb: injector[i].water_stb,
                oil_cum_stb: sum(|r| r.oil_cum_stb),
                water_cum_stb: sum(|r| r.water_cum_stb),
                gas_cum_scf: sum(|r| r.gas_cum_scf),
                pressure_psia: 3600.0 - 1800.0 * (p.run_days / 2600.0).powf(0.8)
                    + injected_stb_d * 0.05 * (p.run_days / 2600.0),
                bubble_point_psia: 2650.0,
                oil_saturation: 0.75,
                gas_saturation: 0.03,
                water_saturation: 0.22,
                gor_scf_stb: first.and_then(|r| r.gor_scf_stb).filter(|_| flows),
                water_cut: first.and_then(|r| r.water_cut).filter(|_| flows),
                voidage_replacement: Some(0.4),
                voidage_replacement_cum: Some(0.3),
                balance_residual: 3e-12,
                drive_indices: Some(DriveIndices {
                    depletion: 0.6,
                    gas_cap: 0.0,
                    rock_and_water: 0.1,
                    aquifer: 0.0,
                    injection: 0.3,
                }),
                ..TankRow::default()
            }
        })
        .collect();
    let events = vec![
        EventRecord {
            date: date(2028, 3, 4),
            days: 428.5,
            name: "tank".to_owned(),
            kind: EventKind::BubblePointCrossedDown,
            note: "2650 psia".to_owned(),
        },
        EventRecord {
            date: date(2032, 10, 1),
            days: 2100.25,
            name: "OP-1".to_owned(),
            kind: EventKind::EndOfNaturalFlow(StopReason::NoCrossing),
            note: "at 300 STB/d, \"quoted\"".to_owned(),
        },
    ];
    Forecast {
        start: date(2027, 1, 1),
        period_end: date(2042, 1, 1),
        end_days: stop,
        end_text: if stop < whole { "no well flows" } else { "period ended" },
        oil_in_place_stb: 42e6,
        produced_before_stb: 1e6,
        start_pressure_psia: 3600.0,
        fluid_sources: Vec::new(),
        periods,
        tank,
        wells,
        injectors: vec![InjectorResult { name: "OI-1".to_owned(), fluid: InjectedFluid::Water, rows: injector }],
        events,
        doubts: vec![Doubt {
            kind: DoubtKind::TestMismatch,
            about: "OP-1".to_owned(),
            seen: "the test of 2026-11-03 stands 12 % above the model".to_owned(),
            cause: "the fit of n is weak".to_owned(),
            advice: "repeat the test at a lower rate".to_owned(),
        }],
        balance_residual: 3e-12,
        work: Work { steps: 60, right_hand_sides: 800, traverses: 9000, closure_solves: 820, segments: 7 },
    }
}

/// Two wells, one of which dies after 2100.25 days; seven years.
pub fn forecast() -> Forecast {
    let periods = months(84, 1e9);
    let wells = vec![well("OP-1", &periods, 1800.0, 2100.25, 0.35), well("OP-2", &periods, 950.0, 1e9, 0.1)];
    forecast_of(wells, periods, 1500.0)
}

/// One dry well that dies inside a month; the run stops with it.
pub fn short_forecast() -> Forecast {
    let periods = months(84, 1500.5);
    let wells = vec![well("OP-1", &periods, 1800.0, 1500.5, 0.0)];
    forecast_of(wells, periods, 0.0)
}
