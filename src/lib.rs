//! scruple: the language in which laboratories write the recipes of their solutions, and the chemistry that checks them.
//!
//! Rooms, lowest first; a room uses only those above it in this list (`tests/layers.rs` holds the exact arrows).
#![forbid(unsafe_code)]
#![allow(non_snake_case, reason = "quantities are named with their units, and units keep their letter case: temperature_K")]

pub mod text;
pub mod units;
pub mod chemistry;
pub mod finding;
pub mod syntax;
pub mod model;
pub mod library;
pub mod evaluate;
pub mod advice;
pub mod workspace;
pub mod review;
pub mod editor;
pub mod report;
pub mod server;
pub mod command;
