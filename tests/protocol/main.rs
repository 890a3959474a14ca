//! The real program as editors meet it: `scruple serve`, spoken to in plain JSON-RPC.
#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a test that meets the unexpected should stop there")]

mod client;
mod features;
mod lifecycle;
mod manners;
mod texts;
