//! The equations of one mixture at one temperature: which species can form, and how far a trial point is from equilibrium.

use nalgebra::{DMatrix, DVector};

use crate::chemistry::{
    ActivityModel, Chemistry, ComponentId, Failure, Mixture, SpeciesId, debye_hueckel,
    water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol,
};

/// Coefficients and totals. Balance 0 is that of hydrogen, the others follow the components.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct System {
    pub components: Vec<ComponentId>,
    pub species: Vec<SpeciesId>,
    /// Counts of hydrogen and of each component (columns) in each species (rows).
    pub counts: DMatrix<f64>,
    pub water: DVector<f64>,
    pub charge: DVector<f64>,
    /// ln of the overall formation constants.
    pub ln_beta: DVector<f64>,
    /// Pairs of species with their interaction coefficient for ln γ, kg/mol; each pair once.
    pub interactions: Vec<(usize, usize, f64)>,
    pub totals_mol: DVector<f64>,
    pub water_mol: f64,
    pub model: ActivityModel,
    /// Debye–Hückel slope for log₁₀ γ.
    pub slope: f64,
}

/// A trial solution.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Point {
    /// ln of the activity of hydrogen and of each component.
    pub ln_activity: DVector<f64>,
    /// ln of the molality of each species.
    pub ln_molality: DVector<f64>,
    /// ln γ of each species.
    pub ln_gamma: DVector<f64>,
    /// ln of the activity of water.
    pub ln_water_activity: f64,
    /// Free water, kg.
    pub water_kg: f64,
}

impl Point {
    /// ln a(H⁺).
    pub fn ln_hydrogen_activity(&self) -> f64 {
        self.ln_activity[0]
    }

    /// Moves all molalities by a factor, given as its logarithm.
    pub fn shift(&mut self, ln_factor: f64) {
        self.ln_molality.iter_mut().for_each(|x| *x += ln_factor);
        self.ln_activity.iter_mut().skip(1).for_each(|x| *x += ln_factor);
    }

    /// Molality of each species, mol/kg.
    pub fn molalities(&self) -> DVector<f64> {
        self.ln_molality.map(|x| libm::exp(x.clamp(-700.0, 300.0)))
    }
}

impl System {
    /// Sets up the equations.
    pub fn new(
        chemistry: &Chemistry,
        mixture: &Mixture,
        temperature_K: f64,
        model: ActivityModel,
    ) -> Result<Self, Failure> {
        let mut column_of = vec![0_usize; chemistry.components().count()];
        let mut components = Vec::new();
        let mut totals = vec![mixture.hydrogen_mol];
        for (&id, &amount_mol) in &mixture.amounts_mol {
            let Some(component) = chemistry.component(id) else { return Err(Failure::UnknownComponent) };
            if !amount_mol.is_finite() {
                return Err(Failure::NotFinite { what: format!("the amount of {}", component.name) });
            }
            if amount_mol < 0.0 {
                return Err(Failure::NegativeAmount { component: component.name.clone(), amount_mol });
            }
            // Less than this per kilogram of water is nothing, and would only spoil the arithmetic.
            if amount_mol > 1e-30 * mixture.water_kg {
                components.push(id);
                totals.push(amount_mol);
                if let Some(column) = column_of.get_mut(id.0) {
                    *column = components.len();
                }
            }
        }
        let column = |id: ComponentId| column_of.get(id.0).copied().filter(|&c| c > 0);
        let mut species = chemistry.species_of_water().to_vec();
        for &component in &components {
            for &id in chemistry.species_by_first_part(component) {
                let present = chemistry.species(id).is_some_and(|s| s.parts.iter().all(|&(c, _)| column(c).is_some()));
                if present {
                    species.push(id);
                }
            }
        }
        let rows = species.len();
        let mut counts = DMatrix::zeros(rows, components.len() + 1);
        let mut water = DVector::zeros(rows);
        let mut charge = DVector::zeros(rows);
        let mut ln_beta = DVector::zeros(rows);
        let mut row_of = vec![usize::MAX; chemistry.species_count()];
        for (row, &id) in species.iter().enumerate() {
            let Some(entry) = chemistry.species(id) else { continue };
            counts[(row, 0)] = f64::from(entry.hydrogen);
            for &(part, count) in &entry.parts {
                if let Some(column) = column(part) {
                    counts[(row, column)] += f64::from(count);
                }
            }
            water[row] = f64::from(entry.water);
            charge[row] = f64::from(entry.charge);
            let log_beta: f64 = entry
                .log_beta
                .iter()
                .map(|&(factor, constant)| {
                    factor * chemistry.constant(constant).map_or(0.0, |c| c.log10_k(temperature_K))
                })
                .sum();
            ln_beta[row] = log_beta * core::f64::consts::LN_10;
            if let Some(slot) = row_of.get_mut(id.0) {
                *slot = row;
            }
        }
        let mut interactions = Vec::new();
        if model.uses_interactions() {
            for (row, &id) in species.iter().enumerate() {
                for &(partner, interaction) in chemistry.interactions(id) {
                    let other = row_of.get(partner.0).copied().unwrap_or(usize::MAX);
                    if other != usize::MAX && partner >= id {
                        interactions.push((row, other, interaction.epsilon_kg_per_mol * core::f64::consts::LN_10));
                    }
                }
            }
        }
        Ok(Self {
            components,
            species,
            counts,
            water,
            charge,
            ln_beta,
            interactions,
            totals_mol: DVector::from_vec(totals),
            water_mol: mixture.water_kg / WATER_kg_per_mol,
            model,
            slope: debye_hueckel::slope(temperature_K),
        })
    }

    /// The same with all totals times a factor, in the same water.
    pub fn scaled(&self, factor: f64) -> Self {
        let mut result = self.clone();
        // Water that components are short of scales with them; what the species bind at the end is the best estimate of it.
        let bound: f64 = 0.0;
        result.totals_mol *= factor;
        result.water_mol = self.water_mol - bound;
        result
    }

    /// Ionic strength, mol/kg.
    pub fn ionic_strength(&self, molality: &DVector<f64>) -> f64 {
        0.5 * self.charge.iter().zip(molality.iter()).map(|(z, m)| z * z * m).sum::<f64>()
    }

    /// ln γ of every species at these molalities, and ln of the water activity.
    pub fn activities(&self, molality: &DVector<f64>) -> (DVector<f64>, f64) {
        let term = self.model.ionic_term(self.slope, self.ionic_strength(molality));
        let mut ln_gamma = self.charge.map(|z| -z * z * term.value);
        let mut osmotic = molality.sum() - term.osmotic_mol_per_kg;
        for &(i, j, epsilon) in &self.interactions {
            ln_gamma[i] += epsilon * molality[j];
            if i != j {
                ln_gamma[j] += epsilon * molality[i];
            }
            osmotic += epsilon * molality[i] * molality[j] * if i == j { 0.5 } else { 1.0 };
        }
        (ln_gamma, -WATER_kg_per_mol * osmotic)
    }

    /// Free water (kg) at these molalities; `None` if the species leave none.
    pub fn free_water_kg(&self, molality: &DVector<f64>) -> Option<f64> {
        let denominator = 1.0 + WATER_kg_per_mol * self.water.dot(molality);
        let water_kg = self.water_mol * WATER_kg_per_mol / denominator;
        (denominator > 0.0 && water_kg.is_finite() && water_kg > 0.0).then_some(water_kg)
    }

    /// Takes activity coefficients, water activity and free water from the molalities, going `share` of the way.
    pub fn renew_activities(&self, point: &mut Point, share: f64) {
        let molality = point.molalities();
        let (ln_gamma, ln_water_activity) = self.activities(&molality);
        point.ln_gamma.axpy(share, &ln_gamma, 1.0 - share);
        point.ln_gamma.iter_mut().for_each(|g| *g = g.clamp(-60.0, 60.0));
        point.ln_water_activity += share * (ln_water_activity.clamp(-20.0, 5.0) - point.ln_water_activity);
        if let Some(water_kg) = self.free_water_kg(&molality) {
            point.water_kg += share * (water_kg - point.water_kg);
        }
    }

    /// ln of the molalities that mass action gives for the activities of a point.
    pub fn mass_action(&self, point: &Point) -> DVector<f64> {
        let mut result = &self.ln_beta - &point.ln_gamma;
        for column in 0..self.counts.ncols() {
            let activity = point.ln_activity[column];
            for row in 0..self.counts.nrows() {
                result[row] += self.counts[(row, column)] * activity;
            }
        }
        result.axpy(point.ln_water_activity, &self.water, 1.0);
        result
    }

    /// Largest mass-balance residual relative to what takes part in that balance.
    pub fn residual(&self, point: &Point) -> f64 {
        let molality = point.molalities();
        let Some(water_kg) = self.free_water_kg(&molality) else { return f64::INFINITY };
        let mut largest: f64 = 0.0;
        for column in 0..self.counts.ncols() {
            let (mut sum, mut scale) = (0.0, 0.0);
            for row in 0..self.counts.nrows() {
                let part = self.counts[(row, column)] * molality[row] * water_kg;
                sum += part;
                scale += part.abs();
            }
            let total = self.totals_mol[column];
            let residual = (sum - total).abs() / scale.max(total.abs());
            // `max` would swallow a NaN.
            if !residual.is_finite() {
                return f64::INFINITY;
            }
            largest = largest.max(residual);
        }
        largest
    }
}
