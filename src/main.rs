//! The `boundmark` command.

use std::process::ExitCode;

use clap::Parser;

use boundmark::cli;

fn main() -> ExitCode {
    if let Err(message) = cli::processor::check() {
        eprintln!("boundmark: {message}");
        return ExitCode::from(cli::BAD_INPUT);
    }
    let arguments = cli::arguments::Arguments::parse();
    ExitCode::from(cli::run(&arguments))
}
