//! Firings of many lifetimes at once, side by side in wide vectors.
//!
//! The instruction set is chosen when the program runs, so that one binary serves old and new machines. Every lane does the
//! same operations whatever stands beside it.

#![expect(clippy::inline_always, reason = "without it the code would not be compiled for the instruction set chosen")]

use pulp::{Arch, Simd, WithSimd};

use super::{Performance, Pricer, Wear};
use crate::authority::PlainBasis;
use crate::uncertain::{LANES, Lane};

/// Most thrusters that fit.
const MOST_THRUSTERS: usize = 32;

/// An impulse below zero by no more than this part of all is rounding.
const BORDER: f64 = 1e-12;

/// 2^52: adding and taking it away rounds a smaller number to a whole one.
const WHOLE: f64 = 4_503_599_627_370_496.0;

/// A layout ready to fire in lanes.
#[derive(Debug, Clone)]
pub struct LaneTariff {
    bases: Vec<PlainBasis>,
    lambdas: Vec<[f64; 3]>,
    /// Push of each thruster, unit.
    pushes: Vec<[f64; 3]>,
    shortest_s: f64,
    longest_s: f64,
    /// Share of the steady exhaust speed of the shortest pulse in the table, and the ramps from there: start, s, length, s, slope, 1/s.
    first_share: f64,
    ramps: Vec<[f64; 3]>,
}

/// Thrust, N, and steady exhaust speed, m/s, of each thruster in each lane.
#[derive(Debug, Clone)]
pub struct LanePerformance {
    thrust: Vec<Lane>,
    speed: Vec<Lane>,
}

/// What the thrusters have done in each lane.
#[derive(Debug, Clone)]
pub struct LaneWear {
    /// Propellant of all thrusters, kg.
    pub kg: Lane,
    cycles: Vec<Lane>,
    throughput_kg: Vec<Lane>,
}

impl LanePerformance {
    /// Performance in each lane; lanes without one get that of the first.
    #[must_use]
    pub fn new<'a>(lanes: impl Iterator<Item = &'a Performance>, thrusters: usize) -> Self {
        let mut all = Self { thrust: vec![[1.0; LANES]; thrusters], speed: vec![[1.0; LANES]; thrusters] };
        for (lane, performance) in lanes.take(LANES).enumerate() {
            for thruster in 0..thrusters {
                let (thrust, speed) = performance.of(thruster);
                all.thrust[thruster][lane] = thrust;
                all.speed[thruster][lane] = speed;
            }
        }
        all
    }
}

impl LaneWear {
    /// Nothing yet.
    #[must_use]
    pub fn none(thrusters: usize) -> Self {
        Self { kg: [0.0; LANES], cycles: vec![[0.0; LANES]; thrusters], throughput_kg: vec![[0.0; LANES]; thrusters] }
    }

    /// Back to nothing.
    pub fn clear(&mut self) {
        self.kg = [0.0; LANES];
        self.cycles.iter_mut().chain(&mut self.throughput_kg).for_each(|lane| *lane = [0.0; LANES]);
    }

    /// Adds what one lane did to the wear of its lifetime.
    pub fn add_to(&self, lane: usize, wear: &mut Wear) {
        for (thruster, (cycles, kg)) in self.cycles.iter().zip(&self.throughput_kg).enumerate() {
            wear.add(thruster, cycles[lane], kg[lane]);
        }
    }
}

impl LaneTariff {
    /// A layout in lanes; `None` where it has more thrusters than fit, or some torque cannot be made.
    #[must_use]
    pub fn new(pricer: &Pricer) -> Option<Self> {
        let thrusters = pricer.layout().len();
        let bases = pricer.price_map().plain()?.to_vec();
        let real = bases.iter().flat_map(|basis| &basis.firing).all(|(thruster, _)| *thruster < thrusters);
        if thrusters > MOST_THRUSTERS || !real {
            return None;
        }
        let limits = pricer.limits();
        let ramps = limits.performance.windows(2).filter_map(|pair| match pair {
            [(t0, s0), (t1, s1)] => Some([*t0, t1 - t0, (s1 - s0) / (t1 - t0)]),
            _ => None,
        });
        Some(Self {
            bases,
            lambdas: pricer.price_map().vertices.iter().map(|vertex| vertex.lambda.into()).collect(),
            pushes: pricer.layout().iter().map(|generator| generator.force.into()).collect(),
            shortest_s: limits.shortest_s,
            longest_s: limits.longest_s,
            first_share: limits.performance.first().map_or(1.0, |(_, share)| *share),
            ramps: ramps.collect(),
        })
    }

    /// Price of an angular impulse (N·m·s, body frame) in each lane, kg.
    #[must_use]
    pub fn price(&self, impulse: &[Lane; 3]) -> Lane {
        let mut price = [0.0; LANES];
        Arch::new().dispatch(PriceLanes { tariff: self, impulse, price: &mut price });
        price
    }

    /// Fires an angular impulse (N·m·s, body frame) in each lane as often as `times` says, as [`Pricer::cost`] does in one.
    ///
    /// Where the centre of mass lies `shift` (m) off the one that the layout was made for, the impulse asked for is corrected as
    /// [`Pricer::aimed`] does it. How often each lane's impulse is left undone comes back: those so near a border between two
    /// choices of thrusters that more care is needed.
    #[must_use]
    pub fn fire(
        &self,
        impulse: &[Lane; 3],
        shift: Option<&[Lane; 3]>,
        times: &Lane,
        performance: &LanePerformance,
        wear: &mut LaneWear,
    ) -> Lane {
        let mut left = [0.0; LANES];
        Arch::new().dispatch(FireLanes { tariff: self, impulse, shift, times, performance, wear, left: &mut left });
        left
    }
}

/// The vector of one lane group; lanes are a whole number of vectors on every machine.
#[inline(always)]
fn at<S: Simd>(lane: &Lane, group: usize) -> S::f64s {
    S::as_simd_f64s(lane.as_slice()).0[group]
}

#[inline(always)]
fn dot<S: Simd>(simd: S, row: &[f64; 3], h: &[S::f64s; 3]) -> S::f64s {
    let first = simd.mul_f64s(simd.splat_f64s(row[0]), h[0]);
    let second = simd.mul_add_f64s(simd.splat_f64s(row[1]), h[1], first);
    simd.mul_add_f64s(simd.splat_f64s(row[2]), h[2], second)
}

struct PriceLanes<'a> {
    tariff: &'a LaneTariff,
    impulse: &'a [Lane; 3],
    price: &'a mut Lane,
}

impl WithSimd for PriceLanes<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let out = S::as_mut_simd_f64s(self.price.as_mut_slice()).0;
        for (group, out) in out.iter_mut().enumerate() {
            let h = [at::<S>(&self.impulse[0], group), at::<S>(&self.impulse[1], group), at::<S>(&self.impulse[2], group)];
            let mut best = simd.splat_f64s(0.0);
            for lambda in &self.tariff.lambdas {
                best = simd.max_f64s(best, dot(simd, lambda, &h));
            }
            *out = best;
        }
    }
}

struct FireLanes<'a> {
    tariff: &'a LaneTariff,
    impulse: &'a [Lane; 3],
    shift: Option<&'a [Lane; 3]>,
    times: &'a Lane,
    performance: &'a LanePerformance,
    wear: &'a mut LaneWear,
    left: &'a mut Lane,
}

impl WithSimd for FireLanes<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        for group in 0..LANES / S::F64_LANES {
            let h = [at::<S>(&self.impulse[0], group), at::<S>(&self.impulse[1], group), at::<S>(&self.impulse[2], group)];
            let (zero, times) = (simd.splat_f64s(0.0), at::<S>(self.times, group));
            let (impulses, left) = match self.shift {
                None => {
                    let (impulses, border) = self.tariff.impulses(simd, &h);
                    (impulses, simd.select_f64s(border, times, zero))
                }
                Some(shift) => {
                    let shift = [at::<S>(&shift[0], group), at::<S>(&shift[1], group), at::<S>(&shift[2], group)];
                    let (asked, missed) = self.tariff.aimed(simd, &h, &shift);
                    let (impulses, border) = self.tariff.impulses(simd, &asked);
                    (impulses, simd.select_f64s(border, times, simd.mul_f64s(missed, times)))
                }
            };
            S::as_mut_simd_f64s(self.left.as_mut_slice()).0[group] = left;
            let times = simd.sub_f64s(times, left);
            self.tariff.pulses(simd, group, &impulses, times, self.performance, self.wear);
        }
    }
}

impl LaneTariff {
    /// Impulse of every thruster, N·s, and where one is so far below zero that another choice must be asked.
    #[inline(always)]
    fn impulses<S: Simd>(&self, simd: S, h: &[S::f64s; 3]) -> ([S::f64s; MOST_THRUSTERS], S::m64s) {
        let zero = simd.splat_f64s(0.0);
        let (mut best, mut chosen) = (simd.splat_f64s(f64::NEG_INFINITY), zero);
        for (index, basis) in self.bases.iter().enumerate() {
            let value = dot(simd, &basis.select, h);
            let better = simd.greater_than_f64s(value, best);
            best = simd.select_f64s(better, value, best);
            chosen = simd.select_f64s(better, simd.splat_f64s(index as f64), chosen);
        }
        let mut impulses = [zero; MOST_THRUSTERS];
        for (index, basis) in self.bases.iter().enumerate() {
            let own = simd.equal_f64s(chosen, simd.splat_f64s(index as f64));
            for (thruster, row) in &basis.firing {
                impulses[*thruster] = simd.select_f64s(own, dot(simd, row, h), impulses[*thruster]);
            }
        }
        let (mut lowest, mut sum) = (zero, zero);
        for impulse in impulses.iter_mut().take(self.pushes.len()) {
            lowest = simd.min_f64s(lowest, *impulse);
            sum = simd.add_f64s(sum, simd.abs_f64s(*impulse));
            *impulse = simd.max_f64s(*impulse, zero);
        }
        (impulses, simd.less_than_f64s(lowest, simd.mul_f64s(sum, simd.splat_f64s(-BORDER))))
    }

    /// What to ask for so that `wanted` is given in the end, and 1 where nothing was found. A lane that is done stays as it is,
    /// whatever the lanes beside it need.
    #[inline(always)]
    fn aimed<S: Simd>(&self, simd: S, wanted: &[S::f64s; 3], shift: &[S::f64s; 3]) -> ([S::f64s; 3], S::f64s) {
        let (zero, one) = (simd.splat_f64s(0.0), simd.splat_f64s(1.0));
        let square = |v: &[S::f64s; 3]| simd.mul_add_f64s(v[2], v[2], simd.mul_add_f64s(v[1], v[1], simd.mul_f64s(v[0], v[0])));
        let enough = simd.mul_f64s(square(wanted), simd.splat_f64s(1e-24));
        let mut asked = *wanted;
        let mut open = one;
        for _ in 0..60 {
            let (impulses, _) = self.impulses(simd, &asked);
            let mut push = [zero; 3];
            for (impulse, direction) in impulses.iter().zip(&self.pushes) {
                for (push, direction) in push.iter_mut().zip(direction) {
                    *push = simd.mul_add_f64s(simd.splat_f64s(*direction), *impulse, *push);
                }
            }
            let lost = |a: usize, b: usize| simd.sub_f64s(simd.mul_f64s(shift[a], push[b]), simd.mul_f64s(shift[b], push[a]));
            let cross = [lost(1, 2), lost(2, 0), lost(0, 1)];
            let missed: [S::f64s; 3] = std::array::from_fn(|k| simd.add_f64s(simd.sub_f64s(wanted[k], asked[k]), cross[k]));
            let far = simd.greater_than_f64s(square(&missed), enough);
            open = simd.select_f64s(far, open, zero);
            if simd.reduce_max_f64s(open) <= 0.0 {
                break;
            }
            asked = std::array::from_fn(|k| simd.mul_add_f64s(open, missed[k], asked[k]));
        }
        (asked, open)
    }

    /// Pulses and propellant of the impulses, as [`super::fire`] for one.
    #[inline(always)]
    fn pulses<S: Simd>(
        &self,
        simd: S,
        group: usize,
        impulses: &[S::f64s; MOST_THRUSTERS],
        times: S::f64s,
        performance: &LanePerformance,
        wear: &mut LaneWear,
    ) {
        let (zero, one, whole) = (simd.splat_f64s(0.0), simd.splat_f64s(1.0), simd.splat_f64s(WHOLE));
        let (shortest, longest) = (simd.splat_f64s(self.shortest_s), simd.splat_f64s(self.longest_s));
        let mut total = zero;
        for (thruster, impulse) in impulses.iter().take(self.pushes.len()).enumerate() {
            if simd.reduce_max_f64s(*impulse) <= 0.0 {
                continue;
            }
            let on = simd.div_f64s(*impulse, at::<S>(&performance.thrust[thruster], group));
            let wanted = simd.div_f64s(on, longest);
            let near = simd.sub_f64s(simd.add_f64s(wanted, whole), whole);
            let up = simd.select_f64s(simd.less_than_f64s(near, wanted), one, zero);
            let count = simd.max_f64s(simd.add_f64s(near, up), one);
            let on_time = simd.max_f64s(simd.div_f64s(on, count), shortest);
            let mut share = simd.splat_f64s(self.first_share);
            for [start, length, slope] in &self.ramps {
                let past = simd.max_f64s(simd.sub_f64s(on_time, simd.splat_f64s(*start)), zero);
                share = simd.mul_add_f64s(simd.splat_f64s(*slope), simd.min_f64s(past, simd.splat_f64s(*length)), share);
            }
            let speed = simd.mul_f64s(at::<S>(&performance.speed[thruster], group), share);
            let kg = simd.mul_f64s(simd.div_f64s(*impulse, speed), times);
            let pulses = simd.mul_f64s(simd.div_f64s(on, on_time), times);
            total = simd.add_f64s(total, kg);
            let cycles = &mut S::as_mut_simd_f64s(wear.cycles[thruster].as_mut_slice()).0[group];
            *cycles = simd.add_f64s(*cycles, pulses);
            let through = &mut S::as_mut_simd_f64s(wear.throughput_kg[thruster].as_mut_slice()).0[group];
            *through = simd.add_f64s(*through, kg);
        }
        let sum = &mut S::as_mut_simd_f64s(wear.kg.as_mut_slice()).0[group];
        *sum = simd.add_f64s(*sum, total);
    }
}
