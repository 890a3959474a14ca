//! Every statement of the language, in the forms that the language reference allows: no fault, and what the tree says.

use scruple::syntax::parse;
use scruple::syntax::tree::*;

/// Lines without fault, each with the beginning of its statement's debug form.
const LAWFUL: [(&str, &str); 155] = [
    ("language 1", "Language(Given"),
    ("use \"stocks/acids.prep\"", "Use(Given"),
    ("solution Tidal column eluent", "Header"),
    ("solution \"10x PBS\"", "Header"),
    ("bottle Drum muriatic acid", "Header"),
    ("substance 2-(N-morpholino)ethanesulfonic acid", "Header"),
    ("ion EDTA", "Header"),
    ("solid calcium carbonate", "Header"),
    ("danger bleach with acid", "Header"),
    ("group thiols", "Header"),
    ("lab North bench", "Header"),
    ("3.12 g sodium chloride", "Ingredient"),
    ("about 800 mL water", "Ingredient(Ingredient { about: true"),
    ("10 mL of 10 mol/L sodium hydroxide", "Ingredient"),
    ("5 mL of water", "Ingredient"),
    ("50 mg/L as P phosphate", "Ingredient"),
    ("10 mL (1 + 9) hydrochloric acid", "Ingredient"),
    ("2 parts methanol", "Ingredient"),
    ("1 part acetic acid", "Ingredient"),
    ("3 drops phenolphthalein solution", "Ingredient"),
    ("500 U DNase I", "Ingredient"),
    ("5 kU benzonase", "Ingredient"),
    ("2 each Protease inhibitor tablet", "Ingredient"),
    ("1x Running buffer concentrate", "Ingredient"),
    ("0, 2, 4, 8, 16 mL Phosphorus intermediate", "Ingredient(Ingredient { about: false, amounts: Given(Series"),
    ("1 mL, 2 mL, 5 mL Anion mix", "Ingredient(Ingredient { about: false, amounts: Given(Series"),
    ("28 to 30 % w/w ammonia", "Ingredient(Ingredient { about: false, amounts: Given(Range"),
    ("3.12 g ± 0.01 g sodium chloride", "Ingredient"),
    ("0.2197 g potassium dihydrogen phosphate, dried at 110 °C for 2 h, ± 0.1 mg", "Ingredient"),
    ("2 mmol/L magnesium chloride, from Magnesium stock", "Ingredient"),
    ("1 g x, purity 99.5 %, water 0.4 %, density 1.1 g/mL, grade for analysis, lot A113", "Ingredient"),
    ("20 mL glycerol, by weight, at 20 °C", "Ingredient"),
    ("5 mL x, at most 10 mL", "Ingredient"),
    ("50 mmol/L Tris / Tris hydrochloride to pH 8.10", "Pair"),
    ("50 mmol/L NaH2PO4 / Na2HPO4 to pH 7.2 at 37 °C", "Pair"),
    ("500 mL 50 mmol/L potassium dihydrogen phosphate / 50 mmol/L dipotassium hydrogen phosphate to pH 7.0 ± 0.05", "Pair"),
    ("1 L Eluent A / Eluent B to conductivity 10 mS/cm", "Pair"),
    ("q.s. water to 1 L", "QuantumSatis"),
    ("q.s. water to 1 kg", "QuantumSatis"),
    ("q.s. water to about 400 mL", "QuantumSatis"),
    ("q.s. 1 mol/L sodium hydroxide to pH 7.00 ± 0.05, about 13 mL", "QuantumSatis"),
    ("q.s. 1 mol/L sodium hydroxide or 1 mol/L hydrochloric acid to pH 7.40", "QuantumSatis"),
    ("q.s. acetic acid to pH 5.3 to 5.5", "QuantumSatis"),
    ("q.s. acetic acid to pH 5.0, 5.5, 6.0", "QuantumSatis"),
    ("q.s. acetic acid to pH 5.0, 5.5, 6.0, about 3 mL", "QuantumSatis"),
    ("q.s. hydrochloric acid to pH 7.50 at 37 °C", "QuantumSatis"),
    ("q.s. hydrochloric acid to pH 6.0 diluted 10-fold", "QuantumSatis"),
    ("q.s. hydrochloric acid to pH 6.0 diluted 10-fold with Saline at 25 °C", "QuantumSatis"),
    ("q.s. potassium chloride to ionic strength 150 mmol/L", "QuantumSatis"),
    ("q.s. potassium chloride to ionic strength 50, 100, 150 mmol/L", "QuantumSatis"),
    ("q.s. sucrose to osmolality 290 mosmol/kg ± 5 mosmol/kg", "QuantumSatis"),
    ("q.s. calcium chloride to free calcium 1 µmol/L", "QuantumSatis"),
    ("q.s. calcium chloride to saturation index of calcite 0", "QuantumSatis"),
    ("q.s. sodium chloride to saturation", "QuantumSatis"),
    ("q.s. 0.02 mol/L sodium hydroxide to \"faint pink\", about 3 mL", "QuantumSatis"),
    ("q.s. water to 100 mL ± 0.1 mL", "QuantumSatis"),
    ("all EDTA stock", "All(Given"),
    ("or 5.84 g sodium chloride", "Or(Ingredient"),
    ("makes 2 L", "Makes(Given"),
    ("cool to 20 °C", "CoolTo(Given"),
    ("warm to 60 °C", "WarmTo(Given"),
    ("drive off carbon dioxide", "DriveOff(Given"),
    ("filter", "Filter"),
    ("wait 30 min", "Wait(Given"),
    ("made at 22 °C", "MadeAt(Given"),
    ("used at 4 °C, 25 °C, 37 °C", "UsedAt"),
    ("used at 4 °C to 37 °C", "UsedAt"),
    ("used at 37 °C under 5 % CO2, moist", "UsedAt"),
    ("like Tidal column eluent", "Like(Given"),
    ("without EDTA stock", "Without(Given"),
    ("concentrate 50x", "Concentrate(Given"),
    ("before use", "BeforeUse"),
    ("after autoclaving", "AfterAutoclaving"),
    ("stored at 2 °C to 8 °C for 4 weeks, in glass", "StoredAt"),
    ("stored at 2 to 8 °C for 1 week", "StoredAt"),
    ("stored at −20 °C for 6 months, in polyethylene, in the dark", "StoredAt"),
    ("stored below 25 °C for 2 years", "StoredAt(StoredAt { below: true"),
    ("ready after 24 h", "ReadyAfter(Given"),
    ("use within 8 h", "UseWithin(Given"),
    ("sealed", "Sealed"),
    ("open", "Open"),
    ("under air", "Under(Given"),
    ("under 5 % CO2, moist", "Under(Given"),
    ("under 4 kPa CO2", "Under(Given"),
    ("in North bench", "In(Given"),
    ("expect pH 6.9 to 7.1 at 4 °C", "Expect"),
    ("expect ionic strength 0.18 to 0.22 mol/L", "Expect"),
    ("expect buffer capacity at least 8 mmol/L", "Expect"),
    ("expect osmolality 280 to 300 mosmol/kg", "Expect"),
    ("expect conductivity 16.5 to 19.5 mS/cm at 25 °C", "Expect"),
    ("expect conductivity at 25 °C 16.5 to 19.5 mS/cm", "Expect"),
    ("expect density 1.00 to 1.02 g/mL", "Expect"),
    ("expect alkalinity 2.3 to 2.5 mmol/L (eq)", "Expect"),
    ("expect alkalinity at least 100 mg/L as CaCO3", "Expect"),
    ("expect hardness 14 to 16 °dH", "Expect"),
    ("expect total phosphate 50 mg/L ± 0.2 mg/L as P", "Expect"),
    ("expect total phosphate 50 ± 0.2 mg/L as P", "Expect"),
    ("expect free calcium at most 1 µmol/L diluted 10-fold with Saline at 37 °C", "Expect"),
    ("expect free calcium 1 µmol/L ± 10 %", "Expect"),
    ("expect saturation index of calcium carbonate at most -0.5", "Expect"),
    ("expect pH 6.9 to 7.1 diluted 10-fold", "Expect"),
    ("standardise against potassium hydrogen phthalate", "StandardiseAgainst(Given"),
    ("found 0.1003 mol/L sodium hydroxide ± 0.0002 mol/L", "Found"),
    ("found 0.1003 mol/L sodium hydroxide, ± 0.2 %", "Found"),
    ("accept temperature-shift on hydrochloric acid 37 %, as bought because the column, too, was validated", "Accept"),
    ("accept temperature-shift because it was validated", "Accept"),
    ("step Stir, rinse, and use column #3.", "Step(Given"),
    ("record pH found", "Record(Given"),
    ("note Batch #7 was cloudy", "Note(Given"),
    ("document TPL-114, revision 3, effective 2026-02-01", "Document"),
    ("source CLP Annex VI, table 3", "Source(Given"),
    ("supplier stores item 10-0041", "Supplier(Given"),
    ("expires 2027-01", "Expires(Given"),
    ("instead of the built-in", "InsteadOfTheBuiltIn"),
    ("also TRIS, tromethamine, 2-amino-2-(hydroxymethyl)propane-1,3-diol", "Also"),
    ("CAS 77-86-1", "Cas(Given"),
    ("formula NaH2PO4·2H2O", "Formula(Given"),
    ("charge -3", "Charge(Given"),
    ("molar mass 1228 g/mol", "MolarMass(Given"),
    ("gives sodium, 2 hydrogen, phosphate", "Gives"),
    ("gives -1 hydrogen, 0.5 1,4-dioxane", "Gives"),
    ("form liquid", "Form(Given"),
    ("density 1.05 g/mL ± 0.01 g/mL at 20 °C, source own", "Density"),
    ("aqueous 36 % w/w, density 1.1789 g/mL at 20 °C", "Aqueous"),
    ("solubility 850 g/L at 20 °C, source handbook", "Solubility"),
    ("activity 250 U/µL", "Activity(Given"),
    ("hazard H314, H360FD, EUH031", "Hazard"),
    ("keep away from acids, strong oxidisers", "KeepAwayFrom"),
    ("heat of solution -67.0 kJ/mol at 35 % w/w, source handbook", "HeatOfSolution"),
    ("heat of solution 15.4 kJ/mol", "HeatOfSolution"),
    ("inert", "Inert"),
    ("holds glycine, Tris", "Holds"),
    ("with hypochlorite, chloramine-T trihydrate, at least 1 mmol/L", "With"),
    ("with EDC hydrochloride", "With"),
    ("while pH at most 5.5", "While"),
    ("while pH 7.2 to 8.2", "While"),
    ("even in passing", "EvenInPassing"),
    ("keeps 1.4 h at 20 °C", "Keeps"),
    ("raises dangerous-together", "Raises(Given"),
    ("because acid sets chlorine free, a toxic gas", "Because(Given"),
    ("advice Keep the pH above 8, and acids away.", "Advice(Given"),
    ("pKa 7.198 ± 0.003, of dihydrogen phosphate, enthalpy 3.6 kJ/mol, heat capacity -230 J/(mol·K), source Goldberg 2002", "Pka"),
    ("pKa 3404.71/T - 14.8435 + 0.032786 T ± 0.003, of carbonic acid, from 0 °C to 50 °C", "Pka"),
    ("pKa 2548.6/T - 20.03159 + 3.2172 ln T", "Pka"),
    ("log Ksp -8.48 ± 0.02, enthalpy -9.6 kJ/mol", "LogKsp"),
    ("log KH -1.47 ± 0.01, of carbonic acid, enthalpy -19.4 kJ/mol", "LogKh"),
    ("forms slowly", "Forms(Given(Slowly"),
    ("forms at once", "Forms(Given(AtOnce"),
    ("forms on freezing", "Forms(Given(OnFreezing"),
    ("forms in passing", "Forms(Given(InPassing"),
    ("complex with 2 hydrogen, itself 3, named triborate(1-), log K 20.1 ± 0.1, enthalpy -30 kJ/mol", "ComplexWith"),
    ("complex with calcium, -1 hydrogen, log K -12.85, at ionic strength 0.1 mol/L, at 20 °C", "ComplexWith"),
    ("interaction with sodium, -0.15 kg/mol ± 0.06, of hydrogen phosphate, source NEA TDB", "InteractionWith"),
    ("molar conductivity 57 S·cm²/mol, of hydrogen phosphate", "MolarConductivity"),
    ("molar volume -30.6 cm³/mol, source Millero 1971", "MolarVolume"),
];

/// Lines of a lab.
const LAB: [&str; 16] = [
    "room 18 °C to 25 °C",
    "room 18 to 25 °C",
    "room 21 °C",
    "balance readability 0.1 mg, 20 mg to 220 g",
    "balance readability 0.1 mg, 20 mg to 220 g, ± 0.2 mg",
    "flask 100 mL ± 0.10 mL, 250 mL ± 0.15 mL, 1 L ± 0.40 mL",
    "flask 100 mL class A, 250 mL class A",
    "flask class A 100 mL, 250 mL",
    "flask 100 mL, 250 mL, class A",
    "pipette 100 µL to 1000 µL ± 1 %",
    "burette 25 mL ± 0.03 mL",
    "cylinder 100 mL ± 1 mL",
    "vessel 60 L to 520 L",
    "pH meter ± 0.02",
    "conductivity meter ± 1 %, reference 25 °C, compensation 2.0 %",
    "osmometer ± 3 mosmol/kg",
];

#[test]
fn lawful_lines_have_no_fault() {
    let mut wrong = Vec::new();
    for (line, begins) in LAWFUL.into_iter().chain(LAB.map(|line| (line, ""))) {
        let tree = parse(line);
        let only = &tree.lines[0].line;
        let said = match &only.content {
            Content::Statement(statement) => format!("{statement:?}"),
            other => format!("{other:?}"),
        };
        if !only.faults.is_empty() || !said.starts_with(begins) || said.contains("Bad(") || said.contains("Missing(") {
            wrong.push(format!("{line}\n    {said}\n    {:?}", only.faults));
        }
    }
    assert!(wrong.is_empty(), "{} lines:\n{}", wrong.len(), wrong.join("\n"));
}

fn statement(line: &str) -> Statement {
    match parse(line).lines.into_iter().next().map(|placed| placed.line.content.clone()) {
        Some(Content::Statement(statement)) => statement,
        other => panic!("{line}: {other:?}"),
    }
}

#[test]
fn an_ingredient_keeps_its_parts() {
    let Statement::Ingredient(line) = statement("about 10 mL of 10 mol/L sodium hydroxide, from Lye, ± 0.1 mL") else { panic!() };
    assert!(line.about);
    let Some(Amounts::One(quantity)) = line.amounts.given() else { panic!() };
    assert_eq!((quantity.number.value, quantity.unit.symbol()), (10.0, "mL"));
    let Some(Slot::Given(Strength::Quantity(strength))) = line.strength else { panic!() };
    assert_eq!((strength.number.value, strength.unit.symbol()), (10.0, "mol/L"));
    assert_eq!(line.name.given().map(|name| name.text.as_str()), Some("sodium hydroxide"));
    assert!(matches!(line.qualifiers[0].kind, QualifierKind::From(Slot::Given(_))));
    assert!(matches!(line.qualifiers[1].kind, QualifierKind::Tolerance(_)));
}

#[test]
fn a_list_carries_its_unit_to_every_value() {
    let Statement::Ingredient(line) = statement("0, 2.5, 10 mL A") else { panic!() };
    let Some(Amounts::Series(values)) = line.amounts.given() else { panic!() };
    assert_eq!(values.iter().map(|value| (value.number.value, value.unit.symbol())).collect::<Vec<_>>(), [(0.0, "mL"), (2.5, "mL"), (10.0, "mL")]);
    assert!(values.iter().all(|value| value.unit_span == values[2].unit_span));
}

#[test]
fn a_target_keeps_its_conditions() {
    let Statement::QuantumSatis(line) = statement("q.s. A or 1 mol/L B to pH 6.0 ± 0.1 at 37 °C diluted 10-fold with C, about 3 mL") else { panic!() };
    let (strength, name) = line.alternative.as_ref().expect("an alternative");
    assert!(strength.is_some() && name.given().is_some_and(|name| name.text == "B"));
    let target = line.target.given().expect("a target");
    assert!(matches!(&target.kind, TargetKind::Property { property: Property { kind: PropertyKind::Ph, .. }, range: Slot::Given(Range::PlusMinus(..)) }));
    assert!(target.at.is_some());
    let dilution = target.diluted.as_ref().expect("a dilution");
    assert_eq!(dilution.fold.given().map(|fold| fold.value), Some(10.0));
    assert_eq!(dilution.with.as_ref().and_then(|with| with.given()).map(|with| with.text.as_str()), Some("C"));
    assert!(matches!(line.qualifiers[0].kind, QualifierKind::About(Slot::Given(_))));
}

#[test]
fn an_expected_name_ends_where_the_range_begins() {
    for (line, name) in [
        ("expect total vitamin B12 0.1 to 0.2 mmol/L", "vitamin B12"),
        ("expect total PEG 8000 at least 1 g/L", "PEG 8000"),
        ("expect free \"a, b\" 1 ± 0.1 mmol/L", "a, b"),
        ("expect total phosphate 1 mg/L ± 5 % as P at 4 °C diluted 2-fold", "phosphate"),
        ("expect total calcium 1.0 to", "calcium"),
        ("expect total calcium", "calcium"),
    ] {
        let Statement::Expect(expect) = statement(line) else { panic!("{line}") };
        let property = expect.property.given().expect("a property");
        let (PropertyKind::Total(found) | PropertyKind::Free(found)) = &property.kind else { panic!("{line}") };
        assert_eq!(found.given().map(|name| name.text.as_str()), Some(name), "{line}");
    }
}

#[test]
fn constants_keep_sign_uncertainty_and_equation() {
    let Statement::Pka(constant) = statement("pKa −6.3 ± 0.2, enthalpy -8.0 kJ/mol") else { panic!() };
    let Some(Value::Measured(measured)) = constant.value.given() else { panic!() };
    assert_eq!((measured.number.value, measured.uncertainty), (-6.3, Some(0.2)));
    assert!(matches!(&constant.parts[0].kind, ConstantPartKind::Enthalpy(Slot::Given(value)) if value.number.value == -8.0));
    let Statement::Pka(constant) = statement("pKa 3404.71/T - 14.8435 + 0.032786 T - 2 ln T ± 0.003") else { panic!() };
    let Some(Value::Equation(equation)) = constant.value.given() else { panic!() };
    assert_eq!((equation.a, equation.b, equation.c, equation.d, equation.uncertainty), (3404.71, -14.8435, 0.032786, -2.0, Some(0.003)));
    let Statement::InteractionWith(pair) = statement("interaction with sodium, -0.15 kg/mol ± 0.06") else { panic!() };
    assert_eq!(pair.value.given().map(|value| (value.number.value, value.uncertainty)), Some((-0.15, Some(0.06))));
}

#[test]
fn complexes_keep_counts() {
    let Statement::ComplexWith(complex) = statement("complex with 2 hydrogen, -1 calcium, itself 3, named triborate(1-), log K 20.1") else { panic!() };
    assert_eq!(complex.partner.given().map(|partner| partner.count), Some(2.0));
    assert!(matches!(&complex.parts[0].kind, ConstantPartKind::Partner(given) if given.count == -1.0));
    assert!(matches!(&complex.parts[1].kind, ConstantPartKind::Itself(Slot::Given(number)) if number.value == 3.0));
    assert!(matches!(&complex.parts[2].kind, ConstantPartKind::Named(Slot::Given(name)) if name.text == "triborate(1-)"));
}

#[test]
fn a_mistake_leaves_the_rest_of_its_line() {
    let Statement::Ingredient(line) = statement("5 ppm EDTA, from EDTA stock") else { panic!() };
    assert!(matches!(line.amounts, Slot::Bad(_)));
    assert!(line.name.given().is_some());
    assert!(matches!(line.qualifiers[0].kind, QualifierKind::From(Slot::Given(_))));
    let Statement::Expect(expect) = statement("expect ionic strenght 0.1 to 0.2 mol/L at 4 °C") else { panic!() };
    assert!(matches!(expect.property, Slot::Bad(_)));
    assert!(matches!(expect.at, Some(Slot::Given(_))));
}

#[test]
fn gaps_stand_where_the_cursor_does() {
    for (line, expected) in [
        ("q.s. ", Expected::IngredientName),
        ("q.s. water ", Expected::To),
        ("q.s. water to ", Expected::Target),
        ("q.s. water to pH ", Expected::Range),
        ("5 g ", Expected::IngredientName),
        ("5 g x, ", Expected::Qualifier),
        ("5 g x, purity ", Expected::Quantity),
        ("made at ", Expected::Temperature),
        ("expect ", Expected::Property),
        ("expect pH ", Expected::Range),
        ("expect total ", Expected::ConstituentName),
        ("accept ", Expected::Code),
        ("accept weak-buffering ", Expected::Because),
        ("solution ", Expected::NewName),
        ("use ", Expected::Path),
        ("under ", Expected::Gas),
        ("wait ", Expected::Duration),
    ] {
        let tree = parse(line);
        let gap = tree.lines[0].line.tokens.iter().find(|token| token.kind == TokenKind::Missing(expected));
        assert_eq!(gap.map(|gap| gap.span.start), Some(line.len()), "{line:?} {:?}", tree.lines[0].line.tokens);
    }
}
