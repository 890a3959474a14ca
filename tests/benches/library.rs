//! How long it takes to know everything about one file, after one keystroke in it, and about a library of 1,000 files.

use std::hint::black_box;
use std::sync::Arc;

use camino::Utf8PathBuf;
use criterion::{BatchSize, Criterion, criterion_group, criterion_main};
use scruple::text::SourceText;
use scruple::workspace::Workspace;

/// A recipe of everyday size: a buffer that is set, made up, used cold and expected to hold.
fn recipe(number: usize) -> String {
    format!(
        "solution Buffer {number}
    made at    22 °C
    used at    4 °C
    800 mL     water
    {}.1{} g     sodium dihydrogen phosphate dihydrate, ± 0.01 g
    8.77 g     sodium chloride, purity 99.5 %
    q.s.       1 mol/L sodium hydroxide to pH 7.00 ± 0.20
    q.s.       water to 1 L
    step       Filter through a 0.22 µm membrane.
    stored at  4 °C for 4 weeks
    expect     ionic strength 0.1 to 0.3 mol/L
    expect     pH 6.8 to 7.3 at 4 °C

",
        2 + number % 3,
        number % 10
    )
}

fn path(number: usize) -> Utf8PathBuf {
    Utf8PathBuf::from(format!("/library/file-{number}.prep"))
}

fn workspace(files: usize, recipes: usize) -> Workspace {
    let mut workspace = Workspace::new();
    for file in 0..files {
        let text: String = (0..recipes).map(|number| recipe(file * recipes + number)).collect();
        workspace.set_open_text(&path(file), Arc::new(SourceText::from(text.as_str())));
    }
    workspace
}

fn library(criterion: &mut Criterion) {
    // The built-in library is read once per run of the program; that is measured by starting it.
    black_box(scruple::library::built_in());
    criterion.bench_function("one file of 31 recipes (403 lines), cold", |bencher| {
        bencher.iter_batched(|| workspace(1, 31), |mut workspace| workspace.snapshot(), BatchSize::PerIteration);
    });
    criterion.bench_function("one keystroke in that file", |bencher| {
        let mut workspace = workspace(1, 31);
        workspace.snapshot();
        let text: String = (0..31).map(recipe).collect();
        let changed = text.replacen("8.77 g", "8.78 g", 1);
        let texts = [Arc::new(SourceText::from(changed.as_str())), Arc::new(SourceText::from(text.as_str()))];
        let mut turn = 0;
        bencher.iter(|| {
            turn += 1;
            workspace.set_open_text(&path(0), texts[turn % 2].clone());
            black_box(workspace.snapshot())
        });
    });
    let mut group = criterion.benchmark_group("library");
    group.sample_size(10);
    group.bench_function("1,000 files of one recipe, cold", |bencher| {
        bencher.iter_batched(|| workspace(1000, 1), |mut workspace| workspace.snapshot(), BatchSize::PerIteration);
    });
    group.finish();
}

criterion_group!(benches, library);
criterion_main!(benches);
