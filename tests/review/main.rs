//! Recipes under version control: what `check` says to machines, what `compare` says of a history, and what git shows.

#![allow(non_snake_case, reason = "quantities keep their letter case: pH")]

mod check;
mod compare;
mod git;
mod laboratory;
