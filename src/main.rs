//! Parse, run, exit status.

use std::process::ExitCode;

fn main() -> ExitCode {
    isomargin::cli::run(std::env::args_os())
}
