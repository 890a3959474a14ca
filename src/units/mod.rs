//! Dimensions, the one table of units, and quantities. Numbers are converted once on the way in (`Unit::to_base`) and
//! formatted in one place.

pub mod format;
mod table;
mod unit;

pub use unit::{Dimension, Unit};
