//! The core: amounts and conditions in, a state with its sensitivities out. Knows no text, spans, files or people.
// Names carry the unit of their number as it is written: `_mol_per_kg`, `_K`, `pH`.
#![allow(non_snake_case, non_upper_case_globals, reason = "units and pH keep their spelling")]

pub mod water;
pub mod debye_hueckel;
mod constants;
mod database;
mod mixture;
mod activity;
mod alkalinity;
mod failure;
mod equilibrium;
mod volume;
mod warning;
mod state;
mod phases;
mod solids;
pub mod gases;
mod trace;
mod sensitivity;
mod account;
mod buffering;
mod conductivity;
pub mod coupled;
pub mod targets;

pub use alkalinity::ALKALINITY_END_POINT_pH;
pub use buffering::BufferInterval;
pub use conductivity::Conductivity;
pub use account::{Account, Balance, UsedConstant, UsedInteraction};
pub use activity::ActivityModel;
pub use constants::{Constant, ConstantId, ConstantValue, REFERENCE_K};
pub use database::{Chemistry, ChemistryBuilder, Component, ComponentId, Inconsistency, Interaction, Species, SpeciesId};
pub use equilibrium::Limits;
pub use failure::Failure;
pub use mixture::Mixture;
pub use phases::{Forming, Phase, PhaseId, PhaseKind};
pub use solids::{Settled, phase_mass_kg};
pub use sensitivity::Sensitivity;
pub use state::{Settings, State};
pub use volume::molar_volume_cm3_per_mol;
pub use warning::Warning;

/// Molar mass of the hydrogen ion as formulas count it, kg/mol (IUPAC standard atomic weight 1.008; electrons balance out in a recipe).
pub const HYDROGEN_MOLAR_MASS_kg_per_mol: f64 = 0.001008;

#[cfg(test)]
mod tests;
