//! From tree to meaning: cuts a file into blocks and lowers each; a block whose lines are the same is not lowered again.

mod dangers;
mod data;
mod faults;
mod lab;
mod lines;
mod quantities;
mod solution;

use std::sync::Arc;

use super::block::{Block, BlockRole, Body, DefinedName, File, UseLine};
use super::{NameKey, Reference, Strength, StrengthKind};
use crate::finding::{Anchor, Code, Finding};
use crate::syntax::tree::{self, BlockKind, Content, Line, Slot, Statement, Tree};
use crate::text::{FileId, Span};

/// Lowers a file. Blocks of `previous` whose lines are the very same are taken over.
pub fn lower_file(id: FileId, tree: &Tree, previous: Option<&File>) -> File {
    let mut file = File { id, blocks: Vec::new(), first_lines: Vec::new(), uses: Vec::new() };
    let mut first = 0;
    for (role, length) in cut(tree) {
        let lines: Vec<Arc<Line>> =
            tree.lines.iter().skip(first).take(length).map(|placed| placed.line.clone()).collect();
        let reused = previous.and_then(|old| find_equal(old, file.blocks.len(), role, &lines));
        let block = reused.unwrap_or_else(|| Arc::new(lower_block(role, lines)));
        collect_uses(&block, file.blocks.len(), &mut file.uses);
        file.blocks.push(block);
        file.first_lines.push(first);
        first += length;
    }
    file
}

/// The blocks of a tree as role and number of logical lines; the head comes first even where it is empty.
fn cut(tree: &Tree) -> Vec<(BlockRole, usize)> {
    let mut blocks = vec![(BlockRole::Head, 0)];
    for placed in &tree.lines {
        let opened = match &placed.line.content {
            Content::Statement(Statement::Header(header)) => Some(BlockRole::Defines(header.kind)),
            // A mistyped header never pours its lines into the solution above.
            Content::Junk(_) if !placed.line.indented => Some(BlockRole::Nameless),
            _ => None,
        };
        match (opened, blocks.last_mut()) {
            (None, Some((_, length))) => *length += 1,
            (Some(role), _) => blocks.push((role, 1)),
            (None, None) => {}
        }
    }
    blocks
}

/// A block of the old file with the very same lines: first where the new one stands, then anywhere.
fn find_equal(old: &File, index: usize, role: BlockRole, lines: &[Arc<Line>]) -> Option<Arc<Block>> {
    let same = |block: &&Arc<Block>| {
        block.role == role
            && block.lines.len() == lines.len()
            && block.lines.iter().zip(lines).all(|(one, other)| Arc::ptr_eq(one, other) || one == other)
    };
    old.blocks.get(index).filter(same).or_else(|| old.blocks.iter().find(same)).cloned()
}

fn collect_uses(block: &Block, index: usize, uses: &mut Vec<UseLine>) {
    for (line, content) in block.lines.iter().enumerate() {
        if let Content::Statement(Statement::Use(Slot::Given(path))) = &content.content {
            uses.push(UseLine {
                block: index,
                at: Anchor::new(line, statement_span(content)),
                path: path.text.clone(),
                path_at: Anchor::new(line, path.span),
            });
        }
    }
}

/// From the first to the last character of a line's statement, comment and white space left out.
pub(super) fn statement_span(line: &Line) -> Span {
    let mut tokens = line.tokens.iter().filter(|token| token.kind != tree::TokenKind::Comment);
    match tokens.next() {
        Some(first) => tokens.fold(first.span, |span, token| span.to(token.span)),
        None => Span::empty(0),
    }
}

/// What lowering a block gathers.
struct Lowering {
    also: Vec<DefinedName>,
    findings: Vec<Finding>,
}

fn lower_block(role: BlockRole, lines: Vec<Arc<Line>>) -> Block {
    let mut lowering = Lowering { also: Vec::new(), findings: Vec::new() };
    for (index, line) in lines.iter().enumerate() {
        faults::report(index, line, &mut lowering.findings);
    }
    if role == BlockRole::Nameless {
        let span = lines.first().map_or(Span::empty(0), |line| statement_span(line));
        lowering.findings.push(
            Finding::new(
                Code::NamelessBlock,
                Anchor::new(0, span),
                "This line opens a block, but not one that can be read; the lines below it belong to nothing.",
            )
            .help("Begin the line with solution, bottle, substance, ion, solid, danger, group or lab, or indent it if it belongs to the block above."),
        );
    }
    let name = lines.first().and_then(|line| match &line.content {
        Content::Statement(Statement::Header(header)) => header.name.given().map(defined_name),
        _ => None,
    });
    let body = match role {
        BlockRole::Head => {
            lowering.misplaced(&lines, &role);
            lowering.edition(&lines);
            Body::None
        }
        BlockRole::Nameless => Body::None,
        BlockRole::Defines(kind) => {
            lowering.misplaced(&lines, &role);
            match kind {
                BlockKind::Solution => Body::Solution(lowering.recipe(kind, &lines)),
                BlockKind::Bottle => Body::Bottle(lowering.recipe(kind, &lines)),
                BlockKind::Substance => Body::Substance(lowering.substance(&lines)),
                BlockKind::Ion => Body::Ion(lowering.ion(&lines)),
                BlockKind::Solid => Body::Solid(lowering.solid(&lines)),
                BlockKind::Danger => Body::Danger(lowering.danger(&lines)),
                BlockKind::Group => Body::Group(lowering.group(&lines)),
                BlockKind::Lab => Body::Lab(lowering.lab(&lines)),
            }
        }
    };
    Block { role, name, also: lowering.also, lines, body, findings: lowering.findings }
}

fn defined_name(name: &tree::Name) -> DefinedName {
    DefinedName { text: name.text.clone(), key: NameKey::new(&name.text), span: name.span }
}

/// The statements of a block with the index of their line, header and blank lines left out.
fn statements(lines: &[Arc<Line>]) -> impl Iterator<Item = (usize, &Line, &Statement)> {
    lines.iter().enumerate().filter_map(|(index, line)| match &line.content {
        Content::Statement(Statement::Header(_)) => None,
        Content::Statement(statement) => Some((index, line.as_ref(), statement)),
        Content::Blank | Content::Junk(_) => None,
    })
}

fn reference(line: usize, name: &tree::Name) -> Reference {
    Reference {
        text: name.text.clone(),
        key: NameKey::new(&name.text),
        at: Anchor::new(line, name.span),
        strength: None,
        home: None,
    }
}

/// A reference with the strength before it; nothing where either is there and cannot be read.
fn strong_reference(line: usize, strength: &Option<Slot<tree::Strength>>, name: &Slot<tree::Name>) -> Option<Reference> {
    let mut reference = reference(line, name.given()?);
    if let Some(strength) = strength {
        reference.strength = Some(match strength.given()? {
            tree::Strength::Quantity(quantity) => Strength {
                kind: StrengthKind::Concentration(quantities::amount(quantity)),
                span: quantity.span,
            },
            tree::Strength::Ratio { span, of_it, of_water } => Strength {
                kind: StrengthKind::Ratio { of_it: of_it.value, of_water: of_water.value },
                span: *span,
            },
        });
    }
    Some(reference)
}

impl Lowering {
    /// Reports the statements that belong in another kind of block.
    fn misplaced(&mut self, lines: &[Arc<Line>], role: &BlockRole) {
        for (index, line, statement) in statements(lines) {
            if let Some(home) = solution::home_of(statement, role) {
                self.findings.push(
                    Finding::new(
                        Code::MisplacedStatement,
                        Anchor::new(index, statement_span(line)),
                        format!("This statement belongs in {home}, not {}.", place_of(role)),
                    )
                    .help(format!("Move the line to {home}; here it has no effect.")),
                );
            }
        }
    }
}

/// The edition of the language that this program reads.
const EDITION: f64 = 1.0;

impl Lowering {
    /// Reports an edition that is not known: what the file means then is not known either.
    fn edition(&mut self, lines: &[Arc<Line>]) {
        for (index, line, statement) in statements(lines) {
            let Statement::Language(Slot::Given(edition)) = statement else { continue };
            if edition.value != EDITION {
                let message = format!("This file asks for edition {} of the language; this program knows edition 1.", edition.value);
                self.findings.push(
                    Finding::new(Code::UnknownEdition, Anchor::new(index, statement_span(line)), message)
                        .help("Use a program that knows the edition, or write `language 1` if the file is written in it."),
                );
            }
        }
    }
}

fn place_of(role: &BlockRole) -> &'static str {
    match role {
        BlockRole::Head => "above the first block",
        BlockRole::Nameless => "here",
        BlockRole::Defines(BlockKind::Solution) => "in a solution",
        BlockRole::Defines(BlockKind::Bottle) => "in a bottle",
        BlockRole::Defines(BlockKind::Substance) => "in a substance",
        BlockRole::Defines(BlockKind::Ion) => "in an ion",
        BlockRole::Defines(BlockKind::Solid) => "in a solid",
        BlockRole::Defines(BlockKind::Danger) => "in a danger",
        BlockRole::Defines(BlockKind::Group) => "in a group",
        BlockRole::Defines(BlockKind::Lab) => "in a lab",
    }
}
