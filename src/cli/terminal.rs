//! The terminal: its width, whether text may be bold, and the two streams.

use std::io::{self, BufWriter, IsTerminal, Write};

use super::status::Failure;
use crate::report::TextOptions;

/// Columns where the output is no terminal.
const PIPED_WIDTH: usize = 80;

/// Columns beyond which lines of text are tiring to read.
const WIDEST: usize = 110;

/// Columns below which a table cannot be laid out.
const NARROWEST: usize = 60;

/// What the process writes to.
#[derive(Debug, Clone, Copy)]
pub(super) struct Terminal {
    is_terminal: bool,
    width: usize,
    bold: bool,
    colours_faults: bool,
}

impl Terminal {
    pub(super) fn of_this_process() -> Self {
        let is_terminal = io::stdout().is_terminal();
        let width = match terminal_size::terminal_size() {
            Some((width, _)) if is_terminal => usize::from(width.0).clamp(NARROWEST, WIDEST),
            _ => PIPED_WIDTH,
        };
        let no_colour = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
        let dumb = std::env::var_os("TERM").is_some_and(|value| value == "dumb");
        let plain = no_colour || dumb;
        Self {
            is_terminal,
            width,
            bold: is_terminal && !plain,
            colours_faults: io::stderr().is_terminal() && !plain,
        }
    }

    /// Whether a person sees stdout.
    pub(super) fn is_terminal(&self) -> bool {
        self.is_terminal
    }

    /// Whether faults on stderr may be coloured.
    pub(super) fn colours_faults(&self) -> bool {
        self.colours_faults
    }

    /// How text on stdout is laid out.
    pub(super) fn text_options(&self, proof: bool) -> TextOptions {
        TextOptions {
            width: self.width,
            bold: self.bold,
            proof,
        }
    }

    /// Writes data to stdout. A reader that has gone away is no failure.
    pub(super) fn print(
        &self,
        write: impl FnOnce(&mut BufWriter<io::StdoutLock>) -> io::Result<()>,
    ) -> Result<(), Failure> {
        let mut out = BufWriter::new(io::stdout().lock());
        match write(&mut out).and_then(|()| out.flush()) {
            Err(fault) if fault.kind() != io::ErrorKind::BrokenPipe => Err(Failure::Stdout(fault)),
            _ => Ok(()),
        }
    }

    /// Writes a line of narration to stderr. Where that fails nobody is left to tell.
    pub(super) fn narrate(&self, line: &str) {
        let _ = writeln!(io::stderr().lock(), "{line}");
    }
}

/// How text in a file is laid out.
pub(super) fn file_options() -> TextOptions {
    TextOptions {
        width: PIPED_WIDTH,
        bold: false,
        proof: true,
    }
}
