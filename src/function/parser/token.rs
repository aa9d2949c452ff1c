//! The words of a formula.

use std::ops::Range;

use rug::Rational;

use super::SyntaxError;
use super::names;
use crate::number::literal;

/// A word of a formula.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Token {
    Number(Rational),
    Name,
    Plus,
    Minus,
    Star,
    Slash,
    Comma,
    OpenParenthesis,
    CloseParenthesis,
    OpenBracket,
    CloseBracket,
}

/// Reads a text word by word.
pub(super) struct Tokens<'a> {
    text: &'a str,
    position: usize,
}

impl<'a> Tokens<'a> {
    /// The words of `text` from the byte `start` on.
    pub(super) fn new(text: &'a str, start: usize) -> Self {
        Self {
            text,
            position: start,
        }
    }

    /// The next word and its place, or `None` at the end.
    pub(super) fn next(&mut self) -> Result<Option<(Token, Range<usize>)>, SyntaxError> {
        self.skip_space();
        let start = self.position;
        let rest = &self.text[start..];
        let mut characters = rest.chars();
        let Some(first) = characters.next() else {
            return Ok(None);
        };
        let second = characters.next();
        let (token, length) = match first {
            '0'..='9' => self.number(rest)?,
            '.' if second.is_some_and(|next| next.is_ascii_digit()) => self.number(rest)?,
            'a'..='z' | 'A'..='Z' | '_' => (Token::Name, name_length(rest)),
            '*' if second == Some('*') => {
                return Err(power_operator(start..start + 2));
            }
            '^' => return Err(power_operator(start..start + 1)),
            '+' => (Token::Plus, 1),
            '-' => (Token::Minus, 1),
            '*' => (Token::Star, 1),
            '/' => (Token::Slash, 1),
            ',' => (Token::Comma, 1),
            '(' => (Token::OpenParenthesis, 1),
            ')' => (Token::CloseParenthesis, 1),
            '[' => (Token::OpenBracket, 1),
            ']' => (Token::CloseBracket, 1),
            other => return Err(stray_character(start, other)),
        };
        self.position = start + length;
        Ok(Some((token, start..self.position)))
    }

    /// True if the next word begins with this character; it is not read.
    pub(super) fn continues_with(&mut self, character: char) -> bool {
        self.skip_space();
        self.text[self.position..].starts_with(character)
    }

    fn skip_space(&mut self) {
        let rest = &self.text[self.position..];
        self.position = self.text.len() - rest.trim_start().len();
    }

    /// A number takes every letter and digit that follows, as in C, so that `1.5f` and `2x` are
    /// seen whole and explained.
    fn number(&self, rest: &str) -> Result<(Token, usize), SyntaxError> {
        let text = &rest[..number_length(rest)];
        let span = self.position..self.position + text.len();
        let value = match literal::parse_unsigned(text) {
            Ok(value) => value,
            Err(error) => {
                if let Some((number, name)) = number_before_name(text) {
                    let message = format!("an operator is missing between {number} and {name}");
                    return Err(
                        SyntaxError::new(span, message).advise(format!("write {number}*{name}"))
                    );
                }
                let message = format!("`{}` {}", error.found, error.problem);
                return Err(SyntaxError {
                    span,
                    message,
                    advice: error.advice,
                });
            }
        };
        let octal_in_c = text.len() > 1
            && text.starts_with('0')
            && text.bytes().all(|byte| byte.is_ascii_digit())
            && value > 7;
        if octal_in_c {
            let message = format!("`{text}` is octal in C");
            let advice = format!("write {}", text.trim_start_matches('0'));
            return Err(SyntaxError::new(span, message).advise(advice));
        }
        Ok((Token::Number(value), text.len()))
    }
}

/// Length of the name at the beginning of a text.
pub(super) fn name_length(text: &str) -> usize {
    let belongs = |character: char| character.is_ascii_alphanumeric() || character == '_';
    text.find(|character| !belongs(character))
        .unwrap_or(text.len())
}

fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let hexadecimal = text.starts_with("0x") || text.starts_with("0X");
    let mut length = 0;
    while let Some(&byte) = bytes.get(length) {
        let next_is = |test: fn(&u8) -> bool| bytes.get(length + 1).is_some_and(test);
        let belongs = match byte {
            b'.' | b'_' => true,
            b'\'' => next_is(u8::is_ascii_alphanumeric),
            b'+' | b'-' => {
                let mark = bytes[..length].last().map(u8::to_ascii_lowercase);
                mark == Some(if hexadecimal { b'p' } else { b'e' }) && next_is(u8::is_ascii_digit)
            }
            _ => byte.is_ascii_alphanumeric(),
        };
        if !belongs {
            break;
        }
        length += 1;
    }
    length
}

/// Divides a word such as `2x` into a number and a name that means something.
fn number_before_name(text: &str) -> Option<(&str, &str)> {
    let at = text.find(|character: char| character.is_ascii_alphabetic() || character == '_')?;
    let (number, name) = text.split_at(at);
    (names::is_reserved(name) && literal::parse_unsigned(number).is_ok()).then_some((number, name))
}

fn power_operator(span: Range<usize>) -> SyntaxError {
    SyntaxError::new(span, "C has no operator for powers").advise("write pow(a, b)")
}

fn stray_character(start: usize, character: char) -> SyntaxError {
    let span = start..start + character.len_utf8();
    let advice = match character {
        '×' | '·' | '⋅' | '∙' => "write *",
        '÷' | '∕' => "write /",
        '\u{2212}' | '\u{2013}' => "write the ASCII minus sign -",
        'π' => "write pi",
        '√' => "write sqrt(...)",
        '²' => "write pow(a, 2)",
        '³' => "write pow(a, 3)",
        '{' | '}' => "write parentheses ( )",
        '|' => "write fabs(a)",
        '%' => "write the remainder as a difference, or the number without the percent sign",
        ';' => "leave the semicolon out",
        '=' => "write only the expression for the value",
        ':' | '.' => "leave std::, math. and the like out",
        '<' | '>' | '?' | '&' | '!' | '~' => {
            return SyntaxError::new(
                span,
                format!("`{character}` makes a comparison or a decision, which is no formula"),
            )
            .advise("give each interval its own formula");
        }
        _ => {
            let message = format!("`{}` has no meaning in a formula", character.escape_debug());
            return SyntaxError::new(span, message);
        }
    };
    SyntaxError::new(span, format!("`{character}` has no meaning in a formula")).advise(advice)
}
