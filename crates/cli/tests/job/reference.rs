//! The committed page of all keys is the one that the table of keys makes.

use std::path::Path;

use spandrel_cli::job::reference;

#[test]
fn the_page_of_all_keys_is_fresh() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("job-keys.md");
    if std::env::var_os("SPANDREL_UPDATE").is_some_and(|value| value == "1") {
        std::fs::write(&path, reference()).unwrap();
    }
    let committed = std::fs::read_to_string(&path).unwrap_or_default();
    assert!(
        committed.replace("\r\n", "\n") == reference(),
        "crates/cli/job-keys.md is not what the table of keys makes; run this test with SPANDREL_UPDATE=1 and commit the page"
    );
}
