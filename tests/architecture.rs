//! The house rules that a compiler does not hold: who may import whom, and that every file says
//! what it is for.

use std::fs;
use std::path::{Path, PathBuf};

/// Lines of a file, its tests aside, beyond which it is no longer read in one sitting.
const LONGEST_FILE: usize = 350;

/// Every module and those that it may import, itself aside.
const MAY_IMPORT: [(&str, &[&str]); 13] = [
    ("numeric", &[]),
    ("curves", &["numeric"]),
    ("model", &["numeric", "curves"]),
    ("input", &["numeric", "curves", "model"]),
    ("solver", &["numeric", "curves", "model"]),
    ("certificate", &["numeric", "curves", "model"]),
    ("estimation", &["numeric", "curves", "model"]),
    (
        "uncertainty",
        &[
            "numeric",
            "curves",
            "model",
            "estimation",
            "solver",
            "certificate",
        ],
    ),
    (
        "sensitivity",
        &["numeric", "curves", "model", "solver", "certificate"],
    ),
    (
        "charts",
        &[
            "numeric",
            "curves",
            "model",
            "solver",
            "certificate",
            "sensitivity",
        ],
    ),
    (
        "report",
        &[
            "numeric",
            "curves",
            "model",
            "solver",
            "certificate",
            "sensitivity",
        ],
    ),
    (
        "cli",
        &[
            "numeric",
            "curves",
            "model",
            "input",
            "solver",
            "certificate",
            "sensitivity",
            "charts",
            "report",
        ],
    ),
    ("main", &["cli"]),
];

/// What only the command line may know: arguments, the terminal, the clock.
const OF_THE_COMMAND_LINE: [&str; 5] = [
    "clap::",
    "terminal_size",
    "std::time",
    "std::env",
    "IsTerminal",
];

fn sources() -> Vec<(PathBuf, String)> {
    fn collect(folder: &Path, found: &mut Vec<(PathBuf, String)>) {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                collect(&path, found);
            } else if path.extension().is_some_and(|ending| ending == "rs") {
                let text = fs::read_to_string(&path).unwrap();
                found.push((path, text));
            }
        }
    }
    let mut found = Vec::new();
    collect(
        &Path::new(env!("CARGO_MANIFEST_DIR")).join("src"),
        &mut found,
    );
    assert!(found.len() > 40);
    found
}

/// The top-level module that a file belongs to.
fn module_of(path: &Path) -> String {
    let within = path
        .strip_prefix(Path::new(env!("CARGO_MANIFEST_DIR")).join("src"))
        .unwrap();
    let first = within
        .components()
        .next()
        .unwrap()
        .as_os_str()
        .to_string_lossy();
    first.trim_end_matches(".rs").to_owned()
}

/// Modules named behind `crate::` or `isomargin::` in a text, comments aside.
fn imports_of(text: &str) -> Vec<String> {
    text.lines()
        .filter(|line| !line.trim_start().starts_with("//"))
        .flat_map(|line| {
            ["crate::", "isomargin::"]
                .into_iter()
                .flat_map(move |root| {
                    line.match_indices(root).map(move |(at, _)| {
                        let rest = &line[at + root.len()..];
                        let end = rest.find(|c: char| !c.is_alphanumeric() && c != '_');
                        rest[..end.unwrap_or(rest.len())].to_owned()
                    })
                })
        })
        .collect()
}

#[test]
fn imports_point_one_way() {
    for (path, text) in sources() {
        let module = module_of(&path);
        if module == "lib" {
            continue;
        }
        let (_, allowed) = MAY_IMPORT
            .iter()
            .find(|(name, _)| *name == module)
            .unwrap_or_else(|| panic!("{module}"));
        for import in imports_of(&text) {
            assert!(
                import == module || allowed.contains(&import.as_str()),
                "{} imports {import}",
                path.display()
            );
        }
    }
}

#[test]
fn only_the_command_line_knows_arguments_terminal_and_clock() {
    for (path, text) in sources() {
        if ["cli", "main"].contains(&module_of(&path).as_str()) {
            continue;
        }
        for known in OF_THE_COMMAND_LINE {
            assert!(!text.contains(known), "{} knows {known}", path.display());
        }
    }
}

#[test]
fn every_file_opens_by_saying_what_it_is_for() {
    for (path, text) in sources() {
        assert!(text.starts_with("//! "), "{}", path.display());
    }
}

#[test]
fn every_file_is_read_in_one_sitting() {
    for (path, text) in sources() {
        let code = text.split("#[cfg(test)]").next().unwrap_or_default();
        let lines = code.lines().count();
        assert!(
            lines <= LONGEST_FILE,
            "{} has {lines} lines",
            path.display()
        );
    }
}
