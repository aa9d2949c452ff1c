//! `boundmark audit`.

use std::io::{IsTerminal, Write};
use std::path::Path;
use std::sync::OnceLock;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

use crate::audit::file::{self, AuditFile, ReadOptions};
use crate::audit::run as audit_run;
use crate::certificate::model::Certificate;
use crate::certificate::{build, canonical};
use crate::cli::arguments::{AuditArguments, Format};
use crate::cli::discover::{Found, audit_files};
use crate::cli::{BAD_INPUT, exit_code};
use crate::output::{json, text};

/// Audits the files named. A file that cannot be read or makes no sense is reported and the
/// others go on; the exit code is then 2 whatever they say.
pub fn run(arguments: &AuditArguments) -> u8 {
    if let Some(jobs) = arguments.jobs {
        let pool = rayon::ThreadPoolBuilder::new()
            .num_threads(usize::from(jobs))
            .build_global();
        if let Err(error) = pool {
            complain(&format!("cannot start {jobs} threads: {error}"));
            return BAD_INPUT;
        }
    }
    let found = match audit_files(&arguments.paths) {
        Ok(found) => found,
        Err(errors) => {
            errors.iter().for_each(|error| complain(error));
            return BAD_INPUT;
        }
    };
    let mut bad = false;
    let mut done: Vec<(String, Certificate)> = Vec::with_capacity(found.len());
    for file in &found {
        match one(arguments, file) {
            Some(certificate) => {
                let path = file.path.display().to_string();
                if arguments.format == Format::Text {
                    match text::summary(&path, &certificate) {
                        Ok(summary) => print(&summary),
                        Err(_) => bad = true,
                    }
                }
                done.push((path, certificate));
            }
            None => bad = true,
        }
    }
    if arguments.format == Format::Json {
        let entries: Vec<_> = done
            .iter()
            .map(|(path, certificate)| json::Entry { path, certificate })
            .collect();
        match json::summary(&entries) {
            Ok(summary) => print(&format!("{summary}\n")),
            Err(error) => {
                complain(&error.to_string());
                bad = true;
            }
        }
    }
    if bad {
        BAD_INPUT
    } else {
        exit_code(done.iter().map(|(_, certificate)| certificate))
    }
}

/// Audits one file and writes its certificate; `None` after a complaint.
fn one(arguments: &AuditArguments, found: &Found) -> Option<Certificate> {
    let options = ReadOptions {
        allow_outside: arguments.allow_outside,
        ..ReadOptions::default()
    };
    let file = match file::read(&found.path, &options) {
        Ok(file) => file,
        Err(diagnostics) => {
            for diagnostic in &diagnostics {
                anstream::eprintln!("{diagnostic}");
            }
            return None;
        }
    };
    for note in &file.notes {
        anstream::eprintln!("{note}");
    }
    let bar = Bar::new(arguments.quiet, &found.path);
    let outcome = audit_run::run(&file, arguments.effort, &|units| bar.start(units), &|| {
        bar.advance()
    });
    bar.finish();
    let outcomes = match outcome {
        Ok(outcomes) => outcomes,
        Err(error) => {
            complain(&describe(&file, &error));
            return None;
        }
    };
    let certificate = build::certificate(&file, &outcomes);
    if let Some(folder) = &arguments.out {
        let target = folder.join(&found.certificate);
        let written = canonical::bytes(&certificate)
            .map_err(std::io::Error::other)
            .and_then(|bytes| canonical::write(&target, &bytes));
        if let Err(error) = written {
            complain(&format!("the certificate could not be written: {error}"));
            return None;
        }
    }
    Some(certificate)
}

/// The sentence for an audit that could not be carried out.
fn describe(file: &AuditFile, error: &audit_run::AuditError) -> String {
    let name = &file.name;
    match error {
        audit_run::AuditError::Undefined {
            approximant,
            claim,
            undefined,
        } => {
            let audited = &file.approximants[*approximant];
            let formula = match undefined.part {
                crate::bound::patch::Part::Reference => file.reference_of(*approximant),
                crate::bound::patch::Part::Approximant => {
                    let piece = audited.approximant.pieces.first();
                    match piece.map(|piece| &piece.form) {
                        Some(crate::approximant::piece::Form::Formula(formula)) => formula,
                        _ => file.reference_of(*approximant),
                    }
                }
            };
            let operation = formula
                .text()
                .get(formula.span(undefined.refusal.node))
                .unwrap_or_else(|| formula.text());
            format!(
                "{name}: claim `{claim}`: the {} has no value at x = {}: `{operation}` is not {}; \
                 restrict `on` to where it is, or correct the formula",
                undefined.part.name(),
                crate::number::decimal::rational_down(&undefined.at, 10),
                undefined.refusal.kind.requirement(),
            )
        }
        audit_run::AuditError::EmptySet { claim } => format!(
            "{name}: claim `{claim}`: no argument is left of `on` after `except`; leave out less"
        ),
        audit_run::AuditError::End { text } => {
            format!("{name}: the end `{text}` has no value; write a constant that has one")
        }
    }
}

fn complain(message: &str) {
    anstream::eprintln!("error: {message}");
}

/// Prints to standard output; a reader that closes the pipe ends the output, not the audit.
fn print(text: &str) {
    let mut out = anstream::stdout().lock();
    let _ = out.write_all(text.as_bytes()).and_then(|()| out.flush());
}

/// A progress bar on standard error, only on a terminal and only for work that lasts.
struct Bar {
    bar: OnceLock<ProgressBar>,
    visible: bool,
    name: String,
}

/// Fewest units for which a bar is drawn.
const WORTH_A_BAR: u64 = 50;

impl Bar {
    fn new(quiet: bool, path: &Path) -> Self {
        let name = path
            .file_name()
            .unwrap_or_default()
            .to_string_lossy()
            .into_owned();
        Self {
            bar: OnceLock::new(),
            visible: !quiet && std::io::stderr().is_terminal(),
            name,
        }
    }

    fn start(&self, units: u64) {
        if !self.visible || units < WORTH_A_BAR {
            return;
        }
        let bar = ProgressBar::with_draw_target(Some(units), ProgressDrawTarget::stderr());
        if let Ok(style) = ProgressStyle::with_template(
            "{msg}  {bar:30}  {pos}/{len} pieces  {per_sec}, {eta} left",
        ) {
            bar.set_style(style);
        }
        bar.set_message(self.name.clone());
        let _ = self.bar.set(bar);
    }

    fn advance(&self) {
        if let Some(bar) = self.bar.get() {
            bar.inc(1);
        }
    }

    fn finish(&self) {
        if let Some(bar) = self.bar.get() {
            bar.finish_and_clear();
        }
    }
}
