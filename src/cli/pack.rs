//! The whole pack of a report in a folder: text, JSON, tables and pictures.

use std::fs;
use std::io::{self, Write};
use std::path::{Path, PathBuf};

use super::output::{refuse_inputs, write_whole};
use super::status::Failure;
use super::terminal::{Terminal, file_options};
use crate::charts::{ChartError, Drawing, PlanView, draw_marginal_curves, draw_spend};
use crate::report::{
    Report, render_activities_table, render_allocation, render_certificate_table,
    render_comparison_table, render_constraints_table, render_json, render_text,
};

type Render = fn(&Report, &mut (dyn Write + Send)) -> io::Result<()>;

/// The files of a pack. None has the name of a table that a plan is read from.
const FILES: [(&str, Render); 7] = [
    ("report.txt", |report, out| {
        out.write_all(render_text(report, &file_options()).as_bytes())
    }),
    ("result.json", |report, mut out| {
        render_json(report, &mut out)
    }),
    ("allocation.csv", |report, mut out| {
        render_allocation(&report.rows, &mut out)
    }),
    ("activities-planned.csv", |report, mut out| {
        render_activities_table(report, &mut out)
    }),
    ("constraints-priced.csv", |report, mut out| {
        render_constraints_table(report, &mut out)
    }),
    ("comparison.csv", |report, mut out| {
        render_comparison_table(report, &mut out)
    }),
    ("certificate.csv", |report, mut out| {
        render_certificate_table(report, &mut out)
    }),
];

/// Writes the pack to a folder, which may exist.
pub(super) fn write_pack(
    folder: &Path,
    report: &Report,
    view: &PlanView,
    inputs: &[PathBuf],
    terminal: &Terminal,
) -> Result<(), Failure> {
    let places: Vec<PathBuf> = FILES.iter().map(|(name, _)| folder.join(name)).collect();
    refuse_inputs(&places, inputs)?;
    fs::create_dir_all(folder).map_err(|source| Failure::write(folder, source))?;
    for ((_, render), place) in FILES.iter().zip(&places) {
        write_whole(place, |out| render(report, out))?;
    }
    let mut written = FILES.len();
    let (marginal, spend) = rayon::join(|| draw_marginal_curves(view), || draw_spend(view));
    for picture in [marginal, spend] {
        written += write_picture(folder, picture, terminal)?;
    }
    terminal.narrate(&format!("{written} files written to {}", folder.display()));
    Ok(())
}

/// Writes a picture as PNG and SVG and counts the files; one that cannot be drawn is said and
/// left out.
fn write_picture(
    folder: &Path,
    picture: Result<Drawing, ChartError>,
    terminal: &Terminal,
) -> Result<usize, Failure> {
    match picture {
        Ok(drawing) => {
            let place = |ending: &str| folder.join(format!("{}.{ending}", drawing.stem));
            write_whole(&place("png"), |out| out.write_all(&drawing.png))?;
            write_whole(&place("svg"), |out| out.write_all(drawing.svg.as_bytes()))?;
            Ok(2)
        }
        Err(fault) => {
            terminal.narrate(&format!("note: a picture is left out: {fault}"));
            Ok(0)
        }
    }
}
