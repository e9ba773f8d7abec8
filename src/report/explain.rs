//! How one row of the ledger comes about, entry by entry.

use serde_json::{Value, json};

use super::table::Table;
use super::words::{number, paragraph, plain, vector};
use crate::lifetime::{Entry, Outcome, Plan, What};
use crate::propellant::{ROWS, Row};

const DAY_S: f64 = 86_400.0;
/// Entries that the text shows; a mission has hundreds.
const SHOWN: usize = 45;

/// The row of a name as the machine-readable output writes it.
#[must_use]
pub fn row_named(name: &str) -> Option<Row> {
    ROWS.into_iter().find(|row| row.key() == name || plain(row.key()) == name)
}

/// Names of all rows.
#[must_use]
pub fn row_names() -> Vec<&'static str> {
    ROWS.iter().map(|row| row.key()).collect()
}

/// One line for each entry of a row in the nominal flight.
#[must_use]
pub fn explain_table(plan: &Plan, row: Row) -> Table {
    let mut table = Table::new(&["day", "times", "what", "price g", "with pulses g", "sum kg"]);
    for entry in plan.books().iter().filter(|entry| entry.row == row) {
        let day = plan.strata()[entry.stratum].start_s / DAY_S;
        table.push(vec![
            format!("{day:.0}"),
            number(entry.times, 5),
            what(&entry.what, entry),
            entry.price_kg.map_or_else(String::new, |kg| number(kg * 1e3, 5)),
            number(entry.kg / entry.times * 1e3, 5),
            format!("{:.6}", entry.kg),
        ]);
    }
    table
}

fn what(what: &What, entry: &Entry) -> String {
    match what {
        What::Impulse(h) => format!("{} N m s", vector(h, 4)),
        What::Pulses(axis, bit) => format!("{} N m s about {}", number(*bit, 4), ["x", "y", "z"].get(*axis).copied().unwrap_or_default()),
        What::Burn { delta_v_m_per_s, mass_kg, speed_m_per_s } => {
            format!("{} m/s, {} kg at {} m/s", number(*delta_v_m_per_s, 4), number(*mass_kg, 5), number(*speed_m_per_s, 5))
        }
        What::Time => format!("{} d", number(entry.times / DAY_S, 4)),
    }
}

/// The same for programs.
#[must_use]
pub fn explain_json(plan: &Plan, row: Row, nominal: &Outcome) -> Value {
    let entry = |entry: &Entry| {
        let mut value = json!({ "start_s": plan.strata()[entry.stratum].start_s, "times": entry.times, "propellant_kg": entry.kg });
        let more = match entry.what {
            What::Impulse(h) => json!({ "impulse_N_m_s": [h.x, h.y, h.z], "price_kg": entry.price_kg }),
            What::Pulses(axis, bit) => json!({ "axis": axis, "bit_N_m_s": bit }),
            What::Burn { delta_v_m_per_s, mass_kg, speed_m_per_s } => {
                json!({ "delta_v_m_per_s": delta_v_m_per_s, "mass_kg": mass_kg, "exhaust_speed_m_per_s": speed_m_per_s })
            }
            What::Time => json!({}),
        };
        if let (Value::Object(value), Value::Object(more)) = (&mut value, more) {
            value.extend(more);
        }
        value
    };
    let entries: Value = plan.books().iter().filter(|entry| entry.row == row).map(entry).collect();
    json!({ "row": row.key(), "nominal_kg": nominal.row(row), "entries": entries })
}

/// The row as text, with the arithmetic in words and the sum.
#[must_use]
pub fn explain_text(plan: &Plan, row: Row, nominal: &Outcome) -> String {
    let sentence = match row {
        Row::Residual => "The share `tank.residual` of the propellant loaded.",
        Row::LoadingError => "The error of the mass loaded, turned round.",
        Row::Margin => "The margins times the nominal rows.",
        Row::OrbitBurns => "m (1 − exp(−Δv/u)) with the mass before the burns of a stretch.",
        Row::Leakage => "The leak times the time.",
        Row::Deadband | Row::SafeMode => "Pulses of the limit cycle of each axis times the propellant of one.",
        _ => {
            "Angular impulses in the body frame, each as often as said, their price at the steady exhaust speed, and the propellant of one with the exhaust speed of its pulses."
        }
    };
    let title = format!("{}: {} kg nominally. {sentence} Day: where the stretch begins.", plain(row.key()), number(nominal.row(row), 6));
    if matches!(row, Row::Residual | Row::LoadingError | Row::Margin) {
        return paragraph("", "", &title);
    }
    let (table, more) = explain_table(plan, row).clipped(SHOWN);
    let note =
        if more == 0 { String::new() } else { paragraph("  ", "  ", &format!("… and {more} entries more: `--format csv` writes all.")) };
    format!("{}\n{}{note}", paragraph("", "", &title), table.to_text())
}
