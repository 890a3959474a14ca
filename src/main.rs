//! The `scruple` program: argument dispatch, nothing else.

fn main() {}
