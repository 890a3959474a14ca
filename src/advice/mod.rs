//! Findings: one file per family, one plain array that lists them.
