//! The library's pKa values at 25 °C beside a second published source, `tests/published/pka.csv`, with the choice where they differ.

use camino::Utf8Path;
use scruple::workspace::Workspace;

/// Two sources agree within this.
const AGREES: f64 = 0.025;

/// Where they do not: the acid, the source that was not taken, the size of the difference, and why the library's value was chosen.
const CHOSEN: &[(&str, &str, f64, &str)] = &[
    ("arsenic acid", "Martell", 0.07, "Goldberg et al. weigh the measurements and give their temperature course"),
    ("dihydrogen arsenate", "Martell", 0.09, "Goldberg et al. weigh the measurements and give their temperature course"),
    ("oxalic acid", "Hummel", 0.13, "the equation of the Harned cell, which measured the oxalate standards, wants the first pKa of Goldberg et al."),
    ("hydrogen citrate", "Hummel", 0.036, "Bates & Pinching 1949 measured it in cells without liquid junction, on which the citrate standard rests"),
];

#[test]
fn a_second_source_agrees_or_the_choice_is_told() {
    let folder = Utf8Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published");
    let text = std::fs::read_to_string(folder.join("pka.csv")).expect("the table of pKa values");
    let mut workspace = Workspace::new();
    workspace.open_root(&folder, &folder);
    let snapshot = workspace.snapshot();
    let file = snapshot.files.values().next().expect("a file of the root").id;
    let chemistry = &snapshot.constituents(file).chemistry;
    let (mut compared, mut told, mut wrong) = (0, 0, Vec::new());
    for line in text.lines().filter(|line| !line.starts_with('#')).skip(1) {
        let [acid, published, source] = line.split(',').collect::<Vec<_>>()[..] else { panic!("three fields on {line}") };
        let published: f64 = published.parse().expect("a pKa");
        let name = format!("pKa of {acid}");
        let constant = chemistry.constants().find(|(_, constant)| constant.name == name).unwrap_or_else(|| panic!("the library has no {name}")).1;
        // The constant forms the acid, so its logarithm is the pKa.
        let difference = constant.log10_k(298.15) - published;
        let choice = CHOSEN.iter().find(|(chosen, other, ..)| *chosen == acid && source.starts_with(other));
        println!("{acid:28} {published:8.3} {difference:+8.3}  {source}");
        compared += 1;
        match choice {
            None if difference.abs() > AGREES => wrong.push(format!("{acid} differs from {source} by {difference:+.3}, and no choice is told")),
            Some((_, _, size, why)) if difference.abs() > size * 1.05 => wrong.push(format!("{acid} is {difference:+.3} from {source}, further than told ({why})")),
            Some(_) => told += 1,
            None => {}
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(compared >= 42 && told == CHOSEN.len(), "{compared} compared, {told} choices");
}
