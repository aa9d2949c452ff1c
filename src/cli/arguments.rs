//! The arguments, from which help and parsing are made.

use std::path::PathBuf;

use clap::{Parser, Subcommand, ValueEnum};

/// Proves how far a shipped function approximation is from the function it stands for.
#[derive(Debug, Parser)]
#[command(name = "boundmark", version, about, long_about = None, arg_required_else_help = true)]
#[command(after_help = "\
Exit codes: 0 every claim holds (or is only measured); 1 a claim fails; 2 bad usage or input;
3 nothing fails but a claim is undecided.

A certificate covers the model that its audit file states, not the system that is built from it.")]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// The commands.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Prove or refute the claims of audit files.
    #[command(after_help = "\
Example:
  boundmark audit tables/ --out certificates/
      audits every *.audit.toml and *.audit.json below tables/ and writes a certificate for each

The audit file (TOML; the same keys as JSON) names the reference, the approximant and the claims:

  [reference]
  formula = \"exp(x)\"

  [approximant]
  basis = \"power\"                  # hermite | power | chebyshev | bernstein | steps
  variable = \"x\"                   # x | x-left | unit | centred | { origin, scale }
  order = \"ascending\"
  stored_as = \"binary64\"           # or \"exact\"
  pieces = [ { on = [\"0\", \"1/8\"], coefficients = [\"1\", \"1\", \"0.5\", \"0x1.5555555555555p-3\"] } ]

  [[claims]]
  of = \"exact\"
  error = \"absolute\"               # absolute | relative | mixed
  at_most = \"1.1e-5\"

Numbers are strings and are read exactly.")]
    Audit(AuditArguments),
}

/// Arguments of `boundmark audit`.
#[derive(Debug, clap::Args)]
pub struct AuditArguments {
    /// Audit files, or folders in which every *.audit.toml and *.audit.json is audited.
    #[arg(required = true, value_name = "PATH")]
    pub paths: Vec<PathBuf>,

    /// Write DIR/NAME.certificate.json for each audit file.
    #[arg(long, value_name = "DIR")]
    pub out: Option<PathBuf>,

    /// How the results are printed.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub format: Format,

    /// Scale the work allowed before a claim is left undecided (work is counted, not timed).
    #[arg(long, value_name = "N", default_value_t = 1, value_parser = clap::value_parser!(u32).range(1..=1_000_000))]
    pub effort: u32,

    /// Threads; results do not depend on it [default: all cores].
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub jobs: Option<u16>,

    /// No progress on standard error.
    #[arg(long, short)]
    pub quiet: bool,

    /// Let audit files read files outside their own folder.
    #[arg(long)]
    pub allow_outside: bool,
}

/// Output formats.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Format {
    /// A summary for people.
    Text,
    /// All certificates in one JSON array.
    Json,
}
