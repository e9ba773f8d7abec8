//! From the command line to a plan.

use indicatif::{ProgressBar, ProgressStyle};

use super::args::{Common, Format};
use super::output::{Failure, complain, styled};
use crate::config::{Diagnostic, Document, ResolutionChoice, read, render_all, to_json};
use crate::environment::Trajectory;
use crate::lifetime::{Plan, PlanError};
use crate::mission::Scenario;
use crate::momentum::Resolution;
use crate::report::Provenance;

/// A validated configuration with its provenance.
pub(super) struct Loaded {
    pub(super) scenario: Scenario,
    pub(super) provenance: Provenance,
}

pub(super) fn refused(faults: &[Diagnostic], document: Option<&Document>) -> Failure {
    Failure::Input(render_all(faults, document, styled()))
}

/// The document of a call, with other assumptions beside its own.
pub(super) fn document_of(common: &Common, more: &[String]) -> Result<Document, Vec<Diagnostic>> {
    let assumptions: Vec<&String> = common.assume.iter().chain(more).collect();
    Document::load_assuming(&common.file, &common.overlays, &assumptions, &common.settings)
}

/// Reads and validates the configuration of a call, and tells what in it is worth a second look.
pub(super) fn load(common: &Common) -> Result<Loaded, Failure> {
    let (loaded, document) = load_quietly(common).map_err(|(faults, document)| match common.format {
        Format::Json => {
            let faults = to_json(&faults, document.as_deref());
            Failure::Input(format!("{:#}", serde_json::json!({ "schema": "couplet/check/1", "faults": faults })))
        }
        Format::Text | Format::Csv => refused(&faults, document.as_deref()),
    })?;
    if !common.quiet && !loaded.scenario.warnings.is_empty() {
        complain(&render_all(&loaded.scenario.warnings, Some(&document), styled()));
    }
    Ok(loaded)
}

/// Faults, and the document they are in if it could be read.
pub(super) type Refused = (Vec<Diagnostic>, Option<Box<Document>>);

/// Reads and validates the configuration of a call.
pub(super) fn load_quietly(common: &Common) -> Result<(Loaded, Document), Refused> {
    let document = document_of(common, &[]).map_err(|faults| (faults, None))?;
    let folder = common.file.parent().unwrap_or_else(|| std::path::Path::new(""));
    let mut scenario = match read(&document).and_then(|spec| Scenario::in_folder(&spec, folder)) {
        Ok(scenario) => scenario,
        Err(faults) => return Err((faults, Some(Box::new(document)))),
    };
    scenario.settings.seed = common.seed.unwrap_or(scenario.settings.seed);
    scenario.settings.lifetimes = common.lifetimes.unwrap_or(scenario.settings.lifetimes);
    let provenance = Provenance {
        version: env!("CARGO_PKG_VERSION"),
        config: common.file.display().to_string(),
        config_sha256: document.sha256(),
        ephemerides: ephemerides(&scenario),
        overlays: common.overlays.iter().map(|overlay| overlay.display().to_string()).collect(),
        assumptions: common.assume.clone(),
        settings: common.settings.clone(),
        seed: scenario.settings.seed,
        lifetimes: scenario.settings.lifetimes,
    };
    Ok((Loaded { scenario, provenance }, document))
}

/// Name and SHA-256 of every ephemeris file that a phase flies.
fn ephemerides(scenario: &Scenario) -> std::collections::BTreeMap<String, String> {
    let tables = scenario.mission.phases.iter().filter_map(|phase| match &phase.trajectory {
        Trajectory::Table(table) => Some(&table.0),
        _ => None,
    });
    tables.map(|ephemeris| (ephemeris.file().to_owned(), ephemeris.sha256().to_owned())).collect()
}

/// Simulates the mission.
pub(super) fn plan(scenario: Scenario, common: &Common) -> Result<Plan, Failure> {
    let resolution = match scenario.settings.resolution {
        ResolutionChoice::Default => Resolution::Default,
        ResolutionChoice::Full => Resolution::Full,
    };
    let margin = scenario.settings.margin;
    Plan::new(scenario, resolution, margin).map_err(|error| {
        let file = common.file.display();
        let (place, help) = match &error {
            PlanError::NotServed { .. } => (
                "thrusters",
                format!("`couplet layout {file}` shows what the layout can do; turn or add a thruster, or set `propulsion.net_force: any`"),
            ),
            PlanError::BurnTooLarge { .. } => {
                ("tank.loaded", "load more propellant, or lower the Δv of this burn or of those before it".to_owned())
            }
        };
        Failure::Input(format!("error: {error}\n --> {file}: `{place}`\n  = help: {help}"))
    })
}

/// Runs on the number of threads that was asked for.
pub(super) fn on_threads<T: Send>(common: &Common, work: impl FnOnce() -> T + Send) -> Result<T, Failure> {
    let threads = common.threads.map_or(0, usize::from);
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build();
    pool.map(|pool| pool.install(work)).map_err(|error| Failure::Machine(format!("error: cannot start threads: {error}")))
}

/// Progress on standard error, seen only on a terminal.
pub(super) struct Progress {
    bar: ProgressBar,
}

impl Progress {
    pub(super) fn new(quiet: bool) -> Self {
        let bar = if quiet { ProgressBar::hidden() } else { ProgressBar::no_length() };
        if let Ok(style) = ProgressStyle::with_template("{msg:12} {bar:40} {pos}/{len} {eta}") {
            bar.set_style(style);
        }
        Self { bar }
    }

    pub(super) fn show(&self, step: &'static str, done: u64, of: u64) {
        self.bar.set_message(step);
        self.bar.set_length(of);
        self.bar.set_position(done);
    }

    pub(super) fn finish(&self) {
        self.bar.finish_and_clear();
    }
}
