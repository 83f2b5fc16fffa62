//! Doubts about the flow of a well: what the screens met.

use super::doubts::{doubt, month};
use super::screens::{Breach, Excess, Screens};
use super::{Doubt, DoubtKind, Forecast};
use crate::tubing::{Limited, TubingMethod};

/// All doubts of the screens of one well, in a fixed order.
pub(super) fn about_flow(forecast: &Forecast, name: &str, met: &Screens, doubts: &mut Vec<Doubt>) {
    outside_range(forecast, name, met, doubts);
    if !met.near_sonic.is_empty() {
        doubts.push(doubt(
            DoubtKind::NearSonic,
            name,
            format!("the flow comes near to sonic speed in the tubing: {}", spells(forecast, &met.near_sonic)),
            "high gas-oil ratio on low line pressure; every tubing model here is used outside its range",
            "do not read rates of these months closely; a larger string or a higher line pressure avoids it",
        ));
    }
    heading(forecast, name, met, doubts);
    for (excess, figure) in [(&met.velocity, "maximum_velocity"), (&met.erosion, "erosional_constant")] {
        velocity(forecast, name, excess, figure, doubts);
    }
    deposits(forecast, name, met, doubts);
}

fn outside_range(forecast: &Forecast, name: &str, met: &Screens, doubts: &mut Vec<Doubt>) {
    for method in TubingMethod::ALL {
        let found: Vec<String> = met
            .outside
            .iter()
            .filter(|(m, what, excess)| {
                // Told as near-sonic flow already.
                *m == method && !(*what == Limited::Kinetic && excess.rows.len() == met.near_sonic.len())
            })
            .map(|(_, what, excess)| outside_text(forecast, *what, excess))
            .collect();
        if !found.is_empty() {
            doubts.push(doubt(
                DoubtKind::OutsideRange,
                name,
                format!("{} is used outside the range that it states: {}", method.name(), found.join("; ")),
                "the model rests on data that do not reach so far; the forecast goes on with it",
                "compare with the other tubing models over these months, and with a flowing pressure survey",
            ));
        }
    }
}

fn outside_text(forecast: &Forecast, what: Limited, excess: &Excess) -> String {
    let (quantity, unit, digits) = match what {
        Limited::Diameter => ("inside diameter", " inch", 3),
        Limited::Deviation => ("deviation from vertical", " degrees", 0),
        Limited::MixtureVelocity => ("mixture velocity", " ft/s", 1),
        Limited::LiquidViscosity => ("viscosity of the liquid", " cp", 0),
        Limited::ViscosityNumber => ("viscosity number of the liquid", "", 3),
        Limited::GasLiquidRatio => ("gas-liquid ratio", " scf/STB", 0),
        Limited::LiquidGasRatio => ("liquid-gas ratio", " bbl/MMscf", 0),
        Limited::Kinetic => ("kinetic share of the gradient", "", 2),
    };
    let (side, limit) = if excess.worst > excess.limit { ("up to", "most") } else { ("down to", "least") };
    let when = spells(forecast, &excess.rows);
    format!(
        "{quantity} {side} {:.digits$}{unit} where {:.digits$}{unit} is the {limit}, {when}",
        excess.worst, excess.limit
    )
}

fn heading(forecast: &Forecast, name: &str, met: &Screens, doubts: &mut Vec<Doubt>) {
    if met.heading.is_empty() {
        return;
    }
    let mut seen = vec![format!("it may head: {}", spells(forecast, &met.heading))];
    if let Some((lowest, row)) = met.lowest_margin {
        let side = if lowest < 0.0 { "below" } else { "above" };
        seen.push(format!(
            "the rate lies near or left of the minimum of the tubing curve, {:.0} % {side} it in {}",
            100.0 * lowest.abs(),
            name_of(forecast, row)
        ));
    }
    if !met.slopes.is_empty() {
        seen.push(format!(
            "heading is likely where the curves meet at nearly the same slope: {}",
            spells(forecast, &met.slopes)
        ));
    }
    if !met.slow_gas.rows.is_empty() {
        seen.push(format!(
            "gas rises at {:.1} ft/s at the wellhead where it takes {:.1} ft/s to lift the liquid: {}",
            met.slow_gas.worst,
            met.slow_gas.limit,
            spells(forecast, &met.slow_gas.rows)
        ));
    }
    doubts.push(doubt(
        DoubtKind::Heading,
        name,
        seen.join("; "),
        "left of the minimum less rate makes a heavier column: swings grow, and a well may die of them early",
        "watch the wellhead pressure; a choke steadies the flow, a smaller string moves the minimum",
    ));
}

fn velocity(forecast: &Forecast, name: &str, excess: &Excess, figure: &str, doubts: &mut Vec<Doubt>) {
    if excess.rows.is_empty() {
        return;
    }
    doubts.push(doubt(
        DoubtKind::Velocity,
        name,
        format!(
            "the velocity at the wellhead comes to {:.1} ft/s in {}, {:.2} times what your {figure} allows: {}",
            excess.worst,
            name_of(forecast, excess.worst_row),
            excess.worst / excess.limit,
            spells(forecast, &excess.rows)
        ),
        "much gas at low pressure in a narrow string",
        "a screen against your own figure that certifies nothing: have sand, corrosion and the wellhead itself judged by those who answer for them",
    ));
}

fn deposits(forecast: &Forecast, name: &str, met: &Screens, doubts: &mut Vec<Doubt>) {
    if !met.asphaltene.rows.is_empty() {
        doubts.push(doubt(
            DoubtKind::Deposits,
            name,
            format!("pressures where asphaltene may come out: {}", places(forecast, &met.asphaltene)),
            "the flow passes below the upper onset pressure that is given (and above the lower one, where there is one)",
            "whether it settles is not computed: plan for inhibition or solvent soaks, and check tubing and perforations for a rising pressure drop",
        ));
    }
    if !met.wax.rows.is_empty() {
        doubts.push(doubt(
            DoubtKind::Deposits,
            name,
            format!(
                "the flow is cooler than the wax appearance temperature, down to {:.0} degF: {}",
                met.coolest_degf,
                places(forecast, &met.wax)
            ),
            "the temperatures are those that the scenario gives to the tubing",
            "whether it settles is not computed: plan for scraping, hot oil or inhibition, and measure the flowing wellhead temperature",
        ));
    }
}

/// "84 periods between A and B, in the tubing from 0 ft to 5100 ft of measured depth".
fn places(forecast: &Forecast, breach: &Breach) -> String {
    let mut text = spells(forecast, &breach.rows);
    if let Some((top_ft, bottom_ft)) = breach.depths_ft {
        text += &format!(", in the tubing between {top_ft:.0} ft and {bottom_ft:.0} ft of measured depth");
    }
    for (rows, place) in [(&breach.at_perforations, "at the perforations"), (&breach.in_reservoir, "in the reservoir")]
    {
        match rows.first() {
            None => {}
            Some(_) if rows.len() == breach.rows.len() => text += &format!(", {place}"),
            Some(first) => text += &format!(", {place} from {} on", name_of(forecast, *first)),
        }
    }
    text
}

fn name_of(forecast: &Forecast, row: usize) -> String {
    forecast.periods.get(row).map_or_else(String::new, |p| month(p.start))
}

/// Runs of periods that are named one by one; with more of them only the first and the last period are.
const MOST_SPELLS: usize = 3;

/// "April 2027 to May 2028 and July 2033 (15 periods)".
fn spells(forecast: &Forecast, rows: &[usize]) -> String {
    let (Some(&first), Some(&last)) = (rows.first(), rows.last()) else { return String::new() };
    let runs: Vec<&[usize]> = rows.chunk_by(|a, b| *b == a + 1).collect();
    let count = if rows.len() > 1 { format!(" ({} periods)", rows.len()) } else { String::new() };
    if runs.len() > MOST_SPELLS {
        return format!("{} periods between {} and {}", rows.len(), name_of(forecast, first), name_of(forecast, last));
    }
    let named: Vec<String> = runs
        .iter()
        .map(|run| match run {
            [first, .., last] => format!("{} to {}", name_of(forecast, *first), name_of(forecast, *last)),
            _ => run.first().map_or_else(String::new, |row| name_of(forecast, *row)),
        })
        .collect();
    format!("{}{count}", named.join(" and "))
}
