//! The command line.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

/// Attitude-control propellant, wheel momentum and thruster layout, from one YAML description of a
/// spacecraft and its mission.
#[derive(Debug, Parser)]
#[command(name = "couplet", version, max_term_width = 80)]
pub(super) struct Cli {
    #[command(subcommand)]
    pub(super) command: Command,
}

#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// The whole budget: layout, momentum, unloads, propellant with confidence, drivers, requirements.
    Budget(BudgetArgs),
    /// What alternatives change: the file alone against each --with, each --assume, and all --set together.
    Compare(Common),
    /// Figures over one or two inputs, and where a requirement is just met.
    Sweep(SweepArgs),
    /// Put the parts of a budget together that `budget --part` computed.
    Join(JoinArgs),
    /// Torque of the thruster layout on every axis and in every direction, in every failure case.
    Layout(Common),
    /// Disturbance torques by source, secular and cyclic momentum, wheels, unload interval.
    Momentum(Common),
    /// One unload as valve commands.
    Unload(UnloadArgs),
    /// Validate the configuration; with --resolved print it with the origin of every value.
    Check(CheckArgs),
    /// Write a commented configuration to begin with, for a kind of mission.
    New(NewArgs),
    /// Print the JSON Schema of the configuration, for editors.
    Schema(Output),
    /// Print the completions for a shell.
    Completions(CompletionArgs),
    /// Print the manual page, or write those of all commands to a folder.
    Man(ManArgs),
}

/// How results are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(super) enum Format {
    /// For a person, 80 columns.
    Text,
    /// For programs, all figures.
    Json,
    /// For spreadsheets, the main table.
    Csv,
}

#[derive(Debug, Clone, Args)]
pub(super) struct Output {
    /// Write the result to this file, whole or not at all. Default: standard output.
    #[arg(long, value_name = "FILE")]
    pub(super) out: Option<PathBuf>,
}

#[derive(Debug, Clone, Args)]
pub(super) struct Common {
    /// The configuration, such as configs/heron.yaml.
    pub(super) file: PathBuf,

    /// A YAML file laid over it, key by key; may be repeated.
    #[arg(long = "with", value_name = "OVERLAY")]
    pub(super) overlays: Vec<PathBuf>,

    /// A set of assumptions that the configuration describes, laid over it by name; may be repeated.
    #[arg(long, value_name = "NAME")]
    pub(super) assume: Vec<String>,

    /// One key changed, such as --set wheels.capacity="8 N m s"; may be repeated.
    #[arg(long = "set", value_name = "KEY=VALUE")]
    pub(super) settings: Vec<String>,

    /// How the result is written.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub(super) format: Format,

    #[command(flatten)]
    pub(super) output: Output,

    /// Seed of the draws, a whole number. Default: budget.seed.
    #[arg(long, value_name = "N")]
    pub(super) seed: Option<u64>,

    /// Lifetimes drawn, such as 100000. Default: budget.lifetimes.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u64).range(1..=100_000_000))]
    pub(super) lifetimes: Option<u64>,

    /// Threads; the result does not depend on them. Default: one for each core.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub(super) threads: Option<u16>,

    /// No progress and no warnings on standard error.
    #[arg(long)]
    pub(super) quiet: bool,
}

#[derive(Debug, Args)]
pub(super) struct BudgetArgs {
    #[command(flatten)]
    pub(super) common: Common,

    /// Only how one row of the ledger comes about in the nominal mission, such as `wheel_unloading`.
    #[arg(long, value_name = "ROW")]
    pub(super) explain: Option<String>,

    /// Draw on until the interval of P95 is this narrow, such as "1 %"; --lifetimes then is the most. Default: budget.precision.
    #[arg(long, value_name = "WIDTH")]
    pub(super) precision: Option<String>,

    /// Compute only this share of the lifetimes and write it to --out, for `couplet join`; such as 3/8.
    #[arg(long, value_name = "K/N")]
    pub(super) part: Option<String>,

    /// Write one row a lifetime (draws, ledger, total) to this .parquet or .csv file.
    #[arg(long, value_name = "FILE")]
    pub(super) lifetimes_out: Option<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct JoinArgs {
    #[command(flatten)]
    pub(super) common: Common,

    /// All parts of the run, in any order.
    #[arg(required = true, value_name = "PART")]
    pub(super) parts: Vec<PathBuf>,

    /// Write one row a lifetime (draws, ledger, total) to this .parquet or .csv file.
    #[arg(long, value_name = "FILE")]
    pub(super) lifetimes_out: Option<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct SweepArgs {
    #[command(flatten)]
    pub(super) common: Common,

    /// A key and its range or list, such as "wheels.capacity=4 .. 20 N m s" or "mission.start=2028-01-01 | 2031-01-01"; once or twice.
    #[arg(long, value_name = "KEY=FROM..TO")]
    pub(super) vary: Vec<String>,

    /// Points of a range, both ends included.
    #[arg(long, value_name = "N", default_value_t = 7, value_parser = clap::value_parser!(u16).range(2..=1000))]
    pub(super) steps: u16,

    /// A figure to show, such as `propellant_p95`; may be repeated. Default: propellant, its probability of being enough, fill of the wheels.
    #[arg(long, value_name = "FIGURE")]
    pub(super) show: Vec<String>,

    /// Find where this is just met along the range, such as `propellant_p95 <= 38 kg`.
    #[arg(long, value_name = "CONDITION")]
    pub(super) until: Option<String>,
}

#[derive(Debug, Args)]
pub(super) struct CheckArgs {
    #[command(flatten)]
    pub(super) common: Common,

    /// Print the configuration with overlays, assumptions and settings in it and short forms written out, each value with its origin.
    #[arg(long)]
    pub(super) resolved: bool,
}

#[derive(Debug, Args)]
pub(super) struct NewArgs {
    /// Kind of mission: low-orbit, geostationary, elliptic, deep-space or cold-gas.
    pub(super) kind: Option<String>,

    /// File to write, `-` for standard output; nothing is overwritten. Default: the kind with .yaml.
    pub(super) file: Option<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct CompletionArgs {
    /// The shell.
    #[arg(value_enum)]
    pub(super) shell: clap_complete::Shell,

    #[command(flatten)]
    pub(super) output: Output,
}

#[derive(Debug, Args)]
pub(super) struct ManArgs {
    /// Folder for the pages of the program and of each command. Default: the program's page to standard output.
    #[arg(long, value_name = "DIR")]
    pub(super) dir: Option<PathBuf>,
}

#[derive(Debug, Args)]
pub(super) struct UnloadArgs {
    #[command(flatten)]
    pub(super) common: Common,

    /// Momentum in the wheels, body frame, such as "1 2 -0.5 N m s". Default: the largest of the nominal mission.
    #[arg(long, value_name = "VECTOR", allow_hyphen_values = true)]
    pub(super) momentum: Option<String>,

    /// Push that the unload may leave: `zero`, `any`, or a price on it, such as "0.5 g/(N s)". Default: `propulsion.net_force`.
    #[arg(long, value_name = "CHOICE", allow_hyphen_values = true)]
    pub(super) net_force: Option<String>,
}
