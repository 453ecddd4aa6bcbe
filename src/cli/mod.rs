//! Arguments and words: the command line over the tasks.

mod answers;
mod arguments;
mod colour;
mod endings;
mod entry;
mod note;
mod progress;

use std::ffi::OsString;
use std::process::ExitCode;

use chrono::Utc;
use clap::Parser;

use answers::answer;
use arguments::Cli;
use endings::{End, failed, finished, said};
use progress::Progress;

/// Runs the command line against the machine's clock and streams.
pub fn run(arguments: impl Iterator<Item = OsString>) -> ExitCode {
    // standard error stays unlocked, so that workers can tell how far they are
    let (mut out, mut err) = (anstream::stdout().lock(), anstream::stderr());
    let cli = match Cli::try_parse_from(arguments) {
        Ok(cli) => cli,
        Err(error) => {
            let words = error.render().to_string();
            return if error.use_stderr() {
                said(&words, End::Usage, &mut err)
            } else {
                finished(words.as_bytes(), End::Answered, &mut out, &mut err)
            };
        }
    };
    match answer(&cli, Utc::now(), Progress::on_terminal()) {
        Ok((bytes, end)) => finished(&bytes, end, &mut out, &mut err),
        Err(failure) => {
            let (words, end) = failed(&failure);
            said(&words, end, &mut err)
        }
    }
}
