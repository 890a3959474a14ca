//! Every name that a statement refers to, with the place that says where it is looked up.

use crate::model::Namespace;
use crate::syntax::tree::*;
use crate::units::Dimension;

/// A name on a line.
#[derive(Clone, Copy, Debug)]
pub struct NameUse<'a> {
    /// The name.
    pub name: &'a Name,
    /// Where it is looked up first.
    pub namespace: Namespace,
    /// Where it is looked up where that finds nothing.
    pub fallback: Option<Namespace>,
    /// Whether the pure substance is meant rather than a bottle of the same name.
    pub pure_is_meant: bool,
    /// Whether only solutions and bottles can stand here.
    pub takes_solutions: bool,
}

impl<'a> NameUse<'a> {
    fn new(name: &'a Name, namespace: Namespace) -> Self {
        NameUse { name, namespace, fallback: None, pure_is_meant: false, takes_solutions: false }
    }

    fn pure(mut self, pure_is_meant: bool) -> Self {
        self.pure_is_meant = pure_is_meant;
        self
    }

    fn or(mut self, fallback: Namespace) -> Self {
        self.fallback = Some(fallback);
        self
    }

    fn solution(mut self) -> Self {
        self.takes_solutions = true;
        self
    }
}

/// Whether a quantity of this dimension measures out a thing as it was bought, rather than the pure substance in it.
fn is_as_bought(dimension: Dimension) -> bool {
    matches!(
        dimension,
        Dimension::Mass
            | Dimension::Volume
            | Dimension::VolumeFraction
            | Dimension::Parts
            | Dimension::Fold
            | Dimension::EnzymeActivity
            | Dimension::EnzymeActivityConcentration
    )
}

/// The names that a statement refers to, in the order of the line. `kind` is the kind of block it stands in.
pub fn names(statement: &Statement, kind: Option<BlockKind>) -> Vec<NameUse<'_>> {
    use Namespace::{Constituent, Ingredient, Lab, Phase};
    use Statement as S;
    let mut found: Vec<NameUse> = Vec::new();
    match statement {
        S::Ingredient(line) | S::Or(line) => {
            let dimension = match line.amounts.given() {
                Some(Amounts::One(quantity) | Amounts::Range(quantity, _)) => Some(quantity.unit.dimension()),
                Some(Amounts::Series(quantities)) => quantities.first().map(|quantity| quantity.unit.dimension()),
                None => None,
            };
            let pure = line.strength.is_some() || dimension.is_some_and(|dimension| !is_as_bought(dimension));
            // The bottle of a substance holds the substance, not itself.
            let pure = pure || kind == Some(BlockKind::Bottle);
            let is_taken_from = line.qualifiers.iter().any(|qualifier| matches!(qualifier.kind, QualifierKind::From(_)));
            if let Some(name) = line.name.given() {
                let name = NameUse::new(name, Ingredient).pure(pure);
                found.push(if is_taken_from { name.or(Constituent) } else { name });
            }
            found.extend(from_names(&line.qualifiers));
        }
        S::Pair(pair) => {
            let strong = |strength: &Option<_>| strength.is_some();
            let is_volume = pair.amount.given().is_some_and(|amount| amount.unit.dimension() == Dimension::Volume);
            for (name, strength) in [(&pair.first, &pair.first_strength), (&pair.second, &pair.second_strength)] {
                found.extend(name.given().map(|name| NameUse::new(name, Ingredient).pure(strong(strength) || !is_volume)));
            }
            found.extend(pair.target.given().into_iter().flat_map(target_names));
            found.extend(from_names(&pair.qualifiers));
        }
        S::QuantumSatis(line) => {
            found.extend(line.name.given().map(|name| NameUse::new(name, Ingredient).pure(line.strength.is_some())));
            if let Some((strength, name)) = &line.alternative {
                found.extend(name.given().map(|name| NameUse::new(name, Ingredient).pure(strength.is_some())));
            }
            found.extend(line.target.given().into_iter().flat_map(target_names));
            found.extend(from_names(&line.qualifiers));
        }
        S::All(name) | S::Like(name) => found.extend(name.given().map(|name| NameUse::new(name, Ingredient).solution())),
        S::Without(name) | S::DriveOff(name) | S::StandardiseAgainst(name) => {
            found.extend(name.given().map(|name| NameUse::new(name, Ingredient)));
        }
        S::Found(line) => found.extend(line.name.given().map(|name| NameUse::new(name, Ingredient).pure(true))),
        S::In(name) => found.extend(name.given().map(|name| NameUse::new(name, Lab))),
        S::Under(gas) => found.extend(gas.given().and_then(gas_name)),
        S::UsedAt(line) => found.extend(line.under.iter().filter_map(|gas| gas.given()).filter_map(gas_name)),
        S::Expect(line) => {
            found.extend(line.property.given().and_then(property_name));
            found.extend(line.diluted.as_ref().and_then(dilution_name));
        }
        S::Accept(line) => {
            let on = line.on.as_ref().and_then(Slot::given);
            found.extend(on.map(|name| NameUse::new(name, Ingredient).or(Constituent)));
        }
        S::Gives(list) => found.extend(list.iter().filter_map(|given| given_name(given, Constituent))),
        S::Holds(list) => found.extend(list.iter().map(|name| NameUse::new(name, Constituent).or(Ingredient))),
        S::With(side) => found.extend(side.names.iter().map(|name| NameUse::new(name, Constituent).or(Ingredient))),
        S::While(line) => found.extend(line.property.given().and_then(property_name)),
        S::KeepAwayFrom(list) => found.extend(list.iter().map(|name| NameUse::new(name, Ingredient).or(Constituent))),
        S::ComplexWith(complex) => {
            found.extend(complex.partner.given().and_then(|given| given_name(given, Constituent)));
            found.extend(part_names(&complex.parts));
        }
        S::InteractionWith(line) => {
            found.extend(line.partner.given().map(|name| NameUse::new(name, Constituent)));
            found.extend(part_names(&line.parts));
        }
        S::Pka(constant) | S::LogKsp(constant) | S::LogKh(constant) | S::MolarConductivity(constant) | S::MolarVolume(constant) => {
            found.extend(part_names(&constant.parts));
        }
        _ => {}
    }
    found.sort_by_key(|one| one.name.span);
    return found;

    fn from_names(qualifiers: &[Qualifier]) -> impl Iterator<Item = NameUse<'_>> {
        qualifiers.iter().filter_map(|qualifier| match &qualifier.kind {
            QualifierKind::From(name) => name.given().map(|name| NameUse::new(name, Ingredient).solution()),
            _ => None,
        })
    }

    fn target_names(target: &Target) -> Vec<NameUse<'_>> {
        let mut found = Vec::new();
        if let TargetKind::Property { property, .. } | TargetKind::Series { property, .. } = &target.kind {
            found.extend(property_name(property));
        }
        found.extend(target.diluted.as_ref().and_then(dilution_name));
        found
    }

    fn property_name(property: &Property) -> Option<NameUse<'_>> {
        match &property.kind {
            PropertyKind::Total(name) | PropertyKind::Free(name) => Some(NameUse::new(name.given()?, Constituent)),
            PropertyKind::SaturationIndex(name) => Some(NameUse::new(name.given()?, Phase)),
            _ => None,
        }
    }

    fn dilution_name(dilution: &Dilution) -> Option<NameUse<'_>> {
        Some(NameUse::new(dilution.with.as_ref()?.given()?, Ingredient))
    }

    fn gas_name(gas: &Gas) -> Option<NameUse<'_>> {
        match &gas.kind {
            GasKind::Part { of, .. } => Some(NameUse::new(of.given()?, Ingredient).or(Constituent)),
            GasKind::Air => None,
        }
    }

    fn given_name(given: &Given, namespace: Namespace) -> Option<NameUse<'_>> {
        Some(NameUse::new(given.name.given()?, namespace))
    }

    fn part_names(parts: &[ConstantPart]) -> impl Iterator<Item = NameUse<'_>> {
        parts.iter().filter_map(|part| match &part.kind {
            ConstantPartKind::Of(name) | ConstantPartKind::Named(name) => Some(NameUse::new(name.given()?, Constituent)),
            ConstantPartKind::Partner(given) => given_name(given, Constituent),
            _ => None,
        })
    }
}
