//! Molar masses from formulas and the IUPAC standard atomic weights.

use std::collections::HashMap;
use std::sync::LazyLock;

use crate::syntax::formula::Formula;

/// Standard atomic weights by element symbol, g/mol, with their standard uncertainty.
pub struct AtomicWeights(HashMap<&'static str, (f64, f64)>);

/// The table that comes with the program.
static TABLE: LazyLock<AtomicWeights> =
    LazyLock::new(|| AtomicWeights::parse(include_str!("../library/data/atomic-weights.txt")));

impl AtomicWeights {
    /// The built-in table.
    pub fn built_in() -> &'static AtomicWeights {
        &TABLE
    }

    /// Reads lines of `SYMBOL WEIGHT UNCERTAINTY`; `#` opens a comment.
    fn parse(text: &'static str) -> Self {
        let rows = text.lines().filter_map(|line| {
            let mut words = line.split('#').next().unwrap_or_default().split_whitespace();
            let symbol = words.next()?;
            let weight = words.next()?.parse().ok()?;
            let uncertainty = words.next().and_then(|word| word.parse().ok()).unwrap_or(0.0);
            Some((symbol, (weight, uncertainty)))
        });
        AtomicWeights(rows.collect())
    }

    /// The weight of an element, g/mol.
    pub fn of(&self, symbol: &str) -> Option<f64> {
        self.0.get(symbol).map(|(weight, _)| *weight)
    }
}

/// Molar mass of a formula, kg/mol; none where an element has no standard atomic weight.
pub fn molar_mass(formula: &Formula) -> Option<f64> {
    let mut grams = 0.0;
    for (symbol, count) in formula.elements() {
        grams += count * AtomicWeights::built_in().of(symbol)?;
    }
    Some(grams / 1000.0)
}
