//! Torque and momentum by source.

use super::table::Table;
use super::words::{heading, number, paragraph, plain, vector};
use crate::lifetime::PhaseSummary;
use crate::momentum::Convergence;

/// One row for each phase and source.
#[must_use]
pub fn momentum_table(phases: &[PhaseSummary]) -> Table {
    let mut table = Table::new(&[
        "phase",
        "source",
        "peak_torque_N_m",
        "secular_x_N_m_s_per_day",
        "secular_y_N_m_s_per_day",
        "secular_z_N_m_s_per_day",
    ]);
    for phase in phases {
        for (source, peak, secular) in &phase.sources {
            let numbers = [*peak, secular.x, secular.y, secular.z].map(|x| x.to_string());
            table.push([phase.name.clone(), (*source).to_owned()].into_iter().chain(numbers).collect());
        }
    }
    table
}

/// Empty for the sum of all sources, whose peaks do not fall together.
fn peak_text(peak: f64) -> String {
    if peak.is_nan() {
        String::new()
    } else if peak > 0.0 {
        format!("{peak:.2e}")
    } else {
        "0".to_owned()
    }
}

/// One phase as text.
pub(super) fn phase_text(phase: &PhaseSummary) -> String {
    let mut table = Table::new(&["source", "peak torque N m", "secular N m s per day", "size"]);
    let all = ("all", f64::NAN, phase.secular_n_m_s_per_day);
    for (source, peak, secular) in phase.sources.iter().chain([&all]) {
        table.push(vec![plain(source), peak_text(*peak), vector(secular, 3), format!("{:.3}", secular.norm())]);
    }
    let wheels = phase
        .wheel_envelope_n_m_s
        .map_or_else(|| "There are no wheels.".to_owned(), |h| format!("The wheels hold {} N m s in every direction.", number(h, 4)));
    let interval = phase.unload_interval_s.map_or_else(
        || "No unloads.".to_owned(),
        |interval| format!("{:.0} unloads, at the shortest {} h apart.", phase.unloads, number(interval / 3600.0, 4)),
    );
    let cyclic =
        format!("Within an orbit the momentum swings by up to {} N m s in the body. {wheels} {interval}", number(phase.cyclic_n_m_s, 3));
    format!("{}{}", table.to_text(), paragraph("  ", "  ", &format!("{cyclic} {}", convergence_text(&phase.convergence))))
}

/// What a phase was simulated with, and how sure of it one can be.
fn convergence_text(used: &Convergence) -> String {
    let step = format!("steps of {} s ({:.2} %)", number(used.step_s, 3), used.step_error * 100.0);
    let strata = match used.strata_error {
        Some(error) => format!("{} spans ({:.2} %)", used.strata, error * 100.0),
        None => format!("{} spans", used.strata),
    };
    let verdict = if used.is_met() { "within" } else { "which misses" };
    format!(
        "Simulated in {step} and {strata}; in brackets the error that refinement showed, {verdict} the tolerance of {:.1} %.",
        used.tolerance * 100.0
    )
}

/// All phases as text.
#[must_use]
pub fn momentum_text(name: &str, phases: &[PhaseSummary]) -> String {
    let mut text = paragraph(
        "",
        "",
        &format!(
            "Disturbance torque and momentum of {name}, nominal. Peak torque in the body; secular momentum in the inertial frame (mean equator of J2000), mean over the phase."
        ),
    );
    for phase in phases {
        text.push_str(&heading(&format!("Phase {}", phase.name)));
        text.push_str(&phase_text(phase));
    }
    text
}
