//! The table of tolerances in DEVELOPERS.md is the code's.

use std::fs;
use std::path::{Path, PathBuf};

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// A constant of a table or of a file: its name, its value as it is written, its file.
#[derive(Debug, PartialEq)]
struct Constant {
    name: String,
    value: String,
    file: String,
}

/// The rows of the section on tolerances.
fn tabulated() -> Vec<Constant> {
    let text = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    let (_, section) = text.split_once("## Tolerances").unwrap();
    let (section, _) = section.split_once("\n## ").unwrap();
    section
        .lines()
        .filter(|line| line.starts_with("| `"))
        .map(|line| {
            let cells: Vec<&str> = line.trim_matches('|').split(" | ").collect();
            let plain = |cell: &str| cell.trim().trim_matches('`').to_owned();
            Constant {
                name: plain(cells[0]),
                value: plain(cells[1]),
                file: plain(cells[3]),
            }
        })
        .collect()
}

fn rust_files(folder: &Path, found: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            rust_files(&path, found);
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            found.push(path);
        }
    }
}

/// The constants of the source, tests apart, whose type is written after the name.
fn constants() -> Vec<(Constant, String)> {
    let mut files = Vec::new();
    rust_files(&root().join("src"), &mut files);
    let mut found = Vec::new();
    for path in files {
        let text = fs::read_to_string(&path).unwrap();
        let code = text.split("#[cfg(test)]").next().unwrap_or(&text);
        let file = path.strip_prefix(root()).unwrap().display().to_string();
        for line in code.lines() {
            let Some((_, declared)) = line.split_once("const ") else {
                continue;
            };
            let Some((name, rest)) = declared.split_once(": ") else {
                continue;
            };
            let Some((kind, value)) = rest.split_once(" = ") else {
                continue;
            };
            let constant = Constant {
                name: name.to_owned(),
                value: value.trim_end_matches(';').to_owned(),
                file: file.clone(),
            };
            found.push((constant, kind.to_owned()));
        }
    }
    found
}

#[test]
fn every_tolerance_in_the_table_stands_in_the_code() {
    let constants = constants();
    let rows = tabulated();
    assert!(rows.len() > 20, "only {} rows were found", rows.len());
    for row in rows {
        assert!(
            constants.iter().any(|(constant, _)| *constant == row),
            "not in the code: {row:?}"
        );
    }
}

#[test]
fn every_real_number_of_method_and_report_stands_in_the_table() {
    let rows = tabulated();
    for (constant, kind) in constants() {
        // How a picture or a number looks is no tolerance.
        let is_of_looks = ["src/charts/", "src/numeric/figures.rs"]
            .iter()
            .any(|start| constant.file.starts_with(start));
        if kind == "f64" && !is_of_looks {
            assert!(rows.contains(&constant), "not in the table: {constant:?}");
        }
    }
}
