//! What the thruster layout of a vehicle can do, case by case.
//!
//! In: a vehicle. Out: for each set of thrusters lost and each end of the centre-of-mass travel, the
//! torque in every direction and its price, with names. Knows nothing of missions.

mod advice;
mod dispersion;
mod plume;
mod reasons;
mod requirement;
mod wheel_cases;

pub use advice::{Addition, Advice, Cant, Turn, advise};
pub use dispersion::{Dispersion, dispersions};
pub use plume::{Impingement, impingements};
pub use reasons::Reason;
pub use requirement::{Scope, figure};
pub use wheel_cases::{WheelCase, wheel_cases};

use nalgebra::Vector3;

use crate::authority::{Authority, Capability, Generator, NetForce, Price, PriceMap, cases};
use crate::vehicle::{Thruster, Vehicle};

/// Why thrusters are out.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum OutBecause {
    /// All work.
    None,
    /// One thruster failed.
    Thruster,
    /// The latch valve of this string is shut.
    String(String),
}

/// Which end of the centre-of-mass travel.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TravelEnd {
    /// Full tank.
    Start,
    /// Empty tank.
    End,
}

/// Torque about one signed body axis.
#[derive(Debug, Clone, PartialEq)]
pub struct AxisTorque {
    /// `+x`, `-x` and so on.
    pub axis: &'static str,
    /// Most torque, N·m.
    pub most_n_m: f64,
    /// Price, kg/(N·m·s); `None` if no firing gives it.
    pub price: Option<f64>,
    /// Names of the thrusters that give it for that price.
    pub thrusters: Vec<String>,
}

/// Torque in every direction under one force condition.
#[derive(Debug, Clone, PartialEq)]
pub struct Verdict {
    /// Whether there is torque in every direction.
    pub every_direction: bool,
    /// Torque available in every direction, N·m.
    pub guaranteed_n_m: f64,
    /// Direction that allows no more, unit, body frame.
    pub weakest_direction: Vector3<f64>,
    /// Direction of the dearest angular impulse and its price, kg/(N·m·s); `None` if some cannot be given.
    pub dearest: Option<(Vector3<f64>, f64)>,
    /// Unit vectors across all the torque there is: the layout turns the spacecraft neither way about them.
    pub missing: Vec<Vector3<f64>>,
    /// The six signed axes.
    pub axes: Vec<AxisTorque>,
}

/// The corner of the stated box of the centre of mass with the least torque. Pure torque does not depend on it.
#[derive(Debug, Clone, PartialEq)]
pub struct Corner {
    /// Centre of mass there, body frame, m.
    pub centre_of_mass_m: Vector3<f64>,
    /// Torque with net force in every direction, least over the corners, N·m.
    pub guaranteed_n_m: f64,
    /// Dearest price with net force, highest over the corners, kg/(N·m·s); `None` if a corner cannot serve some direction.
    pub dearest_price: Option<f64>,
}

/// One case of a layout.
#[derive(Debug, Clone, PartialEq)]
pub struct LayoutCase {
    /// Names of the thrusters that are out.
    pub thrusters_out: Vec<String>,
    /// Why.
    pub out_because: OutBecause,
    /// End of the travel.
    pub travel_end: TravelEnd,
    /// Centre of mass there, body frame, m.
    pub centre_of_mass_m: Vector3<f64>,
    /// Rank of the attainable torques.
    pub torque_rank: usize,
    /// Rank of torque and force together.
    pub wrench_rank: usize,
    /// With no net force.
    pub pure_torque: Verdict,
    /// With any net force.
    pub any_force: Verdict,
    /// Worst corner of the stated box of the centre of mass, if one is stated.
    pub worst_corner: Option<Corner>,
    /// Why some axes have no torque.
    pub reasons: Vec<Reason>,
}

/// The signed body axes in the order of results.
pub const AXES: [(&str, [f64; 3]); 6] = [
    ("+x", [1.0, 0.0, 0.0]),
    ("-x", [-1.0, 0.0, 0.0]),
    ("+y", [0.0, 1.0, 0.0]),
    ("-y", [0.0, -1.0, 0.0]),
    ("+z", [0.0, 0.0, 1.0]),
    ("-z", [0.0, 0.0, -1.0]),
];

/// Nominal centre of mass at both ends of its travel: full tank, empty tank.
#[must_use]
pub fn travel(vehicle: &Vehicle) -> [(TravelEnd, Vector3<f64>); 2] {
    let at = |propellant_kg: f64| vehicle.mass_state(propellant_kg).centre_of_mass_m;
    [(TravelEnd::Start, at(vehicle.tank.loaded_kg)), (TravelEnd::End, at(0.0))]
}

/// The intact layout at both ends of the travel.
#[must_use]
pub fn intact(vehicle: &Vehicle) -> Vec<LayoutCase> {
    solve(vehicle, &[(OutBecause::None, Vec::new())])
}

/// The intact layout, every single thruster out, and every string of more than one thruster out, each
/// at both ends of the travel.
#[must_use]
pub fn all_cases(vehicle: &Vehicle) -> Vec<LayoutCase> {
    let thrusters = &vehicle.propulsion.thrusters;
    let single = (0..thrusters.len()).map(|lost| (OutBecause::Thruster, vec![lost]));
    let mut strings: Vec<&str> = thrusters.iter().map(|thruster| thruster.string.as_str()).collect();
    strings.sort_unstable();
    strings.dedup();
    let members = |string: &str| -> Vec<usize> { (0..thrusters.len()).filter(|k| thrusters[*k].string == string).collect() };
    let whole =
        strings.into_iter().map(|string| (OutBecause::String(string.to_owned()), members(string))).filter(|(_, lost)| lost.len() > 1);
    let lost: Vec<_> = std::iter::once((OutBecause::None, Vec::new())).chain(single).chain(whole).collect();
    solve(vehicle, &lost)
}

/// Everything about a layout.
#[derive(Debug, Clone)]
pub struct Study {
    /// Every case.
    pub cases: Vec<LayoutCase>,
    /// Parasitic torque and force of the intact layout, full tank.
    pub dispersions: Vec<Dispersion>,
    /// Facets inside plumes.
    pub impingements: Vec<Impingement>,
    /// Wheels, intact and with each out; empty without wheels.
    pub wheels: Vec<WheelCase>,
    /// Mends: of the intact layout for each force condition it fails under, else of the first single failure
    /// that lacks torque under the force condition of unloading.
    pub advice: Vec<Advice>,
}

impl Study {
    /// Studies the layout of a vehicle.
    #[must_use]
    pub fn new(vehicle: &Vehicle) -> Self {
        let cases = all_cases(vehicle);
        let centre = travel(vehicle)[0].1;
        Self {
            dispersions: dispersions(vehicle, &centre),
            impingements: impingements(vehicle),
            wheels: vehicle.wheels.as_ref().map(wheel_cases).unwrap_or_default(),
            advice: needed_advice(vehicle, &cases),
            cases,
        }
    }
}

fn needed_advice(vehicle: &Vehicle, cases: &[LayoutCase]) -> Vec<Advice> {
    let lacks = |case: &LayoutCase, net: NetForce| match net {
        NetForce::Zero => !case.pure_torque.every_direction,
        NetForce::Any => !case.any_force.every_direction,
    };
    let intact: Vec<NetForce> = [NetForce::Zero, NetForce::Any]
        .into_iter()
        .filter(|net| cases.iter().any(|case| case.out_because == OutBecause::None && lacks(case, *net)))
        .collect();
    if !intact.is_empty() {
        return intact.into_iter().map(|net| advise(vehicle, &[], net)).collect();
    }
    let net = match vehicle.propulsion.net_force {
        crate::config::NetForceChoice::Zero => NetForce::Zero,
        crate::config::NetForceChoice::Any => NetForce::Any,
    };
    let single = cases.iter().find(|case| case.out_because == OutBecause::Thruster && lacks(case, net));
    let lost = single.and_then(|case| vehicle.propulsion.thrusters.iter().position(|thruster| case.thrusters_out.contains(&thruster.name)));
    lost.map(|lost| advise(vehicle, &[lost], net)).into_iter().collect()
}

fn solve(vehicle: &Vehicle, lost: &[(OutBecause, Vec<usize>)]) -> Vec<LayoutCase> {
    let thrusters = &vehicle.propulsion.thrusters;
    let sets: Vec<Vec<usize>> = lost.iter().map(|(_, set)| set.clone()).collect();
    let mut found = Vec::new();
    for (end, centre) in travel(vehicle) {
        let generators: Vec<_> = thrusters.iter().map(|thruster| generator(thruster, &centre)).collect();
        for ((because, set), case) in lost.iter().zip(cases(&generators, &sets)) {
            found.push(LayoutCase {
                thrusters_out: set.iter().map(|k| thrusters[*k].name.clone()).collect(),
                out_because: because.clone(),
                travel_end: end,
                centre_of_mass_m: centre,
                torque_rank: case.any_force.authority.rank,
                wrench_rank: case.pure_torque.authority.wrench_rank,
                pure_torque: verdict(&case.pure_torque, thrusters),
                any_force: verdict(&case.any_force, thrusters),
                worst_corner: worst_corner(vehicle, &centre, set),
                reasons: reasons::reasons(&case, because, &generators, thrusters),
            });
        }
    }
    found
}

/// Searches the eight corners of the stated box, and its middle: the price has kinks, and may be highest there.
fn worst_corner(vehicle: &Vehicle, centre: &Vector3<f64>, lost: &[usize]) -> Option<Corner> {
    let half = vehicle.dry.centre_of_mass_box_m?;
    let corner = |corner: u8| {
        let sign = |axis: u8| if corner >> axis & 1 == 1 { 1.0 } else { -1.0 };
        centre + half.component_mul(&Vector3::new(sign(0), sign(1), sign(2)))
    };
    let corners = (0..8).map(corner).chain([*centre]).map(|at| {
        let all: Vec<_> = vehicle.propulsion.thrusters.iter().map(|thruster| generator(thruster, &at)).collect();
        let left = crate::authority::without(&all, lost);
        let price = PriceMap::new(&left, NetForce::Any).dearest().map(|(_, price)| price);
        Corner { centre_of_mass_m: at, guaranteed_n_m: Authority::new(&left, NetForce::Any).guaranteed(), dearest_price: price }
    });
    corners.reduce(|worst, corner| {
        let dearest_price = worst.dearest_price.zip(corner.dearest_price).map(|(a, b)| a.max(b));
        let least = if corner.guaranteed_n_m < worst.guaranteed_n_m { corner } else { worst };
        Corner { dearest_price, ..least }
    })
}

fn generator(thruster: &Thruster, centre: &Vector3<f64>) -> Generator {
    let push = thruster.push.into_inner();
    Generator::thruster(thruster.position_m, push, *centre, thruster.thrust_n(), thruster.effective_speed_m_per_s())
}

fn verdict(capability: &Capability, thrusters: &[Thruster]) -> Verdict {
    let authority = &capability.authority;
    let axes = AXES.map(|(axis, direction)| {
        let direction = Vector3::from(direction);
        let price = match capability.price.price(&direction) {
            Price::Served { kg } => Some(kg),
            Price::NotServed { .. } => None,
        };
        let firing = capability.price.allocate(&direction).unwrap_or_default();
        let most = firing.iter().copied().fold(0.0, f64::max);
        // Rounding leaves impulses of 1e-16 on thrusters that do not fire.
        let named = thrusters.iter().zip(&firing).filter(|(_, impulse)| **impulse > 1e-9 * most);
        AxisTorque {
            axis,
            most_n_m: authority.most(&direction),
            price,
            thrusters: named.map(|(thruster, _)| thruster.name.clone()).collect(),
        }
    });
    Verdict {
        every_direction: authority.every_direction(),
        guaranteed_n_m: authority.guaranteed(),
        weakest_direction: authority.weakest_direction(),
        dearest: capability.price.dearest(),
        missing: authority.missing.clone(),
        axes: axes.to_vec(),
    }
}
