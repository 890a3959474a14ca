//! Each finding on the recipe that it is for, and silence on its near miss.
//!
//! In `tests/fixtures/findings/` a file `CODE.raise.prep` must raise that code, and `CODE.near.prep`, which differs by what
//! matters, must not; a word between the two tells several cases of one code apart.

use std::collections::{BTreeMap, BTreeSet};

use camino::{Utf8Path, Utf8PathBuf};
use scruple::finding::{Code, Level};
use scruple::workspace::Workspace;

/// Codes without a recipe of their own, and why.
const WITHOUT_RECIPE: &[(&str, &str)] = &[
    ("line-too-long", "the line is made up below, for no one wants to read it"),
    ("not-evaluated-yet", "says which statements of the language are still to come"),
    ("no-solution-found", "no recipe is known on which the solver fails"),
];

/// Recipes whose code is not raised yet, and why; a recipe that does its work must leave the table.
const NOT_YET: &[(&str, &str)] = &[];

/// Near misses that are no good recipe for another reason: the error that they may show.
const OTHER_ERRORS: &[(&str, &str)] = &[("ingredient-has-no-value.near.prep", "expectation-fails")];

struct Fixture {
    file: String,
    code: String,
    raises: bool,
    found: BTreeMap<&'static str, Level>,
    messages: Vec<String>,
}

fn folder() -> Utf8PathBuf {
    Utf8Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/fixtures/findings")
}

fn fixtures() -> Vec<Fixture> {
    let mut workspace = Workspace::new();
    workspace.open_root(&folder(), &folder());
    let snapshot = workspace.snapshot();
    let mut fixtures = Vec::new();
    for file in snapshot.files.values() {
        let path = file.shown_path();
        let parts: Vec<&str> = path.split('.').collect();
        let (Some(code), Some(kind)) = (parts.first(), parts.iter().rev().nth(1)) else { continue };
        if path.contains('/') {
            continue;
        }
        assert!(matches!(*kind, "raise" | "near"), "{path} is neither a raising recipe nor a near miss");
        let findings = snapshot.findings(file.id);
        fixtures.push(Fixture {
            code: (*code).to_owned(),
            raises: *kind == "raise",
            found: findings.iter().map(|located| (located.finding.code.name(), located.finding.level)).collect(),
            messages: findings.iter().map(|located| format!("    {}: {}", located.finding.code.name(), located.finding.message)).collect(),
            file: path,
        });
    }
    fixtures.sort_by(|one, other| one.file.cmp(&other.file));
    fixtures
}

#[test]
fn raising_recipes_raise_and_near_misses_do_not() {
    let mut wrong = Vec::new();
    for fixture in fixtures() {
        let pending = NOT_YET.iter().find(|(file, _)| *file == fixture.file);
        let found = fixture.found.contains_key(fixture.code.as_str());
        let complaint = match (fixture.raises, found, pending) {
            (true, false, None) => "does not raise its code",
            (false, true, None) => "raises the code that it should miss",
            (true, true, Some(_)) | (false, false, Some(_)) => "does its work now; take it out of the table",
            _ => continue,
        };
        wrong.push(format!("{} {complaint}; found:\n{}", fixture.file, fixture.messages.join("\n")));
    }
    assert!(wrong.is_empty(), "{} recipes\n{}", wrong.len(), wrong.join("\n"));
}

#[test]
fn near_misses_are_good_recipes() {
    let mut wrong = Vec::new();
    for fixture in fixtures().into_iter().filter(|fixture| !fixture.raises) {
        for (code, level) in &fixture.found {
            if *level == Level::Error && !OTHER_ERRORS.contains(&(fixture.file.as_str(), code)) {
                wrong.push(format!("{} shows {code}:\n{}", fixture.file, fixture.messages.join("\n")));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_code_has_both_recipes() {
    let fixtures = fixtures();
    let codes: BTreeSet<&str> = Code::ALL.iter().map(|code| code.name()).collect();
    for fixture in &fixtures {
        assert!(codes.contains(fixture.code.as_str()), "{} is for a code that does not exist", fixture.file);
    }
    for code in codes {
        let has = |raises: bool| fixtures.iter().any(|fixture| fixture.code == code && fixture.raises == raises);
        let excused = WITHOUT_RECIPE.iter().any(|(without, _)| *without == code);
        assert_eq!(has(true) && has(false), !excused, "{code} needs a raising recipe and a near miss, or a reason");
    }
    for (file, _) in NOT_YET {
        assert!(fixtures.iter().any(|fixture| fixture.file == *file), "{file} stands in the table, but there is no such file");
    }
}

#[test]
fn a_line_that_is_too_long_is_an_error_and_an_ordinary_one_is_not() {
    for (length, expected) in [(200, false), (2_000_000, true)] {
        let path = Utf8Path::new("/nowhere/long.prep");
        let text = format!("solution Long\n    made at    20 °C\n    1 L        water\n    note       {}\n", "x".repeat(length));
        let mut workspace = Workspace::new();
        let file = workspace.set_open_text(path, std::sync::Arc::new(scruple::text::SourceText::from(text.as_str())));
        let snapshot = workspace.snapshot();
        let found = snapshot.findings(file).iter().any(|located| located.finding.code == Code::LineTooLong);
        assert_eq!(found, expected, "a note of {length} letters");
    }
}
