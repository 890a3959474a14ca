//! Checks of the dangers and groups: every name is known, every danger says what, why and from where.

use super::built_in;
use crate::finding::Code;
use crate::model::{Block, Body, Namespace, Reference};

fn blocks() -> impl Iterator<Item = &'static Block> {
    built_in().files.iter().flat_map(|file| file.model.blocks.iter().map(|block| block.as_ref()))
}

fn name_of(block: &Block) -> &str {
    block.name.as_ref().map_or("", |name| name.text.as_str())
}

/// Whether a name is an ion, a form, a molecule, a group, or the header's name of a substance.
fn is_known(name: &Reference) -> bool {
    let names = &built_in().names;
    let is_group = names.named(Namespace::Danger, &name.key).iter().any(|one| matches!(one.block.body, Body::Group(_)));
    let is_substance = names.named(Namespace::Ingredient, &name.key).iter().any(|one| one.key.name == name.key);
    is_group || is_substance || name.key.as_str() == "water" || built_in().constituents.named(&name.key).is_some()
}

#[test]
fn every_name_is_known() {
    let mut unknown = Vec::new();
    for block in blocks() {
        let names: Vec<&Reference> = match &block.body {
            Body::Danger(danger) => danger.sides.iter().flat_map(|side| &side.names).collect(),
            Body::Group(group) => group.holds.iter().collect(),
            _ => continue,
        };
        assert!(!names.is_empty(), "{}", name_of(block));
        unknown.extend(names.into_iter().filter(|name| !is_known(name)).map(|name| format!("{}: {}", name_of(block), name.text)));
    }
    assert!(unknown.is_empty(), "{}", unknown.join("\n"));
}

#[test]
fn every_danger_says_what_why_and_from_where() {
    let mut together = 0;
    for block in blocks() {
        let Body::Danger(danger) = &block.body else { continue };
        let name = name_of(block);
        assert_eq!(block.findings, [], "{name}");
        let code = danger.raises.unwrap_or_else(|| panic!("{name} raises nothing"));
        assert!(danger.because.len() > 10 && !danger.because.ends_with('.'), "{name}");
        assert!(danger.advice.as_ref().is_some_and(|advice| advice.ends_with('.')), "{name}");
        assert!(danger.source.is_some(), "{name}");
        assert_eq!(code == Code::DoesNotKeep, !danger.keeps.is_empty(), "{name}");
        together += usize::from(matches!(code, Code::DangerousTogether | Code::ToxicGasFromAcid | Code::ReactsTogether));
    }
    assert!(together >= 40, "{together}");
}
