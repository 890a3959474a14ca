//! Checks of the core against published values and against itself.

mod laboratory;
mod standards;
