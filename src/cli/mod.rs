//! Arguments, terminal and exit status. Data go to stdout, narration to stderr.

mod allocate;
mod arguments;
mod check;
mod output;
mod pack;
mod status;
mod terminal;

use std::ffi::OsString;
use std::process::ExitCode;

use clap::Parser;

use crate::input::{NoteKind, Plan, read_plan};
use crate::report::{Input, Provenance};
use arguments::{Arguments, Command, PlanArguments};
use status::{Failure, Status};
use terminal::Terminal;

/// Runs the command that the arguments name, the program's own name first, and says how it ended.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let given: Vec<OsString> = arguments.into_iter().collect();
    let terminal = Terminal::of_this_process();
    let parsed = match Arguments::try_parse_from(&given) {
        Ok(parsed) => parsed,
        Err(message) => {
            // Help and version are data; clap sends each to its stream. Nobody is left to tell
            // where that fails.
            let _ = message.print();
            return if message.use_stderr() {
                Status::WrongUsage.into()
            } else {
                Status::Done.into()
            };
        }
    };
    let command = command_line(&given);
    let ended = match &parsed.command {
        Command::Allocate(arguments) => allocate::allocate(arguments, &command, &terminal),
        Command::Check(arguments) => check::check(arguments, &command, &terminal),
    };
    match ended {
        Ok(status) => status.into(),
        Err(failure) => {
            terminal.narrate(&failure.to_string());
            failure.status().into()
        }
    }
}

/// The arguments as a shell would take them, without the program's own path.
fn command_line(given: &[OsString]) -> String {
    let quoted = |argument: &OsString| {
        let text = argument.to_string_lossy();
        let plain = |letter: char| letter.is_alphanumeric() || "-_./,=+:@%".contains(letter);
        if !text.is_empty() && text.chars().all(plain) {
            text.into_owned()
        } else {
            format!("'{}'", text.replace('\'', r"'\''"))
        }
    };
    let words: Vec<String> = given.iter().skip(1).map(quoted).collect();
    words.join(" ")
}

/// Reads the plan that the arguments name.
fn read(arguments: &PlanArguments, terminal: &Terminal) -> Result<Plan, Failure> {
    read_plan(&arguments.request()).map_err(|diagnostics| {
        let faults = diagnostics
            .render(terminal.colours_faults())
            .trim_end()
            .to_owned();
        if diagnostics.are_of_the_request() {
            Failure::Request(faults)
        } else {
            Failure::Data(faults)
        }
    })
}

/// What was noticed while a plan was read, one sentence each.
struct Noticed {
    warnings: Vec<String>,
    readings: Vec<String>,
}

impl Noticed {
    fn of(arguments: &PlanArguments, plan: &Plan) -> Self {
        let of_kind = |kind| {
            let notes = plan.notes.iter().filter(move |note| note.kind == kind);
            notes.map(|note| note.text.clone())
        };
        Self {
            warnings: of_kind(NoteKind::Warning).collect(),
            readings: arguments
                .notes()
                .chain(of_kind(NoteKind::Reading))
                .collect(),
        }
    }

    /// As sentences of a report.
    fn in_report(&self) -> Vec<String> {
        let warnings = self
            .warnings
            .iter()
            .map(|warning| format!("Warning: {warning}"));
        warnings.chain(self.readings.iter().cloned()).collect()
    }

    /// As lines on stderr.
    fn narrate(&self, terminal: &Terminal) {
        for warning in &self.warnings {
            terminal.narrate(&format!("warning: {warning}"));
        }
        for reading in &self.readings {
            terminal.narrate(&format!("note: {reading}"));
        }
    }
}

/// Version, command and inputs of a report.
fn provenance_of(plan: &Plan, command: &str) -> Provenance {
    let inputs = plan.sources.iter().map(|source| Input {
        path: source.path.display().to_string(),
        sha256: source.sha256.clone(),
    });
    Provenance {
        version: env!("CARGO_PKG_VERSION").to_owned(),
        command: command.to_owned(),
        inputs: inputs.collect(),
    }
}
