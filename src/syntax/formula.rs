//! Chemical formulas: what atoms they count, which charge they carry, and the form in which two are compared.

use std::collections::BTreeMap;

use crate::text::Span;

/// What a formula says.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Formula {
    elements: BTreeMap<&'static str, f64>,
    charge: i32,
    canonical: String,
}

impl Formula {
    /// How many atoms of each element, in the order of the symbols; not whole where the formula counts half a water.
    pub fn elements(&self) -> impl Iterator<Item = (&'static str, f64)> + '_ {
        self.elements.iter().map(|(element, count)| (*element, *count))
    }

    /// The charge, in elementary charges.
    pub fn charge(&self) -> i32 {
        self.charge
    }

    /// The form in which formulas are compared; see [`canonical`].
    pub fn canonical(&self) -> String {
        self.canonical.clone()
    }
}

/// Why a text is no formula.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FormulaError {
    /// The characters at fault, in bytes of the text.
    pub span: Span,
    /// A sentence that says what is wrong.
    pub message: &'static str,
}

/// Brackets may stand this deep in each other.
const DEEPEST: usize = 12;
/// The longest formula that is read, in bytes.
const LONGEST: usize = 300;

/// The symbols of the elements (IUPAC, Periodic Table of the Elements, 2022).
pub const ELEMENTS: [&str; 118] = [
    "H", "He", "Li", "Be", "B", "C", "N", "O", "F", "Ne", "Na", "Mg", "Al", "Si", "P", "S", "Cl", "Ar", "K", "Ca", "Sc",
    "Ti", "V", "Cr", "Mn", "Fe", "Co", "Ni", "Cu", "Zn", "Ga", "Ge", "As", "Se", "Br", "Kr", "Rb", "Sr", "Y", "Zr", "Nb",
    "Mo", "Tc", "Ru", "Rh", "Pd", "Ag", "Cd", "In", "Sn", "Sb", "Te", "I", "Xe", "Cs", "Ba", "La", "Ce", "Pr", "Nd", "Pm",
    "Sm", "Eu", "Gd", "Tb", "Dy", "Ho", "Er", "Tm", "Yb", "Lu", "Hf", "Ta", "W", "Re", "Os", "Ir", "Pt", "Au", "Hg", "Tl",
    "Pb", "Bi", "Po", "At", "Rn", "Fr", "Ra", "Ac", "Th", "Pa", "U", "Np", "Pu", "Am", "Cm", "Bk", "Cf", "Es", "Fm", "Md",
    "No", "Lr", "Rf", "Db", "Sg", "Bh", "Hs", "Mt", "Ds", "Rg", "Cn", "Nh", "Fl", "Mc", "Lv", "Ts", "Og",
];

/// Reads a formula: `NaH2PO4·2H2O`, `K3[Fe(CN)6]`, `CaSO4·½H2O`, `SO₄²⁻`, `NH4+`.
///
/// Parts are joined by a raised dot or by `.`, `*`; counts are digits or subscripts; a charge is superscript, stands after
/// `^`, or is signs at the end. `Ca2+` is refused, for it can be read as one or as two atoms.
pub fn parse(text: &str) -> Result<Formula, FormulaError> {
    Reader { text, characters: text.char_indices().collect(), at: 0 }.formula()
}

/// The form in which formulas are compared: raised dots, subscripts, halves and white space made alike. Letters keep
/// their case, for `CO` is not `Co`.
pub fn canonical(text: &str) -> String {
    let mut canonical = String::with_capacity(text.len());
    let mut previous_digit = false;
    let mut in_coefficient = false;
    let mut characters = text.chars().filter(|letter| !letter.is_whitespace()).peekable();
    while let Some(character) = characters.next() {
        let next_digit = characters.peek().is_some_and(char::is_ascii_digit);
        match character {
            // A point between digits of a coefficient is a decimal point, every other a joint.
            '.' if in_coefficient && previous_digit && next_digit => canonical.push('.'),
            joint if is_joint(joint) => {
                canonical.push('·');
                in_coefficient = true;
                previous_digit = false;
                continue;
            }
            '½' => canonical.push_str(if previous_digit { ".5" } else { "0.5" }),
            '−' | '⁻' => canonical.push('-'),
            '⁺' => canonical.push('+'),
            '^' => {}
            other => canonical.push(subscript(other).or(superscript(other)).unwrap_or(other)),
        }
        previous_digit = character.is_ascii_digit();
        in_coefficient = in_coefficient && (character.is_ascii_digit() || matches!(character, '.' | '½'));
    }
    canonical
}

fn is_joint(character: char) -> bool {
    matches!(character, '·' | '.' | '*' | '•' | '∙' | '⋅' | '・' | '●' | '×')
}

fn subscript(character: char) -> Option<char> {
    let digit = (character as u32).checked_sub('₀' as u32).filter(|digit| *digit < 10)?;
    char::from_digit(digit, 10)
}

fn superscript(character: char) -> Option<char> {
    Some(match character {
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴' => '4',
        '⁵' => '5',
        '⁶' => '6',
        '⁷' => '7',
        '⁸' => '8',
        '⁹' => '9',
        _ => return None,
    })
}

type Counts = BTreeMap<&'static str, f64>;

struct Reader<'t> {
    text: &'t str,
    characters: Vec<(usize, char)>,
    at: usize,
}

impl Reader<'_> {
    fn formula(mut self) -> Result<Formula, FormulaError> {
        if self.text.len() > LONGEST {
            return Err(FormulaError { span: Span::new(0, self.text.len()), message: "The formula is longer than any that is read." });
        }
        let mut total = Counts::new();
        let mut factor = 1.0;
        loop {
            let part = self.part()?;
            add(&mut total, &part, factor);
            let before = self.at;
            self.skip_spaces();
            if !self.peek().is_some_and(is_joint) {
                self.at = before;
                break;
            }
            self.at += 1;
            self.skip_spaces();
            factor = self.coefficient()?;
            self.skip_spaces();
        }
        let charge = self.charge(&total)?;
        if self.at < self.characters.len() {
            return Err(self.error("Here the formula cannot be read on."));
        }
        Ok(Formula { elements: total, charge, canonical: canonical(self.text) })
    }

    fn peek(&self) -> Option<char> {
        self.characters.get(self.at).map(|(_, character)| *character)
    }

    fn skip_spaces(&mut self) {
        while self.peek().is_some_and(char::is_whitespace) {
            self.at += 1;
        }
    }

    fn error(&self, message: &'static str) -> FormulaError {
        let start = self.characters.get(self.at).map_or(self.text.len(), |(offset, _)| *offset);
        let length = self.peek().map_or(0, char::len_utf8);
        FormulaError { span: Span::new(start, start + length), message }
    }

    /// Elements and brackets up to a joint, a charge or the end.
    fn part(&mut self) -> Result<Counts, FormulaError> {
        let mut open: Vec<(char, Counts)> = Vec::new();
        let mut counts = Counts::new();
        let mut begun = false;
        while let Some(character) = self.peek() {
            match character {
                '(' | '[' | '{' => {
                    if open.len() >= DEEPEST {
                        return Err(self.error("Brackets stand too deep in each other."));
                    }
                    self.at += 1;
                    let closing = match character {
                        '(' => ')',
                        '[' => ']',
                        _ => '}',
                    };
                    open.push((closing, std::mem::take(&mut counts)));
                }
                ')' | ']' | '}' => {
                    let Some((closing, outer)) = open.pop() else {
                        return Err(self.error("This bracket closes none."));
                    };
                    if closing != character || counts.is_empty() {
                        return Err(self.error("This bracket does not fit the one that it closes."));
                    }
                    self.at += 1;
                    // `[Fe(CN)6]4-` at the end: the digits are the charge of the whole.
                    let factor = if open.is_empty() && self.charge_follows() { 1.0 } else { self.count()? };
                    let inner = std::mem::replace(&mut counts, outer);
                    add(&mut counts, &inner, factor);
                }
                'A'..='Z' => {
                    let element = self.element()?;
                    let count = self.count()?;
                    *counts.entry(element).or_insert(0.0) += count;
                }
                _ => break,
            }
            begun = true;
        }
        if !open.is_empty() {
            return Err(self.error("A bracket is not closed."));
        }
        if !begun {
            return Err(self.error("Here a formula has the symbol of an element."));
        }
        Ok(counts)
    }

    /// Whether digits, a sign and the end follow, as after the bracket of a complex.
    fn charge_follows(&self) -> bool {
        let rest = self.characters.get(self.at..).unwrap_or_default();
        let digits = rest.iter().take_while(|(_, letter)| letter.is_ascii_digit()).count();
        let sign = rest.get(digits).is_some_and(|(_, letter)| matches!(letter, '+' | '-' | '−'));
        digits > 0 && sign && rest.len() == digits + 1
    }

    fn element(&mut self) -> Result<&'static str, FormulaError> {
        let letter = |offset: usize| self.characters.get(self.at + offset).map(|(_, character)| *character);
        let first = letter(0);
        let two: Option<String> = first.zip(letter(1).filter(char::is_ascii_lowercase)).map(|(one, two)| [one, two].iter().collect());
        if let Some(two) = two {
            return match ELEMENTS.iter().find(|symbol| **symbol == two) {
                Some(symbol) => {
                    self.at += 2;
                    Ok(*symbol)
                }
                None => {
                    let wrong = self.error("This is the symbol of no element.");
                    Err(FormulaError { span: Span::new(wrong.span.start, wrong.span.end + 1), ..wrong })
                }
            };
        }
        let one = first.map(String::from).unwrap_or_default();
        match ELEMENTS.iter().find(|symbol| **symbol == one) {
            Some(symbol) => {
                self.at += 1;
                Ok(*symbol)
            }
            None => Err(self.error("This is the symbol of no element.")),
        }
    }

    fn digits(&mut self) -> String {
        let mut digits = String::new();
        while let Some(digit) = self.peek().and_then(|letter| subscript(letter).or(letter.is_ascii_digit().then_some(letter))) {
            digits.push(digit);
            self.at += 1;
        }
        digits
    }

    /// A count after an element or a bracket; one where none is written.
    fn count(&mut self) -> Result<f64, FormulaError> {
        let start = self.at;
        let digits = self.digits();
        if digits.is_empty() {
            return Ok(1.0);
        }
        match digits.parse::<u32>() {
            Ok(count) if count > 0 && count < 100_000 && !digits.starts_with('0') => Ok(f64::from(count)),
            _ => {
                self.at = start;
                Err(self.error("This count is none."))
            }
        }
    }

    /// How many of the part that follows a joint: `2`, `0.5`, `½`, `1½`.
    fn coefficient(&mut self) -> Result<f64, FormulaError> {
        let start = self.at;
        let mut digits = self.digits();
        if self.peek() == Some('.') && !digits.is_empty() {
            self.at += 1;
            digits.push('.');
            digits.push_str(&self.digits());
        }
        let half = self.peek() == Some('½');
        if half {
            self.at += 1;
        }
        let whole = if digits.is_empty() { Some(if half { 0.0 } else { 1.0 }) } else { digits.parse::<f64>().ok() };
        match whole.map(|whole| whole + if half { 0.5 } else { 0.0 }) {
            Some(count) if count > 0.0 && count < 1000.0 => Ok(count),
            _ => {
                self.at = start;
                Err(self.error("This count is none."))
            }
        }
    }

    fn charge(&mut self, total: &Counts) -> Result<i32, FormulaError> {
        let start = self.at;
        let caret = self.peek() == Some('^');
        if caret {
            self.at += 1;
        }
        let rest: String =
            self.characters.get(self.at..).unwrap_or_default().iter().map(|(_, letter)| match letter {
                '⁺' => '+',
                '⁻' | '−' => '-',
                other => superscript(*other).unwrap_or(*other),
            }).collect();
        if rest.is_empty() && !caret {
            return Ok(0);
        }
        let raised = caret || self.peek().is_some_and(|letter| superscript(letter).is_some() || matches!(letter, '⁺' | '⁻'));
        let digits: String = rest.chars().filter(char::is_ascii_digit).collect();
        let signs: String = rest.chars().filter(|letter| !letter.is_ascii_digit()).collect();
        let in_order = rest == format!("{digits}{signs}") || rest == format!("{signs}{digits}");
        let sign = match signs.chars().next() {
            Some('+') if signs.chars().all(|sign| sign == '+') => 1,
            Some('-') if signs.chars().all(|sign| sign == '-') => -1,
            _ => return Err(self.error("Here the formula cannot be read on.")),
        };
        let single_atoms = total.len() == 1 && total.values().all(|count| *count > 1.0);
        if !raised && signs.len() == 1 && single_atoms {
            self.at = start;
            return Err(self.error("Write the charge with superscripts or after ^: this can be read in two ways."));
        }
        let size = match (digits.parse::<i32>(), signs.len()) {
            (Ok(size), 1) if in_order && (1..=20).contains(&size) => size,
            (Err(_), count @ 1..=9) if digits.is_empty() => count as i32,
            _ => return Err(self.error("This charge cannot be read.")),
        };
        self.at = self.characters.len();
        Ok(sign * size)
    }
}

fn add(total: &mut Counts, part: &Counts, factor: f64) {
    for (element, count) in part {
        *total.entry(element).or_insert(0.0) += count * factor;
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn counts(text: &str) -> Vec<(&'static str, f64)> {
        match parse(text) {
            Ok(formula) => formula.elements().collect(),
            Err(error) => panic!("{text}: {error:?}"),
        }
    }

    #[test]
    fn counts_atoms() {
        assert_eq!(counts("NaH2PO4·2H2O"), [("H", 6.0), ("Na", 1.0), ("O", 6.0), ("P", 1.0)]);
        assert_eq!(counts("(NH4)2SO4"), [("H", 8.0), ("N", 2.0), ("O", 4.0), ("S", 1.0)]);
        assert_eq!(counts("K3[Fe(CN)6]"), [("C", 6.0), ("Fe", 1.0), ("K", 3.0), ("N", 6.0)]);
        assert_eq!(counts("CaSO4·½H2O"), counts("CaSO4.0.5H2O"));
        assert_eq!(counts("MgCl₂·6H₂O"), counts("MgCl2 * 6 H2O"));
        assert_eq!(counts("B(OH)4"), [("B", 1.0), ("H", 4.0), ("O", 4.0)]);
        assert_eq!(counts("CO"), [("C", 1.0), ("O", 1.0)]);
        assert_eq!(counts("Co"), [("Co", 1.0)]);
    }

    #[test]
    fn reads_charges() {
        let charge = |text: &str| parse(text).map(|formula| formula.charge);
        for (text, expected) in [
            ("SO4", 0), ("SO₄²⁻", -2), ("SO4^2-", -2), ("NH4+", 1), ("C24H39O4-", -1), ("Ca++", 2), ("Ca²⁺", 2),
            ("[Fe(CN)6]4-", -4), ("PO4---", -3), ("Fe^3+", 3),
        ] {
            assert_eq!(charge(text), Ok(expected), "{text}");
        }
        assert!(charge("Ca2+").is_err());
    }

    #[test]
    fn refuses_what_is_no_formula() {
        for text in ["", "NaCk", "nacl", "Na(Cl", "NaCl)", "Na[Cl)", "NaCl·", "2NaCl", "Na0", "H2O x", "()", "NaCl+-"] {
            assert!(parse(text).is_err(), "{text}");
        }
    }

    #[test]
    fn forms_are_compared_whatever_their_typography() {
        for other in ["NaH2PO4.2H2O", "NaH2PO4*2H2O", "NaH2PO4•2H2O", "NaH₂PO₄·2H₂O", "NaH2PO4 · 2 H2O"] {
            assert_eq!(canonical(other), canonical("NaH2PO4·2H2O"), "{other}");
        }
        assert_eq!(canonical("CaSO4·½H2O"), canonical("CaSO4.0.5H2O"));
        assert_ne!(canonical("CO"), canonical("Co"));
    }

    proptest! {
        #[test]
        fn reads_every_text_without_panic(text in "\\PC{0,30}") {
            if let Err(error) = parse(&text) {
                prop_assert!(error.span.end <= text.len() && text.is_char_boundary(error.span.start));
            }
            let _ = canonical(&text);
        }

        #[test]
        fn reads_every_text_of_formula_characters(text in "[A-CHNOa-c0-9()\\[\\].·½²⁻+^-]{0,30}") {
            let form = canonical(&text);
            if let Ok(formula) = parse(&text) && formula.charge == 0 {
                prop_assert_eq!(canonical(&form), form.as_str());
                prop_assert_eq!(parse(&form), Ok(formula));
            }
        }
    }
}
