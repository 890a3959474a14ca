//! What stands on the bench: a kilogram of a substance, an ideal solution, a bottle or a stock, and how dense it is.

use std::sync::Arc;

use super::names::{self, Found, listed, written_form};
use super::strength::{mass_fraction, table_density};
use super::{Context, Evaluation, Member, Outcome, Refusal, Solute, ingredient_has_no_value};
use crate::chemistry::{Mixture, State, water};
use crate::finding::{Code, Finding, Fix};
use crate::model::{
    Amount, DefinitionKey, Lookup, NameKey, Namespace, Qualifiers, Reference, StrengthKind, Substance, is_water, member_of_series,
};
use crate::syntax::tree::BlockKind;
use crate::units::Dimension;

/// Volume that a kilogram of inert matter of unstated density takes up in solution, L. Common practice, no source: organic
/// solids and polymers lie between 0.7 and 0.9 L/kg.
pub const INERT_LITRES_PER_KG: f64 = 0.75;

/// Something to take from, per kilogram.
#[derive(Clone, Debug)]
pub struct Goods {
    /// What the line calls it.
    pub name: String,
    /// What it is.
    pub definition: DefinitionKey,
    /// What a kilogram of it holds.
    pub per_kg: Mixture,
    /// Water in a kilogram: free, of crystallisation, of a strength; not that of hydroxide ions, kg.
    pub water_kg: f64,
    /// Its density, kg/m³ (g/L); none for solids.
    pub density: Option<f64>,
    /// The one substance whose amount a line can mean, with mol per kg and its pure mass per kg.
    pub solute: Option<(DefinitionKey, f64, f64)>,
    /// Whether it is water, or a liquid that others are dissolved in.
    pub is_liquid: bool,
    /// The stock that it is, where it is one.
    pub stock: Option<Stock>,
    /// The substances in a kilogram.
    pub solutes: Vec<Solute>,
}

/// A solution or bottle of the library, evaluated.
#[derive(Clone, Debug)]
pub struct Stock {
    /// Its outcome.
    pub outcome: Arc<Outcome>,
    /// Whether it is a bottle.
    pub is_bottle: bool,
    /// How many times stronger than used it says to be.
    pub concentrate: Option<f64>,
}

impl Goods {
    /// Mass of a volume (L), kg; none for solids.
    pub fn mass_of_litres(&self, litres: f64) -> Option<f64> {
        self.density.map(|density| litres * density / 1000.0)
    }
}

/// How near the strength of a bottle or solution must be to the strength that is written before a name.
const SAME_STRENGTH: f64 = 0.005;

/// Whether the one substance of a stock has this strength.
fn has_strength(outcome: &Outcome, strength: &Amount) -> bool {
    let [solute] = outcome.solutes.as_slice() else { return false };
    let value = match strength.dimension() {
        Dimension::AmountConcentration => solute.amount_mol.map(|amount| amount / outcome.volume_L),
        Dimension::Molality => solute.amount_mol.map(|amount| amount / outcome.water_kg),
        Dimension::MassConcentration => Some(1000.0 * solute.mass_kg / outcome.volume_L),
        Dimension::MassFraction => Some(solute.mass_kg / outcome.mass_kg),
        _ => None,
    };
    value.is_some_and(|value| (value / strength.value - 1.0).abs() <= SAME_STRENGTH)
}

/// The finding for a strength that several bottles or solutions have.
fn which_bottle(reference: &Reference, stocks: &[&crate::model::Definition]) -> Finding {
    let names: Vec<&str> = stocks.iter().map(|stock| stock.name()).collect();
    let from_strength = reference.strength.map_or(reference.at.span, |strength| strength.span.to(reference.at.span));
    let at = crate::finding::Anchor::new(reference.at.line, from_strength);
    let mut finding = Finding::new(
        Code::WhichBottle,
        at,
        format!("{} are all {} of this strength.", names.join(", "), reference.text),
    )
    .help("Name the one that is taken.")
    .about(reference.key.as_str());
    for stock in stocks {
        finding = finding
            .fix(Fix::replace(format!("Write {}", stock.name()), at, written_form(stock.name())))
            .related_at(names::place_of(stock), format!("{} is defined here", stock.name()));
    }
    finding
}

/// The goods that a reference means. `qualifiers` may give a density, purity and water.
pub fn goods(
    reference: &Reference,
    found: &Found,
    qualifiers: &Qualifiers,
    temperature_K: f64,
    context: &Context,
) -> Result<Goods, Refusal> {
    let stated_density = qualifiers.density.map(|density| density.value);
    let goods = match (found.substance(), &reference.strength) {
        (Some(substance), None) => pure(reference, found, substance, qualifiers, temperature_K, context)?,
        (Some(substance), Some(strength)) => match strength.kind {
            StrengthKind::Concentration(amount) => {
                let is_it = |outcome: &Outcome| has_strength(outcome, &amount);
                match names::stocks_of_strength(reference, found, is_it, context).as_slice() {
                    [] => {
                        if let Some(finding) = named_like_a_strength(reference, &amount, context) {
                            return Err(finding.into());
                        }
                    }
                    [one] => return stock(reference, &Found { definition: one }, temperature_K, context),
                    several => return Err(which_bottle(reference, several).into()),
                }
                ideal_solution(reference, found, substance, &amount, stated_density, temperature_K, context)?
            }
            StrengthKind::Ratio { of_it, of_water } => {
                let pure = pure(reference, found, substance, qualifiers, temperature_K, context)?;
                diluted(reference, pure, of_it, of_water, temperature_K, context)?
            }
        },
        (None, strength) => {
            let stock = stock(reference, found, temperature_K, context)?;
            match strength.map(|strength| strength.kind) {
                None => stock,
                Some(StrengthKind::Ratio { of_it, of_water }) => {
                    diluted(reference, stock, of_it, of_water, temperature_K, context)?
                }
                Some(StrengthKind::Concentration(_)) => {
                    return Err(Finding::new(
                        Code::StrengthOrName,
                        reference.at,
                        format!("{} has a strength of its own, so none can stand before it.", reference.text),
                    )
                    .help("Remove the strength, or name the substance instead.")
                    .into());
                }
            }
        }
    };
    Ok(match stated_density {
        Some(density) => Goods { density: Some(density), ..goods },
        None => goods,
    })
}

/// Says that the strength and the name together are what something in scope is called, though it holds another strength.
fn named_like_a_strength(reference: &Reference, amount: &Amount, context: &Context) -> Option<Finding> {
    // Twelve digits, so that the way to the base unit and back does not show.
    let value: f64 = format!("{:.11e}", amount.unit.from_base(amount.value)).parse().ok()?;
    let names = amount.unit.spellings().iter().map(|unit| format!("{value} {unit} {}", reference.text));
    let found = names.into_iter().find_map(|name| match context.scope_of(reference).find(Namespace::Ingredient, &NameKey::new(&name), &name) {
        Lookup::One(definition) => Some(definition.clone()),
        Lookup::Nothing | Lookup::Several(_) => None,
    })?;
    let message = format!("{} is the name of something that does not hold just that strength.", found.name());
    Some(
        Finding::new(Code::StrengthOrName, reference.at, message)
            .help(format!("Write \"{}\" in quotes if it is meant, or give it another name.", found.name()))
            .related_at(names::place_of(&found), "defined here"),
    )
}

/// What a mole of a substance brings, or the finding that says why it is not known.
pub(super) fn per_mole(reference: &Reference, found: &Found, substance: &Substance, context: &Context) -> Result<(Mixture, f64), Refusal> {
    use crate::model::CompositionRefusal as Why;
    context.constituents.per_mole(&found.definition.key, substance).map_err(|why| {
        let message = match why {
            Why::Inert | Why::NoMolarMass => {
                format!("{} has no formula, so its amount of substance is not known.", reference.text)
            }
            Why::Unknown(name) => format!(
                "{} gives {}, which no ion or molecule is called.",
                found.definition.name(),
                name.text
            ),
            Why::DoesNotBalance { missing_g_per_mol } => format!(
                "What {} gives and its formula differ by {missing_g_per_mol:.2} g/mol, which is not water.",
                found.definition.name()
            ),
        };
        Finding::new(Code::BadDefinition, reference.at, message)
            .help("Mend the substance's block, or state the line by mass.")
            .related_at(super::names::place_of(found.definition), "defined here")
            .into()
    })
}

/// A substance as weighed: of purity P in the dried goods, which hold water W.
fn pure(
    reference: &Reference,
    found: &Found,
    substance: &Substance,
    qualifiers: &Qualifiers,
    temperature_K: f64,
    context: &Context,
) -> Result<Goods, Refusal> {
    let purity = qualifiers.purity.map_or(1.0, |purity| purity.value);
    let moisture = qualifiers.water.map_or(0.0, |water| water.value);
    let share = purity * (1.0 - moisture);
    let is_liquid = substance.form.as_deref() == Some("liquid");
    let mut per_kg = Mixture { water_kg: moisture, ..Mixture::default() };
    let mut water_kg = moisture;
    let inert_kg = (1.0 - moisture) * (1.0 - purity);
    per_kg.inert_mass_kg = inert_kg;
    per_kg.inert_volume_L = inert_kg * INERT_LITRES_PER_KG;
    let inert = substance.inert || substance.molar_mass.is_none();
    let mut solute = None;
    if inert {
        per_kg.inert_mass_kg += share;
        per_kg.inert_volume_L += share * substance.density.map_or(INERT_LITRES_PER_KG, |density| 1000.0 / density);
        if let Some(molar_mass) = substance.molar_mass {
            solute = Some((found.definition.key.clone(), share / molar_mass, share));
        }
    } else if let Some(molar_mass) = substance.molar_mass {
        let (mole, crystal_water) = per_mole(reference, found, substance, context)?;
        per_kg.add(&mole, share / molar_mass);
        water_kg += crystal_water * share / molar_mass;
        solute = Some((found.definition.key.clone(), share / molar_mass, share));
    }
    let water_itself = is_water(substance);
    // A volume is measured where the solution is made, and what water weighs there is known.
    let density = match (water_itself, is_liquid) {
        (true, _) => Some(water::density_kg_per_m3(temperature_K)),
        (false, true) => substance.density,
        (false, false) => None,
    };
    let solutes = if water_itself {
        Vec::new()
    } else {
        vec![Solute {
            definition: found.definition.key.clone(),
            name: found.definition.name().to_string(),
            amount_mol: solute.as_ref().map(|(_, moles, _)| *moles),
            mass_kg: share,
        }]
    };
    Ok(Goods {
        name: reference.text.clone(),
        definition: found.definition.key.clone(),
        density,
        per_kg,
        water_kg,
        solute,
        is_liquid: is_liquid || water_itself,
        stock: None,
        solutes,
    })
}

/// A substance at a strength: a solution of it in water and nothing else.
#[allow(clippy::too_many_arguments, reason = "all of them are what a strength can depend on")]
fn ideal_solution(
    reference: &Reference,
    found: &Found,
    substance: &Substance,
    strength: &Amount,
    stated_density: Option<f64>,
    temperature_K: f64,
    context: &Context,
) -> Result<Goods, Refusal> {
    let share = mass_fraction(reference, found, substance, strength, stated_density, temperature_K, context)?;
    let mut per_kg = Mixture { water_kg: 1.0 - share, ..Mixture::default() };
    let mut water_kg = 1.0 - share;
    let mut solute = None;
    match substance.molar_mass {
        Some(molar_mass) if !substance.inert => {
            let (mole, crystal_water) = per_mole(reference, found, substance, context)?;
            per_kg.add(&mole, share / molar_mass);
            water_kg += crystal_water * share / molar_mass;
            solute = Some((found.definition.key.clone(), share / molar_mass, share));
        }
        _ => {
            per_kg.inert_mass_kg += share;
            per_kg.inert_volume_L += share * substance.density.map_or(INERT_LITRES_PER_KG, |density| 1000.0 / density);
        }
    }
    let density = stated_density
        .or_else(|| table_density(substance, share))
        .or_else(|| density_of(&per_kg, temperature_K, context));
    Ok(Goods {
        name: reference.text.clone(),
        definition: found.definition.key.clone(),
        density,
        solutes: vec![Solute {
            definition: found.definition.key.clone(),
            name: found.definition.name().to_string(),
            amount_mol: solute.as_ref().map(|(_, moles, _)| *moles),
            mass_kg: share,
        }],
        per_kg,
        water_kg,
        solute,
        is_liquid: true,
        stock: None,
    })
}

/// Density of a mixture by the chemistry, or by adding volumes where there is no water, kg/m³.
pub fn density_of(mixture: &Mixture, temperature_K: f64, context: &Context) -> Option<f64> {
    let volume = volume_of(mixture, temperature_K, context)?;
    (volume > 0.0).then(|| 1000.0 * mixture.mass_kg(&context.constituents.chemistry) / volume)
}

/// Volume of a mixture, L.
pub fn volume_of(mixture: &Mixture, temperature_K: f64, context: &Context) -> Option<f64> {
    match context.constituents.chemistry.solve(mixture, temperature_K, context.settings) {
        Ok(state) => Some(state.volume_L),
        Err(_) => dry_volume_L(mixture, context),
    }
}

/// Volume of what holds no water, by adding the molar volumes, L; none where one is not known.
pub fn dry_volume_L(mixture: &Mixture, context: &Context) -> Option<f64> {
    let chemistry = &context.constituents.chemistry;
    let mut volume = mixture.inert_volume_L + mixture.water_kg.max(0.0);
    for (component, amount) in &mixture.amounts_mol {
        let species = chemistry.base_species(*component)?;
        let molar = match chemistry.molar_volume_cm3_per_mol(species) {
            Some(molar) => molar,
            None => 1e6 * chemistry.component(*component)?.molar_mass_kg_per_mol / 1300.0,
        };
        volume += amount * molar / 1000.0;
    }
    Some(volume)
}

/// Volumes of the thing and of water, as a strength in brackets says (ISO 78-2).
fn diluted(
    reference: &Reference,
    goods: Goods,
    of_it: f64,
    of_water: f64,
    temperature_K: f64,
    context: &Context,
) -> Result<Goods, Refusal> {
    let Some(density) = goods.density else {
        return Err(Finding::new(
            Code::UnitOfWrongKind,
            reference.at,
            format!("{} is no liquid, so it is not diluted by volumes.", reference.text),
        )
        .help("State its strength in g/L or mol/L.")
        .into());
    };
    let mass = of_it * density / 1000.0;
    let water = of_water * crate::chemistry::water::density_kg_per_m3(temperature_K) / 1000.0;
    let total = mass + water;
    if total <= 0.0 || !total.is_finite() {
        return Err(Finding::new(Code::BadNumber, reference.at, "Both volumes are zero.").into());
    }
    let factor = mass / total;
    let mut per_kg = goods.per_kg.scaled(factor);
    per_kg.water_kg += water / total;
    let density = density_of(&per_kg, temperature_K, context);
    Ok(Goods {
        density,
        solute: goods.solute.map(|(key, moles, mass)| (key, factor * moles, factor * mass)),
        solutes: goods.solutes.into_iter().map(|solute| scaled(&solute, factor)).collect(),
        water_kg: factor * goods.water_kg + water / total,
        per_kg,
        ..goods
    })
}

/// A solute's amounts times a factor.
pub fn scaled(solute: &Solute, factor: f64) -> Solute {
    Solute {
        amount_mol: solute.amount_mol.map(|amount| amount * factor),
        mass_kg: solute.mass_kg * factor,
        ..solute.clone()
    }
}

/// Whether a definition is called by the very name of a reference.
fn bears_name(found: &Found, reference: &Reference) -> bool {
    found.definition.block.name.iter().chain(&found.definition.block.also).any(|name| name.key == reference.key)
}

/// The member of a series that a reference names.
fn member<'e>(reference: &Reference, series: &str, members: &'e [Member]) -> Result<&'e Member, Refusal> {
    if let Some(member) = members.iter().find(|member| NameKey::new(&member.name) == reference.key) {
        return Ok(member);
    }
    let names: Vec<&str> = members.iter().map(|member| member.name.as_str()).collect();
    let finding = match members.len() {
        1 => Finding::new(Code::UnknownName, reference.at, format!("{series} is one solution, and no series with members."))
            .help(format!("Write {series}.")),
        count => Finding::new(
            Code::AmbiguousName,
            reference.at,
            format!("{series} is a series of {count} solutions: {}.", listed(&names)),
        )
        .help("Name the member that is meant."),
    };
    let write = |name: &&str| Fix::replace(format!("Write {name}"), reference.at, written_form(name));
    Err(finding.about(reference.key.as_str()).fixes(names.iter().map(write)).into())
}

/// A solution or bottle of the library as an ingredient.
fn stock(reference: &Reference, found: &Found, temperature_K: f64, context: &Context) -> Result<Goods, Refusal> {
    let key = &found.definition.key;
    let name = found.definition.name();
    let evaluation = (context.stocks)(key);
    let outcome = match evaluation.as_deref() {
        Some(Evaluation { members, .. }) if members.len() > 1 || member_of_series(&reference.text).is_some_and(|_| !bears_name(found, reference)) => {
            member(reference, name, members)?.outcome.clone()
        }
        evaluation => evaluation.and_then(|evaluation| evaluation.outcome()).cloned(),
    };
    let Some(outcome) = outcome else {
        return Err(ingredient_has_no_value(reference.at, name, key).into());
    };
    let per_kg = outcome.mixture.scaled(1.0 / outcome.mass_kg);
    let solutes: Vec<Solute> = outcome.solutes.iter().map(|solute| scaled(solute, 1.0 / outcome.mass_kg)).collect();
    let is_bottle = found.kind() == Some(BlockKind::Bottle);
    // A stock is at its taker's temperature; a bottle's label is taken as it stands.
    let density = if is_bottle || (outcome.made_at_K - temperature_K).abs() < 0.01 {
        outcome.mass_kg / outcome.volume_L
    } else {
        match context.constituents.chemistry.solve(&outcome.mixture, temperature_K, context.settings) {
            Ok(state) => outcome.mass_kg / state.volume_L,
            Err(_) => outcome.mass_kg / outcome.volume_L,
        }
    } * 1000.0;
    let solute = match solutes.as_slice() {
        [one] => one.amount_mol.map(|moles| (one.definition.clone(), moles, one.mass_kg)),
        _ => None,
    };
    Ok(Goods {
        name: reference.text.clone(),
        definition: key.clone(),
        per_kg,
        water_kg: outcome.water_kg / outcome.mass_kg,
        density: Some(density),
        solute,
        is_liquid: true,
        stock: Some(Stock {
            is_bottle,
            concentrate: found.definition.block.recipe().and_then(|recipe| recipe.concentrate).map(|fold| fold.value),
            outcome,
        }),
        solutes,
    })
}

/// The beaker's state at a temperature.
pub fn state_of(mixture: &Mixture, temperature_K: f64, context: &Context) -> Result<State, crate::chemistry::Failure> {
    context.constituents.chemistry.solve(mixture, temperature_K, context.settings)
}
