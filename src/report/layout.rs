//! The layout in words and as a table.

use std::fmt::Write;

use super::table::Table;
use super::words::{number, paragraph, vector};
use crate::authority::NetForce;
use crate::layout::{LayoutCase, OutBecause, Study, TravelEnd, Verdict};
use crate::montecarlo::Checked;

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
        let unserved: Vec<&str> = verdict.axes.iter().filter(|axis| axis.price.is_none()).map(|axis| axis.axis).collect();
        let axes = if unserved.is_empty() { "some oblique directions".to_owned() } else { unserved.join(", ") };
        let missing: Vec<String> = verdict.missing.iter().map(|direction| vector(direction, 2)).collect();
        let neither =
            if missing.is_empty() || missing.len() == 3 { String::new() } else { format!(" Neither way about {}.", missing.join(", ")) };
        format!("{what}: NOT in every direction; none along {axes}.{neither}")
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
pub fn layout_text(name: &str, study: &Study, requirements: &[Checked]) -> String {
    let cases = &study.cases;
    let mut text = paragraph("", "", &format!("Thruster layout of {name}: torque about the centre of mass, body frame, nominal thrust."));
    for case in cases.iter().filter(|case| case.out_because == OutBecause::None) {
        let at = format!("Intact, {} (centre of mass {} m)", end(case.travel_end), vector(&case.centre_of_mass_m, 3));
        text.push_str(&super::words::heading(&at));
        text.push_str(&verdict_text(&case.pure_torque, "Pure torque"));
        text.push_str(&verdict_text(&case.any_force, "Torque with net force"));
        text.push_str(&axes_table(case).to_text());
        if let Some(corner) = &case.worst_corner {
            let torque = number(corner.guaranteed_n_m, 3);
            let at = vector(&corner.centre_of_mass_m, 3);
            let dearest = price(corner.dearest_price);
            let text_of = format!(
                "Worst corner of the stated centre-of-mass box: {torque} N m with net force, at {at} m; dearest {dearest} g per N m s. Pure torque does not depend on it."
            );
            text.push_str(&paragraph("  ", "  ", &text_of));
        }
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
    text.push_str(&worst(cases));
    text.push_str(&reasons(cases));
    text.push_str(&advice(study));
    text.push_str(&dispersions(study));
    text.push_str(&plumes(study));
    text.push_str(&wheels(study));
    if !requirements.is_empty() {
        text.push_str(&super::words::heading("Requirements on the layout"));
        text.push_str(&super::budget::requirements_table(requirements));
    }
    text
}

/// The weakest of the cases that keep torque in every direction, under the condition that the intact layout fulfils.
fn worst(cases: &[LayoutCase]) -> String {
    let pure = cases.iter().any(|case| case.out_because == OutBecause::None && case.pure_torque.every_direction);
    let verdict = |case: &LayoutCase| if pure { case.pure_torque.clone() } else { case.any_force.clone() };
    let whole = cases.iter().filter(|case| verdict(case).every_direction);
    let weakest = whole.min_by(|a, b| verdict(a).guaranteed_n_m.total_cmp(&verdict(b).guaranteed_n_m));
    let what = if pure { "pure torque" } else { "torque with net force" };
    let Some(case) = weakest else { return paragraph("  ", "  ", "No case has torque in every direction.") };
    let (torque, along) = (verdict(case).guaranteed_n_m, verdict(case).weakest_direction);
    let sentence = format!(
        "Of the cases with {what} in every direction the weakest is {}, {}: {} N m, along {}.",
        out(case),
        end(case.travel_end),
        number(torque, 3),
        vector(&along, 2)
    );
    paragraph("  ", "  ", &sentence)
}

/// Reasons with a full tank, and those that arise only with an empty one.
fn reasons(cases: &[LayoutCase]) -> String {
    let mut seen: Vec<(&[String], &str)> = Vec::new();
    let mut text = String::new();
    for (case, reason) in cases.iter().flat_map(|case| case.reasons.iter().map(move |reason| (case, reason))) {
        let which = (case.thrusters_out.as_slice(), reason.axis);
        // What the intact layout lacks, it lacks with thrusters out as well.
        let intact: &[String] = &[];
        if seen.contains(&which) || seen.contains(&(intact, reason.axis)) {
            continue;
        }
        seen.push(which);
        if text.is_empty() {
            text.push_str(&super::words::heading("Why"));
        }
        text.push_str(&paragraph("  • ", "    ", &reason.sentence));
    }
    text
}

fn advice(study: &Study) -> String {
    let mut text = String::new();
    for advice in &study.advice {
        let force = if advice.net == NetForce::Zero { "pure torque" } else { "torque with net force" };
        let once = if advice.out.is_empty() { String::new() } else { format!(" with {} out", advice.out.join(" ")) };
        text.push_str(&super::words::heading(&format!("Mends that give {force} in every direction{once}")));
        advice.sentences().iter().for_each(|sentence| text.push_str(&paragraph("  • ", "    ", sentence)));
    }
    text
}

fn dispersions(study: &Study) -> String {
    if study.dispersions.is_empty() {
        return String::new();
    }
    let mut table = Table::new(&["command", "torque rss", "torque worst", "force rss", "force worst"]);
    for d in &study.dispersions {
        let most = |v: &nalgebra::Vector3<f64>| number(v.amax(), 3);
        table.push(vec![d.axis.to_owned(), most(&d.torque_rss), most(&d.torque_worst), most(&d.force_rss), most(&d.force_worst)]);
    }
    let note =
        "Largest component about or along a body axis of what misalignment and unequal thrust add to 1 N m of pure torque: N m and N.";
    format!("{}{}{}", super::words::heading("Parasitic torque and force"), table.to_text(), paragraph("  ", "  ", note))
}

fn plumes(study: &Study) -> String {
    if study.impingements.is_empty() {
        return String::new();
    }
    let mut text = super::words::heading("Facets inside plumes");
    for i in &study.impingements {
        let angle = i.angle_rad.to_degrees();
        text.push_str(&paragraph(
            "  • ",
            "    ",
            &format!(
                "{} meets {}: nearest edge {angle:.0} deg off the plume's axis, centre {:.2} m away",
                i.thruster, i.surface, i.distance_m
            ),
        ));
    }
    text
}

fn wheels(study: &Study) -> String {
    if study.wheels.is_empty() {
        return String::new();
    }
    let mut table = Table::new(&["wheels", "every direction", "weakest along", "x", "y", "z"]);
    for case in &study.wheels {
        let out = case.out.as_ref().map_or_else(|| "all".to_owned(), |name| format!("{name} out"));
        let [x, y, z] = case.axes_n_m_s.map(|h| number(h, 3));
        table.push(vec![out, number(case.every_direction_n_m_s, 3), vector(&case.weakest_direction, 2), x, y, z]);
    }
    format!("{}{}", super::words::heading("Momentum that the wheels hold, N m s"), table.to_text())
}

/// At most 18 characters.
fn shortened(text: &str) -> String {
    if text.chars().count() <= 18 { text.to_owned() } else { text.chars().take(17).chain(['…']).collect() }
}
