//! What a file means: names, and the lowering from tree to substances, solutions and labs.
//!
//! Everything here is free of file positions: places are [`crate::finding::Anchor`]s within a block, so that a block that
//! moves keeps its meaning.

mod block;
mod formula;
mod lower;
mod names;
mod constituents;
mod danger;
mod phases;
mod recipe;
mod references;
mod scope;
mod substance;

pub use block::{Block, BlockRole, Body, DefinedName, File, UseLine};
pub use formula::{AtomicWeights, molar_mass};
pub use lower::lower_file;
pub use danger::{Danger, Group, Side};
pub use names::NameKey;
pub use constituents::{CompositionRefusal, Constituent, Constituents, WATER_KG_PER_MOL, is_water};
pub use phases::Phases;
pub use recipe::*;
pub use scope::{Definition, Lookup, Names, Scope, member_of_series};
pub use substance::*;
