//! How a state came about, for those who must defend it: the constants that it rests on, the interactions that mattered, and how
//! well the balances close.

use super::{ConstantId, SpeciesId, State};

/// An account of a state. Nothing in it is solved again; it is read off the solved point.
#[derive(Clone, Debug, PartialEq)]
pub struct Account {
    /// The constants that take part, those that move the pH most first.
    pub constants: Vec<UsedConstant>,
    /// The interaction coefficients that take part, those that change an activity coefficient most first.
    pub interactions: Vec<UsedInteraction>,
    /// The mass balances: of hydrogen, then of each component.
    pub balances: Vec<Balance>,
    /// Sum of the charges of all species over the sum of their absolute values.
    pub relative_charge: f64,
    /// Debye–Hückel slope A for log₁₀ γ at this temperature, (kg/mol)^½.
    pub debye_hueckel_slope: f64,
}

/// A constant that takes part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct UsedConstant {
    /// The constant.
    pub id: ConstantId,
    /// log₁₀ K at the temperature of the state, zero ionic strength.
    pub log10_k: f64,
    /// ∂pH/∂(log₁₀ K).
    pub pH_per_log10_k: f64,
    /// Whether the temperature of the state is within what its source supports.
    pub holds: bool,
}

/// An interaction coefficient that takes part.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct UsedInteraction {
    /// The two species.
    pub pair: (SpeciesId, SpeciesId),
    /// ε, kg/mol.
    pub epsilon_kg_per_mol: f64,
    /// Its standard uncertainty, kg/mol.
    pub standard_uncertainty: f64,
    /// The larger of the two changes of log₁₀ γ that it makes.
    pub largest_effect: f64,
}

/// A mass balance at the solved point.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    /// What is balanced: `hydrogen`, or the name of the component.
    pub of: String,
    /// What went in, mol.
    pub given_mol: f64,
    /// What the species hold, mol.
    pub found_mol: f64,
    /// The difference over the sum of what takes part, sign aside.
    pub relative_residual: f64,
}

impl State {
    /// How this state came about.
    pub fn account(&self) -> Account {
        Account {
            constants: self.used_constants(),
            interactions: self.used_interactions(),
            balances: self.balances(),
            relative_charge: self.relative_charge(),
            debye_hueckel_slope: self.system.slope,
        }
    }

    fn used_constants(&self) -> Vec<UsedConstant> {
        let mut used: Vec<UsedConstant> = (self.sensitivity().to_constants().into_iter())
            .filter_map(|(id, derivative)| {
                let constant = self.chemistry.constant(id)?;
                Some(UsedConstant {
                    id,
                    log10_k: constant.log10_k(self.temperature_K),
                    pH_per_log10_k: derivative,
                    holds: constant.holds_at(self.temperature_K),
                })
            })
            .collect();
        used.sort_by(|one, other| other.pH_per_log10_k.abs().total_cmp(&one.pH_per_log10_k.abs()).then(one.id.cmp(&other.id)));
        used
    }

    fn used_interactions(&self) -> Vec<UsedInteraction> {
        let mut used: Vec<UsedInteraction> = (self.system.interactions.iter())
            .filter_map(|&(row, other, _)| {
                let pair = (*self.system.species.get(row)?, *self.system.species.get(other)?);
                let (_, interaction) = self.chemistry.interactions(pair.0).iter().find(|(partner, _)| *partner == pair.1)?;
                let most = self.point.molality.get(row)?.max(*self.point.molality.get(other)?);
                Some(UsedInteraction {
                    pair,
                    epsilon_kg_per_mol: interaction.epsilon_kg_per_mol,
                    standard_uncertainty: interaction.uncertainty,
                    largest_effect: interaction.epsilon_kg_per_mol.abs() * most,
                })
            })
            .collect();
        used.sort_by(|one, other| other.largest_effect.total_cmp(&one.largest_effect).then(one.pair.cmp(&other.pair)));
        used
    }

    fn balances(&self) -> Vec<Balance> {
        let names = std::iter::once("hydrogen".to_owned()).chain(self.system.components.iter().map(|id| {
            self.chemistry.component(*id).map_or_else(String::new, |component| component.name.clone())
        }));
        names
            .zip(&self.system.totals_mol)
            .enumerate()
            .map(|(column, (of, &given_mol))| {
                let (mut found_mol, mut size_mol) = (0.0, 0.0);
                for (row, molality) in self.point.molality.iter().enumerate() {
                    for &(_, count) in self.system.parts(row).iter().filter(|(balance, _)| *balance == column) {
                        found_mol += count * molality * self.water_kg;
                        size_mol += count.abs() * molality * self.water_kg;
                    }
                }
                let relative_residual = (found_mol - given_mol).abs() / f64::max(size_mol, given_mol.abs()).max(f64::MIN_POSITIVE);
                Balance { of, given_mol, found_mol, relative_residual }
            })
            .collect()
    }

    fn relative_charge(&self) -> f64 {
        let (mut net, mut size) = (0.0, 0.0);
        for (charge, molality) in self.system.charge.iter().zip(&self.point.molality) {
            net += charge * molality;
            size += charge.abs() * molality;
        }
        net / f64::max(size, f64::MIN_POSITIVE)
    }
}
