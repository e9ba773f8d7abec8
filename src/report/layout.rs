//! The layout in words and as a table.

use std::fmt::Write;

use super::table::Table;
use super::words::{number, paragraph, vector};
use crate::layout::{LayoutCase, OutBecause, TravelEnd, Verdict};

/// What is out, in words.
fn out(case: &LayoutCase) -> String {
    match &case.out_because {
        OutBecause::None => "intact".to_owned(),
        OutBecause::Thruster => format!("{} out", case.thrusters_out.join(" ")),
        OutBecause::String(name) => format!("string {name} out"),
    }
}

fn end(end: TravelEnd) -> &'static str {
    match end {
        TravelEnd::Start => "full tank",
        TravelEnd::End => "empty tank",
    }
}

/// Price in g/(N·m·s), or a dash.
pub(super) fn price(price: Option<f64>) -> String {
    price.map_or_else(|| "—".to_owned(), |price| number(price * 1e3, 3))
}

/// One row for each case, force condition and signed axis.
#[must_use]
pub fn layout_table(cases: &[LayoutCase]) -> Table {
    let mut table = Table::new(&["thrusters_out", "centre_of_mass", "net_force", "axis", "most_N_m", "price_kg_per_N_m_s", "thrusters"]);
    for case in cases {
        for (verdict, net) in [(&case.pure_torque, "zero"), (&case.any_force, "any")] {
            for axis in &verdict.axes {
                table.push(vec![
                    case.thrusters_out.join(" "),
                    if case.travel_end == TravelEnd::Start { "start" } else { "end" }.to_owned(),
                    net.to_owned(),
                    axis.axis.to_owned(),
                    axis.most_n_m.to_string(),
                    axis.price.map_or_else(String::new, |price| price.to_string()),
                    axis.thrusters.join(" "),
                ]);
            }
        }
    }
    table
}

/// The verdict on one force condition as sentences.
pub(super) fn verdict_text(verdict: &Verdict, what: &str) -> String {
    let text = if verdict.every_direction {
        let dearest = verdict.dearest.map_or_else(String::new, |(direction, price)| {
            format!(" The dearest direction is {} at {} g per N m s.", vector(&direction, 2), number(price * 1e3, 3))
        });
        format!(
            "{what}: yes, in every direction; at least {} N m, the least along {}.{dearest}",
            number(verdict.guaranteed_n_m, 3),
            vector(&verdict.weakest_direction, 2)
        )
    } else {
        let missing: Vec<&str> = verdict.axes.iter().filter(|axis| axis.price.is_none()).map(|axis| axis.axis).collect();
        let axes = if missing.is_empty() { "an oblique direction".to_owned() } else { missing.join(", ") };
        format!("{what}: NOT in every direction; none along {axes}.")
    };
    paragraph("  ", "    ", &text)
}

/// Torque and price about the signed axes, both force conditions side by side.
pub(super) fn axes_table(case: &LayoutCase) -> Table {
    let mut table = Table::new(&["axis", "pure N m", "g/(N m s)", "thrusters", "any force N m", "g/(N m s)"]);
    for (pure, any) in case.pure_torque.axes.iter().zip(&case.any_force.axes) {
        table.push(vec![
            pure.axis.to_owned(),
            number(pure.most_n_m, 3),
            price(pure.price),
            pure.thrusters.join(" "),
            number(any.most_n_m, 3),
            price(any.price),
        ]);
    }
    table
}

/// All cases as text: a matrix of the pure torque about each axis, then the worst case.
#[must_use]
pub fn layout_text(name: &str, cases: &[LayoutCase]) -> String {
    let mut text = paragraph("", "", &format!("Thruster layout of {name}: torque about the centre of mass, body frame, nominal thrust."));
    for case in cases.iter().filter(|case| case.out_because == OutBecause::None) {
        let at = format!("Intact, {} (centre of mass {} m)", end(case.travel_end), vector(&case.centre_of_mass_m, 3));
        text.push_str(&super::words::heading(&at));
        text.push_str(&verdict_text(&case.pure_torque, "Pure torque"));
        text.push_str(&verdict_text(&case.any_force, "Torque with net force"));
        text.push_str(&axes_table(case).to_text());
    }
    text.push_str(&super::words::heading("Every case: most pure torque about each axis, N m (— none)"));
    let mut matrix = Table::new(&["case", "tank", "+x", "-x", "+y", "-y", "+z", "-z", "everywhere"]);
    for case in cases {
        let torque = |n_m: f64| if n_m > 1e-9 { number(n_m, 3) } else { "—".to_owned() };
        let mut row = vec![shortened(&out(case)), end(case.travel_end).trim_end_matches(" tank").to_owned()];
        row.extend(case.pure_torque.axes.iter().map(|axis| torque(axis.most_n_m)));
        row.push(torque(case.pure_torque.guaranteed_n_m));
        matrix.push(row);
    }
    text.push_str(&matrix.to_text());
    let lost = cases.iter().filter(|case| !case.pure_torque.every_direction).count();
    let _ = writeln!(text, "\n  {lost} of {} cases lack pure torque in some direction.", cases.len());
    text
}

/// At most 18 characters.
fn shortened(text: &str) -> String {
    if text.chars().count() <= 18 { text.to_owned() } else { text.chars().take(17).chain(['…']).collect() }
}
