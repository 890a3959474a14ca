//! The built-in library: substances, ions and constants, written in the language itself, each with its source.

mod buffers;
mod hazards;
#[cfg(test)]
mod dangers;
#[cfg(test)]
mod solids;

pub use buffers::{Buffer, buffers};
pub use hazards::hazard_statement;

use std::sync::{Arc, LazyLock};

use crate::model::{self, BlockRole, Constituents, DefinitionKey, File, Names, namespace};
use crate::syntax::{self, tree::Tree};
use crate::text::{FileId, SourceText};

/// The version of the library, which `scruple.toml` can pin. It changes whenever a constant does.
pub const VERSION: &str = "1.0";

macro_rules! files {
    ($($name:literal),* $(,)?) => {
        &[$(($name, include_str!(concat!("data/", $name)))),*]
    };
}

/// The files of the library in reading order: name and text.
const FILES: &[(&str, &str)] = files![
    "dangers-gases.prep",
    "dangers-groups.prep",
    "dangers-keeping.prep",
    "dangers-mixtures.prep",
    "dangers-reactions.prep",
    "ions-amines.prep",
    "ions-amino.prep",
    "ions-buffers.prep",
    "ions-carboxylates.prep",
    "ions-chelators.prep",
    "ions-halogens.prep",
    "ions-metallates.prep",
    "ions-metals.prep",
    "ions-nonmetals.prep",
    "ions-organic.prep",
    "ions-phosphates.prep",
    "solids-acids.prep",
    "solids-carbonates.prep",
    "solids-halides.prep",
    "solids-hydroxides.prep",
    "solids-oxalates.prep",
    "solids-phosphates.prep",
    "solids-soluble-salts.prep",
    "solids-sulfates-sulfides.prep",
    "substances-alcohols.prep",
    "substances-alkalis.prep",
    "substances-aluminium-rare-earths.prep",
    "substances-amines.prep",
    "substances-amino-acids.prep",
    "substances-ammonium-salts.prep",
    "substances-aromatic-acids.prep",
    "substances-borates-silicates.prep",
    "substances-buffers.prep",
    "substances-buffers-sulfonic.prep",
    "substances-calcium-salts.prep",
    "substances-carbonates.prep",
    "substances-carboxylic-acids.prep",
    "substances-chelators.prep",
    "substances-chromium-vanadium-uranium.prep",
    "substances-citrates.prep",
    "substances-cobalt-nickel-copper.prep",
    "substances-detergents.prep",
    "substances-dicarboxylic-acids.prep",
    "substances-elements.prep",
    "substances-indicators.prep",
    "substances-lithium-rubidium-caesium.prep",
    "substances-magnesium-salts.prep",
    "substances-manganese-iron.prep",
    "substances-mineral-acids.prep",
    "substances-mixtures.prep",
    "substances-nucleotides.prep",
    "substances-oxidisers.prep",
    "substances-phosphates.prep",
    "substances-polymers.prep",
    "substances-potassium-salts.prep",
    "substances-preservatives-antibiotics.prep",
    "substances-protein-reagents.prep",
    "substances-proteins.prep",
    "substances-reagents-not-followed.prep",
    "substances-reducing-agents.prep",
    "substances-silver-tin-lead.prep",
    "substances-sodium-salts.prep",
    "substances-solvents.prep",
    "substances-stains.prep",
    "substances-strontium-barium.prep",
    "substances-sugars.prep",
    "substances-sulfonates.prep",
    "substances-vitamins-polyamines.prep",
    "substances-water-and-gases.prep",
    "substances-zinc-cadmium-mercury.prep",
];

/// A file of the library, read.
#[derive(Clone, Debug)]
pub struct LibraryFile {
    /// Its name, as links and messages show it.
    pub name: &'static str,
    /// Its text.
    pub source: Arc<SourceText>,
    /// Its tree.
    pub tree: Arc<Tree>,
    /// Its meaning.
    pub model: Arc<File>,
}

/// The library, read once.
#[derive(Debug)]
pub struct BuiltIn {
    /// Its files.
    pub files: Vec<LibraryFile>,
    /// Its names.
    pub names: Arc<Names>,
    /// Its chemistry, for roots that add nothing to it.
    pub constituents: Arc<Constituents>,
}

static BUILT_IN: LazyLock<BuiltIn> = LazyLock::new(read);

/// The library.
pub fn built_in() -> &'static BuiltIn {
    &BUILT_IN
}

/// The first number that a file of a user's library can have; library files come before.
pub fn first_user_file() -> FileId {
    FileId(FILES.len() as u32)
}

/// The library file that a number stands for.
pub fn file(id: FileId) -> Option<&'static LibraryFile> {
    built_in().files.get(id.0 as usize)
}

fn read() -> BuiltIn {
    use rayon::prelude::*;
    let files: Vec<LibraryFile> = FILES
        .par_iter()
        .enumerate()
        .map(|(index, (name, text))| {
            let tree = Arc::new(syntax::parse(text));
            let model = Arc::new(model::lower_file(FileId(index as u32), &tree, None));
            LibraryFile { name, source: Arc::new(SourceText::from(*text)), tree, model }
        })
        .collect();
    let mut names = Names::default();
    for file in &files {
        names.add_file(file.model.id, &file.model.blocks);
    }
    let constituents = Constituents::build(files.iter().flat_map(|file| definitions(&file.model)));
    BuiltIn { files, names: Arc::new(names), constituents: Arc::new(constituents) }
}

/// The blocks of a file that define something, each with its key.
pub fn definitions(file: &File) -> impl Iterator<Item = (DefinitionKey, &model::Block)> {
    file.blocks.iter().filter_map(|block| match (block.role, &block.name) {
        (BlockRole::Defines(kind), Some(name)) => {
            let key = DefinitionKey { file: file.id, namespace: namespace(kind), name: name.key.clone() };
            Some((key, block.as_ref()))
        }
        _ => None,
    })
}
