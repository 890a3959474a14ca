//! Changes that the editor offers: the fixes of findings, and other ways to state what a line states.

use super::cursor::{Cursor, statement_span};
use super::values::{Values, measured_out};
use crate::finding::{Code, Edit, EditPlace, Level};
use crate::model::{Action, Addition};
use crate::syntax::tree::Content;
use crate::text::{FileId, Span};
use crate::units::format;
use crate::workspace::{Located, Snapshot};

/// What a change is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ActionKind {
    /// It answers a finding.
    QuickFix,
    /// It states the same in another way, or writes a computed value down.
    Rewrite,
}

/// A replacement in a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FileEdit {
    /// The file.
    pub file: FileId,
    /// The characters to replace; an empty span inserts.
    pub span: Span,
    /// The new text.
    pub text: String,
}

/// A change with its name.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CodeAction {
    /// What it does, in a few words.
    pub title: String,
    /// What it is for.
    pub kind: ActionKind,
    /// The replacements; they do not overlap.
    pub edits: Vec<FileEdit>,
    /// The finding that it answers, as its index among those of the file, with its code.
    pub finding: Option<(usize, Code)>,
    /// Whether it is the one change that the finding asks for.
    pub is_preferred: bool,
}

/// The changes offered for a range: fixes first, then rewrites of the line.
pub fn code_actions(snapshot: &Snapshot, file: FileId, range: Span) -> Vec<CodeAction> {
    if !snapshot.files.contains_key(&file) {
        return Vec::new();
    }
    let findings = snapshot.findings(file).iter().enumerate();
    let touching: Vec<(usize, &Located)> = findings.filter(|(_, located)| overlaps(located.span, range)).collect();
    let mut actions = Vec::new();
    for (index, located) in &touching {
        actions.extend(fixes(snapshot, file, *index, located));
    }
    for (index, located) in &touching {
        actions.extend(accept(snapshot, file, *index, located));
    }
    actions.extend(rewrites(snapshot, file, range.start).unwrap_or_default());
    actions
}

/// The fixes that need no thought: those of spelling and characters, each the only fix of its finding.
pub fn fix_all(snapshot: &Snapshot, file: FileId) -> Vec<FileEdit> {
    let mut edits: Vec<FileEdit> = Vec::new();
    for (index, located) in snapshot.findings(file).iter().enumerate() {
        let is_plain = matches!(
            located.finding.code,
            Code::WrittenForm | Code::InvisibleCharacter | Code::LookAlikeLetter | Code::NothingAfterComma | Code::PathSpelling
        );
        let all = fixes(snapshot, file, index, located);
        if let ([only], true) = (all.as_slice(), is_plain)
            && !only.edits.iter().any(|edit| edits.iter().any(|other| overlaps(edit.span, other.span)))
        {
            edits.extend(only.edits.iter().cloned());
        }
    }
    edits.sort_by_key(|edit| edit.span);
    edits
}

fn overlaps(one: Span, other: Span) -> bool {
    one.start <= other.end && other.start <= one.end
}

fn fixes(snapshot: &Snapshot, file: FileId, index: usize, located: &Located) -> Vec<CodeAction> {
    let fixes = &located.finding.fixes;
    let to_edit = |edit: &Edit| {
        let (span, text) = snapshot.edit(file, located.block, edit)?;
        Some(FileEdit { file, span, text })
    };
    let actions = fixes.iter().filter_map(|fix| {
        let edits: Vec<FileEdit> = fix.edits.iter().map(to_edit).collect::<Option<_>>()?;
        Some(CodeAction {
            title: fix.title.clone(),
            kind: ActionKind::QuickFix,
            edits,
            finding: Some((index, located.finding.code)),
            is_preferred: fixes.len() == 1,
        })
    });
    actions.collect()
}

/// A line that accepts a finding; the reason is the author's to write.
fn accept(snapshot: &Snapshot, file: FileId, index: usize, located: &Located) -> Option<CodeAction> {
    let code = located.finding.code;
    let block = snapshot.file(file)?.model.blocks.get(located.block)?;
    if located.finding.level == Level::Error || code == Code::AcceptWithoutEffect || block.recipe().is_none() {
        return None;
    }
    let last = block.lines.iter().rposition(|line| matches!(line.content, Content::Statement(_)))?;
    let text = format!("    accept     {} because ", code.name());
    let (span, text) = snapshot.edit(file, located.block, &Edit { place: EditPlace::LineBelow(last), text })?;
    Some(CodeAction {
        title: format!("Accept `{}` in this recipe, then write why", code.name()),
        kind: ActionKind::QuickFix,
        edits: vec![FileEdit { file, span, text }],
        finding: Some((index, code)),
        is_preferred: false,
    })
}

/// Other ways to state what the line at an offset states.
fn rewrites(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<Vec<CodeAction>> {
    let cursor = Cursor::new(snapshot, file, offset)?;
    let values = Values::of(snapshot, file, cursor.block_index)?;
    let (index, entry) = values.entry_on(cursor.line_index)?;
    let outcome = values.single()?;
    let rewrite = |title: String, span: Span, text: String| CodeAction {
        title,
        kind: ActionKind::Rewrite,
        edits: vec![FileEdit { file, span: cursor.absolute(span), text }],
        finding: None,
        is_preferred: false,
    };
    let mut actions = Vec::new();
    let lines: Vec<_> = outcome.lines.iter().filter(|line| line.entry == index).collect();
    match (&entry.action, lines.as_slice()) {
        (Action::MakeUp(make_up), [line]) if values.is_adjusted(line) && make_up.qualifiers.about.is_none() => {
            let amount = measured_out(line, 3);
            let end = statement_span(cursor.line).end;
            actions.push(rewrite(format!("Write `about {amount}` on the line"), Span::empty(end), format!(", about {amount}")));
        }
        (Action::Add(addition), [line]) => {
            let Some(span) = only_amount(addition) else { return Some(actions) };
            if values.states_concentration(addition) {
                let amount = measured_out(line, 4);
                actions.push(rewrite(format!("State what is measured out: {amount}"), span, amount));
            } else if let Some(concentration) = line.concentration_mol_per_L.filter(|value| *value > 0.0) {
                let amount = format::concentration(concentration, 4);
                actions.push(rewrite(format!("State the concentration: {amount}"), span, amount));
            }
        }
        _ => {}
    }
    Some(actions)
}

/// Where the one plain amount of a line stands.
fn only_amount(addition: &Addition) -> Option<Span> {
    match addition.amounts.as_slice() {
        [amount] if addition.as_formula.is_none() && addition.qualifiers.from.is_none() && !addition.about => Some(amount.span),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::{applied, fixture};

    /// The titles of what is offered at the cursor, each with the line that the cursor's line becomes.
    fn check(text: &str) -> Vec<(String, String)> {
        let fixture = fixture(text);
        let line = fixture.text[..fixture.offset].matches('\n').count();
        let actions = code_actions(&fixture.snapshot, fixture.file, Span::empty(fixture.offset));
        let after = |action: &CodeAction| applied(&fixture.text, action.edits.iter().map(|edit| (edit.span, edit.text.clone())));
        actions.iter().map(|action| (action.title.clone(), after(action).lines().nth(line).unwrap_or_default().to_owned())).collect()
    }

    #[test]
    fn a_misspelled_name_is_mended() {
        let offered = check("solution A\n    1 g        sodium chlo‸rid\n    q.s.       water to 1 L\n");
        assert_eq!(offered.first(), Some(&("Write sodium chloride".to_owned(), "    1 g        sodium chloride".to_owned())), "{offered:?}");
    }

    #[test]
    fn a_line_can_be_stated_in_the_other_way() {
        let offered = check("solution A\n    made at    25 °C\n    50 mmol/L  Tr‸is\n    q.s.       water to 1 L\n");
        assert!(offered.contains(&("State what is measured out: 6.057 g".to_owned(), "    6.057 g  Tris".to_owned())), "{offered:?}");
        let offered = check("solution A\n    made at    25 °C\n    5.844 g    sodium chlo‸ride\n    q.s.       water to 1 L\n");
        assert!(offered.iter().any(|(_, line)| line == "    100.0 mmol/L    sodium chloride"), "{offered:?}");
    }

    #[test]
    fn what_a_titrant_took_can_be_written_down() {
        let offered = check("solution A\n    made at    25 °C\n    900 mL     water\n    50 mmol/L  Tris\n    q.s.       1 mol/L hydrochloric a‸cid to pH 8.10 # slowly\n    q.s.       water to 1 L\n");
        assert!(offered.iter().any(|(title, line)| title.starts_with("Write `about 2") && line.contains("to pH 8.10, about 2") && line.ends_with(" mL # slowly")), "{offered:?}");
    }

    #[test]
    fn a_warning_can_be_accepted_and_an_error_cannot() {
        let fixture = fixture("solution A\n    1 g        water of nowhere\n    q.s.       water to 1 L\n");
        let all = code_actions(&fixture.snapshot, fixture.file, Span::new(0, fixture.text.len()));
        for action in &all {
            let level = action.finding.map(|(index, _)| fixture.snapshot.findings(fixture.file)[index].finding.level);
            assert!(!(action.title.starts_with("Accept") && level == Some(Level::Error)), "{action:?}");
        }
    }

    #[test]
    fn plain_fixes_are_done_together() {
        let fixture = fixture("Solution A\n    Q.S.       water to 1 L\n    Made at    25 °C\n");
        let edits = fix_all(&fixture.snapshot, fixture.file);
        let text = applied(&fixture.text, edits.into_iter().map(|edit| (edit.span, edit.text)));
        assert_eq!(text, "solution A\n    q.s.       water to 1 L\n    made at    25 °C\n");
    }
}
