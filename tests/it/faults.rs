//! Each file of the folders of faults holds one fault; its snapshot is what the user is told.

use crate::tidy::{File, files};
use seamnote::criteria::read_sheet;
use seamnote::joint::{read_joint, read_project};
use seamnote::source::{Faults, SourceFile};
use std::sync::Arc;

/// Fixtures named for what the user did, not for the code that it gives.
const NAMED_OTHERWISE: [&str; 3] = ["several-faults", "decimal-comma-list", "not-a-flag"];

/// Files with one fault each: their folder, the place that they are read as, the faults.
pub(crate) struct FaultyFiles {
    pub(crate) folder: &'static str,
    stands_in: &'static str,
    snapshot: &'static str,
    faults: fn(&Arc<SourceFile>) -> Option<Faults>,
}

pub(crate) const JOINTS: FaultyFiles = FaultyFiles {
    folder: "tests/it/faults",
    stands_in: "joints",
    snapshot: "each_fault_is_told_at_its_value",
    faults: |file| read_joint(file).err(),
};

pub(crate) const PROJECTS: FaultyFiles = FaultyFiles {
    folder: "tests/it/project_faults",
    stands_in: "joints",
    snapshot: "fault_of_a_project_file",
    faults: |file| read_project(file).err(),
};

pub(crate) const SHEETS: FaultyFiles = FaultyFiles {
    folder: "tests/it/sheet_faults",
    stands_in: "joints/sheets",
    snapshot: "fault_of_a_sheet",
    faults: |file| read_sheet(file).err(),
};

impl FaultyFiles {
    /// The files, each with its name without folders.
    pub(crate) fn files(&self) -> Vec<(String, File)> {
        let found = files(self.folder, &[".yaml"]);
        assert!(found.len() > 1, "there are fixtures in {}", self.folder);
        let named = |file: File| (file.name.rsplit('/').next().unwrap().to_owned(), file);
        found.into_iter().map(named).collect()
    }

    fn check(&self) {
        let mut wrong = Vec::new();
        for (name, fixture) in self.files() {
            let file = Arc::new(SourceFile {
                name: format!("{}/{name}", self.stands_in),
                text: fixture.text.clone(),
            });
            let faults = (self.faults)(&file)
                .unwrap_or_else(|| panic!("{} is to have a fault", fixture.name));
            let code = name.trim_end_matches(".yaml");
            let alone = code == "several-faults" || faults.0.len() == 1;
            let named = NAMED_OTHERWISE.contains(&code) || code.starts_with(faults.0[0].code);
            if !alone || !named {
                wrong.push(format!("{name} has\n{}", faults.render(false)));
                continue;
            }
            let mut settings = insta::Settings::clone_current();
            settings.set_omit_expression(true);
            settings.set_snapshot_suffix(&name);
            settings.set_input_file(&fixture.name);
            settings.bind(|| insta::assert_snapshot!(self.snapshot, faults.render(false)));
        }
        assert!(
            wrong.is_empty(),
            "one fault each, after which it is named:\n{}",
            wrong.join("\n")
        );
    }
}

#[test]
fn each_fault_is_told_at_its_value() {
    JOINTS.check();
}

#[test]
fn each_fault_of_a_project_file_is_told_at_its_value() {
    PROJECTS.check();
}

#[test]
fn each_fault_of_a_sheet_is_told_at_its_value() {
    SHEETS.check();
}
