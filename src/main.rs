//! The gatemix command.

use std::process::ExitCode;

fn main() -> ExitCode {
    gatemix::cli::run(std::env::args_os())
}
