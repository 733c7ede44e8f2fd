//! Each file of `faults` holds one fault; its snapshot is what the user is told.

use crate::tidy::files;
use seamnote::joint::read_joint;
use seamnote::source::SourceFile;
use std::sync::Arc;

#[test]
fn each_fault_is_told_at_its_value() {
    let fixtures = files("tests/it/faults", &[".yaml"]);
    assert!(!fixtures.is_empty(), "there are fixtures");
    for fixture in fixtures {
        let name = fixture.name.rsplit('/').next().unwrap();
        let file = Arc::new(SourceFile {
            name: format!("joints/{name}"),
            text: fixture.text.clone(),
        });
        let faults = read_joint(&file).expect_err("the file has a fault");
        let code = name.trim_end_matches(".yaml");
        assert!(
            code == "several-faults" || faults.0.len() == 1,
            "{name} is to hold one fault, but has\n{}",
            faults.render(false)
        );
        let mut settings = insta::Settings::clone_current();
        settings.set_omit_expression(true);
        settings.set_snapshot_suffix(name);
        settings.set_input_file(&fixture.name);
        settings.bind(|| insta::assert_snapshot!(faults.render(false)));
    }
}
