//! The parser that pest makes of `grammar/scruple.pest`.
#![allow(missing_docs, reason = "the rules are documented in the grammar")]

use pest_derive::Parser;

/// The generated parser of logical lines.
#[derive(Parser)]
#[grammar = "../grammar/scruple.pest"]
pub(super) struct LineParser;
