//! Definitions: twice, in place of the built-in ones, or such that nothing follows from them.

use super::Case;
use crate::evaluate::place_of;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::*;
use crate::syntax::tree::BlockKind;

/// Two definitions of one name in one file.
pub(super) fn defined_twice(case: &Case, findings: &mut Vec<Finding>) {
    let (Some(kind), Some(name)) = (case.block.kind(), &case.block.name) else { return };
    let namespace = namespace(kind);
    for other in case.context.scope.own.named(namespace, &name.key) {
        let is_other = other.key.file == case.file && !std::sync::Arc::ptr_eq(&other.block, case.block);
        // A substance of one's own and the bottle that it comes in may share a name.
        let may_share = matches!(
            (kind, other.block.kind()),
            (BlockKind::Bottle, Some(BlockKind::Substance)) | (BlockKind::Substance, Some(BlockKind::Bottle))
        );
        let has_it_as_header = other.block.name.as_ref().is_some_and(|own| own.key == name.key);
        if is_other && !may_share && has_it_as_header {
            findings.push(
                Finding::new(Code::DefinedTwice, case.block.header_anchor(), format!("{} is defined twice in this file.", name.text))
                    .help("Give one of them another name.")
                    .related_at(place_of(other), "the other definition")
                    .about(name.key.as_str()),
            );
        }
    }
}

/// A definition that takes a built-in name without saying so.
pub(super) fn hides_the_built_in(case: &Case, findings: &mut Vec<Finding>) {
    let (Some(kind), Some(name)) = (case.block.kind(), &case.block.name) else { return };
    // A bottle may bear its substance's name: it is the bottle of it.
    if matches!(kind, BlockKind::Bottle | BlockKind::Lab) || says_instead(case.block) {
        return;
    }
    let built_in = case.context.scope.built_in.named(namespace(kind), &name.key);
    let Some(hidden) = built_in.first() else { return };
    findings.push(
        Finding::new(
            Code::HidesTheBuiltIn,
            case.block.header_anchor(),
            format!("{} is also the name of something in the built-in library; this definition is taken.", name.text),
        )
        .help("Add the line `instead of the built-in` if that is meant, or give it another name.")
        .related_at(place_of(hidden), "the built-in one")
        .about(name.key.as_str())
        .fix(Fix::line_below("Add `instead of the built-in`", 0, "    instead of the built-in")),
    );
}

fn says_instead(block: &Block) -> bool {
    block.lines.iter().any(|line| {
        matches!(&line.content, crate::syntax::tree::Content::Statement(crate::syntax::tree::Statement::InsteadOfTheBuiltIn))
    })
}

/// A substance from which nothing can be worked out.
pub(super) fn bad_definition(case: &Case, findings: &mut Vec<Finding>) {
    let (Body::Substance(substance), Some(name)) = (&case.block.body, &case.block.name) else { return };
    let key = DefinitionKey { file: case.file, namespace: Namespace::Ingredient, name: name.key.clone() };
    let at = case.block.header_anchor();
    let finding = match case.context.constituents.per_mole(&key, substance) {
        Ok(_) | Err(CompositionRefusal::Inert | CompositionRefusal::NoMolarMass) => return,
        Err(CompositionRefusal::Unknown(reference)) => Finding::new(
            Code::UnknownName,
            reference.at,
            format!("No ion or molecule in solution is called {}.", reference.text),
        )
        .help("Define it in an `ion` block, or correct the name.")
        .about(reference.key.as_str()),
        Err(CompositionRefusal::DoesNotBalance { missing_g_per_mol }) => Finding::new(
            Code::BadDefinition,
            at,
            format!(
                "The formula of {} and what it gives differ by {missing_g_per_mol:.2} g/mol, which is not water.",
                name.text
            ),
        )
        .help("Correct the formula, or the counts after `gives`."),
    };
    findings.push(finding);
}

/// A reference spelled otherwise than where it is defined: text search and review then miss it.
pub(super) fn spelled_otherwise(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    let mut look = |reference: &Reference| {
        let Lookup::One(definition) = case.context.scope_of(reference).find(Namespace::Ingredient, &reference.key, &reference.text) else { return };
        // Substances have many spellings in the trade; what a laboratory names itself has one.
        if !matches!(definition.block.kind(), Some(BlockKind::Solution | BlockKind::Bottle)) {
            return;
        }
        let spellings = || definition.block.name.iter().chain(&definition.block.also);
        if spellings().any(|name| name.text == reference.text) {
            return;
        }
        let Some(written) = spellings().find(|name| name.key == reference.key) else { return };
        findings.push(
            Finding::new(
                Code::SpelledOtherwise,
                reference.at,
                format!("{} is called {} where it is defined.", reference.text, written.text),
            )
            .help("Spell it the same, so that a text search finds every use.")
            .related_at(place_of(definition), "defined here")
            .about(reference.key.as_str())
            .fix(Fix::replace(format!("Write {}", written.text), reference.at, crate::evaluate::written_form(&written.text))),
        );
    };
    recipe.entries.iter().flat_map(|entry| entry.action.ingredients()).for_each(&mut look);
}

/// The place of a line's whole statement, for rules that speak of it.
pub(super) fn line_anchor(block: &Block, line: usize) -> Anchor {
    let span = block.lines.get(line).map_or(crate::text::Span::empty(0), |line| {
        let words = line.tokens.iter().filter(|token| token.kind != crate::syntax::tree::TokenKind::Comment);
        words.map(|token| token.span).reduce(crate::text::Span::to).unwrap_or_default()
    });
    Anchor::new(line, span)
}
