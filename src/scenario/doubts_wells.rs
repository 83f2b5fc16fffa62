//! Doubts about the data of one well.

use super::doubts::{Usual, doubt, short};
use crate::forecast::{Doubt, DoubtKind, FieldSpec};
use crate::inflow::{Coefficient, InflowTest};
use crate::well::WellSpec;
use jiff::civil::Date;

/// A test that is older says little about today's well.
const OLD_MONTHS: f64 = 24.0;
const DAYS_IN_MONTH: f64 = 365.2425 / 12.0;
/// Steeper than this from the vertical, a well counts as horizontal.
const HORIZONTAL_DEG: f64 = 80.0;

const DIAMETER: Usual = Usual {
    what: "the tubing's inside diameter",
    unit: "in",
    low: 1.0,
    high: 7.0,
    cause: "millimetres or a radius taken for inches of diameter",
};
const SKIN: Usual = Usual {
    what: "the skin",
    unit: "",
    low: -5.5,
    high: 50.0,
    cause: "a slip of the pen, or a fractured well, whose inflow a skin describes badly",
};
const FLOW_EFFICIENCY: Usual = Usual {
    what: "the flow efficiency",
    unit: "",
    low: 0.2,
    high: 2.0,
    cause: "a percentage, or a skin taken for an efficiency; Standing's charts hold 0.5 to 1.5",
};
const YEARLY_LOSS: Usual = Usual {
    what: "the yearly loss of productivity",
    unit: "",
    low: 0.0,
    high: 0.3,
    cause: "a slip of the pen, or a well that is treated so often that its average counts",
};
/// Pressure over vertical depth.
const GRADIENT: Usual = Usual {
    what: "the tank's pressure over the vertical depth of the perforations",
    unit: "psi/ft",
    low: 0.3,
    high: 1.0,
    cause: "metres written as feet, a wrong pressure unit, or measured depth taken for vertical",
};

/// Doubts about one well.
pub(super) fn well(well: &WellSpec, field: &FieldSpec) -> Vec<Doubt> {
    let about = well.name.as_str();
    let mut out = Vec::new();
    out.extend(well.tubing.sections.iter().filter_map(|section| DIAMETER.judge(about, section.diameter_in)).take(1));
    out.extend(SKIN.judge(about, well.skin));
    out.extend(well.inflow.flow_efficiency.and_then(|efficiency| FLOW_EFFICIENCY.judge(about, efficiency)));
    out.extend(YEARLY_LOSS.judge(about, well.loss.yearly));
    if let Some(depth_ft) = depth_of_pressure(well, field) {
        out.extend(GRADIENT.judge(about, field.tank.pressure_psia / depth_ft));
    }
    if well.uptime > 0.95 {
        out.push(doubt(
            DoubtKind::UnlikelyValue,
            about,
            format!("an uptime of {} is better than most wells reach", short(well.uptime)),
            "uptime not stated, or a plan rather than a record",
            "use the uptime of the last two years; 0.95 onshore and 0.90 offshore are good",
        ));
    }
    if steepest_deg(well) > HORIZONTAL_DEG {
        out.push(doubt(
            DoubtKind::NotModelled,
            about,
            "the survey turns horizontal",
            "a horizontal well",
            "inflow relations and flow patterns here come from vertical and deviated wells: calibrate to well tests",
        ));
    }
    if let Some(n) = well.inflow.exponent
        && !(0.5..=1.0).contains(&n)
    {
        out.push(doubt(
            DoubtKind::WeakFit,
            about,
            format!("the exponent n is {}, outside 0.5 to 1", short(n)),
            "tests that were not stabilised, or a well that cleaned up between them",
            "repeat the test; below 0.5 the well is usually damaged or the rates drifted",
        ));
    }
    if let Coefficient::Tests(tests) = &well.inflow.coefficient {
        out.extend(number_of_tests(about, tests));
        for test in tests {
            out.extend(one_test(about, test, well, field));
        }
    }
    out.extend(super::doubts_surveys::flowing(well, field));
    out
}

/// The vertical depth at which the tank's pressure holds, ft.
fn depth_of_pressure(well: &WellSpec, field: &FieldSpec) -> Option<f64> {
    let depth_ft = field.tank.datum_tvd_ft.or_else(|| well.tubing.survey.last().map(|point| point.1))?;
    (depth_ft > 0.0).then_some(depth_ft)
}

/// The largest angle from the vertical over any stretch of the survey, degrees.
fn steepest_deg(well: &WellSpec) -> f64 {
    well.tubing
        .survey
        .windows(2)
        .map(|pair| ((pair[1].1 - pair[0].1) / (pair[1].0 - pair[0].0)).clamp(0.0, 1.0).acos().to_degrees())
        .fold(0.0, f64::max)
}

fn number_of_tests(about: &str, tests: &[InflowTest]) -> Option<Doubt> {
    if tests.len() == 1 {
        return Some(doubt(
            DoubtKind::WeakFit,
            about,
            "the inflow rests on a single test",
            "no multi-rate test at hand",
            "one point fixes the coefficient but neither the exponent nor its own error: add points at other rates",
        ));
    }
    // Log-log slope over hardly any distance: the exponent is then mostly the gauge's error.
    let squares = tests.iter().filter_map(|test| {
        let flowing_psia = test.measured.flowing_psia()?;
        Some((test.reservoir_psia.powi(2) - flowing_psia.powi(2)) / test.reservoir_psia.powi(2))
    });
    let (low, high, count) =
        squares.fold((f64::INFINITY, 0.0_f64, 0), |(low, high, count), x| (low.min(x), high.max(x), count + 1));
    (count > 1 && high < 1.5 * low).then(|| {
        doubt(
            DoubtKind::WeakFit,
            about,
            "the tests were taken at nearly the same drawdown",
            "one choke size",
            "the exponent is hardly determined by them: state it, or add points at other rates",
        )
    })
}

/// Doubt about a measurement by its day: long before the start of the forecast, or after it.
pub(super) fn age(
    about: &str,
    what: &str,
    on: Date,
    field: &FieldSpec,
    cause_if_old: &str,
    advice_if_old: &str,
) -> Option<Doubt> {
    let months = f64::from(on.until(field.period.start).ok()?.get_days()) / DAYS_IN_MONTH;
    if months > OLD_MONTHS {
        let seen = format!("{what} was {months:.0} months old at the start of the forecast");
        Some(doubt(DoubtKind::TestMismatch, about, seen, cause_if_old, advice_if_old))
    } else if months < 0.0 {
        Some(doubt(
            DoubtKind::UnlikelyValue,
            about,
            format!("{what} was taken after the start of the forecast"),
            "a slip in the date, or a start that was never moved",
            "move period.start to the day of the last data",
        ))
    } else {
        None
    }
}

fn one_test(about: &str, test: &InflowTest, well: &WellSpec, field: &FieldSpec) -> Vec<Doubt> {
    let mut out = Vec::new();
    let when = test.on.map_or_else(|| "an undated test".to_owned(), |on| format!("the test of {on}"));
    out.extend(test.on.and_then(|on| {
        let advice = "tests older than two years say little about today's skin and gas: test again";
        age(about, &when, on, field, "no newer test", advice)
    }));
    let today_psia = match &field.tank.produced {
        Some(produced) => produced.measured_pressure_psia,
        None => Some(field.tank.pressure_psia),
    };
    if let Some(today_psia) = today_psia {
        let apart = test.reservoir_psia / today_psia - 1.0;
        if apart.abs() > 0.1 {
            out.push(doubt(
                DoubtKind::PressureMismatch,
                about,
                format!(
                    "the reservoir pressure of {when} ({} psia) is {:.0} % off that at the start of the forecast ({} psia)",
                    short(test.reservoir_psia),
                    100.0 * apart,
                    short(today_psia)
                ),
                "an old test, another datum, or production that the scenario does not mention",
                "check datum and date; a tank that has produced has its volumes in [tank.produced]",
            ));
        }
    }
    if let Some((wellhead_psia, gor_scf_stb)) = test.measured.separator() {
        let fluid = &field.fluid;
        let undersaturated = fluid.bubble_point_psia.is_some_and(|pb_psia| test.reservoir_psia > pb_psia);
        let apart = gor_scf_stb / fluid.solution_gor_scf_stb - 1.0;
        if apart < -0.2 || (undersaturated && apart > 0.2) {
            out.push(doubt(
                DoubtKind::TestMismatch,
                about,
                format!(
                    "the gas-oil ratio of {when} ({} scf/STB) does not fit the oil's ({} scf/STB)",
                    short(gor_scf_stb),
                    short(fluid.solution_gor_scf_stb)
                ),
                "free gas or gas that was not metered, or a unit",
                "check the separator's gas meter and fluid.solution_gor",
            ));
        }
        if wellhead_psia < 0.95 * well.line_pressure_psia {
            out.push(doubt(
                DoubtKind::TestMismatch,
                about,
                format!(
                    "the wellhead pressure of {when} ({} psia) lies below the line pressure ({} psia)",
                    short(wellhead_psia),
                    short(well.line_pressure_psia)
                ),
                "gauge against absolute, or a line pressure that has risen since",
                "check both units",
            ));
        }
    }
    out
}
