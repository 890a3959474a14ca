//! Where the thing under the cursor is defined, the built-in library included.

use super::cursor::block_span;
use super::target::{Thing, locate, place, spelling, target};
use crate::finding::Anchor;
use crate::model::{Body, Definition, NameKey};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// A place to go to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Destination {
    /// The thing that the cursor pointed at.
    pub origin: Span,
    /// The file to open.
    pub file: FileId,
    /// The name to show, or the line of a form.
    pub name: Span,
    /// The whole block.
    pub whole: Span,
}

/// Where the thing at an offset is defined; several places where its name is ambiguous.
pub fn definition(snapshot: &Snapshot, file: FileId, offset: usize) -> Vec<Destination> {
    let Some(target) = target(snapshot, file, offset) else { return Vec::new() };
    let origin = target.span;
    match &target.thing {
        Thing::Definition(_) => vec![Destination {
            origin,
            file,
            name: origin,
            whole: block_span(target.cursor.file, target.cursor.block_index),
        }],
        Thing::Name { name, definitions } => {
            let key = NameKey::new(&name.name.text);
            definitions.iter().filter_map(|definition| destination(snapshot, origin, definition, &key)).collect()
        }
        Thing::Path(Some(used)) => vec![Destination { origin, file: *used, name: Span::empty(0), whole: Span::empty(0) }],
        _ => Vec::new(),
    }
}

fn destination(snapshot: &Snapshot, origin: Span, definition: &Definition, key: &NameKey) -> Option<Destination> {
    let (file, name, whole) = place(snapshot, definition)?;
    let name = match form(definition, key) {
        Some(anchor) => {
            let (state, block) = locate(snapshot, definition)?;
            state.absolute(block, anchor)
        }
        None => name,
    };
    Some(Destination { origin, file, name, whole })
}

/// The place in an ion's block that names a form of it: the `of NAME` of its constant, or a complex's name.
fn form(definition: &Definition, key: &NameKey) -> Option<Anchor> {
    let Body::Ion(ion) = &definition.block.body else { return None };
    if spelling(definition, key).is_some() {
        return None;
    }
    let forms = ion.pka.iter().filter_map(|constant| constant.of.as_ref());
    let complexes = ion.complexes.iter().filter_map(|complex| complex.named.as_ref());
    forms.chain(complexes).find(|reference| reference.key == *key).map(|reference| reference.at)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    /// The text of the name that is gone to, with its file.
    fn check(text: &str) -> Vec<String> {
        let fixture = fixture(text);
        let found = definition(&fixture.snapshot, fixture.file, fixture.offset);
        let show = |destination: &Destination| {
            let file = fixture.snapshot.file(destination.file).unwrap();
            assert!(destination.name.is_empty() || destination.whole.start <= destination.name.start && destination.name.end <= destination.whole.end);
            format!("{}: {}", file.shown_path().rsplit('/').next().unwrap(), destination.name.of(file.source.as_str()))
        };
        found.iter().map(show).collect()
    }

    #[test]
    fn names_lead_to_their_blocks() {
        assert_eq!(check("solution A\n    1 mL       Sto‸ck\n    q.s.       water to 1 L\n\nsolution Stock\n    q.s.       water to 1 L\n"), ["main.prep: Stock"]);
        assert_eq!(check("use \"stocks.prep\"\nsolution A\n    1 mL       Sto‸ck\n//- stocks.prep\n# Ours\nsolution Stock\n    q.s.       water to 1 L\n"), ["stocks.prep: Stock"]);
        assert_eq!(check("solution A\n    1 mL       Nothing ‸at all\n"), [] as [&str; 0]);
    }

    #[test]
    fn the_built_in_library_is_opened_too() {
        let salt = check("solution A\n    1 g        sodium chlor‸ide\n");
        assert!(matches!(salt.as_slice(), [one] if one.starts_with("substances-") && one.ends_with(": sodium chloride")), "{salt:?}");
        let form = check("solution A\n    1 g        water\n    expect     total dihydrogen phos‸phate at most 1 mol/L\n");
        assert!(matches!(form.as_slice(), [one] if one.starts_with("ions-") && one.ends_with(": dihydrogen phosphate")), "{form:?}");
    }

    #[test]
    fn a_path_leads_to_its_file() {
        assert_eq!(check("use \"stoc‸ks.prep\"\n//- stocks.prep\n# Ours\n"), ["stocks.prep: "]);
    }
}
