//! What git shows of recipes with the drivers installed, and how a library begins.

use super::laboratory::{repository, text};

const ATTRIBUTES: &str = "*.prep text eol=lf diff=scruple\n";

#[test]
fn git_shows_values_once_the_driver_is_installed() {
    let repository = repository("textconv");
    let said = text(&repository.run(&["git", "install"]).stderr);
    assert!(said.contains("which is missing here"), "{said}");
    repository.write(".gitattributes", ATTRIBUTES);
    repository.commit("Attributes");
    let said = text(&repository.run(&["git", "install"]).stderr);
    assert!(!said.contains("missing"), "{said}");
    repository.edit("buffers.prep", "6.801 g    sodium formate", "10.20 g    sodium formate");
    let shown = repository.git(&["diff"]);
    // The source lines are there as they stand, and the values that moved beside them.
    assert!(shown.contains("-    6.801 g    sodium formate\n+    10.20 g    sodium formate\n"), "{shown}");
    assert!(shown.contains("-#= Formate eluent: pH 3.65 at 25 °C") && shown.contains("+#= Formate eluent: pH 3.8"), "{shown}");
    // What needs other files says so, the same on both sides, and is no difference.
    assert!(!shown.contains("Wash buffer"), "{shown}");
    assert!(shown.contains("solution Formate eluent\n"), "the header stands above the hunk\n{shown}");
    let words = repository.git(&["diff", "--word-diff=plain", "--no-textconv"]);
    assert!(words.contains("[-6.801-]{+10.20+} g    sodium formate"), "{words}");
    repository.commit("More formate");
    let log = repository.git(&["log", "--patch", "-1"]);
    assert!(log.contains("+#= Formate eluent: pH 3.8"), "{log}");
    // Patches hold the text alone.
    let patch = repository.git(&["format-patch", "--stdout", "-1"]);
    assert!(!patch.contains("#="), "{patch}");
    let shown = repository.prints(0, &["git", "textconv", "buffers.prep"]);
    for line in [
        "#= Wash buffer: takes what stands in other files; scruple compare works it out",
        "#= Loading buffer: pH 8.10 at 25 °C, set to 8.10 before the rest",
        "#= Loading buffer: takes 10.25 mL hydrochloric acid",
        "#= Loading buffer: buffer capacity 11.64 mmol/L at 25 °C, as expected",
        "#= Formate eluent: pH 3.81 at 25 °C",
    ] {
        assert!(shown.lines().any(|shown| shown == line), "{line}\n{shown}");
    }
    let source: String = shown.lines().filter(|line| !line.starts_with("#=")).map(|line| format!("{line}\n")).collect();
    assert_eq!(source, repository.read("buffers.prep"));
}

#[test]
fn git_shows_shares_where_that_is_wanted() {
    let repository = repository("external");
    repository.write(".gitattributes", ATTRIBUTES);
    repository.commit("Attributes");
    repository.run(&["git", "install", "--shares"]);
    repository.edit("buffers.prep", "30 mL      Salt stock", "60 mL      Salt stock");
    let shown = repository.git(&["diff"]);
    assert!(shown.contains("-    30 mL      Salt stock\n+    60 mL      Salt stock\n"), "{shown}");
    assert!(shown.contains("--- a/buffers.prep\n+++ b/buffers.prep\n@@"), "{shown}");
    assert!(shown.contains("Wash buffer (buffers.prep, line 4): changed"), "the stocks come from the working tree\n{shown}");
    // A file that is new, and one that is gone.
    repository.write("new.prep", "solution Rinse\n    made at    25 °C\n    1 kg       water\n");
    repository.git(&["add", "new.prep"]);
    std::fs::remove_file(repository.path("stocks.prep")).unwrap();
    let shown = repository.git(&["diff", "HEAD"]);
    assert!(shown.contains("Rinse (new.prep, line 1): is new") && shown.contains("Salt stock (stocks.prep, line 2): is gone"), "{shown}");
    // Asked for values again, git no longer calls the other driver.
    repository.run(&["git", "install"]);
    assert!(!repository.git_output(&["config", "diff.scruple.command"]).status.success());
}

#[test]
fn a_library_begins_without_overwriting_anything() {
    let repository = repository("init");
    let wrote = repository.prints(0, &["init", "fresh/library", "--ci", "github"]);
    for name in ["scruple.toml", "stocks.prep", "buffers.prep", ".gitattributes", ".github/workflows/recipes.yml"] {
        assert!(wrote.contains(&format!("wrote {name}\n")) && repository.path(&format!("fresh/library/{name}")).is_file(), "{wrote}");
    }
    assert_eq!(repository.read("fresh/library/.gitattributes"), ATTRIBUTES);
    // What it begins with is sound.
    let checked = repository.prints(0, &["check", "fresh/library", "--fail-on", "hint"]);
    assert_eq!(checked, "no findings in 2 files, 2 solutions\n");
    assert_eq!(repository.prints(0, &["format", "--check", "fresh/library"]), "");
    repository.write("old/scruple.toml", "# mine\n");
    repository.write("old/.gitattributes", "*.csv text\n");
    let wrote = repository.prints(0, &["init", "old", "--ci", "gitlab"]);
    assert!(wrote.contains("kept scruple.toml as it is") && wrote.contains("it lacks this line"), "{wrote}");
    assert_eq!((repository.read("old/scruple.toml"), repository.read("old/.gitattributes")), ("# mine\n".into(), "*.csv text\n".into()));
    assert!(repository.read("old/.gitlab-ci.yml").contains(env!("CARGO_PKG_VERSION")));
}
