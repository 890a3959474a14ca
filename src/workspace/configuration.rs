//! `scruple.toml`: what a library of recipes sets for all its files.

use std::collections::BTreeMap;

use camino::Utf8Path;
use serde::Deserialize;

use super::disk::CONFIGURATION_FILE;
use super::reader::Reader;
use crate::chemistry::{ActivityModel, Settings};
use crate::finding::{Code, Level};
use crate::library;

/// What a root's `scruple.toml` says, with defaults for what it does not say.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Configuration {
    /// The edition of the language; the newest where it is not said.
    pub language: Option<u32>,
    /// The version of the built-in library that the root is pinned to.
    pub library: Option<String>,
    /// The lab that is meant where several are in scope.
    pub lab: Option<String>,
    /// Levels of findings: none turns a finding off.
    pub levels: BTreeMap<Code, Option<Level>>,
    /// How to solve.
    pub settings: Settings,
    /// What is wrong with the file.
    pub errors: Vec<ConfigurationError>,
}

/// Something wrong with a `scruple.toml`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ConfigurationError {
    /// One sentence.
    pub message: String,
    /// The line, counted from 1, where it is known.
    pub line: Option<usize>,
}

/// The file as written.
#[derive(Debug, Default, Deserialize)]
#[serde(deny_unknown_fields, rename_all = "kebab-case")]
struct Written {
    language: Option<u32>,
    library: Option<String>,
    lab: Option<String>,
    model: Option<String>,
    #[serde(default)]
    findings: BTreeMap<String, String>,
}

impl Configuration {
    /// Reads the configuration of a root; a root without one has the defaults.
    pub fn read(reader: &dyn Reader, root: &Utf8Path) -> Self {
        match reader.read(&root.join(CONFIGURATION_FILE)) {
            Ok(Some(text)) => Configuration::parse(&text),
            Ok(None) => Configuration::default(),
            Err(problem) => Configuration::default().with_error(format!("scruple.toml: {problem}."), None),
        }
    }

    /// Reads the text of a `scruple.toml`.
    pub fn parse(text: &str) -> Self {
        let written: Written = match toml::from_str(text) {
            Ok(written) => written,
            Err(error) => {
                let line = error.span().map(|span| 1 + text.get(..span.start).unwrap_or_default().matches('\n').count());
                return Configuration::default().with_error(format!("scruple.toml: {}.", error.message().trim_end_matches('.')), line);
            }
        };
        let mut configuration =
            Configuration { language: written.language, library: written.library, lab: written.lab, ..Default::default() };
        if let Some(edition) = configuration.language.filter(|edition| *edition != 1) {
            configuration = configuration
                .with_error(format!("scruple.toml asks for edition {edition} of the language; this program knows edition 1."), None);
        }
        if let Some(pin) = configuration.library.clone().filter(|pin| pin != library::VERSION) {
            configuration = configuration.with_error(
                format!("scruple.toml pins the built-in library to {pin}; this program carries {}.", library::VERSION),
                None,
            );
        }
        match written.model.as_deref() {
            None | Some("SIT") => {}
            Some("Davies") => configuration.settings.model = ActivityModel::Davies,
            Some("Bates-Guggenheim") => configuration.settings.model = ActivityModel::BatesGuggenheim,
            Some(other) => {
                configuration = configuration
                    .with_error(format!("scruple.toml: `{other}` is no activity model; SIT, Davies and Bates-Guggenheim are."), None);
            }
        }
        for (name, level) in written.findings {
            let Some(code) = Code::from_name(&name) else {
                configuration = configuration.with_error(format!("scruple.toml: no finding has the code `{name}`."), None);
                continue;
            };
            let level = match level.as_str() {
                "error" => Some(Level::Error),
                "warning" => Some(Level::Warning),
                "hint" => Some(Level::Hint),
                "off" => None,
                other => {
                    configuration = configuration.with_error(
                        format!("scruple.toml: `{other}` is no level; error, warning, hint and off are."),
                        None,
                    );
                    continue;
                }
            };
            configuration.levels.insert(code, level);
        }
        configuration
    }

    fn with_error(mut self, message: String, line: Option<usize>) -> Self {
        self.errors.push(ConfigurationError { message, line });
        self
    }

    /// The level that a finding has here; none where it is turned off.
    pub fn level(&self, code: Code, own: Level) -> Option<Level> {
        self.levels.get(&code).copied().unwrap_or(Some(own))
    }
}
