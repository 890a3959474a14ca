//! The state of a solution: what the equilibrium says, read off one solved point.

use super::{
    ActivityModel, Chemistry, ComponentId, Failure, Limits, Mixture, SpeciesId, Warning,
    equilibrium::{self, Point, System, reduction::Solution},
    sensitivity::Sensitivity,
    volume, warning, water,
};

/// How to solve.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct Settings {
    /// The activity model.
    pub model: ActivityModel,
    /// How long the solver may try.
    pub limits: Limits,
}

/// A solved solution. All numbers are finite.
#[derive(Clone, Debug, PartialEq)]
pub struct State {
    /// Temperature, K.
    pub temperature_K: f64,
    /// Free water, kg.
    pub water_kg: f64,
    /// Mass of everything, kg.
    pub mass_kg: f64,
    /// Volume of everything, L.
    pub volume_L: f64,
    /// Whether species without a published molar volume make up a noticeable part of the volume.
    pub volume_is_estimated: bool,
    /// Ionic strength, mol/kg of free water.
    pub ionic_strength_mol_per_kg: f64,
    /// Newton steps that the solution took.
    pub steps: usize,
    /// What limits the trust in this state.
    pub warnings: Vec<Warning>,
    pub(super) chemistry: Chemistry,
    pub(super) mixture: Mixture,
    pub(super) settings: Settings,
    pub(super) system: System,
    pub(super) point: Point,
}

impl Chemistry {
    /// Solves the equilibrium of a mixture at a temperature (K).
    ///
    /// # Errors
    /// A [`Failure`] where the input is unusable, its ions do not add up to zero charge, or the equations were not solved.
    pub fn solve(&self, mixture: &Mixture, temperature_K: f64, settings: &Settings) -> Result<State, Failure> {
        let charge_mol = mixture.charge_mol(self);
        let size_mol: f64 = mixture.hydrogen_mol.abs()
            + mixture
                .amounts_mol
                .iter()
                .map(|(&id, n)| n.abs() * self.component(id).map_or(0.0, |c| f64::from(c.charge.abs())))
                .sum::<f64>();
        if charge_mol.abs() > 1e-8 * size_mol {
            return Err(Failure::Charged { charge_mol });
        }
        self.solve_ions(mixture, temperature_K, settings)
    }

    /// Solves without asking that the ions add up to zero charge, for derivatives along a single ion.
    pub(super) fn solve_ions(
        &self,
        mixture: &Mixture,
        temperature_K: f64,
        settings: &Settings,
    ) -> Result<State, Failure> {
        for (what, value) in [
            ("the temperature", temperature_K),
            ("the amount of water", mixture.water_kg),
            ("the amount of hydrogen ions", mixture.hydrogen_mol),
            ("the mass of inert matter", mixture.inert_mass_kg),
            ("the volume of inert matter", mixture.inert_volume_L),
        ] {
            if !value.is_finite() {
                return Err(Failure::NotFinite { what: what.into() });
            }
        }
        // A hundredth of a kelvin for limits converted from Celsius.
        if temperature_K < water::RANGE_K.0 - 0.01 || temperature_K > water::RANGE_K.1 + 0.01 {
            return Err(Failure::TemperatureOutOfRange { temperature_K });
        }
        if mixture.water_kg <= 1e-30 {
            return Err(Failure::NoWater { water_kg: mixture.water_kg });
        }
        let system = System::new(self, mixture, temperature_K, settings.model)?;
        let (point, steps) = equilibrium::solve(&system, settings.limits)?;
        Ok(State::new(self.clone(), mixture.clone(), temperature_K, *settings, system, point, steps))
    }
}

impl State {
    /// The state of the liquid that was found beside other phases, from what this one was made of (`mixture`, with every component named).
    pub(super) fn of_solution(&self, mixture: &Mixture, solution: Solution, steps: usize) -> Result<Self, Failure> {
        let mut liquid = mixture.clone();
        liquid.water_kg = solution.water_mol * water::MOLAR_MASS_kg_per_mol;
        liquid.hydrogen_mol = solution.hydrogen_mol;
        liquid.amounts_mol = solution.amounts_mol.into_iter().filter(|(_, amount)| *amount > 0.0).collect();
        let system = System::new(&self.chemistry, &liquid, self.temperature_K, self.settings.model)?;
        // What is too scarce to count is left out of the closed liquid, and its species with it.
        let point = if system.species == solution.system.species {
            solution.point
        } else {
            equilibrium::solve(&system, self.settings.limits)?.0
        };
        Ok(Self::new(self.chemistry.clone(), liquid, self.temperature_K, self.settings, system, point, steps))
    }

    fn new(
        chemistry: Chemistry,
        mixture: Mixture,
        temperature_K: f64,
        settings: Settings,
        system: System,
        point: Point,
        steps: usize,
    ) -> Self {
        let ionic_strength_mol_per_kg = system.ionic_strength(&point.molality);
        let water_kg = point.water_kg;
        let (solution_L, volume_is_estimated) = volume::volume_L(
            &chemistry,
            water_kg,
            system.species.iter().zip(&point.molality).map(|(&id, &m)| (id, m * water_kg)),
            ionic_strength_mol_per_kg,
            temperature_K,
        );
        let mut state = Self {
            temperature_K,
            water_kg,
            mass_kg: mixture.mass_kg(&chemistry),
            volume_L: solution_L + mixture.inert_volume_L,
            volume_is_estimated,
            ionic_strength_mol_per_kg,
            steps,
            warnings: Vec::new(),
            chemistry,
            mixture,
            settings,
            system,
            point,
        };
        state.warnings = warning::warnings(&state);
        state
    }

    /// pH = −log₁₀ a(H⁺) on the molality scale.
    pub fn pH(&self) -> f64 {
        -self.point.ln_hydrogen_activity() / core::f64::consts::LN_10
    }

    /// Density, kg/m³.
    pub fn density_kg_per_m3(&self) -> f64 {
        self.mass_kg / self.volume_L * 1000.0
    }

    /// Ionic strength, mol per litre of solution.
    pub fn ionic_strength_mol_per_L(&self) -> f64 {
        self.ionic_strength_mol_per_kg * self.water_kg / self.volume_L
    }

    /// Activity of water.
    pub fn water_activity(&self) -> f64 {
        libm::exp(self.point.ln_water_activity)
    }

    /// Osmolality, mol/kg: −ln a_w divided by the molar mass of water.
    pub fn osmolality_mol_per_kg(&self) -> f64 {
        -self.point.ln_water_activity / water::MOLAR_MASS_kg_per_mol
    }

    /// Every species with its molality (mol/kg) and log₁₀ γ.
    pub fn species(&self) -> impl Iterator<Item = (SpeciesId, f64, f64)> + '_ {
        self.system
            .species
            .iter()
            .zip(self.point.molality.iter().zip(&self.point.ln_gamma))
            .map(|(&id, (&m, &g))| (id, m, g / core::f64::consts::LN_10))
    }

    /// Molality of a species, mol/kg; 0 where its components are absent.
    pub fn molality_mol_per_kg(&self, id: SpeciesId) -> f64 {
        self.species().find(|(species, _, _)| *species == id).map_or(0.0, |(_, m, _)| m)
    }

    /// Amount concentration of a species, mol per litre of solution.
    pub fn concentration_mol_per_L(&self, id: SpeciesId) -> f64 {
        self.molality_mol_per_kg(id) * self.water_kg / self.volume_L
    }

    /// log₁₀ of the activity of a species, where its components are present.
    pub fn log10_activity(&self, id: SpeciesId) -> Option<f64> {
        self.species().find(|(species, _, _)| *species == id).map(|(_, m, g)| libm::log10(m) + g)
    }

    /// Total amount concentration of each component, mol per litre of solution.
    pub fn totals_mol_per_L(&self) -> impl Iterator<Item = (ComponentId, f64)> + '_ {
        self.mixture.amounts_mol.iter().map(|(&id, &amount_mol)| (id, amount_mol / self.volume_L))
    }

    /// The mixture that was solved.
    pub fn mixture(&self) -> &Mixture {
        &self.mixture
    }

    /// The database that it was solved with.
    pub fn chemistry(&self) -> &Chemistry {
        &self.chemistry
    }

    /// The settings that it was solved with.
    pub fn settings(&self) -> &Settings {
        &self.settings
    }

    /// The activity model that gives the second view: Davies up to 0.5 mol/kg, the Bates–Guggenheim term alone beyond.
    pub fn alternative_model(&self) -> ActivityModel {
        if self.ionic_strength_mol_per_kg <= 0.5 { ActivityModel::Davies } else { ActivityModel::BatesGuggenheim }
    }

    /// pH by a second activity model: Davies up to 0.5 mol/kg, the Bates–Guggenheim term alone beyond. A second solve.
    ///
    /// # Errors
    /// As [`Chemistry::solve`].
    pub fn alternative_pH(&self) -> Result<f64, Failure> {
        let settings = Settings { model: self.alternative_model(), ..self.settings };
        Ok(self.chemistry.solve_ions(&self.mixture, self.temperature_K, &settings)?.pH())
    }

    /// The same mixture at another temperature (K).
    ///
    /// # Errors
    /// As [`Chemistry::solve`].
    pub fn at_temperature(&self, temperature_K: f64) -> Result<Self, Failure> {
        self.chemistry.solve_ions(&self.mixture, temperature_K, &self.settings)
    }

    /// This solution mixed with a volume of pure water (L) at its temperature.
    ///
    /// # Errors
    /// As [`Chemistry::solve`].
    pub fn diluted_with(&self, water_L: f64) -> Result<Self, Failure> {
        let mut mixture = self.mixture.clone();
        mixture.water_kg += water_L * water::density_kg_per_m3(self.temperature_K) / 1000.0;
        self.chemistry.solve_ions(&mixture, self.temperature_K, &self.settings)
    }

    /// The dilution value: change of pH on mixing with an equal volume of water (Bates). A second solve.
    ///
    /// # Errors
    /// As [`Chemistry::solve`].
    pub fn dilution_value(&self) -> Result<f64, Failure> {
        Ok(self.diluted_with(self.volume_L)?.pH() - self.pH())
    }

    /// All derivatives of the pH at this state.
    pub fn sensitivity(&self) -> Sensitivity<'_> {
        Sensitivity::new(self)
    }

    /// ∂pH for a unit of this mixture added.
    pub fn pH_derivative(&self, direction: &Mixture) -> f64 {
        self.sensitivity().pH_derivative(direction)
    }

    /// Buffer capacity, mol of strong base per litre and unit of pH.
    pub fn buffer_capacity_mol_per_L(&self) -> f64 {
        self.sensitivity().buffer_capacity_mol_per_L()
    }

    /// ∂pH/∂T at fixed composition, 1/K.
    pub fn dpH_dT_per_K(&self) -> f64 {
        self.sensitivity().dpH_dT_per_K()
    }
}
