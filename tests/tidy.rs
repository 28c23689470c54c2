//! What a machine can check about the tree: floors, outside crates, first lines, sizes.

use std::fs;
use std::path::{Path, PathBuf};

/// The floors from the ground up. Neighbours on one floor do not know each other.
const FLOORS: &[&[&str]] = &[
    &["base"],
    &["table", "numeric", "figure", "study"],
    &["eval"],
    &["report"],
    &["export", "store"],
    &["app", "cli"],
];

/// Where each outside crate may be named: a folder of `src`, or one file.
const OUTSIDE: &[(&str, &[&str])] = &[
    ("calamine", &["table/read"]),
    ("chrono", &["cli/clock.rs", "app/disk.rs"]),
    ("clap", &["cli"]),
    ("csv", &["table/read"]),
    ("encoding_rs", &["table/read"]),
    ("faer", &["numeric"]),
    ("fast_float2", &["table/read"]),
    ("flate2", &["table/read"]),
    ("iced", &["app"]),
    ("iced_runtime", &["app"]),
    ("indicatif", &["cli"]),
    ("memchr", &["table/read"]),
    ("nalgebra", &["numeric"]),
    ("pulldown_cmark", &["report"]),
    ("pulp", &["numeric"]),
    ("rand_chacha", &["numeric/random.rs"]),
    ("rand_core", &["numeric/random.rs"]),
    ("resvg", &["export"]),
    ("rfd", &["app"]),
    ("rust_xlsxwriter", &["export"]),
    ("serde", &["store"]),
    ("serde_json", &["store", "cli"]),
    ("sha2", &["study/source.rs", "table/digest.rs", "store"]),
    ("zip", &["store", "table/read"]),
];

/// What may stand at the top level; names that begin with a dot are looked at apart.
const TOP: &[&str] = &[
    "Cargo.lock",
    "Cargo.toml",
    "DEVELOPERS.md",
    "LICENSE-APACHE",
    "LICENSE-MIT",
    "README.md",
    "demo-data",
    "examples",
    "resources",
    "src",
    "target",
    "tests",
];

/// The dotted names that may stand at the top level.
const DOTTED: &[&str] = &[
    ".cargo",
    ".ci",
    ".clippy.toml",
    ".git",
    ".gitattributes",
    ".gitignore",
    ".rustfmt.toml",
];

/// A file longer than this is two files.
const LONGEST: usize = 800;

/// A file of the tree: its path as written below the repository, with slashes, and its text.
struct File {
    path: String,
    text: String,
}

impl File {
    /// The lines that are code, counted from 1: neither comments nor what follows one on a line.
    fn code(&self) -> impl Iterator<Item = (usize, &str)> {
        self.text
            .lines()
            .enumerate()
            .map(|(at, line)| (at + 1, line.split("//").next().unwrap_or("")))
    }

    /// The module of `src` that the file belongs to; none for the two files above the floors.
    fn module(&self) -> Option<&str> {
        let inside = self.path.strip_prefix("src/")?;
        inside.split_once('/').map(|(module, _)| module)
    }
}

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// All Rust files below a folder of the repository, in the order of their names.
fn files(folder: &str) -> Vec<File> {
    let mut found = Vec::new();
    let mut open: Vec<PathBuf> = vec![root().join(folder)];
    while let Some(folder) = open.pop() {
        for entry in listed(&folder) {
            if entry.is_dir() {
                open.push(entry);
            } else if entry.extension().is_some_and(|ending| ending == "rs") {
                let path = entry.strip_prefix(root()).unwrap().to_str().unwrap();
                found.push(File {
                    path: path.replace('\\', "/"),
                    text: read(&entry),
                });
            }
        }
    }
    found.sort_by(|a, b| a.path.cmp(&b.path));
    found
}

#[expect(clippy::disallowed_methods, reason = "the tree itself is read here")]
fn read(path: &Path) -> String {
    fs::read_to_string(path).unwrap()
}

fn listed(folder: &Path) -> Vec<PathBuf> {
    let entries = fs::read_dir(folder).unwrap();
    entries.map(|entry| entry.unwrap().path()).collect()
}

fn everything() -> Vec<File> {
    ["src", "tests", "examples"]
        .into_iter()
        .flat_map(files)
        .collect()
}

fn floor(module: &str) -> Option<usize> {
    FLOORS.iter().position(|floor| floor.contains(&module))
}

/// The names that follow a mark in a line of code: for `crate::`, the modules that are used.
fn names_after<'a>(line: &'a str, mark: &'a str) -> impl Iterator<Item = &'a str> {
    line.match_indices(mark).map(|(at, _)| {
        let rest = &line[at + mark.len()..];
        let end = rest.find(|letter| !is_of_a_name(letter));
        &rest[..end.unwrap_or(rest.len())]
    })
}

fn is_of_a_name(letter: char) -> bool {
    letter.is_ascii_alphanumeric() || letter == '_'
}

/// What is wrong about the floors in one line of a module.
fn wrong_use(module: &str, line: &str) -> Option<String> {
    if line.contains("super::super") {
        return Some("climbs with `super::super`; name the module after `crate::`".to_owned());
    }
    let here = floor(module)?;
    names_after(line, "crate::")
        .chain(names_after(line, "widefold::"))
        .find_map(|other| match floor(other) {
            None => Some(format!("names `crate::{other}`, which stands on no floor")),
            Some(below) if below < here || other == module => None,
            Some(_) => Some(format!("`{module}` must not use `{other}`")),
        })
}

/// The outside crate that a line names where it may not.
fn wrong_crate(path: &str, line: &str) -> Option<&'static str> {
    let inside = path.strip_prefix("src/")?;
    OUTSIDE.iter().find_map(|(name, homes)| {
        let at_home = homes
            .iter()
            .any(|home| inside == *home || inside.starts_with(&format!("{home}/")));
        (!at_home && names_crate(line, name)).then_some(*name)
    })
}

/// Whether a line names an outside crate: `name::` at the start of a path, or `use name`.
fn names_crate(line: &str, name: &str) -> bool {
    line.match_indices(name).any(|(at, _)| {
        let before = line[..at].trim_end();
        let starts = line[..at]
            .chars()
            .next_back()
            .is_none_or(|letter| !is_of_a_name(letter) && letter != '"');
        let after = &line[at + name.len()..];
        let inside_a_path = before.ends_with("::") && before.len() > 2;
        starts
            && !inside_a_path
            && (after.starts_with("::") || before.ends_with("use") && after.starts_with([';', ' ']))
    })
}

fn assert_none(wrong: &[String]) {
    assert!(wrong.is_empty(), "\n{}\n", wrong.join("\n"));
}

#[test]
fn a_module_uses_only_the_floors_below_its_own() {
    let mut wrong = Vec::new();
    for file in files("src") {
        let Some(module) = file.module() else {
            continue;
        };
        assert!(floor(module).is_some(), "`{module}` stands on no floor");
        for (at, line) in file.code() {
            if let Some(what) = wrong_use(module, line) {
                wrong.push(format!("{}:{at}: {what}", file.path));
            }
        }
    }
    assert_none(&wrong);
}

#[test]
fn an_outside_crate_is_named_only_in_its_folder() {
    let mut wrong = Vec::new();
    for file in files("src") {
        for (at, line) in file.code() {
            if let Some(name) = wrong_crate(&file.path, line) {
                wrong.push(format!("{}:{at}: names `{name}`", file.path));
            }
        }
    }
    assert_none(&wrong);
}

#[test]
fn every_dependency_has_its_folder_and_its_line_in_the_developers_tour() {
    let manifest = read(&root().join("Cargo.toml"));
    let tour = read(&root().join("DEVELOPERS.md"));
    let listed: Vec<&str> = manifest
        .lines()
        .skip_while(|line| *line != "[dependencies]")
        .skip(1)
        .take_while(|line| !line.starts_with('['))
        .filter_map(|line| line.split_once(" = ").map(|(name, _)| name))
        .collect();
    assert!(listed.len() > 10, "the list of dependencies was not found");
    for name in listed {
        let in_code = name.replace('-', "_");
        assert!(
            OUTSIDE.iter().any(|(known, _)| *known == in_code),
            "`{name}` has no folder in tests/tidy.rs"
        );
        assert!(
            tour.contains(&format!("- `{name}`")),
            "DEVELOPERS.md does not say why `{name}` is there"
        );
    }
}

#[test]
fn every_file_says_first_what_it_is_for() {
    let mut wrong = Vec::new();
    for file in everything() {
        if !file.text.starts_with("//! ") {
            wrong.push(format!("{} does not open with `//!`", file.path));
        }
    }
    assert_none(&wrong);
}

#[test]
fn no_file_is_longer_than_it_may_be() {
    let mut wrong = Vec::new();
    for file in everything() {
        let lines = file.text.lines().count();
        if lines > LONGEST {
            wrong.push(format!("{} has {lines} lines", file.path));
        }
    }
    assert_none(&wrong);
}

#[test]
fn nothing_is_left_undone_or_left_out() {
    // In two pieces, so that this file does not find itself.
    let marks = [
        concat!("to", "do!"),
        concat!("unimple", "mented!"),
        concat!("#[ig", "nore"),
        concat!("#[should_", "panic"),
    ];
    let mut wrong = Vec::new();
    for file in everything() {
        for (at, line) in file.code() {
            for mark in marks.iter().filter(|mark| line.contains(**mark)) {
                wrong.push(format!("{}:{at}: `{mark}`", file.path));
            }
        }
    }
    assert_none(&wrong);
}

#[test]
fn the_top_level_holds_only_the_fixed_names() {
    for entry in listed(root()) {
        let name = entry.file_name().unwrap().to_str().unwrap().to_owned();
        let known = if name.starts_with('.') { DOTTED } else { TOP };
        assert!(
            known.contains(&name.as_str()),
            "`{name}` has no place at the top level"
        );
    }
}

#[test]
fn the_checks_themselves_find_what_is_wrong() {
    assert!(wrong_use("numeric", "use crate::table::Table;").is_some());
    assert!(wrong_use("store", "use crate::export::error::ExportError;").is_some());
    assert!(wrong_use("cli", "let window = crate::app::run();").is_some());
    assert!(wrong_use("app", "use crate::cli::today;").is_some());
    assert!(wrong_use("eval", "use crate::{base, study};").is_some());
    assert!(wrong_use("eval", "use super::super::memo;").is_some());
    assert!(wrong_use("eval", "use crate::study::Study;").is_none());
    assert!(wrong_use("eval", "use crate::eval::memo::Memo;").is_none());
    assert_eq!(
        wrong_crate("src/eval/memo.rs", "use serde::Serialize;"),
        Some("serde")
    );
    assert_eq!(
        wrong_crate("src/study/mod.rs", "    csv::Reader::new()"),
        Some("csv")
    );
    assert_eq!(wrong_crate("src/app/mod.rs", "use iced::Task;"), None);
    assert_eq!(
        wrong_crate("src/base/mod.rs", "    crate::table::csv::x()"),
        None
    );
}
