//! The parser that pest makes of `grammar/scruple.pest`, and the bound on its work.
#![allow(missing_docs, reason = "the rules are documented in the grammar")]

use std::num::NonZeroUsize;
use std::sync::Once;

use pest::Parser;
use pest::iterators::Pair;
use pest_derive::Parser;

/// The most rules that are tried on one line. The longest line needs a fraction of them, so only a grammar that went back
/// and forth over its text would meet this bound.
const MOST_CALLS: usize = 4_000_000;

/// The generated parser of logical lines.
#[derive(Parser)]
#[grammar = "../grammar/scruple.pest"]
struct LineParser;

/// The tree that pest finds in a logical line; none where that would take more work than any line is worth.
pub(super) fn parse_line(text: &str) -> Option<Pair<'_, Rule>> {
    static LIMIT: Once = Once::new();
    LIMIT.call_once(|| pest::set_call_limit(NonZeroUsize::new(MOST_CALLS)));
    LineParser::parse(Rule::line, text).ok()?.next()
}
