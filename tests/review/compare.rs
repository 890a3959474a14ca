//! `compare` along a scripted history: what changed, by how much, through which line, and why.

use serde_json::Value;

use super::laboratory::{BUFFERS, Repository, repository, text};

fn change<'a>(report: &'a Value, name: &str) -> &'a Value {
    report["changes"].as_array().unwrap().iter().find(|change| change["name"] == name).unwrap_or_else(|| panic!("{name} in {report:#}"))
}

fn names(report: &Value) -> Vec<(&str, &str)> {
    let changes = report["changes"].as_array().unwrap();
    changes.iter().map(|change| (change["name"].as_str().unwrap(), change["told"].as_str().unwrap())).collect()
}

fn shift<'a>(change: &'a Value, property: &str) -> &'a Value {
    change["shifts"].as_array().unwrap().iter().find(|shift| shift["property"] == property).unwrap_or_else(|| panic!("{change:#}"))
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is a number"))
}

fn compare(repository: &Repository, arguments: &[&str]) -> Value {
    repository.json(0, &[&["compare", "--format", "json"], arguments].concat())
}

#[test]
fn a_stock_and_a_line_share_a_shift_and_the_rest_is_said() {
    let repository = repository("shares");
    assert_eq!(names(&compare(&repository, &[])), []);
    repository.edit("stocks.prep", "35.60 g", "30.60 g");
    repository.edit("buffers.prep", "30 mL      Salt", "60 mL      Salt");
    repository.edit("buffers.prep", "pH 6.6 to 7.0", "pH 6.8 to 7.0");
    repository.edit("buffers.prep", "0.22 µm membrane", "0.45 µm membrane");
    let report = compare(&repository, &[]);
    assert_eq!(names(&report), [("Wash buffer", "changed"), ("Loading buffer", "words only"), ("Phosphate stock", "changed")]);
    let wash = change(&report, "Wash buffer");
    let reasons: Vec<_> = wash["reasons"].as_array().unwrap().iter().map(|reason| (reason["kind"].clone(), reason["name"].clone())).collect();
    assert_eq!(reasons, [("own lines".into(), Value::Null), ("stock".into(), "Phosphate stock".into())]);
    let pH = shift(wash, "pH");
    let shares = pH["shares"].as_array().unwrap();
    assert_eq!(shares.len(), 2, "{pH:#}");
    let told: f64 = shares.iter().map(|share| number(&share["amount"])).sum();
    assert!((told + number(&pH["remainder"]) - number(&pH["change"])).abs() < 1e-9);
    assert!(number(&pH["remainder"]).abs() < 0.1 * number(&pH["change"]).abs(), "{pH:#}");
    // The derivatives of the old state say nearly the same as working it out again.
    for share in shares {
        let (amount, predicted) = (number(&share["amount"]), number(&share["predicted"]));
        assert!((amount - predicted).abs() < 0.5 * amount.abs() && amount.signum() == predicted.signum(), "{share}");
    }
    assert!(wash["breaks"].as_bool().unwrap(), "{wash:#}");
    assert_eq!(repository.run(&["compare", "--fail-on-break"]).status.code(), Some(1));
    insta::assert_snapshot!("compare_text", repository.prints(0, &["compare"]));
    insta::assert_snapshot!("compare_markdown", repository.prints(0, &["compare", "--format", "markdown"]));
    insta::assert_snapshot!("compare_annotations", repository.prints(0, &["compare", "--format", "workflow-commands"]));
    insta::assert_snapshot!("compare_html", repository.prints(0, &["compare", "--format", "html"]));
}

#[test]
fn a_small_edit_does_what_its_derivative_says() {
    let repository = repository("derivative");
    repository.edit("buffers.prep", "4.603 g    formic", "4.613 g    formic");
    repository.edit("buffers.prep", "6.801 g    sodium formate", "6.951 g    sodium formate");
    let report = compare(&repository, &[]);
    let pH = shift(change(&report, "Formate eluent"), "pH");
    for share in pH["shares"].as_array().unwrap() {
        let (amount, predicted) = (number(&share["amount"]), number(&share["predicted"]));
        assert!((amount / predicted - 1.0).abs() < 0.05, "{share}");
    }
    assert!(number(&pH["remainder"]).abs() < 1e-4, "{pH:#}");
}

#[test]
fn solutions_are_recognised_under_other_names_and_in_other_files() {
    let repository = repository("names");
    // Renamed where it stands, with who takes it following; moved to another file; renamed and edited at once.
    repository.edit("stocks.prep", "solution Salt stock", "solution Brine");
    repository.edit("buffers.prep", "30 mL      Salt stock", "30 mL      Brine");
    let (head, rest) = BUFFERS.split_once("solution Formate").unwrap();
    repository.write("buffers.prep", &repository.read("buffers.prep").replace(&format!("solution Formate{rest}"), ""));
    assert!(repository.read("buffers.prep").len() < head.len());
    repository.write("eluents.prep", &format!("solution Acid formate{}", rest.replace("4.603 g", "9.206 g")));
    repository.commit("Other names");
    let report = compare(&repository, &["HEAD~1", "HEAD"]);
    let brine = change(&report, "Brine");
    assert_eq!((&brine["told"], &brine["was_called"]), (&"words only".into(), &"Salt stock".into()));
    let eluent = change(&report, "Acid formate eluent");
    assert_eq!((&eluent["was_called"], &eluent["was_in"]), (&"Formate eluent".into(), &"buffers.prep".into()));
    assert_eq!(eluent["shifts"][0]["property"], "pH");
    let wash = change(&report, "Wash buffer");
    assert_eq!((&wash["told"], &wash["edited"]), (&"words only".into(), &true.into()), "{wash:#}");
    assert!(!names(&report).iter().any(|(_, told)| ["appeared", "vanished"].contains(told)), "{:?}", names(&report));
    // And back: nothing is left of it.
    let report = compare(&repository, &["HEAD..HEAD"]);
    assert_eq!(names(&report), []);
}

#[test]
fn what_appears_vanishes_or_loses_its_values_is_told_apart() {
    let repository = repository("told");
    repository.edit("buffers.prep", "2.423 g    Tris", "2,423 g    Tris");
    repository.write("new.prep", "solution Rinse\n    made at    25 °C\n    1 kg       water\n    1 g        sodium chloride\n");
    let (kept, _) = BUFFERS.split_once("solution Formate").unwrap();
    repository.write("buffers.prep", &kept.replace("2.423 g", "2,423 g"));
    let report = compare(&repository, &[]);
    assert_eq!(names(&report), [("Loading buffer", "lost values"), ("Rinse", "appeared"), ("Formate eluent", "vanished")]);
    let findings = change(&report, "Loading buffer")["findings"].as_array().unwrap();
    assert!(findings.iter().any(|finding| finding["came"] == true && finding["code"] == "decimal-comma"), "{findings:?}");
    repository.commit("Broken");
    repository.edit("buffers.prep", "2,423 g", "2.423 g");
    assert_eq!(names(&compare(&repository, &["HEAD", "--", "buffers.prep"])), [("Loading buffer", "gained values")]);
    assert_eq!(names(&compare(&repository, &["HEAD", "--", "stocks.prep"])), []);
}

#[test]
fn settings_and_constants_are_named_as_reasons() {
    let repository = repository("reasons");
    let ion = "ion testate\n    formula    C6H7O3\n    charge     -1\n    pKa        4.80, of testic acid, source invented for this test\n    source     invented for this test\n
substance sodium testate\n    formula    NaC6H7O3\n    gives      sodium, testate\n    form       solid\n    source     invented for this test\n
solution Test buffer\n    made at    25 °C\n    1 kg       water\n    1.5 g      sodium testate\n    5 mL       1 mol/L hydrochloric acid\n";
    repository.write("testate.prep", ion);
    repository.commit("A constant of our own");
    repository.edit("testate.prep", "pKa        4.80", "pKa        5.10");
    let report = compare(&repository, &["HEAD", "--", "testate.prep"]);
    let buffer = change(&report, "Test buffer");
    assert_eq!(buffer["reasons"], serde_json::json!([{ "kind": "constants of", "name": "testate" }]), "{buffer:#}");
    assert!((number(&shift(buffer, "pH")["change"]) - 0.3).abs() < 0.02, "{buffer:#}");
    repository.git(&["checkout", "--quiet", "."]);
    repository.write("scruple.toml", "language = 1\nmodel = \"Davies\"\n");
    repository.commit("Another model");
    // Each revision is read with its own settings.
    let report = compare(&repository, &["HEAD~1..HEAD", "--", "buffers.prep"]);
    let wash = change(&report, "Wash buffer");
    assert_eq!(wash["reasons"], serde_json::json!([{ "kind": "setting", "name": null }]), "{wash:#}");
    assert_eq!(wash["shifts"][0]["shares"].as_array().unwrap().len(), 1);
}

#[test]
fn two_files_are_compared_without_a_repository() {
    let repository = repository("files");
    repository.write("candidate.prep", &BUFFERS.replace("6.801 g", "13.602 g"));
    std::fs::remove_dir_all(repository.path(".git")).unwrap();
    let report = compare(&repository, &["--files", "buffers.prep", "candidate.prep"]);
    assert_eq!(names(&report), [("Formate eluent", "changed")]);
    let output = repository.run(&["compare"]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(repository.run(&["compare", "--files", "buffers.prep"]).status.code(), Some(2));
    assert!(text(&repository.run(&["compare", "--files", "buffers.prep", "nowhere.prep"]).stderr).contains("no file or folder"));
}

#[test]
fn hostile_names_stay_text_in_every_format() {
    let repository = repository("markup");
    let name = "<img src=x onerror=alert(1)> @all | `x` [y](z) *b* \u{1b}[31m";
    let recipe = |grams: &str| format!("solution \"{name}\"\n    made at    25 °C\n    1 kg       water\n    {grams} g        sodium acetate\n    1 g        acetic acid\n");
    repository.write("::error::, %0A.prep", &recipe("1"));
    repository.commit("Hostile");
    repository.write("::error::, %0A.prep", &recipe("9"));
    let markdown = repository.prints(0, &["compare", "--format", "markdown"]);
    assert!(!markdown.contains("<img") && !markdown.contains("@all") && !markdown.contains('\u{1b}') && markdown.contains("&lt;img"), "{markdown}");
    let html = repository.prints(0, &["compare", "--format", "html"]);
    assert!(!html.contains("<img") && html.contains("&lt;img"), "{html}");
    let commands = repository.prints(0, &["compare", "--format", "workflow-commands"]);
    assert!(commands.lines().all(|line| line.starts_with("::notice title=What this line changes,file=%3A%3Aerror%3A%3A%2C %250A.prep,line=")), "{commands}");
    assert!(!repository.prints(0, &["compare"]).contains('\u{1b}'));
}
