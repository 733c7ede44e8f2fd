//! Each file of `faults` holds one fault; its snapshot is what the user is told.

use seamnote::joint::read_joint;
use seamnote::source::SourceFile;
use std::sync::Arc;

#[test]
fn each_fault_is_told_at_its_value() {
    let mut settings = insta::Settings::clone_current();
    settings.set_omit_expression(true);
    settings.bind(|| {
        insta::glob!("faults/*.yaml", |path| {
            let name = path.file_name().unwrap().to_str().unwrap();
            let text = std::fs::read_to_string(path).unwrap();
            let file = Arc::new(SourceFile {
                name: format!("joints/{name}"),
                text,
            });
            let faults = read_joint(&file).expect_err("the file has a fault");
            let code = name.trim_end_matches(".yaml");
            assert!(
                code == "several-faults" || faults.0.len() == 1,
                "{name} is to hold one fault, but has\n{}",
                faults.render(false)
            );
            insta::assert_snapshot!(faults.render(false));
        });
    });
}
