//! Why a direction cannot be served, as a sentence.

use nalgebra::Vector3;

use super::{AXES, OutBecause};
use crate::authority::{Case, Generator};
use crate::vehicle::Thruster;

/// Why there is no torque about one signed axis.
#[derive(Debug, Clone, PartialEq)]
pub struct Reason {
    /// The axis, or `oblique` where all axes are served and a direction between them is not.
    pub axis: &'static str,
    /// Whether it is the pure torque that is missing (else torque with any force).
    pub pure: bool,
    /// Certificate: no firing gives torque with a positive part along it; unit, body frame.
    pub along: Vector3<f64>,
    /// With a net force allowed, the push that the cheapest firing leaves, N·s per N·m·s.
    pub net_impulse: Option<Vector3<f64>>,
    /// The sentence.
    pub sentence: String,
}

/// A direction by its axis if it lies within a few degrees of one, else by its components.
fn named(direction: &Vector3<f64>) -> String {
    let near = AXES.iter().find(|(_, axis)| Vector3::from(*axis).dot(direction) > 0.995 * direction.norm());
    // Adding zero turns −0 into 0.
    let unit = direction.normalize().map(|x| (x * 100.0).round() / 100.0 + 0.0);
    near.map_or_else(|| format!("({:.2}, {:.2}, {:.2})", unit.x, unit.y, unit.z), |(axis, _)| axis.replace('-', "−"))
}

/// `A1`, `A1 and B2`, `A1, B2 and B3`.
fn listed(names: &[&str]) -> String {
    match names.split_last() {
        Some((last, before)) if !before.is_empty() => format!("{} and {last}", before.join(", ")),
        _ => names.concat(),
    }
}

/// The reason for every signed axis without pure torque, and for every one without any torque.
pub(super) fn reasons(case: &Case, because: &OutBecause, generators: &[Generator], thrusters: &[Thruster]) -> Vec<Reason> {
    let once = match because {
        OutBecause::None => String::new(),
        OutBecause::String(name) => format!(" once string {name} is out"),
        OutBecause::Thruster => {
            let names: Vec<&str> = case.lost.iter().filter_map(|k| thrusters.get(*k)).map(|thruster| thruster.name.as_str()).collect();
            format!(" once {} is out", names.join(" and "))
        }
    };
    let left: Vec<usize> = (0..generators.len()).filter(|k| !case.lost.contains(k)).collect();
    let mut found = Vec::new();
    for (axis, direction) in AXES {
        let direction = Vector3::from(direction);
        let shown = axis.replace('-', "−");
        if let Some(ray) = case.any_force.price.against(&direction) {
            let along = case.any_force.price.rays[ray];
            let sentence = without_force(&shown, &once, &along, &direction, &left, generators, thrusters);
            found.push(Reason { axis, pure: false, along, net_impulse: None, sentence });
            continue;
        }
        let Some(ray) = case.pure_torque.price.against(&direction) else { continue };
        let along = case.pure_torque.price.rays[ray];
        let firing = case.any_force.price.allocate(&direction).unwrap_or_default();
        let most = firing.iter().copied().fold(0.0, f64::max);
        let names: Vec<&str> = left
            .iter()
            .filter(|k| firing.get(**k).is_some_and(|level| *level > 1e-9 * most))
            .filter_map(|k| thrusters.get(*k))
            .map(|thruster| thruster.name.as_str())
            .collect();
        let push: Vector3<f64> = generators.iter().zip(&firing).map(|(generator, level)| generator.force * *level).sum();
        let sentence = format!(
            "no couple turns about {shown}{once}; the cheapest firing, {}, also leaves {:.2} N along {} for each N m",
            listed(&names),
            push.norm(),
            named(&push)
        );
        found.push(Reason { axis, pure: true, along, net_impulse: Some(push), sentence });
    }
    if found.is_empty() {
        found.extend(oblique(case, &once));
    }
    found
}

/// The reason where every signed axis is served and some direction between them is not.
fn oblique(case: &Case, once: &str) -> Option<Reason> {
    let any = case.any_force.price.rays.first();
    let (ray, pure) = any.map(|ray| (ray, false)).or_else(|| case.pure_torque.price.rays.first().map(|ray| (ray, true)))?;
    let what = if pure { "couple" } else { "firing" };
    let sentence = format!("no {what} turns about {}{once}, though every axis is served", named(ray));
    Some(Reason { axis: "oblique", pure, along: *ray, net_impulse: None, sentence })
}

/// No torque even with a net force: either nothing is on that side, or what is turns about another axis as well.
fn without_force(
    shown: &str,
    once: &str,
    along: &Vector3<f64>,
    direction: &Vector3<f64>,
    left: &[usize],
    generators: &[Generator],
    thrusters: &[Thruster],
) -> String {
    let turning = left.iter().filter(|k| generators[**k].torque.norm() > 0.0);
    let nearest = turning.max_by(|a, b| {
        let cosine = |k: usize| generators[k].torque.normalize().dot(direction);
        cosine(**a).total_cmp(&cosine(**b))
    });
    let Some(nearest) = nearest else { return format!("no thruster turns the spacecraft about {shown}{once}: none is left with an arm") };
    let (name, torque) = (&thrusters[*nearest].name, generators[*nearest].torque);
    if torque.dot(direction) <= 1e-9 * torque.norm() {
        return format!("no thruster pushes {shown} torque{once}; the nearest, {name}, turns about {}", named(&torque));
    }
    format!(
        "no firing turns about {shown} alone{once}: nothing pushes towards {}; the nearest, {name}, turns about {}",
        named(along),
        named(&torque)
    )
}
