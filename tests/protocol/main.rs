//! The real program as editors meet it: `scruple serve`, spoken to in plain JSON-RPC.

mod client;
mod features;
mod lifecycle;
mod texts;
