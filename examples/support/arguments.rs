//! Command lines: whatever is wrong with one is said in a single line, with exit code 2.

use clap::Parser;
use std::process::ExitCode;

/// Exit code of every refusal.
pub const REFUSED: u8 = 2;

/// The parsed command line; `Err` holds the exit code after help or a refusal has been printed.
pub fn parse<A: Parser>() -> Result<A, ExitCode> {
    A::try_parse().map_err(|error| {
        if !error.use_stderr() {
            print!("{error}");
            return ExitCode::SUCCESS;
        }
        // The message proper ends at the first empty line; tips and usage follow it.
        let text = error.to_string();
        let message: Vec<&str> =
            text.lines().map(str::trim).take_while(|line| !line.is_empty()).collect();
        eprintln!("{} (run with --help for the options)", message.join(" "));
        ExitCode::from(REFUSED)
    })
}
