//! What `compare` prints: every case beside the base.

use super::screen::{Screen, Side};
use crate::report::human::{number, short_month, span, words};
use crate::report::labels::{Dimension, label};
use crate::report::{CAUTION, Provenance};
use crate::study::{CaseRow, Comparison, Shift};

/// The comparison for people; `folder` is where the files are.
pub fn compare_text(comparison: &Comparison, provenance: &Provenance, folder: Option<&str>) -> String {
    let rows = comparison.rows();
    let mut s = Screen::default();
    s.title(&provenance.title);
    if rows.len() < 2 {
        let text = format!("{} has no [[case]] to compare: only the scenario as it stands", provenance.scenario_name);
        s.paragraph(0, 0, &text);
    } else {
        let count = match rows.len() - 1 {
            1 => "One case".to_owned(),
            cases => format!("{cases} cases"),
        };
        s.paragraph(0, 0, &format!("{count} of {}, each against base", provenance.scenario_name));
    }
    ends(&mut s, &rows, provenance);
    volumes(&mut s, &rows, provenance);
    if let Some(folder) = folder {
        s.line("");
        s.paragraph(
            0,
            2,
            &format!("Results: {folder} (compare.csv, compare.json, compare.svg, a folder for each case)"),
        );
    }
    s.line("");
    s.quiet(CAUTION);
    s.finish()
}

/// "+9.4 months", "at least +2.1 years".
fn shift_text(shift: Shift) -> String {
    let signed = |days: f64| {
        if days.abs() < 0.005 {
            "0 days".to_owned()
        } else {
            format!("{}{}", if days > 0.0 { "+" } else { "" }, span(days))
        }
    };
    match shift {
        Shift::Days(days) => signed(days),
        Shift::AtLeast(days) => format!("at least {}", signed(days)),
        Shift::AtMost(days) => format!("at most {}", signed(days)),
        Shift::Unknown => "-".to_owned(),
    }
}

fn ends(s: &mut Screen, rows: &[CaseRow], provenance: &Provenance) {
    let (rate, liquid) =
        (label(provenance.units, Dimension::LiquidRate), label(provenance.units, Dimension::LiquidVolume));
    s.heading("End of natural flow");
    let mut cells = Vec::new();
    for case in rows {
        for well in &case.wells {
            let (when, why, at) = match well.end {
                Some(end) => {
                    (short_month(end.date), end.reason.text().to_owned(), number(rate.of(end.oil_rate_stb_d), 0))
                }
                None if well.flowing_at_end => ("still flows".to_owned(), "-".to_owned(), "-".to_owned()),
                None => ("never flowed".to_owned(), "-".to_owned(), "-".to_owned()),
            };
            let extra = well.oil_increment_stb.map_or_else(|| "-".to_owned(), |v| plus(liquid.of(v)));
            cells.push(vec![case.name.clone(), well.name.clone(), when, shift_text(well.shift), why, at, extra]);
        }
    }
    let (rate_name, oil_name) = (format!("oil, {}", rate.text), format!("extra oil, {}", liquid.text));
    let header = [
        ("case", Side::Left),
        ("well", Side::Left),
        ("flows until", Side::Left),
        ("shift", Side::Right),
        ("reason", Side::Left),
        (rate_name.as_str(), Side::Right),
        (oil_name.as_str(), Side::Right),
    ];
    s.table(&header, &cells);
}

fn volumes(s: &mut Screen, rows: &[CaseRow], provenance: &Provenance) {
    let (liquid, gas) =
        (label(provenance.units, Dimension::LiquidVolume), label(provenance.units, Dimension::GasVolume));
    let (pressure, ratio) =
        (label(provenance.units, Dimension::Pressure), label(provenance.units, Dimension::GasOilRatio));
    s.heading("Tank at the end of each run");
    let water = rows.iter().any(|r| r.injected_water_stb > 0.0);
    let gas_in = rows.iter().any(|r| r.injected_gas_scf > 0.0);
    let mut header = vec![
        ("case".to_owned(), Side::Left),
        (format!("oil, {}", liquid.text), Side::Right),
        ("extra oil".to_owned(), Side::Right),
    ];
    if water {
        header.push((format!("water in, {}", liquid.text), Side::Right));
        header.push(("per extra".to_owned(), Side::Right));
    }
    if gas_in {
        header.push((format!("gas in, {}", gas.text), Side::Right));
        header.push(("per extra".to_owned(), Side::Right));
    }
    header.push((pressure.text.to_owned(), Side::Right));
    header.push(("water cut".to_owned(), Side::Right));
    let dash = |text: Option<String>| text.unwrap_or_else(|| "-".to_owned());
    let cells: Vec<Vec<String>> = rows
        .iter()
        .map(|case| {
            let mut row =
                vec![case.name.clone(), words(liquid.of(case.oil_cum_stb)), plus(liquid.of(case.oil_increment_stb))];
            if water {
                row.push(words(liquid.of(case.injected_water_stb)));
                row.push(dash(case.water_per_extra_oil.map(|v| number(v, 2))));
            }
            if gas_in {
                row.push(words(gas.of(case.injected_gas_scf)));
                row.push(dash(case.gas_per_extra_oil_scf_stb.map(|v| number(ratio.of(v), 0))));
            }
            row.push(number(pressure.of(case.pressure_psia), 0));
            row.push(dash(case.water_cut.map(|v| format!("{} %", number(100.0 * v, 1)))));
            row
        })
        .collect();
    let header: Vec<(&str, Side)> = header.iter().map(|(text, side)| (text.as_str(), *side)).collect();
    s.table(&header, &cells);
    if water {
        s.quiet("  per extra: volumes of water injected above the base for each volume of oil above it");
    }
    if gas_in {
        s.quiet(&format!("  per extra: gas injected above the base for each volume of oil above it, {}", ratio.text));
    }
}

fn plus(value: f64) -> String {
    if value == 0.0 { "-".to_owned() } else { format!("{}{}", if value > 0.0 { "+" } else { "" }, words(value)) }
}
