//! Some 280 lines with what a careful author means by each, against what the parser makes of them. The lines are
//! adversarial: names that look like quantities, wrong units, other people's punctuation.

use scruple::syntax::parse;
use scruple::syntax::tree::*;
use scruple::text::Span;

/// Of the lines, so many must be read as meant.
const AS_MEANT: usize = 278;

/// Lines of which the language has since been given a reading, with the fields that it now has.
const LAWFUL_NOW: [(&str, &str); 21] = [
    ("5 U/mL EDTA", "ingredient; q=5 U/mL; n=EDTA"),
    ("1 drop phenol", "ingredient; q=1 drop; n=phenol"),
    ("1x PBS", "ingredient; q=1x; n=PBS"),
    ("5 to 6 g sodium chloride", "ingredient; q=5 to 6 g; n=sodium chloride"),
    ("q.s. 1 M NaOH to pH 7.35 to 7.45", "quantum_satis; s=1 M; n=NaOH; t=pH 7.35 to 7.45"),
    ("q.s. 1 M NaOH to pH 7.4 at 37 °C", "quantum_satis; s=1 M; n=NaOH; t=pH 7.4 at 37 °C"),
    ("50 mmol/L NaH2PO4 / Na2HPO4 to pH 7.2 at 37 °C", "pair; q=50 mmol/L; n=NaH2PO4; n=Na2HPO4; t=pH 7.2 at 37 °C"),
    ("used at 4 to 37 °C", "used_at; T=4; T=37 °C"),
    ("room 18 to 25 °C", "room; T=18; T=25 °C"),
    // The model's business: the name is well written, and what is known decides.
    ("1 g sodium acetate trihydrate (CH3COONa·3H2O)", "ingredient; q=1 g; n=sodium acetate trihydrate (CH3COONa·3H2O)"),
    ("10 mL 1 M NaOH", "ingredient; q=10 mL; s=1 M; n=NaOH"),
    ("5 mL 0.5 M EDTA", "ingredient; q=5 mL; s=0.5 M; n=EDTA"),
    ("10 mL 3M KCl", "ingredient; q=10 mL; s=3M; n=KCl"),
    ("q.s. 1 M NaOH to pH 7.4", "quantum_satis; s=1 M; n=NaOH; t=pH 7.4"),
    ("10 mL 5 % w/v glucose", "ingredient; q=10 mL; s=5 % w/v; n=glucose"),
    // Doubled quotes inside quotes are one.
    ("1 g \"5\"\" tube buffer\"", "ingredient; q=1 g; n=5\" tube buffer"),
    // A revision is a field of its own.
    ("document SOP #12, revision 3", "document; x=SOP #12; v=3"),
    // A name that begins with a number is written in quotes.
    ("100 mL 10x PBS", "ERR"),
    ("100 mL 10× PBS", "ERR"),
    // What a header's letters are is told by its place; the finding asks for the written form.
    ("Solution Foo", "header; kind=solution; n=Foo"),
    ("SOLUTION Foo", "header; kind=solution; n=Foo"),
];

#[test]
fn lines_are_read_as_their_authors_mean_them() {
    let text = include_str!("fixtures/readings.jsonl");
    let mut as_meant = 0;
    let mut others = Vec::new();
    let mut count = 0;
    for row in text.lines().filter(|row| !row.trim().is_empty()) {
        let row: serde_json::Value = serde_json::from_str(row).expect("a row of the fixture is JSON");
        let line = row["line"].as_str().expect("a line").to_owned();
        let meant = row["intent"].as_str().expect("an intent").to_owned();
        let meant = LAWFUL_NOW.iter().find(|(written, _)| *written == line).map_or(meant, |(_, now)| (*now).to_owned());
        count += 1;
        let found = read(&line);
        if agree(&meant, &found) {
            as_meant += 1;
        } else {
            others.push(format!("{line:?}\n    meant {meant}\n    read  {found:?}"));
        }
    }
    println!("{as_meant} of {count} lines are read as meant; the others:\n{}", others.join("\n"));
    assert!(as_meant >= AS_MEANT, "{as_meant} of {count} lines are read as meant:\n{}", others.join("\n"));
}

/// Whether what was read is what was meant. `ERR`: a fault is due. `ERR-THEN x`: a fault in the first line, x in the second.
fn agree(meant: &str, found: &[(String, Vec<FaultKind>)]) -> bool {
    if let Some(second) = meant.strip_prefix("ERR-THEN ") {
        return matches!(found, [(_, faults), (read, none)] if !faults.is_empty() && none.is_empty() && fields(read) == fields(second));
    }
    if meant.starts_with("ERR") {
        return found.iter().any(|(_, faults)| !faults.is_empty());
    }
    let meant: Vec<&str> = meant.split(" ⏎ ").collect();
    let lawful = |faults: &[FaultKind]| faults.iter().all(|fault| *fault == FaultKind::WrittenForm);
    meant.len() == found.len()
        && meant.iter().zip(found).all(|(meant, (read, faults))| lawful(faults) && fields(meant) == fields(read))
}

/// The fields of a reading in any order, white space made alike.
fn fields(reading: &str) -> Vec<String> {
    let words = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
    let mut parts = reading.split("; ").map(str::trim).filter(|part| !part.is_empty());
    let kind = parts.next().unwrap_or_default().replace(' ', "_").replace("_line", "");
    let mut fields: Vec<String> = parts.map(words).collect();
    fields.sort();
    if kind == "meter" || kind == "charge" || kind == "formula" || kind == "density" || kind == "hazard" || kind == "pka" || kind == "cas" || kind == "balance" && fields.is_empty() {
        fields.clear();
    }
    fields.insert(0, kind);
    fields
}

fn read(text: &str) -> Vec<(String, Vec<FaultKind>)> {
    parse(text)
        .lines
        .iter()
        .map(|placed| {
            let line = &placed.line;
            let faults = line.faults.iter().map(|fault| fault.kind.clone()).collect();
            let summary = match &line.content {
                Content::Blank => String::new(),
                Content::Junk(_) => "junk".to_owned(),
                Content::Statement(statement) => Summary { text: &line.text, fields: Vec::new() }.statement(statement),
            };
            (summary, faults)
        })
        .collect()
}

struct Summary<'t> {
    text: &'t str,
    fields: Vec<String>,
}

impl Summary<'_> {
    fn put(&mut self, key: &str, span: Span) {
        self.fields.push(format!("{key}={}", span.of(self.text)));
    }

    fn name(&mut self, name: &Slot<Name>) {
        if let Slot::Given(name) = name {
            self.fields.push(format!("n={}", name.text));
        }
    }

    fn strength(&mut self, strength: &Option<Slot<Strength>>) {
        match strength {
            Some(Slot::Given(Strength::Quantity(quantity))) => self.put("s", quantity.span),
            Some(Slot::Given(Strength::Ratio { span, .. })) => self.put("s", *span),
            _ => {}
        }
    }

    fn quantity(&mut self, key: &str, slot: &Slot<Quantity>) {
        if let Slot::Given(quantity) = slot {
            self.put(key, quantity.span);
        }
    }

    fn qualifiers(&mut self, qualifiers: &[Qualifier]) {
        for qualifier in qualifiers {
            self.put("k", qualifier.span);
        }
    }

    fn target(&mut self, target: &Slot<Target>) {
        if let Slot::Given(target) = target {
            self.put("t", target.span);
        }
    }

    fn statement(mut self, statement: &Statement) -> String {
        let kind = match statement {
            Statement::Ingredient(line) => {
                match &line.amounts {
                    Slot::Given(Amounts::One(quantity)) => self.put("q", quantity.span),
                    Slot::Given(Amounts::Range(low, high)) => self.put("q", low.span.to(high.span)),
                    Slot::Given(Amounts::Series(values)) => values.iter().for_each(|value| self.put("q", value.span)),
                    _ => {}
                }
                self.strength(&line.strength);
                self.name(&line.name);
                self.qualifiers(&line.qualifiers);
                "ingredient"
            }
            Statement::Pair(pair) => {
                self.quantity("q", &pair.amount);
                self.name(&pair.first);
                self.name(&pair.second);
                self.target(&pair.target);
                "pair"
            }
            Statement::QuantumSatis(line) => {
                self.strength(&line.strength);
                self.name(&line.name);
                self.target(&line.target);
                self.qualifiers(&line.qualifiers);
                "quantum_satis"
            }
            Statement::MadeAt(at) => {
                self.quantity("T", at);
                "made_at"
            }
            Statement::UsedAt(used) => {
                used.temperatures.iter().for_each(|at| self.quantity("T", at));
                "used_at"
            }
            Statement::StoredAt(stored) => {
                self.quantity("T", &stored.from);
                if let Some(duration) = &stored.duration {
                    self.quantity("d", duration);
                }
                "stored_at"
            }
            Statement::Under(gas) => {
                if let Slot::Given(Gas { kind: GasKind::Part { quantity, of }, .. }) = gas {
                    self.put("p", quantity.span);
                    self.name(of);
                }
                "under"
            }
            Statement::Sealed => "sealed",
            Statement::Expect(expect) => {
                if let Slot::Given(property) = &expect.property {
                    match &property.kind {
                        PropertyKind::Total(name) | PropertyKind::Free(name) | PropertyKind::SaturationIndex(name) => {
                            let word = property.span.of(self.text).split(' ').next().unwrap_or_default();
                            self.fields.push(format!("p={word}"));
                            self.name(name);
                        }
                        _ => self.put("p", property.span),
                    }
                }
                if let Slot::Given(range) = &expect.range {
                    let span = match range {
                        Range::Exactly(bound) => bound.span,
                        Range::PlusMinus(bound, tolerance) => bound.span.to(tolerance.span),
                        Range::Between(low, high) => low.span.to(high.span),
                        Range::AtLeast(bound) | Range::AtMost(bound) => {
                            let word = if matches!(range, Range::AtLeast(_)) { "at least " } else { "at most " };
                            Span::new(bound.span.start - word.len(), bound.span.end)
                        }
                    };
                    self.put("r", span);
                }
                if let Some(Slot::Given(at)) = &expect.at {
                    self.fields.push(format!("c=at {}", at.span.of(self.text)));
                }
                if let Some(diluted) = &expect.diluted {
                    self.put("c", diluted.span);
                }
                "expect"
            }
            Statement::Document(document) => {
                if let Slot::Given(code) = &document.code {
                    self.put("x", code.span);
                }
                if let Some(Slot::Given(revision)) = &document.revision {
                    self.put("v", revision.span);
                }
                "document"
            }
            Statement::Note(Slot::Given(text)) => {
                self.put("x", text.span);
                "note"
            }
            Statement::Step(Slot::Given(text)) => {
                self.put("x", text.span);
                "step"
            }
            Statement::Accept(accept) => {
                if let Slot::Given(code) = &accept.code {
                    self.fields.push(format!("code={}", code.text));
                }
                if let Slot::Given(because) = &accept.because {
                    self.put("x", because.span);
                }
                "accept"
            }
            Statement::Header(header) => {
                self.fields.push(format!("kind={:?}", header.kind).to_lowercase());
                if let Slot::Given(name) = &header.name {
                    self.fields.push(format!("n={}", name.text));
                }
                "header"
            }
            Statement::Balance(Slot::Given(balance)) => {
                self.put("m", balance.readability.span);
                balance.least.iter().chain(&balance.greatest).for_each(|mass| self.put("m", mass.span));
                "balance"
            }
            Statement::Room(Slot::Given(room)) => {
                self.put("T", room.low.span);
                self.put("T", room.high.span);
                "room"
            }
            Statement::Also(names) => {
                names.iter().for_each(|name| self.fields.push(format!("n={}", name.text)));
                "also"
            }
            Statement::Cas(Slot::Given(_)) => "cas",
            Statement::Charge(Slot::Given(_)) => "charge",
            Statement::Formula(Slot::Given(_)) => "formula",
            Statement::Density(Density { value: Slot::Given(_), .. }) => "density",
            Statement::Hazard(_) => "hazard",
            Statement::Meter(_) => "meter",
            Statement::Pka(Constant { value: Slot::Given(_), .. }) => "pka",
            _ => "other",
        };
        self.fields.insert(0, kind.to_owned());
        self.fields.join("; ")
    }
}
