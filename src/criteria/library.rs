//! The sheets that can be asked for: the project's own, and a user's beside them.

use super::read::read_sheet;
use super::sheet::Sheet;
use crate::source::{Diagnostic, Faults, SourceFile};
use std::collections::BTreeMap;
use std::sync::{Arc, OnceLock};

/// Sheets by name.
#[derive(Clone, Debug, Default)]
pub struct Library {
    sheets: BTreeMap<String, Arc<Sheet>>,
}

impl Library {
    /// A library without sheets.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a sheet.
    ///
    /// # Errors
    ///
    /// A fault at its name if there is one of that name: a sheet is never replaced in silence.
    pub fn add(&mut self, sheet: Sheet) -> Result<(), Faults> {
        if let Some(known) = self.sheets.get(&sheet.name.value) {
            let message = format!("there is a sheet `{}` already", sheet.name.value);
            return Err(
                Diagnostic::error("duplicate-sheet", message, &sheet.name.place)
                    .help(format!(
                        "the other is {}; give this one a name of its own",
                        known.place.file.name
                    ))
                    .into(),
            );
        }
        self.sheets
            .insert(sheet.name.value.clone(), Arc::new(sheet));
        Ok(())
    }

    /// A sheet by its name.
    #[must_use]
    pub fn find(&self, name: &str) -> Option<&Arc<Sheet>> {
        self.sheets.get(name)
    }

    /// Every sheet, by name.
    pub fn sheets(&self) -> impl Iterator<Item = &Arc<Sheet>> {
        self.sheets.values()
    }

    /// The sheet's name that a wrong one was most likely meant for.
    #[must_use]
    pub fn nearest(&self, name: &str) -> Option<&str> {
        nearest(name, self.sheets.keys().map(String::as_str))
    }
}

/// The name nearest to a wrong one, if it is near.
pub(super) fn nearest<'a>(typed: &str, known: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    let typed = typed.to_lowercase();
    known
        .map(|name| (strsim::jaro_winkler(&typed, &name.to_lowercase()), name))
        .filter(|(likeness, _)| *likeness > 0.8)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, name)| name)
}

/// Files of the project's own sheets, with their texts.
macro_rules! sheets {
    ($($file:literal),* $(,)?) => {
        [$((concat!("built-in/", $file), include_str!(concat!("sheets/", $file)))),*]
    };
}

/// The project's own sheets, read once.
///
/// # Panics
///
/// If one of them does not read, which a test excludes.
#[must_use]
pub fn built_in() -> &'static Library {
    static BUILT_IN: OnceLock<Library> = OnceLock::new();
    BUILT_IN.get_or_init(|| {
        let mut library = Library::new();
        for (name, text) in FILES {
            let file = Arc::new(SourceFile {
                name: name.to_owned(),
                text: text.to_owned(),
            });
            let sheet =
                read_sheet(&file).unwrap_or_else(|faults| panic!("{}", faults.render(false)));
            library
                .add(sheet)
                .unwrap_or_else(|faults| panic!("{}", faults.render(false)));
        }
        library
    })
}

const FILES: [(&str, &str); 23] = sheets![
    "aisc-360-j2.2b-edges.yaml",
    "aisc-360-j2.2b.yaml",
    "aisc-360-j2.4-asd-end-loaded.yaml",
    "aisc-360-j2.4-asd.yaml",
    "aisc-360-j2.4-lrfd-end-loaded.yaml",
    "aisc-360-j2.4-lrfd.yaml",
    "aisc-360-j4.2-asd.yaml",
    "aisc-360-j4.2-lrfd.yaml",
    "base-metal-ultimate-limit.yaml",
    "base-metal-ultimate.yaml",
    "en-1993-1-1-6.2.6.yaml",
    "en-1993-1-8-4.5.1-4.5.2.yaml",
    "en-1993-1-8-4.5.3.2.yaml",
    "en-1993-1-8-4.5.3.3.yaml",
    "en-1993-1-8-4.7.1.yaml",
    "en-1993-1-8-4.7.2.yaml",
    "fusion-face-ultimate-limit.yaml",
    "fusion-face-ultimate.yaml",
    "maximum-shear.yaml",
    "throat-allowable.yaml",
    "throat-ultimate-limit.yaml",
    "throat-ultimate.yaml",
    "throat-yield-limit.yaml",
];
