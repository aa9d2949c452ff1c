//! Comparison with values of another implementation, see tests/data/make_complex_values.py.

use super::*;

type Function = fn(&Rectangle) -> Option<Rectangle>;

/// Each function, and how many times wider than the image of a small square its enclosure may be. The
/// error function is not enclosed with an accuracy that rises without end.
const FUNCTIONS: [(&str, Function, Option<f64>); 29] = [
    ("exp", |z| Some(z.exp()), Some(2.0)),
    ("exp2", |z| Some(z.exp2()), Some(2.0)),
    ("expm1", |z| Some(z.expm1()), Some(2.0)),
    ("log", Rectangle::log, Some(2.0)),
    ("log2", Rectangle::log2, Some(2.0)),
    ("log10", Rectangle::log10, Some(2.0)),
    ("log1p", Rectangle::log1p, Some(2.0)),
    ("sqrt", Rectangle::sqrt, Some(2.0)),
    ("cbrt", Rectangle::cbrt, Some(2.0)),
    ("sin", |z| Some(z.sin()), Some(2.0)),
    ("cos", |z| Some(z.cos()), Some(2.0)),
    ("tan", Rectangle::tan, Some(2.0)),
    ("sinh", |z| Some(z.sinh()), Some(2.0)),
    ("cosh", |z| Some(z.cosh()), Some(2.0)),
    ("tanh", Rectangle::tanh, Some(2.0)),
    ("asin", Rectangle::asin, Some(2.0)),
    ("acos", Rectangle::acos, Some(2.0)),
    ("atan", Rectangle::atan, Some(3.0)),
    ("asinh", Rectangle::asinh, Some(2.0)),
    ("acosh", Rectangle::acosh, Some(2.0)),
    ("atanh", Rectangle::atanh, Some(3.0)),
    ("erf", |z| Some(z.erf()), None),
    ("erfc", |z| Some(z.erfc()), None),
    ("pow -3", |z| z.pow_integer(-3), Some(2.0)),
    ("pow -1", |z| z.pow_integer(-1), Some(2.0)),
    ("pow 2", |z| z.pow_integer(2), Some(2.0)),
    ("pow 5", |z| z.pow_integer(5), Some(2.0)),
    (
        "pow -1/3",
        |z| z.pow_rational(&Rational::from((-1, 3))),
        Some(2.0),
    ),
    (
        "pow 5/2",
        |z| z.pow_rational(&Rational::from((5, 2))),
        Some(2.0),
    ),
];

/// Bits of the values in the file; their last digit is uncertain.
const PRECISION: u32 = 120;

struct Row {
    point: [Float; 2],
    value: [Float; 2],
    slope: f64,
}

fn rows() -> Vec<(Function, Option<f64>, &'static str, Vec<Row>)> {
    let text = include_str!("../../../../tests/data/complex_values.json");
    let file: Value = serde_json::from_str(text).unwrap();
    let number = |value: &Value, precision: u32| {
        let parsed = Float::parse(value.as_str().unwrap()).unwrap();
        Float::with_val(precision, parsed)
    };
    let row = |row: &Value| Row {
        // The shortest decimals of doubles.
        point: [number(&row[0], 53), number(&row[1], 53)],
        value: [number(&row[2], PRECISION), number(&row[3], PRECISION)],
        slope: number(&row[4], 53).to_f64(),
    };
    let values = file["values"].as_object().unwrap();
    assert_eq!(values.len(), FUNCTIONS.len());
    FUNCTIONS
        .iter()
        .map(|&(name, function, factor)| {
            let rows = values[name].as_array().unwrap().iter().map(row).collect();
            (function, factor, name, rows)
        })
        .collect()
}

/// The square around a point with sides 2 * half, cut down to an exact point for half = 0.
fn square(point: &[Float; 2], half: f64, precision: u32) -> Rectangle {
    let side = |x: &Float| {
        WideInterval::new(
            Float::with_val_round(precision, x - half, Round::Down).0,
            Float::with_val_round(precision, x + half, Round::Up).0,
        )
    };
    Rectangle::new(side(&point[0]), side(&point[1]))
}

fn holds(enclosure: &Rectangle, value: &[Float; 2]) -> bool {
    let slack = Float::with_val(PRECISION, 1e-29);
    [
        (&enclosure.real, &value[0]),
        (&enclosure.imaginary, &value[1]),
    ]
    .iter()
    .all(|(side, value)| {
        let slack = Float::with_val(PRECISION, value.abs_ref()) * &slack;
        *side.lower() <= Float::with_val(PRECISION, *value + &slack)
            && *side.upper() >= Float::with_val(PRECISION, *value - &slack)
    })
}

/// Every enclosure of a point and of rectangles around and beside it holds the value.
#[test]
fn enclosures_hold_independent_values() {
    for (function, _, name, rows) in rows() {
        let mut evaluated = 0;
        for row in &rows {
            // The points have no more than 7 bits; at so few a wrong direction of rounding shows.
            for precision in [7, 8, 11, 53, 64, 90] {
                let Some(exact) = function(&square(&row.point, 0.0, precision)) else {
                    assert!(precision < 53, "{name} {:?}", row.point);
                    continue;
                };
                assert!(
                    holds(&exact, &row.value),
                    "{name} {:?} {exact:?}",
                    row.point
                );
            }
            for half in [1e-9, 1e-3, 0.0625, 0.5, 2.0] {
                let around = square(&row.point, half, 53);
                let real = |from: f64, to: f64| {
                    let x = &row.point[0];
                    WideInterval::new(
                        Float::with_val_round(53, x - from * half, Round::Down).0,
                        Float::with_val_round(53, x + to * half, Round::Up).0,
                    )
                };
                let beside = [
                    Rectangle::new(real(0.0, 1.0), around.imaginary.clone()),
                    Rectangle::new(real(3.0, 0.0), square(&row.point, half / 8.0, 53).imaginary),
                ];
                for set in beside.iter().chain([&around]) {
                    // Where the cube root changes its meaning, the value is another one.
                    if name == "cbrt" && set.real.contains_zero() {
                        continue;
                    }
                    if let Some(result) = function(set) {
                        evaluated += 1;
                        assert!(holds(&result, &row.value), "{name} {set:?} {result:?}");
                    }
                }
            }
        }
        assert!(evaluated > 5 * rows.len(), "{name}");
    }
}

/// The image of a square with half side h is contained in a square with half side sqrt(2) h |f'|, up
/// to second order; a point has an enclosure of a few units in the last place.
#[test]
fn enclosures_are_tight() {
    for (function, factor, name, rows) in rows() {
        let Some(factor) = factor else { continue };
        let mut worst = (0.0f64, 0.0f64);
        for row in &rows {
            let size = row.point[0].to_f64().hypot(row.point[1].to_f64());
            let value = row.value[0].to_f64().hypot(row.value[1].to_f64());
            let half = 2f64.powi(-30) * size;
            let Some(result) = function(&square(&row.point, half, 90)) else {
                continue;
            };
            let width = result.real.width().max(&result.imaginary.width()).to_f64();
            let ratio = width / (2.0 * 2f64.sqrt() * half * row.slope + 2f64.powi(-55) * value);
            worst.0 = worst.0.max(ratio);
            let exact = function(&square(&row.point, 0.0, 90)).unwrap();
            let width = exact.real.width().max(&exact.imaginary.width()).to_f64();
            worst.1 = worst
                .1
                .max(width / (2f64.powi(-90) * (value + size * row.slope)));
        }
        assert!(worst.0 <= factor, "{name}: {} times the image", worst.0);
        assert!(worst.1 <= 32.0, "{name}: {} units", worst.1);
    }
}

/// The modulus of the error functions is bounded within a factor of 2 sqrt(2).
#[test]
fn error_functions_are_bounded_closely() {
    for (function, _, name, rows) in rows().into_iter().filter(|row| row.1.is_none()) {
        for row in &rows {
            let bound = function(&square(&row.point, 0.0, 64)).unwrap().magnitude();
            let value = row.value[0].clone().hypot(&row.value[1]);
            let ratio = bound.to_float_upper(53) / value;
            assert!(ratio < 2.83, "{name} {:?} {ratio}", row.point);
        }
    }
}

/// Far to the right the complement keeps its relative accuracy, down to e^(-10^4).
#[test]
fn complement_is_relatively_accurate_on_the_right() {
    for (x, y, width, limit) in [
        (20.0, 0.5, 0.0, 1e-6),
        (100.0, 2.0, 0.0, 1e-9),
        (100.0, 0.0, 1e-6, 1e-3),
    ] {
        let side = |x: f64| {
            WideInterval::new(
                Float::with_val(64, x - width),
                Float::with_val(64, x + width),
            )
        };
        let value = Rectangle::new(side(x), side(y)).erfc();
        assert!(!value.contains_zero());
        let width = value.real.width().max(&value.imaginary.width());
        assert!(width / value.magnitude().to_float_upper(53) < limit);
        let logarithm = value.log().map(|value| value.real.midpoint().to_f64());
        // log|erfc z| is about -Re z^2 - log(|z| sqrt(pi)).
        let expected = y * y - x * x - (x.hypot(y) * std::f64::consts::PI.sqrt()).ln();
        assert!(logarithm.is_some_and(|found| (found - expected).abs() < 1e-2));
    }
}
