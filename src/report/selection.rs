//! What a report speaks of: some files of a snapshot, under the names by which the reader's folder knows them.

use std::collections::BTreeSet;
use std::sync::Arc;

use camino::Utf8PathBuf;

use crate::evaluate::Member;
use crate::finding::{Anchor, Level};
use crate::model::{Block, Constituents, DefinitionKey, NameKey, Recipe};
use crate::text::{Columns, FileId, Position, Span};
use crate::workspace::{Checked, FileState, Located, Origin, Snapshot};

/// Some files of a snapshot.
#[derive(Clone, Debug)]
pub struct Selection {
    /// Everything that is known.
    pub snapshot: Arc<Snapshot>,
    /// The files that the report speaks of, in the order of their names.
    files: Vec<FileId>,
    /// The folder from which files are named.
    base: Utf8PathBuf,
    /// The blocks that the report speaks of, where it does not speak of all.
    only: Option<BTreeSet<(FileId, usize)>>,
}

/// One solution of the selection, or one member of a series.
#[derive(Clone, Copy)]
pub struct Subject<'a> {
    /// The selection that it belongs to.
    pub selection: &'a Selection,
    /// Its file.
    pub file: &'a FileState,
    /// Index of its block in the file.
    pub index: usize,
    /// Its block.
    pub block: &'a Block,
    /// Its lines as the language means them, those of a solution that it is `like` among them.
    pub recipe: &'a Recipe,
    /// What is known of the block.
    pub checked: &'a Checked,
    /// Which member of a series it is; 0 otherwise.
    pub member_index: usize,
    /// The member.
    pub member: &'a Member,
}

impl Selection {
    /// These files of a snapshot. `base` is the folder from which the reader looks; it is absolute.
    pub fn new(snapshot: Arc<Snapshot>, files: impl IntoIterator<Item = FileId>, base: Utf8PathBuf) -> Self {
        let mut files: Vec<FileId> = files.into_iter().collect();
        files.sort_by_key(|id| (snapshot.file(*id).map(|file| file.path.clone()), *id));
        files.dedup();
        Selection { snapshot, files, base, only: None }
    }

    /// The same files, of which only these blocks are spoken of.
    pub fn only(mut self, blocks: BTreeSet<(FileId, usize)>) -> Self {
        self.files.retain(|file| blocks.range((*file, 0)..=(*file, usize::MAX)).next().is_some());
        self.only = Some(blocks);
        self
    }

    /// The same, named from another folder, which is absolute.
    pub fn named_from(&self, base: &camino::Utf8Path) -> Self {
        Selection { base: base.to_owned(), ..self.clone() }
    }

    /// Whether the report speaks of a block.
    fn has(&self, file: FileId, block: usize) -> bool {
        self.only.as_ref().is_none_or(|only| only.contains(&(file, block)))
    }

    /// The files, in the order of their paths.
    pub fn files(&self) -> impl Iterator<Item = &FileState> {
        self.files.iter().filter_map(|id| self.snapshot.file(*id)).map(Arc::as_ref)
    }

    /// A path as the reader writes it: from the base where it lies below, whole otherwise, with forward slashes.
    pub fn name(&self, path: &camino::Utf8Path) -> String {
        path.strip_prefix(&self.base).unwrap_or(path).as_str().replace('\\', "/")
    }

    /// A file as the reader knows it; those of the built-in library say so.
    pub fn file_name(&self, file: &FileState) -> String {
        match file.origin {
            Origin::BuiltIn => format!("built-in library/{}", file.path),
            _ => self.name(&file.path),
        }
    }

    /// Every finding of the files, in the order of files and places.
    pub fn findings(&self) -> impl Iterator<Item = (&FileState, &Located)> {
        self.files().flat_map(|file| {
            let of_file = self.snapshot.findings(file.id).iter();
            of_file.filter(|located| self.has(file.id, located.block)).map(move |located| (file, located))
        })
    }

    /// How many findings there are of a level.
    pub fn count(&self, level: Level) -> usize {
        self.findings().filter(|(_, located)| located.finding.level == level).count()
    }

    /// How many solutions there are; a series counts once.
    pub fn solution_count(&self) -> usize {
        self.solutions().filter(|subject| subject.member_index == 0).count()
    }

    /// Every solution of the files, in the order of files and lines; one for each member of a series.
    pub fn solutions(&self) -> impl Iterator<Item = Subject<'_>> {
        self.files().flat_map(move |file| {
            let blocks = file.model.blocks.iter().enumerate().filter(move |(index, _)| self.has(file.id, *index));
            blocks.flat_map(move |(index, block)| self.members(file, index, block))
        })
    }

    fn members<'a>(&'a self, file: &'a FileState, index: usize, block: &'a Block) -> impl Iterator<Item = Subject<'a>> {
        let recipe = match &block.body {
            crate::model::Body::Solution(recipe) => Some(recipe),
            _ => None,
        };
        let checked = self.snapshot.checked(file.id, index).map(Arc::as_ref);
        recipe.zip(checked).into_iter().flat_map(move |(recipe, checked)| {
            checked.evaluation.members.iter().enumerate().map(move |(member_index, member)| Subject {
                selection: self,
                file,
                index,
                block,
                recipe: checked.evaluation.recipe.as_deref().unwrap_or(recipe),
                checked,
                member_index,
                member,
            })
        })
    }

    /// The name in the header of a definition.
    pub fn defined_name(&self, key: &DefinitionKey) -> Option<&str> {
        let (file, block) = self.snapshot.locate(key)?;
        let block = self.snapshot.file(file)?.model.blocks.get(block)?;
        block.name.as_ref().map(|name| name.text.as_str())
    }

    /// The block of a definition.
    pub fn definition(&self, key: &DefinitionKey) -> Option<&Arc<Block>> {
        let (file, block) = self.snapshot.locate(key)?;
        self.snapshot.file(file)?.model.blocks.get(block)
    }
}

impl<'a> Subject<'a> {
    /// The line of a place in the block, counted from 1.
    pub fn line(&self, at: Anchor) -> usize {
        1 + self.position(self.file.absolute(self.index, at).start).line
    }

    /// The line on which the solution's header stands, counted from 1.
    pub fn header_line(&self) -> usize {
        self.line(self.block.header_anchor())
    }

    /// File and line of the header, as the reader knows them.
    pub fn place(&self) -> String {
        format!("{}, line {}", self.selection.name(&self.file.path), self.header_line())
    }

    /// The chemistry of the root that the file belongs to, with its names.
    pub fn constituents(&self) -> Arc<Constituents> {
        self.selection.snapshot.constituents(self.file.id)
    }

    fn position(&self, offset: usize) -> Position {
        self.file.source.position(offset, Columns::Characters)
    }

    /// Characters of a logical line of the block as written, white space run together.
    pub fn written(&self, line: usize, span: Span) -> String {
        let text = self.block.lines.get(line).map_or("", |line| span.of(&line.text));
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    /// Whether a line was taken over from the solution that this one is `like`: its words stand in another block.
    pub fn is_taken_over(&self, at: Anchor) -> bool {
        self.recipe.is_taken_over(at)
    }

    /// The findings of the solution's block.
    pub fn findings(&self) -> impl Iterator<Item = &'a Located> {
        let index = self.index;
        self.selection.snapshot.findings(self.file.id).iter().filter(move |located| located.block == index)
    }

    /// Whether the solution is called so; a member also answers to the name of its series.
    pub fn is_called(&self, name: &NameKey) -> bool {
        NameKey::new(&self.member.name) == *name || self.block.name.as_ref().is_some_and(|own| own.key == *name)
    }
}
