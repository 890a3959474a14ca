//! The edited lines between two states, each with what it takes to make it in the old texts alone.

use std::collections::BTreeMap;

use super::align::align;
use super::changes::{header, is_renamed};
use super::pairs::{Pair, block_at, body};
use crate::model::Block;
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, Span};
use crate::workspace::{CONFIGURATION_FILE, Configuration, FileState, Snapshot};

/// An edited line.
#[derive(Clone, Debug, PartialEq)]
pub struct Edit {
    /// What was done.
    pub kind: EditKind,
    /// To whose line.
    pub owner: Owner,
    /// The line as it was.
    pub old: Option<EditedLine>,
    /// The line as it is.
    pub new: Option<EditedLine>,
}

/// What was done to a line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EditKind {
    /// Its words changed.
    Changed,
    /// It is new.
    Added,
    /// It is gone.
    Removed,
    /// It stands elsewhere in its block.
    Moved,
    /// A `scruple.toml` changed in something that values depend on.
    Setting,
}

/// Whose line it is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Owner {
    /// The kind of block; none for a `scruple.toml`.
    pub kind: Option<BlockKind>,
    /// Its name now, or the path of the file.
    pub name: String,
    /// Where the block stands in the old state.
    pub at: Option<(FileId, usize)>,
}

/// A line in its file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct EditedLine {
    /// The path of the file.
    pub path: camino::Utf8PathBuf,
    /// The line, counted from 1.
    pub line: usize,
    /// Its words, without comment.
    pub words: String,
}

/// An edit with what it takes to make it.
#[derive(Clone, Debug)]
pub(super) struct Planned {
    pub edit: Edit,
    pub step: Step,
}

/// What it takes to make an edit in the old texts.
#[derive(Clone, Debug)]
pub(super) enum Step {
    /// Replacements in old files, which do not overlap.
    Texts(Vec<(FileId, Span, String)>),
    /// Another configuration for a root.
    Configuration(camino::Utf8PathBuf, Configuration),
}

/// The edited lines of all definitions that are in both states, in the order of the new places; settings last.
pub(super) fn edits(pairs: &[Pair], old: &Snapshot, new: &Snapshot) -> Vec<Planned> {
    let mut edits = Vec::new();
    for pair in pairs {
        let (Some(before), Some(now)) = (pair.old, pair.new) else { continue };
        let files = old.files.get(&before.0).zip(new.files.get(&now.0));
        let blocks = block_at(old, before).zip(block_at(new, now));
        if let (Some((old_file, new_file)), Some((old_block, new_block))) = (files, blocks) {
            let sides = Sides { old_file, new_file, old_block, new_block, before, now };
            of_block(&sides, &mut edits);
        }
    }
    for (path, root) in &new.roots {
        let Some(before) = old.roots.get(path).map(|root| &root.configuration) else { continue };
        let now = &root.configuration;
        // Levels change words, not values.
        if before.settings != now.settings || before.lab != now.lab {
            let line = EditedLine { path: path.join(CONFIGURATION_FILE), line: 1, words: String::new() };
            let owner = Owner { kind: None, name: CONFIGURATION_FILE.to_owned(), at: None };
            let edit = Edit { kind: EditKind::Setting, owner, old: Some(line.clone()), new: Some(line) };
            edits.push(Planned { edit, step: Step::Configuration(path.clone(), now.as_ref().clone()) });
        }
    }
    edits
}

/// A definition on both sides.
struct Sides<'a> {
    old_file: &'a FileState,
    new_file: &'a FileState,
    old_block: &'a Block,
    new_block: &'a Block,
    before: (FileId, usize),
    now: (FileId, usize),
}

fn of_block(sides: &Sides, edits: &mut Vec<Planned>) {
    let (olds, news) = (body(sides.old_block), body(sides.new_block));
    let texts = |lines: &[(usize, String)]| lines.iter().map(|(_, words)| words.clone()).collect::<Vec<_>>();
    let (old_words, new_words) = (texts(&olds), texts(&news));
    if old_words == new_words {
        return;
    }
    let name = sides.new_block.name.as_ref().map(|name| name.text.clone()).unwrap_or_default();
    let owner = Owner { kind: sides.new_block.kind(), name, at: Some(sides.before) };
    // Where in the old block a line goes that has no partner there: below the last one that has.
    let mut below = 0;
    let first = edits.len();
    for (one, other) in align(&old_words, &new_words) {
        let old_line = one.and_then(|at| olds.get(at));
        let new_line = other.and_then(|at| news.get(at));
        let (kind, change) = match (old_line, new_line) {
            (Some((index, before)), Some((new_index, now))) => {
                below = below.max(*index);
                if before == now {
                    continue;
                }
                (EditKind::Changed, (whole(sides, *index), text_of(sides, *new_index)))
            }
            (Some((index, _)), None) => {
                (EditKind::Removed, (whole(sides, *index), String::new()))
            }
            (None, Some((new_index, _))) => {
                let at = sides.old_file.line_start(first_line(sides.old_file, sides.before.1) + below + 1);
                (EditKind::Added, (Span::empty(at), text_of(sides, *new_index)))
            }
            (None, None) => continue,
        };
        let place = |file: &FileState, block: usize, line: Option<&(usize, String)>| {
            line.map(|(index, words)| EditedLine { path: file.path.clone(), line: number(file, block, *index), words: words.clone() })
        };
        let edit = Edit {
            kind,
            owner: owner.clone(),
            old: place(sides.old_file, sides.before.1, old_line),
            new: place(sides.new_file, sides.now.1, new_line),
        };
        edits.push(Planned { edit, step: Step::Texts(vec![(sides.before.0, change.0, change.1)]) });
    }
    join_moved(first, edits);
}

/// A line that went at one place and came at another one has moved: one edit, not two.
fn join_moved(first: usize, edits: &mut Vec<Planned>) {
    let mut gone = Vec::new();
    for at in first..edits.len() {
        let Some(added) = edits.get(at).filter(|planned| planned.edit.kind == EditKind::Added) else { continue };
        let words = added.edit.new.as_ref().map(|line| line.words.clone());
        let partner = edits.iter().enumerate().skip(first).find(|(other, planned)| {
            !gone.contains(other) && planned.edit.kind == EditKind::Removed && planned.edit.old.as_ref().map(|line| line.words.clone()) == words
        });
        let Some((partner, removed)) = partner.map(|(index, planned)| (index, planned.clone())) else { continue };
        if let Some(added) = edits.get_mut(at) {
            added.edit.kind = EditKind::Moved;
            added.edit.old = removed.edit.old;
            if let (Step::Texts(texts), Step::Texts(more)) = (&mut added.step, removed.step) {
                texts.extend(more);
            }
        }
        gone.push(partner);
    }
    gone.sort_unstable();
    gone.into_iter().rev().for_each(|index| {
        edits.remove(index);
    });
}

fn first_line(file: &FileState, block: usize) -> usize {
    file.model.first_lines.get(block).copied().unwrap_or(0)
}

/// The bytes of a line of the old block, with its line break.
fn whole(sides: &Sides, index: usize) -> Span {
    let line = first_line(sides.old_file, sides.before.1) + index;
    Span::new(sides.old_file.line_start(line), sides.old_file.line_start(line + 1))
}

/// A line of the new block, ended by a line break.
fn text_of(sides: &Sides, index: usize) -> String {
    let text = sides.new_block.lines.get(index).map_or("", |line| line.text.as_str());
    format!("{}\n", text.trim_end_matches(['\n', '\r']))
}

/// The line of a file, counted from 1, on which a line of a block begins.
fn number(file: &FileState, block: usize, index: usize) -> usize {
    1 + file.source.line_of(file.line_start(first_line(file, block) + index))
}

/// What the new state adds to the old one without changing what is there: new definitions, names under which known ones are
/// now called, and `use` lines. Lines that are tried out alone may name them.
pub(super) fn additions(pairs: &[Pair], old: &Snapshot, new: &Snapshot) -> (Vec<(FileId, Span, String)>, BTreeMap<FileId, String>) {
    let mut texts = Vec::new();
    let mut files: BTreeMap<FileId, String> = BTreeMap::new();
    for (id, file) in &new.files {
        match old.files.get(id) {
            Some(before) => {
                for line in file.model.uses.iter().filter(|line| !before.model.uses.iter().any(|other| other.path == line.path)) {
                    texts.push((*id, Span::empty(0), format!("use \"{}\"\n", line.path)));
                }
            }
            None => {
                let head = file.model.blocks.first().map(|block| text(block, None)).unwrap_or_default();
                files.insert(*id, head);
            }
        }
    }
    for pair in pairs {
        let Some((file, _)) = pair.new else { continue };
        let Some(now) = pair.new.and_then(|at| block_at(new, at)) else { continue };
        let added = match pair.old.and_then(|at| Some((at.0, block_at(old, at)?))) {
            None => Some((file, text(now, None))),
            Some((home, before)) if is_renamed(before, now) => Some((home, text(before, Some(&header(now))))),
            Some(_) => None,
        };
        let Some((home, added)) = added else { continue };
        match (files.get_mut(&home), old.files.get(&home)) {
            (Some(whole), _) => whole.push_str(&added),
            (None, Some(before)) => texts.push((home, Span::empty(before.source.len()), format!("\n{added}"))),
            (None, None) => {}
        }
    }
    (texts, files)
}

/// The text of a block, with another header where one is given.
fn text(block: &Block, header: Option<&str>) -> String {
    let lines = block.lines.iter().enumerate().map(|(index, line)| match header {
        Some(header) if index == 0 => header.to_owned(),
        _ => line.text.trim_end_matches(['\n', '\r']).to_owned(),
    });
    lines.map(|line| format!("{line}\n")).collect()
}

/// A text with replacements, which do not overlap.
pub(super) fn applied(source: &str, replacements: &[(Span, &str)]) -> String {
    let mut ordered: Vec<&(Span, &str)> = replacements.iter().collect();
    ordered.sort_by_key(|(span, _)| (span.start, span.end));
    let mut text = String::with_capacity(source.len() + 256);
    let mut at = 0;
    for (span, replacement) in ordered {
        text.push_str(source.get(at..span.start).unwrap_or_default());
        if !replacement.is_empty() && span.start > 0 && !text.ends_with('\n') {
            text.push('\n');
        }
        text.push_str(replacement);
        at = span.end;
    }
    text.push_str(source.get(at..).unwrap_or_default());
    text
}

/// Whether a line is one of those that values cannot depend on; it is still an edited line.
pub(super) fn is_prose(line: &EditedLine) -> bool {
    ["step ", "note ", "document ", "accept "].iter().any(|word| line.words.starts_with(word))
}
