//! The study of a layout: reasons, mends, dispersions, plumes, requirements, wheels.

#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::authority::{Authority, Generator, NetForce};
use couplet::layout::{LayoutCase, OutBecause, Study, advise, all_cases, dispersions, impingements, intact, wheel_cases};
use couplet::montecarlo::check_layout;
use couplet::vehicle::Vehicle;
use nalgebra::{Rotation3, Unit, Vector3};
use rand::{Rng as _, RngExt, SeedableRng, rngs::ChaCha8Rng};
use support::{SMALL, heron, scenario};

fn close(got: f64, expected: f64, relative: f64) {
    assert!((got - expected).abs() <= relative * expected.abs(), "got {got}, expected {expected}");
}

fn case<'a>(cases: &'a [LayoutCase], out: &[&str]) -> &'a LayoutCase {
    cases.iter().find(|case| case.thrusters_out == out).unwrap()
}

/// The twelve thrusters of `SMALL` make each signed couple with one pair: any single failure loses exactly that axis as a
/// couple, and none with a net force (G-04, derived).
#[test]
fn single_failures_of_a_cube_of_couples() {
    let cases = all_cases(&scenario(SMALL, &[]).vehicle);
    for (name, axis) in [("X1", "+x"), ("X4", "-x"), ("Y1", "+y"), ("Y3", "-y"), ("Z1", "+z"), ("Z3", "-z")] {
        let case = case(&cases, &[name]);
        let lost: Vec<&str> = case.pure_torque.axes.iter().filter(|a| a.price.is_none()).map(|a| a.axis).collect();
        assert_eq!(lost, [axis], "{name}");
        assert!(case.any_force.every_direction);
        assert_eq!(case.reasons.len(), 1);
        let reason = &case.reasons[0];
        assert!(reason.pure && reason.axis == axis && reason.sentence.contains(&format!("once {name} is out")), "{}", reason.sentence);
        // One thruster on a 2 m arm turns it and pushes: 0.5 N for each N m.
        close(reason.net_impulse.unwrap().norm(), 0.5, 1e-9);
    }
}

/// The certificate of a reason: no thruster left has a torque with a positive part along it, and the axis has.
#[test]
fn certificates_hold() {
    let vehicle = heron(&[]).vehicle;
    let mut checked = 0;
    for case in all_cases(&vehicle) {
        for reason in case.reasons.iter().filter(|reason| !reason.pure) {
            let axis = couplet::layout::AXES.iter().find(|(name, _)| *name == reason.axis).unwrap().1;
            assert!(reason.along.dot(&Vector3::from(axis)) > 1e-9);
            for thruster in vehicle.propulsion.thrusters.iter().filter(|t| !case.thrusters_out.contains(&t.name)) {
                let torque = (thruster.position_m - case.centre_of_mass_m).cross(&thruster.push);
                assert!(torque.dot(&reason.along) <= 1e-9, "{} {}", thruster.name, reason.sentence);
            }
            checked += 1;
        }
    }
    assert!(checked >= 8);
}

/// Recomputes what a mend promises.
fn guaranteed(vehicle: &Vehicle, pushes: &[(Vector3<f64>, Vector3<f64>)], net: NetForce) -> f64 {
    let at = |propellant: f64| {
        let centre = vehicle.mass_state(propellant).centre_of_mass_m;
        let generators: Vec<_> = pushes.iter().map(|(r, d)| Generator::thruster(*r, *d, centre, 1.0, 1.0)).collect();
        Authority::new(&generators, net).guaranteed()
    };
    at(0.0).min(at(vehicle.tank.loaded_kg))
}

#[test]
fn mends_do_what_they_promise() {
    let vehicle = heron(&[]).vehicle;
    let thrusters = &vehicle.propulsion.thrusters;
    let lost = thrusters.iter().position(|t| t.name == "A5").unwrap();
    let advice = advise(&vehicle, &[lost], NetForce::Zero);
    let left: Vec<_> = thrusters.iter().filter(|t| t.name != "A5").collect();
    let base: Vec<_> = left.iter().map(|t| (t.position_m, t.push.into_inner())).collect();
    assert!(guaranteed(&vehicle, &base, NetForce::Zero) < 1e-9);

    let turn = advice.turn.unwrap();
    let mut turned = base.clone();
    let k = left.iter().position(|t| t.name == turn.thruster).unwrap();
    close(turned[k].1.angle(&turn.push), turn.angle_rad, 1e-6);
    turned[k].1 = turn.push;
    close(guaranteed(&vehicle, &turned, NetForce::Zero), turn.guaranteed_n_m, 1e-9);
    assert!(turn.guaranteed_n_m >= 0.05);

    let add = advice.add.unwrap();
    let added: Vec<_> = base.iter().copied().chain([(add.position_m, add.push)]).collect();
    close(guaranteed(&vehicle, &added, NetForce::Zero), add.guaranteed_n_m, 1e-9);

    let cant = advice.cant.unwrap();
    let centre = vehicle.mass_state(vehicle.tank.loaded_kg).centre_of_mass_m;
    let tilted = |angle: f64| -> Vec<_> {
        let one = |t: &&couplet::vehicle::Thruster| {
            let push = t.push.into_inner();
            let inside = cant.group == "all" || t.string == cant.group;
            let axis = Unit::new_normalize(push.cross(&(t.position_m - centre)));
            (t.position_m, if inside { Rotation3::from_axis_angle(&axis, angle) * push } else { push })
        };
        left.iter().map(one).collect()
    };
    close(guaranteed(&vehicle, &tilted(cant.best_rad), NetForce::Zero), cant.guaranteed_n_m, 1e-9);
    for (low, high) in &cant.ranges_rad {
        assert!(low < high);
        for share in [0.02, 0.5, 0.98] {
            assert!(guaranteed(&vehicle, &tilted(low + share * (high - low)), NetForce::Zero) > 0.04, "{low} {high}");
        }
    }
}

/// Thrusters that all push one way can make no couple, whatever the tilt of none of them: one more thruster cannot help either.
#[test]
fn where_nothing_helps_it_says_so() {
    let line = "thrusters=[{name: a, position: 0 0 0.5 m, push: 0 0 1}, {name: b, position: 0 0 -0.5 m, push: 0 0 1}]";
    let advice = advise(&scenario(SMALL, &[line]).vehicle, &[], NetForce::Zero);
    assert!(advice.turn.is_none() && advice.cant.is_none() && advice.add.is_none());
    assert_eq!(advice.sentences().len(), 3);
}

/// Alignment 1°, thrust ± 5 %, one couple about +x: against a seeded simulation (root mean square) and against its extremes.
#[test]
fn dispersions_agree_with_a_simulation() {
    let (alpha, share) = (1_f64.to_radians(), 0.05);
    let vehicle = scenario(SMALL, &["propulsion.alignment=1 deg", "propulsion.thrust_tolerance=5 %"]).vehicle;
    let found = &dispersions(&vehicle, &Vector3::zeros())[0];
    assert_eq!(found.axis, "+x");
    // X1 at +2 m pushes +z, X2 at −2 m pushes −z, 0.25 N each for 1 N m.
    let jets = [(Vector3::new(0.0, 2.0, 0.0), Vector3::z()), (Vector3::new(0.0, -2.0, 0.0), -Vector3::z())];
    let mut rng = ChaCha8Rng::seed_from_u64(9);
    let (mut force2, mut torque2) = (Vector3::<f64>::zeros(), Vector3::<f64>::zeros());
    let (mut force_most, mut torque_most) = (Vector3::<f64>::zeros(), Vector3::<f64>::zeros());
    let n = 200_000;
    for _ in 0..n {
        let (mut force, mut torque) = (Vector3::zeros(), Vector3::zeros());
        for (r, d) in jets {
            let (radius, angle) = (alpha * rng.random::<f64>().sqrt(), std::f64::consts::TAU * rng.random::<f64>());
            let change = (Vector3::new(angle.cos(), angle.sin(), 0.0) * radius + d * share * (2.0 * rng.random::<f64>() - 1.0)) * 0.25;
            force += change;
            torque += r.cross(&change);
        }
        force2 += force.component_mul(&force);
        torque2 += torque.component_mul(&torque);
        force_most = force_most.sup(&force.abs());
        torque_most = torque_most.sup(&torque.abs());
    }
    assert!(rng.next_u64() > 0);
    let rms = |sum: Vector3<f64>| sum.map(|x| (x / f64::from(n)).sqrt());
    // Sampling error of a mean square over 200 000: about 0.3 %; 1 % allowed.
    for (got, expected) in rms(force2).iter().zip(&found.force_rss).chain(rms(torque2).iter().zip(&found.torque_rss)) {
        assert!((got - expected).abs() <= 0.01 * expected + 1e-12, "{got} {expected}");
    }
    // Nothing exceeds the worst, and the simulation comes near it.
    for (got, worst) in force_most.iter().zip(&found.force_worst).chain(torque_most.iter().zip(&found.torque_worst)) {
        assert!(*got <= worst * (1.0 + 1e-12) && *got >= 0.9 * worst, "{got} {worst}");
    }
}

/// A plate 1 m behind a nozzle, off its axis by hand: radius of 3 m² is 0.977 m.
#[test]
fn plumes_by_hand() {
    let plume = "propulsion.plume={half_angle: 20 deg, range: 2 m}";
    let one = |place: &str, normal: &str| {
        let surface = format!("surfaces=[{{name: plate, area: 3 m2, centre: {place}, normal: {normal}, material: plate}}]");
        let thruster = "thrusters=[{name: a, position: 0 0 0 m, push: 0 0 1}]";
        impingements(&scenario(SMALL, &[plume, &surface, thruster, "mission.phases=[{name: only, duration: 1 d}]"]).vehicle)
    };
    // In the axis, facing the nozzle.
    let hit = one("0 0 -1 m", "0 0 1");
    assert!(hit.len() == 1 && hit[0].angle_rad < 1e-12);
    close(hit[0].distance_m, 1.0, 1e-12);
    // Its back, its plane, out of range, and out of the cone: 71.6° less 17.2° of radius.
    assert!(one("0 0 -1 m", "0 0 -1").is_empty());
    assert!(one("0 0 0 m", "0 0 1").is_empty());
    assert!(one("0 0 -4 m", "0 0 1").is_empty());
    assert!(one("3 0 -1 m", "0 0 1").is_empty());
    assert!(impingements(&scenario(SMALL, &[]).vehicle).is_empty());
}

/// Requirements by hand for heron: 1.1 N m about z intact, none about some axis once A5 is out.
#[test]
fn requirements_on_the_layout() {
    let list = "requirements=[{name: a, figure: torque, axis: +z, at_least: 1.1 N m}, {name: b, figure: torque, at_least: 1 mN m, out: any thruster}, \
                {name: c, figure: torque, at_least: 1 mN m, out: any thruster, net_force: any}, {name: d, figure: price, at_most: 1.3 g/(N m s)}, \
                {name: e, figure: price, axis: +z, out: A5, at_most: 1 kg/(N m s)}, {name: f, figure: torque, axis: -x, out: A, at_least: 2.2 N m}]";
    let scenario = heron(&[list]);
    let checked = check_layout(&scenario.requirements, &all_cases(&scenario.vehicle));
    let met: Vec<bool> = checked.iter().map(|c| c.met).collect();
    assert_eq!(met, [true, false, true, true, false, true]);
    close(checked[0].value.unwrap(), 1.1, 1e-9);
    assert!(checked[4].value.is_none(), "a price that does not exist is no number");
}

/// Four wheels in a pyramid: with one out the others still span space; by hand for three orthogonal wheels.
#[test]
fn wheels_with_one_out() {
    let orthogonal = wheel_cases(scenario(SMALL, &[]).vehicle.wheels.as_ref().unwrap());
    close(orthogonal[0].every_direction_n_m_s, 30.0, 1e-12);
    assert!(orthogonal[1..].iter().all(|case| case.every_direction_n_m_s.abs() < 1e-12));
    assert!(orthogonal[1].out.as_deref() == Some("x") && orthogonal[1].axes_n_m_s[0].abs() < 1e-12);
    close(orthogonal[1].axes_n_m_s[1], 30.0, 1e-12);
    let pyramid = wheel_cases(heron(&[]).vehicle.wheels.as_ref().unwrap());
    assert_eq!(pyramid.len(), 5);
    // 2 × 12 N m s × cos of the wheels' slope along x: 24 / √1.49.
    close(pyramid[0].axes_n_m_s[0], 24.0 / 1.49_f64.sqrt(), 1e-12);
    assert!(
        pyramid[1..].iter().all(|case| case.every_direction_n_m_s > 5.0 && case.every_direction_n_m_s < pyramid[0].every_direction_n_m_s)
    );
}

/// A box of the centre of mass takes away torque with net force, and nothing from couples.
#[test]
fn the_worst_corner_is_no_better_than_the_middle() {
    let boxed = intact(&heron(&["spacecraft.centre_of_mass_box=20 20 20 mm"]).vehicle);
    let exact = intact(&heron(&["spacecraft.centre_of_mass_box=null"]).vehicle);
    for (boxed, exact) in boxed.iter().zip(&exact) {
        let corner = boxed.worst_corner.as_ref().unwrap();
        assert!(exact.worst_corner.is_none());
        assert!(corner.guaranteed_n_m <= exact.any_force.guaranteed_n_m + 1e-12);
        assert!(corner.dearest_price.unwrap() >= exact.any_force.dearest.unwrap().1 - 1e-15);
        close(boxed.pure_torque.guaranteed_n_m, exact.pure_torque.guaranteed_n_m, 1e-12);
    }
}

#[test]
fn a_study_has_advice_only_where_it_is_needed() {
    let study = Study::new(&heron(&[]).vehicle);
    assert_eq!(study.advice.len(), 1);
    assert_eq!(study.advice[0].out, ["A5"]);
    assert!(study.cases.iter().any(|case| matches!(&case.out_because, OutBecause::String(name) if name == "B")));
}

/// NASA Tech Briefs NPO-49578 claims layouts of eight thrusters that turn or push either way along any axis with two thrusters
/// at a time, without parasitic force or torque while the centre of mass is centred (G-07; it shows no positions, these are
/// ours: four along y on the corners of a square, four canted in the plane of x and z).
#[test]
fn eight_thrusters_two_at_a_time() {
    let half = 0.5_f64.sqrt();
    let jets = [
        ([0.5, 0.0, 0.5], [0.0, 1.0, 0.0]),
        ([-0.5, 0.0, -0.5], [0.0, 1.0, 0.0]),
        ([0.5, 0.0, -0.5], [0.0, -1.0, 0.0]),
        ([-0.5, 0.0, 0.5], [0.0, -1.0, 0.0]),
        ([-0.5, 0.0, 0.5], [half, 0.0, half]),
        ([0.5, 0.0, -0.5], [-half, 0.0, -half]),
        ([-0.5, 0.0, -0.5], [half, 0.0, -half]),
        ([0.5, 0.0, 0.5], [-half, 0.0, half]),
    ]
    .map(|(r, d)| (Vector3::from(r), Vector3::from(d)));
    let generators = jets.map(|(r, d)| Generator::thruster(r, d, Vector3::zeros(), 1.0, 2000.0));
    let prices = couplet::authority::PriceMap::new(&generators, NetForce::Zero);
    let authority = Authority::new(&generators, NetForce::Zero);
    assert!(authority.every_direction() && authority.wrench_rank == 6);
    for (axis, direction) in couplet::layout::AXES {
        let direction = Vector3::from(direction);
        let firing = prices.allocate(&direction).unwrap();
        assert_eq!(firing.iter().filter(|level| **level > 1e-9).count(), 2, "{axis}");
        // A push along the axis: two thrusters whose sum points there, without torque.
        let pairs = (0..8).flat_map(|i| (i + 1..8).map(move |j| (i, j)));
        let pushes = pairs.filter(|(i, j)| {
            let (force, torque) = (generators[*i].force + generators[*j].force, generators[*i].torque + generators[*j].torque);
            force.norm() > 0.1 && force.normalize().dot(&direction) > 1.0 - 1e-9 && torque.norm() < 1e-9
        });
        assert!(pushes.count() >= 1, "{axis}");
    }
}

/// By hand: arms along one line, one thruster, and thrusters through the centre of mass.
#[test]
fn few_and_degenerate_thrusters_get_a_verdict() {
    let verdict = |list: &str| {
        let vehicle = scenario(SMALL, &[&format!("thrusters=[{list}]"), "mission.phases=[{name: only, duration: 1 d}]"]).vehicle;
        (all_cases(&vehicle), vehicle)
    };
    // All arms along x: no torque about x either way, for any firing.
    let planar = "{name: a, position: 1 0 0 m, push: 0 0 1}, {name: b, position: -1 0 0 m, push: 0 0 1}, {name: c, position: 1 0 0 m, push: 0 0 -1}, \
                  {name: d, position: -1 0 0 m, push: 0 0 -1}";
    let (cases, _) = verdict(planar);
    let intact = &cases[0];
    assert_eq!((intact.torque_rank, intact.pure_torque.missing.len()), (1, 2));
    assert!(intact.any_force.missing.iter().all(|m| m.y.abs() < 1e-12));
    close(intact.pure_torque.axes[2].most_n_m, 2.0, 1e-12);
    assert!(intact.reasons.iter().any(|reason| reason.axis == "+x"));
    // One thruster, and none once it is out.
    let (cases, _) = verdict("{name: a, position: 1 0 0 m, push: 0 0 1}");
    assert_eq!(cases.len(), 4);
    let none = case(&cases, &["a"]);
    assert!(
        none.torque_rank == 0 && none.pure_torque.guaranteed_n_m.abs() < 1e-15 && none.any_force.axes.iter().all(|a| a.price.is_none())
    );
    assert!(none.reasons[0].sentence.contains("none is left with an arm"), "{}", none.reasons[0].sentence);
    // Through the centre of mass: no arm.
    let (cases, _) = verdict("{name: a, position: 0 0 1 m, push: 0 0 1}, {name: b, position: 0 0 1 m, push: 0 0 1}");
    assert_eq!(cases[0].torque_rank, 0);
}

/// A tenth of the thrust lost to the plume is a tenth of the torque, and the price rises by 1/0.9 for that thruster.
#[test]
fn plume_loss_counts_in_torque_and_price() {
    let cases = intact(&scenario(SMALL, &["thrusters[X1].plume_loss=10 %", "thrusters[X2].plume_loss=10 %"]).vehicle);
    let axis = &cases[0].pure_torque.axes[0];
    close(axis.most_n_m, 3.6, 1e-12);
    close(axis.price.unwrap(), 0.5 / 1500.0 / 0.9, 1e-12);
}
