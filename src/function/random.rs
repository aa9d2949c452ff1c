//! Random formulas for tests.

use proptest::prelude::*;

/// Texts of formulas of moderate depth with every operation and function.
pub(super) fn formula_text() -> impl Strategy<Value = String> {
    let leaf = prop_oneof![
        4 => Just("x".to_owned()),
        2 => prop::sample::select(vec!["1", "2", "3", "0.5", "-1", "1/3", "pi", "0"])
            .prop_map(str::to_owned),
    ];
    leaf.prop_recursive(4, 12, 2, |inner| {
        let functions = vec![
            "sqrt", "cbrt", "exp", "exp2", "expm1", "log", "log2", "log10", "log1p", "sin", "cos",
            "tan", "asin", "acos", "atan", "sinh", "cosh", "tanh", "asinh", "acosh", "atanh",
            "erf", "erfc", "fabs", "-",
        ];
        let exponents = vec!["2", "3", "-1", "-2", "0.5", "1.5", "-1/3", "x"];
        prop_oneof![
            4 => (prop::sample::select(functions), inner.clone())
                .prop_map(|(function, operand)| format!("{function}({operand})")),
            1 => (inner.clone(), prop::sample::select(exponents))
                .prop_map(|(base, exponent)| format!("pow({base},{exponent})")),
            4 => (inner.clone(), prop::sample::select(vec!["+", "-", "*", "/"]), inner)
                .prop_map(|(left, operator, right)| format!("({left}){operator}({right})")),
        ]
    })
}
