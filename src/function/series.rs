//! temporary
use rug::{Float, Rational};
use crate::function::exact::{Centre, Exact, leading_coefficients};
use crate::function::formula::{Formula, Function, Operation};
use crate::function::refusal::{Refusal, RefusalKind};
use crate::number::ball::Ball;

type S = Vec<Ball>;
fn z(p: u32) -> Ball { Ball::zero(p) }
fn mul(a: &S, b: &S, p: u32) -> S {
    let n = a.len().min(b.len());
    (0..n).map(|k| { let mut s = z(p); for j in 0..=k { if !a[j].is_exact_zero() && !b[k-j].is_exact_zero() { s.add_product(&a[j], &b[k-j]); } } s }).collect()
}
fn div(a: &S, b: &S, p: u32) -> Option<S> {
    let n = a.len().min(b.len());
    let mut q: S = vec![];
    for k in 0..n { let mut s = a[k].clone(); for j in 1..=k { if !b[j].is_exact_zero() { s = s.sub(&b[j].mul(&q[k-j])); } } q.push(s.div(&b[0])?); let _ = p; }
    Some(q)
}
fn deriv(a: &S) -> S { (1..a.len()).map(|k| a[k].mul_integer(k as i64)).collect() }
fn integ(d: &S, v: Ball, n: usize) -> S { let mut r = vec![v]; for k in 1..n { r.push(d[k-1].div_integer(k as u64)); } r }
fn exp(u: &S, v: Ball, p: u32) -> S {
    let d = deriv(u); let mut y = vec![v];
    for k in 1..u.len() { let mut s = z(p); for j in 0..k { s.add_product(&d[j], &y[k-1-j]); } y.push(s.div_integer(k as u64)); } y
}
fn rot(u: &S, s0: Ball, c0: Ball, circ: bool, p: u32) -> (S, S) {
    let d = deriv(u); let (mut s, mut c) = (vec![s0], vec![c0]);
    for k in 1..u.len() { let (mut a, mut b) = (z(p), z(p)); for j in 0..k { a.add_product(&d[j], &c[k-1-j]); b.add_product(&d[j], &s[k-1-j]); }
        s.push(a.div_integer(k as u64)); let b = b.div_integer(k as u64); c.push(if circ { b.neg() } else { b }); } (s, c)
}
fn powr(u: &S, q: &Rational, v: Ball, p: u32) -> Option<S> {
    let mut y = vec![v];
    for k in 1..u.len() { let mut s = z(p);
        for j in 1..=k { if u[j].is_exact_zero() { continue; } let w = Rational::from(q * Rational::from(j)) - Rational::from(k - j); s.add_product(&Ball::from_rational(&w, p).mul(&u[j]), &y[k-j]); }
        y.push(s.div_integer(k as u64).div(&u[0])?); }
    Some(y)
}
fn log(u: &S, v: Ball, p: u32) -> Option<S> { let n = u.len(); if n == 1 { return Some(vec![v]); } let t: S = u[..n-1].to_vec(); let d = div(&deriv(u), &t, p)?; Some(integ(&d, v, n)) }

pub fn series(formula: &Formula, centre: &Centre, scale: &Float, terms: usize, precision: u32) -> Result<Vec<Ball>, Refusal> {
    let mut extra = 0;
    loop {
        let r = run(formula, centre, scale, terms + extra, precision)?;
        if r.len() >= terms { let mut r = r; r.truncate(terms); return Ok(r); }
        extra += terms - r.len();
        if extra > 64 { return Err(Refusal { node: formula.root(), kind: RefusalKind::DivisionByZero, proved: false }); }
    }
}
fn run(formula: &Formula, centre: &Centre, scale: &Float, n: usize, p: u32) -> Result<Vec<Ball>, Refusal> {
    let mut v: Vec<S> = vec![];
    let mut lead: Option<Vec<Vec<Option<Exact>>>> = None;
    for (node, op) in formula.operations().iter().enumerate() {
        let no = |kind| Refusal { node, kind, proved: false };
        let konst = |b: Ball| { let mut s = vec![z(p); n]; s[0] = b; s };
        let r: S = match op {
            Operation::Variable => { let mut s = konst(centre.ball(p)); if n > 1 { s[1] = Ball::from_float(scale.clone()).with_precision(p); } s }
            Operation::Rational(x) => konst(Ball::from_rational(x, p)),
            Operation::Pi => konst(Ball::pi(p)),
            Operation::Negate(a) => v[*a].iter().map(Ball::neg).collect(),
            Operation::Add(a, b) => v[*a].iter().zip(&v[*b]).map(|(x, y)| x.add(y)).collect(),
            Operation::Subtract(a, b) => v[*a].iter().zip(&v[*b]).map(|(x, y)| x.sub(y)).collect(),
            Operation::Multiply(a, b) => mul(&v[*a], &v[*b], p),
            Operation::Divide(a, b) => {
                if v[*b][0].contains_zero() {
                    let l = lead.get_or_insert_with(|| leading_coefficients(formula, centre, 8));
                    let cnt = |k: usize| l[k].iter().take_while(|c| c.as_ref().is_some_and(|e| e.is_zero())).count();
                    let k = cnt(*b);
                    if k == 0 || cnt(*a) < k || v[*a].len() <= k || v[*b].len() <= k { if k > 0 && cnt(*a) >= k { vec![] } else { return Err(Refusal { node, kind: RefusalKind::DivisionByZero, proved: k > 0 && n > k && !v[*a][0].contains_zero() }); } }
                    else { div(&v[*a][k..].to_vec(), &v[*b][k..].to_vec(), p).ok_or(no(RefusalKind::DivisionByZero))? }
                } else { div(&v[*a], &v[*b], p).ok_or(no(RefusalKind::DivisionByZero))? }
            }
            Operation::PowerInteger(a, e) => {
                let mut r = konst(Ball::one(p)); r.truncate(v[*a].len()); let mut m = e.unsigned_abs(); let mut s = v[*a].clone();
                while m > 0 { if m & 1 == 1 { r = mul(&r, &s, p); } m >>= 1; if m > 0 { s = mul(&s, &s, p); } }
                if *e < 0 { let one = konst(Ball::one(p)); div(&one, &r, p).ok_or(no(RefusalKind::DivisionByZero))? } else { r }
            }
            Operation::PowerRational(a, q) => { let u = &v[*a]; let v0 = u[0].pow_rational(q).ok_or(Refusal { node, kind: RefusalKind::OutsideDomain, proved: u[0].is_negative() })?; powr(u, q, v0, p).ok_or(no(RefusalKind::NotAnalytic))? }
            Operation::Power(a, b) => { let u = &v[*a]; let l = log(u, u[0].log().ok_or(Refusal { node, kind: RefusalKind::OutsideDomain, proved: u[0].is_negative() })?, p).ok_or(no(RefusalKind::NotAnalytic))?; let w = mul(&l, &v[*b], p); let e0 = w[0].exp(); exp(&w, e0, p) }
            Operation::Apply(f, a) => {
                let u = v[*a].clone(); if u.is_empty() { v.push(u); continue; }
                let u0 = u[0].clone();
                let one = { let mut o = konst(Ball::one(p)); o.truncate(u.len()); o };
                let addn = |x: &S, y: &S| -> S { x.iter().zip(y).map(|(a, b)| a.add(b)).collect() };
                let subn = |x: &S, y: &S| -> S { x.iter().zip(y).map(|(a, b)| a.sub(b)).collect() };
                let out = || Refusal { node, kind: RefusalKind::OutsideDomain, proved: match f { Function::Log | Function::Log2 | Function::Log10 => u0.is_negative() || u0.is_exact_zero(), Function::Sqrt => u0.is_negative(), Function::Asin | Function::Acos => u0.lower() > 1 || u0.upper() < -1, Function::Acosh => u0.upper() < 1, Function::Log1p => u0.upper() <= -1, Function::Atanh => u0.lower() >= 1 || u0.upper() <= -1, _ => false } };
                let half = |s: i32| Rational::from((s, 2));
                let chain = |d: Option<S>, v0: Ball| -> Result<S, Refusal> { if u.len() == 1 { return Ok(vec![v0]); } let d = d.ok_or(no(RefusalKind::NotAnalytic))?; Ok(integ(&mul(&deriv(&u), &d, p), v0, u.len())) };
                let ipow = |x: &S, q: Rational| -> Option<S> { if x.len() == 1 { return Some(x.clone()); } let x0 = x[0].pow_rational(&q)?; powr(x, &q, x0, p) };
                match f {
                    Function::Exp => exp(&u, u0.exp(), p),
                    Function::Expm1 => { let mut r = exp(&u, u0.exp(), p); r[0] = u0.expm1(); r }
                    Function::Exp2 => { let l2 = Ball::from_i64(2, p).log().ok_or_else(out)?; let w: S = u.iter().map(|x| x.mul(&l2)).collect(); exp(&w, u0.exp2(), p) }
                    Function::Log => log(&u, u0.log().ok_or_else(out)?, p).ok_or(no(RefusalKind::NotAnalytic))?,
                    Function::Log2 | Function::Log10 => { let b = if *f == Function::Log2 { 2 } else { 10 }; let l = Ball::from_i64(b, p).log().ok_or_else(out)?; let v0 = if b == 2 { u0.log2() } else { u0.log10() }.ok_or_else(out)?; let r = log(&u, v0.clone(), p).ok_or(no(RefusalKind::NotAnalytic))?; let mut r: S = r.iter().map(|x| x.div(&l).unwrap_or_else(|| Ball::whole(p))).collect(); r[0] = v0; r }
                    Function::Log1p => log(&addn(&u, &one), u0.log1p().ok_or_else(out)?, p).ok_or(no(RefusalKind::NotAnalytic))?,
                    Function::Sin | Function::Cos => { let (s, c) = u0.sin_cos(); let (s, c) = rot(&u, s, c, true, p); if *f == Function::Sin { s } else { c } }
                    Function::Sinh | Function::Cosh => { let (s, c) = rot(&u, u0.sinh(), u0.cosh(), false, p); if *f == Function::Sinh { s } else { c } }
                    Function::Tan => { let (s, c) = u0.sin_cos(); let (s, c) = rot(&u, s, c, true, p); div(&s, &c, p).ok_or(no(RefusalKind::DivisionByZero))? }
                    Function::Tanh => { let (s, c) = rot(&u, u0.sinh(), u0.cosh(), false, p); div(&s, &c, p).ok_or(no(RefusalKind::DivisionByZero))? }
                    Function::Sqrt => { let v0 = u0.sqrt().ok_or_else(out)?; if u.len() == 1 { vec![v0] } else { powr(&u, &half(1), v0, p).ok_or(no(RefusalKind::NotAnalytic))? } }
                    Function::Cbrt => { if u.len() == 1 { vec![u0.cbrt()] } else { powr(&u, &Rational::from((1, 3)), u0.cbrt(), p).ok_or(no(RefusalKind::NotAnalytic))? } }
                    Function::Asin => chain(ipow(&subn(&one, &mul(&u, &u, p)), half(-1)), u0.asin().ok_or_else(out)?)?,
                    Function::Acos => { let r = chain(ipow(&subn(&one, &mul(&u, &u, p)), half(-1)), u0.acos().ok_or_else(out)?)?; r.iter().enumerate().map(|(k, b)| if k == 0 { b.clone() } else { b.neg() }).collect() }
                    Function::Atan => chain(div(&one, &addn(&one, &mul(&u, &u, p)), p), u0.atan())?,
                    Function::Asinh => chain(ipow(&addn(&one, &mul(&u, &u, p)), half(-1)), u0.asinh())?,
                    Function::Acosh => chain(ipow(&subn(&mul(&u, &u, p), &one), half(-1)), u0.acosh().ok_or_else(out)?)?,
                    Function::Atanh => chain(div(&one, &subn(&one, &mul(&u, &u, p)), p), u0.atanh().ok_or_else(out)?)?,
                    Function::Erf | Function::Erfc => { let w: S = mul(&u, &u, p).iter().map(Ball::neg).collect(); let e0 = w[0].exp(); let g = exp(&w, e0, p); let c = Ball::from_i64(2, p).div(&Ball::pi(p).sqrt().ok_or_else(out)?).ok_or_else(out)?; let g: S = g.iter().map(|x| x.mul(&c)).collect();
                        if *f == Function::Erf { chain(Some(g), u0.erf())? } else { let g: S = g.iter().map(Ball::neg).collect(); chain(Some(g), u0.erfc())? } }
                    Function::Fabs => { if u0.is_positive() { u } else if u0.is_negative() { u.iter().map(Ball::neg).collect() } else if u.len() == 1 { vec![u0.abs()] } else { return Err(no(RefusalKind::NotAnalytic)); } }
                }
            }
        };
        v.push(r);
    }
    Ok(v.swap_remove(formula.root()))
}
