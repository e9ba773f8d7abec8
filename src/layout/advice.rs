//! The smallest mends of a layout that lacks torque in some direction, each proved by computing it again.

use nalgebra::{Unit, UnitVector3, Vector3};
use rayon::prelude::*;

use super::travel;
use crate::authority::{Authority, Generator, NetForce};
use crate::vehicle::{Thruster, Vehicle};

/// One thruster turned.
#[derive(Debug, Clone, PartialEq)]
pub struct Turn {
    /// Its name.
    pub thruster: String,
    /// Its new push direction, unit, body frame.
    pub push: Vector3<f64>,
    /// Angle between the old and the new one, rad.
    pub angle_rad: f64,
    /// Torque then available in every direction, N·m.
    pub guaranteed_n_m: f64,
}

/// All thrusters of a group tilted by one angle: each push turns in the plane of itself and its arm from the
/// centre of mass, away from the centre of mass where the angle is positive.
#[derive(Debug, Clone, PartialEq)]
pub struct Cant {
    /// Name of the string, or `all`.
    pub group: String,
    /// Angles that work, rad, as ranges; the ends are found to 0.1°.
    pub ranges_rad: Vec<(f64, f64)>,
    /// The angle with the most torque in every direction, rad.
    pub best_rad: f64,
    /// That torque, N·m.
    pub guaranteed_n_m: f64,
}

/// One thruster added.
#[derive(Debug, Clone, PartialEq)]
pub struct Addition {
    /// Where: the name of the thruster or surface whose place it shares.
    pub beside: String,
    /// Position, body frame, m.
    pub position_m: Vector3<f64>,
    /// Push direction, unit, body frame.
    pub push: Vector3<f64>,
    /// Torque then available in every direction, N·m.
    pub guaranteed_n_m: f64,
}

/// The best mend of each kind; `None` where none of the kind works.
#[derive(Debug, Clone, PartialEq)]
pub struct Advice {
    /// Names of the thrusters that are out in the case it mends.
    pub out: Vec<String>,
    /// Whether a net force is allowed.
    pub net: NetForce,
    /// Turning one thruster, by the smallest angle found.
    pub turn: Option<Turn>,
    /// Tilting one group, with the most torque found.
    pub cant: Option<Cant>,
    /// Adding one thruster, with the most torque found.
    pub add: Option<Addition>,
}

/// A thruster as a place and a push.
#[derive(Debug, Clone, Copy)]
struct Jet {
    position_m: Vector3<f64>,
    push: Vector3<f64>,
    thrust_n: f64,
}

/// The centres of mass at which a mend must work: one is enough without net force.
struct Bench {
    centres_m: Vec<Vector3<f64>>,
    net: NetForce,
}

impl Bench {
    /// Torque in every direction, least over the travel, N·m.
    fn guaranteed(&self, jets: &[Jet]) -> f64 {
        let at = |centre: &Vector3<f64>| {
            let one = |jet: &Jet| Generator::thruster(jet.position_m, jet.push, *centre, jet.thrust_n, 1.0);
            let generators: Vec<_> = jets.iter().map(one).collect();
            let authority = Authority::new(&generators, self.net);
            if authority.every_direction() { authority.guaranteed() } else { 0.0 }
        };
        self.centres_m.iter().map(at).fold(f64::INFINITY, f64::min)
    }
}

/// A torque worth having in every direction, as a share of the largest thrust on a 1 m arm. Any tilt at all makes a layout
/// whole in theory; a mend should leave something to steer with.
const WORTH: f64 = 0.05;

/// Evaluations of a layout that one search may take; more thrusters get a coarser grid.
const EFFORT: usize = 3_000;

/// `count` directions spread evenly over the sphere by the golden angle.
fn grid(count: usize) -> Vec<Vector3<f64>> {
    let golden = std::f64::consts::PI * (3.0 - 5_f64.sqrt());
    let point = |k: usize| {
        let z = 1.0 - 2.0 * (k as f64 + 0.5) / count as f64;
        let angle = golden * k as f64;
        Vector3::new((1.0 - z * z).sqrt() * angle.cos(), (1.0 - z * z).sqrt() * angle.sin(), z)
    };
    let axes = super::AXES.iter().map(|(_, axis)| Vector3::from(*axis));
    axes.chain((0..count).map(point)).collect()
}

/// Mends of the layout with the thrusters `lost` out (indices), under a force condition.
#[must_use]
pub fn advise(vehicle: &Vehicle, lost: &[usize], net: NetForce) -> Advice {
    let all = &vehicle.propulsion.thrusters;
    let left: Vec<&Thruster> = (0..all.len()).filter(|k| !lost.contains(k)).filter_map(|k| all.get(k)).collect();
    let jets: Vec<Jet> = left.iter().map(|t| Jet { position_m: t.position_m, push: t.push.into_inner(), thrust_n: t.thrust_n() }).collect();
    let ends = travel(vehicle).map(|(_, centre)| centre);
    let centres_m = if net == NetForce::Zero { vec![ends[0]] } else { ends.to_vec() };
    let bench = Bench { centres_m, net };
    let worth = WORTH * jets.iter().map(|jet| jet.thrust_n).fold(0.0, f64::max);
    Advice {
        out: lost.iter().filter_map(|k| all.get(*k)).map(|thruster| thruster.name.clone()).collect(),
        net,
        turn: turn(&bench, &left, &jets, worth),
        cant: cant(&bench, &left, &jets, worth),
        add: add(&bench, vehicle, &jets, worth),
    }
}

/// `push` turned towards `target` by a share of the angle between them.
fn towards(push: &UnitVector3<f64>, target: &UnitVector3<f64>, share: f64) -> Option<Vector3<f64>> {
    push.try_slerp(target, share, 1e-9).map(Unit::into_inner)
}

fn turn(bench: &Bench, thrusters: &[&Thruster], jets: &[Jet], worth: f64) -> Option<Turn> {
    let directions = grid((EFFORT / jets.len().max(1)).clamp(60, 250));
    let with = |k: usize, push: Vector3<f64>| {
        let mut jets = jets.to_vec();
        if let Some(jet) = jets.get_mut(k) {
            jet.push = push;
        }
        bench.guaranteed(&jets)
    };
    let pairs: Vec<(usize, Vector3<f64>)> = (0..jets.len()).flat_map(|k| directions.iter().map(move |d| (k, *d))).collect();
    let works: Vec<(usize, Vector3<f64>)> = pairs.into_par_iter().filter(|(k, direction)| with(*k, *direction) > worth).collect();
    let smallest =
        works.iter().map(|(k, direction)| (jets[*k].push.angle(direction), *k, *direction)).min_by(|a, b| a.0.total_cmp(&b.0))?;
    let (_, k, direction) = smallest;
    let (old, new) = (Unit::new_normalize(jets[k].push), Unit::new_normalize(direction));
    // The smallest share of the way that works, by bisection; the far end does.
    let (mut fails, mut enough) = (0.0, 1.0);
    for _ in 0..16 {
        let middle = 0.5 * (fails + enough);
        let push = towards(&old, &new, middle);
        if push.is_some_and(|push| with(k, push) > worth) { enough = middle } else { fails = middle }
    }
    let push = towards(&old, &new, enough).unwrap_or(direction);
    Some(Turn {
        thruster: thrusters.get(k)?.name.clone(),
        push,
        angle_rad: old.angle(&Unit::new_normalize(push)),
        guaranteed_n_m: with(k, push),
    })
}

/// Largest tilt that is tried, degrees, and the step.
const MOST_TILT_DEG: i32 = 60;
const TILT_STEP_DEG: usize = 2;

fn cant(bench: &Bench, thrusters: &[&Thruster], jets: &[Jet], worth: f64) -> Option<Cant> {
    let mut groups: Vec<&str> = thrusters.iter().map(|thruster| thruster.string.as_str()).collect();
    groups.sort_unstable();
    groups.dedup();
    let members =
        |group: &str| -> Vec<usize> { (0..thrusters.len()).filter(|k| group == "all" || thrusters[*k].string == group).collect() };
    let all = (groups.len() != 1).then_some("all");
    let named = groups.into_iter().chain(all).filter(|group| members(group).len() > 1);
    let found = named.filter_map(|group| cant_of(bench, group, &members(group), jets, worth));
    found.reduce(|a, b| if b.guaranteed_n_m > a.guaranteed_n_m { b } else { a })
}

fn cant_of(bench: &Bench, group: &str, members: &[usize], jets: &[Jet], worth: f64) -> Option<Cant> {
    let centre = *bench.centres_m.first()?;
    let at = |degrees: f64| {
        let mut tilted = jets.to_vec();
        for k in members {
            if let Some(jet) = tilted.get_mut(*k) {
                let arm = jet.position_m - centre;
                if let Some(axis) = Unit::try_new(jet.push.cross(&arm), 1e-9) {
                    jet.push = nalgebra::Rotation3::from_axis_angle(&axis, degrees.to_radians()) * jet.push;
                }
            }
        }
        bench.guaranteed(&tilted)
    };
    let angles: Vec<f64> = (-MOST_TILT_DEG..=MOST_TILT_DEG).step_by(TILT_STEP_DEG).map(f64::from).collect();
    let torques: Vec<f64> = angles.par_iter().map(|angle| at(*angle)).collect();
    let works = |torque: f64| torque > worth;
    let (best, most) = angles.iter().zip(&torques).max_by(|a, b| a.1.total_cmp(b.1))?;
    if !works(*most) {
        return None;
    }
    // Ends of the ranges by bisection between a grid angle that works and one that does not.
    let edge = |mut bad: f64, mut good: f64| {
        while (good - bad).abs() > 0.1 {
            let middle = 0.5 * (bad + good);
            if works(at(middle)) { good = middle } else { bad = middle }
        }
        good.to_radians()
    };
    let mut ranges = Vec::new();
    let mut open: Option<f64> = None;
    for (index, (angle, torque)) in angles.iter().zip(&torques).enumerate() {
        let before = index.checked_sub(1).and_then(|k| angles.get(k));
        match (works(*torque), open, before) {
            (true, None, None) => open = Some(angle.to_radians()),
            (true, None, Some(before)) => open = Some(edge(*before, *angle)),
            (false, Some(low), Some(before)) => {
                ranges.push((low, edge(*angle, *before)));
                open = None;
            }
            _ => {}
        }
    }
    ranges.extend(open.map(|low| (low, f64::from(MOST_TILT_DEG).to_radians())));
    Some(Cant { group: group.to_owned(), ranges_rad: ranges, best_rad: best.to_radians(), guaranteed_n_m: *most })
}

fn add(bench: &Bench, vehicle: &Vehicle, jets: &[Jet], worth: f64) -> Option<Addition> {
    let thrusters = vehicle.propulsion.thrusters.iter().map(|thruster| (thruster.name.clone(), thruster.position_m));
    let surfaces =
        vehicle.surfaces.iter().filter(|surface| surface.hinge.is_none()).map(|surface| (surface.name.clone(), surface.centre_m));
    let places: Vec<(String, Vector3<f64>)> = thrusters.chain(surfaces).collect();
    let directions = grid((EFFORT / places.len().max(1)).clamp(40, 120));
    let thrust_n = jets.iter().map(|jet| jet.thrust_n).fold(0.0, f64::max);
    let pairs: Vec<_> = places.iter().flat_map(|place| directions.iter().map(move |d| (place, *d))).collect();
    let tried: Vec<Addition> = pairs
        .into_par_iter()
        .map(|((beside, position_m), push)| {
            let mut more = jets.to_vec();
            more.push(Jet { position_m: *position_m, push, thrust_n });
            Addition { beside: beside.clone(), position_m: *position_m, push, guaranteed_n_m: bench.guaranteed(&more) }
        })
        .collect();
    let best = tried.into_iter().reduce(|a, b| if b.guaranteed_n_m > a.guaranteed_n_m { b } else { a })?;
    (best.guaranteed_n_m > worth).then_some(best)
}

fn direction(v: &Vector3<f64>) -> String {
    let part = |x: f64| format!("{:.3}", if x.abs() < 5e-4 { 0.0 } else { x });
    format!("({}, {}, {})", part(v.x), part(v.y), part(v.z))
}

impl Advice {
    /// One sentence a kind, also where none works.
    #[must_use]
    pub fn sentences(&self) -> Vec<String> {
        let turn = self.turn.as_ref().map_or_else(
            || "turning one thruster: none of the directions tried is enough".to_owned(),
            |t| {
                let (angle, push) = (t.angle_rad.to_degrees(), direction(&t.push));
                format!("turn {} by {angle:.1} deg to push along {push}: {:.3} N m in every direction", t.thruster, t.guaranteed_n_m)
            },
        );
        let cant = self.cant.as_ref().map_or_else(
            || format!("tilting a group of thrusters by one angle: none up to {MOST_TILT_DEG} deg is enough"),
            |c| {
                let ranges: Vec<String> = c.ranges_rad.iter().map(|(a, b)| format!("{:.1} to {:.1}", a.to_degrees(), b.to_degrees())).collect();
                let group = if c.group == "all" { "all thrusters".to_owned() } else { format!("the thrusters of string {}", c.group) };
                format!(
                    "tilt {group} outward by {} deg; {:.0} deg gives the most, {:.3} N m in every direction (outward: each push away from the centre of mass, in the plane of push and arm)",
                    ranges.join(" or "),
                    c.best_rad.to_degrees(),
                    c.guaranteed_n_m
                )
            },
        );
        let add = self.add.as_ref().map_or_else(
            || "adding one thruster where a thruster or surface is: no place tried is enough".to_owned(),
            |a| {
                format!(
                    "add a thruster at {} that pushes along {}: {:.3} N m in every direction",
                    a.beside,
                    direction(&a.push),
                    a.guaranteed_n_m
                )
            },
        );
        vec![turn, cant, add]
    }
}
