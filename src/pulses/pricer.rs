//! The layout about one centre of mass, ready to price angular impulses.

use nalgebra::Vector3;

use super::{Firing, fire};
use crate::authority::{Authority, Capability, Generator, NetForce, PriceMap};
use crate::config::NetForceChoice;
use crate::uncertain::Draw;
use crate::vehicle::{Propulsion, PulseLimits};

/// Thrust, N, and steady exhaust speed, m/s, of each thruster in one draw.
#[derive(Debug, Clone, PartialEq)]
pub struct Performance(Vec<(f64, f64)>);

impl Performance {
    /// Nominal.
    #[must_use]
    pub fn nominal(propulsion: &Propulsion) -> Self {
        Self(propulsion.thrusters.iter().map(|t| (t.thrust_n(), t.effective_speed_m_per_s())).collect())
    }

    /// In a draw.
    #[must_use]
    pub fn in_draw(propulsion: &Propulsion, draw: &Draw) -> Self {
        Self(propulsion.thrusters.iter().map(|t| (t.thrust_in_draw_n(draw), t.effective_speed_in_draw_m_per_s(draw))).collect())
    }
}

impl Performance {
    /// The same with thrust and exhaust speed times factors.
    #[must_use]
    pub fn times(&self, thrust: f64, speed: f64) -> Self {
        Self(self.0.iter().map(|(f, u)| (f * thrust, u * speed)).collect())
    }

    /// Thrust, N, and steady exhaust speed, m/s, of one thruster.
    #[must_use]
    pub fn of(&self, thruster: usize) -> (f64, f64) {
        self.0[thruster]
    }
}

/// What the thrusters have done.
#[derive(Debug, Clone, PartialEq)]
pub struct Wear {
    /// Valve cycles of each.
    pub cycles: Vec<f64>,
    /// Propellant through each, kg.
    pub throughput_kg: Vec<f64>,
}

impl Wear {
    /// Nothing yet, for this many thrusters.
    #[must_use]
    pub fn none(thrusters: usize) -> Self {
        Self { cycles: vec![0.0; thrusters], throughput_kg: vec![0.0; thrusters] }
    }

    /// Adds pulses and propellant, kg, of one thruster.
    pub fn add(&mut self, thruster: usize, pulses: f64, propellant_kg: f64) {
        self.cycles[thruster] += pulses;
        self.throughput_kg[thruster] += propellant_kg;
    }
}

/// The smallest firing that turns the spacecraft about a direction.
#[derive(Debug, Clone, PartialEq)]
pub struct SmallestFiring {
    /// Its angular impulse, N·m·s.
    pub bit_n_m_s: f64,
    /// Its propellant, kg.
    pub propellant_kg: f64,
    /// The thrusters, one pulse each, and the propellant of each, kg.
    pub thrusters: Vec<(usize, f64)>,
}

/// Push that an unload may leave.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ForceChoice {
    /// None: couples only.
    Zero,
    /// Whatever takes the least propellant.
    Any,
    /// Weighed at this price along each body axis, kg/(N·s).
    Priced(f64),
}

/// Bound of an imagined force: far over any thruster, so that it never binds.
const MOST_IMAGINED_N: f64 = 1e9;

/// Prices and allocations of a layout about one centre of mass.
#[derive(Debug, Clone)]
pub struct Pricer {
    generators: Vec<Generator>,
    capability: Capability,
    limits: PulseLimits,
}

impl Pricer {
    /// The layout of `propulsion` about a centre of mass, with its own choice of net force.
    #[must_use]
    pub fn new(propulsion: &Propulsion, centre_of_mass_m: &Vector3<f64>) -> Self {
        let choice = match propulsion.net_force {
            NetForceChoice::Zero => ForceChoice::Zero,
            NetForceChoice::Any => ForceChoice::Any,
        };
        Self::with_force(propulsion, centre_of_mass_m, choice)
    }

    /// The layout of `propulsion` about a centre of mass, with another choice of net force.
    ///
    /// A priced push is weighed along each body axis against the propellant it saves: an imagined force along each axis
    /// balances it at that price, and firings leave it out.
    #[must_use]
    pub fn with_force(propulsion: &Propulsion, centre_of_mass_m: &Vector3<f64>, choice: ForceChoice) -> Self {
        let generators = Self::generators(propulsion, centre_of_mass_m);
        let capability = match choice {
            ForceChoice::Zero => Capability::new(&generators, NetForce::Zero),
            ForceChoice::Any => Capability::new(&generators, NetForce::Any),
            ForceChoice::Priced(cost) => {
                let axes = (0..3).flat_map(|axis| [Vector3::ith(axis, 1.0), Vector3::ith(axis, -1.0)]);
                let imagined = axes.map(|force| Generator { torque: Vector3::zeros(), force, least: 0.0, most: MOST_IMAGINED_N, cost });
                let all: Vec<Generator> = generators.iter().copied().chain(imagined).collect();
                Capability { authority: Authority::new(&generators, NetForce::Any), price: PriceMap::new(&all, NetForce::Zero) }
            }
        };
        Self { generators, capability, limits: propulsion.pulses.clone() }
    }

    /// The layout about a centre of mass with some thrusters lost; their indices stay.
    #[must_use]
    pub fn with_loss(propulsion: &Propulsion, centre_of_mass_m: &Vector3<f64>, choice: NetForceChoice, lost: &[usize]) -> Self {
        let mut generators = Self::generators(propulsion, centre_of_mass_m);
        for index in lost {
            if let Some(generator) = generators.get_mut(*index) {
                generator.most = 0.0;
            }
        }
        let net = match choice {
            NetForceChoice::Zero => NetForce::Zero,
            NetForceChoice::Any => NetForce::Any,
        };
        Self { capability: Capability::new(&generators, net), generators, limits: propulsion.pulses.clone() }
    }

    /// What to ask of the layout so that it gives `wanted` (N·m·s) where the centre of mass lies `shift` (m) off the one it
    /// was made for; `None` if no such impulse is found.
    ///
    /// The choice of thrusters follows the centre that is known, as on board; the wheels tell what was missed, and the next
    /// firings make up for it, so that what is given in the end is what was wanted. Arms fall short by `shift` × push.
    #[must_use]
    pub fn aimed(&self, wanted: &Vector3<f64>, shift: &Vector3<f64>) -> Option<Vector3<f64>> {
        let mut asked = *wanted;
        for _ in 0..60 {
            let firings = self.capability.price.firings(&asked)?.filter(|(index, _)| *index < self.generators.len());
            let push: Vector3<f64> = firings.map(|(index, impulse)| self.generators[index].force * impulse).sum();
            let missed = wanted - (asked - shift.cross(&push));
            if missed.norm() <= 1e-12 * wanted.norm() {
                return Some(asked);
            }
            asked += missed;
        }
        None
    }

    /// The thrusters as generators of torque about a centre of mass, nominal performance.
    #[must_use]
    pub fn generators(propulsion: &Propulsion, centre_of_mass_m: &Vector3<f64>) -> Vec<Generator> {
        let one = |t: &crate::vehicle::Thruster| {
            let push = t.push.into_inner();
            Generator::thruster(t.position_m, push, *centre_of_mass_m, t.thrust_n(), t.effective_speed_m_per_s())
        };
        propulsion.thrusters.iter().map(one).collect()
    }

    /// The thrusters as generators.
    #[must_use]
    pub fn layout(&self) -> &[Generator] {
        &self.generators
    }

    /// Attainable torque under the choice of net force.
    #[must_use]
    pub fn authority(&self) -> &Authority {
        &self.capability.authority
    }

    /// Price map under the choice of net force.
    #[must_use]
    pub fn price_map(&self) -> &PriceMap {
        &self.capability.price
    }

    /// Adds up propellant, kg, of giving an angular impulse (N·m·s) `times` times; counts pulses and propellant of each thruster into `wear`.
    ///
    /// The thrusters and their impulses are chosen at nominal performance, as on-board software does;
    /// the propellant follows the performance of the draw. `None` if the layout cannot give it.
    #[must_use]
    pub fn cost(&self, impulse_n_m_s: &Vector3<f64>, times: f64, performance: &Performance, wear: &mut Wear) -> Option<f64> {
        if impulse_n_m_s.norm_squared() <= 0.0 {
            return Some(0.0);
        }
        let mut total_kg = 0.0;
        for (index, impulse) in self.capability.price.firings(impulse_n_m_s)?.filter(|(index, _)| *index < self.generators.len()) {
            let (thrust, speed) = performance.0[index];
            let firing = fire(impulse, thrust, speed, &self.limits);
            total_kg += firing.propellant_kg * times;
            wear.add(index, firing.pulses * times, firing.propellant_kg * times);
        }
        Some(total_kg)
    }

    /// Shortest pulses that the thruster which does least makes for an angular impulse, a fraction where it is asked for less
    /// than one; shares under a fiftieth of the largest leave next to nothing in the wheels and do not count. `None` if the layout cannot give it.
    #[must_use]
    pub fn least_pulses(&self, impulse_n_m_s: &Vector3<f64>) -> Option<f64> {
        let firings: Vec<(usize, f64)> =
            self.capability.price.firings(impulse_n_m_s)?.filter(|(k, _)| *k < self.generators.len()).collect();
        let most = firings.iter().map(|(_, impulse)| *impulse).fold(0.0, f64::max);
        let counted = firings.iter().filter(|(_, impulse)| *impulse > 0.02 * most);
        counted.map(|(index, impulse)| impulse / (self.generators[*index].most * self.limits.shortest_s)).reduce(f64::min)
    }

    /// The smallest firing along a unit direction: the thruster that does least makes its shortest pulse, the others as much
    /// as the direction asks. `None` if the layout cannot give it.
    #[must_use]
    pub fn smallest(&self, direction: &Vector3<f64>, performance: &Performance) -> Option<SmallestFiring> {
        let firings: Vec<(usize, f64)> = self.capability.price.firings(direction)?.filter(|(_, impulse)| *impulse > 0.0).collect();
        // A share that is rounding would make the bit vanish.
        let most = firings.iter().map(|(_, impulse)| *impulse).fold(0.0, f64::max);
        let counted = firings.iter().filter(|(_, impulse)| *impulse > 1e-9 * most);
        let bit = counted.map(|(index, impulse)| performance.0[*index].0 * self.limits.shortest_s / impulse).fold(f64::INFINITY, f64::min);
        if !bit.is_finite() {
            return None;
        }
        let one = |(index, impulse): &(usize, f64)| -> (usize, f64) {
            let (thrust, speed) = performance.0[*index];
            let on_time_s = (impulse * bit / thrust).max(self.limits.shortest_s);
            (*index, impulse * bit / (speed * self.limits.share(on_time_s)))
        };
        let thrusters: Vec<(usize, f64)> = firings.iter().map(one).collect();
        Some(SmallestFiring { bit_n_m_s: bit, propellant_kg: thrusters.iter().map(|(_, kg)| kg).sum(), thrusters })
    }

    /// Firing of one thruster at nominal performance.
    #[must_use]
    pub fn firing(&self, thruster: usize, impulse_n_s: f64) -> Firing {
        let own = &self.generators[thruster];
        fire(impulse_n_s, own.most, own.cost.recip(), &self.limits)
    }

    /// What valves can do.
    #[must_use]
    pub fn limits(&self) -> &PulseLimits {
        &self.limits
    }
}
