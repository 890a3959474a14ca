//! What the language means, rule by rule: each rule of the language reference on recipes whose numbers can be checked by hand.
//!
//! Molar masses, from memory, to four figures: NaCl 58.44, KCl 74.55, glucose 180.2, KH2PO4 136.1, MgCl2·6H2O 203.3 g/mol.

#![allow(non_snake_case, reason = "pH is written so")]

use std::sync::Arc;

use camino::Utf8Path;
use scruple::evaluate::{LineOutcome, Outcome};
use scruple::finding::{Code, Level};
use scruple::text::SourceText;
use scruple::workspace::{Snapshot, Workspace};

struct Library(Arc<Snapshot>);

/// Files of one root, by name and text.
fn files(texts: &[(&str, &str)]) -> Library {
    let mut workspace = Workspace::new();
    for (name, text) in texts {
        let path = format!("/rules/{name}");
        workspace.set_open_text(Utf8Path::new(&path), Arc::new(SourceText::from(*text)));
    }
    Library(workspace.snapshot())
}

fn library(text: &str) -> Library {
    files(&[("recipe.prep", text)])
}

/// A solution called `A`, made at 25 °C.
fn solution(lines: &str) -> Library {
    library(&format!("solution A\n    made at    25 °C\n{lines}"))
}

impl Library {
    /// What came out of a solution, or of a member of a series; none where it has no values.
    fn find(&self, name: &str) -> Option<Arc<Outcome>> {
        let members = self.0.solutions().flat_map(|(file, index, _)| {
            self.0.checked(file.id, index).map(|checked| checked.evaluation.members.clone()).unwrap_or_default()
        });
        members.filter(|member| member.name == name).find_map(|member| member.outcome)
    }

    fn outcome(&self, name: &str) -> Arc<Outcome> {
        self.find(name).unwrap_or_else(|| panic!("{name} has no values: {:?}", self.said()))
    }

    fn a(&self) -> Arc<Outcome> {
        self.outcome("A")
    }

    fn said(&self) -> Vec<String> {
        let findings = self.0.files.keys().flat_map(|id| self.0.findings(*id));
        findings.map(|located| format!("{}: {}", located.finding.code.name(), located.finding.message)).collect()
    }

    fn count(&self, code: Code) -> usize {
        self.0.files.keys().flat_map(|id| self.0.findings(*id)).filter(|located| located.finding.code == code).count()
    }

    fn errors(&self) -> usize {
        self.0.files.keys().flat_map(|id| self.0.findings(*id)).filter(|located| located.finding.level == Level::Error).count()
    }

    #[track_caller]
    fn says(&self, code: Code) {
        assert!(self.count(code) > 0, "no {}: {:?}", code.name(), self.said());
    }

    #[track_caller]
    fn is_clean(&self) {
        assert_eq!(self.errors(), 0, "{:?}", self.said());
    }
}

fn line<'o>(outcome: &'o Outcome, name: &str) -> &'o LineOutcome {
    outcome.lines.iter().find(|line| line.name == name).unwrap_or_else(|| panic!("no line takes {name}"))
}

fn mmol_per_L(outcome: &Outcome, name: &str) -> f64 {
    let state = outcome.finished.as_ref().expect("a state");
    let totals = state.totals_mol_per_L();
    1000.0 * totals.filter(|(id, _)| state.chemistry().component(*id).is_some_and(|one| one.name == name)).map(|(_, c)| c).sum::<f64>()
}

fn pH(outcome: &Outcome) -> f64 {
    outcome.finished.as_ref().expect("a state").pH()
}

#[track_caller]
fn near(value: f64, expected: f64, share: f64) {
    assert!((value - expected).abs() <= share * expected.abs(), "{value} is not {expected}");
}

// ── Rule 1: where targets are met ──

#[test]
fn rule_1_a_pH_is_met_by_the_beaker_at_its_line() {
    let a = solution("    100 mL     1 mol/L acetic acid\n    q.s.       1 mol/L sodium hydroxide to pH 4.76\n    q.s.       water to 10 L\n").a();
    let [point] = a.set_points.as_slice() else { panic!("one pH is set") };
    near(point.state.pH(), 4.76, 1e-6);
    // At this ionic strength the pKa is some 0.2 below 4.76, so a little more than half of the acid is neutralised.
    near(line(&a, "sodium hydroxide").amount_mol.unwrap(), 0.057, 0.04);
    assert!(pH(&a) > 4.76 + 0.05, "{}", pH(&a));
}

#[test]
fn rule_1_a_volume_and_a_mass_are_met_by_the_beaker_at_their_line() {
    let a = solution("    q.s.       water to about 400 mL\n    58.44 g    sodium chloride\n    q.s.       water to 500 mL\n").a();
    let waters: Vec<f64> = a.lines.iter().filter(|line| line.name == "water").map(|line| line.volume_L.unwrap()).collect();
    near(waters[0], 0.400, 1e-6);
    // One mole of salt takes up some 18 to 20 mL, which the second water leaves room for.
    assert!((0.078..0.084).contains(&waters[1]), "{waters:?}");
    near(a.volume_L, 0.5, 1e-9);
    let by_mass = solution("    58.44 g    sodium chloride\n    q.s.       water to 1 kg\n").a();
    near(by_mass.mass_kg, 1.0, 1e-12);
    near(line(&by_mass, "water").mass_kg, 0.94156, 1e-6);
}

#[test]
fn rule_1_ionic_strength_is_met_by_the_finished_solution() {
    // Both salts are one to one: 150 are sought, and a line further down brings 50 of them.
    let a = solution("    q.s.       sodium chloride to ionic strength 150 mmol/L\n    50 mmol/L  potassium chloride\n    q.s.       water to 1 L\n").a();
    near(mmol_per_L(&a, "sodium"), 100.0, 1e-3);
    near(mmol_per_L(&a, "chloride"), 150.0, 1e-3);
}

#[test]
fn rule_1_a_pair_is_met_by_the_finished_solution() {
    let a = solution("    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    0.1 mol/L  sodium chloride\n    q.s.       water to 1 L\n").a();
    near(pH(&a), 8.10, 1e-7);
    near(mmol_per_L(&a, "Tris"), 50.0, 1e-6);
}

#[test]
fn rule_1_all_unknowns_are_solved_together() {
    let a = solution("    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    q.s.       potassium chloride to ionic strength 150 mmol/L\n    q.s.       water to 1 L\n").a();
    let state = a.finished.as_ref().unwrap();
    near(state.pH(), 8.10, 1e-7);
    near(state.ionic_strength_mol_per_L(), 0.150, 1e-9);
}

#[test]
fn rule_1_no_unknown_is_negative() {
    let passed = solution("    0.2 mol/L  sodium chloride\n    q.s.       potassium chloride to ionic strength 150 mmol/L\n    q.s.       water to 1 L\n");
    passed.says(Code::TargetAlreadyPassed);
    assert!(passed.find("A").is_none());
}

#[test]
fn rule_1_of_several_pH_lines_the_last_speaks_and_the_shift_is_compared() {
    let twice = solution(
        "    500 mL     water\n    6.057 g    Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.50\n    q.s.       1 mol/L hydrochloric acid to pH 7.50\n    q.s.       water to 1 L\n",
    );
    twice.is_clean();
    let a = twice.a();
    assert_eq!(a.set_points.len(), 2);
    near(pH(&a), 7.50, 0.01);
    let moved = solution("    900 mL     water\n    6.057 g    Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.00 ± 0.05\n    2.5 g      Tris\n    q.s.       water to 1 L\n");
    moved.says(Code::MovesAfterSetting);
}

#[test]
fn rule_1_a_pair_goes_with_no_pH_line() {
    let both = solution("    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    900 mL     water\n    q.s.       1 mol/L hydrochloric acid to pH 7.50\n    q.s.       water to 1 L\n");
    both.says(Code::PhSaidTwice);
}

#[test]
fn rule_1_by_eye_takes_the_estimate() {
    let a = solution("    50 mL      water\n    q.s.       0.1 mol/L sodium hydroxide to \"faint pink\", about 10 mL\n    q.s.       water to 100 mL\n").a();
    near(line(&a, "sodium hydroxide").volume_L.unwrap(), 0.010, 1e-9);
}

#[test]
fn rule_1_of_two_titrants_exactly_one_is_used_or_none() {
    let with = |target: &str| {
        solution(&format!(
            "    50 mmol/L  MES\n    900 mL     water\n    q.s.       1 mol/L hydrochloric acid or 1 mol/L sodium hydroxide to pH {target}\n    q.s.       water to 1 L\n"
        ))
        .a()
    };
    let up = with("6.00");
    assert!(up.lines.iter().all(|line| line.name != "hydrochloric acid"));
    assert!(line(&up, "sodium hydroxide").volume_L.unwrap() > 0.01);
    let down = with("3.00");
    assert!(line(&down, "hydrochloric acid").volume_L.unwrap() > 0.0);
    let none = solution("    1 L        water\n    q.s.       1 mol/L hydrochloric acid or 1 mol/L sodium hydroxide to pH 6.9 to 7.1\n").a();
    assert!(none.lines.iter().filter(|line| line.name != "water").all(|line| line.mass_kg < 1e-6), "{:?}", none.lines);
}

// ── Rule 2: the liquid of the make-up ──

#[test]
fn rule_2_the_liquid_of_the_next_make_up_counts_as_present_and_a_hint_says_so() {
    let dry = solution("    6.057 g    Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.10\n    q.s.       water to 1 L\n");
    dry.says(Code::LiquidCountedIn);
    near(pH(&dry.a()), 8.10, 1e-6);
    let wet = solution("    6.057 g    Tris\n    800 mL     water\n    q.s.       1 mol/L hydrochloric acid to pH 8.10\n    q.s.       water to 1 L\n");
    assert_eq!(wet.count(Code::LiquidCountedIn), 0);
}

// ── Rule 3: concentrations and extent ──

#[test]
fn rule_3_concentrations_refer_to_the_finished_volume_overshoot_included() {
    let a = solution("    10 mmol/L  sodium chloride\n    q.s.       water to 1 L\n    100 mL     water\n").a();
    near(line(&a, "sodium chloride").amount_mol.unwrap(), 0.0110, 1e-4);
    near(mmol_per_L(&a, "sodium"), 10.0, 1e-6);
}

#[test]
fn rule_3_a_line_states_what_it_brings_and_a_top_up_is_said() {
    let topped = solution("    50 mmol/L  acetic acid\n    50 mmol/L  sodium acetate\n    900 mL     water\n    q.s.       1 mol/L acetic acid to pH 4.50\n    q.s.       water to 1 L\n");
    topped.says(Code::AddsToTotal);
    assert!(mmol_per_L(&topped.a(), "acetate") > 105.0);
    solution("    50 mmol/L  sodium chloride\n    20 mmol/L  sodium chloride\n    q.s.       water to 1 L\n").says(Code::SaidTwice);
}

#[test]
fn rule_3_a_solution_needs_an_extent() {
    solution("    50 mmol/L  sodium chloride\n    10 mmol/L  Tris\n").says(Code::NoExtent);
}

#[test]
fn rule_3_without_a_make_up_volumes_do_not_add() {
    let mixed = solution("    600 mL     methanol\n    400 mL     water\n    expect     density 0.80 to 1.00 g/mL\n");
    mixed.says(Code::VolumeFromDensity);
    // Equal volumes of methanol and water lose some three to four per cent (CRC Handbook, from memory).
    let volume = mixed.a().volume_L;
    assert!((0.955..0.985).contains(&volume), "{volume}");
}

// ── Rule 4: what is weighed ──

#[test]
fn rule_4_a_mass_states_what_is_weighed() {
    let a = solution("    1.000 g    sodium chloride, purity 50 %\n    q.s.       water to 1 L\n").a();
    near(line(&a, "sodium chloride").mass_kg, 0.001, 1e-12);
    near(mmol_per_L(&a, "sodium"), 500.0 / 58.44, 1e-4);
}

#[test]
fn rule_4_an_amount_states_pure_substance() {
    let weighed = |quantity: &str| {
        let a = solution(&format!("    {quantity}  sodium chloride, purity 80 %, water 10 %\n    q.s.       water to 1 L\n")).a();
        near(mmol_per_L(&a, "sodium"), 10.0, 1e-6);
        1000.0 * line(&a, "sodium chloride").mass_kg
    };
    // 0.5844 g / (0.80 × 0.90)
    near(weighed("10 mmol"), 0.8117, 2e-4);
    near(weighed("10 mmol/L"), 0.8117, 2e-4);
}

#[test]
fn rule_4_molality_is_per_kilogram_of_all_water() {
    let a = solution("    1 mol/kg   magnesium chloride hexahydrate\n    891.9 g    water\n").a();
    // A mole of the hexahydrate brings 6 × 18.015 g = 108.1 g: with 891.9 g of water added that is a kilogram.
    near(a.water_kg, 1.0, 1e-4);
    near(line(&a, "magnesium chloride hexahydrate").mass_kg, 0.2033, 5e-4);
}

#[test]
fn rule_4_a_mass_target_is_that_of_the_solution() {
    let a = solution("    1 mol/kg   sodium chloride\n    q.s.       water to 1 kg\n").a();
    near(a.mass_kg, 1.0, 1e-12);
    // w kg of water and 0.05844 w kg of salt are one kilogram.
    near(a.water_kg, 1.0 / 1.05844, 1e-5);
}

#[test]
fn rule_4_a_volume_is_at_the_temperature_of_making() {
    let of_water = |celsius: u32| {
        library(&format!("solution A\n    made at    {celsius} °C\n    1 L        water\n")).a().mass_kg
    };
    // Density of water, IAPWS: 0.99997 at 4 °C, 0.99705 at 25 °C, 0.98804 at 50 °C.
    near(of_water(4), 0.99997, 2e-5);
    near(of_water(25), 0.99705, 2e-5);
    near(of_water(50), 0.98804, 2e-5);
}

// ── Rule 5: `from` ──

const STOCKS: &str = "
solution Chelator stock
    made at    25 °C
    0.1 mol/L  disodium EDTA dihydrate
    q.s.       water to 1 L

solution Magnesium stock
    made at    25 °C
    0.5 mol/L  magnesium chloride hexahydrate
    q.s.       water to 1 L

solution Double stock
    made at    25 °C
    1 mol/L    sodium chloride
    0.5 mol/L  potassium chloride
    q.s.       water to 1 L

bottle Strong nitric acid
    65 % w/w   nitric acid
    density    1.391 g/mL
";

fn from_stocks(lines: &str) -> Library {
    library(&format!("solution A\n    made at    25 °C\n{lines}    q.s.       water to 1 L\n{STOCKS}"))
}

#[test]
fn rule_5_from_takes_the_volume_that_holds_the_amount_and_the_rest_comes_along() {
    let a = from_stocks("    1 mmol/L   EDTA, from Chelator stock\n").a();
    near(line(&a, "Chelator stock").volume_L.unwrap(), 0.010, 1e-6);
    near(mmol_per_L(&a, "EDTA"), 1.0, 1e-6);
    near(mmol_per_L(&a, "sodium"), 2.0, 1e-6);
}

#[test]
fn rule_5_crystal_water_never_matters() {
    for name in ["magnesium chloride", "magnesium chloride hexahydrate", "magnesium"] {
        let a = from_stocks(&format!("    5 mmol/L   {name}, from Magnesium stock\n")).a();
        near(line(&a, "Magnesium stock").volume_L.unwrap(), 0.010, 1e-6);
    }
}

#[test]
fn rule_5_a_volume_fraction_counts_the_bottle_as_bought() {
    let a = from_stocks("    2 % v/v    nitric acid, from Strong nitric acid\n").a();
    near(line(&a, "Strong nitric acid").volume_L.unwrap(), 0.020, 1e-9);
    // 20 mL × 1.391 g/mL × 0.65 / 63.01 g/mol
    near(mmol_per_L(&a, "nitrate"), 287.0, 1e-3);
}

#[test]
fn rule_5_a_purity_beside_from_is_an_error() {
    from_stocks("    1 mmol/L   EDTA, purity 99 %, from Chelator stock\n").says(Code::PurityOfASolution);
}

#[test]
fn rule_5_two_lines_out_of_one_stock_are_an_error() {
    from_stocks("    1 mmol/L   sodium chloride, from Double stock\n    1 mmol/L   potassium chloride, from Double stock\n").says(Code::SameStockTwice);
}

#[test]
fn rule_5_an_amount_of_a_stock_with_several_solutes_names_the_way_out() {
    let several = from_stocks("    1 mmol/L   Double stock\n");
    let finding = several.0.files.keys().flat_map(|id| several.0.findings(*id)).find(|one| one.finding.level == Level::Error).unwrap();
    assert!(finding.finding.fixes.iter().any(|fix| fix.title.contains("sodium chloride, from Double stock")), "{:?}", finding.finding.fixes);
    assert!(several.find("A").is_none());
}

// ── Rule 6: a solution in its own file ──

#[test]
fn rule_6_a_solution_means_what_its_own_file_says() {
    let both = files(&[
        ("a.prep", "use \"b.prep\"\n\nsolution A\n    made at    25 °C\n    10 mL      Middle\n    q.s.       water to 1 L\n"),
        ("b.prep", "use \"c.prep\"\n\nsolution Middle\n    made at    25 °C\n    100 mL     Deep\n    q.s.       water to 1 L\n"),
        ("c.prep", "solution Deep\n    made at    25 °C\n    1 mol/L    sodium chloride\n    q.s.       water to 1 L\n"),
    ]);
    both.is_clean();
    near(mmol_per_L(&both.a(), "sodium"), 1.0, 1e-6);
    // What b uses is not passed on to a.
    let passed_on = files(&[
        ("a.prep", "use \"b.prep\"\n\nsolution A\n    10 mL      Deep\n    q.s.       water to 1 L\n"),
        ("b.prep", "use \"c.prep\"\n"),
        ("c.prep", "solution Deep\n    1 mol/L    sodium chloride\n    q.s.       water to 1 L\n"),
    ]);
    passed_on.says(Code::UnknownName);
}

#[test]
fn rule_6_the_taker_measures_at_its_own_temperature() {
    let two = library("solution A\n    made at    50 °C\n    100 mL     Cold\n    q.s.       water to 1 L\n\nsolution Cold\n    made at    4 °C\n    1 mmol/L   sodium chloride\n    q.s.       water to 1 L\n");
    // A tenth of a litre, of the density of water at 50 °C to one in ten thousand.
    near(line(&two.a(), "Cold").mass_kg, 0.0988, 2e-4);
}

#[test]
fn rule_6_like_takes_lines_with_the_meaning_of_their_own_file() {
    let both = files(&[
        ("a.prep", "use \"b.prep\"\n\nsolution A\n    like       Base\n    2 g        glucose anhydrous\n"),
        (
            "b.prep",
            "use \"c.prep\"\n\nsolution Base\n    made at    4 °C\n    10 mL      Deep\n    1 g        glucose anhydrous\n    step       Stir in the cold.\n    q.s.       water to 1 L\n",
        ),
        ("c.prep", "solution Deep\n    made at    4 °C\n    1 mol/L    sodium chloride\n    q.s.       water to 1 L\n"),
    ]);
    both.is_clean();
    let a = both.a();
    near(mmol_per_L(&a, "sodium"), 10.0, 1e-6);
    near(line(&a, "glucose anhydrous").mass_kg, 0.002, 1e-12);
    near(a.made_at_K, 277.15, 1e-9);
    let (file, index, _) = both.0.solutions().find(|(_, _, block)| block.name.as_ref().unwrap().text == "A").unwrap();
    let recipe = both.0.checked(file.id, index).unwrap().evaluation.recipe.clone().unwrap();
    assert_eq!(recipe.steps.iter().map(|step| step.value.as_str()).collect::<Vec<_>>(), ["Stir in the cold."]);
}

// ── Rule 7: what must hold, and where ──

#[test]
fn rule_7_an_expectation_must_hold_at_the_making_and_every_use() {
    let a = solution("    used at    4 °C, 37 °C\n    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    q.s.       water to 1 L\n    expect     pH 7 to 9\n    expect     pH 7.6 to 7.9 at 37 °C\n").a();
    let celsius = |expectation: usize| -> Vec<i64> {
        a.verdicts.iter().filter(|one| one.expectation == expectation).map(|one| (one.temperature_K - 273.15).round() as i64).collect()
    };
    assert_eq!(celsius(0), [25, 4, 37]);
    assert_eq!(celsius(1), [37]);
    let failing = solution("    used at    4 °C\n    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    q.s.       water to 1 L\n    expect     pH 8.0 to 8.2\n");
    failing.says(Code::ExpectationFails);
}

#[test]
fn rule_7_diluted_is_one_volume_made_up_to_so_many() {
    let a = library(
        "solution A\n    made at    25 °C\n    1 mol/L    sodium chloride\n    q.s.       water to 1 L\n    expect     total sodium 99.9 to 100.1 mmol/L diluted 10-fold\n    expect     total potassium 89 to 91 mmol/L diluted 10-fold with B\n\nsolution B\n    made at    25 °C\n    0.1 mol/L  potassium chloride\n    q.s.       water to 1 L\n",
    );
    a.is_clean();
    let values: Vec<f64> = a.a().verdicts.iter().map(|one| 1000.0 * one.value.unwrap()).collect();
    near(values[0], 100.0, 1e-4);
    // Nine volumes in ten of 100 mmol/L, less what the salt solution's contraction adds.
    near(values[1], 90.0, 2e-3);
}

#[test]
fn rule_7_a_range_of_use_is_its_ends_and_every_five_degrees() {
    let a = solution("    used at    4 °C to 20 °C\n    1 g        sodium chloride\n    q.s.       water to 1 L\n").a();
    let celsius: Vec<i64> = a.uses.iter().map(|(kelvin, _)| (kelvin - 273.15).round() as i64).collect();
    assert_eq!(celsius, [4, 9, 14, 19, 20]);
}

// ── Rule 8: where it is made ──

#[test]
fn rule_8_differing_conditions_are_an_error_on_both_and_leave_no_value() {
    for lines in ["    made at    20 °C\n    made at    25 °C\n", "    under air\n    under 5 % CO2\n"] {
        let twice = library(&format!("solution A\n{lines}    1 g        sodium chloride\n    q.s.       water to 1 L\n"));
        assert_eq!(twice.count(Code::SaidTwiceDifferently), 2, "{:?}", twice.said());
        assert!(twice.find("A").is_none());
    }
    let same = library("solution A\n    made at    20 °C\n    made at    20 °C\n    1 g        sodium chloride\n    q.s.       water to 1 L\n");
    same.is_clean();
}

#[test]
fn rule_8_the_default_is_the_middle_of_the_room_else_25_degrees() {
    let in_lab = library("lab Bench\n    room       18 °C to 24 °C\n\nsolution A\n    1 g        sodium chloride\n    q.s.       water to 1 L\n").a();
    near(in_lab.made_at_K, 294.15, 1e-9);
    near(in_lab.made_at_half_width_K, 3.0, 1e-9);
    let nowhere = library("solution A\n    50 mmol/L  Tris / Tris hydrochloride to pH 8.10\n    q.s.       water to 1 L\n");
    near(nowhere.a().made_at_K, 298.15, 1e-9);
    nowhere.says(Code::TemperatureAssumed);
}

// ── Rule 10: no value rather than a doubtful one ──

#[test]
fn rule_10_an_error_leaves_no_values_and_those_who_use_it_say_so_once() {
    let broken = library("solution A\n    10 mL      Stock\n    q.s.       water to 1 L\n\nsolution Stock\n    1 g        sodium chlorid\n    2 g        glucos\n    q.s.       water to 1 L\n");
    assert!(broken.find("A").is_none() && broken.find("Stock").is_none());
    assert_eq!(broken.count(Code::IngredientHasNoValue), 1);
    assert_eq!(broken.count(Code::UnknownName), 2);
}

#[test]
fn rule_10_a_cycle_has_no_values_and_one_finding_at_each_line_that_leads_round() {
    let cycle = library("solution A\n    10 mL      B\n    q.s.       water to 1 L\n\nsolution B\n    10 mL      A\n    q.s.       water to 1 L\n");
    assert!(cycle.find("A").is_none() && cycle.find("B").is_none());
    assert_eq!(cycle.count(Code::Cycle), 2);
    let by_like = library("solution A\n    like       B\n\nsolution B\n    10 mL      A\n    q.s.       water to 1 L\n");
    assert_eq!(by_like.count(Code::Cycle), 2, "{:?}", by_like.said());
}

// ── Rule 11: totals and free ions ──

#[test]
fn rule_11_total_counts_all_forms() {
    let a = solution("    1 mmol/L   potassium dihydrogen phosphate\n    2 mmol/L   disodium hydrogen phosphate dihydrate\n    q.s.       water to 1 L\n    expect     total phosphate 2.999 to 3.001 mmol/L\n");
    a.is_clean();
}

#[test]
fn rule_11_free_counts_the_ion_and_its_hydrogen_forms_only() {
    let a = solution("    50 mmol/L  disodium hydrogen phosphate dihydrate\n    20 mmol/L  magnesium chloride hexahydrate\n    q.s.       water to 1 L\n    expect     total phosphate 49.9 to 50.1 mmol/L\n    expect     free phosphate at most 45 mmol/L\n    expect     free magnesium at most 15 mmol/L\n");
    a.is_clean();
    let alone = solution("    50 mmol/L  potassium dihydrogen phosphate\n    q.s.       water to 1 L\n    expect     free phosphate 49 to 51 mmol/L\n");
    alone.is_clean();
}

#[test]
fn rule_11_borax_counts_four_borates() {
    near(mmol_per_L(&solution("    10 mmol/L  sodium tetraborate decahydrate\n    q.s.       water to 1 L\n").a(), "borate"), 40.0, 1e-6);
}

// ── Series, parts, and what goes in by other measures ──

#[test]
fn a_series_is_one_solution_per_value_and_its_members_have_names() {
    let series = library(
        "solution Stock\n    made at    25 °C\n    0.1 mol/L  sodium chloride\n    q.s.       water to 1 L\n\nsolution Level\n    made at    25 °C\n    0, 2, 4 mL  Stock\n    10, 20, 30 mL  0.1 mol/L potassium chloride\n    q.s.       water to 100 mL\n\nsolution A\n    made at    25 °C\n    10 mL      Level (4 mL)\n    q.s.       water to 100 mL\n",
    );
    series.is_clean();
    for (name, sodium, potassium) in [("Level (0 mL)", 0.0, 10.0), ("Level (2 mL)", 2.0, 20.0), ("Level (4 mL)", 4.0, 30.0)] {
        let member = series.outcome(name);
        assert!((mmol_per_L(&member, "sodium") - sodium).abs() < 1e-6);
        near(mmol_per_L(&member, "potassium"), potassium, 1e-6);
    }
    near(mmol_per_L(&series.a(), "sodium"), 0.4, 1e-6);
    let no_member = library("solution Level\n    2, 4 mL    1 mol/L sodium chloride\n    q.s.       water to 100 mL\n\nsolution A\n    10 mL      Level (5 mL)\n    q.s.       water to 100 mL\n");
    no_member.says(Code::AmbiguousName);
    let targets = solution("    50 mmol/L  MES\n    900 mL     water\n    q.s.       1 mol/L sodium hydroxide to pH 5.5, 6.0\n    q.s.       water to 1 L\n");
    near(pH(&targets.outcome("A (pH 6.0)")), 6.0, 1e-3);
}

#[test]
fn parts_volumes_and_folds_are_what_they_say() {
    let parts = solution("    3 parts    ethanol\n    1 part     water\n    makes      2 L\n").a();
    near(line(&parts, "ethanol").volume_L.unwrap(), 1.5, 1e-9);
    let ratio = library("bottle Acid\n    37 % w/w   hydrochloric acid\n    density    1.184 g/mL\n\nsolution A\n    made at    25 °C\n    100 mL     (1 + 9) Acid\n    q.s.       water to 1 L\n").a();
    // 37 % of 1.184 g/mL is 12.0 mol/L; ten volumes of the tenfold dilution hold one of it, less the contraction.
    near(mmol_per_L(&ratio, "chloride"), 120.0, 0.02);
    let fold = library("solution Strong\n    concentrate 10x\n    made at    25 °C\n    1 mol/L    sodium chloride\n    q.s.       water to 1 L\n\nsolution A\n    made at    25 °C\n    1x         Strong\n    q.s.       water to 2 L\n").a();
    near(line(&fold, "Strong").volume_L.unwrap(), 0.2, 1e-6);
    near(mmol_per_L(&fold, "sodium"), 100.0, 1e-5);
    let all = library("solution Stock\n    made at    25 °C\n    0.1 mol/L  sodium chloride\n    q.s.       water to 1 L\n\nsolution A\n    made at    25 °C\n    all        Stock\n    q.s.       water to 2 L\n").a();
    near(mmol_per_L(&all, "sodium"), 50.0, 1e-6);
}

#[test]
fn what_is_added_later_has_a_state_of_its_own() {
    let a = solution("    0.1 mol/L  sodium chloride\n    q.s.       water to 900 mL\n    before use\n    10 mmol/L  glucose\n    100 mL     water\n").a();
    let [ahead] = a.parts.as_slice() else { panic!("one divider") };
    near(ahead.volume_L, 0.9, 1e-6);
    near(ahead.state.as_ref().unwrap().ionic_strength_mol_per_L(), 0.1, 1e-4);
    near(a.finished.as_ref().unwrap().ionic_strength_mol_per_L(), 0.09, 2e-3);
    near(line(&a, "glucose").amount_mol.unwrap(), 0.010 * a.volume_L, 1e-6);
}

#[test]
fn a_found_strength_replaces_the_computed_one() {
    let used = library("solution Titrant\n    made at    25 °C\n    4.0 g      sodium hydroxide\n    q.s.       water to 1 L\n    standardise against potassium hydrogen phthalate\n    found      0.1003 mol/L sodium hydroxide ± 0.0002 mol/L\n\nsolution A\n    made at    25 °C\n    100 mL     Titrant\n    q.s.       water to 1 L\n");
    used.is_clean();
    near(mmol_per_L(&used.a(), "sodium"), 10.03, 1e-6);
}

#[test]
fn what_goes_in_by_count_is_not_counted() {
    let tablets = library("substance Inhibitor tablet\n    inert\n    form       solid\n\nsolution A\n    made at    25 °C\n    2 each     Inhibitor tablet\n    q.s.       water to 100 mL\n");
    tablets.is_clean();
    let a = tablets.a();
    assert!(line(&a, "Inhibitor tablet").by_count && a.solutes.is_empty());
}

#[test]
fn enzyme_activity_is_measured_out_by_the_activity_of_its_bottle() {
    let a = library("bottle Polymerase\n    50 % w/w   glycerol\n    density    1.13 g/mL\n    activity   5 U/µL\n\nsolution A\n    made at    25 °C\n    25 U/mL    Polymerase\n    q.s.       water to 100 mL\n").a();
    // 2500 U of 5 U/µL.
    near(1e6 * line(&a, "Polymerase").volume_L.unwrap(), 500.0, 1e-9);
}

#[test]
fn as_says_of_what_a_mass_concentration_is() {
    // 50 mg/L as P: 1.614 mmol/L of phosphorus, 30.97 g/mol.
    let a = solution("    50 mg/L as P  potassium dihydrogen phosphate\n    q.s.       water to 1 L\n").a();
    near(mmol_per_L(&a, "phosphate"), 50.0 / 30.974, 1e-4);
}
