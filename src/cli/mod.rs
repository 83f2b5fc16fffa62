//! Arguments, commands, text for the terminal.

mod args;
mod calibrate;
mod calibrate_text;
mod check;
mod compare;
mod compare_text;
mod context;
mod curves;
mod edge;
mod edge_text;
mod failure;
mod fluid;
mod forecast;
mod new;
mod output;
mod screen;
mod seen;
mod summary_text;

pub use calibrate_text::calibrate_text;
pub use compare_text::compare_text;
pub use summary_text::forecast_text;

use args::{Args, Command};
use clap::Parser;
use std::process::ExitCode;

/// How a command ended without failing.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Done {
    /// Everything holds.
    Well,
    /// Results are written, but a check of them failed.
    Doubtful,
}

/// Runs the program on the process's arguments.
pub fn run() -> ExitCode {
    let args = match Args::try_parse() {
        Ok(args) => args,
        Err(error) => {
            // Where help or message cannot be printed nobody is there to read it.
            error.print().ok();
            return ExitCode::from(u8::try_from(error.exit_code()).unwrap_or(2));
        }
    };
    let done = match &args.command {
        Command::New(new) => new::run(new),
        Command::Check(check) => check::run(check),
        Command::Forecast(forecast) => forecast::run(forecast),
        Command::Compare(compare) => compare::run(compare),
        Command::Calibrate(calibrate) => calibrate::run(calibrate),
        Command::Fluid(fluid) => fluid::run(fluid),
        Command::Curves(curves) => curves::run(curves),
        Command::Edge(edge) => edge::run(edge),
    };
    match done {
        Ok(Done::Well) => ExitCode::SUCCESS,
        Ok(Done::Doubtful) => ExitCode::from(3),
        Err(failure) => {
            failure.print();
            failure.code()
        }
    }
}
