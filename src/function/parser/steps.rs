//! Straight-line code: steps `name = expression`, the last of which gives the value.
//!
//! A step may say the format that it is rounded to, `name : format = expression`. Rounding is no
//! part of the exact function that the steps define, so the format is only kept; the expressions
//! are kept as written too, since folding changes what is rounded.

use std::collections::BTreeMap;
use std::ops::Range;

use rug::Rational;

use super::expression::shortened;
use super::lowering::{Binding, Lowering, Scope};
use super::names::is_reserved;
use super::token::name_length;
use super::{Expression, SyntaxError, TEXT_LIMIT};
use crate::function::formula::{Formula, FormulaBuilder, NodeId};

/// The value of a named constant.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum ConstantValue {
    Number(Rational),
    /// At least one number.
    Array(Vec<Rational>),
}

/// The named constants of straight-line code.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct ConstantTable {
    values: BTreeMap<String, ConstantValue>,
}

impl ConstantTable {
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a constant.
    ///
    /// # Errors
    ///
    /// The name is not a name in C, is taken by the variable, a predefined number or a function,
    /// or is there already; or the array is empty. The span is within the name.
    pub fn insert(&mut self, name: &str, value: ConstantValue) -> Result<(), SyntaxError> {
        check_name(name, 0..name.len())?;
        if matches!(&value, ConstantValue::Array(entries) if entries.is_empty()) {
            let message = format!("the array `{}` is empty", shortened(name));
            return Err(SyntaxError::new(0..name.len(), message));
        }
        if self.values.contains_key(name) {
            let message = format!("the constant `{}` is given twice", shortened(name));
            return Err(SyntaxError::new(0..name.len(), message));
        }
        self.values.insert(name.to_string(), value);
        Ok(())
    }

    /// The constant with this name.
    pub fn get(&self, name: &str) -> Option<&ConstantValue> {
        self.values.get(name)
    }
}

/// One step.
#[derive(Clone, Debug)]
pub struct Step {
    /// The name that the step defines.
    pub name: String,
    /// The format after the colon, as written.
    pub format: Option<String>,
    /// Where the format stands in the step.
    pub format_span: Option<Range<usize>>,
    /// What is computed, before any folding; its spans are within the step.
    pub expression: Expression,
    /// The value among the operations of the formula, or `None` where the result does not need it
    /// (folding included).
    pub node: Option<NodeId>,
}

/// Straight-line code as an exact function, and step by step.
#[derive(Clone, Debug)]
pub struct ParsedSteps {
    /// The exact function; its text is that of the steps, one to a line.
    pub formula: Formula,
    pub steps: Vec<Step>,
}

/// Code that could not be read.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("{}{error}", .step.map(|step| format!("step {}: ", step + 1)).unwrap_or_default())]
pub struct StepError {
    /// Which step, counted from 0; `None` if the error is about the code as a whole.
    pub step: Option<usize>,
    /// What is wrong, with its place in the step.
    pub error: SyntaxError,
}

/// Reads straight-line code.
///
/// `arguments` are the arguments besides `x`, each with the number at which the exact function is
/// taken (for the low part of a two-word argument, 0). A name is defined before it is used and may
/// be given a new value later; constants, `x`, `pi`, `e` and the functions keep theirs. The
/// expressions may use what formulas may, and `a[2]`, `horner(a, t)` = a\[0\] + a\[1\] t + ... and
/// `clenshaw(c, t)` = c\[0\] + c\[1\] T_1(t) + ... with the arrays among the constants.
///
/// # Errors
///
/// There is no step, or one does not follow this syntax, or a limit of the
/// [parser](super) is exceeded.
pub fn parse_steps<S: AsRef<str>>(
    steps: &[S],
    constants: &ConstantTable,
    arguments: &[(String, Rational)],
) -> Result<ParsedSteps, StepError> {
    let whole = |error| StepError { step: None, error };
    let texts: Vec<&str> = steps.iter().map(AsRef::as_ref).collect();
    if texts.is_empty() {
        return Err(whole(SyntaxError::new(0..0, "there are no steps")));
    }
    let length: usize = texts.iter().map(|text| text.len()).sum();
    if length > TEXT_LIMIT {
        let message = format!("the steps are together longer than {TEXT_LIMIT} bytes");
        return Err(whole(SyntaxError::new(0..0, message)));
    }
    let mut scope = initial_scope(constants, arguments).map_err(whole)?;
    let mut builder = FormulaBuilder::new(texts.join("\n"));
    let mut lowering = Lowering::new(&mut builder);
    let mut parsed = Vec::new();
    let mut offset = 0;
    for (index, text) in texts.iter().enumerate() {
        let located = |error| StepError {
            step: Some(index),
            error,
        };
        let header = Header::read(text).map_err(located)?;
        if constants.get(header.name).is_some() {
            let message = format!("`{}` is a constant", shortened(header.name));
            let error = SyntaxError::new(header.name_span, message);
            return Err(located(error.advise("write another name for the step")));
        }
        let expression = Expression::parse_from(text, header.expression_start).map_err(located)?;
        let node = lowering
            .lower(&expression, &scope, offset)
            .map_err(located)?;
        scope.insert(header.name, Binding::Node(node));
        let (format, format_span) = header.format.unzip();
        parsed.push(Step {
            name: header.name.to_string(),
            format: format.map(str::to_string),
            format_span,
            expression,
            node: Some(node),
        });
        offset += text.len() + 1;
    }
    let root = parsed.last().and_then(|step| step.node).unwrap_or_default();
    let (formula, positions) = builder.finish_with_positions(root);
    for step in &mut parsed {
        step.node = step.node.and_then(|node| positions[node]);
    }
    Ok(ParsedSteps {
        formula,
        steps: parsed,
    })
}

fn initial_scope<'a>(
    constants: &'a ConstantTable,
    arguments: &'a [(String, Rational)],
) -> Result<Scope<'a>, SyntaxError> {
    let mut scope = Scope::new();
    for (name, value) in &constants.values {
        let binding = match value {
            ConstantValue::Number(value) => Binding::Number(value),
            ConstantValue::Array(entries) => Binding::Array(entries),
        };
        scope.insert(name, binding);
    }
    for (name, value) in arguments {
        check_name(name, 0..name.len())?;
        if scope.insert(name, Binding::Number(value)).is_some() {
            let message = format!("the name `{}` is given twice", shortened(name));
            return Err(SyntaxError::new(0..name.len(), message));
        }
    }
    Ok(scope)
}

/// A name that a constant, an argument or a step may take.
fn check_name(name: &str, span: Range<usize>) -> Result<(), SyntaxError> {
    let shown = shortened(name);
    let begins_with_digit = name
        .bytes()
        .next()
        .is_some_and(|first| first.is_ascii_digit());
    if name.is_empty() || begins_with_digit || name_length(name) != name.len() {
        return Err(SyntaxError::new(span, format!("`{shown}` is not a name"))
            .advise("write letters, digits and _, and no digit first"));
    }
    if is_reserved(name) {
        return Err(
            SyntaxError::new(span, format!("`{shown}` has a fixed meaning"))
                .advise("write another name"),
        );
    }
    Ok(())
}

/// What stands before the expression of a step.
struct Header<'a> {
    name: &'a str,
    name_span: Range<usize>,
    format: Option<(&'a str, Range<usize>)>,
    expression_start: usize,
}

impl<'a> Header<'a> {
    fn read(text: &'a str) -> Result<Self, SyntaxError> {
        let Some(equals) = text.find('=') else {
            let error = SyntaxError::new(0..text.len(), "the step does not define a name");
            return Err(error.advise("write name = expression"));
        };
        let left = &text[..equals];
        let (name_part, format_part) = match left.find(':') {
            Some(colon) => (0..colon, Some(colon + 1..equals)),
            None => (0..equals, None),
        };
        let name_span = trimmed(text, name_part);
        let name = &text[name_span.clone()];
        if let Some(variable) = name.strip_suffix(['+', '-', '*', '/']).map(str::trim_end)
            && check_name(variable, 0..0).is_ok()
        {
            let operator = &name[name.len() - 1..];
            return Err(SyntaxError::new(name_span, "a step is a plain assignment")
                .advise(format!("write {variable} = {variable} {operator} (...)")));
        }
        if let Some(last) = name.split_whitespace().last()
            && last != name
            && check_name(last, 0..0).is_ok()
        {
            return Err(
                SyntaxError::new(name_span, "a step begins with the name alone").advise(format!(
                    "write {last} = ..., or {last} : binary32 = ... to round to a format"
                )),
            );
        }
        check_name(name, name_span.clone())?;
        let format = match format_part {
            Some(part) => {
                let span = trimmed(text, part);
                let format = &text[span.clone()];
                let belongs = |byte: u8| byte.is_ascii_alphanumeric() || b":._-".contains(&byte);
                if format.is_empty() || !format.bytes().all(belongs) {
                    let message = format!("`{}` is not the name of a format", shortened(format));
                    return Err(SyntaxError::new(span, message)
                        .advise("write one such as binary32 between the colon and ="));
                }
                Some((format, span))
            }
            None => None,
        };
        Ok(Self {
            name,
            name_span,
            format,
            expression_start: equals + 1,
        })
    }
}

/// The range without the white space at its ends.
fn trimmed(text: &str, range: Range<usize>) -> Range<usize> {
    let part = &text[range.clone()];
    let start = range.start + (part.len() - part.trim_start().len());
    start..start + part.trim().len()
}
