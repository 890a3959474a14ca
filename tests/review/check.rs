//! `check` in continuous integration: formats, columns, hostile names, what changed since a revision, known findings.

use std::collections::BTreeSet;

use serde_json::Value;

use super::laboratory::{BUFFERS, repository, text};

/// A recipe whose mistake stands behind characters of one, two, three and four bytes on its line, in a folder and a block with
/// hostile names.
const HOSTILE_FILE: &str = "odd, names/µ <b>#1%: ::error::x.prep";
const HOSTILE: &str = "solution \"::error::%0A | <script>alert(1)</script> @all µ\"
    made at    25 °C
    1 kg       water
    0,5 g      sodium chloride
    1 g        \"µ 😀 𝛂 salt\"
";

fn findings_of(sarif: &Value) -> &Vec<Value> {
    sarif["runs"][0]["results"].as_array().unwrap()
}

#[test]
fn each_format_counts_columns_in_its_own_unit() {
    let repository = repository("columns");
    repository.write(HOSTILE_FILE, HOSTILE);
    let line = HOSTILE.lines().nth(4).unwrap();
    let own = |code: &Value| code == "unknown-name";

    let json = repository.json(1, &["check", ".", "--format", "json"]);
    let found = json.as_array().unwrap().iter().find(|finding| own(&finding["code"])).unwrap();
    assert_eq!(found["line"], 5);
    let column = |name: &str| found[name].as_u64().unwrap() as usize;
    let (start, characters) = (column("column"), column("end_column"));
    let marked: String = line.chars().skip(start - 1).take(characters - start).collect();
    assert!(marked.contains("µ 😀 𝛂 salt"), "{marked}");
    let before: String = line.chars().take(characters - 1).collect();
    let (utf8, utf16) = (before.len() + 1, before.encode_utf16().count() + 1);
    assert_eq!(BTreeSet::from([utf8, utf16, characters]).len(), 3, "the line tells the units apart");

    let sarif = repository.json(0, &["check", ".", "--format", "sarif"]);
    assert_eq!(sarif["runs"][0]["columnKind"], "utf16CodeUnits");
    let found = findings_of(&sarif).iter().find(|result| own(&result["ruleId"])).unwrap();
    let place = &found["locations"][0]["physicalLocation"];
    assert_eq!(place["region"]["endColumn"], utf16);
    assert_eq!(place["artifactLocation"]["uri"], "odd%2C%20names/%C2%B5%20%3Cb%3E%231%25%3A%20%3A%3Aerror%3A%3Ax.prep");

    let rdjson = repository.json(1, &["check", ".", "--format", "rdjson"]);
    let found = rdjson["diagnostics"].as_array().unwrap().iter().find(|found| own(&found["code"]["value"])).unwrap();
    assert_eq!(found["location"]["range"]["end"]["column"], utf8);

    let commands = repository.prints(1, &["check", ".", "--format", "workflow-commands"]);
    let found = commands.lines().find(|line| line.contains("title=unknown-name")).unwrap();
    assert!(found.contains(&format!(",line=5,endLine=5,col={start},endColumn={characters}::")), "{found}");
}

#[test]
fn names_and_paths_stay_data() {
    let repository = repository("hostile");
    repository.write(HOSTILE_FILE, HOSTILE);
    let commands = repository.prints(1, &["check", ".", "--format", "workflow-commands"]);
    for line in commands.lines().filter(|line| line.trim_start().starts_with("::")) {
        let (properties, _) = line[2..].split_once("::").unwrap();
        let (command, properties) = properties.split_once(' ').unwrap();
        assert!(["error", "warning", "notice"].contains(&command), "{line}");
        for property in properties.split(',') {
            let (name, value) = property.split_once('=').unwrap();
            assert!(["title", "file", "line", "endLine", "col", "endColumn"].contains(&name), "{line}");
            assert!(!value.contains(':'), "{line}");
        }
    }
    assert!(commands.contains("file=odd%2C names/µ <b>#1%25%3A %3A%3Aerror%3A%3Ax.prep"), "{commands}");

    let junit = repository.prints(1, &["check", ".", "--format", "junit"]);
    assert!(!junit.contains("<b>") && !junit.contains("<script>"), "{junit}");
    assert!(junit.contains("&lt;script&gt;"), "{junit}");
}

#[test]
fn a_service_names_files_from_the_top_of_the_repository() {
    let repository = repository("top");
    repository.write("deep/odd.prep", HOSTILE);
    let of = |format: &str| text(&repository.run_in("deep", &["check", ".", "--format", format]).stdout);
    for (format, whole) in [("sarif", true), ("code-quality", true), ("workflow-commands", true), ("rdjson", false), ("junit", false)] {
        let report = of(format);
        assert!(report.contains("odd.prep") && report.contains("deep/odd.prep") == whole, "{format}");
    }
}

#[test]
fn several_reports_come_out_of_one_run() {
    let repository = repository("several");
    repository.write("odd.prep", HOSTILE);
    let arguments = ["check", ".", "--output", "sarif=out.sarif", "--output", "junit=out.xml", "--output", "text=out.txt"];
    let printed = repository.prints(1, &arguments);
    assert_eq!(repository.read("out.txt"), printed);
    assert!(repository.read("out.xml").starts_with("<?xml"));
    assert_eq!(repository.read("out.sarif"), repository.prints(0, &["check", ".", "--format", "sarif"]));
    assert_eq!(repository.run(&["check", ".", "--output", "sarif"]).status.code(), Some(2), "no file");
    assert_eq!(repository.prints(0, &["check", ".", "--exit-zero"]), printed);
}

#[test]
fn fingerprints_outlive_moved_lines_and_changed_numbers() {
    let repository = repository("fingerprints");
    let failing = |strength: &str| BUFFERS.replace("pH 6.6 to 7.0", "pH 5.0 to 6.0").replace("30 mL      Salt", &format!("{strength} mL      Salt"));
    let fingerprints = |text: &str| {
        repository.write("buffers.prep", text);
        let report = repository.json(1, &["check", ".", "--format", "code-quality"]);
        let entries = report.as_array().unwrap().clone();
        entries.iter().map(|entry| entry["fingerprint"].as_str().unwrap().to_owned()).collect::<Vec<_>>()
    };
    let first = fingerprints(&failing("30"));
    assert!(!first.is_empty());
    assert_eq!(first, fingerprints(&format!("# A line above.\n{}", failing("40"))));
    assert_ne!(first, fingerprints(&failing("30").replace("5.0 to 6.0", "5.0 to 6.1")));
}

#[test]
fn only_what_a_change_reaches_is_told() {
    let repository = repository("since");
    // A mistake that was there before, and nobody touches.
    repository.edit("buffers.prep", "4.603 g    formic acid", "4,603 g    formic acid");
    repository.commit("A mistake");
    assert_eq!(repository.prints(0, &["check", ".", "--changed-since", "HEAD"]), "no findings in 0 files, 0 solutions\n");
    // The stock's strength breaks what the wash buffer expects, in a file that did not change.
    repository.edit("stocks.prep", "35.60 g", "5.60 g");
    let told = repository.json(1, &["check", ".", "--changed-since", "HEAD", "--format", "json"]);
    let blocks: Vec<(&str, &str)> =
        told.as_array().unwrap().iter().map(|found| (found["block"].as_str().unwrap(), found["code"].as_str().unwrap())).collect();
    assert_eq!(blocks, [("Wash buffer", "expectation-fails")]);
    let summary = repository.prints(1, &["check", ".", "--changed-since", "HEAD"]);
    assert!(summary.ends_with("1 error in 2 files, 2 solutions\n"), "{summary}");
    // Words that change no value are checked too, and so is who takes the stock.
    repository.git(&["checkout", "--quiet", "."]);
    repository.edit("stocks.prep", "T-S-02, revision 1", "T-S-02, revision 2");
    assert_eq!(repository.prints(0, &["check", ".", "--changed-since", "HEAD"]), "no findings in 2 files, 2 solutions\n");
    // A stock that vanished.
    repository.git(&["checkout", "--quiet", "."]);
    let without: String = repository.read("stocks.prep").split("\nsolution Phosphate").next().unwrap().to_owned();
    repository.write("stocks.prep", &without);
    let told = repository.json(1, &["check", ".", "--changed-since", "HEAD", "--format", "json"]);
    assert!(told.as_array().unwrap().iter().all(|found| found["block"] == "Wash buffer"), "{told}");
    // A setting reaches everything that has values; the mistake has none, and was told before.
    repository.git(&["checkout", "--quiet", "."]);
    repository.write("scruple.toml", "language = 1\nmodel = \"Davies\"\n");
    let summary = repository.prints(0, &["check", ".", "--changed-since", "HEAD"]);
    assert!(summary.ends_with("in 2 files, 4 solutions\n"), "{summary}");
}

#[test]
fn the_parting_of_histories_is_meant_by_three_dots() {
    let repository = repository("parting");
    repository.git(&["checkout", "--quiet", "-b", "own"]);
    repository.edit("buffers.prep", "T-B-01, revision 1", "T-B-01, revision 2");
    repository.commit("Own work");
    repository.git(&["checkout", "--quiet", "main"]);
    repository.edit("stocks.prep", "T-S-01, revision 1", "T-S-01, revision 2");
    repository.commit("Somebody else's work");
    repository.git(&["checkout", "--quiet", "own"]);
    let told = |revision: &str| repository.prints(0, &["check", ".", "--changed-since", revision]);
    assert_eq!(told("main..."), "no findings in 1 file, 1 solution\n");
    assert_eq!(told("main"), "no findings in 2 files, 2 solutions\n", "the other's stock differs, and the buffer takes it");
}

#[test]
fn a_revision_is_never_an_option_and_a_missing_one_is_said() {
    let repository = repository("options");
    for revision in ["--output=stolen", "-h", "nowhere", "", "HEAD:stocks.prep", "--end-of-options"] {
        let output = repository.run(&["check", ".", &format!("--changed-since={revision}")]);
        assert_eq!(output.status.code(), Some(2), "{revision}");
        assert!(text(&output.stderr).contains("is no revision of this repository"), "{}", text(&output.stderr));
    }
    assert!(!repository.path("stolen").exists());
    let outside = super::laboratory::Repository { folder: std::env::temp_dir() };
    let output = outside.run(&["check", ".", "--changed-since", "HEAD"]);
    assert!(text(&output.stderr).contains("no git repository"), "{}", text(&output.stderr));
}

#[test]
fn known_findings_are_counted_and_new_ones_are_told() {
    let repository = repository("baseline");
    repository.edit("buffers.prep", "4.603 g    formic acid", "4,603 g    formic acid");
    assert_eq!(repository.prints(0, &["check", ".", "--write-baseline", "known.json"]), "");
    let known = repository.read("known.json");
    let printed = repository.prints(0, &["check", ".", "--baseline", "known.json"]);
    assert!(printed.starts_with("no findings in 2 files, 5 solutions; ") && printed.ends_with("of the baseline not told\n"), "{printed}");
    // The same mistake elsewhere is new.
    repository.edit("buffers.prep", "2.423 g    Tris", "2,423 g    Tris");
    let told = repository.json(1, &["check", ".", "--baseline", "known.json", "--format", "json"]);
    assert!(told.as_array().unwrap().iter().all(|found| found["block"] == "Loading buffer"), "{told}");
    // What was mended is said, so that the file can be written again.
    repository.edit("buffers.prep", "2,423 g", "2.423 g");
    repository.edit("buffers.prep", "4,603 g", "4.603 g");
    let printed = repository.prints(0, &["check", ".", "--baseline", "known.json"]);
    assert!(printed.contains("of the baseline gone"), "{printed}");
    repository.edit("buffers.prep", "4.603 g", "4,603 g");
    repository.prints(0, &["check", ".", "--write-baseline", "again.json"]);
    assert_eq!(repository.read("again.json"), known, "the same findings give the same file");
    repository.write("known.json", "{}");
    assert_eq!(repository.run(&["check", ".", "--baseline", "known.json"]).status.code(), Some(2));
}

#[test]
fn the_same_run_gives_the_same_bytes() {
    let repository = repository("bytes");
    repository.write("odd.prep", HOSTILE);
    let once = || repository.run(&["check", ".", "--format", "sarif", "--output", "junit=out.xml"]).stdout;
    assert_eq!((once(), repository.read("out.xml")), (once(), repository.read("out.xml")));
}
