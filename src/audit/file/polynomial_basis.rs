//! Power, Chebyshev and Bernstein approximations.

use rug::Rational;

use crate::approximant::bernstein;
use crate::approximant::chebyshev::{self, FirstCoefficient};
use crate::approximant::common_denominator::ConversionTooLarge;
use crate::approximant::order::compare;
use crate::approximant::piece::{Basis, Form, Piece, Stored};
use crate::approximant::polynomial::Polynomial;
use crate::approximant::power::{self, Order, Parity, Variable};
use crate::audit::document::{Node, Value};
use crate::function::constant::Constant;

use super::approximant::Content;
use super::pieces::{check_count, check_neighbours};
use super::reader::{At, Reader, Table};
use super::storage::{Storage, StoredList};

#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    Power,
    Chebyshev,
    Bernstein,
}

impl Kind {
    pub fn keys(self) -> &'static [&'static str] {
        match self {
            Self::Power => &["variable", "order", "parity", "pieces"],
            Self::Chebyshev => &["first", "variable", "order", "parity", "pieces"],
            Self::Bernstein => &["variable", "order", "pieces"],
        }
    }
}

const PIECES: &str = "write pieces = [{ on = [\"0\", \"1\"], coefficients = [\"1\", \"0.5\"] }]";
const COEFFICIENTS: &str = "write coefficients = [\"1\", \"0.5\"]";

/// How the coefficients of every piece are to be read.
struct Settings {
    kind: Kind,
    variable: Variable,
    order: Order,
    parity: Option<Parity>,
    first: FirstCoefficient,
}

impl Settings {
    fn into_basis(self) -> Basis {
        let Self {
            kind,
            variable,
            order,
            parity,
            first,
        } = self;
        match kind {
            Kind::Power => Basis::Power {
                variable,
                order,
                parity,
            },
            Kind::Chebyshev => Basis::Chebyshev {
                variable,
                order,
                parity,
                first,
            },
            Kind::Bernstein => Basis::Bernstein { variable, order },
        }
    }

    fn to_powers(&self, numbers: &[Rational]) -> Result<Vec<Rational>, ConversionTooLarge> {
        let ascending = power::to_ascending(numbers, self.order, self.parity);
        match self.kind {
            Kind::Power => Ok(ascending),
            Kind::Chebyshev => chebyshev::to_powers(&ascending, self.first),
            Kind::Bernstein => bernstein::to_powers(&ascending),
        }
    }
}

pub(super) fn read(
    reader: &mut Reader<'_>,
    table: &Table<'_>,
    kind: Kind,
    storage: &mut Storage,
) -> Option<Content> {
    let settings = read_settings(reader, table, kind);
    let at = reader.required(table, "pieces", PIECES)?;
    let settings = settings?;
    let pieces = reader.with_array(at, PIECES, |reader, at, elements| {
        read_pieces(reader, at, elements, &settings, storage)
    })?;
    Some(Content {
        basis: settings.into_basis(),
        pieces,
    })
}

fn read_settings(reader: &mut Reader<'_>, table: &Table<'_>, kind: Kind) -> Option<Settings> {
    let variable = read_variable(reader, table, kind);
    let order = read_order(reader, table, kind);
    let parity = match table.get("parity").filter(|_| kind != Kind::Bernstein) {
        Some(at) => reader
            .word(at, &[("odd", Parity::Odd), ("even", Parity::Even)])
            .map(Some),
        None => Some(None),
    };
    let first = match kind {
        Kind::Chebyshev => {
            let advice = "write first = \"full\" (c0 T0 + ...) or \"halved\" (c0/2 + ...)";
            let words = [
                ("full", FirstCoefficient::Full),
                ("halved", FirstCoefficient::Halved),
            ];
            reader
                .required(table, "first", advice)
                .and_then(|at| reader.word(at, &words))
        }
        Kind::Power | Kind::Bernstein => Some(FirstCoefficient::Full),
    };
    Some(Settings {
        kind,
        variable: variable?,
        order: order?,
        parity: parity?,
        first: first?,
    })
}

fn read_order(reader: &mut Reader<'_>, table: &Table<'_>, kind: Kind) -> Option<Order> {
    let advice = match kind {
        Kind::Power => "write order = \"ascending\" (constant term first) or \"descending\"",
        _ => "write order = \"ascending\" (index 0 first) or \"descending\"",
    };
    // By its definition a list of Bernstein coefficients begins with that of the left end.
    let at = match table.get("order") {
        None if kind == Kind::Bernstein => return Some(Order::Ascending),
        _ => reader.required(table, "order", advice)?,
    };
    reader.word(
        at,
        &[
            ("ascending", Order::Ascending),
            ("descending", Order::Descending),
        ],
    )
}

fn read_variable(reader: &mut Reader<'_>, table: &Table<'_>, kind: Kind) -> Option<Variable> {
    const LINEAR: &str = "write variable = { origin = \"...\", scale = \"...\" }";
    let advice = "write variable = \"x\", \"x-left\" (x minus the left end), \"unit\" \
                  ((x-l)/(r-l)), \"centred\" ((2x-l-r)/(r-l)) or { origin = \"...\", scale = \"...\" }";
    let at = match (table.get("variable"), kind) {
        (Some(at), _) => at,
        (None, Kind::Chebyshev) => return Some(Variable::Centred),
        (None, Kind::Bernstein) => return Some(Variable::Unit),
        (None, Kind::Power) => reader.required(table, "variable", advice)?,
    };
    if let Value::Table(_) = &at.node.value {
        let map = reader.table(at, LINEAR)?;
        reader.check_keys(&map, &["origin", "scale"]);
        let origin = reader
            .required(&map, "origin", LINEAR)
            .and_then(|at| reader.constant(at));
        let scale = reader
            .required(&map, "scale", LINEAR)
            .and_then(|at| read_scale(reader, at));
        return Some(Variable::Linear {
            origin: origin?,
            scale: scale?,
        });
    }
    match kind {
        Kind::Power => {
            // Variable is not Copy; the words stand for constructors.
            let make: fn() -> Variable = reader.word(
                at,
                &[
                    ("x", (|| Variable::X) as fn() -> Variable),
                    ("x-left", || Variable::XLeft),
                    ("unit", || Variable::Unit),
                    ("centred", || Variable::Centred),
                ],
            )?;
            Some(make())
        }
        Kind::Chebyshev => reader
            .word(at, &[("centred", ())])
            .map(|()| Variable::Centred),
        Kind::Bernstein => reader.word(at, &[("unit", ())]).map(|()| Variable::Unit),
    }
}

/// A constant that is proved not to be 0.
fn read_scale(reader: &mut Reader<'_>, at: At<'_>) -> Option<Constant> {
    let scale = reader.constant(at)?;
    match compare(&scale, &Constant::from(Rational::new())) {
        Some(order) if order.is_ne() => Some(scale),
        Some(_) => {
            reader.error(
                at,
                "the scale is 0",
                "division by 0",
                "write the length of one unit",
            );
            None
        }
        None => {
            let advice = "write the value itself";
            reader.error(
                at,
                "it cannot be decided whether the scale is 0",
                "",
                advice,
            );
            None
        }
    }
}

fn read_pieces(
    reader: &mut Reader<'_>,
    at: At<'_>,
    elements: &[Node],
    settings: &Settings,
    storage: &mut Storage,
) -> Option<Vec<Piece>> {
    if !check_count(reader, at, elements, 1, PIECES) {
        return None;
    }
    let mut pieces = Vec::new();
    for element in elements {
        let Some((on, list)) = read_piece(reader, at.to(element), storage) else {
            continue;
        };
        if let Some(piece) = convert(reader, at.to(element), settings, on, &list) {
            pieces.push(piece);
        }
    }
    // Neighbours can be compared only where every piece was understood.
    let fit = pieces.len() == elements.len() && check_neighbours(reader, at, elements, &pieces);
    fit.then_some(pieces)
}

fn read_piece(
    reader: &mut Reader<'_>,
    at: At<'_>,
    storage: &mut Storage,
) -> Option<([Constant; 2], StoredList)> {
    let table = reader.table(at, PIECES)?;
    reader.check_keys(&table, &["on", "coefficients"]);
    let on = reader
        .required(
            &table,
            "on",
            "write the two ends of the piece: on = [\"0\", \"1\"]",
        )
        .and_then(|at| reader.piece_ends(at, storage));
    let coefficients = reader
        .required(&table, "coefficients", COEFFICIENTS)
        .and_then(|at| reader.stored_list(at, storage, COEFFICIENTS));
    Some((on?, coefficients?))
}

fn convert(
    reader: &mut Reader<'_>,
    at: At<'_>,
    settings: &Settings,
    on: [Constant; 2],
    list: &StoredList,
) -> Option<Piece> {
    let (origin, scale) = match power::origin_and_scale(&settings.variable, &on) {
        Ok(pair) => pair,
        Err(error) => {
            let advice = "write the ends as numbers or as shorter formulas";
            reader.error(
                at,
                "the local variable of the piece has no value",
                error.message,
                advice,
            );
            return None;
        }
    };
    let polynomial = |numbers: &[Rational]| {
        settings.to_powers(numbers).map(|coefficients| Polynomial {
            origin: origin.clone(),
            scale: scale.clone(),
            coefficients,
        })
    };
    let written = if list.is_changed() {
        Some(polynomial(list.as_written()))
    } else {
        None
    };
    match (polynomial(&list.stored), written.transpose()) {
        (Ok(stored), Ok(written)) => Some(Piece {
            on,
            form: Form::Polynomial(stored),
            written,
            stored: Stored::Coefficients(list.stored.clone()),
        }),
        (Err(error), _) | (_, Err(error)) => {
            let advice = "write fewer coefficients, or decimals instead of ratios";
            reader.error(at, "the piece is too large", error.to_string(), advice);
            None
        }
    }
}
