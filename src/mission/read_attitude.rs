//! Attitudes as written turned into laws.

use nalgebra::Vector3;

use super::attitude::{Attitude, Law};
use super::pointing::{Direction, Pointing, Sky};
use super::survey::{self, Survey};
use crate::config::{self, Quantity, Triple};
use crate::environment::{Epoch, Trajectory};
use crate::uncertain::{Parameters, Uncertain};
use crate::units::kind;
use crate::vehicle::{Faults, register_triple};

/// Instants of a phase at which an attitude is checked to be defined.
const SAMPLES: u32 = 200;
/// Shares of a mix add up to 1 but for the rounding of what was written.
const SHARES_ROUNDING: f64 = 1e-6;

/// The keys that attitude and part of a mix have in common.
struct Written<'a> {
    axis: Option<Triple<kind::Number>>,
    to: Option<config::Direction>,
    second_axis: Option<Triple<kind::Number>>,
    towards: Option<config::Direction>,
    spin: Option<Quantity<kind::AngularRate>>,
    survey: Option<&'a config::Survey>,
}

impl<'a> From<&'a config::Attitude> for Written<'a> {
    fn from(a: &'a config::Attitude) -> Self {
        Self { axis: a.axis, to: a.to, second_axis: a.second_axis, towards: a.towards, spin: a.spin, survey: a.survey.as_ref() }
    }
}

impl<'a> From<&'a config::Part> for Written<'a> {
    fn from(a: &'a config::Part) -> Self {
        Self { axis: a.axis, to: a.to, second_axis: a.second_axis, towards: a.towards, spin: a.spin, survey: a.survey.as_ref() }
    }
}

pub(super) fn read(
    written: &config::Attitude,
    at: &str,
    phase: &str,
    parameters: &mut Parameters,
    faults: &mut Faults,
) -> Option<Attitude> {
    let law = match &written.mix {
        None => law(&written.into(), at, faults),
        Some(mix) => {
            let own = [written.axis.is_some(), written.to.is_some(), written.survey.is_some(), written.spin.is_some()];
            if own.contains(&true) || written.second_axis.is_some() || written.towards.is_some() {
                faults.push(
                    at,
                    "`mix` goes without the keys of a single attitude",
                    "move `axis`, `to` and the like into a part of the mix",
                );
                return None;
            }
            self::mix(mix, &format!("{at}.mix"), faults)
        }
    };
    let bias_rad = match &written.bias {
        None => [Uncertain::fixed(0.0); 3],
        Some(bias) => register_triple(&format!("mission.phases[{phase}].attitude.bias"), "rad", bias.0.clone(), parameters),
    };
    Some(Attitude { law: law?, bias_rad })
}

fn mix(written: &config::Mix, at: &str, faults: &mut Faults) -> Option<Law> {
    let period = faults.positive(&format!("{at}.period"), written.period.0, "a period");
    let mut parts = Vec::new();
    for (index, part) in written.of.iter().enumerate() {
        let at = format!("{at}.of[{index}]");
        let share = faults.within(&format!("{at}.share"), part.share.0, 0.0, 1.0, "a share of the time");
        let law = law(&part.into(), &at, faults);
        parts.push(share.zip(law));
    }
    let parts = parts.into_iter().collect::<Option<Vec<_>>>()?;
    if parts.is_empty() {
        faults.push(&format!("{at}.of"), "expected at least one part, got an empty list", "describe each part with its `share`");
        return None;
    }
    let sum: f64 = parts.iter().map(|(share, _)| share).sum();
    if (sum - 1.0).abs() > SHARES_ROUNDING {
        faults.push(&format!("{at}.of"), format!("the shares add up to {sum:.4}"), "make the shares add up to 1 (100 %)");
        return None;
    }
    Some(Law::Mix(period?, parts))
}

fn law(written: &Written<'_>, at: &str, faults: &mut Faults) -> Option<Law> {
    let axis = match written.axis {
        None => Vector3::z(),
        Some(axis) => faults.direction(&format!("{at}.axis"), axis.0)?,
    };
    if let Some(survey) = written.survey {
        if written.to.is_some() || written.spin.is_some() {
            faults.push(at, "a survey goes without `to` and `spin`", "leave them out: the survey says where `axis` points");
            return None;
        }
        return self::survey(written, survey, axis, at, faults);
    }
    let to = written.to.unwrap_or(config::Direction::Nadir);
    let (second_axis, towards) = second(written, axis, to, at, faults)?;
    let (to, towards) = (direction(&to, &format!("{at}.to"), faults)?, direction(&towards, &format!("{at}.towards"), faults)?);
    if to.0 == towards.0 {
        let help = "point the second axis towards something else: `ecliptic_north`, `orbit_normal`, `earth`, `velocity`, `sun`";
        faults.push(at, "`to` and `towards` lie along one line, so the attitude about it is undefined", help);
        return None;
    }
    let pointing = Pointing { axis, to, second_axis, towards };
    match written.spin {
        None => Some(Law::Pointing(pointing)),
        Some(rate) => Some(Law::Spin(pointing, rate.0)),
    }
}

/// The second axis and where it points, from what is written or by default.
fn second(
    written: &Written<'_>,
    axis: Vector3<f64>,
    to: config::Direction,
    at: &str,
    faults: &mut Faults,
) -> Option<(Vector3<f64>, config::Direction)> {
    use config::Direction as D;
    let towards = written.towards.unwrap_or(match to {
        _ if written.survey.is_some() => D::Sun,
        D::Nadir | D::Zenith | D::Velocity | D::AntiVelocity => D::OrbitNormal,
        _ => D::EclipticNorth,
    });
    let against = matches!(to, D::Nadir | D::Zenith) && written.survey.is_none();
    let by_default = match axis.y.abs() < 0.9 {
        true if against => -Vector3::y(),
        true => Vector3::y(),
        false => Vector3::x(),
    };
    let second_axis = match written.second_axis {
        Some(second) => faults.direction(&format!("{at}.second_axis"), second.0)?,
        None => by_default,
    };
    // One degree: a second axis nearer to the first says nothing about the turn.
    if axis.cross(&second_axis).norm() < 0.017 {
        let help = "give a second axis well off the first, such as `1 0 0` beside `0 0 1`";
        faults.push(&format!("{at}.second_axis"), "the second axis lies along the first", help);
        return None;
    }
    Some((second_axis, towards))
}

fn survey(written: &Written<'_>, own: &config::Survey, axis: Vector3<f64>, at: &str, faults: &mut Faults) -> Option<Law> {
    let (second_axis, towards) = second(written, axis, config::Direction::Sun, at, faults)?;
    let (attitude_at, at) = (at, format!("{at}.survey"));
    let half_turn = std::f64::consts::PI;
    let mut angle = |key: &str, value: f64| {
        if (0.0..=half_turn).contains(&value) {
            return Some(value);
        }
        faults.push(&format!("{at}.{key}"), "expected an angle from 0 to 180 deg", "give an angle from the Sun in that range");
        None
    };
    let (from, to) = (angle("sun_angle_from", own.sun_angle_from.0), angle("sun_angle_to", own.sun_angle_to.0));
    let dwell = faults.positive(&format!("{at}.dwell"), own.dwell.0, "a time");
    let (from, to) = (from?, to?);
    if from > to {
        faults.push_also(
            &format!("{at}.sun_angle_from"),
            "the least angle from the Sun is over the largest",
            "swap them",
            &format!("{at}.sun_angle_to"),
            "the largest",
        );
        return None;
    }
    let (sun_angle_rad, shift) = ([from, to], survey::shift(own.seed.unwrap_or(1)));
    let towards = direction(&towards, &format!("{attitude_at}.towards"), faults)?;
    Some(Law::Survey(Survey { axis, second_axis, towards, sun_angle_rad, dwell_s: dwell?, shift }))
}

/// The direction, and whether its opposite is meant.
fn direction(written: &config::Direction, at: &str, faults: &mut Faults) -> Option<(Direction, bool)> {
    use config::Direction as D;
    let found = match written {
        D::Nadir => (Direction::Nadir, false),
        D::Zenith => (Direction::Nadir, true),
        D::Sun => (Direction::Sun, false),
        D::AntiSun => (Direction::Sun, true),
        D::Earth => (Direction::Earth, false),
        D::Velocity => (Direction::Velocity, false),
        D::AntiVelocity => (Direction::Velocity, true),
        D::OrbitNormal => (Direction::OrbitNormal, false),
        D::EclipticNorth => (Direction::EclipticNorth, false),
        D::CelestialNorth => (Direction::Fixed(Vector3::z()), false),
        D::Sky(sky) => {
            let declination = sky.declination.0;
            if declination.abs() > std::f64::consts::FRAC_PI_2 {
                let message = "expected a declination from -90 to 90 deg";
                faults.push(&format!("{at}.sky.declination"), message, "give the angle from the celestial equator");
                return None;
            }
            let ((sa, ca), (sd, cd)) = (sky.right_ascension.0.sin_cos(), declination.sin_cos());
            (Direction::Fixed(Vector3::new(cd * ca, cd * sa, sd)), false)
        }
    };
    Some(found)
}

/// Notes an attitude whose two directions lie along one another for half of a phase or more. Where they only pass
/// through one another the orbit normal stands in, see [`Pointing::inertial_from_body`].
pub(super) fn check_defined(attitude: &Attitude, trajectory: &Trajectory, start: Epoch, duration_s: f64, at: &str, faults: &mut Faults) {
    for pointing in attitude.law.pointings() {
        let epochs = (0..SAMPLES).map(|k| start.plus_seconds(duration_s * (f64::from(k) + 0.5) / f64::from(SAMPLES)));
        let undefined: Vec<Epoch> = epochs.filter(|epoch| !pointing.is_defined(&Sky::at(trajectory, *epoch))).collect();
        if let (Some(first), true) = (undefined.first(), undefined.len() * 2 >= SAMPLES as usize) {
            let message = format!("`to` and `towards` lie along one line, so the attitude about it is undefined (at {first} and later)");
            faults.push(at, message, "point the second axis towards something else: `ecliptic_north`, `orbit_normal`, `velocity`");
        }
    }
}
