//! The command line: arguments, commands, and the exit codes.
//!
//! | code | meaning |
//! |---|---|
//! | 0 | every claim holds, or is only measured |
//! | 1 | a claim fails |
//! | 2 | bad usage or input |
//! | 3 | nothing fails, but a claim is undecided |

pub mod arguments;
pub mod audit;
pub mod discover;
pub mod processor;

use crate::certificate::model::{Certificate, Verdict};

/// Every claim holds, or is only measured.
pub const ALL_HOLD: u8 = 0;
/// A claim fails.
pub const A_CLAIM_FAILS: u8 = 1;
/// Bad usage or input.
pub const BAD_INPUT: u8 = 2;
/// Nothing fails, but a claim is undecided.
pub const UNDECIDED: u8 = 3;

/// Carries out the command and returns the exit code.
pub fn run(arguments: &arguments::Arguments) -> u8 {
    match &arguments.command {
        arguments::Command::Audit(arguments) => audit::run(arguments),
    }
}

/// The exit code of some certificates.
pub fn exit_code<'a>(certificates: impl IntoIterator<Item = &'a Certificate>) -> u8 {
    let mut code = ALL_HOLD;
    for claim in certificates
        .into_iter()
        .flat_map(|certificate| &certificate.claims)
    {
        match claim.verdict {
            Verdict::Fails => return A_CLAIM_FAILS,
            Verdict::Undecided => code = UNDECIDED,
            Verdict::Holds | Verdict::Measured => {}
        }
    }
    code
}
