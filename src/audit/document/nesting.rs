//! A look at the text before a recursive parser sees it: how deep it nests, how many values it
//! holds.
//!
//! The look is one loop over the bytes that knows strings and comments. On a text that is not
//! well-formed it may misjudge, and the parsers then report the error; their own recursion is
//! bounded as well (TOML 80 brackets, JSON 512 values), so the limits here give the better message
//! and protect the recursion over the finished tree.

use super::{Problem, Syntax};

/// The deepest nesting of arrays, tables and dotted keys.
const MAXIMUM_DEPTH: usize = 64;

/// The most values of a TOML file, whose parser takes some 400 bytes for each.
const MAXIMUM_TOML_VALUES: usize = 4_000_000;

/// The most values of a JSON file.
const MAXIMUM_JSON_VALUES: usize = 32_000_000;

/// Refuses a text that nests too deeply or holds too many values.
pub(super) fn check(text: &str, syntax: Syntax) -> Result<(), Problem> {
    let maximum_values = match syntax {
        Syntax::Toml => MAXIMUM_TOML_VALUES,
        Syntax::Json => MAXIMUM_JSON_VALUES,
    };
    let bytes = text.as_bytes();
    let mut values = 0_usize;
    // Dots of the current dotted key in the brackets that are open; the first element is the
    // place outside of all brackets.
    let mut dots = vec![0_usize];
    let mut depth = 0_usize;
    let mut position = 0;
    while position < bytes.len() {
        let start = position;
        match bytes[position] {
            b'"' => position = after_string(bytes, position, syntax),
            b'\'' if syntax == Syntax::Toml => position = after_literal(bytes, position),
            b'#' if syntax == Syntax::Toml => {
                position = after_line(bytes, position);
                continue;
            }
            b'[' | b'{' => {
                dots.push(0);
                depth += 1;
                position += 1;
            }
            b']' | b'}' => {
                if dots.len() > 1 {
                    depth -= 1 + dots.pop().unwrap_or(0);
                }
                position += 1;
            }
            b'.' if syntax == Syntax::Toml => {
                if let Some(last) = dots.last_mut() {
                    *last += 1;
                    depth += 1;
                }
                position += 1;
            }
            b',' | b'\n' => {
                let separates = bytes[position] == b',' || dots.len() == 1;
                if separates && let Some(last) = dots.last_mut() {
                    depth -= std::mem::take(last);
                    values += 1;
                }
                position += 1;
            }
            _ => position += 1,
        }
        if depth > MAXIMUM_DEPTH {
            return Err(Problem::new(
                start..start + 1,
                "the file is nested too deeply",
                format!("nesting level {depth}"),
                format!("an audit file needs fewer than ten levels; the limit is {MAXIMUM_DEPTH}"),
            ));
        }
        if values > maximum_values {
            let advice = match syntax {
                Syntax::Toml => "move the table to a JSON file and write { file = \"table.json\" }",
                Syntax::Json => "split the table into several files",
            };
            return Err(Problem::new(
                start..start + 1,
                "the file holds too many values",
                format!("more than {maximum_values} values up to here"),
                advice,
            ));
        }
    }
    Ok(())
}

/// The position after the string in double quotes that begins at `start`.
fn after_string(bytes: &[u8], start: usize, syntax: Syntax) -> usize {
    if syntax == Syntax::Toml && bytes[start..].starts_with(b"\"\"\"") {
        let mut position = start + 3;
        while position < bytes.len() && !bytes[position..].starts_with(b"\"\"\"") {
            position += if bytes[position] == b'\\' { 2 } else { 1 };
        }
        return after_quotes(bytes, position, b'"');
    }
    let mut position = start + 1;
    while position < bytes.len() {
        match bytes[position] {
            b'\\' => position += 2,
            b'"' => return position + 1,
            b'\n' => return position,
            _ => position += 1,
        }
    }
    position
}

/// The position after the TOML string in single quotes that begins at `start`.
fn after_literal(bytes: &[u8], start: usize) -> usize {
    if bytes[start..].starts_with(b"'''") {
        let mut position = start + 3;
        while position < bytes.len() && !bytes[position..].starts_with(b"'''") {
            position += 1;
        }
        return after_quotes(bytes, position, b'\'');
    }
    let mut position = start + 1;
    while position < bytes.len() {
        match bytes[position] {
            b'\'' => return position + 1,
            b'\n' => return position,
            _ => position += 1,
        }
    }
    position
}

/// The position after the closing quotes of a multi-line string: three, or up to five where the
/// string itself ends with quotes.
fn after_quotes(bytes: &[u8], start: usize, quote: u8) -> usize {
    let run = bytes[start.min(bytes.len())..]
        .iter()
        .take(5)
        .take_while(|&&byte| byte == quote);
    start + run.count()
}

fn after_line(bytes: &[u8], start: usize) -> usize {
    bytes[start..]
        .iter()
        .position(|&byte| byte == b'\n')
        .map_or(bytes.len(), |end| start + end)
}
