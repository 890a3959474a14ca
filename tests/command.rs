//! The program as it is called: exit codes, output, colours, and what it says when something cannot be used.

use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

use camino::Utf8PathBuf;
use scruple::model::NameKey;
use scruple::report::{Selection, excerpt, finding_reports, found, library_sheets, reasons_sheet, sheet, solution_report, solution_sheet};
use scruple::text::Columns;
use scruple::workspace::Workspace;
use serde_json::Value;

/// The recipes that these tests look at, a root of their own.
fn fixtures() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/fixtures/command")
}

/// An empty folder for one test, with a root of its own.
fn scratch(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("command").join(name);
    let _ = fs::remove_dir_all(&folder);
    fs::create_dir_all(&folder).unwrap();
    fs::write(folder.join("scruple.toml"), "").unwrap();
    folder
}

fn program(folder: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_scruple"));
    command.current_dir(folder).stdin(Stdio::null());
    for variable in ["NO_COLOR", "CLICOLOR", "CLICOLOR_FORCE"] {
        command.env_remove(variable);
    }
    command
}

fn run(folder: &Path, arguments: &[&str]) -> Output {
    program(folder).args(arguments).output().unwrap()
}

fn code(output: &Output) -> i32 {
    output.status.code().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn json(output: &Output) -> Value {
    serde_json::from_slice(&output.stdout).unwrap()
}

const CLEAN: &str = "solution Salt\n    made at    25 °C\n    1 kg       water\n    5.844 g    sodium chloride\n    expect     density 0.99 to 1.01 g/mL\n";
const FAILING: &str = "solution Salt\n    made at    25 °C\n    1 kg       water\n    5.844 g    sodium chloride\n    expect     density 1.1 to 1.2 g/mL\n";

#[test]
fn a_clean_recipe_passes_and_a_failing_one_does_not() {
    let folder = scratch("exit");
    fs::write(folder.join("clean.prep"), CLEAN).unwrap();
    fs::write(folder.join("failing.prep"), FAILING).unwrap();
    let clean = run(&folder, &["check", "clean.prep"]);
    assert_eq!((code(&clean), out(&clean).as_str()), (0, "no findings in 1 file, 1 solution\n"));
    let both = run(&folder, &["check", "."]);
    assert_eq!(code(&both), 1, "{}", out(&both));
    assert!(out(&both).ends_with("\n1 error in 2 files, 2 solutions\n"), "{}", out(&both));
}

#[test]
fn the_failing_level_decides() {
    let folder = scratch("level");
    // Nothing states the temperature: a hint.
    let recipe = "solution Buffer
    20 mmol/L  potassium dihydrogen phosphate / dipotassium hydrogen phosphate to pH 7.00
    q.s.       water to 1 L
";
    fs::write(folder.join("hint.prep"), recipe).unwrap();
    assert_eq!(code(&run(&folder, &["check", "--fail-on", "warning", "hint.prep"])), 0);
    assert_eq!(code(&run(&folder, &["check", "--fail-on", "hint", "hint.prep"])), 1);
    fs::write(folder.join("scruple.toml"), "[findings]\ntemperature-assumed = \"error\"\n").unwrap();
    assert_eq!(code(&run(&folder, &["check", "hint.prep"])), 1, "the configuration raises it");
}

#[test]
fn what_cannot_be_used_is_said_and_exits_with_2() {
    let folder = scratch("unusable");
    let missing = run(&folder, &["check", "nowhere.prep"]);
    assert_eq!((code(&missing), err(&missing).as_str()), (2, "scruple: There is no file or folder nowhere.prep.\n"));
    let empty = run(&folder, &["check", "."]);
    assert_eq!((code(&empty), err(&empty).as_str()), (2, "scruple: There are no recipe files (.prep) in ..\n"));
    assert_eq!(code(&run(&folder, &["check"])), 2, "no path");
    assert_eq!(code(&run(&folder, &["weigh", "x.prep"])), 2, "no such verb");
    assert_eq!(code(&run(&folder, &["check", "--fail-on", "nothing", "x.prep"])), 2, "no such level");
    assert_eq!(code(&run(&folder, &["--help"])), 0);
    assert_eq!(code(&run(&folder, &["--version"])), 0);
}

#[test]
fn a_broken_configuration_is_reported_at_its_file() {
    let folder = scratch("configuration");
    fs::write(folder.join("clean.prep"), CLEAN).unwrap();
    fs::write(folder.join("scruple.toml"), "language = 1\nfindings = 3\n").unwrap();
    let text = run(&folder, &["check", "clean.prep"]);
    assert_eq!(code(&text), 2);
    assert!(out(&text).contains("scruple.toml:2") && out(&text).contains("1 error in"), "{}", out(&text));
    let findings = json(&run(&folder, &["check", "clean.prep", "--format", "json"]));
    assert_eq!((&findings[0]["file"], &findings[0]["line"]), (&"scruple.toml".into(), &2.into()));
}

#[test]
fn a_file_that_is_not_text_is_a_finding() {
    let folder = scratch("bytes");
    fs::write(folder.join("latin.prep"), b"solution Salt\n    22 \xb0C\n").unwrap();
    let output = run(&folder, &["check", "latin.prep"]);
    assert_eq!(code(&output), 1);
    assert!(out(&output).contains("file-not-readable") && out(&output).contains("line 2"), "{}", out(&output));
    let shown = run(&folder, &["show", "latin.prep"]);
    assert_eq!(code(&shown), 2);
    assert!(err(&shown).contains("not UTF-8"), "{}", err(&shown));
    let formatted = run(&folder, &["format", "latin.prep"]);
    assert_eq!((code(&formatted), err(&formatted).as_str()), (2, "scruple: latin.prep is not UTF-8 text.\n"));
}

#[test]
fn a_broken_recipe_gives_findings_and_nulls_and_no_crash() {
    let folder = scratch("broken");
    fs::write(folder.join("broken.prep"), "solution (((\n    0,5 mL \n q.s. \n\u{0}\n    expect pH\nsolution\n").unwrap();
    fs::write(folder.join("empty.prep"), "").unwrap();
    let checked = run(&folder, &["check", "."]);
    assert_eq!(code(&checked), 1);
    assert!(out(&checked).contains("in 2 files"), "{}", out(&checked));
    let shown = run(&folder, &["show", ".", "--format", "json"]);
    assert_eq!(code(&shown), 0);
    for solution in json(&shown).as_array().unwrap() {
        assert_eq!((&solution["file"], &solution["pH"]), (&"broken.prep".into(), &Value::Null));
    }
}

#[test]
fn only_the_named_file_is_spoken_of_though_it_uses_others() {
    let shown = json(&run(&fixtures(), &["show", "eluent.prep", "--format", "json"]));
    let names: Vec<&str> = shown.as_array().unwrap().iter().map(|solution| solution["name"].as_str().unwrap()).collect();
    assert_eq!(names, ["Column eluent", "Rinse (25 mL)", "Rinse (50 mL)", "Rinse (75 mL)", "Strong eluent"]);
    assert!(shown[0]["pH"].is_number(), "the stock in the other file is known");
}

#[test]
fn several_roots_are_opened_at_once() {
    let folder = scratch("roots");
    for name in ["one", "two"] {
        fs::create_dir_all(folder.join(name)).unwrap();
        fs::write(folder.join(name).join("scruple.toml"), "").unwrap();
        // The same ion in two libraries is no conflict.
        let ion = "ion unobtainium\n    formula    U\n    charge     1\n    source     invented for this test\n";
        fs::write(folder.join(name).join("salt.prep"), format!("{ion}\n{CLEAN}")).unwrap();
    }
    let nested = run(&folder, &["check", "."]);
    assert_eq!((code(&nested), out(&nested).as_str()), (0, "no findings in 2 files, 2 solutions\n"));
    let listed = json(&run(&folder, &["show", "two", "one", "--format", "json"]));
    let files: Vec<&str> = listed.as_array().unwrap().iter().map(|solution| solution["file"].as_str().unwrap()).collect();
    assert_eq!(files, ["one/salt.prep", "two/salt.prep"], "in the order of their names, however they were given");
}

#[test]
fn colours_only_where_they_are_wanted() {
    let folder = scratch("colours");
    fs::write(folder.join("failing.prep"), FAILING).unwrap();
    let coloured = |command: &mut Command| out(&command.args(["check", "failing.prep"]).output().unwrap()).contains('\u{1b}');
    assert!(coloured(program(&folder).env("CLICOLOR_FORCE", "1")));
    assert!(!coloured(program(&folder).env("CLICOLOR_FORCE", "1").env("NO_COLOR", "1")));
    assert!(coloured(program(&folder).args(["--color", "always"]).env("NO_COLOR", "1")), "the option is the last word");
    assert!(!coloured(program(&folder).args(["--color", "never"]).env("CLICOLOR_FORCE", "1")));
}

#[test]
fn standard_input_is_formatted_to_standard_output() {
    let format = |arguments: &[&str], text: &str| {
        let mut child = program(&fixtures())
            .args(arguments)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        child.stdin.take().unwrap().write_all(text.as_bytes()).unwrap();
        child.wait_with_output().unwrap()
    };
    let crooked = "solution   Salt\n  1 kg water   # pure\n\t5.844 g sodium chloride\n";
    let straight = format(&["format", "-"], crooked);
    assert_eq!(code(&straight), 0);
    let text = out(&straight);
    assert!(text.contains("    5.844 g    sodium chloride\n") && text.contains("# pure"), "{text}");
    assert_eq!(code(&format(&["format", "--check", "-"], crooked)), 1);
    assert_eq!(code(&format(&["format", "--check", "-"], &text)), 0);
    assert_eq!(out(&format(&["format", "-"], &text)), text, "a second time changes nothing");
    assert_eq!(code(&format(&["format", "-", "eluent.prep"], "")), 2);
}

#[test]
fn files_are_formatted_in_place_and_only_where_they_change() {
    let folder = scratch("format");
    let path = folder.join("salt.prep");
    fs::write(&path, "solution Salt\r\n  1 kg water\r\n").unwrap();
    let check = run(&folder, &["format", "--check", "."]);
    assert_eq!((code(&check), out(&check).as_str()), (1, "salt.prep\n"));
    assert_eq!(code(&run(&folder, &["format", "."])), 0);
    assert_eq!(fs::read_to_string(&path).unwrap(), "solution Salt\r\n    1 kg       water\r\n", "line ends are kept");
    assert_eq!(code(&run(&folder, &["format", "--check", "."])), 0);
}

#[test]
fn a_reader_that_leaves_is_no_error() {
    let mut child = program(&fixtures())
        .args(["lookup", "--all", "--format", "json"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!((code(&output), err(&output).as_str()), (0, ""));
}

#[test]
fn names_are_looked_up_by_name_synonym_and_formula() {
    let found = |name: &str| serde_json::to_value(scruple::report::found(name).unwrap()).unwrap();
    let by_name = found("hydrochloric acid");
    assert_eq!(by_name["substances"][0]["formula"], "HCl");
    assert_eq!(by_name["substances"][0]["gives"][1]["name"], "chloride");
    assert_eq!(by_name, found("Muriatic  acid"));
    assert_eq!(by_name, found("HCl"));
    let phosphate = found("dihydrogen phosphate");
    assert_eq!(phosphate["ions"][0]["name"], "phosphate");
    assert_eq!(phosphate["ions"][0]["pKa"].as_array().unwrap().len(), 3);
    for constant in phosphate["ions"][0]["pKa"].as_array().unwrap() {
        assert!(constant["source"].is_string() && constant["at_25_C"].is_number(), "{constant}");
    }
    // Words of a name need no quotes.
    assert_eq!(json(&run(&fixtures(), &["lookup", "hydrochloric", "acid", "--format", "json"])), by_name);
    let unknown = run(&fixtures(), &["lookup", "sodium chlorid"]);
    assert_eq!(code(&unknown), 2);
    assert!(err(&unknown).contains("sodium chloride"), "{}", err(&unknown));
}

#[test]
fn findings_are_explained() {
    let folder = fixtures();
    let page = run(&folder, &["explain", "temperature-shift"]);
    assert_eq!(code(&page), 0);
    assert!(out(&page).contains("Level: warning"));
    let all = out(&run(&folder, &["explain"]));
    assert_eq!(all.lines().count(), scruple::finding::Code::ALL.len());
    let unknown = run(&folder, &["explain", "temperature-shfit"]);
    assert_eq!(code(&unknown), 2);
    assert!(err(&unknown).contains("temperature-shift"));
}

#[test]
fn shells_get_their_completions() {
    for shell in ["bash", "zsh", "fish", "powershell", "elvish"] {
        let script = run(&fixtures(), &["completions", shell]);
        assert_eq!(code(&script), 0);
        assert!(out(&script).contains("lookup"), "{shell}");
    }
    assert_eq!(code(&run(&fixtures(), &["completions", "abacus"])), 2);
}

#[test]
fn the_same_command_prints_the_same_bytes() {
    let show = || run(&fixtures(), &["show", ".", "--format", "json"]).stdout;
    assert_eq!(show(), show());
}

#[test]
fn only_the_named_solutions_are_shown() {
    let series = json(&run(&fixtures(), &["show", "eluent.prep", "--solution", "RINSE", "--format", "json"]));
    assert_eq!(series.as_array().unwrap().len(), 3);
    let none = run(&fixtures(), &["show", "eluent.prep", "--solution", "Elixir"]);
    assert_eq!((code(&none), err(&none).as_str()), (2, "scruple: No solution in these files is called Elixir.\n"));
}

#[test]
fn findings_point_at_their_characters() {
    let output = run(&fixtures(), &["check", "mistakes.prep", "--format", "json"]);
    assert_eq!(code(&output), 1);
    let text = fs::read_to_string(fixtures().join("mistakes.prep")).unwrap();
    let findings = json(&output);
    let comma = findings.as_array().unwrap().iter().find(|finding| finding["code"] == "decimal-comma").unwrap();
    let (line, column) = (comma["line"].as_u64().unwrap() as usize, comma["column"].as_u64().unwrap() as usize);
    let (end_line, end) = (comma["end_line"].as_u64().unwrap() as usize, comma["end_column"].as_u64().unwrap() as usize);
    assert_eq!(line, end_line);
    let marked: String = text.lines().nth(line - 1).unwrap().chars().skip(column - 1).take(end - column).collect();
    assert_eq!(marked, "0,5");
    assert_eq!(comma["fixes"][0]["edits"][0]["text"], "0.5");
    let fails = findings.as_array().unwrap().iter().find(|finding| finding["code"] == "expectation-fails").unwrap();
    assert_eq!(fails["block"], "Weak eluent");
}

/// The fixtures as the command line opens them.
fn selection() -> Selection {
    let folder = Utf8PathBuf::from_path_buf(fixtures()).unwrap();
    let mut workspace = Workspace::new();
    workspace.open_root(&folder, &folder);
    let snapshot = workspace.snapshot();
    let files: Vec<_> = snapshot.files.keys().copied().collect();
    Selection::new(snapshot, files, folder)
}

#[test]
fn what_people_read_is_as_it_was_reviewed() {
    let selection = selection();
    let excerpts: Vec<String> = selection.findings().map(|(file, located)| excerpt(&selection, file, located, 100)).collect();
    insta::assert_snapshot!("check", anstream::adapter::strip_str(&excerpts.join("\n\n")).to_string());
    let of = |name: &str| selection.solutions().find(|subject| subject.is_called(&NameKey::new(name))).unwrap();
    insta::assert_snapshot!("show", sheet::text(&solution_sheet(&of("Column eluent")), 100));
    insta::assert_snapshot!("show_reasons", sheet::text(&reasons_sheet(&of("Column eluent")), 100));
    insta::assert_snapshot!("show_without_values", sheet::text(&solution_sheet(&of("Diluted acid")), 100));
    insta::assert_snapshot!("show_markdown", sheet::markdown(&solution_sheet(&of("Chelator stock"))));
    let pretty = |value: Value| serde_json::to_string_pretty(&value).unwrap();
    insta::assert_snapshot!("show_json", pretty(serde_json::to_value(solution_report(&of("Column eluent"))).unwrap()));
    insta::assert_snapshot!("check_json", pretty(serde_json::to_value(finding_reports(&selection, Columns::Characters)).unwrap()));
    let pages = library_sheets(&found("sodium dihydrogen phosphate dihydrate").unwrap());
    insta::assert_snapshot!("lookup", sheet::text(pages.first().unwrap(), 100));
}
