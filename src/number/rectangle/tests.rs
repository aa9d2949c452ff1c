use proptest::prelude::*;
use rug::Rational;
use serde_json::Value;

use super::*;

mod independent;

fn interval(a: f64, b: f64) -> WideInterval {
    WideInterval::new(Float::with_val(53, a), Float::with_val(53, b))
}

fn rectangle(real: [f64; 2], imaginary: [f64; 2]) -> Rectangle {
    Rectangle::new(
        interval(real[0], real[1]),
        interval(imaginary[0], imaginary[1]),
    )
}

fn side() -> impl Strategy<Value = [f64; 2]> {
    let number = || {
        prop_oneof![
            3 => -4.0f64..4.0,
            1 => prop::sample::select(vec![-2.0, -1.0, 0.0, 1.0, 2.0]),
        ]
    };
    let narrow = (number(), 0.0f64..1.0, -40i32..1).prop_map(|(x, w, e)| [x, x + w * 2f64.powi(e)]);
    prop_oneof![
        (number(), number()).prop_map(|(a, b)| [a.min(b), a.max(b)]),
        narrow
    ]
}

fn any_rectangle() -> impl Strategy<Value = Rectangle> {
    (side(), side()).prop_map(|(real, imaginary)| rectangle(real, imaginary))
}

/// A place in a side; the ends are where roundings show.
fn share() -> impl Strategy<Value = f64> {
    prop_oneof![Just(0.0), Just(1.0), 0.0f64..1.0]
}

type Exact = [Rational; 2];

/// A point of the rectangle, exactly.
fn point_of(z: &Rectangle, shares: [f64; 2]) -> Exact {
    let at = |x: &WideInterval, share: f64| {
        let (a, b) = (
            x.lower().to_rational().unwrap(),
            x.upper().to_rational().unwrap(),
        );
        let share = Rational::from_f64(share).unwrap();
        Rational::from(&b - &a) * share + a
    };
    [at(&z.real, shares[0]), at(&z.imaginary, shares[1])]
}

fn holds(z: &Rectangle, value: &Exact) -> bool {
    z.real.contains_rational(&value[0]) && z.imaginary.contains_rational(&value[1])
}

fn product(a: &Exact, b: &Exact) -> Exact {
    [
        Rational::from(&a[0] * &b[0]) - Rational::from(&a[1] * &b[1]),
        Rational::from(&a[0] * &b[1]) + Rational::from(&a[1] * &b[0]),
    ]
}

fn reciprocal(a: &Exact) -> Exact {
    let square = Rational::from(a[0].square_ref()) + Rational::from(a[1].square_ref());
    [
        Rational::from(&a[0] / &square),
        -Rational::from(&a[1] / &square),
    ]
}

fn is_zero(a: &Exact) -> bool {
    a[0].is_zero() && a[1].is_zero()
}

proptest! {
    #[test]
    fn field_operations_hold_their_values(
        z in any_rectangle(),
        w in any_rectangle(),
        shares in [share(), share(), share(), share()],
    ) {
        let a = point_of(&z, [shares[0], shares[1]]);
        let b = point_of(&w, [shares[2], shares[3]]);
        let sum = [Rational::from(&a[0] + &b[0]), Rational::from(&a[1] + &b[1])];
        let difference = [Rational::from(&a[0] - &b[0]), Rational::from(&a[1] - &b[1])];
        prop_assert!(holds(&z.add(&w), &sum));
        prop_assert!(holds(&z.sub(&w), &difference));
        prop_assert!(holds(&z.mul(&w), &product(&a, &b)));
        prop_assert!(holds(&z.square(), &product(&a, &a)));
        prop_assert!(holds(&z.scale(&w.real), &product(&a, &[b[0].clone(), Rational::new()])));
        let quotient = z.div(&w);
        prop_assert_eq!(quotient.is_none(), w.contains_zero());
        if let Some(quotient) = quotient {
            prop_assert!(holds(&quotient, &product(&a, &reciprocal(&b))), "{:?} {:?}", z, w);
        }
        for n in [-4, -3, -1, 0, 1, 3, 6] {
            let mut power = [Rational::from(1), Rational::new()];
            for _ in 0..i32::abs(n) {
                power = product(&power, &a);
            }
            if n < 0 && !is_zero(&power) {
                power = reciprocal(&power);
            }
            let result = z.pow_integer(n);
            prop_assert!(n < 0 || result.is_some());
            prop_assert!(n >= 0 || !z.contains_zero() || result.is_none());
            if let Some(result) = result {
                prop_assert!(holds(&result, &power), "{:?} {}", z, n);
            }
        }
    }

    /// The reciprocal is the smallest rectangle: its ends are values on the boundary, which a walk
    /// along it finds, where |x| = |y| and where an axis is crossed in particular.
    #[test]
    fn reciprocals_are_tight(z in any_rectangle()) {
        let Some(result) = z.reciprocal() else { return Ok(()) };
        let mut extremes = [f64::INFINITY, f64::NEG_INFINITY, f64::INFINITY, f64::NEG_INFINITY];
        let ends = |x: &WideInterval| [x.lower().to_f64(), x.upper().to_f64()];
        let (x, y) = (ends(&z.real), ends(&z.imaginary));
        let mut visit = |x: f64, y: f64| {
            let square = x * x + y * y;
            let (re, im) = (x / square, -y / square);
            extremes[0] = extremes[0].min(re);
            extremes[1] = extremes[1].max(re);
            extremes[2] = extremes[2].min(im);
            extremes[3] = extremes[3].max(im);
        };
        for k in 0..=2000 {
            let share = f64::from(k) / 2000.0;
            let (p, q) = (x[0] + share * (x[1] - x[0]), y[0] + share * (y[1] - y[0]));
            visit(p, y[0]);
            visit(p, y[1]);
            visit(x[0], q);
            visit(x[1], q);
        }
        for a in x {
            for b in y {
                for q in [a, -a, 0.0] {
                    visit(a, q.clamp(y[0], y[1]));
                }
                for p in [b, -b, 0.0] {
                    visit(p.clamp(x[0], x[1]), b);
                }
            }
        }
        let slack = 1e-5 * result.magnitude().to_f64_upper();
        prop_assert!(result.real.lower().to_f64() >= extremes[0] - slack);
        prop_assert!(result.real.upper().to_f64() <= extremes[1] + slack);
        prop_assert!(result.imaginary.lower().to_f64() >= extremes[2] - slack);
        prop_assert!(result.imaginary.upper().to_f64() <= extremes[3] + slack);
    }

    #[test]
    fn magnitudes_are_upper_bounds(z in any_rectangle(), shares in [share(), share()]) {
        let point = point_of(&z, shares);
        let square = Rational::from(point[0].square_ref()) + Rational::from(point[1].square_ref());
        let bound = z.magnitude().to_float_upper(53).to_rational().unwrap();
        prop_assert!(Rational::from(bound.square_ref()) >= square);
    }

    /// A function of a part of the rectangle lies in the function of the whole, up to rounding.
    #[test]
    fn turned_branches_are_the_principal_ones_continued(z in any_rectangle(), turns in -9i64..9) {
        // Re > 0 after the rotation back.
        let base = Rectangle::new(z.real.abs().add(&interval(0.5, 0.5)), z.imaginary.clone());
        let turned = base.turned(turns);
        let angle = f64::from(i32::try_from(turns).unwrap()) * std::f64::consts::FRAC_PI_2;
        let (plain, logarithm) = (base.log().unwrap(), turned.log_turned(turns).unwrap());
        prop_assert!(logarithm.real.hull(&plain.real).width() <= plain.real.width() + 1e-12);
        let expected = plain.imaginary.midpoint().to_f64() + angle;
        prop_assert!((logarithm.imaginary.midpoint().to_f64() - expected).abs() < 1e-12);
        // The square root by its own formula against half the logarithm.
        let root = turned.sqrt_turned(turns).unwrap();
        let half = turned.pow_rational_turned(&Rational::from((1, 2)), turns).unwrap();
        prop_assert!(root.overlaps(&half), "{:?} {} {:?} {:?}", base, turns, root, half);
        prop_assert!(root.magnitude() <= half.magnitude().mul(Radius::from_f64_upper(1.0 + 1e-9)));
        // Squared, it is the rectangle again.
        prop_assert!(root.square().overlaps(&turned));
    }
}

/// Rectangles that touch a cut are refused, those beside it are not.
#[test]
fn cuts_are_refused() {
    type Function = fn(&Rectangle) -> Option<Rectangle>;
    let negative: [Function; 6] = [
        Rectangle::log,
        Rectangle::sqrt,
        Rectangle::log2,
        Rectangle::log10,
        |z| z.pow_rational(&Rational::from((1, 3))),
        |z| z.sub(&rectangle([1.0, 1.0], [0.0, 0.0])).log1p(),
    ];
    for f in negative {
        assert!(f(&rectangle([-2.0, -1.0], [0.0, 1.0])).is_none());
        assert!(f(&rectangle([-2.0, 0.0], [-1.0, 1.0])).is_none());
        assert!(f(&rectangle([-2.0, 5.0], [-1.0, 0.0])).is_none());
        assert!(f(&rectangle([-2.0, -1.0], [0.125, 1.0])).is_some());
        assert!(f(&rectangle([-2.0, 5.0], [-1.0, -0.125])).is_some());
        assert!(f(&rectangle([0.125, 5.0], [-1.0, 1.0])).is_some());
    }
    let outer: [Function; 3] = [Rectangle::asin, Rectangle::acos, Rectangle::atanh];
    let outer_turned: [Function; 2] = [|z| z.turned(1).atan(), |z| z.turned(1).asinh()];
    for f in outer.into_iter().chain(outer_turned) {
        for sign in [1.0, -1.0] {
            let z = |real: [f64; 2], imaginary| {
                let z = rectangle(real, imaginary);
                if sign < 0.0 { z.neg() } else { z }
            };
            assert!(f(&z([0.0, 1.0], [-1.0, 1.0])).is_none());
            assert!(f(&z([2.0, 3.0], [0.0, 1.0])).is_none());
            assert!(f(&z([2.0, 3.0], [0.125, 1.0])).is_some());
            assert!(f(&z([-0.5, 3.0], [-1.0, -0.125])).is_some());
            assert!(f(&z([-0.5, 0.875], [-1.0, 1.0])).is_some());
        }
    }
    assert!(rectangle([0.0, 1.0], [0.0, 1.0]).acosh().is_none());
    assert!(rectangle([-3.0, -2.0], [0.0, 1.0]).acosh().is_none());
    assert!(rectangle([-3.0, 2.0], [0.125, 1.0]).acosh().is_some());
    assert!(rectangle([1.125, 2.0], [-1.0, 1.0]).acosh().is_some());
    // Poles of the tangent.
    assert!(rectangle([1.5, 1.625], [0.0, 1.0]).tan().is_none());
    assert!(rectangle([1.5, 1.625], [0.125, 1.0]).tan().is_some());
    assert!(rectangle([0.0, 1.0], [1.5, 1.625]).tanh().is_none());
    assert!(rectangle([0.0, 0.0], [0.0, 0.0]).reciprocal().is_none());
}

#[test]
fn unbounded_rectangles_do_no_harm() {
    let infinity = f64::INFINITY;
    let unbounded = [
        rectangle([1.0, infinity], [-1.0, 1.0]),
        rectangle([-infinity, infinity], [1.0, infinity]),
        rectangle([-infinity, infinity], [-infinity, infinity]),
    ];
    type Function = fn(&Rectangle) -> Option<Rectangle>;
    let functions: [Function; 22] = [
        |z| Some(z.square()),
        |z| z.reciprocal(),
        |z| z.pow_integer(5),
        |z| Some(z.exp()),
        |z| Some(z.exp2()),
        |z| Some(z.expm1()),
        Rectangle::log,
        Rectangle::log1p,
        Rectangle::sqrt,
        Rectangle::cbrt,
        |z| Some(z.sin()),
        |z| Some(z.cos()),
        Rectangle::tan,
        Rectangle::tanh,
        Rectangle::asin,
        Rectangle::acosh,
        Rectangle::atan,
        Rectangle::atanh,
        |z| Some(z.erf()),
        |z| Some(z.erfc()),
        |z| z.sqrt_turned(i64::MIN),
        |z| z.log_turned(i64::MAX),
    ];
    // 3 + 2i lies in all of them but the first: values there must be inside.
    let point = rectangle([3.0, 3.0], [1.0, 1.0]);
    for z in &unbounded {
        for (position, f) in functions.iter().enumerate() {
            if let (Some(wide), Some(narrow)) = (f(z), f(&point)) {
                assert!(wide.overlaps(&narrow), "{position} {z:?}");
            }
        }
    }
}
