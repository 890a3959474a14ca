//! How long a file of some 400 lines takes to parse, and one keystroke in it.

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};

use scruple::syntax::{format, parse, parse_reusing};

/// A file of some 400 different lines: the demonstration library, each copy with its own names.
fn library() -> String {
    let one = include_str!("../fixtures/library.prep");
    (0..6).map(|copy| one.replace("solution ", &format!("solution {copy}-")).replace(" mL", &format!("{copy}.5 mL"))).collect()
}

fn benches(criterion: &mut Criterion) {
    let text = library();
    let tree = parse(&text);
    println!("{} lines", tree.lines.len());
    criterion.bench_function("parse 400 lines", |bencher| bencher.iter(|| parse(black_box(&text))));
    let typed = text.replacen("8.77 g", "8.7 g", 1);
    criterion.bench_function("one keystroke in 400 lines", |bencher| bencher.iter(|| parse_reusing(black_box(&typed), &tree)));
    criterion.bench_function("format 400 lines", |bencher| bencher.iter(|| format(black_box(&text))));
}

criterion_group!(parsing, benches);
criterion_main!(parsing);
