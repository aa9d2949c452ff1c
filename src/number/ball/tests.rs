use super::*;

#[test]
fn exact_values_stay_exact() {
    let zero = Ball::zero(64);
    let one = Ball::one(64);
    for value in [
        zero.sin(),
        zero.tan().unwrap(),
        zero.asin().unwrap(),
        zero.atan(),
        zero.sinh(),
        zero.tanh(),
        zero.asinh(),
        zero.atanh().unwrap(),
        zero.erf(),
        zero.expm1(),
        zero.cbrt(),
        zero.sqrt().unwrap(),
        zero.log1p().unwrap(),
        zero.sin_cos().0,
        one.log().unwrap(),
        one.log2().unwrap(),
        one.log10().unwrap(),
        one.acos().unwrap(),
        one.acosh().unwrap(),
        zero.pow_integer(3).unwrap(),
        zero.pow_rational(&Rational::from((1, 3))).unwrap(),
        one.mul_integer(0),
        one.sub(&one),
        zero.mul(&Ball::whole(64)),
    ] {
        assert!(value.is_exact_zero(), "{value:?}");
    }
    for value in [
        zero.cos(),
        zero.sin_cos().1,
        zero.exp(),
        zero.exp2(),
        zero.cosh(),
        zero.erfc(),
        zero.pow_integer(0).unwrap(),
        one.cbrt(),
        one.pow_rational(&Rational::from((-7, 300))).unwrap(),
    ] {
        assert!(value.is_exact() && *value.midpoint() == 1, "{value:?}");
    }
    let eight = Ball::from_i64(8, 64);
    let quarter = eight.pow_rational(&Rational::from((-2, 3))).unwrap();
    assert!(quarter.is_exact() && *quarter.midpoint() == 0.25);
    assert!(Ball::from_i64(1000, 64).log10().unwrap().is_exact());
}
