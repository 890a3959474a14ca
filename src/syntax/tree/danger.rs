//! What a danger is made of: the things that meet, and how long they keep.

use super::part::{Name, Quantity, Slot};

/// `with NAME, NAME, at least QUANTITY`: one side of a danger, any of whose names will do.
#[derive(Clone, Debug, PartialEq)]
pub struct Side {
    /// The names.
    pub names: Vec<Name>,
    /// The least that counts.
    pub least: Option<Slot<Quantity>>,
}

/// `keeps DURATION at T`.
#[derive(Clone, Debug, PartialEq)]
pub struct Keeps {
    /// How long.
    pub duration: Slot<Quantity>,
    /// At which temperature.
    pub at: Option<Slot<Quantity>>,
}
