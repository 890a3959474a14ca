//! Checks of the core against published values and against itself.

mod account;
mod activity;
mod buffering;
mod conductivity;
mod laboratory;
mod phases;
mod random;
mod refusals;
mod roots;
mod standards;
mod volume;
mod water;
