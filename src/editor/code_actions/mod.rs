//! Changes that the editor offers: the fixes of findings, and other ways to state what a line states.

mod amounts;
mod expectations;
mod forms;
mod missing_use;
mod pairs;
mod scale;
mod site;
mod stocks;

use crate::finding::{Code, Edit, EditPlace, Level};
use crate::syntax::tree::Content;
use crate::text::{FileId, Span};
use crate::workspace::{Located, Snapshot};
use site::Site;

/// What a change is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ActionKind {
    /// It answers a finding.
    QuickFix,
    /// It states the same in another way, or writes a computed value down.
    Rewrite,
    /// It takes a part out as a recipe of its own.
    Extract,
    /// It puts a recipe's parts in its place.
    Inline,
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
        actions.extend(missing_use::offers(snapshot, file, *index, located));
    }
    for (index, located) in &touching {
        actions.extend(accept(snapshot, file, *index, located));
    }
    if let Some(site) = Site::new(snapshot, file, range.start) {
        for offer in OFFERS {
            actions.extend(offer(&site));
        }
    }
    actions
}

/// Ways to change a recipe that answer no finding, in the order in which they are offered.
const OFFERS: &[fn(&Site) -> Vec<CodeAction>] =
    &[amounts::offers, forms::offers, pairs::offers, stocks::offers, expectations::offers, scale::offers];

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

    /// The whole text after the offered change whose title begins so.
    fn changed(text: &str, title: &str) -> String {
        let fixture = fixture(text);
        let actions = code_actions(&fixture.snapshot, fixture.file, Span::empty(fixture.offset));
        let Some(action) = actions.iter().find(|action| action.title.starts_with(title)) else {
            panic!("{title} is not among {:?}", actions.iter().map(|action| &action.title).collect::<Vec<_>>())
        };
        applied(&fixture.text, action.edits.iter().map(|edit| (edit.span, edit.text.clone())))
    }

    /// The pH of the solution of this name.
    fn ph(text: &str, name: &str) -> f64 {
        let fixture = fixture(text);
        let file = fixture.snapshot.file(fixture.file).unwrap();
        let index = file.model.blocks.iter().position(|block| block.name.as_ref().is_some_and(|own| own.text == name)).unwrap();
        let values = crate::editor::values::Values::of(&fixture.snapshot, fixture.file, index).unwrap();
        let outcome = values.single().unwrap_or_else(|| panic!("no values:\n{text}\n{:#?}", fixture.snapshot.findings(fixture.file)));
        outcome.finished.as_ref().unwrap().pH()
    }

    #[test]
    fn a_name_that_another_file_defines_is_made_known() {
        let text = "use \"bench.prep\"\nsolution A\n    made at    25 °C\n    1 mL       salt st‸ock\n    q.s.       water to 1 L\n//- parts/stocks.prep\nsolution Salt stock\n    made at    25 °C\n    1 g        sodium chloride\n    q.s.       water to 1 L\n//- bench.prep\nlab Bench\n";
        let mended = changed(text, "Use parts/stocks.prep, where Salt stock is defined");
        assert!(mended.starts_with("use \"bench.prep\"\nuse \"parts/stocks.prep\"\nsolution A\n"), "{mended}");
    }

    #[test]
    fn another_hydrate_or_salt_keeps_the_moles() {
        let text = "solution A\n    made at    25 °C\n    13.61 g    sodium acetate trihyd‸rate\n    q.s.       water to 1 L\n";
        // 13.61 g · 82.034 / 136.079 = 8.2047 g (CH3COONa, standard atomic weights of IUPAC 2021).
        assert!(changed(text, "Take 8.20").contains("    8.205 g    sodium acetate"), "{}", changed(text, "Take 8.20"));
        // 98.14 g/mol of potassium acetate: 13.61 · 98.14 / 136.08 = 9.815 g.
        assert!(changed(text, "Take 9.81").contains("potassium acetate"));
        let stated = "solution A\n    made at    25 °C\n    25 mmol/L  disodium hydrogen phosph‸ate dihydrate\n    q.s.       water to 1 L\n";
        assert!(changed(stated, "Take disodium hydrogen phosphate dodecahydrate").contains("    25 mmol/L  disodium hydrogen phosphate dodecahydrate\n"));
        let titles: Vec<String> = check(stated).into_iter().map(|(title, _)| title).collect();
        assert!(!titles.iter().any(|title| title.contains("dihydrogen") || title.contains("trisodium")), "other hydrogens are another pH: {titles:?}");
    }

    #[test]
    fn a_pair_becomes_titrated_and_a_titrated_buffer_a_pair() {
        let pair = "solution A\n    made at    25 °C\n    50 mmol/L  Tris / Tris hydro‸chloride to pH 8.10\n    q.s.       water to 1 L\n";
        let titrated = changed(pair, "Titrate Tris with hydrochloric acid");
        assert!(titrated.contains("    50 mmol/L  Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.10\n"), "{titrated}");
        assert!((ph(&titrated, "A") - 8.10).abs() < 0.005);
        let back = changed(&titrated.replacen("hydrochloric acid", "hydrochloric‸ acid", 1), "Weigh Tris and Tris hydrochloride");
        assert_eq!(back, pair.replace('‸', ""));
        let phosphate = "solution A\n    made at    25 °C\n    900 mL     water\n    3.000 g    sodium dihydrogen phosphate\n    q.s.       1 mol/L sodium hydrox‸ide to pH 7.00\n    q.s.       water to 1 L\n";
        let weighed = changed(phosphate, "Weigh sodium dihydrogen phosphate and disodium hydrogen phosphate");
        // 3.000 g in a litre, 119.9755 g/mol by the standard atomic weights (IUPAC 2021): 25.005 mmol/L.
        assert!(weighed.contains("    25.01 mmol/L sodium dihydrogen phosphate / disodium hydrogen phosphate to pH 7.00\n    q.s.       water"), "{weighed}");
    }

    #[test]
    fn a_part_is_taken_out_as_a_stock_and_put_in_again() {
        let text = "solution A\n    made at    25 °C\n    2 mmol/L   magnesium chloride hexahy‸drate\n    20 mmol/L  Tris\n    q.s.       water to 1 L\n";
        let with_stock = changed(text, "Take magnesium chloride hexahydrate out as a stock, 100 times");
        assert!(with_stock.starts_with("solution Magnesium chloride hexahydrate stock\n    made at    25 °C\n    200.0 mmol/L magnesium chloride hexahydrate\n    q.s.       water to 100 mL\n\nsolution A\n"), "{with_stock}");
        assert!(with_stock.contains("    10.00 mL   Magnesium chloride hexahydrate stock\n"), "{with_stock}");
        assert!((ph(&with_stock, "A") - ph(&text.replace('‸', ""), "A")).abs() < 0.002);
        let marked = with_stock.replacen("    10.00 mL   Magnesium", "    10.00 mL   Magn‸esium", 1);
        let again = changed(&marked, "Put in what Magnesium chloride hexahydrate stock holds");
        // 2 mmol of MgCl2·6H2O, 203.30 g/mol.
        assert!(again.contains("    406.6 mg   magnesium chloride hexahydrate\n"), "{again}");
    }

    #[test]
    fn the_present_values_can_be_expected() {
        let text = "solution A‸\n    made at    25 °C\n    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    q.s.       water to 1 L\n";
        let expected = changed(text, "Expect pH 8.10");
        assert!(expected.ends_with("to 1 L\n    expect     pH 8.10 ± 0.05\n"), "{expected}");
        for title in ["Expect ionic strength", "Expect buffer capacity"] {
            let fixture = fixture(&changed(text, title));
            assert!(fixture.snapshot.findings(fixture.file).iter().all(|located| located.finding.level != Level::Error), "{title}");
        }
        let again = expected.replacen("solution A", "solution A‸", 1);
        assert!(!check(&again).iter().any(|(title, _)| title.starts_with("Expect pH")), "it is expected already");
    }

    #[test]
    fn a_recipe_is_made_for_another_amount() {
        let text = "solution A‸\n    made at    25 °C\n    2.5 g      sodium chloride, ± 0.01 g\n    20 mmol/L  Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.10, about 2 mL\n    q.s.       water to 500 mL\n    step       Stir for 10 min in 1 L.\n    stored at  4 °C for 2 weeks\n";
        let twice = changed(text, "Make twice as much");
        let expected = text.replace('‸', "").replace("2.5 g ", "5.0 g ").replace("0.01 g", "0.02 g").replace("about 2 mL", "about 4 mL").replace("500 mL", "1000 mL");
        assert_eq!(twice, expected);
        assert!((ph(&twice, "A") - ph(&text.replace('‸', ""), "A")).abs() < 1e-6);
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
