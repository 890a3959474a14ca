//! What is wrong with the writing of a line, in words for laboratory staff.

use super::statement_span;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::syntax::tree::{Content, Expected, Fault, FaultKind, Line, TokenKind};

/// Reports the faults of a line.
pub(super) fn report(index: usize, line: &Line, findings: &mut Vec<Finding>) {
    findings.extend(line.faults.iter().map(|fault| finding(index, line, fault)));
}

fn finding(index: usize, line: &Line, fault: &Fault) -> Finding {
    let written = fault.span.of(&line.text);
    let (code, message, help) = words(line, fault, written);
    let at = Anchor::new(index, if fault.span.is_empty() { visible(line, fault) } else { fault.span });
    let fixes = fault.readings.iter().map(|reading| {
        let title = match (reading.meaning.is_empty(), reading.text.is_empty()) {
            (false, _) => format!("Write `{}`: {}", reading.text.trim(), reading.meaning),
            (true, true) => format!("Remove `{}`", reading.span.of(&line.text).escape_unicode_if_hidden()),
            (true, false) => format!("Write `{}`", reading.text.trim()),
        };
        Fix::replace(title, Anchor::new(index, reading.span), reading.text.clone())
    });
    Finding::new(code, at, message).help(help).fixes(fixes)
}

/// A gap has no characters to underline: the last word before it stands for it.
fn visible(line: &Line, fault: &Fault) -> crate::text::Span {
    let before = |token: &&crate::syntax::tree::Token| {
        !token.span.is_empty() && token.kind != TokenKind::Comment && token.span.end <= fault.span.start
    };
    line.tokens.iter().rfind(before).map_or(statement_span(line), |token| token.span)
}

/// Characters that cannot be seen are named by their code point.
trait EscapeHidden {
    fn escape_unicode_if_hidden(&self) -> String;
}

impl EscapeHidden for str {
    fn escape_unicode_if_hidden(&self) -> String {
        self.chars()
            .map(|character| match character {
                ' '..='~' => character.to_string(),
                _ if character.is_alphanumeric() => character.to_string(),
                _ => format!("U+{:04X}", u32::from(character)),
            })
            .collect()
    }
}

/// Code, message and help of a fault.
fn words(line: &Line, fault: &Fault, written: &str) -> (Code, String, String) {
    let said = |code, message: String, help: &str| (code, message, help.to_string());
    match &fault.kind {
        FaultKind::UnknownStatement => said(
            Code::UnknownStatement,
            match first_word(written) {
                Some(word) => format!("`{word}` is not a word that a line can begin with."),
                None => "This line cannot be read.".to_string(),
            },
            "Begin the line with an amount, `q.s.`, or one of the statement words; a remark begins with #.",
        ),
        FaultKind::Missing(expected) => said(
            Code::IncompleteLine,
            format!("The line is not complete: {} missing here.", missing(*expected)),
            match line.content {
                Content::Statement(_) => "Complete the line; until then the block has no values.",
                _ => "Complete the line.",
            },
        ),
        FaultKind::Unexpected => said(
            Code::Unreadable,
            format!("`{written}` cannot be read here."),
            "Remove it, or put a comma before it if it is a qualifier.",
        ),
        FaultKind::BadQuantity => {
            said(Code::Unreadable, format!("`{written}` is not an amount that can be read."), "Write a number and a unit.")
        }
        FaultKind::UnknownUnit => said(
            Code::UnknownUnit,
            format!("`{written}` is not a unit that the language knows."),
            "Write one of its units: g, mg, mL, µL, mol/L, mmol/L, g/L, % w/w …",
        ),
        FaultKind::WrongKindOfUnit(fits) => said(
            Code::UnitOfWrongKind,
            format!("`{written}` is a unit of the wrong kind for this place; {fits} fits here."),
            "Write a unit of the right kind.",
        ),
        FaultKind::UnitMissing => said(
            Code::UnitMissing,
            format!("`{written}` has no unit."),
            "Write the unit; no number stands without one.",
        ),
        FaultKind::BarePercent => said(
            Code::BarePercent,
            format!("`{written}` does not say of what it is a per cent."),
            "Write % w/w (mass in mass), % w/v (grams in 100 mL) or % v/v (volume in volume).",
        ),
        FaultKind::Normality => said(
            Code::Normality,
            format!("`{written}` is a normality, which depends on the reaction that is meant."),
            "Write the amount concentration in mol/L.",
        ),
        FaultKind::Ppm => said(
            Code::Ppm,
            format!("`{written}` can be per mass, per volume or per litre."),
            "Write mg/L, mg/kg or mL/L.",
        ),
        FaultKind::DecimalComma => said(
            Code::DecimalComma,
            format!("`{written}` has a decimal comma."),
            "Write a point: a comma separates the parts of a line.",
        ),
        FaultKind::ThousandsComma => said(
            Code::DecimalComma,
            format!("`{written}` can be read with a comma between thousands, or with a decimal comma."),
            "Write the number without a comma.",
        ),
        FaultKind::LeadingZero => said(
            Code::LeadingZero,
            format!("`{written}` may have lost a decimal point."),
            "Write 0.5, not .5 or 05.",
        ),
        FaultKind::OneInHowMany => said(
            Code::OneInHowMany,
            format!("`{written}` can be one part in all, or one part beside the others."),
            "Write the volumes in brackets, (1 + 9), or `diluted 10-fold`.",
        ),
        FaultKind::SignedQuantity => said(
            Code::SignedQuantity,
            format!("`{written}` has a sign; an amount has none."),
            "Remove the sign.",
        ),
        FaultKind::DashAsRange => said(
            Code::BadNumber,
            format!("`{written}` uses a dash for a range, which can be taken for a minus."),
            "Write `to` between the two numbers.",
        ),
        FaultKind::BadNumber => {
            said(Code::BadNumber, format!("`{written}` is not a number that can be read."), "Write digits and a point.")
        }
        FaultKind::OutOfBounds(bounds) => said(
            Code::BadNumber,
            format!("`{written}` is out of bounds: {bounds}."),
            "Check the number; a decimal point may be missing.",
        ),
        FaultKind::RangeDoesNotRise => said(
            Code::RangeDoesNotRise,
            format!("The range `{written}` does not rise."),
            "Write the lower end first.",
        ),
        FaultKind::UnknownQualifier => said(
            Code::UnknownQualifier,
            format!("`{written}` is no qualifier."),
            "Qualifiers are ±, purity, water, dried at, density, from, about, at most, by weight, at, grade, lot. A name with a comma stands in quotes.",
        ),
        FaultKind::MisplacedQualifier => said(
            Code::MisplacedQualifier,
            format!("`{written}` cannot stand on this kind of line."),
            "Remove it, or state it where the thing is described.",
        ),
        FaultKind::NothingAfterComma => said(
            Code::NothingAfterComma,
            "Nothing follows this comma.".to_string(),
            "Remove the comma, or begin the next line with it.",
        ),
        FaultKind::BadTarget => said(
            Code::Unreadable,
            format!("`{written}` is not something that a solution can be made up to."),
            "Write a volume, a mass, or a property with its value: 1 L, pH 7.00, ionic strength 150 mmol/L.",
        ),
        FaultKind::UnknownProperty => said(
            Code::UnknownProperty,
            format!("`{written}` is not a property that the language knows."),
            "Properties are pH, ionic strength, buffer capacity, osmolality, conductivity, density, water activity, alkalinity, hardness, total NAME, free NAME, saturation index of PHASE.",
        ),
        FaultKind::BadRange => said(
            Code::Unreadable,
            format!("`{written}` is not a range that can be read."),
            "Write `a to b`, `a ± b`, `at least a` or `at most a`, with the unit.",
        ),
        FaultKind::BadName => said(
            Code::NameNeedsQuotes,
            format!("`{written}` cannot be told from the words around it."),
            "Write the name in double quotes.",
        ),
        FaultKind::SecondNumber => said(
            Code::NumberInName,
            format!("A name cannot begin with the number `{written}`."),
            "If it is a strength, write its unit (mol/L, % w/w); if it belongs to the name, write the name in double quotes.",
        ),
        FaultKind::BadFormula => said(
            Code::BadFormula,
            format!("`{written}` is not a chemical formula that can be read."),
            "Write element symbols with counts, hydrates after a raised dot: NaH2PO4·H2O.",
        ),
        FaultKind::InvisibleCharacter(character) => said(
            Code::InvisibleCharacter,
            format!("The character U+{:04X} stands here and cannot be seen.", u32::from(*character)),
            "Remove it: it can make a reader see another amount or name.",
        ),
        FaultKind::LookAlikeLetter { found, looks_like } => said(
            Code::LookAlikeLetter,
            format!("The letter U+{:04X} stands here; it only looks like `{looks_like}`.", u32::from(*found)),
            "Write the Latin letter.",
        ),
        FaultKind::WrittenForm => {
            said(Code::WrittenForm, format!("`{written}` is understood, but not the written form."), "Write it as the language does.")
        }
        FaultKind::TooLong => {
            said(Code::LineTooLong, "This line is longer than the program reads.".to_string(), "Break the line up.")
        }
    }
}

fn first_word(written: &str) -> Option<&str> {
    written.split_whitespace().next()
}

fn missing(expected: Expected) -> &'static str {
    match expected {
        Expected::IngredientName => "the name of what goes in is",
        Expected::SolutionName => "the name of a solution is",
        Expected::ConstituentName => "the name of an ion or molecule is",
        Expected::LabName => "the name of a lab is",
        Expected::NewName => "the name is",
        Expected::Quantity => "an amount is",
        Expected::Unit => "a unit is",
        Expected::Number => "a number is",
        Expected::To => "`to` and what it is made up to are",
        Expected::Target => "what it is made up to is",
        Expected::Property => "a property is",
        Expected::Range => "the range is",
        Expected::Temperature => "a temperature is",
        Expected::Duration => "a duration is",
        Expected::Qualifier => "a qualifier is",
        Expected::Path => "a path in double quotes is",
        Expected::Text => "the text is",
        Expected::Code => "the code of a finding is",
        Expected::Because => "`because` and the reason are",
        Expected::Formula => "a formula is",
        Expected::Gas => "a gas is",
        Expected::Other => "something is",
    }
}
