//! Rounding of the written numbers to the format that they are stored in.

use std::cmp::Ordering;
use std::sync::Arc;

use rug::Rational;

use crate::approximant::order::compare;
use crate::approximant::piece::StorageRounding;
use crate::audit::diagnostic::{Diagnostic, quoted};
use crate::audit::document::{Node, Value};
use crate::function::constant::Constant;
use crate::number::format::{Format, hex};

use super::reader::{At, Reader, Table};

/// The most coefficients of one piece, numbers of one array of steps, or orders of one knot.
const MAXIMUM_COEFFICIENTS: usize = 10_000;

/// Precisions at which an irrational end is enclosed until both ends of the enclosure round to
/// the same number.
const PRECISIONS: [u32; 3] = [256, 1024, 4096];

/// The names of the storage formats; "exact" keeps the numbers.
const FORMATS: [&str; 6] = [
    "exact",
    "binary16",
    "bfloat16",
    "binary32",
    "binary64",
    "binary128",
];

/// The storage formats of an approximation, and what they did to its numbers.
#[derive(Default)]
pub(super) struct Storage {
    pub format: Option<Format>,
    pub ends: Option<Format>,
    pub rounding: StorageRounding,
    /// A remark on the first hexadecimal literal that rounding changed, and how many there are.
    changed_hexadecimal: Option<(Diagnostic, u64)>,
}

/// A list of numbers before and after rounding.
#[derive(Clone)]
pub(super) struct StoredList {
    /// As stored.
    pub stored: Arc<[Rational]>,
    written: Option<Arc<[Rational]>>,
}

impl StoredList {
    /// The numbers before rounding.
    pub fn as_written(&self) -> &[Rational] {
        self.written.as_deref().unwrap_or(&self.stored)
    }

    /// Whether rounding changed one of the numbers.
    pub fn is_changed(&self) -> bool {
        self.written.is_some()
    }
}

impl Reader<'_> {
    /// The declared formats; without a declaration the numbers are kept as written.
    pub fn storage(&mut self, table: &Table<'_>) -> Option<Storage> {
        let format = table.get("stored_as").map(|at| self.format(at));
        let ends = table.get("ends_stored_as").map(|at| self.format(at));
        Some(Storage {
            format: format.unwrap_or(Some(None))?,
            ends: ends.unwrap_or(Some(None))?,
            ..Storage::default()
        })
    }

    fn format(&mut self, at: At<'_>) -> Option<Option<Format>> {
        let words = FORMATS.map(|name| (name, Format::from_name(name)));
        self.word(at, &words)
    }

    /// Reads a list of numbers, here or in another file, and rounds it.
    pub fn stored_list(
        &mut self,
        at: At<'_>,
        storage: &mut Storage,
        advice: &str,
    ) -> Option<StoredList> {
        self.with_array(at, advice, |reader, at, elements| {
            reader.stored_elements(at, elements, storage, advice)
        })
    }

    fn stored_elements(
        &mut self,
        at: At<'_>,
        elements: &[Node],
        storage: &mut Storage,
        advice: &str,
    ) -> Option<StoredList> {
        if elements.is_empty() {
            self.error(at, "the list is empty", "no number", advice);
            return None;
        }
        if elements.len() > MAXIMUM_COEFFICIENTS {
            let found = format!("{} numbers", elements.len());
            let advice = format!("one list holds at most {MAXIMUM_COEFFICIENTS} numbers");
            self.error(at, "the list is too long", found, advice);
            return None;
        }
        let mut written = Vec::with_capacity(elements.len());
        let mut stored = Vec::with_capacity(elements.len());
        let mut complete = true;
        for element in elements {
            let at = at.to(element);
            let Some(value) = self.rational(at) else {
                complete = false;
                continue;
            };
            match self.round(at, &value, storage) {
                Some(rounded) => stored.push(rounded),
                None => complete = false,
            }
            written.push(value);
        }
        if !complete {
            return None;
        }
        let changed = written != stored;
        Some(StoredList {
            stored: stored.into(),
            written: changed.then(|| written.into()),
        })
    }

    /// A single number that is stored.
    pub fn stored_number(&mut self, at: At<'_>, storage: &mut Storage) -> Option<Rational> {
        let value = self.rational(at)?;
        self.round(at, &value, storage)
    }

    fn round(&mut self, at: At<'_>, value: &Rational, storage: &mut Storage) -> Option<Rational> {
        storage.rounding.numbers += 1;
        let Some(format) = storage.format else {
            return Some(value.clone());
        };
        let rounded = format.round(value);
        if rounded.overflow {
            self.overflow(at, format, "stored_as");
            return None;
        }
        storage.rounding.changed += u64::from(rounded.inexact);
        storage.rounding.underflowed += u64::from(rounded.underflow && rounded.inexact);
        if rounded.inexact
            && let Value::Text(text) = &at.node.value
            && is_hexadecimal(text)
        {
            match &mut storage.changed_hexadecimal {
                Some((_, count)) => *count += 1,
                None => {
                    let note = self.note(
                        at,
                        "a hexadecimal literal is not a number of the storage format",
                        format!("{} has more digits than {}", quoted(text), format.name()),
                        "it is rounded; write the digits as they are stored, or change `stored_as`",
                    );
                    storage.changed_hexadecimal = Some((note, 1));
                }
            }
        }
        Some(rounded.value)
    }

    fn overflow(&mut self, at: At<'_>, format: Format, key: &str) {
        self.error(
            at,
            format!("the number overflows {}", format.name()),
            "it would be stored as an infinity",
            format!("correct the number, or declare a wider format in `{key}`"),
        );
    }

    /// Passes on the remarks that were collected while numbers were rounded.
    pub fn finish_storage(&mut self, storage: &Storage) {
        if let Some((note, count)) = &storage.changed_hexadecimal {
            let mut note = note.clone();
            if *count > 1 {
                note.found
                    .push_str(&format!(" (the first of {count} such literals)"));
            }
            self.push_note(note);
        }
    }

    /// An end or knot, rounded to `format` where there is one.
    pub fn round_end(
        &mut self,
        at: At<'_>,
        end: Constant,
        format: Option<Format>,
    ) -> Option<Constant> {
        let Some(format) = format else {
            return Some(end);
        };
        let rounded = match end.as_rational() {
            Some(value) => Some(format.round(value)),
            None => PRECISIONS.iter().find_map(|&precision| {
                let (lower, upper) = end.enclosure(precision)?;
                let rounded = format.round(&lower);
                (rounded.value == format.round(&upper).value).then_some(rounded)
            }),
        };
        let Some(rounded) = rounded else {
            self.error(
                at,
                "the end cannot be rounded",
                format!("{} lies too close to a tie", quoted(end.text())),
                "write the rounded number itself",
            );
            return None;
        };
        if rounded.overflow {
            self.overflow(at, format, "ends_stored_as");
            return None;
        }
        let text = hex(&rounded.value).unwrap_or_else(|| rounded.value.to_string());
        match Constant::parse(&text) {
            Ok(constant) => Some(constant),
            Err(_) => Some(Constant::from(rounded.value)),
        }
    }

    /// The ends of a piece, rounded where that is declared, and in order.
    pub fn piece_ends(&mut self, at: At<'_>, storage: &Storage) -> Option<[Constant; 2]> {
        let written = self.ends(at)?;
        if !self.check_interval(at, &written, false) {
            return None;
        }
        let rounded = self.round_ends(at, written.clone(), storage.ends)?;
        if compare(&rounded[0], &rounded[1]).is_some_and(Ordering::is_ge) {
            self.error(
                at,
                "the ends coincide after rounding",
                format!("both are {}", quoted(rounded[0].text())),
                "declare a wider format in `ends_stored_as`",
            );
            return None;
        }
        Some(rounded)
    }

    /// Both ends of an interval, rounded to `format` where there is one.
    pub fn round_ends(
        &mut self,
        at: At<'_>,
        ends: [Constant; 2],
        format: Option<Format>,
    ) -> Option<[Constant; 2]> {
        let [left, right] = ends;
        let left = self.round_end(at, left, format);
        let right = self.round_end(at, right, format);
        Some([left?, right?])
    }
}

fn is_hexadecimal(text: &str) -> bool {
    let digits = text.trim().trim_start_matches(['+', '-']);
    digits.starts_with("0x") || digits.starts_with("0X")
}
