//! Straight-line steps: the shipped code itself.

use std::ops::Range;

use crate::approximant::piece::{Basis, Form, Piece, Stored};
use crate::audit::document::{Node, Value};
use crate::function::parser::{
    ConstantTable, ConstantValue, Element, ParsedSteps, Step, StepError, parse_steps,
};

use super::approximant::Content;
use super::program::check_format;
use super::reader::{At, Reader, Table};
use super::storage::Storage;

pub(super) const KEYS: [&str; 3] = ["constants", "steps", "on"];

/// Keys of steps for claims about the computed value.
pub(super) const LATER_KEYS: [&str; 2] = ["arguments", "calls"];

const STEPS: &str = "write steps = [\"z = x*x\", \"y = x + x*z*S1\"]; the last one is the value";
const CONSTANTS: &str = "write constants = { S1 = \"0.5\", a = [\"1\", \"0.5\"] }";
const ON: &str = "write the two ends of the domain: on = [\"0\", \"1\"]";

/// The constants for the parser, and in the order of the file.
#[derive(Default)]
struct Constants {
    table: ConstantTable,
    listed: Vec<(String, ConstantValue)>,
}

pub(super) fn read(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    storage: &mut Storage,
) -> Option<Content> {
    for key in LATER_KEYS {
        if let Some(at) = table.get(key) {
            reader.unsupported(at, &format!("`{key}` of steps are"), "remove the key");
            return None;
        }
    }
    let constants = match table.get("constants") {
        Some(at) => read_constants(reader, at, storage),
        None => Some(Constants::default()),
    };
    let on = reader
        .required(table, "on", ON)
        .and_then(|at| reader.piece_ends(at, storage));
    let at = reader.required(table, "steps", STEPS)?;
    let elements = reader.array(at, STEPS)?;
    let constants = constants?;
    let parsed = read_steps(reader, at, elements, &constants)?;
    let piece = Piece {
        on: on?,
        form: Form::Formula(parsed.formula),
        written: None,
        stored: Stored::Steps,
    };
    Some(Content {
        basis: Basis::Steps {
            constants: constants.listed,
            steps: parsed.steps,
        },
        pieces: vec![piece],
    })
}

fn read_constants(reader: &mut Reader<'_>, at: At<'_>, storage: &mut Storage) -> Option<Constants> {
    let table = reader.table(at, CONSTANTS)?;
    let mut constants = Constants::default();
    let mut clean = true;
    for entry in table.entries {
        let at = table.at.to(&entry.node);
        let value = match &entry.node.value {
            Value::Array(_) | Value::Table(_) => reader
                .stored_list(at, storage, CONSTANTS)
                .map(|list| ConstantValue::Array(list.stored.to_vec())),
            _ => reader.stored_number(at, storage).map(ConstantValue::Number),
        };
        let Some(value) = value else {
            clean = false;
            continue;
        };
        if let Err(error) = constants.table.insert(&entry.key, value.clone()) {
            let advice = error.advice.unwrap_or_else(|| CONSTANTS.to_owned());
            reader.key_error(&table, entry, error.message, advice);
            clean = false;
        }
        constants.listed.push((entry.key.to_string(), value));
    }
    clean.then_some(constants)
}

fn read_steps(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    constants: &Constants,
) -> Option<ParsedSteps> {
    let mut texts = Vec::new();
    for element in elements {
        if let Some(text) = reader.text(at.to(element), STEPS) {
            texts.push(text);
        }
    }
    if texts.len() != elements.len() {
        return None;
    }
    match parse_steps(&texts, &constants.table, &[]) {
        Ok(parsed) => {
            note_integer_division(reader, at, elements, &parsed.steps, &texts);
            let mut clean = true;
            for (step, element) in parsed.steps.iter().zip(elements) {
                clean &= check_step_format(reader, at.to(element), step);
            }
            clean.then_some(parsed)
        }
        Err(StepError { step, error }) => {
            const TITLE: &str = "these steps cannot be read";
            match step.and_then(|index| Some((elements.get(index)?, *texts.get(index)?))) {
                Some((element, text)) => {
                    reader.syntax_error(at.to(element), text, &error, TITLE, STEPS);
                }
                None => reader.error(
                    at,
                    TITLE,
                    error.message,
                    error.advice.unwrap_or_else(|| STEPS.to_owned()),
                ),
            }
            None
        }
    }
}

/// The format of a step has no part in the exact function, but it must be one.
fn check_step_format(reader: &mut Reader<'_>, at: At<'_>, step: &Step) -> bool {
    match &step.format {
        Some(format) => check_format(reader, at, format),
        None => true,
    }
}

/// Remarks on the first quotient of two whole literals, which C divides with truncation.
fn note_integer_division(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    steps: &[Step],
    texts: &[&str],
) {
    for ((step, element), text) in steps.iter().zip(elements).zip(texts) {
        if let Some(written) = integer_quotient(step, text) {
            let note = reader.note(
                at.to(element),
                "all arithmetic here is real",
                format!("`{written}` is an exact ratio"),
                "C divides integers and drops the fraction; check such quotients in the code",
            );
            reader.push_note(note);
            return;
        }
    }
}

/// The text of the first quotient of two literals without point and exponent.
fn integer_quotient<'text>(step: &Step, text: &'text str) -> Option<&'text str> {
    let is_whole = |(element, span): &(Element, Range<usize>)| {
        let literal = text.get(span.clone()).unwrap_or_default();
        matches!(element, Element::Number(_)) && literal.bytes().all(|byte| byte.is_ascii_digit())
    };
    let mut windows = step.expression.elements().windows(3);
    windows.find_map(|window| match window {
        [dividend, divisor, (Element::Divide, span)] if is_whole(dividend) && is_whole(divisor) => {
            text.get(span.clone())
        }
        _ => None,
    })
}
