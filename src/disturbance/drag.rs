//! Torque of the air on flat facets.

use nalgebra::Vector3;

use super::molecules::plate_coefficients;
use super::{Coefficient, Factor, Feature, Source, Surroundings, force_features, with_arms};
use crate::environment::Gas;
use crate::mission::{Accommodation, Phase, Scenario};
use crate::vehicle::Surface;

/// Change of wind by which its effect is taken, m/s: large against rounding, small against orbital speed.
const WIND_STEP_M_PER_S: f64 = 30.0;

/// Free-molecular drag on each facet; facets hide nothing from one another.
///
/// With one drag coefficient, on the windward side and along the flow:
///
/// ```text
/// F = −½ ρ C_D A cosα |v| v
/// ```
///
/// with `v` the velocity through the air, which turns with the body, and α between `v` and the
/// normal. Source: P. C. Hughes, Spacecraft Attitude Dynamics, ch. 8 (from memory), with one
/// coefficient in place of separate normal and tangential ones. With accommodation coefficients, pressure and shear of
/// [`super::plate_coefficients`]. An uncertain wind enters to first order.
#[derive(Debug, Clone)]
pub struct Drag {
    surfaces: Vec<Surface>,
    density: Coefficient,
    levels: usize,
    law: DragLaw,
    materials: usize,
    /// Component (0 east, 1 north) and parameter of each uncertain wind.
    winds: Vec<(usize, Factor)>,
}

/// How the air pushes.
#[derive(Debug, Clone)]
enum DragLaw {
    /// Drag coefficient of each material.
    Coefficient(Vec<Coefficient>),
    /// Normal and tangential accommodation, and the temperature of the facets, K.
    Molecules([Coefficient; 2], f64),
}

impl Drag {
    /// The facets of a scenario's vehicle in a phase.
    #[must_use]
    pub fn new(scenario: &Scenario, phase: &Phase) -> Self {
        let mission = &scenario.mission;
        let own = |material: &crate::vehicle::Material| material.drag_coefficient.unwrap_or(mission.drag_coefficient);
        let law = match &mission.accommodation {
            None => DragLaw::Coefficient(scenario.vehicle.materials.iter().map(|m| Coefficient::from(&own(m))).collect()),
            Some(Accommodation { normal, tangential, wall_k }) => {
                DragLaw::Molecules([Coefficient::from(normal), Coefficient::from(tangential)], *wall_k)
            }
        };
        let winds = mission.wind_m_per_s.iter().enumerate();
        Self {
            surfaces: scenario.vehicle.surfaces.clone(),
            density: Coefficient::from(&mission.density_factor),
            levels: mission.levels_about(phase.trajectory.body()),
            law,
            materials: scenario.vehicle.materials.len(),
            winds: winds.filter_map(|(k, wind)| wind.parameter().map(|id| (k, Factor::Deviation(id)))).collect(),
        }
    }

    /// Coefficients by which force is divided: for each a factor and what remains of it. With accommodation the first is 1.
    fn coefficients(&self) -> Vec<Coefficient> {
        match &self.law {
            DragLaw::Coefficient(each) => each.clone(),
            DragLaw::Molecules([normal, tangential], _) => vec![Coefficient { factor: None, scale: 1.0 }, *normal, *tangential],
        }
    }

    /// Features without wind.
    fn still(&self) -> Vec<Feature> {
        let mut features = Vec::new();
        for coefficient in self.coefficients() {
            for level in 0..self.levels {
                let activity = (self.levels > 1).then_some(Factor::Activity(level));
                let factors: Vec<Factor> = [coefficient.factor, self.density.factor, activity].into_iter().flatten().collect();
                features.extend(with_arms(&factors));
            }
        }
        features
    }

    fn fill(&self, surroundings: &Surroundings, wind: &Vector3<f64>, normals: &[Vector3<f64>], out: &mut [Vector3<f64>]) {
        match &self.law {
            DragLaw::Coefficient(each) => self.along_the_flow(each, surroundings, wind, normals, out),
            DragLaw::Molecules(shares, wall_k) => self.molecules(shares, *wall_k, surroundings, wind, normals, out),
        }
    }

    fn along_the_flow(
        &self,
        coefficients: &[Coefficient],
        surroundings: &Surroundings,
        wind: &Vector3<f64>,
        normals: &[Vector3<f64>],
        out: &mut [Vector3<f64>],
    ) {
        let mut loads = vec![(Vector3::zeros(), Vector3::zeros()); self.materials];
        for (surface, normal) in self.surfaces.iter().zip(normals) {
            let flux = normal.dot(wind);
            let facing = if surface.both_sides { flux.abs() } else { flux.max(0.0) };
            // cosα |v| v = (n·v) v.
            let push = wind * (-0.5 * surface.area_m2 * facing);
            if let Some((force, torque)) = loads.get_mut(surface.material) {
                *force += push;
                *torque += surface.centre_m.cross(&push);
            }
        }
        for (((force, torque), coefficient), places) in loads.iter().zip(coefficients).zip(out.chunks_mut(4 * self.levels)) {
            for (gas, place) in surroundings.gas.iter().zip(places.chunks_mut(4)) {
                let scale = gas.density_kg_per_m3 * coefficient.scale * self.density.scale;
                force_features(torque * scale, force * scale, place);
            }
        }
    }

    fn molecules(
        &self,
        [normal_share, tangential_share]: &[Coefficient; 2],
        wall_k: f64,
        surroundings: &Surroundings,
        wind: &Vector3<f64>,
        normals: &[Vector3<f64>],
        out: &mut [Vector3<f64>],
    ) {
        let scales = [1.0, normal_share.scale, tangential_share.scale];
        for (level, gas) in surroundings.gas.iter().enumerate() {
            let loads = self.molecule_loads(gas, wall_k, wind, normals);
            for (group, ((force, torque), scale)) in loads.iter().zip(scales).enumerate() {
                let from = 4 * (group * self.levels + level);
                let scale = scale * self.density.scale;
                if let Some(place) = out.get_mut(from..from + 4) {
                    force_features(torque * scale, force * scale, place);
                }
            }
        }
    }

    /// Force and torque about the body origin, without accommodation and per unit of the normal and the tangential one.
    fn molecule_loads(&self, gas: &Gas, wall_k: f64, wind: &Vector3<f64>, normals: &[Vector3<f64>]) -> [(Vector3<f64>, Vector3<f64>); 3] {
        let mut loads = [(Vector3::zeros(), Vector3::zeros()); 3];
        let speed = wind.norm();
        let (dynamic, flow) = (0.5 * gas.density_kg_per_m3 * speed * speed, wind / speed.max(f64::MIN_POSITIVE));
        for (surface, normal) in self.surfaces.iter().zip(normals) {
            let sides: &[f64] = if surface.both_sides { &[1.0, -1.0] } else { &[1.0] };
            for side in sides {
                let outward = normal * *side;
                let cos = outward.dot(&flow);
                let c = plate_coefficients(speed, cos, gas, wall_k);
                let push = -dynamic * surface.area_m2;
                let forces = [outward * (push * c.mirror), outward * (push * c.normal), (flow - outward * cos) * (push * c.tangential)];
                for ((sum, torque), force) in loads.iter_mut().zip(forces) {
                    *sum += force;
                    *torque += surface.centre_m.cross(&force);
                }
            }
        }
        loads
    }
}

impl Source for Drag {
    fn name(&self) -> &'static str {
        "drag"
    }

    /// For each coefficient and each level of solar activity, four features: about the body origin and
    /// per component of the centre of mass. Then all of them once more per uncertain component of the wind.
    fn features(&self) -> Vec<Feature> {
        let still = self.still();
        let winds = self.winds.iter().flat_map(|(_, deviation)| still.iter().map(|feature| feature.times(*deviation)));
        still.iter().cloned().chain(winds).collect()
    }

    fn first_order(&self) -> usize {
        self.still().len()
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let wind = surroundings.air_velocity_m_per_s;
        if surroundings.gas.iter().all(|gas| gas.density_kg_per_m3 <= 0.0) {
            return out.fill(Vector3::zeros());
        }
        let normals: Vec<Vector3<f64>> = self.surfaces.iter().map(|surface| surface.normal_facing(&surroundings.sun)).collect();
        let still = out.len() / (1 + self.winds.len());
        let (own, mut rest) = out.split_at_mut(still);
        self.fill(surroundings, &wind, &normals, own);
        let directions = surroundings.east_and_north();
        let mut scratch = vec![Vector3::zeros(); still];
        for (component, _) in &self.winds {
            let (places, others) = rest.split_at_mut(still);
            rest = others;
            places.fill(Vector3::zeros());
            for sign in [1.0, -1.0] {
                // Wind with the flight makes the air slower.
                let moved = wind - directions[*component] * (sign * WIND_STEP_M_PER_S);
                self.fill(surroundings, &moved, &normals, &mut scratch);
                for (place, torque) in places.iter_mut().zip(&scratch) {
                    *place += torque * (0.5 * sign / WIND_STEP_M_PER_S);
                }
            }
        }
    }
}
