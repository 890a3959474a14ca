//! Everything known at one moment, immutable: texts, trees, meanings, states and findings travel together, so that no
//! answer mixes a new text with old places.

use std::collections::{BTreeMap, HashMap};
use std::sync::Arc;

use camino::{Utf8Path, Utf8PathBuf};

use super::Configuration;
use crate::evaluate::{Context, Evaluation};
use crate::finding::{Anchor, EditPlace, Finding, Place};
use crate::library;
use crate::model::{Block, Constituents, DefinitionKey, File, Lab, Namespace, Scope};
use crate::syntax::tree::Tree;
use crate::text::{FileId, SourceText, Span};

/// Where a file's text comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Origin {
    /// It is open in an editor.
    Editor,
    /// It was read from disk.
    Disk,
    /// It belongs to the built-in library.
    BuiltIn,
    /// It is there but cannot be read; the sentence says why.
    Unreadable(String),
}

/// A file with everything that was derived from its text.
#[derive(Clone, Debug)]
pub struct FileState {
    /// Its number.
    pub id: FileId,
    /// Its absolute path; for a library file its name.
    pub path: Utf8PathBuf,
    /// The root that it belongs to.
    pub root: Utf8PathBuf,
    /// Where the text comes from.
    pub origin: Origin,
    /// The text.
    pub source: Arc<SourceText>,
    /// Its tree.
    pub tree: Arc<Tree>,
    /// Its meaning.
    pub model: Arc<File>,
}

impl FileState {
    /// The path from the root, with forward slashes, as reports show it.
    pub fn shown_path(&self) -> String {
        let path = self.path.strip_prefix(&self.root).unwrap_or(&self.path);
        path.as_str().replace('\\', "/")
    }

    /// Where a logical line of the tree begins in the text.
    pub fn line_start(&self, index: usize) -> usize {
        self.tree.lines.get(index).map_or(self.source.len(), |placed| placed.start)
    }

    /// A place within a block, as a place in the file.
    pub fn absolute(&self, block: usize, anchor: Anchor) -> Span {
        let first = self.model.first_lines.get(block).copied().unwrap_or(0);
        anchor.span.shifted(self.line_start(first + anchor.line))
    }

    /// The logical line that holds an offset, as its index in the tree.
    pub fn line_at(&self, offset: usize) -> usize {
        self.tree.lines.partition_point(|placed| placed.start <= offset).saturating_sub(1)
    }

    /// The block that holds a logical line: its index, and the line's index within it.
    pub fn block_of_line(&self, line: usize) -> (usize, usize) {
        let next = self.model.first_lines.partition_point(|first| *first <= line);
        // Where the head is empty, it and the first block begin on the same line; the last of them holds it.
        let block = next.saturating_sub(1);
        (block, line.saturating_sub(self.model.first_lines.get(block).copied().unwrap_or(0)))
    }

    /// The block and the place in it that hold an offset.
    pub fn anchor_at(&self, offset: usize) -> Option<(usize, &Arc<Block>, Anchor)> {
        let line = self.line_at(offset);
        let (index, in_block) = self.block_of_line(line);
        let block = self.model.blocks.get(index)?;
        let within = offset.saturating_sub(self.line_start(line));
        Some((index, block, Anchor::new(in_block, Span::empty(within))))
    }
}

/// What is known of one block beyond its own lines.
#[derive(Clone, Debug)]
pub struct Checked {
    /// Its evaluation, where it is a solution or a bottle.
    pub evaluation: Arc<Evaluation>,
    /// Every finding of the block for itself, lowering and advice included, before any is accepted.
    pub findings: Arc<Vec<Finding>>,
}

/// A finding in its file.
#[derive(Clone, Debug)]
pub struct Located {
    /// Where it stands.
    pub span: Span,
    /// Which block of the file it belongs to.
    pub block: usize,
    /// The finding, at the level that the configuration gives it.
    pub finding: Finding,
}

/// One library of recipes.
#[derive(Clone, Debug)]
pub struct RootView {
    /// Its folder.
    pub path: Utf8PathBuf,
    /// What its `scruple.toml` says.
    pub configuration: Arc<Configuration>,
    /// Its chemistry.
    pub constituents: Arc<Constituents>,
}

/// Everything known at one moment.
#[derive(Debug, Default)]
pub struct Snapshot {
    /// The files by number; those of the built-in library are not among them.
    pub files: BTreeMap<FileId, Arc<FileState>>,
    /// The roots by folder.
    pub roots: BTreeMap<Utf8PathBuf, Arc<RootView>>,
    pub(super) scopes: HashMap<FileId, Scope>,
    pub(super) checked: HashMap<(FileId, usize), Arc<Checked>>,
    pub(super) findings: HashMap<FileId, Arc<Vec<Located>>>,
    pub(super) inputs: HashMap<(FileId, usize), super::build::Inputs>,
    pub(super) users: HashMap<DefinitionKey, Vec<(FileId, usize)>>,
    pub(super) remembered: HashMap<(FileId, usize), Arc<super::Remembered>>,
    pub(super) library_files: BTreeMap<FileId, Arc<FileState>>,
}

impl Snapshot {
    /// A file by number, of the user or of the built-in library.
    pub fn file(&self, id: FileId) -> Option<&Arc<FileState>> {
        self.files.get(&id).or_else(|| self.library_files.get(&id))
    }

    /// A file by its absolute path.
    pub fn file_by_path(&self, path: &Utf8Path) -> Option<&Arc<FileState>> {
        self.files.values().find(|file| file.path == path)
    }

    /// The files of the built-in library.
    pub fn library_files(&self) -> impl Iterator<Item = &Arc<FileState>> {
        self.library_files.values()
    }

    /// The files that the `use` lines of a file lead to and that are there.
    pub fn files_used_by(&self, file: FileId) -> Vec<FileId> {
        let paths = self.files.get(&file).into_iter().flat_map(|file| super::build::used_paths(file));
        paths.filter_map(|path| self.file_by_path(&path)).map(|file| file.id).collect()
    }

    /// The root that a file belongs to.
    pub fn root(&self, file: FileId) -> Option<&Arc<RootView>> {
        self.roots.get(&self.files.get(&file)?.root)
    }

    /// The names visible from a file.
    pub fn scope(&self, file: FileId) -> Scope {
        self.scopes.get(&file).cloned().unwrap_or_else(|| Scope {
            own: Arc::default(),
            built_in: library::built_in().names.clone(),
        })
    }

    /// The chemistry that holds for a file.
    pub fn constituents(&self, file: FileId) -> Arc<Constituents> {
        self.root(file).map_or_else(|| library::built_in().constituents.clone(), |root| root.constituents.clone())
    }

    /// What is known of a block.
    pub fn checked(&self, file: FileId, block: usize) -> Option<&Arc<Checked>> {
        self.checked.get(&(file, block))
    }

    /// What a solution that has no values now came to before the mistake in it.
    pub fn remembered(&self, file: FileId, block: usize) -> Option<&Arc<super::Remembered>> {
        self.remembered.get(&(file, block))
    }

    /// The evaluation of a definition.
    pub fn evaluation(&self, key: &DefinitionKey) -> Option<&Arc<Evaluation>> {
        let (file, block) = self.locate(key)?;
        self.checked(file, block).map(|checked| &checked.evaluation)
    }

    /// The findings of a file, in the order of their places.
    pub fn findings(&self, file: FileId) -> &[Located] {
        self.findings.get(&file).map_or(&[], |findings| findings.as_slice())
    }

    /// Where a definition stands: its file and the index of its block.
    pub fn locate(&self, key: &DefinitionKey) -> Option<(FileId, usize)> {
        let file = self.file(key.file)?;
        let block = file.model.blocks.iter().position(|block| {
            block.name.as_ref().is_some_and(|name| name.key == key.name)
                && block.kind().is_some_and(|kind| crate::model::namespace(kind) == key.namespace)
        })?;
        Some((key.file, block))
    }

    /// The blocks that name a definition, of the user's files.
    pub fn users_of(&self, key: &DefinitionKey) -> &[(FileId, usize)] {
        self.users.get(key).map_or(&[], Vec::as_slice)
    }

    /// A related place as file and span.
    pub fn place(&self, file: FileId, block: usize, place: &Place) -> Option<(FileId, Span)> {
        match place {
            Place::Here(anchor) => Some((file, self.file(file)?.absolute(block, *anchor))),
            Place::Block { file, key, anchor } => {
                let state = self.file(*file)?;
                let block = state
                    .model
                    .blocks
                    .iter()
                    .position(|block| block.name.as_ref().is_some_and(|name| name.key.as_str() == key))?;
                Some((*file, state.absolute(block, *anchor)))
            }
        }
    }

    /// An edit of a finding's fix as a replacement in the finding's file.
    pub fn edit(&self, file: FileId, block: usize, edit: &crate::finding::Edit) -> Option<(Span, String)> {
        let state = self.file(file)?;
        let first = state.model.first_lines.get(block).copied().unwrap_or(0);
        let line_break = if state.source.as_str().contains("\r\n") { "\r\n" } else { "\n" };
        let below = |line: usize| {
            let at = state.line_start(line + 1);
            let is_open = at > 0 && !state.source.as_str().get(..at).unwrap_or_default().ends_with(['\n', '\r']);
            (at, is_open)
        };
        Some(match edit.place {
            EditPlace::Here(anchor) => (state.absolute(block, anchor), edit.text.clone()),
            EditPlace::LineBelow(line) => {
                let (at, is_open) = below(first + line);
                let before = if is_open { line_break } else { "" };
                (Span::empty(at), format!("{before}{}{line_break}", edit.text))
            }
            EditPlace::WholeLine(line) => {
                (Span::new(state.line_start(first + line), state.line_start(first + line + 1)), String::new())
            }
            EditPlace::FileHead => {
                let last_use = state.model.uses.iter().map(|used| {
                    state.model.first_lines.get(used.block).copied().unwrap_or(0) + used.at.line
                });
                match last_use.max() {
                    Some(line) => {
                        let (at, is_open) = below(line);
                        let before = if is_open { line_break } else { "" };
                        (Span::empty(at), format!("{before}{}{line_break}", edit.text))
                    }
                    None => (Span::empty(0), format!("{}{line_break}{line_break}", edit.text)),
                }
            }
        })
    }

    /// Calls `f` with everything that a block of a file is evaluated with.
    pub fn with_context<T>(&self, file: FileId, block: usize, f: impl FnOnce(&Context) -> T) -> Option<T> {
        let root = self.root(file)?;
        let scope = self.scope(file);
        let recipe = self.file(file)?.model.blocks.get(block)?.recipe();
        let lab = super::build::lab_of(&self.scopes, file, recipe, &root.configuration);
        let stocks = |key: &DefinitionKey| self.evaluation(key).cloned();
        let lab: Option<&Lab> = lab.as_ref().and_then(|definition| match &definition.block.body {
            crate::model::Body::Lab(lab) => Some(lab),
            _ => None,
        });
        Some(f(&Context {
            constituents: &root.constituents,
            scope: &scope,
            scopes: &self.scopes,
            stocks: &stocks,
            lab,
            settings: &root.configuration.settings,
        }))
    }

    /// Every solution of the user's files in the order of files and lines: file, block index, block.
    pub fn solutions(&self) -> impl Iterator<Item = (&Arc<FileState>, usize, &Arc<Block>)> {
        let mut files: Vec<&Arc<FileState>> = self.files.values().collect();
        files.sort_by(|one, other| one.path.cmp(&other.path));
        files.into_iter().flat_map(|file| {
            file.model
                .blocks
                .iter()
                .enumerate()
                .filter(|(_, block)| matches!(block.body, crate::model::Body::Solution(_)))
                .map(move |(index, block)| (file, index, block))
        })
    }

    /// Whether the namespace of labs has a name, for completion.
    pub fn has_lab(&self, file: FileId) -> bool {
        self.scope(file).all().any(|(namespace, _, _)| namespace == Namespace::Lab)
    }
}
