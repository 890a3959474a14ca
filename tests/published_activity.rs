//! Activities against the outside: mean activity coefficients and osmotic coefficients of `tests/published/activity.csv`.
//!
//! The goals are 3 % for mean activity coefficients and 2 % for osmotic coefficients, to 1 mol/kg at 25 °C. What is tabulated is
//! stoichiometric, so the activities of the free ions are set against the whole molality.

use std::collections::BTreeMap;
use std::sync::Arc;

use camino::Utf8Path;
use scruple::chemistry::State;
use scruple::model::NameKey;
use scruple::text::SourceText;
use scruple::workspace::Workspace;

/// The ions of each salt, with their counts; none for what dissolves as itself.
const IONS: &[(&str, &[(&str, u32)])] = &[
    ("ammonium sulfate", &[("ammonium", 2), ("sulfate", 1)]),
    ("barium chloride", &[("barium", 1), ("chloride", 2)]),
    ("caesium chloride", &[("caesium", 1), ("chloride", 1)]),
    ("calcium chloride", &[("calcium", 1), ("chloride", 2)]),
    ("hydrochloric acid", &[("hydrogen", 1), ("chloride", 1)]),
    ("lithium nitrate", &[("lithium", 1), ("nitrate", 1)]),
    ("magnesium chloride", &[("magnesium", 1), ("chloride", 2)]),
    ("magnesium sulfate", &[("magnesium", 1), ("sulfate", 1)]),
    ("potassium acetate", &[("potassium", 1), ("acetate", 1)]),
    ("potassium bromide", &[("potassium", 1), ("bromide", 1)]),
    ("potassium chloride", &[("potassium", 1), ("chloride", 1)]),
    ("potassium nitrate", &[("potassium", 1), ("nitrate", 1)]),
    ("potassium sulfate", &[("potassium", 2), ("sulfate", 1)]),
    ("silver nitrate", &[("silver", 1), ("nitrate", 1)]),
    ("sodium acetate", &[("sodium", 1), ("acetate", 1)]),
    ("sodium chloride", &[("sodium", 1), ("chloride", 1)]),
    ("sodium hydroxide", &[("sodium", 1), ("hydroxide", 1)]),
    ("sodium sulfate", &[("sodium", 2), ("sulfate", 1)]),
    ("sucrose", &[]),
];

/// Goals by quantity, relative.
const GOALS: &[(&str, f64)] = &[("gamma", 0.03), ("phi", 0.02)];

/// Goals not met: substance and quantity, the worst relative difference so far, and why. It may not grow; what meets its goal
/// should leave the table.
const NOT_MET: &[(&str, f64, &str)] = &[
    ("gamma barium chloride", 0.0337, "two tables differ by 3 % at 0.5 mol/kg; the other one is met"),
    ("gamma magnesium sulfate", 0.0379, "ion pairs with one constant and one coefficient"),
    ("gamma potassium sulfate", 0.0540, "two tables differ by 5 % at 0.5 mol/kg; the other one is met"),
    ("gamma silver nitrate", 0.0415, "one coefficient does not follow the ion pairs of silver nitrate"),
    ("phi sodium sulfate", 0.0226, "ion pairs with one constant and one coefficient"),
];

struct Row<'a> {
    substance: &'a str,
    molality: f64,
    quantity: &'a str,
    published: f64,
    source: &'a str,
}

fn rows(text: &str) -> Vec<Row<'_>> {
    text.lines()
        .filter(|line| !line.starts_with('#'))
        .skip(1)
        .map(|line| {
            let [substance, molality, quantity, published, source] = line.split(',').collect::<Vec<_>>()[..] else {
                panic!("five fields on {line}")
            };
            Row { substance, molality: molality.parse().unwrap(), quantity, published: published.parse().unwrap(), source }
        })
        .collect()
}

/// The stoichiometric mean activity coefficient of a salt.
fn mean_coefficient(state: &State, ions: &[(&str, u32)], molality: f64, species: impl Fn(&str) -> Option<scruple::chemistry::SpeciesId>) -> f64 {
    let (mut sum, mut count) = (0.0, 0.0);
    for (ion, number) in ions {
        let id = species(ion).unwrap_or_else(|| panic!("the library has no {ion}"));
        let activity = state.log10_activity(id).unwrap_or_else(|| panic!("{ion} is not present"));
        let number = f64::from(*number);
        sum += number * (activity - (number * molality).log10());
        count += number;
    }
    10_f64.powf(sum / count)
}

#[test]
fn published_activities_are_met() {
    let folder = Utf8Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published");
    let text = std::fs::read_to_string(folder.join("activity.csv")).expect("the table of activities");
    let rows = rows(&text);
    // One recipe for each molality of each substance, as a user would write it.
    let mut recipes = String::new();
    for (index, row) in rows.iter().enumerate() {
        recipes += &format!("solution Row {index}\n    made at    25 °C\n    1 kg       water\n    {} mol/kg {}\n\n", row.molality, row.substance);
    }
    let mut workspace = Workspace::new();
    let file = workspace.set_open_text(&folder.join("activity.prep"), Arc::new(SourceText::from(recipes.as_str())));
    let snapshot = workspace.snapshot();
    let constituents = snapshot.constituents(file);
    let mut groups: BTreeMap<String, (f64, f64, String)> = BTreeMap::new();
    let mut blocks = snapshot.solutions().filter(|(state, _, _)| state.id == file);
    for row in &rows {
        let (_, index, _) = blocks.next().expect("a solution for each row");
        let evaluation = &snapshot.checked(file, index).expect("every solution is checked").evaluation;
        let outcome = evaluation.outcome().unwrap_or_else(|| panic!("{} has no values: {:?}", row.substance, evaluation.findings));
        let state = outcome.finished.as_ref().unwrap_or_else(|failure| panic!("{}: {failure:?}", row.substance));
        let ions = IONS.iter().find(|(salt, _)| *salt == row.substance).unwrap_or_else(|| panic!("the ions of {}", row.substance)).1;
        let computed = match row.quantity {
            "gamma" => mean_coefficient(state, ions, row.molality, |ion| constituents.named(&NameKey::new(ion))?.species),
            _ => {
                let particles = ions.iter().map(|(_, number)| f64::from(*number)).sum::<f64>().max(1.0);
                state.osmolality_mol_per_kg() / (particles * row.molality)
            }
        };
        let difference = computed / row.published - 1.0;
        let place = format!("{} mol/kg, {}: {computed:.4}, published {:.4}", row.molality, row.source, row.published);
        let worst = groups.entry(format!("{} {}", row.quantity, row.substance)).or_insert((0.0, 0.0, place.clone()));
        worst.1 += 1.0;
        if difference.abs() > worst.0.abs() {
            (worst.0, worst.2) = (difference, place);
        }
    }
    let mut wrong = Vec::new();
    for (group, (difference, count, place)) in &groups {
        let goal = GOALS.iter().find(|(quantity, _)| group.starts_with(quantity)).expect("a goal").1;
        let known = NOT_MET.iter().find(|(known, _, _)| known == group);
        println!("{group:32} {count:4} {:+7.2} %  at {place}", 100.0 * difference);
        match known {
            None if difference.abs() > goal => wrong.push(format!("{group}: off by {:.2} % at {place}", 100.0 * difference)),
            Some((_, recorded, reason)) if difference.abs() > recorded + 5e-4 => {
                wrong.push(format!("{group}: off by {:.2} % at {place}, worse than recorded ({reason})", 100.0 * difference));
            }
            Some(_) if difference.abs() <= goal => println!("{group} meets its goal now; take it out of the table"),
            _ => {}
        }
    }
    assert!(rows.len() >= 300 && groups.len() >= 20, "{} rows in {} groups", rows.len(), groups.len());
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
