//! The architecture as a test: which room may name which, what may occur only where, how long a file may be, and that the
//! developers' page names only what exists.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

/// Every room with those that it may name, lowest first.
const MAY_USE: &[(&str, &[&str])] = &[
    ("text", &[]),
    ("units", &[]),
    ("chemistry", &[]),
    ("finding", &["text"]),
    ("syntax", &["text", "units"]),
    ("model", &["text", "units", "chemistry", "finding", "syntax"]),
    ("library", &["text", "units", "chemistry", "finding", "syntax", "model"]),
    ("evaluate", &["text", "units", "chemistry", "finding", "syntax", "model", "library"]),
    ("advice", &["text", "units", "chemistry", "finding", "syntax", "model", "library", "evaluate"]),
    ("workspace", &["text", "units", "chemistry", "finding", "syntax", "model", "library", "evaluate", "advice"]),
    ("review", &["text", "units", "chemistry", "finding", "syntax", "model", "evaluate", "workspace"]),
    ("editor", &["text", "units", "chemistry", "finding", "syntax", "model", "library", "evaluate", "advice", "workspace"]),
    ("report", &["text", "units", "chemistry", "finding", "syntax", "model", "library", "evaluate", "advice", "workspace", "review"]),
    (
        "server",
        &["text", "units", "chemistry", "finding", "syntax", "model", "library", "evaluate", "advice", "workspace", "editor", "report"],
    ),
    ("command", &["text", "units", "finding", "syntax", "model", "library", "workspace", "review", "report"]),
];

/// Words that may stand only in some places, as paths below `src`.
const ONLY_IN: &[(&[&str], &[&str])] = &[
    (&["pest::", "pest_derive"], &["syntax"]),
    (&["ropey::"], &["text"]),
    (&["tower_lsp", "lsp_types", "tokio::", "futures::", "tower::"], &["server"]),
    (&["clap::", "clap_complete", "indicatif::", "anstream::"], &["command"]),
    (&["annotate_snippets"], &["report/excerpt.rs"]),
    (&["ignore::"], &["workspace/disk.rs"]),
    (&["toml::"], &["workspace/configuration.rs"]),
    (&["print!(", "println!(", "eprint!(", "eprintln!(", "stdout()", "stderr()"], &["command", "main.rs", "server/mod.rs"]),
    (
        &["std::fs", "fs::read", "fs::write", ".metadata()", "canonicalize"],
        &["command", "server", "workspace/disk.rs"],
    ),
    (&["SystemTime", "Instant::now", "std::time"], &["command", "server"]),
    (&["std::env", "env::var"], &["command", "server", "workspace/disk.rs"]),
    (&["process::Command", "process::{Command"], &["command/git.rs", "server/watchdog.rs"]),
    (&["unsafe "], &[]),
    (&["rand::", "thread_rng"], &[]),
];

/// Files past this many lines need a reason.
const LONG: usize = 500;

/// The files that are longer, and why they stay whole.
const LONG_FOR_A_REASON: &[(&str, &str)] = &[
    ("tests/rules.rs", "every rule of the language, in its order, under one set of helpers"),
    ("src/workspace/build.rs", "one walk from files to findings, whose steps share what did not change"),
];

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Every Rust file below a folder, sorted, with its path from the package.
fn sources(folder: &str) -> Vec<(String, String)> {
    let mut files = Vec::new();
    let mut folders = vec![root().join(folder)];
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(&folder).expect("the folder is there") {
            let path = entry.expect("it can be read").path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|extension| extension == "rs") {
                let name = path.strip_prefix(root()).expect("below the package").to_string_lossy().replace('\\', "/");
                files.push((name, fs::read_to_string(&path).expect("it is text")));
            }
        }
    }
    files.sort();
    files
}

/// What is compiled into the program: code without comments, string literals and tests.
fn code(name: &str, text: &str) -> String {
    if name.ends_with("/tests.rs") || name.contains("/tests/") {
        return String::new();
    }
    let text = text.split("#[cfg(test)]\nmod tests {").next().unwrap_or_default();
    let uncommented: Vec<&str> =
        text.lines().filter(|line| !line.trim_start().starts_with("//")).map(|line| line.split(" // ").next().unwrap_or_default()).collect();
    let mut out = String::new();
    let mut in_string = false;
    let mut last = ' ';
    for character in uncommented.join("\n").chars() {
        // A quotation mark as a character literal opens nothing.
        if character == '"' && last != '\\' && (last != '\'' || in_string) {
            in_string = !in_string;
        }
        if !in_string {
            out.push(character);
        }
        last = if last == '\\' && character == '\\' { ' ' } else { character };
    }
    out
}

/// The room of a file: the folder or file below `src`.
fn room(name: &str) -> &str {
    name.trim_start_matches("src/").split(['/', '.']).next().unwrap_or_default()
}

/// The rooms that code names, by `crate::room` or `crate::{room, …}`.
fn named_rooms(code: &str) -> BTreeSet<String> {
    let mut named = BTreeSet::new();
    for rest in code.split("crate::").skip(1) {
        let listed = match rest.strip_prefix('{') {
            Some(group) => {
                let mut depth = 0;
                let end = group.find(|character| match character {
                    '{' => {
                        depth += 1;
                        false
                    }
                    '}' => {
                        depth -= 1;
                        depth < 0
                    }
                    _ => false,
                });
                group[..end.unwrap_or(group.len())].split(',').map(str::trim).collect::<Vec<_>>()
            }
            None => vec![rest],
        };
        for path in listed {
            let word: String = path.chars().take_while(|character| character.is_alphanumeric() || *character == '_').collect();
            named.insert(word);
        }
    }
    named
}

#[test]
fn a_room_names_only_those_below_it() {
    let rooms: BTreeSet<&str> = MAY_USE.iter().map(|(room, _)| *room).collect();
    let mut wrong = Vec::new();
    let mut seen = BTreeSet::new();
    for (name, text) in sources("src") {
        let own = room(&name);
        if matches!(own, "lib" | "main") {
            continue;
        }
        let Some((_, allowed)) = MAY_USE.iter().find(|(room, _)| *room == own) else {
            wrong.push(format!("{name}: no such room in the table"));
            continue;
        };
        seen.insert(own.to_owned());
        for named in named_rooms(&code(&name, &text)) {
            if rooms.contains(named.as_str()) && named != own && !allowed.contains(&named.as_str()) {
                wrong.push(format!("{name} names {named}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert_eq!(seen.len(), MAY_USE.len(), "every room of the table is there");
}

#[test]
fn the_table_of_rooms_has_no_circle() {
    for (index, (room, allowed)) in MAY_USE.iter().enumerate() {
        for other in *allowed {
            let below = MAY_USE.iter().position(|(name, _)| name == other).expect("a room of the table");
            assert!(below < index, "{room} stands above {other}");
        }
    }
}

#[test]
fn words_stand_only_where_they_belong() {
    let mut wrong = Vec::new();
    for (name, text) in sources("src") {
        let code = code(&name, &text);
        let place = name.trim_start_matches("src/");
        for (words, allowed) in ONLY_IN {
            let belongs = allowed.iter().any(|folder| place == *folder || place.starts_with(&format!("{folder}/")));
            for word in *words {
                if !belongs && code.contains(word) {
                    wrong.push(format!("{name} has `{word}`"));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_file_says_what_it_is_for_and_long_ones_say_why() {
    let mut wrong = Vec::new();
    for (name, text) in sources("src").into_iter().chain(sources("tests").into_iter().filter(|(name, _)| !name.contains(".tools"))) {
        if !text.starts_with("//! ") {
            wrong.push(format!("{name} does not open with what it is for"));
        }
        let lines = text.lines().count();
        let reason = LONG_FOR_A_REASON.iter().find(|(file, _)| *file == name);
        match (lines > LONG, reason) {
            (true, None) => wrong.push(format!("{name} has {lines} lines and no reason for it")),
            (false, Some(_)) => wrong.push(format!("{name} has {lines} lines; take it out of the table")),
            _ => {}
        }
    }
    for (name, _) in LONG_FOR_A_REASON {
        if !root().join(name).is_file() {
            wrong.push(format!("{name} is in the table and not there"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_path_in_the_developers_page_exists() {
    let page = fs::read_to_string(root().join("DEVELOPERS.md")).expect("the page is there");
    let mut looked_at = 0;
    for quoted in page.split('`').skip(1).step_by(2) {
        let starts = ["src/", "tests/", "grammar/", "editors/", "Cargo.", "README", "CHANGELOG", ".clippy"];
        if !starts.iter().any(|start| quoted.starts_with(start)) || quoted.contains([' ', '*', '…', 'N']) && !quoted.ends_with(".md") {
            continue;
        }
        looked_at += 1;
        let path: PathBuf = root().join(quoted.trim_end_matches('/'));
        assert!(path.exists(), "DEVELOPERS.md names {quoted}, which is not there");
    }
    assert!(looked_at > 20, "only {looked_at} paths were found in DEVELOPERS.md");
}

#[test]
fn every_dependency_has_its_reason_and_is_used() {
    let page = fs::read_to_string(root().join("DEVELOPERS.md")).expect("the page is there");
    let manifest = fs::read_to_string(root().join("Cargo.toml")).expect("the manifest is there");
    let program: String = sources("src").into_iter().map(|(_, text)| text).collect();
    let mut table = "";
    for line in manifest.lines() {
        if line.starts_with('[') {
            table = line;
        } else if table.ends_with("dependencies]") && let Some((name, _)) = line.split_once(" = ") {
            assert!(page.contains(&format!("`{name}`")), "DEVELOPERS.md gives no reason for {name}");
            let path = name.replace('-', "_");
            assert!(table == "[dev-dependencies]" || program.contains(&path), "nothing uses {name}");
        }
    }
}
