//! `couplet check` and `couplet schema`.

use super::Outcome;
use super::args::{CheckArgs, Common, Format, Output};
use super::budget::pretty;
use super::output::{Failure, Target, complain, styled};
use super::scenario::{Loaded, Refused, document_of, load_quietly};
use crate::config::{Diagnostic, Document, Severity, read, render_all, to_json};
use crate::mission::Scenario;
use crate::report::check_text;

pub(super) fn run(args: &CheckArgs) -> Outcome {
    let common = &args.common;
    match checked(common) {
        Ok((loaded, document)) => {
            let target = Target::of(common, &loaded)?;
            let warnings = &loaded.scenario.warnings;
            let text = match common.format {
                _ if args.resolved => document.resolved(),
                Format::Json => pretty(&serde_json::json!({
                    "schema": "couplet/check/1",
                    "provenance": loaded.provenance,
                    "faults": to_json(warnings, Some(&document)),
                    "assumptions": document.assumptions(),
                })),
                Format::Text | Format::Csv => check_text(&loaded.scenario, &loaded.provenance),
            };
            if !common.quiet && !warnings.is_empty() && common.format != Format::Json {
                complain(&render_all(warnings, Some(&document), styled()));
            }
            target.finish(&text)?;
            Ok(true)
        }
        Err((faults, document)) if common.format == Format::Json => {
            let target = Target::open(&common.output, &[&common.file])?;
            let faults = to_json(&faults, document.as_deref());
            target.finish(&pretty(&serde_json::json!({ "schema": "couplet/check/1", "faults": faults })))?;
            Err(Failure::Told)
        }
        Err((faults, document)) => Err(Failure::Input(render_all(&faults, document.as_deref(), styled()))),
    }
}

/// Checks the configuration as it is called, and each set of assumptions that it describes.
fn checked(common: &Common) -> Result<(Loaded, Document), Refused> {
    let (loaded, document) = load_quietly(common)?;
    for name in document.assumptions().iter().filter(|name| !common.assume.contains(name)) {
        let other = document_of(common, std::slice::from_ref(name)).map_err(|faults| (faults, None))?;
        let folder = common.file.parent().unwrap_or_else(|| std::path::Path::new(""));
        let found = read(&other).and_then(|spec| Scenario::in_folder(&spec, folder));
        if let Err(faults) = found {
            let about = |mut fault: Diagnostic| {
                fault.message = format!("with the assumptions `{name}`: {}", fault.message);
                fault
            };
            return Err((faults.into_iter().filter(|fault| fault.severity == Severity::Error).map(about).collect(), Some(Box::new(other))));
        }
    }
    Ok((loaded, document))
}

pub(super) fn schema(output: &Output) -> Outcome {
    let target = Target::open(output, &[])?;
    target.finish(&pretty(&crate::config::schema()))?;
    Ok(true)
}
