//! What a name means in a file: its own definitions, those of the files it uses, and the built-in library.

use std::collections::HashMap;
use std::sync::Arc;

use super::{Block, Body, DefinitionKey, NameKey, Namespace, namespace};
use crate::syntax::formula;
use crate::text::FileId;

/// A definition that a name can mean.
#[derive(Clone, Debug)]
pub struct Definition {
    /// Where it is.
    pub key: DefinitionKey,
    /// The block.
    pub block: Arc<Block>,
}

impl Definition {
    /// The name in the header, as written.
    pub fn name(&self) -> &str {
        self.block.name.as_ref().map_or("", |name| name.text.as_str())
    }
}

/// The definitions of some files, by name and by formula.
#[derive(Clone, Debug, Default)]
pub struct Names {
    by_name: HashMap<(Namespace, NameKey), Vec<Definition>>,
    by_formula: HashMap<String, Vec<Definition>>,
    sources: Vec<FileId>,
}

impl Names {
    /// Adds the definitions of a file.
    pub fn add_file(&mut self, file: FileId, blocks: &[Arc<Block>]) {
        self.sources.push(file);
        for block in blocks {
            let (Some(kind), Some(name)) = (block.kind(), &block.name) else { continue };
            let namespace = namespace(kind);
            let key = DefinitionKey { file, namespace, name: name.key.clone() };
            let definition = Definition { key, block: block.clone() };
            for name in std::iter::once(name).chain(&block.also) {
                let same_name = self.by_name.entry((namespace, name.key.clone())).or_default();
                if !same_name.iter().any(|old| Arc::ptr_eq(&old.block, block)) {
                    same_name.push(definition.clone());
                }
            }
            if let Body::Substance(substance) = &block.body
                && let Some((_, formula)) = &substance.formula
            {
                self.by_formula.entry(formula.canonical()).or_default().push(definition);
            }
        }
    }

    /// The files that were added, in order.
    pub fn sources(&self) -> &[FileId] {
        &self.sources
    }

    /// The definitions that bear this name.
    pub fn named(&self, namespace: Namespace, name: &NameKey) -> &[Definition] {
        self.by_name.get(&(namespace, name.clone())).map_or(&[], Vec::as_slice)
    }

    /// The substances that have this formula.
    pub fn with_formula(&self, canonical: &str) -> &[Definition] {
        self.by_formula.get(canonical).map_or(&[], Vec::as_slice)
    }

    /// Every name with its definitions, in no particular order.
    pub fn all(&self) -> impl Iterator<Item = (Namespace, &NameKey, &[Definition])> {
        self.by_name.iter().map(|((namespace, name), definitions)| (*namespace, name, definitions.as_slice()))
    }
}

/// What is visible from one file.
#[derive(Clone, Debug)]
pub struct Scope {
    /// The file's own definitions and those of the files it uses.
    pub own: Arc<Names>,
    /// The built-in library.
    pub built_in: Arc<Names>,
}

/// What a name was found to mean.
#[derive(Clone, Debug)]
pub enum Lookup<'a> {
    /// One thing.
    One(&'a Definition),
    /// Several things of one level.
    Several(Vec<&'a Definition>),
    /// Nothing.
    Nothing,
}

impl Scope {
    /// What a name means in a namespace: own and used definitions first, then the built-in ones, then formulas, then the
    /// members of a series (`NAME (4 mL)`), which mean the series.
    pub fn find(&self, namespace: Namespace, name: &NameKey, written: &str) -> Lookup<'_> {
        for names in [&self.own, &self.built_in] {
            match one_or_several(names.named(namespace, name)) {
                Lookup::Nothing => {}
                found => return found,
            }
        }
        if namespace == Namespace::Ingredient
            && let Ok(formula) = formula::parse(written)
        {
            let canonical = formula.canonical();
            for names in [&self.own, &self.built_in] {
                match one_or_several(names.with_formula(&canonical)) {
                    Lookup::Nothing => {}
                    found => return found,
                }
            }
        }
        match member_of_series(written) {
            Some(series) if namespace == Namespace::Ingredient => self.series(&NameKey::new(series)),
            _ => Lookup::Nothing,
        }
    }

    /// The solution of this name, where it is a series or may take one over.
    fn series(&self, name: &NameKey) -> Lookup<'_> {
        match self.own.named(Namespace::Ingredient, name) {
            [one] if matches!(&one.block.body, Body::Solution(recipe) if recipe.members > 1 || recipe.like.is_some()) => Lookup::One(one),
            _ => Lookup::Nothing,
        }
    }

    /// Everything visible: own definitions first.
    pub fn all(&self) -> impl Iterator<Item = (Namespace, &NameKey, &[Definition])> {
        self.own.all().chain(self.built_in.all())
    }
}

/// The name before the value in brackets, where a name is written as that of a member: `Level` of `Level (4 mL)`.
pub fn member_of_series(written: &str) -> Option<&str> {
    let (series, _) = written.strip_suffix(')')?.rsplit_once(" (")?;
    Some(series.trim_end())
}

fn one_or_several(definitions: &[Definition]) -> Lookup<'_> {
    match definitions {
        [] => Lookup::Nothing,
        [one] => Lookup::One(one),
        several => Lookup::Several(several.iter().collect()),
    }
}
