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

