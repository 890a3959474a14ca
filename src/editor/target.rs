//! What stands under the cursor, and what it means: the one place where a name at an offset is resolved.

use std::sync::Arc;

use super::cursor::{Cursor, block_span};
use super::names::{NameUse, names};
use crate::evaluate;
use crate::finding::Code;
use crate::model::{Block, DefinedName, Definition, DefinitionKey, Lookup, NameKey, Namespace, namespace};
use crate::syntax::tree::{Statement, Token, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Snapshot};

/// A thing that the cursor can point at.
#[derive(Clone, Debug)]
pub enum Thing<'a> {
    /// The name that the block defines, in its header or after `also`.
    Definition(&'a Arc<Block>),
    /// A name that refers to something: the definitions that it can mean, none where it is unknown.
    Name {
        /// The name.
        name: NameUse<'a>,
        /// What it can mean.
        definitions: Vec<Definition>,
    },
    /// The path of a `use` line, and the file that it leads to.
    Path(Option<FileId>),
    /// A finding's code.
    Code(Code),
    /// A chemical formula, as written.
    Formula(&'a str),
    /// A number or a unit.
    Quantity,
    /// A property of `expect` or of a target.
    Property,
    /// A word of the language.
    Word,
}

/// A thing and the characters that it takes up.
#[derive(Clone, Debug)]
pub struct Target<'a> {
    /// Where the cursor stands.
    pub cursor: Cursor<'a>,
    /// The thing's characters in the file.
    pub span: Span,
    /// The thing.
    pub thing: Thing<'a>,
}

/// What stands at an offset; nothing in blanks, comments and free text.
pub fn target(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<Target<'_>> {
    let cursor = Cursor::new(snapshot, file, offset)?;
    let token = cursor.token()?;
    let thing = thing(snapshot, &cursor, token)?;
    let span = match &thing {
        Thing::Name { name, .. } => name.name.span,
        _ => token.span,
    };
    Some(Target { cursor, span: cursor.absolute(span), thing })
}

fn thing<'a>(snapshot: &'a Snapshot, cursor: &Cursor<'a>, token: Token) -> Option<Thing<'a>> {
    let text = cursor.text(token.span);
    Some(match token.kind {
        TokenKind::Definition => match name_at(snapshot, cursor, token.span) {
            // The name of a complex or of a form defines and refers at once.
            Some(name) => name,
            None => Thing::Definition(cursor.block),
        },
        TokenKind::Name => match name_at(snapshot, cursor, token.span) {
            Some(name) => name,
            None if matches!(cursor.statement()?, Statement::Also(_)) => Thing::Definition(cursor.block),
            None => return None,
        },
        TokenKind::Path => Thing::Path(use_at(snapshot, cursor)),
        TokenKind::Code => Thing::Code(Code::from_name(text)?),
        TokenKind::Formula => Thing::Formula(text),
        TokenKind::Number | TokenKind::Unit => Thing::Quantity,
        TokenKind::Property => Thing::Property,
        TokenKind::Keyword | TokenKind::Operator => Thing::Word,
        TokenKind::Separator | TokenKind::Text | TokenKind::Comment | TokenKind::Bad | TokenKind::Missing(_) => return None,
    })
}

fn name_at<'a>(snapshot: &'a Snapshot, cursor: &Cursor<'a>, span: Span) -> Option<Thing<'a>> {
    let name = names(cursor.statement()?, cursor.block.kind())
        .into_iter()
        .find(|name| name.name.span.start <= span.start && span.end <= name.name.span.end)?;
    Some(Thing::Name { name, definitions: meanings(snapshot, cursor.file.id, &name) })
}

/// The definitions that a name on a line of a file can mean.
pub fn meanings(snapshot: &Snapshot, file: FileId, name: &NameUse) -> Vec<Definition> {
    let key = NameKey::new(&name.name.text);
    let look = |namespace| find(snapshot, file, namespace, &key, &name.name.text, name.pure_is_meant);
    let found = look(name.namespace);
    match name.fallback {
        Some(fallback) if found.is_empty() => look(fallback),
        _ => found,
    }
}

/// The definitions that a name can mean in a namespace.
pub fn find(
    snapshot: &Snapshot,
    file: FileId,
    namespace: Namespace,
    key: &NameKey,
    written: &str,
    pure_is_meant: bool,
) -> Vec<Definition> {
    if namespace == Namespace::Constituent {
        // Forms of an ion bear names of their own, and molecules are defined by substances.
        let constituents = snapshot.constituents(file);
        if let Some(definition) = constituents.named(key).and_then(|constituent| constituent.definition.as_ref()) {
            return definition_of(snapshot, definition).into_iter().collect();
        }
    }
    let scope = snapshot.scope(file);
    let found = match namespace {
        Namespace::Ingredient => evaluate::meaning(key, written, pure_is_meant, &scope),
        _ => scope.find(namespace, key, written),
    };
    match found {
        Lookup::One(definition) => vec![definition.clone()],
        Lookup::Several(definitions) => definitions.into_iter().cloned().collect(),
        Lookup::Nothing => Vec::new(),
    }
}

/// The definition that a key stands for.
pub fn definition_of(snapshot: &Snapshot, key: &DefinitionKey) -> Option<Definition> {
    let (file, block) = snapshot.locate(key)?;
    let block = snapshot.file(file)?.model.blocks.get(block)?;
    Some(Definition { key: key.clone(), block: block.clone() })
}

/// The definition that a block is.
pub fn defined_by(file: &FileState, block: &Arc<Block>) -> Option<Definition> {
    let (kind, name) = block.kind().zip(block.name.as_ref())?;
    let key = DefinitionKey { file: file.id, namespace: namespace(kind), name: name.key.clone() };
    Some(Definition { key, block: block.clone() })
}

/// Where a definition stands: its file and the index of its block.
pub fn locate<'a>(snapshot: &'a Snapshot, definition: &Definition) -> Option<(&'a Arc<FileState>, usize)> {
    let file = snapshot.file(definition.key.file)?;
    // A bottle and a substance of one file may share a key; the block itself tells them apart.
    let itself = file.model.blocks.iter().position(|block| Arc::ptr_eq(block, &definition.block));
    let block = itself.or_else(|| snapshot.locate(&definition.key).map(|(_, block)| block))?;
    Some((file, block))
}

/// The name in the header of a definition and the whole block, in their file.
pub fn place(snapshot: &Snapshot, definition: &Definition) -> Option<(FileId, Span, Span)> {
    let (file, block) = locate(snapshot, definition)?;
    Some((file.id, file.absolute(block, definition.block.header_anchor()), block_span(file, block)))
}

/// The spelling of a definition that a key is: the header's name or another one.
pub fn spelling<'a>(definition: &'a Definition, key: &NameKey) -> Option<&'a DefinedName> {
    definition.block.name.iter().chain(&definition.block.also).find(|name| name.key == *key)
}

/// The file that the `use` line under the cursor leads to.
fn use_at(snapshot: &Snapshot, cursor: &Cursor) -> Option<FileId> {
    let used = cursor
        .file
        .model
        .uses
        .iter()
        .find(|used| used.block == cursor.block_index && used.path_at.line == cursor.line_index)?;
    used_file(snapshot, cursor.file, &used.path)
}

/// The file that a path written in a file leads to.
pub fn used_file(snapshot: &Snapshot, from: &FileState, path: &str) -> Option<FileId> {
    let folder = from.path.parent()?;
    let mut joined = folder.to_owned();
    for part in path.split('/') {
        match part {
            "" | "." => {}
            ".." => {
                joined.pop();
            }
            part => joined.push(part),
        }
    }
    let found = snapshot.file_by_path(&joined)?;
    (found.root == from.root).then_some(found.id)
}
