//! The pages of `docs/` that are written from the program.
//!
//! To accept what is written now, run the test once with `VENTRISE_ACCEPT=1` and read the
//! difference.

#![allow(clippy::unwrap_used)]

use std::fs;
use std::path::Path;

#[test]
fn the_reference_page_is_that_of_the_program() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/case-file.md");
    let now = ventrise::case::reference();
    if std::env::var_os("VENTRISE_ACCEPT").is_some() {
        fs::write(&path, &now).unwrap();
        return;
    }
    let written = fs::read_to_string(&path).unwrap().replace("\r\n", "\n");
    for (n, (written, now)) in written.lines().zip(now.lines()).enumerate() {
        assert_eq!(
            written,
            now,
            "docs/case-file.md, line {}: see DEVELOPERS.md, golden files",
            n + 1
        );
    }
    assert_eq!(written.lines().count(), now.lines().count(), "lines of docs/case-file.md");
}
