//! Laws that every layout obeys, and the agreement with a general-purpose solver on many of them.

mod authority_layouts;

use authority_layouts::{BOTH, EXACT, KINDS, Kind, about, direction, layout, lp_most, lp_price, placed, wrench};
use couplet::authority::{Authority, Generator, NetForce, Price, PriceMap};
use nalgebra::{Rotation3, Vector3};
use rand::rngs::ChaCha8Rng;
use rand::{RngExt, SeedableRng};

fn rng(seed: u64) -> ChaCha8Rng {
    ChaCha8Rng::seed_from_u64(seed)
}

/// Agreement with answers that the solver gives only within its own tolerance of 1e-7 of the rows; those are proved by a
/// primal and a dual feasible point without a gap instead.
const COARSE: f64 = 1e-5;

fn close(found: f64, expected: f64, scale: f64) -> bool {
    (found - expected).abs() <= EXACT * scale.max(expected.abs())
}

fn kg(price: Price) -> Option<f64> {
    match price {
        Price::Served { kg } => Some(kg),
        Price::NotServed { .. } => None,
    }
}

/// Size of the torques of a layout: rounding is relative to it where the answer itself is nearly zero.
fn size(generators: &[Generator]) -> f64 {
    generators.iter().map(|g| g.most * g.torque.norm()).sum::<f64>() * 1e-4
}

/// Compares six directions with the solver; returns how many of its answers were exact enough to compare to 1e-9.
fn agrees_with_lp(kind: Kind, generators: &[Generator], net: NetForce, rng: &mut ChaCha8Rng) -> usize {
    let authority = Authority::new(generators, net);
    let map = PriceMap::new(generators, net);
    let mut exact = 0;
    for _ in 0..6 {
        let mut e = direction(rng);
        if kind == Kind::Planar {
            // Across the plane is where the torque is; a random direction is out of the span almost surely.
            e = generators[0].torque.normalize() * if rng.random() { 1.0 } else { -1.0 };
        }
        let case = format!("{kind:?} {net:?} {}", generators.len());
        let (most, solver) = (authority.most(&e), lp_most(generators, net, &e));
        if most > 0.0 && solver.exact {
            exact += 1;
            assert!(close(most, solver.value, 0.0), "{case}: most {most:e}, solver {:e}", solver.value);
        } else {
            // That nothing is attainable, the solver's verdict on the price says below.
            let scale = 1e4 * size(generators) * COARSE;
            assert!((most - solver.value).abs() <= scale, "{case}: most {most:e}, solver {:e}", solver.value);
        }
        match (kg(map.price(&e)), lp_price(generators, net, &e)) {
            (None, None) => exact += 1,
            (Some(price), Some(solver)) => {
                let tolerance = if solver.exact { EXACT } else { COARSE };
                exact += usize::from(solver.exact);
                let apart = (price - solver.value).abs();
                assert!(apart <= tolerance * price, "{case}: price {price:e}, solver {:e}", solver.value);
            }
            other => panic!("{case}: price and solver differ: {other:?}"),
        }
        proves_itself(generators, &authority, &map, net, &e);
    }
    exact
}

/// A feasible firing that reaches the bound of the half-spaces, and one that costs what the dual says: no gap.
fn proves_itself(generators: &[Generator], authority: &Authority, map: &PriceMap, net: NetForce, e: &Vector3<f64>) {
    let most = authority.most(e);
    let levels = authority.serving(e, generators);
    let (torque, force) = wrench(generators, &levels);
    let scale = levels.iter().sum::<f64>();
    assert!(levels.iter().zip(generators).all(|(f, g)| (g.least..=g.most).contains(f)));
    assert!((torque - e * most).norm() <= EXACT * scale, "{net:?}: {torque:?} for {most:e}, levels {levels:?}");
    assert!(net == NetForce::Any || force.norm() <= EXACT * scale);
    // A sum of torques rounds to 1e-16 of them, however little is left.
    let rounding = 2e-15 * levels.iter().zip(generators).map(|(f, g)| f * g.torque.norm()).sum::<f64>();
    let gap = (torque.dot(e) - most).abs();
    assert!(gap <= EXACT * most + rounding, "{net:?}: {:e} reached of {most:e}", torque.dot(e));
    match (map.price(e), map.allocate(e)) {
        (Price::Served { kg }, Some(impulses)) => {
            assert!(impulses.iter().all(|j| *j >= 0.0));
            let (torque, force) = wrench(generators, &impulses);
            let scale = impulses.iter().sum::<f64>();
            assert!((torque - e).norm() <= EXACT * scale);
            assert!(net == NetForce::Any || force.norm() <= EXACT * scale);
            let spent: f64 = impulses.iter().zip(generators).map(|(j, g)| j * g.cost).sum();
            assert!(close(spent, kg, 0.0), "{net:?}: primal {spent:e}, dual {kg:e}");
            let firing = impulses.iter().filter(|j| **j > 0.0).count();
            assert!(firing <= if net == NetForce::Zero { 6 } else { 3 });
        }
        (Price::NotServed { along }, None) => {
            assert!(along.dot(e) > 0.0);
            let ray = map.against(e).expect("not served");
            let worst = generators.iter().map(|g| map.rays[ray].dot(&g.torque) + map.ray_forces[ray].dot(&g.force));
            let room = 1e-10 * (1.0 + map.ray_forces[ray].norm());
            assert!(worst.fold(0.0, f64::max) <= room, "the certificate proves nothing");
        }
        other => panic!("{net:?}: price and allocation differ: {other:?}"),
    }
}

/// Against microlp 0.7: 300 layouts of 4 to 20 thrusters anywhere; with the special ones below a thousand.
#[test]
fn general_layouts_agree_with_a_solver() {
    let mut rng = rng(1);
    let mut exact = 0;
    for round in 0..300 {
        let generators = about(&layout(Kind::General, 4 + round % 17, &mut rng), direction(&mut rng) * 0.3);
        for net in BOTH {
            exact += agrees_with_lp(Kind::General, &generators, net, &mut rng);
        }
    }
    assert!(exact > 5250, "{exact} of 7200 questions compared to 1e-9");
}

/// Against microlp 0.7: planar, mirrored, duplicated, nearly degenerate and one-sided layouts, and boxes full of ties.
#[test]
fn special_layouts_agree_with_a_solver() {
    let mut rng = rng(2);
    let mut exact = 0;
    for kind in KINDS {
        for round in 0..100 {
            let centre = if round % 2 == 0 { Vector3::zeros() } else { direction(&mut rng) * 0.2 };
            let centre = if kind == Kind::Planar { Vector3::zeros() } else { centre };
            let generators = about(&layout(kind, 4 + round % 17, &mut rng), centre);
            for net in BOTH {
                exact += agrees_with_lp(kind, &generators, net, &mut rng);
            }
        }
    }
    assert!(exact > 10_000, "{exact} of 16800 questions compared to 1e-9");
}

/// Where a solver's tolerance is coarser than the cants, a primal and a dual feasible point without a gap are the proof.
#[test]
fn nearly_degenerate_layouts_prove_themselves() {
    let mut rng = rng(10);
    for kind in [Kind::Planar, Kind::Mirrored, Kind::Duplicated, Kind::OneSided, Kind::General] {
        for cant in [1e-3, 1e-5, 1e-7, 1e-9] {
            for round in 0..20 {
                let mut thrusters = layout(kind, 4 + round % 15, &mut rng);
                for thruster in &mut thrusters {
                    if rng.random_bool(0.6) {
                        thruster.push = (thruster.push + direction(&mut rng) * cant).normalize();
                    }
                }
                let generators = about(&thrusters, Vector3::zeros());
                for net in BOTH {
                    let authority = Authority::new(&generators, net);
                    let map = PriceMap::new(&generators, net);
                    assert_eq!(authority.every_direction(), map.rays.is_empty(), "{kind:?} {cant:e} {net:?}");
                    for _ in 0..4 {
                        proves_itself(&generators, &authority, &map, net, &direction(&mut rng));
                    }
                }
            }
        }
    }
}

#[test]
fn one_more_thruster_never_hurts() {
    let mut rng = rng(3);
    for round in 0..40 {
        let mut thrusters = layout(KINDS[round % KINDS.len()], 8, &mut rng);
        let fewer = about(&thrusters, Vector3::zeros());
        thrusters.push(placed(&mut rng));
        let more = about(&thrusters, Vector3::zeros());
        for net in BOTH {
            let (a, b) = (Authority::new(&fewer, net), Authority::new(&more, net));
            let (p, q) = (PriceMap::new(&fewer, net), PriceMap::new(&more, net));
            assert!(b.guaranteed() >= a.guaranteed() * (1.0 - EXACT));
            for _ in 0..10 {
                let e = direction(&mut rng);
                assert!(b.most(&e) >= a.most(&e) * (1.0 - EXACT));
                if let Some(before) = kg(p.price(&e)) {
                    assert!(kg(q.price(&e)).expect("was served") <= before * (1.0 + EXACT));
                }
            }
        }
    }
}

#[test]
fn thrust_scales_torque_and_leaves_the_price() {
    let mut rng = rng(4);
    for round in 0..20 {
        let here = about(&layout(KINDS[round % KINDS.len()], 9, &mut rng), Vector3::zeros());
        let stronger: Vec<Generator> = here.iter().map(|g| Generator { most: 3.7 * g.most, ..*g }).collect();
        for net in BOTH {
            let (a, b) = (Authority::new(&here, net), Authority::new(&stronger, net));
            let (p, q) = (PriceMap::new(&here, net), PriceMap::new(&stronger, net));
            for _ in 0..10 {
                let e = direction(&mut rng);
                assert!(close(b.most(&e), 3.7 * a.most(&e), size(&here)));
                assert_eq!(kg(p.price(&e)), kg(q.price(&e)));
            }
        }
    }
}

#[test]
fn turning_the_spacecraft_turns_the_answer() {
    let mut rng = rng(5);
    for round in 0..30 {
        let kind = KINDS[round % KINDS.len()];
        let here = about(&layout(kind, 9, &mut rng), Vector3::zeros());
        let turn = Rotation3::new(direction(&mut rng) * 2.0);
        let turned: Vec<Generator> = here.iter().map(|g| Generator { torque: turn * g.torque, force: turn * g.force, ..*g }).collect();
        for net in BOTH {
            let (a, b) = (Authority::new(&here, net), Authority::new(&turned, net));
            let (p, q) = (PriceMap::new(&here, net), PriceMap::new(&turned, net));
            assert_eq!((a.rank, a.torque_rank, a.wrench_rank), (b.rank, b.torque_rank, b.wrench_rank));
            assert_eq!(a.every_direction(), b.every_direction(), "{kind:?} {net:?}");
            assert!(close(b.guaranteed(), a.guaranteed(), size(&here)));
            for _ in 0..10 {
                let e = direction(&mut rng);
                assert!(close(b.most(&(turn * e)), a.most(&e), size(&here)));
                match (kg(p.price(&e)), kg(q.price(&(turn * e)))) {
                    (Some(x), Some(y)) => assert!(close(x, y, 0.0)),
                    (x, y) => assert_eq!(x, y),
                }
            }
        }
    }
}

/// A couple has no reference point; a torque with a force has one.
#[test]
fn the_centre_of_mass_matters_only_where_a_force_is_left() {
    let mut rng = rng(6);
    let mut changed = false;
    for round in 0..30 {
        let thrusters = layout(KINDS[round % KINDS.len()], 10, &mut rng);
        let (here, there) = (about(&thrusters, Vector3::zeros()), about(&thrusters, direction(&mut rng) * 0.5));
        let (a, b) = (Authority::new(&here, NetForce::Zero), Authority::new(&there, NetForce::Zero));
        let (p, q) = (PriceMap::new(&here, NetForce::Zero), PriceMap::new(&there, NetForce::Zero));
        let (free, moved) = (Authority::new(&here, NetForce::Any), Authority::new(&there, NetForce::Any));
        assert_eq!(a.rank, b.rank);
        assert!(close(b.guaranteed(), a.guaranteed(), size(&here)));
        for _ in 0..10 {
            let e = direction(&mut rng);
            assert!(close(b.most(&e), a.most(&e), size(&here)));
            match (kg(p.price(&e)), kg(q.price(&e))) {
                (Some(x), Some(y)) => assert!(close(x, y, 0.0)),
                (x, y) => assert_eq!(x, y),
            }
            changed |= !close(free.most(&e), moved.most(&e), size(&here));
        }
    }
    assert!(changed);
}

#[test]
fn guaranteed_torque_is_the_least_of_the_most() {
    let mut rng = rng(7);
    let mut positive = 0;
    for round in 0..60 {
        let generators = about(&layout(KINDS[round % KINDS.len()], 14, &mut rng), Vector3::zeros());
        for net in BOTH {
            let authority = Authority::new(&generators, net);
            let guaranteed = authority.guaranteed();
            positive += usize::from(guaranteed > 0.0);
            assert_eq!(authority.every_direction(), guaranteed > 0.0);
            for _ in 0..50 {
                assert!(authority.most(&direction(&mut rng)) >= guaranteed * (1.0 - EXACT));
            }
            let weakest = authority.weakest_direction();
            assert!(close(authority.most(&weakest), guaranteed, size(&generators) * 1e-3));
        }
    }
    assert!(positive > 20, "{positive} layouts with torque in every direction are too few to test");
}

/// fill · most = 1 along every direction, and every direction is served exactly if no ray says otherwise.
#[test]
fn fill_verdict_and_price_say_the_same() {
    let mut rng = rng(8);
    for round in 0..60 {
        let generators = about(&layout(KINDS[round % KINDS.len()], 10, &mut rng), Vector3::zeros());
        for net in BOTH {
            let authority = Authority::new(&generators, net);
            let map = PriceMap::new(&generators, net);
            assert_eq!(authority.every_direction(), map.rays.is_empty());
            assert_eq!(authority.every_direction(), map.dearest().is_some());
            for _ in 0..20 {
                let e = direction(&mut rng);
                let most = authority.most(&e);
                assert_eq!(most > 0.0, kg(map.price(&e)).is_some());
                if most > 0.0 {
                    assert!((authority.fill(&(e * most)) - 1.0).abs() < EXACT);
                } else {
                    assert!(authority.fill(&e).is_infinite());
                }
                if let (Some((_, dearest)), Some(price)) = (map.dearest(), kg(map.price(&e))) {
                    assert!(price <= dearest * (1.0 + EXACT));
                }
            }
            if let Some((along, dearest)) = map.dearest() {
                assert!(close(kg(map.price(&along)).expect("all served"), dearest, 0.0));
            }
        }
    }
}

/// Positive homogeneity, and no propellant for nothing.
#[test]
fn price_is_homogeneous() {
    let mut rng = rng(9);
    let generators = about(&layout(Kind::General, 12, &mut rng), Vector3::zeros());
    for net in BOTH {
        let map = PriceMap::new(&generators, net);
        assert_eq!(map.price(&Vector3::zeros()), Price::Served { kg: 0.0 });
        assert_eq!(map.allocate(&Vector3::zeros()), Some(vec![0.0; 12]));
        for factor in [1e-9, 1e-3, 1e6] {
            let e = direction(&mut rng);
            if let (Some(one), Some(many)) = (kg(map.price(&e)), kg(map.price(&(e * factor)))) {
                assert!(close(many / factor, one, 0.0));
            }
        }
    }
}
