//! What can be typed.

use crate::report::CAUTION;
use clap::{Args as ClapArgs, Parser, Subcommand};
use jiff::civil::Date;
use std::path::PathBuf;

/// Forecasts when naturally flowing oil wells stop flowing, and what injection buys
#[derive(Debug, Parser)]
#[command(name = "wane", version, after_help = CAUTION, max_term_width = 100, disable_help_subcommand = true)]
pub struct Args {
    #[command(subcommand)]
    pub command: Command,
}

#[derive(Debug, Subcommand)]
pub enum Command {
    /// Write a commented starter scenario that runs
    New(NewArgs),
    /// Read and check a scenario, and list doubts about its data, without running it
    Check(CheckArgs),
    /// Forecast every well until natural flow ends: results into a folder, summary on the screen
    Forecast(ForecastArgs),
    /// Run every case of a scenario and set it beside the scenario as it stands
    Compare(CompareArgs),
    /// Hold the tubing models against flowing surveys and separator tests, and tune them
    Calibrate(CalibrateArgs),
    /// Fluid properties against pressure at tank temperature
    Fluid(FluidArgs),
    /// Inflow and tubing curves and the pressure traverse on a date
    Curves(CurvesArgs),
    /// Edge map: the lowest reservoir pressure at which each well still flows, against water cut
    Edge(EdgeArgs),
}

/// What most commands share.
#[derive(Debug, ClapArgs)]
pub struct Common {
    /// Scenario file (TOML)
    pub file: PathBuf,
    /// Override a value: "well.OP-1.line_pressure=180 psia" (repeatable)
    #[arg(long = "set", value_name = "KEY=VALUE")]
    pub set: Vec<String>,
    /// Print nothing but errors
    #[arg(short, long)]
    pub quiet: bool,
    /// Print a machine-readable summary on standard output
    #[arg(long)]
    pub json: bool,
}

#[derive(Debug, ClapArgs)]
pub struct NewArgs {
    /// Folder to write scenario.toml into; made when it does not exist
    pub dir: PathBuf,
    /// Print nothing but errors
    #[arg(short, long)]
    pub quiet: bool,
}

#[derive(Debug, ClapArgs)]
#[command(after_help = "Exit status: 0 when the scenario can run (also with doubts), 2 when it cannot.")]
pub struct CheckArgs {
    #[command(flatten)]
    pub common: Common,
    /// Check this case only
    #[arg(long, value_name = "NAME")]
    pub case: Option<String>,
}

#[derive(Debug, ClapArgs)]
#[command(after_help = CAUTION)]
pub struct ForecastArgs {
    #[command(flatten)]
    pub common: Common,
    /// Run this case of the scenario
    #[arg(long, value_name = "NAME")]
    pub case: Option<String>,
    /// Folder for the results [default: results/<scenario name>]
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
    /// Do not run the other tubing models to see how far the end of natural flow moves
    #[arg(long)]
    pub no_spread: bool,
}

#[derive(Debug, ClapArgs)]
#[command(after_help = CAUTION)]
pub struct CompareArgs {
    #[command(flatten)]
    pub common: Common,
    /// Folder for the results [default: results/<scenario name>]
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
#[command(after_help = CAUTION)]
pub struct CalibrateArgs {
    #[command(flatten)]
    pub common: Common,
    /// Use this case of the scenario
    #[arg(long, value_name = "NAME")]
    pub case: Option<String>,
    /// Only this well (repeatable)
    #[arg(long, value_name = "NAME")]
    pub well: Vec<String>,
    /// Folder for the results [default: results/<scenario name>-calibration]
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
pub struct FluidArgs {
    #[command(flatten)]
    pub common: Common,
    /// Print the table as CSV
    #[arg(long, conflicts_with = "json")]
    pub csv: bool,
    /// Pressure of a row: "2500 psia" (repeatable) [default: a choice around the bubble point]
    #[arg(long, value_name = "PRESSURE")]
    pub at: Vec<String>,
    /// Write the table and its picture into this folder
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
pub struct CurvesArgs {
    #[command(flatten)]
    pub common: Common,
    /// Date of the curves: 2031-06-01
    #[arg(long, value_name = "DATE", value_parser = date)]
    pub on: Date,
    /// Use this case of the scenario
    #[arg(long, value_name = "NAME")]
    pub case: Option<String>,
    /// Print the curves as CSV
    #[arg(long, conflicts_with = "json")]
    pub csv: bool,
    /// Liquid rate of a point: "800 STB/d" (repeatable) [default: a choice over the whole curve]
    #[arg(long, value_name = "RATE")]
    pub rate: Vec<String>,
    /// Every tubing method, not only the well's own
    #[arg(long)]
    pub all_models: bool,
    /// Write curves, traverses and their pictures into this folder
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
#[command(after_help = CAUTION)]
pub struct EdgeArgs {
    #[command(flatten)]
    pub common: Common,
    /// Use this case of the scenario
    #[arg(long, value_name = "NAME")]
    pub case: Option<String>,
    /// Line pressure of a line beside the well's own: "150 psia" (repeatable) [default: 0.6 and 1.5 times its own]
    #[arg(long, value_name = "PRESSURE")]
    pub line_pressure: Vec<String>,
    /// A string of this inside diameter beside the well's own: "1.995 in" (repeatable)
    #[arg(long, value_name = "DIAMETER")]
    pub diameter: Vec<String>,
    /// Gas-oil ratio at every pressure: "600 scf/STB" (repeatable) [default: that of the forecast at each pressure]
    #[arg(long, value_name = "RATIO")]
    pub gor: Vec<String>,
    /// Run no forecast: no track, and the gas-oil ratio is the gas that the oil dissolves at each pressure
    #[arg(long)]
    pub no_forecast: bool,
    /// Wells seen dead or flowing, as a CSV file: label, reservoir, water_cut and perhaps well, line_pressure, gor, state
    #[arg(long, value_name = "FILE")]
    pub seen: Option<PathBuf>,
    /// Print the lines as CSV
    #[arg(long, conflicts_with = "json")]
    pub csv: bool,
    /// Write the map, the track and their pictures into this folder
    #[arg(short, long, value_name = "DIR")]
    pub output: Option<PathBuf>,
}

fn date(text: &str) -> Result<Date, String> {
    text.parse().map_err(|_| "a date like 2031-06-01 is expected".to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::CommandFactory;

    #[test]
    fn the_arguments_are_consistent_and_all_have_help() {
        let command = Args::command().help_expected(true);
        command.debug_assert();
    }
}
