//! Values that can be right, but hardly are: a slip of a unit or of a digit. Each warning has a name, by which it is silenced.

use nalgebra::Vector3;

use crate::config::{Diagnostic, Path};
use crate::vehicle::{Faults, Vehicle};

/// Names of all warnings.
pub const WARNINGS: [&str; 9] = [
    "inertia-small",
    "inertia-large",
    "thrust",
    "specific-impulse",
    "wheel-speed-up",
    "dipole",
    "arm",
    "propellant-share",
    "centre-of-mass",
];

/// Density of the densest body worth thinking of, solid tungsten, kg/m³.
const DENSE: f64 = 19_300.0;

/// Values worth a second look, without those that the configuration silences.
pub(super) fn look(vehicle: &Vehicle, silence: &[String], faults: &mut Faults) -> Vec<Diagnostic> {
    for (index, name) in silence.iter().enumerate() {
        if !WARNINGS.contains(&name.as_str()) {
            let known = WARNINGS.iter().copied();
            let help = crate::config::did_you_mean(name, known).unwrap_or_else(|| format!("the names are {}", WARNINGS.join(", ")));
            faults.push(&format!("silence[{index}]"), format!("no warning is named `{name}`"), help);
        }
    }
    let mut list = Vec::new();
    let mut tell = |name: &'static str, key: &str, message: String| {
        if !silence.iter().any(|silent| silent == name) {
            let help = format!("check the number and its unit; if it is right, add `silence: [{name}]`");
            list.push(Diagnostic::warning(name, Path::parse(key), format!("`{key}`: {message}")).help(help));
        }
    };
    inertia(vehicle, &mut tell);
    thrusters(vehicle, &mut tell);
    others(vehicle, &mut tell);
    list
}

/// Farthest point of the spacecraft that the configuration names, from the dry centre of mass, m.
fn reach_m(vehicle: &Vehicle) -> f64 {
    let centre = Vector3::from(vehicle.dry.centre_of_mass_m.each_ref().map(crate::uncertain::Uncertain::nominal));
    let thrusters = vehicle.propulsion.thrusters.iter().map(|thruster| thruster.position_m);
    let surfaces = vehicle.surfaces.iter().map(|surface| surface.centre_m);
    thrusters.chain(surfaces).map(|at| (at - centre).norm()).fold(0.0, f64::max)
}

type Tell<'a> = dyn FnMut(&'static str, &str, String) + 'a;

fn inertia(vehicle: &Vehicle, tell: &mut Tell<'_>) {
    let mass = vehicle.dry.mass_kg.nominal();
    let moments = [0, 1, 2].map(|k| vehicle.dry.inertia_kg_m2[k].nominal());
    let least = moments.iter().copied().fold(f64::INFINITY, f64::min);
    let most = moments.iter().copied().fold(0.0, f64::max);
    // A solid sphere: 2/5 m r².
    let radius = (3.0 * mass / (4.0 * std::f64::consts::PI * DENSE)).cbrt();
    let smallest = 0.4 * mass * radius * radius;
    if least < smallest {
        let message = format!("{least} kg m2 is less than {smallest:.3} kg m2, that of a ball of solid tungsten of {mass} kg");
        tell("inertia-small", "spacecraft.inertia", message);
    }
    let reach = reach_m(vehicle);
    let gyration = (most / mass).sqrt();
    if reach > 0.0 && gyration > 3.0 * reach {
        let message = format!(
            "{most} kg m2 puts the mass {gyration:.2} m from its centre in the mean, while nothing described lies farther than {reach:.2} m"
        );
        tell("inertia-large", "spacecraft.inertia", message);
    }
}

fn thrusters(vehicle: &Vehicle, tell: &mut Tell<'_>) {
    let mass = vehicle.dry.mass_kg.nominal();
    for (index, thruster) in vehicle.propulsion.thrusters.iter().enumerate() {
        let at = format!("thrusters[{index}]");
        let (thrust, speed) = (thruster.thrust_n(), thruster.exhaust_speed.nominal());
        if thrust / mass > 1.0 || thrust < 1e-6 {
            tell(
                "thrust",
                &at,
                format!("{thrust} N accelerate {mass} kg by {:.1e} m/s2; attitude thrusters give about 1e-4 to 1e-2 m/s2", thrust / mass),
            );
        }
        let isp = speed / 9.806_65;
        if !(20.0..=5000.0).contains(&isp) {
            tell(
                "specific-impulse",
                &at,
                format!("a specific impulse of {isp:.1} s; cold gas has about 40 to 80 s, hydrazine 200 to 235 s"),
            );
        }
        if thruster.position_m.norm() > 30.0 {
            tell("arm", &at, format!("it stands {:.1} m from the origin of the body frame", thruster.position_m.norm()));
        }
        // One of many alike is enough.
        if thrust / mass > 1.0 || thrust < 1e-6 || !(20.0..=5000.0).contains(&isp) {
            break;
        }
    }
}

fn others(vehicle: &Vehicle, tell: &mut Tell<'_>) {
    let mass = vehicle.dry.mass_kg.nominal();
    if let Some(wheels) = &vehicle.wheels {
        let time = wheels.capacity_n_m_s / wheels.torque_n_m;
        if !(2.0..=20_000.0).contains(&time) {
            tell("wheel-speed-up", "wheels.torque", format!("a wheel would reach its capacity in {time:.3} s; usual are 20 to 1000 s"));
        }
    }
    let dipole = Vector3::from(vehicle.residual_dipole_a_m2.each_ref().map(crate::uncertain::Uncertain::nominal)).norm();
    if dipole > 0.1 * mass {
        tell("dipole", "spacecraft.residual_dipole", format!("{dipole} A m2 on {mass} kg; usual are 1 to 10 mA m2 per kilogram"));
    }
    if vehicle.tank.loaded_kg > 20.0 * mass {
        tell("propellant-share", "tank", format!("{} kg of propellant in {mass} kg of spacecraft", vehicle.tank.loaded_kg));
    }
    let centre = Vector3::from(vehicle.dry.centre_of_mass_m.each_ref().map(crate::uncertain::Uncertain::nominal)).norm();
    if centre > 30.0 {
        tell("centre-of-mass", "spacecraft.centre_of_mass", format!("it lies {centre:.1} m from the origin of the body frame"));
    }
}
