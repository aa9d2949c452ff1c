//! An expression as a list in postfix order, read by operator precedence.
//!
//! Method: the shunting-yard algorithm (Dijkstra, Mathematical Centre report MR 34, 1961; from
//! memory). Pending operators and open parentheses wait on one stack, whose length is bounded by
//! [`DEPTH_LIMIT`]; what is complete goes to the list.

use std::ops::Range;

use rug::Rational;

use super::names::{self, Callable};
use super::token::{Token, Tokens};
use super::{DEPTH_LIMIT, OPERATION_LIMIT, SyntaxError, TEXT_LIMIT};

/// A part of an expression. Each takes its operands from the end of what the parts before it left,
/// the last operand last.
#[derive(Clone, Debug, PartialEq)]
pub enum Element {
    Number(Rational),
    Name(String),
    Negate,
    Add,
    Subtract,
    Multiply,
    Divide,
    /// A function; the number of operands is its arity.
    Call(Callable),
    /// An array (given by a name) and an index.
    Index,
}

/// An expression exactly as written, before any folding: its parts in postfix order. Parentheses
/// and unary plus signs leave no part.
#[derive(Clone, Debug, PartialEq)]
pub struct Expression {
    elements: Vec<(Element, Range<usize>)>,
}

impl Expression {
    /// The parts in postfix order, each with the bytes of the text that it and its operands cover.
    pub fn elements(&self) -> &[(Element, Range<usize>)] {
        &self.elements
    }

    /// Reads a text that is one expression.
    ///
    /// # Errors
    ///
    /// As for [`parse_formula`](super::parse_formula), except that names of numbers are not
    /// resolved, and so `horner` and `clenshaw` are accepted.
    pub fn parse(text: &str) -> Result<Self, SyntaxError> {
        Self::parse_from(text, 0)
    }

    /// Reads the part of a text from the byte `start` on; spans count from the start of the text.
    pub(super) fn parse_from(text: &str, start: usize) -> Result<Self, SyntaxError> {
        if text.len() > TEXT_LIMIT {
            let message = format!("the text is longer than {TEXT_LIMIT} bytes");
            return Err(SyntaxError::new(0..0, message));
        }
        let mut parser = Parser {
            text,
            tokens: Tokens::new(text, start),
            elements: Vec::new(),
            operands: Vec::new(),
            pending: Vec::new(),
            depth: 0,
        };
        parser.run()?;
        Ok(Self {
            elements: parser.elements,
        })
    }
}

/// An operator or an opening that waits for its last operand.
#[derive(Clone, Debug)]
enum Pending {
    Operator(Element),
    Parenthesis,
    Arguments { callable: Callable, complete: usize },
    Bracket,
}

struct Parser<'a> {
    text: &'a str,
    tokens: Tokens<'a>,
    elements: Vec<(Element, Range<usize>)>,
    /// What the complete operands cover, parentheses included.
    operands: Vec<Range<usize>>,
    /// Waiting operators and openings, with the place of their first character.
    pending: Vec<(Pending, Range<usize>)>,
    depth: usize,
}

impl Parser<'_> {
    fn run(&mut self) -> Result<(), SyntaxError> {
        let mut operand_expected = true;
        while let Some((token, span)) = self.tokens.next()? {
            operand_expected = if operand_expected {
                self.operand(token, span)?
            } else {
                self.continuation(token, span)?
            };
        }
        if operand_expected {
            let end = self.text.len();
            let message = if self.elements.is_empty() && self.pending.is_empty() {
                "the formula is empty"
            } else {
                "the formula ends where a number, a name or a parenthesis is expected"
            };
            return Err(SyntaxError::new(end..end, message));
        }
        self.reduce(0)?;
        match self.pending.pop() {
            None => Ok(()),
            Some((opening, span)) => {
                let missing = if matches!(opening, Pending::Bracket) {
                    ']'
                } else {
                    ')'
                };
                Err(SyntaxError::new(
                    span,
                    format!("`{missing}` is missing for this opening"),
                ))
            }
        }
    }

    /// Takes a word where an operand is expected; true if one still is after it.
    fn operand(&mut self, token: Token, span: Range<usize>) -> Result<bool, SyntaxError> {
        match token {
            Token::Number(value) => {
                self.emit_operand(Element::Number(value), span)?;
                Ok(false)
            }
            Token::Name => self.name(span),
            Token::Plus => Ok(true),
            Token::Minus => {
                self.open(Pending::Operator(Element::Negate), span)?;
                Ok(true)
            }
            Token::OpenParenthesis => {
                self.open(Pending::Parenthesis, span)?;
                Ok(true)
            }
            _ => {
                let word = &self.text[span.clone()];
                let message =
                    format!("`{word}` stands where a number, a name or a parenthesis is expected");
                Err(SyntaxError::new(span, message))
            }
        }
    }

    fn name(&mut self, span: Range<usize>) -> Result<bool, SyntaxError> {
        let name = &self.text[span.clone()];
        if self.tokens.continues_with('(') {
            let Some(callable) = Callable::from_name(name) else {
                let message = format!("there is no function `{}`", shortened(name));
                let advice = names::advise_function(name);
                return Err(SyntaxError {
                    span,
                    message,
                    advice,
                });
            };
            self.tokens.next()?;
            self.open(
                Pending::Arguments {
                    callable,
                    complete: 0,
                },
                span,
            )?;
            return Ok(true);
        }
        if Callable::from_name(name).is_some() {
            let advice = format!("write {name}(...) with its arguments in parentheses");
            return Err(SyntaxError::new(span, format!("`{name}` is a function")).advise(advice));
        }
        self.emit_operand(Element::Name(name.to_string()), span)?;
        if self.tokens.continues_with('[')
            && let Some((_, bracket)) = self.tokens.next()?
        {
            self.open(Pending::Bracket, bracket)?;
            return Ok(true);
        }
        Ok(false)
    }

    /// Takes a word after a complete operand; true if an operand is expected after it.
    fn continuation(&mut self, token: Token, span: Range<usize>) -> Result<bool, SyntaxError> {
        let operator = match token {
            Token::Plus => Element::Add,
            Token::Minus => Element::Subtract,
            Token::Star => Element::Multiply,
            Token::Slash => Element::Divide,
            Token::Comma => return self.comma(span),
            Token::CloseParenthesis | Token::CloseBracket => {
                self.close(&token, span)?;
                return Ok(false);
            }
            Token::Number(_) | Token::Name | Token::OpenParenthesis => {
                let message = "an operator is missing before this";
                return Err(SyntaxError::new(span, message).advise("write * for a product"));
            }
            Token::OpenBracket => {
                let message = "an index stands only directly after the name of an array";
                return Err(SyntaxError::new(span, message));
            }
        };
        self.reduce(precedence(&operator))?;
        self.pending.push((Pending::Operator(operator), span));
        Ok(true)
    }

    fn comma(&mut self, span: Range<usize>) -> Result<bool, SyntaxError> {
        self.reduce(0)?;
        if let Some((Pending::Arguments { complete, .. }, _)) = self.pending.last_mut() {
            *complete += 1;
            return Ok(true);
        }
        let message = "a comma stands only between the arguments of a function";
        Err(SyntaxError::new(span, message)
            .advise("write a point, as in 1.5, if a number is meant"))
    }

    fn close(&mut self, token: &Token, span: Range<usize>) -> Result<(), SyntaxError> {
        self.reduce(0)?;
        let bracket = *token == Token::CloseBracket;
        let Some((opening, start)) = self.pending.pop() else {
            let message = format!("`{}` has no opening", if bracket { ']' } else { ')' });
            return Err(SyntaxError::new(span, message));
        };
        self.depth -= 1;
        let whole = start.start..span.end;
        match (opening, bracket) {
            (Pending::Parenthesis, false) => {
                if let Some(operand) = self.operands.last_mut() {
                    *operand = whole;
                }
                Ok(())
            }
            (Pending::Arguments { callable, complete }, false) => {
                let (found, arity) = (complete + 1, callable.arity());
                if found != arity {
                    let plural = if arity == 1 { "argument" } else { "arguments" };
                    let message =
                        format!("{} takes {arity} {plural}, not {found}", callable.name());
                    return Err(SyntaxError::new(whole, message));
                }
                self.emit(Element::Call(callable), arity, whole)
            }
            (Pending::Bracket, true) => {
                let array = self
                    .operands
                    .iter()
                    .nth_back(1)
                    .map_or(whole.start, |a| a.start);
                self.emit(Element::Index, 2, array..whole.end)
            }
            (_, _) => {
                let expected = if bracket { ')' } else { ']' };
                Err(SyntaxError::new(
                    span,
                    format!("`{expected}` is expected here"),
                ))
            }
        }
    }

    /// Completes the waiting operators that bind at least as strongly as `least`.
    fn reduce(&mut self, least: u8) -> Result<(), SyntaxError> {
        while let Some((Pending::Operator(operator), span)) =
            self.pending.pop_if(|(pending, _)| match pending {
                Pending::Operator(operator) => precedence(operator) >= least,
                _ => false,
            })
        {
            let end = self.operands.last().map_or(span.end, |last| last.end);
            if operator == Element::Negate {
                self.depth -= 1;
                self.emit(operator, 1, span.start..end)?;
            } else {
                let start = self
                    .operands
                    .iter()
                    .nth_back(1)
                    .map_or(span.start, |a| a.start);
                self.emit(operator, 2, start..end)?;
            }
        }
        Ok(())
    }

    fn open(&mut self, pending: Pending, span: Range<usize>) -> Result<(), SyntaxError> {
        if self.depth >= DEPTH_LIMIT {
            let message = format!(
                "more than {DEPTH_LIMIT} parentheses, calls and signs stand inside one another"
            );
            return Err(SyntaxError::new(span, message));
        }
        self.depth += 1;
        self.pending.push((pending, span));
        Ok(())
    }

    fn emit_operand(&mut self, element: Element, span: Range<usize>) -> Result<(), SyntaxError> {
        self.emit(element, 0, span)
    }

    fn emit(
        &mut self,
        element: Element,
        operand_count: usize,
        span: Range<usize>,
    ) -> Result<(), SyntaxError> {
        if self.elements.len() >= OPERATION_LIMIT {
            let message = format!("the formula has more than {OPERATION_LIMIT} operations");
            return Err(SyntaxError::new(span, message));
        }
        self.operands
            .truncate(self.operands.len().saturating_sub(operand_count));
        self.operands.push(span.clone());
        self.elements.push((element, span));
        Ok(())
    }
}

/// Sums, products, signs: the larger binds the stronger.
fn precedence(operator: &Element) -> u8 {
    match operator {
        Element::Add | Element::Subtract => 1,
        Element::Multiply | Element::Divide => 2,
        _ => 3,
    }
}

/// A name as it is repeated in a message.
pub(super) fn shortened(name: &str) -> String {
    const LENGTH: usize = 40;
    match name.char_indices().nth(LENGTH) {
        Some((end, _)) => format!("{}…", &name[..end]),
        None => name.to_string(),
    }
}
