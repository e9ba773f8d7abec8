//! The budget on one page of text.

use std::fmt::Write;

use super::layout::{axes_table, verdict_text};
use super::momentum::phase_text;
use super::table::Table;
use super::unload::unload_text;
use super::words::{heading, number, paragraph, percent, plain, shortened, vector};
use crate::config::MarginRule;
use crate::layout::TravelEnd;
use crate::lifetime::{PhaseSummary, TimingGain, TypicalUnload};
use crate::mission::{Bound, Margin, Scenario};
use crate::montecarlo::{Budget, Checked, Distribution, Ended};
use crate::propellant::ROWS;

const SECONDS_PER_YEAR: f64 = 31_557_600.0;

fn ledger_row(name: &str, distribution: &Distribution, format: &dyn Fn(f64) -> String) -> Vec<String> {
    let at = |p: f64| distribution.at(p).map_or_else(String::new, |estimate| format(estimate.value));
    vec![name.to_owned(), format(distribution.nominal), format(distribution.mean), at(0.50), at(0.95), at(0.99)]
}

/// The ledger with full digits, for programs.
#[must_use]
pub fn ledger_table(budget: &Budget) -> Table {
    let mut table = Table::new(&["row", "nominal_kg", "mean_kg", "p50_kg", "p95_kg", "p99_kg"]);
    let full = |x: f64| x.to_string();
    for (row, distribution) in ROWS.iter().zip(&budget.rows) {
        table.push(ledger_row(row.key(), distribution, &full));
    }
    table.push(ledger_row("attitude_total", &budget.attitude, &full));
    table.push(ledger_row("needed", &budget.needed, &full));
    table
}

fn answer(budget: &Budget) -> String {
    let p95 = budget.attitude.at(0.95);
    let bound = match p95.and_then(|estimate| estimate.upper) {
        Some(upper) => {
            format!("at most {} kg in 95 % of lifetimes (upper limit with {:.0} % confidence)", number(upper, 4), budget.confidence * 100.0)
        }
        None => "a P95 that this few lifetimes cannot bound".to_owned(),
    };
    let life = budget.life_s.iter().find(|(p, _)| (p - 0.95).abs() < 1e-9).and_then(|(_, life)| *life);
    let life = life.map_or_else(
        || " At least 95 % of lifetimes never run dry.".to_owned(),
        // A rate carried on for centuries says nothing but that the tank is large.
        |life| match life / SECONDS_PER_YEAR {
            years if years > 100.0 => " 95 % of lifetimes could go on for more than 100 years at this rate.".to_owned(),
            years => format!(" 95 % of lifetimes last {} years or longer.", number(years, 3)),
        },
    );
    // A lower limit of 99.97 % must not read as certainty.
    let fine = |share: f64| format!("{:.3} %", share * 100.0);
    let enough = if budget.enough.share >= 1.0 {
        format!("in every lifetime flown (probability at least {})", fine(budget.enough.lower))
    } else {
        format!("with probability {} (at least {})", fine(budget.enough.share), fine(budget.enough.lower))
    };
    paragraph(
        "  ",
        "  ",
        &format!(
            "Attitude control takes {} kg nominally and {bound}. The {} kg loaded are enough {enough}.{life}",
            number(budget.attitude.nominal, 4),
            number(budget.loaded_kg, 4),
        ),
    )
}

fn ledger(budget: &Budget, margin: &Margin) -> String {
    // Without the sign of a zero that was rounded to.
    let kg = |x: f64| format!("{:.3}", if x.abs() < 5e-4 { 0.0 } else { x });
    let mut table = Table::new(&["propellant, kg", "nominal", "mean", "P50", "P95", "P99"]);
    // Functions that the mission does not use are left out; the other formats have them all.
    let used = |d: &Distribution| d.nominal.abs() > 0.0 || d.sd > 0.0;
    for (row, distribution) in ROWS.iter().zip(&budget.rows).filter(|(_, distribution)| used(distribution)) {
        table.push(ledger_row(&plain(row.key()), distribution, &kg));
    }
    table.push(ledger_row("attitude control, total", &budget.attitude, &kg));
    table.push(ledger_row("needed on board", &budget.needed, &kg));
    let limits = budget.attitude.quantiles.iter().map(|q| {
        let limit = |x: Option<f64>| x.map_or_else(|| "—".to_owned(), kg);
        vec![format!("P{:.0}", q.p * 100.0), limit(q.lower), kg(q.value), limit(q.upper)]
    });
    let mut bounds = Table::new(&["attitude total, kg", "lower limit", "estimate", "upper limit"]);
    limits.for_each(|row| bounds.push(row));
    let note = format!(
        "Needed on board adds orbit burns, leakage, residual and what is loaded too little to the total, not the margin. Limits are one-sided, each with {:.0} % confidence, {}.",
        budget.confidence * 100.0,
        match budget.design.replicates() {
            Some((_, replicates)) => format!("estimated from the scatter of {replicates} replicates, taken as normal"),
            None => "free of any assumption on the distribution".to_owned(),
        }
    );
    let blanket = blanket_text(budget, margin);
    let timing = budget.timing.map_or_else(String::new, |gain| paragraph("  ", "  ", &timing_text(&gain)));
    format!("{}{}\n{}{blanket}{timing}", table.to_text(), paragraph("  ", "  ", &note), bounds.to_text())
}

/// How many lifetimes were drawn, and what ended it.
fn drawn(budget: &Budget) -> String {
    let (count, seed) = (budget.lifetimes, budget.design.seed);
    let width = |width: f64| format!("{:.2} %", width * 100.0);
    let asked = budget.design.precision.map_or((0.95, 0.0), |precision| (precision.quantile, precision.width));
    let quantile = format!("P{}", asked.0 * 100.0);
    match (budget.ended, budget.design.replicates()) {
        (Ended::Stopped, _) => {
            let most = budget.design.precision.map_or(budget.design.lifetimes, |precision| precision.at_most);
            format!(
                "STOPPED BY THE USER after {count} of {most} lifetimes, seed {seed}: every figure below is of those alone, without drivers"
            )
        }
        (Ended::Precise(reached), _) => format!(
            "{count} lifetimes, seed {seed}, drawn until the interval of {quantile} was narrower than {} ({} reached)",
            width(asked.1),
            width(reached)
        ),
        (Ended::Cap(reached), _) => format!(
            "{count} lifetimes, seed {seed}, the most allowed: the interval of {quantile} is {}, not within {} as asked",
            reached.map_or_else(|| "still open".to_owned(), width),
            width(asked.1)
        ),
        (Ended::Number, Some((size, replicates))) => format!("{replicates} Latin hypercubes of {size} lifetimes, seed {seed}"),
        (Ended::Number, None) => format!("{count} lifetimes, seed {seed}"),
    }
}

/// What the margin rule amounts to, beside the limit that the lifetimes give.
fn blanket_text(budget: &Budget, margin: &Margin) -> String {
    let rule = match margin.rule {
        MarginRule::Own => "The stated margin",
        MarginRule::EsaAssessment => "The margin of ESA SRE-PA/2011.097, 2.3,",
        MarginRule::P95 => {
            return paragraph("  ", "  ", "No blanket margin: the P95 upper limit above is the requirement.");
        }
    };
    if margin.attitude <= 0.0 {
        return String::new();
    }
    let text = format!(
        "{rule} on attitude control ({:.0} %) makes {} kg, which {} stay within (probability at least {:.2} %).",
        margin.attitude * 100.0,
        number(budget.attitude.nominal * (1.0 + margin.attitude), 4),
        if budget.within_margin.share >= 1.0 {
            "all lifetimes flown".to_owned()
        } else {
            format!("{:.2} % of lifetimes", budget.within_margin.share * 100.0)
        },
        budget.within_margin.lower * 100.0
    );
    paragraph("  ", "  ", &text)
}

/// What waiting for the cheapest point of the orbit saves.
fn timing_text(gain: &TimingGain) -> String {
    let saved = gain.as_due_kg - gain.cheapest_kg;
    format!(
        "Unloads wait for the cheapest point of the orbit: {} kg nominally in place of {} kg as due, {} kg ({:.1} %) less.",
        number(gain.cheapest_kg, 4),
        number(gain.as_due_kg, 4),
        number(saved, 3),
        saved / gain.as_due_kg * 100.0
    )
}

fn drivers(budget: &Budget) -> String {
    if budget.ended == Ended::Stopped {
        return paragraph("  ", "  ", "Not computed: the run was stopped.");
    }
    if budget.drivers.is_empty() {
        return paragraph("  ", "  ", "Nothing in the configuration is uncertain.");
    }
    let mut table = Table::new(&["what drives the attitude total", "alone", "with interactions"]);
    // An estimate of a share may fall a little below zero; the share itself cannot.
    let whole = |share: f64| (share * 100.0).round().max(0.0).abs();
    let share = |(value, (low, high)): (f64, (f64, f64))| format!("{} % ({} to {})", whole(value), whole(low), whole(high));
    for driver in budget.drivers.iter().take(8) {
        table.push(vec![shortened(&driver.parameter, 42), share(driver.first_order), share(driver.total)]);
    }
    let note = "Shares of the variance (Sobol' indices) with 95 % bootstrap intervals; vectors count as one.";
    format!("{}{}\n{}", table.to_text(), paragraph("  ", "  ", note), swing_table(budget))
}

/// The widest swings.
fn swing_table(budget: &Budget) -> String {
    let mut table = Table::new(&["one at a time", "its P5", "its P95", "kg at P5", "kg at P95"]);
    let kg = |x: f64| format!("{x:.3}");
    for swing in budget.swings.iter().take(8) {
        let value = |x: f64| if swing.unit.is_empty() { number(x, 3) } else { format!("{} {}", number(x, 3), swing.unit) };
        let ((low, high), (at_low, at_high)) = (swing.values, swing.totals_kg);
        table.push(vec![shortened(&swing.parameter, 34), value(low), value(high), kg(at_low), kg(at_high)]);
    }
    let note = format!(
        "The nominal attitude total of {} kg with one quantity at its P5 and its P95, all others nominal.",
        kg(budget.attitude.nominal)
    );
    format!("{}{}", table.to_text(), paragraph("  ", "  ", &note))
}

/// A figure in the unit of its requirement.
fn in_unit(value: f64, unit: &str) -> String {
    if unit.is_empty() { percent(value) } else { format!("{} {unit}", number(value, 4)) }
}

fn requirement(checked: &Checked) -> Vec<String> {
    let unit = checked.requirement.figure.unit();
    let (sign, limit) = match checked.requirement.bound {
        Bound::AtMost(limit) => ("≤", limit),
        Bound::AtLeast(limit) => ("≥", limit),
    };
    vec![
        checked.requirement.name.clone(),
        checked.requirement.figure.name().to_owned(),
        checked.value.map_or_else(|| "—".to_owned(), |value| in_unit(value, unit)),
        format!("{sign} {}", in_unit(limit, unit)),
        if checked.met { "met" } else { "NOT MET" }.to_owned(),
    ]
}

pub(super) fn requirements_table(list: &[Checked]) -> String {
    let mut table = Table::new(&["requirement", "figure", "value", "bound", ""]);
    for checked in list {
        table.push(requirement(checked));
    }
    table.to_text()
}

fn valves(budget: &Budget, scenario: &Scenario) -> String {
    let most = scenario.vehicle.propulsion.thrusters.iter().zip(&budget.cycles).max_by(|a, b| a.1.nominal.total_cmp(&b.1.nominal));
    let Some((thruster, cycles)) = most else { return String::new() };
    let qualified = scenario.vehicle.propulsion.qualified_pulses.map_or_else(String::new, |limit| format!("; qualified for {limit:.0}"));
    let p95 = cycles.at(0.95).map_or(f64::NAN, |estimate| estimate.value);
    let mut text = format!("Busiest valve: {}, {:.0} pulses nominally, {p95:.0} at P95{qualified}.", thruster.name, cycles.nominal);
    if let Some(push) = budget.unload_delta_v.filter(|push| push.each_m_per_s > 1e-9) {
        let _ = write!(
            text,
            " An unload pushes the spacecraft by {} mm/s in the mean; in a year they add up to {} mm/s away from the centre, along the flight and along the orbit normal.",
            number(push.each_m_per_s * 1e3, 3),
            vector(&(push.per_year_m_per_s * 1e3), 2)
        );
    }
    paragraph("  ", "  ", &text)
}

const CAUTIONS: [&str; 3] = [
    "Preliminary design figures from models with stated assumptions; they replace neither the analyses nor the margins that your mission's standards ask for, and a qualified review decides.",
    "Facets do not shade one another unless declared to; propellant slosh, flexible modes and the forces of plumes on facets are left out.",
    "Hydrazine and other propellants are toxic, and tanks are pressurised: loading and handling belong to trained crews under the range's safety rules.",
];

/// The budget on one page.
#[must_use]
pub fn budget_text(scenario: &Scenario, budget: &Budget, phases: &[PhaseSummary], unload: Option<&TypicalUnload>) -> String {
    let years = scenario.mission.duration_s() / SECONDS_PER_YEAR;
    let title = format!(
        "{}: attitude-control budget over {} years from {}; {}.",
        scenario.vehicle.name,
        number(years, 3),
        scenario.mission.start,
        drawn(budget)
    );
    let mut text = paragraph("", "", &title);
    let mut section = |title: &str, body: String| {
        text.push_str(&heading(title));
        text.push_str(&body);
    };
    section("Answer", answer(budget));
    if !budget.requirements.is_empty() {
        section("Requirements", requirements_table(&budget.requirements));
    }
    section("Propellant", ledger(budget, &scenario.settings.margin));
    section("Drivers", drivers(budget));
    for case in &budget.layout {
        let tank = if case.travel_end == TravelEnd::Start { "full" } else { "empty" };
        let title = format!("Thruster layout, all working, tank {tank} (body frame)");
        let at = format!("Centre of mass {} m.", vector(&case.centre_of_mass_m, 3));
        let table = if case.travel_end == TravelEnd::Start { axes_table(case).to_text() } else { String::new() };
        let verdicts = verdict_text(&case.pure_torque, "Pure torque") + &verdict_text(&case.any_force, "Torque with net force");
        section(&title, paragraph("  ", "  ", &at) + &verdicts + &table);
    }
    for phase in phases {
        section(&format!("Momentum in phase {} (secular: inertial frame J2000)", phase.name), phase_text(phase));
    }
    if let Some(unload) = unload {
        let body = unload_text(unload, &scenario.vehicle.propulsion.thrusters) + &valves(budget, scenario);
        section(&format!("The largest nominal unload, in phase {}", unload.phase), body);
    }
    if !budget.warnings.is_empty() {
        section("Warnings", budget.warnings.iter().map(|warning| paragraph("  • ", "    ", warning)).collect());
    }
    section("Cautions", CAUTIONS.iter().map(|caution| paragraph("  • ", "    ", caution)).collect());
    text
}
