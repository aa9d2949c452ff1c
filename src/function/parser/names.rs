//! The names that formulas know, and advice about those that they do not.

use crate::function::formula::Function;

/// What a name before parentheses stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Callable {
    /// A function of one argument.
    Function(Function),
    /// `pow(a, b)`: a to the power b.
    Power,
    /// `fma(a, b, c)`: a*b + c.
    FusedMultiplyAdd,
    /// `horner(a, t)`: a\[0\] + a\[1\] t + a\[2\] t^2 + ...
    Horner,
    /// `clenshaw(c, t)`: c\[0\] + c\[1\] T_1(t) + c\[2\] T_2(t) + ...
    Clenshaw,
}

impl Callable {
    /// The name in formulas and steps.
    pub fn name(self) -> &'static str {
        match self {
            Self::Function(function) => function.name(),
            Self::Power => "pow",
            Self::FusedMultiplyAdd => "fma",
            Self::Horner => "horner",
            Self::Clenshaw => "clenshaw",
        }
    }

    /// The number of arguments.
    pub fn arity(self) -> usize {
        match self {
            Self::Function(_) => 1,
            Self::Power | Self::Horner | Self::Clenshaw => 2,
            Self::FusedMultiplyAdd => 3,
        }
    }

    pub(super) fn from_name(name: &str) -> Option<Self> {
        all_callables().find(|callable| callable.name() == name)
    }
}

fn all_callables() -> impl Iterator<Item = Callable> {
    let others = [
        Callable::Power,
        Callable::FusedMultiplyAdd,
        Callable::Horner,
        Callable::Clenshaw,
    ];
    Function::ALL
        .into_iter()
        .map(Callable::Function)
        .chain(others)
}

/// A number that every formula knows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Predefined {
    Variable,
    Pi,
    Euler,
}

const PREDEFINED: [(&str, Predefined); 5] = [
    ("x", Predefined::Variable),
    ("pi", Predefined::Pi),
    ("e", Predefined::Euler),
    ("M_PI", Predefined::Pi),
    ("M_E", Predefined::Euler),
];

pub(super) fn predefined(name: &str) -> Option<Predefined> {
    PREDEFINED
        .into_iter()
        .find(|(known, _)| *known == name)
        .map(|(_, meaning)| meaning)
}

/// True for the names that a constant, an argument or a step may not take: the variable, the
/// predefined numbers and the functions.
pub fn is_reserved(name: &str) -> bool {
    predefined(name).is_some() || Callable::from_name(name).is_some()
}

/// Names from elsewhere, and how they are written here.
const ELSEWHERE: [(&str, &str); 41] = [
    ("ln", "write log"),
    ("loge", "write log"),
    ("lg", "write log10, or log2 where the base is 2"),
    ("ld", "write log2"),
    ("lb", "write log2"),
    ("ln1p", "write log1p"),
    ("log1", "write log1p"),
    ("abs", "write fabs"),
    ("sgn", "give each interval its own formula"),
    ("sign", "give each interval its own formula"),
    ("max", "give each interval its own formula"),
    ("min", "give each interval its own formula"),
    ("fmax", "give each interval its own formula"),
    ("fmin", "give each interval its own formula"),
    ("power", "write pow"),
    ("root", "write pow(a, 1/n)"),
    ("rsqrt", "write 1/sqrt(a)"),
    ("exp10", "write pow(10, a)"),
    ("pow10", "write pow(10, a)"),
    ("hypot", "write sqrt(a*a + b*b)"),
    ("sinpi", "write sin(pi*a)"),
    ("cospi", "write cos(pi*a)"),
    ("tanpi", "write tan(pi*a)"),
    ("tg", "write tan"),
    ("cot", "write 1/tan(a)"),
    ("ctg", "write 1/tan(a)"),
    ("sec", "write 1/cos(a)"),
    ("csc", "write 1/sin(a)"),
    ("arcsin", "write asin"),
    ("arccos", "write acos"),
    ("arctan", "write atan"),
    ("arctg", "write atan"),
    ("arcsinh", "write asinh"),
    ("arccosh", "write acosh"),
    ("arctanh", "write atanh"),
    ("arsinh", "write asinh"),
    ("arcosh", "write acosh"),
    ("artanh", "write atanh"),
    ("sh", "write sinh"),
    ("ch", "write cosh"),
    ("th", "write tanh"),
];

/// Numbers from elsewhere, by their names in `<math.h>`, Rust and mathematics.
const NUMBERS_ELSEWHERE: [(&str, &str); 20] = [
    ("X", "write x"),
    ("PI", "write pi"),
    ("Pi", "write pi"),
    ("E", "write e"),
    ("TAU", "write 2*pi"),
    ("tau", "write 2*pi"),
    ("M_PI_2", "write pi/2"),
    ("M_PI_4", "write pi/4"),
    ("M_1_PI", "write 1/pi"),
    ("M_2_PI", "write 2/pi"),
    ("M_2_SQRTPI", "write 2/sqrt(pi)"),
    ("M_SQRT2", "write sqrt(2)"),
    ("M_SQRT1_2", "write sqrt(1/2)"),
    ("M_LN2", "write log(2)"),
    ("M_LN10", "write log(10)"),
    ("M_LOG2E", "write 1/log(2)"),
    ("M_LOG10E", "write 1/log(10)"),
    ("nan", "write a real number"),
    ("inf", "write a real number"),
    ("infinity", "write a real number"),
];

/// Names longer than this are not compared with the known ones.
const COMPARED_LENGTH: usize = 32;

/// Advice about a name before parentheses that no function has.
pub(super) fn advise_function(name: &str) -> Option<String> {
    if predefined(name).is_some() {
        return Some("write * for a product".into());
    }
    let elsewhere = ELSEWHERE.into_iter().find(|(other, _)| *other == name);
    if let Some((_, advice)) = elsewhere {
        return Some(advice.into());
    }
    // The variants for float and long double; all arithmetic is real here.
    let plain = name.strip_suffix(['f', 'l']).and_then(Callable::from_name);
    if let Some(plain) = plain {
        return Some(format!("write {}", plain.name()));
    }
    let lower = name.to_ascii_lowercase();
    if let Some((_, advice)) = ELSEWHERE.into_iter().find(|(other, _)| *other == lower) {
        return Some(advice.into());
    }
    nearest(name, all_callables().map(Callable::name))
}

/// Advice about a name that no number has; `known` are the names that the user has defined.
pub(super) fn advise_number<'a>(
    name: &str,
    known: impl Iterator<Item = &'a str>,
) -> Option<String> {
    if let Some((_, advice)) = NUMBERS_ELSEWHERE
        .into_iter()
        .find(|(other, _)| *other == name)
    {
        return Some(advice.into());
    }
    if let Some((_, advice)) = ELSEWHERE.into_iter().find(|(other, _)| *other == name) {
        return Some(advice.into());
    }
    let predefined = PREDEFINED
        .into_iter()
        .map(|(name, _)| name)
        .filter(|name| name.len() > 1);
    nearest(name, known.chain(predefined))
}

/// The known name that one or (from five letters on) two changes of a letter reach; the first one
/// of the nearest.
fn nearest<'a>(name: &str, known: impl Iterator<Item = &'a str>) -> Option<String> {
    if name.len() > COMPARED_LENGTH {
        return None;
    }
    let allowed = if name.len() < 5 { 1 } else { 2 };
    known
        .filter(|other| other.len() <= COMPARED_LENGTH)
        .map(|other| {
            (
                edit_distance(&name.to_ascii_lowercase(), &other.to_ascii_lowercase()),
                other,
            )
        })
        .filter(|&(distance, other)| distance <= allowed && distance < other.len())
        .min_by_key(|&(distance, _)| distance)
        .map(|(_, other)| format!("write {other} if that is meant"))
}

/// The number of letters inserted, left out, replaced, or exchanged with their neighbour (optimal
/// string alignment distance).
fn edit_distance(from: &str, to: &str) -> usize {
    let (from, to) = (from.as_bytes(), to.as_bytes());
    let mut before = Vec::new();
    let mut above: Vec<usize> = (0..=to.len()).collect();
    for i in 1..=from.len() {
        let mut row = vec![i];
        for j in 1..=to.len() {
            let replaced = above[j - 1] + usize::from(from[i - 1] != to[j - 1]);
            let mut distance = replaced.min(above[j] + 1).min(row[j - 1] + 1);
            if i > 1 && j > 1 && from[i - 1] == to[j - 2] && from[i - 2] == to[j - 1] {
                let exchanged: &Vec<usize> = &before;
                distance = distance.min(exchanged[j - 2] + 1);
            }
            row.push(distance);
        }
        before = std::mem::replace(&mut above, row);
    }
    above[to.len()]
}
