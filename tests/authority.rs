//! Control authority and price against published and hand-made layouts.

mod authority_layouts;

use authority_layouts::{BOTH, EXACT, Kind, about, layout, torque_only, unit_thruster, wrench};
use couplet::authority::{Authority, Generator, HalfSpace, NetForce, Price, PriceMap, cases, single_failures, without};
use nalgebra::Vector3;
use rand::SeedableRng;
use rand::rngs::ChaCha8Rng;

fn kg(map: &PriceMap, h: [f64; 3]) -> Option<f64> {
    match map.price(&h.into()) {
        Price::Served { kg } => Some(kg),
        Price::NotServed { .. } => None,
    }
}

/// The signed axes +x, −x, +y, −y, +z, −z.
fn signed_axes() -> [Vector3<f64>; 6] {
    [Vector3::x(), -Vector3::x(), Vector3::y(), -Vector3::y(), Vector3::z(), -Vector3::z()]
}

/// Vertices of a polytope by meeting its faces three at a time.
fn corners(faces: &[HalfSpace]) -> Vec<Vector3<f64>> {
    let mut corners: Vec<Vector3<f64>> = Vec::new();
    for (i, a) in faces.iter().enumerate() {
        for (j, b) in faces[..i].iter().enumerate() {
            for c in &faces[..j] {
                let matrix = nalgebra::Matrix3::from_rows(&[a.normal.transpose(), b.normal.transpose(), c.normal.transpose()]);
                let Some(inverse) = matrix.try_inverse().filter(|_| matrix.determinant().abs() > 1e-9) else {
                    continue;
                };
                let point = inverse * Vector3::new(a.offset, b.offset, c.offset);
                let inside = faces.iter().all(|f| f.normal.dot(&point) <= f.offset + 1e-7);
                if inside && corners.iter().all(|known| (known - point).norm() > 1e-6) {
                    corners.push(point);
                }
            }
        }
    }
    corners
}

/// Area of each face of a polytope: its corners, in order of angle, by the shoelace formula.
fn areas(faces: &[HalfSpace], corners: &[Vector3<f64>]) -> Vec<f64> {
    let area = |face: &HalfSpace| {
        let on: Vec<_> = corners.iter().filter(|p| (face.normal.dot(p) - face.offset).abs() < 1e-7).collect();
        let centre = on.iter().fold(Vector3::zeros(), |sum, p| sum + **p) / on.len() as f64;
        let u = (on[0] - centre).normalize();
        let v = face.normal.cross(&u);
        let mut flat: Vec<_> = on.iter().map(|p| ((*p - centre).dot(&u), (*p - centre).dot(&v))).collect();
        flat.sort_by(|a, b| a.1.atan2(a.0).total_cmp(&b.1.atan2(b.0)));
        let next = flat.iter().cycle().skip(1);
        flat.iter().zip(next).map(|(a, b)| a.0 * b.1 - a.1 * b.0).sum::<f64>() / 2.0
    };
    faces.iter().map(area).collect()
}

/// Faces, vertices, area and volume of the torques of one-sided generators.
fn zonohedron(generators: &[[f64; 3]]) -> (usize, usize, f64, f64) {
    let generators: Vec<Generator> = generators.iter().map(|t| torque_only(*t)).collect();
    let faces = Authority::new(&generators, NetForce::Any).half_spaces;
    let corners = corners(&faces);
    let areas = areas(&faces, &corners);
    let volume = faces.iter().zip(&areas).map(|(f, a)| f.offset * a / 3.0).sum();
    (faces.len(), corners.len(), areas.iter().sum(), volume)
}

/// The manual of the CRAN package zonohedra, example getmetrics (Bilinski dodecahedron): 12 facets, area 38.83282.
/// Vertices and volume 16.944272 recomputed with a convex hull.
#[test]
fn published_zonohedron() {
    let phi = f64::midpoint(1.0, 5.0_f64.sqrt());
    let (faces, vertices, area, volume) = zonohedron(&[[1.0, phi, 0.0], [phi, 0.0, 1.0], [0.0, 1.0, phi], [-1.0, phi, 0.0]]);
    assert_eq!((faces, vertices), (12, 14));
    assert!((area - 38.83282).abs() < 1e-5, "printed to five decimals, {area}");
    assert!((volume - 16.944_272).abs() < 1e-6, "{volume}");
}

/// Solid geometry: cube; rhombic dodecahedron of edge √3, volume 16 and area 33.9411; rhombic triacontahedron from the
/// six axes (0, ±1, φ), volume 84.72136.
#[test]
fn zonohedra_of_solid_geometry() {
    let (faces, vertices, area, volume) = zonohedron(&[[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]]);
    assert_eq!((faces, vertices), (6, 8));
    assert!((area - 6.0).abs() < EXACT && (volume - 1.0).abs() < EXACT);
    let diagonals = [[1.0, 1.0, 1.0], [1.0, 1.0, -1.0], [1.0, -1.0, 1.0], [-1.0, 1.0, 1.0]];
    let (faces, vertices, area, volume) = zonohedron(&diagonals);
    assert_eq!((faces, vertices), (12, 14));
    assert!((area - 24.0 * 2.0_f64.sqrt()).abs() < EXACT && (volume - 16.0).abs() < EXACT);
    let phi = f64::midpoint(1.0, 5.0_f64.sqrt());
    let axes = [[0.0, 1.0, phi], [0.0, -1.0, phi], [1.0, phi, 0.0], [-1.0, phi, 0.0], [phi, 0.0, 1.0], [phi, 0.0, -1.0]];
    let (faces, vertices, _, volume) = zonohedron(&axes);
    assert_eq!((faces, vertices), (30, 32));
    assert!((volume - 84.72136).abs() < 1e-5, "{volume}");
}

/// Generators in general position: N(N−1) faces, N(N−1)+2 vertices, volume Σ |det| over triples (P. `McMullen` 1971).
#[test]
fn zonotopes_in_general_position() {
    let mut rng = ChaCha8Rng::seed_from_u64(20);
    for count in [3, 4, 5, 6, 8] {
        let torques: Vec<[f64; 3]> = (0..count).map(|_| authority_layouts::direction(&mut rng).into()).collect();
        let (faces, vertices, _, volume) = zonohedron(&torques);
        assert_eq!((faces, vertices), (count * (count - 1), count * (count - 1) + 2));
        let mut expected = 0.0;
        for i in 0..count {
            for j in 0..i {
                for k in 0..j {
                    let [a, b, c] = [i, j, k].map(|t| Vector3::from(torques[t]));
                    expected += a.cross(&b).dot(&c).abs();
                }
            }
        }
        // Corners are meets of three faces at angles down to 1e-3.
        assert!((volume - expected).abs() < 1e-8 * expected, "{count}: {volume} against {expected}");
    }
}

/// By hand: unit torques (1,1,1), (1,−1,−1), (−1,1,−1), (−1,−1,1) cost 1, 1 and 3 along (1,0,0), (1,1,1), (−1,−1,−1).
#[test]
fn four_tetrahedral_torques() {
    let torques = [[1.0, 1.0, 1.0], [1.0, -1.0, -1.0], [-1.0, 1.0, -1.0], [-1.0, -1.0, 1.0]];
    let generators: Vec<Generator> = torques.iter().map(|t| torque_only(*t)).collect();
    for net in BOTH {
        let map = PriceMap::new(&generators, net);
        assert!(Authority::new(&generators, net).every_direction());
        let expected = [
            ([1.0, 0.0, 0.0], 1.0, [0.5, 0.5, 0.0, 0.0]),
            ([1.0, 1.0, 1.0], 1.0, [1.0, 0.0, 0.0, 0.0]),
            ([-1.0, -1.0, -1.0], 3.0, [0.0, 1.0, 1.0, 1.0]),
        ];
        for (h, price, impulses) in expected {
            assert!((kg(&map, h).expect("served") - price).abs() < EXACT);
            let found = map.allocate(&h.into()).expect("served");
            assert!(found.iter().zip(impulses).all(|(a, b)| (a - b).abs() < EXACT), "{found:?}");
        }
        // The dearest is against one of the four: 3 for a vector of length √3.
        let (_, dearest) = map.dearest().expect("every direction is served");
        assert!((dearest - 3.0_f64.sqrt()).abs() < EXACT);
        for lost in 0..4 {
            assert!(!Authority::new(&without(&generators, &[lost]), net).every_direction());
        }
    }
}

/// Crawford (AIAA 69-845, 1969): one-sided thrusters number at least n + 1 for n degrees of freedom. Torque: 4, not 3.
/// All six: 7, so that six thrusters never make pure torque in every direction.
#[test]
fn fewest_thrusters() {
    let mut rng = ChaCha8Rng::seed_from_u64(21);
    let mut four = 0;
    for _ in 0..200 {
        let general = |count, rng: &mut ChaCha8Rng| about(&layout(Kind::General, count, rng), Vector3::zeros());
        assert!(!Authority::new(&general(3, &mut rng), NetForce::Any).every_direction());
        four += usize::from(Authority::new(&general(4, &mut rng), NetForce::Any).every_direction());
        assert!(!Authority::new(&general(6, &mut rng), NetForce::Zero).every_direction());
    }
    // Four random half-lines span space positively with probability 1/8 (Wendel 1962): 25 ± 4.7 of 200.
    assert!((8..=45).contains(&four), "{four}");
    // Seven: six general wrenches and the one that closes them, made a thruster by choosing its scale and its screw.
    let seven = [
        unit_thruster([0.0, 1.0, 0.0], [1.0, 0.0, 0.0]),
        unit_thruster([0.0, 0.0, 1.0], [0.0, 1.0, 0.0]),
        unit_thruster([1.0, 0.0, 0.0], [0.0, 0.0, 1.0]),
        unit_thruster([0.3, 0.0, 0.0], [0.0, 1.0, 0.0]),
        unit_thruster([0.0, 0.3, 0.0], [0.0, 0.0, 1.0]),
        unit_thruster([0.0, 0.0, 0.3], [1.0, 0.0, 0.0]),
    ];
    let sum = wrench(&seven, &[1.0; 6]);
    let closing = Generator { torque: -sum.0, force: -sum.1, least: 0.0, most: 1.0, cost: 1.0 };
    let mut closed = seven.to_vec();
    closed.push(closing);
    assert!(Authority::new(&closed, NetForce::Zero).every_direction());
    for lost in 0..7 {
        assert!(!Authority::new(&without(&closed, &[lost]), NetForce::Zero).every_direction());
    }
}

/// By hand: six one-sided torques ± the axes; each failure loses exactly its own signed axis.
#[test]
fn six_torques_lose_one_signed_axis_each() {
    let generators: Vec<Generator> = signed_axes().iter().map(|t| torque_only((*t).into())).collect();
    for (case, lost) in cases(&generators, &single_failures(6)).iter().zip([None, Some(0), Some(1), Some(2), Some(3), Some(4), Some(5)]) {
        for (axis, e) in signed_axes().iter().enumerate() {
            let expected = if lost == Some(axis) { 0.0 } else { 1.0 };
            for capability in [&case.pure_torque, &case.any_force] {
                assert!((capability.authority.most(e) - expected).abs() < EXACT);
                assert_eq!(kg(&capability.price, (*e).into()).is_some(), lost != Some(axis));
            }
        }
    }
}

/// Twelve thrusters on a cube: ±x pushes at (0, ±1, 0), ±y at (0, 0, ±1), ±z at (±1, 0, 0).
fn cube() -> Vec<Generator> {
    let pairs = [(Vector3::x(), Vector3::y()), (Vector3::y(), Vector3::z()), (Vector3::z(), Vector3::x())];
    let four = |(push, at): (Vector3<f64>, Vector3<f64>)| {
        [(push, at), (-push, at), (push, -at), (-push, -at)].map(|(d, r)| unit_thruster(r.into(), d.into()))
    };
    pairs.into_iter().flat_map(four).collect()
}

/// By hand and by a linear-programming solver: 1 N·m per N about each axis from a couple of two half-opened thrusters; a
/// failure loses exactly the signed pure torque that the thruster makes, and none if a force may be left.
#[test]
fn cube_of_twelve_with_failures() {
    let generators = cube();
    let all = cases(&generators, &single_failures(12));
    let intact = &all[0].pure_torque;
    assert_eq!((intact.authority.rank, intact.authority.torque_rank, intact.authority.wrench_rank), (3, 3, 6));
    assert!(intact.authority.every_direction());
    for e in signed_axes() {
        assert!((kg(&intact.price, e.into()).expect("served") - 1.0).abs() < EXACT);
        assert!((intact.authority.most(&e) - 2.0).abs() < EXACT, "a couple of two 1 N thrusters on 1 m arms");
        let fired = intact.price.allocate(&e).expect("served");
        assert_eq!(fired.iter().filter(|j| (**j - 0.5).abs() < EXACT).count(), 2, "{fired:?}");
    }
    for (thruster, case) in generators.iter().zip(&all[1..]) {
        for e in signed_axes() {
            let own = thruster.torque.dot(&e) > 0.5;
            assert_eq!(case.pure_torque.authority.most(&e) > 0.0, !own);
            assert_eq!(kg(&case.pure_torque.price, e.into()).is_none(), own);
            assert!(case.any_force.authority.most(&e) > 0.5);
        }
        assert!(!case.pure_torque.authority.every_direction());
        assert!(case.any_force.authority.every_direction());
        let Price::NotServed { along } = case.pure_torque.price.price(&thruster.torque) else {
            panic!("the torque of the lost thruster is still served");
        };
        assert!(along.dot(&thruster.torque) > 0.0);
    }
}

/// By hand: no thrusters, thrusters through the centre of mass, all on one side, on one line, and in a plane.
#[test]
fn poor_layouts_have_verdicts() {
    let through = [unit_thruster([1.0, 0.0, 0.0], [1.0, 0.0, 0.0]), unit_thruster([0.0, 2.0, 0.0], [0.0, -1.0, 0.0])];
    for generators in [&[][..], &through[..]] {
        for net in BOTH {
            let authority = Authority::new(generators, net);
            assert_eq!((authority.rank, authority.torque_rank, authority.missing.len()), (0, 0, 3));
            assert!(authority.guaranteed() <= 0.0 && !authority.every_direction());
            assert!(authority.most(&Vector3::x()) <= 0.0);
            assert!(authority.fill(&Vector3::x()).is_infinite());
            assert_eq!(authority.serving(&Vector3::x(), generators), vec![0.0; generators.len()]);
            let map = PriceMap::new(generators, net);
            assert!(map.dearest().is_none() && map.allocate(&Vector3::y()).is_none());
            assert_eq!(kg(&map, [0.0, 0.0, 0.0]), Some(0.0));
        }
    }
    // Four corners of a square panel, all pushing +z: torque about x and y only, and never a couple.
    let panel: Vec<Generator> =
        [[1.0, 1.0], [1.0, -1.0], [-1.0, 1.0], [-1.0, -1.0]].iter().map(|[x, y]| unit_thruster([*x, *y, -1.0], [0.0, 0.0, 1.0])).collect();
    assert_eq!(Authority::new(&panel, NetForce::Zero).rank, 0);
    let free = Authority::new(&panel, NetForce::Any);
    assert_eq!((free.rank, free.wrench_rank), (2, 3));
    assert!((free.missing[0].z.abs() - 1.0).abs() < EXACT);
    assert!((free.most(&Vector3::x()) - 2.0).abs() < EXACT, "two thrusters on 1 m arms");
    // Two opposite thrusters off the centre: one sign of one axis.
    let couple = [unit_thruster([0.0, 1.0, 0.0], [1.0, 0.0, 0.0]), unit_thruster([0.0, -1.0, 0.0], [-1.0, 0.0, 0.0])];
    let authority = Authority::new(&couple, NetForce::Zero);
    assert_eq!(authority.rank, 1);
    assert!((authority.most(&-Vector3::z()) - 2.0).abs() < EXACT && authority.most(&Vector3::z()) <= 0.0);
    assert!((authority.fill(&Vector3::new(0.0, 0.0, -1.0)) - 0.5).abs() < EXACT);
    let map = PriceMap::new(&couple, NetForce::Zero);
    assert!((kg(&map, [0.0, 0.0, -4.0]).expect("served") - 4.0).abs() < EXACT);
    assert!(kg(&map, [0.0, 0.0, 1.0]).is_none() && kg(&map, [1.0, 0.0, -1.0]).is_none());
}

/// Of thrusters on one line the cheapest fires; the others still add authority.
#[test]
fn duplicates_add_torque_and_the_cheapest_fires() {
    let mut generators = cube();
    let dear: Vec<Generator> = cube().into_iter().map(|g| Generator { cost: 3.0, ..g }).collect();
    generators.splice(0..0, dear);
    for net in BOTH {
        let authority = Authority::new(&generators, net);
        assert!((authority.guaranteed() - 2.0 * Authority::new(&cube(), net).guaranteed()).abs() < EXACT);
        let map = PriceMap::new(&generators, net);
        assert!((kg(&map, [0.0, 0.0, 1.0]).expect("served") - 1.0).abs() < EXACT);
        let fired = map.allocate(&Vector3::new(0.3, -0.2, 0.9)).expect("served");
        assert!(fired[..12].iter().all(|j| *j <= 0.0));
    }
}

/// Wheels: three on the axes fill a box; four on the diagonals of a cube have the rhombic dodecahedron for an envelope,
/// with 4 capacities / √3 along an axis (by hand: all four share it equally).
#[test]
fn wheel_envelopes() {
    let three: Vec<Generator> = [Vector3::x(), Vector3::y(), Vector3::z()].map(|a| Generator::wheel(a, 2.0)).into();
    let box_shaped = Authority::new(&three, NetForce::Any);
    assert_eq!(box_shaped.half_spaces.len(), 6);
    assert!((box_shaped.fill(&Vector3::new(1.0, -1.5, 0.2)) - 0.75).abs() < EXACT);
    assert!((box_shaped.guaranteed() - 2.0).abs() < EXACT);
    assert!((box_shaped.most(&Vector3::new(1.0, 1.0, 1.0)) - 2.0 * 3.0_f64.sqrt()).abs() < EXACT);
    let s = 3.0_f64.sqrt().recip();
    let four: Vec<Generator> =
        [[s, s, s], [s, -s, s], [-s, s, s], [-s, -s, s]].iter().map(|a| Generator::wheel((*a).into(), 10.0)).collect();
    let pyramid = Authority::new(&four, NetForce::Any);
    assert_eq!(pyramid.half_spaces.len(), 12);
    for e in signed_axes() {
        assert!((pyramid.most(&e) - 40.0 * s).abs() < EXACT * 10.0);
        let levels = pyramid.serving(&e, &four);
        assert!(levels.iter().all(|l| (l.abs() - 10.0).abs() < EXACT * 10.0), "{levels:?}");
    }
}
