//! What the tests from the outside share: running the program, reading its expressions and numbers.
//!
//! Nothing here uses the library, so a fault in it cannot hide itself: expressions are read and
//! evaluated by a reader of their own, exactly, and numbers are taken from the printed strings.
#![allow(dead_code, reason = "each test binary uses a part")]

pub(crate) mod exact;
pub(crate) mod program;
pub(crate) mod rational;
pub(crate) mod roots;
pub(crate) mod transient;

use std::path::{Path, PathBuf};

/// A file or folder beside the tests.
pub(crate) fn beside_tests(relative: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(relative)
}

/// The lines of a table: comments and empty lines left out, each with its number from 1.
pub(crate) fn table_lines(text: &str) -> impl Iterator<Item = (usize, &str)> {
    text.lines()
        .enumerate()
        .map(|(index, line)| (index + 1, line.trim()))
        .filter(|(_, line)| !line.is_empty() && !line.starts_with('#'))
}
