//! The equations of one mixture at one temperature: which species can form, and how far a trial point is from equilibrium.

use super::linear_algebra::{Matrix, dot};
use crate::chemistry::{
    ActivityModel, Chemistry, ComponentId, Failure, Mixture, Species, SpeciesId, debye_hueckel,
    water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol,
};

/// Least amount that counts as present, mol for each kilogram of water. Less than a molecule in a litre would only spoil the arithmetic.
const PRESENT_mol_per_kg: f64 = 1e-25;

/// Coefficients and totals. Balance 0 is that of hydrogen, the others follow the components.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct System {
    pub components: Vec<ComponentId>,
    pub species: Vec<SpeciesId>,
    /// Balances in which each species takes part with its counts, one species after the other.
    parts: Vec<(usize, f64)>,
    /// Where the parts of each species end.
    ends: Vec<usize>,
    /// The same as a matrix: species in rows, balances in columns.
    pub counts: Matrix,
    pub water: Vec<f64>,
    pub charge: Vec<f64>,
    /// ln of the overall formation constants.
    pub ln_beta: Vec<f64>,
    /// Pairs of species with their interaction coefficient for ln γ, kg/mol; each pair once.
    pub interactions: Vec<(usize, usize, f64)>,
    pub totals_mol: Vec<f64>,
    pub water_mol: f64,
    pub model: ActivityModel,
    /// Debye–Hückel slope for log₁₀ γ.
    pub slope: f64,
}

/// A trial solution.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Point {
    /// ln of the activity of hydrogen and of each component.
    pub ln_activity: Vec<f64>,
    /// ln of the molality of each species.
    pub ln_molality: Vec<f64>,
    /// Molality of each species, mol/kg.
    pub molality: Vec<f64>,
    /// ln γ of each species.
    pub ln_gamma: Vec<f64>,
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
        self.exponentiate();
    }

    /// Takes the molalities from their logarithms.
    pub fn exponentiate(&mut self) {
        for (m, x) in self.molality.iter_mut().zip(&self.ln_molality) {
            *m = libm::exp(x.clamp(-700.0, 300.0));
        }
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
        Self::with_components(chemistry, mixture, temperature_K, model, &[])
    }

    /// The same with some components even where the mixture holds nothing of them.
    pub fn with_components(
        chemistry: &Chemistry,
        mixture: &Mixture,
        temperature_K: f64,
        model: ActivityModel,
        needed: &[ComponentId],
    ) -> Result<Self, Failure> {
        let mut column_of = vec![0_usize; chemistry.component_count()];
        let mut components = Vec::with_capacity(mixture.amounts_mol.len());
        let mut totals_mol = Vec::with_capacity(mixture.amounts_mol.len() + 1);
        totals_mol.push(mixture.hydrogen_mol);
        for (&id, &amount_mol) in &mixture.amounts_mol {
            let Some(component) = chemistry.component(id) else { return Err(Failure::UnknownComponent) };
            if !amount_mol.is_finite() {
                return Err(Failure::NotFinite { what: format!("the amount of {}", component.name) });
            }
            if amount_mol < 0.0 {
                return Err(Failure::NegativeAmount { component: component.name.clone(), amount_mol });
            }
            if amount_mol > PRESENT_mol_per_kg * mixture.water_kg || needed.contains(&id) {
                components.push(id);
                totals_mol.push(amount_mol);
                column_of[id.0] = components.len();
            }
        }
        // Room for four forms of each component, so that the lists seldom grow.
        let room = 4 * components.len() + 2;
        let mut system = Self {
            species: Vec::with_capacity(room),
            components,
            parts: Vec::with_capacity(2 * room),
            ends: Vec::with_capacity(room),
            counts: Matrix::zeros(0, 0),
            water: Vec::with_capacity(room),
            charge: Vec::with_capacity(room),
            ln_beta: Vec::with_capacity(room),
            interactions: Vec::new(),
            totals_mol,
            water_mol: mixture.water_kg / WATER_kg_per_mol,
            model,
            slope: debye_hueckel::slope(temperature_K),
        };
        for &id in chemistry.species_of_water() {
            system.add_species(chemistry, id, &column_of, temperature_K);
        }
        for at in 0..system.components.len() {
            for &id in chemistry.species_by_first_part(system.components[at]) {
                system.add_species(chemistry, id, &column_of, temperature_K);
            }
        }
        system.counts = Matrix::zeros(system.species.len(), system.totals_mol.len());
        for row in 0..system.species.len() {
            let (start, end) = system.bounds(row);
            for &(column, count) in &system.parts[start..end] {
                system.counts[(row, column)] += count;
            }
        }
        if model.uses_interactions() {
            system.collect_interactions(chemistry);
        }
        Ok(system)
    }

    /// Adds a species if all of its components are present.
    fn add_species(&mut self, chemistry: &Chemistry, id: SpeciesId, column_of: &[usize], temperature_K: f64) {
        let Some(species) = chemistry.species(id) else { return };
        let Species { parts, hydrogen, water, charge, log_beta, .. } = species;
        if parts.iter().any(|&(part, _)| column_of[part.0] == 0) {
            return;
        }
        if *hydrogen != 0 {
            self.parts.push((0, f64::from(*hydrogen)));
        }
        self.parts.extend(parts.iter().map(|&(part, count)| (column_of[part.0], f64::from(count))));
        self.ends.push(self.parts.len());
        self.species.push(id);
        self.water.push(f64::from(*water));
        self.charge.push(f64::from(*charge));
        let log_beta: f64 = log_beta
            .iter()
            .map(|&(factor, constant)| factor * chemistry.constant(constant).map_or(0.0, |c| c.log10_k(temperature_K)))
            .sum();
        self.ln_beta.push(log_beta * core::f64::consts::LN_10);
    }

    fn collect_interactions(&mut self, chemistry: &Chemistry) {
        let mut row_of = vec![usize::MAX; chemistry.species_count()];
        for (row, id) in self.species.iter().enumerate() {
            row_of[id.0] = row;
        }
        for (row, &id) in self.species.iter().enumerate() {
            for &(partner, interaction) in chemistry.interactions(id) {
                let other = row_of[partner.0];
                if other != usize::MAX && partner >= id {
                    let epsilon = interaction.epsilon_kg_per_mol * core::f64::consts::LN_10;
                    self.interactions.push((row, other, epsilon));
                }
            }
        }
    }

    /// The system that is left of this one when `clear` has taken components out of each row of counts and its water, and told by how
    /// much ln β grows; only the `kept` balances stay.
    pub fn reduced(&self, kept: &[usize], clear: impl Fn(&mut [f64], &mut f64) -> f64) -> Self {
        let mut rest = Self {
            components: kept.iter().skip(1).filter_map(|column| self.components.get(column - 1).copied()).collect(),
            parts: Vec::with_capacity(self.parts.len()),
            ends: Vec::with_capacity(self.ends.len()),
            counts: Matrix::zeros(self.species.len(), kept.len()),
            ..self.clone()
        };
        let mut totals = self.totals_mol.clone();
        clear(&mut totals, &mut rest.water_mol);
        rest.totals_mol = kept.iter().map(|&column| totals[column]).collect();
        for row in 0..self.species.len() {
            let mut counts = self.counts.row(row).to_vec();
            rest.ln_beta[row] += clear(&mut counts, &mut rest.water[row]);
            for (at, &column) in kept.iter().enumerate() {
                if counts[column] != 0.0 {
                    rest.parts.push((at, counts[column]));
                    rest.counts[(row, at)] = counts[column];
                }
            }
            rest.ends.push(rest.parts.len());
        }
        rest
    }

    fn bounds(&self, row: usize) -> (usize, usize) {
        (if row == 0 { 0 } else { self.ends[row - 1] }, self.ends[row])
    }

    /// Balances in which a species takes part, with its counts.
    pub fn parts(&self, row: usize) -> &[(usize, f64)] {
        let (start, end) = self.bounds(row);
        &self.parts[start..end]
    }

    /// The same with all totals times a factor, in the same water.
    pub fn scaled(&self, factor: f64) -> Self {
        let mut result = self.clone();
        result.totals_mol.iter_mut().for_each(|total| *total *= factor);
        result
    }

    /// Ionic strength, mol/kg.
    pub fn ionic_strength(&self, molality: &[f64]) -> f64 {
        0.5 * self.charge.iter().zip(molality).map(|(z, m)| z * z * m).sum::<f64>()
    }

    /// Writes ln γ of every species at these molalities; returns ln of the water activity.
    pub fn activities(&self, molality: &[f64], ln_gamma: &mut [f64]) -> f64 {
        let term = self.model.ionic_term(self.slope, self.ionic_strength(molality));
        for (g, z) in ln_gamma.iter_mut().zip(&self.charge) {
            *g = -z * z * term.value;
        }
        let mut osmotic = molality.iter().sum::<f64>() - term.osmotic_mol_per_kg;
        for &(i, j, epsilon) in &self.interactions {
            ln_gamma[i] += epsilon * molality[j];
            if i != j {
                ln_gamma[j] += epsilon * molality[i];
            }
            osmotic += epsilon * molality[i] * molality[j] * if i == j { 0.5 } else { 1.0 };
        }
        -WATER_kg_per_mol * osmotic
    }

    /// Free water (kg) at these molalities; `None` if the species leave none.
    pub fn free_water_kg(&self, molality: &[f64]) -> Option<f64> {
        let denominator = 1.0 + WATER_kg_per_mol * dot(&self.water, molality);
        let water_kg = self.water_mol * WATER_kg_per_mol / denominator;
        (denominator > 0.0 && water_kg.is_finite() && water_kg > 0.0).then_some(water_kg)
    }

    /// Takes activity coefficients, water activity and free water from the molalities, going `share` of the way, within bounds that
    /// keep an early estimate from running away.
    pub fn renew_activities(&self, point: &mut Point, share: f64) {
        let mut ln_gamma = vec![0.0; self.species.len()];
        let ln_water_activity = self.activities(&point.molality, &mut ln_gamma);
        for (g, new) in point.ln_gamma.iter_mut().zip(&ln_gamma) {
            *g += share * (new.clamp(-60.0, 60.0) - *g);
        }
        point.ln_water_activity += share * (ln_water_activity.clamp(-5.0, 1.0) - point.ln_water_activity);
        if let Some(water_kg) = self.free_water_kg(&point.molality) {
            point.water_kg += share * (water_kg - point.water_kg);
        }
    }

    /// ln of the molality of a species that mass action gives for the activities of a point.
    pub fn mass_action(&self, point: &Point, row: usize) -> f64 {
        let mut result = self.ln_beta[row] - point.ln_gamma[row] + self.water[row] * point.ln_water_activity;
        for &(column, count) in self.parts(row) {
            result += count * point.ln_activity[column];
        }
        result
    }

    /// Takes the molalities from the activities.
    pub fn apply_mass_action(&self, point: &mut Point) {
        for row in 0..self.species.len() {
            point.ln_molality[row] = self.mass_action(point, row);
        }
        point.exponentiate();
    }

    /// Writes the sum of each balance, mol/kg, and the sum of the sizes of what takes part in it.
    pub fn balances(&self, molality: &[f64]) -> (Vec<f64>, Vec<f64>) {
        let columns = self.totals_mol.len();
        let (mut sum, mut size) = (vec![0.0; columns], vec![0.0; columns]);
        for (row, m) in molality.iter().enumerate() {
            for &(column, count) in self.parts(row) {
                sum[column] += count * m;
                size[column] += (count * m).abs();
            }
        }
        (sum, size)
    }

    /// Largest mass-balance residual relative to what takes part in that balance.
    pub fn residual(&self, point: &Point) -> f64 {
        let Some(water_kg) = self.free_water_kg(&point.molality) else { return f64::MAX };
        let (sum, size) = self.balances(&point.molality);
        let mut largest: f64 = 0.0;
        for ((sum, size), total) in sum.iter().zip(&size).zip(&self.totals_mol) {
            let residual = (sum * water_kg - total).abs() / (size * water_kg).max(total.abs());
            if !residual.is_finite() {
                return f64::MAX;
            }
            largest = largest.max(residual);
        }
        largest
    }
}
