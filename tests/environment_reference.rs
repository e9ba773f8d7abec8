//! The environment against values computed by other people's code: see tests/reference/environment.py, which names the
//! packages and versions and writes the file read here.

use approx::assert_abs_diff_eq;
use couplet::environment::{Activity, Epoch, Igrf, density_kg_per_m3, earth_fixed_from_inertial, sun_position_m};
use hifitime::Epoch as Hifitime;
use nalgebra::{Matrix3, Vector3};
use serde::Deserialize;

#[derive(Deserialize)]
struct Reference {
    sun: Vec<SunRow>,
    rotation: Vec<RotationRow>,
    field: Vec<FieldRow>,
    density: Vec<DensityRow>,
}

#[derive(Deserialize)]
struct SunRow {
    utc: String,
    position_m: [f64; 3],
}

#[derive(Deserialize)]
struct RotationRow {
    utc: String,
    rows: [[f64; 3]; 3],
}

#[derive(Deserialize)]
struct FieldRow {
    utc: String,
    radius_m: f64,
    latitude_deg: f64,
    longitude_deg: f64,
    radial_nt: f64,
    south_nt: f64,
    east_nt: f64,
}

#[derive(Deserialize)]
struct DensityRow {
    utc: String,
    height_m: f64,
    latitude_deg: f64,
    longitude_deg: f64,
    f107: f64,
    ap: f64,
    density_kg_per_m3: f64,
}

fn reference() -> Reference {
    serde_json::from_str(include_str!("reference/environment.json")).expect("the committed reference reads")
}

/// Radial, south and east unit vectors at a geocentric place.
fn spherical(latitude_deg: f64, longitude_deg: f64) -> [Vector3<f64>; 3] {
    let ((s, c), (sl, cl)) = (latitude_deg.to_radians().sin_cos(), longitude_deg.to_radians().sin_cos());
    [Vector3::new(c * cl, c * sl, s), Vector3::new(s * cl, s * sl, -c), Vector3::new(-sl, cl, 0.0)]
}

// Source: astropy 7.0.0, built-in ephemeris. The theory claims 0.01°. Its distance leaves out the Moon and the planets, which
// move the Earth by some 1e-5 au each: 1e-4.
#[test]
fn the_sun_stands_where_astropy_puts_it() {
    for row in reference().sun {
        let (want, got) = (Vector3::from(row.position_m), sun_position_m(Epoch::parse(&row.utc).unwrap()));
        assert!(want.angle(&got).to_degrees() < 0.01, "{}: {}°", row.utc, want.angle(&got).to_degrees());
        assert_abs_diff_eq!(got.norm() / want.norm(), 1.0, epsilon = 1e-4);
    }
}

// Source: ERFA c2t06a as shipped with astropy 7.0.0, with UT1 = UTC and no polar motion. What is left is nutation: 0.005°.
#[test]
fn the_earth_turns_as_erfa_has_it() {
    for row in reference().rotation {
        let want = Matrix3::from_fn(|i, j| row.rows[i][j]);
        let got = earth_fixed_from_inertial(Epoch::parse(&row.utc).unwrap());
        // |A − R|_F = 2√2 sin(angle / 2) for two rotations.
        let angle = 2.0 * ((want - got.matrix()).norm() / 8f64.sqrt()).asin();
        assert!(angle.to_degrees() < 0.02, "{}: {}°", row.utc, angle.to_degrees());
    }
}

// Source: ppigrf 2.1.0 (IGRF-14), igrf_gc. Same coefficients, so rounding alone would do; 0.01 nT allows for a different
// reading of dates within a span.
#[test]
fn the_field_is_that_of_ppigrf() {
    for row in reference().field {
        let axes = spherical(row.latitude_deg, row.longitude_deg);
        let field = Igrf::at(Epoch::parse(&row.utc).unwrap()).field_earth_fixed(&(axes[0] * row.radius_m)) * 1e9;
        for (axis, want) in axes.iter().zip([row.radial_nt, row.south_nt, row.east_nt]) {
            assert_abs_diff_eq!(field.dot(axis), want, epsilon = 0.01);
        }
    }
}

// Source: PyPI nrlmsise00 0.1.2 (the C port), gtd7d. The model rounds 2π/24 to 0.2618, so local times a day apart differ by
// 1e-5; the place goes through our own geodetic coordinates.
#[test]
fn the_air_is_as_dense_as_the_c_port_has_it() {
    for row in reference().density {
        let position = from_geodetic(row.latitude_deg, row.longitude_deg, row.height_m);
        let activity = Activity { f107: row.f107, f107_average: row.f107, ap: row.ap };
        let got = density_kg_per_m3(Epoch::parse(&row.utc).unwrap(), &position, &activity);
        assert_abs_diff_eq!(got / row.density_kg_per_m3, 1.0, epsilon = 1e-4);
    }
}

/// WGS 84 geodetic degrees and height to Earth-fixed metres: the closed form, which the code under test has to invert.
fn from_geodetic(latitude_deg: f64, longitude_deg: f64, height_m: f64) -> Vector3<f64> {
    let e2 = 6.694_379_990_141_316e-3;
    let ((s, c), (sl, cl)) = (latitude_deg.to_radians().sin_cos(), longitude_deg.to_radians().sin_cos());
    let normal = 6_378_137.0 / (1.0 - e2 * s * s).sqrt();
    Vector3::new((normal + height_m) * c * cl, (normal + height_m) * c * sl, (normal * (1.0 - e2) + height_m) * s)
}

// Source: hifitime 4.3, which holds its own leap seconds. Julian dates in f64 resolve 5e-10 day.
#[test]
fn julian_dates_are_those_of_hifitime() {
    for date in [
        "1985-06-30T23:59:59",
        "1999-01-01T00:00:00",
        "2016-12-31T23:59:58",
        "2017-01-01T00:00:00",
        "2028-03-01T12:34:56",
        "2049-11-30T06:00:00",
    ] {
        let ours = Epoch::parse(&format!("{date}Z")).unwrap();
        let theirs: Hifitime = format!("{date} UTC").parse().unwrap();
        assert_abs_diff_eq!(ours.julian_date_tt(), theirs.to_jde_tt_days(), epsilon = 1e-9);
        assert_abs_diff_eq!(ours.julian_date_utc(), theirs.to_jde_utc_days(), epsilon = 1e-9);
    }
}

// Source: the same, in TAI (its difference of two UTC epochs counts no leap second). Every half year from 1972 to 2026.
#[test]
fn leap_seconds_are_those_of_hifitime() {
    let mut steps = 0;
    for year in 1972..2027 {
        for (last, first) in [(format!("{year}-06-30"), format!("{year}-07-01")), (format!("{year}-12-31"), format!("{}-01-01", year + 1))]
        {
            let (before, after) = (format!("{last}T23:59:58"), format!("{first}T00:00:00"));
            let ours = |text: &str| Epoch::parse(&format!("{text}Z")).unwrap();
            let theirs = |text: &str| format!("{text} UTC").parse::<Hifitime>().unwrap().to_tai_seconds();
            let span = ours(&after).tt_seconds() - ours(&before).tt_seconds();
            assert_abs_diff_eq!(span, theirs(&after) - theirs(&before), epsilon = 1e-6);
            // Back to UTC on both sides.
            for text in [&before, &after] {
                assert_eq!(ours(text).to_string(), format!("{text}Z"));
            }
            steps += i32::from(span > 2.5);
        }
    }
    assert_eq!(steps, 27);
}
