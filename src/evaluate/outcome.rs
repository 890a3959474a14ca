//! What comes out of a recipe: amounts, states and verdicts, in base units.

use std::sync::Arc;

use super::Above;
use crate::chemistry::{Failure, Mixture, PhaseId, Settled, State};
use crate::finding::{Anchor, Finding};
use crate::model::{DefinitionKey, Property, Recipe};
use crate::units::Unit;

/// What came out of evaluating a solution or a bottle.
#[derive(Clone, Debug, Default)]
pub struct Evaluation {
    /// The recipe with the lines of the one that it is `like`, where it is like one; entries are counted in it.
    pub recipe: Option<Arc<Recipe>>,
    /// The solution, or the members of a series in order. Empty for blocks that are no recipe.
    pub members: Vec<Member>,
    /// What the evaluation found; advice is given on top of it.
    pub findings: Vec<Finding>,
}

impl Evaluation {
    /// The outcome of the solution itself, or of the first member of a series.
    pub fn outcome(&self) -> Option<&Arc<Outcome>> {
        self.members.first().and_then(|member| member.outcome.as_ref())
    }
}

/// One solution of a series, or the only one.
#[derive(Clone, Debug)]
pub struct Member {
    /// Its name: the solution's, with the value in brackets in a series.
    pub name: String,
    /// What came out; none where the recipe has no values.
    pub outcome: Option<Arc<Outcome>>,
}

/// Everything worked out of one recipe.
#[derive(Clone, Debug)]
pub struct Outcome {
    /// Where it is made, K.
    pub made_at_K: f64,
    /// How sure that is: half the width of the room's range, K; 0 where it is stated.
    pub made_at_half_width_K: f64,
    /// What the finished solution holds.
    pub mixture: Mixture,
    /// Its mass, kg.
    pub mass_kg: f64,
    /// All water in it: added, of crystallisation, of strengths; before reaction, kg.
    pub water_kg: f64,
    /// Its volume at `made_at_K`, L.
    pub volume_L: f64,
    /// Its state at `made_at_K`, or why there is none.
    pub finished: Result<State, Failure>,
    /// What each line brought.
    pub lines: Vec<LineOutcome>,
    /// The beaker where a pH was set, in bench order.
    pub set_points: Vec<SetPoint>,
    /// The beaker at each divider, in bench order.
    pub parts: Vec<PartOutcome>,
    /// What the beaker held after each line, in bench order.
    pub stages: Vec<Stage>,
    /// What was filtered or driven off, in bench order.
    pub removed: Vec<Removed>,
    /// The gas above the solution, where one is stated.
    pub above: Option<Above>,
    /// Where the solution drifts that is kept open: its state in equilibrium with the carbon dioxide of the air.
    pub drift: Option<Result<Settled, Failure>>,
    /// The state at each use temperature, in the order written, under the gas that is stated.
    pub uses: Vec<(f64, Result<State, Failure>)>,
    /// What became of the expectations, one for each temperature at which they must hold.
    pub verdicts: Vec<Verdict>,
    /// The substances that were brought, water left out, with their amounts where they have one.
    pub solutes: Vec<Solute>,
    /// Where a strength was found: the computed and the found one, mol/L.
    pub found: Option<(f64, f64)>,
    /// Whether the liquid is mostly made up by weighing or by volumes that do not add up to a mark.
    pub made_up: bool,
}

/// The beaker after a line.
#[derive(Clone, Debug, PartialEq)]
pub struct Stage {
    /// Index of the entry in the recipe.
    pub entry: usize,
    /// Its statement.
    pub at: Anchor,
    /// What the beaker held.
    pub mixture: Mixture,
    /// Its temperature, K.
    pub temperature_K: f64,
}

/// What left the beaker at a line.
#[derive(Clone, Debug, PartialEq)]
pub struct Removed {
    /// Index of the entry in the recipe.
    pub entry: usize,
    /// Its statement.
    pub at: Anchor,
    /// The solid or gas.
    pub phase: PhaseId,
    /// Its amount, mol.
    pub amount_mol: f64,
    /// Its mass, kg.
    pub mass_kg: f64,
}

/// A substance that the solution was made from.
#[derive(Clone, Debug, PartialEq)]
pub struct Solute {
    /// Its block.
    pub definition: DefinitionKey,
    /// Its name.
    pub name: String,
    /// Amount, mol; none for substances without formula.
    pub amount_mol: Option<f64>,
    /// Mass, kg.
    pub mass_kg: f64,
}

/// What a line did.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// It states how much.
    Stated,
    /// First or second member of a pair.
    OfPair,
    /// It makes up to a volume or mass.
    MakesUp,
    /// It adjusts the pH or another property.
    Adjusts,
    /// It could go in instead of the line above, and does not.
    Alternative,
}

/// What a line brought.
#[derive(Clone, Debug, PartialEq)]
pub struct LineOutcome {
    /// Index of the entry in the recipe.
    pub entry: usize,
    /// Its statement.
    pub at: Anchor,
    /// What the line names.
    pub name: String,
    /// What that was found to be.
    pub definition: DefinitionKey,
    /// What the line did.
    pub role: Role,
    /// What is weighed or, for liquids, the mass that is measured out, kg.
    pub mass_kg: f64,
    /// The volume measured out, L; none for solids.
    pub volume_L: Option<f64>,
    /// The amount of the line's one substance, mol; none for solutions of several.
    pub amount_mol: Option<f64>,
    /// That amount per litre of the finished solution, mol/L.
    pub concentration_mol_per_L: Option<f64>,
    /// What one kilogram of it holds.
    pub per_kg: Mixture,
    /// Whether it goes in by count (`2 each`): what it weighs and brings is not known, and nothing of it is counted.
    pub by_count: bool,
}

/// The beaker at a line that sets the pH.
#[derive(Clone, Debug)]
pub struct SetPoint {
    /// Index of the entry in the recipe.
    pub entry: usize,
    /// Its statement.
    pub at: Anchor,
    /// The pH aimed at.
    pub aim: f64,
    /// The stated window; none where nothing was stated.
    pub window: Option<(f64, f64)>,
    /// pH before the titrant.
    pub pH_before: f64,
    /// The beaker as set, at the temperature of making, undiluted.
    pub state: State,
    /// Index of the make-up line whose liquid was counted in.
    pub liquid_of: Option<usize>,
    /// Whether the target holds at another temperature or dilution than the beaker's.
    pub elsewhere: bool,
}

/// The beaker at a divider.
#[derive(Clone, Debug)]
pub struct PartOutcome {
    /// Index of the divider in the recipe.
    pub entry: usize,
    /// What the part above it holds.
    pub mixture: Mixture,
    /// Its volume, L.
    pub volume_L: f64,
    /// Its state.
    pub state: Result<State, Failure>,
}

/// What became of an expectation.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Index of the expectation in the recipe.
    pub expectation: usize,
    /// Its statement.
    pub at: Anchor,
    /// The property.
    pub property: Property,
    /// At which temperature it was judged, K.
    pub temperature_K: f64,
    /// After which dilution; 1 for none.
    pub fold: f64,
    /// The value in the base unit of `unit`; none where it is not worked out.
    pub value: Option<f64>,
    /// Lower limit, base unit.
    pub low: Option<f64>,
    /// Upper limit, base unit.
    pub high: Option<f64>,
    /// The unit written; none for pH.
    pub unit: Option<Unit>,
    /// Whether it holds; none where there is no value.
    pub holds: Option<bool>,
}
