//! The parser and the formatter on every text: nothing panics, nothing is lost, one line never hides another.

use proptest::prelude::*;

use scruple::syntax::tree::*;
use scruple::syntax::{format, parse, parse_reusing};
use scruple::text::Span;

/// Pieces of which lines are made, right and wrong.
const PIECES: [&str; 78] = [
    "solution", "bottle", "ion", "lab", "use", "5", "0.5", "1,5", "05", "−20", "5–6", "1:10", "1e3", "1e999", "g", "mL", "mol/L", "% w/w",
    "%", "N", "ppm", "°C", "x", "sodium chloride", "2-propanol", "10x PBS", "\"a, b\"", "\"open", ",", ", ", " / ", "/", " to ", " or ",
    "±", "+-", "q.s.", "qs ", "about", "expect", "pH", "pH7", "ionic strength", "total calcium", "at least", "at", "diluted", "10-fold",
    "with", "as P", "because", "accept", "step", "note a,b", "#", "# c", "##", "\n", "\r\n", "\n,", "\t", "\u{A0}", "\u{200B}", "\u{FEFF}",
    "К", "(1 + 9)", "(", "under 5 % CO2", "used at", "stored", "from", "purity", "pKa", "- 3 + 2 T", "formula NaCl", "gives", "flask", "class A",
];

fn text() -> impl Strategy<Value = String> {
    let piece = prop::sample::select(&PIECES[..]);
    prop::collection::vec((piece, prop::sample::select(&[" ", "", "  ", "\n"][..])), 0..24)
        .prop_map(|pieces| pieces.into_iter().map(|(piece, gap)| format!("{piece}{gap}")).collect())
}

fn check(text: &str) {
    let tree = parse(text);
    let mut at = 0;
    for placed in &tree.lines {
        assert_eq!(placed.start, at);
        let line = &placed.line;
        assert_eq!(text.get(at..at + line.text.len()), Some(line.text.as_str()));
        at += line.text.len();
        let fits = |span: Span| line.text.get(span.start..span.end).is_some();
        let mut end = 0;
        for token in &line.tokens {
            assert!(fits(token.span), "{token:?} in {:?}", line.text);
            assert!(token.span.start >= end || token.span.is_empty(), "{:?} overlap in {:?}", line.tokens, line.text);
            end = end.max(token.span.end);
        }
        for fault in &line.faults {
            assert!(fits(fault.span), "{fault:?} in {:?}", line.text);
            assert!(fault.readings.iter().all(|reading| fits(reading.span)), "{fault:?} in {:?}", line.text);
        }
    }
    assert_eq!(at, text.len());
    let formatted = format(text);
    assert_eq!(format(&formatted), formatted, "formatted twice: {text:?}");
    assert_eq!(meaning(&parse(&formatted)), meaning(&tree), "{text:?} became {formatted:?}");
}

/// What a tree says, free of places and of the white space inside unquoted names.
fn meaning(tree: &Tree) -> Vec<String> {
    // White space after the last line break is no line once it is gone.
    let ends_in_spaces = tree.lines.last().is_some_and(|last| last.line.text.trim().is_empty() && !last.line.text.contains(['\n', '\r']));
    tree.lines
        .iter()
        .take(tree.lines.len() - usize::from(ends_in_spaces))
        .map(|placed| {
            let line = &placed.line;
            let kinds: Vec<TokenKind> = line.tokens.iter().map(|token| token.kind).collect();
            let faults: Vec<&FaultKind> = line.faults.iter().map(|fault| &fault.kind).collect();
            without_places(&format!("{:?} {kinds:?} {faults:?}", line.content))
        })
        .collect()
}

fn without_places(debug: &str) -> String {
    let mut plain = String::new();
    let mut rest = debug;
    while let Some(at) = rest.find("Span { start: ").into_iter().chain(rest.find("Missing(")).min() {
        let (before, after) = rest.split_at(at);
        plain.push_str(before);
        if after.starts_with("Span") {
            rest = &after[after.find('}').expect("a span ends") + 1..];
        } else {
            plain.push_str("Missing(");
            rest = after["Missing(".len()..].trim_start_matches(|digit: char| digit.is_ascii_digit());
        }
    }
    plain + rest
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn every_text_of_the_trade_has_a_tree(text in text()) {
        check(&text);
    }

    #[test]
    fn every_text_has_a_tree(text in "\\PC{0,80}") {
        check(&text);
    }

    #[test]
    fn reusing_lines_changes_nothing(before in text(), after in text()) {
        let old = parse(&before);
        prop_assert_eq!(parse_reusing(&after, &old), parse(&after));
    }
}

#[test]
fn a_line_too_long_is_junk_of_one_fault() {
    let text = format!("9 g {}\n5 g sodium chloride\n", "x".repeat(10_000));
    let tree = parse(&text);
    assert_eq!(tree.lines[0].line.faults.len(), 1);
    assert_eq!(tree.lines[0].line.faults[0].kind, FaultKind::TooLong);
    assert!(tree.lines[1].line.faults.is_empty());
}

/// The work on a line is bounded; the longest lines, and the most winding, must stay well within the bound.
#[test]
fn no_line_takes_long() {
    for line in [
        format!("5 g {}", "a ".repeat(4900)),
        format!("5 g{}x", " ".repeat(9900)),
        format!("expect total {}", "1 ".repeat(4900)),
        format!("expect total {}", "at least 1 g/L at 1 °C ".repeat(400)),
        format!("expect total {}", "1 to 2 ".repeat(1400)),
        format!("5 g {}", "/ ".repeat(4900)),
        format!("formula {}", "(".repeat(9900)),
        format!("5 g a{}", ", x".repeat(3000)),
        format!("pKa 1{}", " + 1".repeat(2400)),
        format!("\"{}", "\"\"".repeat(4900)),
        format!("5 g x{}", "\n,".repeat(4900)),
        "1 ".repeat(4900),
        "1,".repeat(4900),
        "#".repeat(9900),
    ] {
        let tree = parse(&line);
        let faults = tree.lines.iter().flat_map(|placed| &placed.line.faults);
        assert!(faults.clone().all(|fault| fault.kind != FaultKind::TooLong), "{:?}…", &line[..20]);
    }
}

/// The library as it is being typed: each prefix of each line. Other lines must stay as they are.
#[test]
fn half_typed_lines_have_a_tree() {
    let library = include_str!("fixtures/library.prep");
    let lines: Vec<&str> = library.split_inclusive('\n').collect();
    let before = parse(library);
    let (mut tries, mut junk) = (0, 0);
    for (index, line) in lines.iter().enumerate() {
        let content = line.trim_end_matches('\n');
        let indent = content.len() - content.trim_start().len();
        for (end, _) in content.char_indices().skip(indent + 1).chain([(content.len(), ' ')]) {
            let typed = parse(&content[..end]);
            tries += 1;
            if typed.lines.iter().any(|placed| matches!(placed.line.content, Content::Junk(_))) {
                junk += 1;
            }
            let mut whole: Vec<&str> = lines.clone();
            let part = format!("{}\n", &content[..end]);
            whole[index] = &part;
            let tree = parse_reusing(&whole.concat(), &before);
            assert_eq!(tree.lines.len(), before.lines.len(), "{part:?}");
        }
    }
    println!("{junk} of {tries} states of a line that is being typed are junk");
    assert!(junk * 100 <= tries * 9, "{junk} of {tries}");
}

/// One character of the library deleted, and a comma and a space put anywhere: how often the line itself loses its tree, and
/// whether other lines do or pass into another block.
#[test]
fn damaged_lines_hide_no_others() {
    let library = include_str!("fixtures/library.prep");
    let lines: Vec<&str> = library.split_inclusive('\n').collect();
    let before = parse(library);
    let home = homes(&before);
    let (mut deleted, mut put) = ((0, 0), (0, 0));
    for (index, line) in lines.iter().enumerate() {
        let content = line.trim_end_matches('\n');
        let indent = content.len() - content.trim_start().len();
        for (at, letter) in content.char_indices().skip(indent) {
            for (count, text) in [
                (&mut deleted, format!("{}{}\n", &content[..at], &content[at + letter.len_utf8()..])),
                (&mut put, format!("{}, {}\n", &content[..at], &content[at..])),
            ] {
                let mut whole: Vec<&str> = lines.clone();
                whole[index] = &text;
                let tree = parse_reusing(&whole.concat(), &before);
                count.0 += 1;
                if tree.lines.len() != before.lines.len() {
                    // The line begins with a comma now and continues the one above, which keeps its values.
                    assert!(text.trim_start().starts_with(','), "{text:?}");
                    continue;
                }
                count.1 += usize::from(matches!(tree.lines[index].line.content, Content::Junk(_)));
                for (other, placed) in tree.lines.iter().enumerate().filter(|(other, _)| *other != index) {
                    assert_eq!(placed.line, before.lines[other].line, "{text:?} changes another line");
                }
                // A header that has lost its word keeps its lines, nameless; no line passes into the block above.
                assert_eq!(homes(&tree), home, "{text:?} moves lines into another block");
            }
        }
    }
    println!("junk: {} of {} lines that lost a character, {} of {} that gained a comma", deleted.1, deleted.0, put.1, put.0);
    assert!(deleted.1 * 1286 <= deleted.0 * 149, "{deleted:?}");
    assert!(put.1 * 1286 <= put.0 * 139, "{put:?}");
}

/// Of each line below the file's head, the line that opens its block.
fn homes(tree: &Tree) -> Vec<Option<usize>> {
    const HEAD: usize = 3;
    tree.blocks().flat_map(|block| block.lines.map(move |_| block.header)).skip(HEAD).collect()
}

/// Wrong lines, each with the word that is wrong: the first fault must lie on it.
#[test]
fn faults_point_at_the_wrong_word() {
    let lines = [
        ("5 % sodium chloride", "%"), ("0.1 N NaOH", "N"), ("5 ppm EDTA", "ppm"), ("1,5 mol/L Tris", "1,5"), ("10 mL 1,5 mol/L sodium hydroxide", "1,5"),
        ("10 mL 37 % hydrochloric acid", "%"), ("10 mL 6N HCl", "N"), ("5 gm sodium chloride", "gm"), ("5 cc water", "cc"), ("5 mg/dL glucose", "mg/dL"),
        ("5 mmol L-1 sodium chloride", "mmol L-1"), ("5 mol·L⁻¹ Tris", "mol·L⁻¹"), ("5 Kg water", "Kg"), ("5 gsodium chloride", "gsodium"), ("5 °C water", "°C"),
        ("5 min water", "min"), ("05 g x", "05"), (".5 g x", ".5"), ("1:10 PBS", "1:10"), ("-5 g x", "-5"), ("5–6 g x", "5–6"), ("100 mL 10x PBS", "10x"),
        ("5 g 3 g x", "3 g"), ("5 g: x", "g:"), ("5 g = x", "="), ("- 5 g x", "- "), ("5 g x; purity 9 %", ";"), ("1 g “x”", "“x”"), ("1 g \"x", "\"x"),
        ("5 g x, puriti 99 %", "puriti 99 %"), ("5 g x, 99 %", "99 %"), ("5 g x, purity 105 %", "105 %"), ("5 g x, purity 99,5 %", "99,5"), ("5 g x, ± 0.01", "0.01"),
        ("5 g x,", ","), ("q.s. water to mark", "mark"), ("q.s. water to volume", "volume"), ("q.s. NaOH to pH 7,4", "7,4"), ("q.s. NaOH to pH=7.4", "=7.4"),
        ("q.s. NaOH to pH 7.35–7.45", "7.35–7.45"), ("q.s. NaOH to pH 48", "48"), ("q.s. KCl to osmolality 290 mOsm/kg", "mOsm/kg"), ("q.s. KCl to ionic strength 150", "150"),
        ("q.s. water ad 1 L", "ad"), ("50 mmol/L Tris /Tris hydrochloride to pH 8.1", "/"), ("50 mmol/L Tris hydrochloride to pH 8.1", "to pH 8.1"),
        ("expect ionic strenght 0.1 to 0.2 mol/L", "ionic strenght"), ("expect pH 7.1 to 6.9", "7.1 to 6.9"), ("expect pH > 6.9", "> 6.9"), ("expect pH 7", "7"),
        ("expect ionic strength 0.1 to 0.2", "0.2"), ("made at RT", "RT"), ("made at 22", "22"), ("made at 22 °C, used at 4 °C", ", used at 4 °C"), ("stored at 4 °C for 3 fortnights", "fortnights"),
        ("hazard H314 H335", "H314 H335"), ("CAS 77–86–1", "77–86–1"), ("formula NaCk", "Ck"), ("soluton X", "soluton"), ("Made at 22 °C", "Made"),
    ];
    let mut wrong = Vec::new();
    for (line, at) in lines {
        let tree = parse(line);
        let faults = &tree.lines[0].line.faults;
        let first = faults.first().map(|fault| fault.span.of(line));
        if first != Some(at) || faults.len() != 1 {
            wrong.push(format!("{line:?}: {at:?} is wrong, the faults are {faults:?}"));
        }
    }
    assert!(wrong.is_empty(), "{} of {}:\n{}", wrong.len(), lines.len(), wrong.join("\n"));
}
