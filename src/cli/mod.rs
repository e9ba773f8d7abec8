//! The command: one file a subcommand. Only this room and `report` know of text and files.

#![deny(clippy::expect_used, clippy::indexing_slicing)]

mod args;
mod budget;
mod check;
mod compare;
mod interrupt;
mod layout;
mod momentum;
mod new;
mod output;
mod scenario;
mod sweep;
mod unload;
mod vary;

use std::io::Write as _;
use std::process::ExitCode;

use args::{Cli, Command};
use clap::Parser;
use output::Failure;

/// Whether all requirements are met.
type Outcome = Result<bool, Failure>;

/// Runs the command line of this process; the status is 0 done, 1 a requirement is not met, 2 the input
/// or the call is wrong, 3 a fault of the program or the machine, 130 stopped by the user.
#[must_use]
pub fn main() -> ExitCode {
    let cli = match Cli::try_parse() {
        Ok(cli) => cli,
        Err(error) => {
            // Help and version are answers; clap sends them to standard output and the rest to standard error.
            return if error.use_stderr() {
                // Nobody is left to tell if standard error is closed.
                let _ = error.print();
                ExitCode::from(2)
            } else {
                answer(&error)
            };
        }
    };
    let outcome = match &cli.command {
        Command::Budget(run) => budget::run(run),
        Command::Compare(run) => compare::run(run),
        Command::Sweep(run) => sweep::run(run),
        Command::Join(run) => budget::run_join(run),
        Command::Layout(run) => layout::run(run),
        Command::Momentum(run) => momentum::run(run),
        Command::Unload(run) => unload::run(run),
        Command::Check(run) => check::run(run),
        Command::New(run) => new::run(run),
        Command::Completions(run) => new::completions(run),
        Command::Man(run) => new::man(run),
        Command::Schema(run) => check::schema(run),
    };
    match outcome {
        Ok(met) => ExitCode::from(u8::from(!met)),
        Err(failure) => failed(&failure),
    }
}

/// Prints help or version.
fn answer(help: &clap::Error) -> ExitCode {
    // Standard output keeps an unfinished line to itself until it is flushed.
    let printed = help.print().and_then(|()| std::io::stdout().flush());
    match output::written(printed, "the help") {
        Ok(()) => ExitCode::SUCCESS,
        Err(failure) => failed(&failure),
    }
}

fn failed(failure: &Failure) -> ExitCode {
    if !failure.message().is_empty() {
        output::complain(failure.message());
    }
    ExitCode::from(failure.status())
}
