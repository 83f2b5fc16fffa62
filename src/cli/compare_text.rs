//! What `compare` prints: every case beside the base.

use super::screen::{Screen, Side};
use crate::report::human::{number, short_month, span, volume};
use crate::report::labels::{Dimension, label};
use crate::report::{CAUTION, Provenance};
use crate::study::{CaseRow, Comparison, Shift};

/// The comparison for people; `folder` is where the files are.
pub fn compare_text(comparison: &Comparison, provenance: &Provenance, folder: Option<&str>) -> String {
    let rows = comparison.rows();
    let mut s = Screen::default();
    s.title(&provenance.title);
    s.paragraph(0, 0, &format!("{} cases of {}, each against base", rows.len(), provenance.scenario_name));
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
                Some(end) => (
                    short_month(end.date),
                    end.reason.text().to_owned(),
                    format!("{} {}", number(rate.of(end.oil_rate_stb_d), 0), rate.text),
                ),
                None if well.flowing_at_end => ("still flows".to_owned(), "-".to_owned(), "-".to_owned()),
                None => ("never flowed".to_owned(), "-".to_owned(), "-".to_owned()),
            };
            let extra = well.oil_increment_stb.map_or_else(|| "-".to_owned(), |v| plus(liquid.of(v), liquid.text));
            cells.push(vec![case.name.clone(), well.name.clone(), when, shift_text(well.shift), why, at, extra]);
        }
    }
    let header = [
        ("case", Side::Left),
        ("well", Side::Left),
        ("flows until", Side::Left),
        ("shift", Side::Right),
        ("reason", Side::Left),
        ("oil rate then", Side::Right),
        ("extra oil", Side::Right),
    ];
    s.table(&header, &cells);
}

fn volumes(s: &mut Screen, rows: &[CaseRow], provenance: &Provenance) {
    let (liquid, gas) =
        (label(provenance.units, Dimension::LiquidVolume), label(provenance.units, Dimension::GasVolume));
    let (pressure, ratio) =
        (label(provenance.units, Dimension::Pressure), label(provenance.units, Dimension::GasOilRatio));
    s.heading("Tank at the end of the run");
    let water = rows.iter().any(|r| r.injected_water_stb > 0.0);
    let gas_in = rows.iter().any(|r| r.injected_gas_scf > 0.0);
    let mut header = vec![("case", Side::Left), ("oil made", Side::Right), ("extra oil", Side::Right)];
    if water {
        header.extend([("water injected", Side::Right), ("per extra", Side::Right)]);
    }
    if gas_in {
        header.extend([("gas injected", Side::Right), ("per extra", Side::Right)]);
    }
    header.extend([("pressure", Side::Right), ("water cut", Side::Right)]);
    let dash = |text: Option<String>| text.unwrap_or_else(|| "-".to_owned());
    let cells: Vec<Vec<String>> = rows
        .iter()
        .map(|case| {
            let mut row = vec![
                case.name.clone(),
                volume(liquid.of(case.oil_cum_stb), liquid.text),
                plus(liquid.of(case.oil_increment_stb), liquid.text),
            ];
            if water {
                row.push(volume(liquid.of(case.injected_water_stb), liquid.text));
                row.push(dash(case.water_per_extra_oil.map(|v| number(v, 2))));
            }
            if gas_in {
                row.push(volume(gas.of(case.injected_gas_scf), gas.text));
                row.push(dash(case.gas_per_extra_oil_scf_stb.map(|v| number(ratio.of(v), 0))));
            }
            row.push(format!("{} {}", number(pressure.of(case.pressure_psia), 0), pressure.text));
            row.push(dash(case.water_cut.map(|v| format!("{} %", number(100.0 * v, 1)))));
            row
        })
        .collect();
    s.table(&header, &cells);
    if water {
        s.quiet("  per extra: water injected above the base for each extra volume of oil");
    }
    if gas_in {
        s.quiet(&format!("  per extra: gas injected above the base for each extra volume of oil, {}", ratio.text));
    }
}

fn plus(value: f64, unit: &str) -> String {
    if value == 0.0 { "-".to_owned() } else { format!("{}{}", if value > 0.0 { "+" } else { "" }, volume(value, unit)) }
}
