//! What must not come together, what does not keep, and groups of things that do so alike.

use super::{Amount, Expectation, Reference};
use crate::finding::Code;

/// A `danger` block: what raises a finding when it stands in one vessel.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Danger {
    /// The sides that meet; of each, one name is enough.
    pub sides: Vec<Side>,
    /// What else must hold in the vessel.
    pub conditions: Vec<Expectation>,
    /// The finding that is raised.
    pub raises: Option<Code>,
    /// What happens, for the finding's message.
    pub because: String,
    /// What to do.
    pub advice: Option<String>,
    /// How long it keeps, s, and at which temperature, K.
    pub keeps: Vec<(f64, Option<f64>)>,
    /// Whether it counts after every line, though a later one ends it.
    pub even_in_passing: bool,
    /// `instead of the built-in`.
    pub instead: bool,
    /// Where the facts come from.
    pub source: Option<String>,
}

/// One side of a danger.
#[derive(Clone, Debug, PartialEq)]
pub struct Side {
    /// Ions, their forms, molecules, substances or groups.
    pub names: Vec<Reference>,
    /// The least that counts; none where any amount does.
    pub least: Option<Amount>,
}

/// A `group` block: things that behave alike.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Group {
    /// Ions, their forms, molecules or substances.
    pub holds: Vec<Reference>,
    /// `instead of the built-in`.
    pub instead: bool,
    /// Where the facts come from.
    pub source: Option<String>,
}
