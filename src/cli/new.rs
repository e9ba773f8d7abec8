//! `couplet new`, `couplet completions` and `couplet man`.

use std::path::{Path, PathBuf};

use clap::CommandFactory as _;

use super::Outcome;
use super::args::{Cli, CompletionArgs, ManArgs, NewArgs, Output};
use super::output::{Failure, Target, complain};
use crate::config::did_you_mean;

/// A kind of mission, what it is, and its starter.
type Starter = (&'static str, &'static str, &'static str);

/// All starters.
const STARTERS: [Starter; 5] = [
    ("low-orbit", "an Earth observer in a Sun-synchronous orbit, hydrazine, four wheels", include_str!("starters/low-orbit.yaml")),
    ("geostationary", "a relay over a longitude, twelve years of light pressure", include_str!("starters/geostationary.yaml")),
    ("elliptic", "a survey from an eccentric orbit, with passes through the upper air", include_str!("starters/elliptic.yaml")),
    ("deep-space", "an observatory at a Lagrange point, blowdown tank, no couples", include_str!("starters/deep-space.yaml")),
    ("cold-gas", "a small satellite with cold-gas thrusters and three wheels", include_str!("starters/cold-gas.yaml")),
];

pub(super) fn run(args: &NewArgs) -> Outcome {
    let list = || STARTERS.iter().map(|(kind, what, _)| format!("  {kind:14} {what}")).collect::<Vec<_>>().join("\n");
    let Some(kind) = &args.kind else {
        return Err(Failure::Input(format!(
            "error: say what kind of mission to begin with:\n{}\n  = help: `couplet new low-orbit`",
            list()
        )));
    };
    let Some((_, _, text)) = STARTERS.iter().find(|(name, ..)| name == kind) else {
        let help = did_you_mean(kind, STARTERS.iter().map(|(name, ..)| *name)).unwrap_or_else(|| "take one of these".to_owned());
        return Err(Failure::Input(format!("error: no starter is named `{kind}`; there are\n{}\n  = help: {help}", list())));
    };
    let path = args.file.clone().unwrap_or_else(|| PathBuf::from(format!("{kind}.yaml")));
    if path == Path::new("-") {
        Target::open(&Output { out: None }, &[])?.finish(text)?;
        return Ok(true);
    }
    if path.exists() || path.is_symlink() {
        let message = format!("error: {} is there already, and nothing is overwritten", path.display());
        return Err(Failure::Input(format!("{message}\n  = help: name another file: `couplet new {kind} FILE`")));
    }
    Target::open(&Output { out: Some(path.clone()) }, &[])?.finish(text)?;
    complain(&format!("{} is written; next: `couplet budget {}`", path.display(), path.display()));
    Ok(true)
}

pub(super) fn completions(args: &CompletionArgs) -> Outcome {
    let mut script = Vec::new();
    clap_complete::generate(args.shell, &mut Cli::command(), "couplet", &mut script);
    Target::open(&args.output, &[])?.finish(&String::from_utf8_lossy(&script))?;
    Ok(true)
}

pub(super) fn man(args: &ManArgs) -> Outcome {
    let page = |command: clap::Command| {
        let mut text = Vec::new();
        let failed = |error: std::io::Error| Failure::Machine(format!("error: the page cannot be made: {error}"));
        clap_mangen::Man::new(command).render(&mut text).map_err(failed)?;
        Ok::<_, Failure>(String::from_utf8_lossy(&text).into_owned())
    };
    let whole = Cli::command();
    let Some(folder) = &args.dir else {
        Target::open(&Output { out: None }, &[])?.finish(&page(whole)?)?;
        return Ok(true);
    };
    let write = |name: String, command: clap::Command| Target::open(&Output { out: Some(folder.join(name)) }, &[])?.finish(&page(command)?);
    for sub in whole.get_subcommands() {
        let name = format!("couplet-{}", sub.get_name());
        // The pages are about commands as they are typed.
        write(format!("{name}.1"), sub.clone().bin_name(name.replacen('-', " ", 1)))?;
    }
    write("couplet.1".to_owned(), whole)?;
    Ok(true)
}
