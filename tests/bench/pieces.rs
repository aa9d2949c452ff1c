//! Pieces per second on one core, side by side with the check that people do today: a thousand
//! samples a piece in double precision (which proves nothing). Only the ratios of one run count.
//!
//! `cargo bench --bench pieces` (or `make bench`). Tables are made here in floating point: they
//! are what is audited, so their own accuracy does not matter.

use std::fmt::Write as _;
use std::hint::black_box;
use std::time::Instant;

use boundmark::audit::file::{self, ReadOptions};
use boundmark::audit::run;
use boundmark::number::decimal::exact;
use rug::Rational;

/// A table to audit, and a double-precision evaluation of its error for the reference.
struct Job {
    name: &'static str,
    text: String,
    pieces: usize,
    sample: Box<dyn Fn(usize, f64) -> f64>,
}

fn main() {
    rayon::ThreadPoolBuilder::new()
        .num_threads(1)
        .build_global()
        .expect("one thread");
    println!("| job | pieces | proof, pieces/s | 1,000 samples, pieces/s | ratio |");
    println!("|---|---|---|---|---|");
    for job in [logarithm(10_000), runge(200), bernstein()] {
        let file = file::read_text("job.audit.json", &job.text, None, &ReadOptions::default())
            .unwrap_or_else(|errors| panic!("{}: {}", job.name, errors[0]));
        let rounds = if job.pieces > 1 { 1 } else { 20 };
        let start = Instant::now();
        for _ in 0..rounds {
            let outcome = run::run(&file, 1, &|_| (), &|| ());
            black_box(&outcome).as_ref().expect("the audit runs");
        }
        let proof = (job.pieces * rounds) as f64 / start.elapsed().as_secs_f64();
        let start = Instant::now();
        for _ in 0..rounds {
            for piece in 0..job.pieces {
                let worst = (0..=1000u32)
                    .map(|k| (job.sample)(piece, f64::from(k) / 1000.0).abs())
                    .fold(0.0, f64::max);
                black_box(worst);
            }
        }
        let samples = (job.pieces * rounds) as f64 / start.elapsed().as_secs_f64();
        println!(
            "| {} | {} | {proof:.0} | {samples:.0} | {:.3} |",
            job.name,
            job.pieces,
            proof / samples
        );
    }
}

/// A job whose pieces are polynomials in the unit variable, interpolating at Chebyshev nodes.
fn interpolated(
    name: &'static str,
    formula: &str,
    function: fn(f64) -> f64,
    domain: [f64; 2],
    count: usize,
    degree: usize,
) -> Job {
    let width = (domain[1] - domain[0]) / count as f64;
    let mut table = Vec::with_capacity(count);
    let mut pieces = String::new();
    for k in 0..count {
        let left = domain[0] + width * k as f64;
        let nodes: Vec<f64> = (0..=degree)
            .map(|j| {
                let angle = std::f64::consts::PI * (j as f64 + 0.5) / (degree as f64 + 1.0);
                0.5 - 0.5 * angle.cos()
            })
            .collect();
        let values: Vec<f64> = nodes.iter().map(|u| function(left + width * u)).collect();
        let coefficients = newton_to_powers(&nodes, &values);
        let from = format!("{}/{count}", fraction(domain, k, count));
        let to = format!("{}/{count}", fraction(domain, k + 1, count));
        let list: Vec<String> = coefficients.iter().map(|&c| literal(c)).collect();
        let comma = if k == 0 { "" } else { "," };
        write!(
            pieces,
            "{comma}{{\"on\":[\"{from}\",\"{to}\"],\"coefficients\":[{}]}}",
            list.join(",")
        )
        .expect("writing to a string");
        table.push((left, coefficients));
    }
    let text = format!(
        "{{\"reference\":{{\"formula\":\"{formula}\"}},\"approximant\":{{\"basis\":\"power\",\
         \"variable\":\"unit\",\"order\":\"ascending\",\"stored_as\":\"binary64\",\"pieces\":[{pieces}]}},\
         \"claims\":[{{\"of\":\"exact\",\"error\":\"absolute\"}}]}}"
    );
    let sample = move |piece: usize, u: f64| {
        let (left, coefficients): &(f64, Vec<f64>) = &table[piece];
        let value = coefficients.iter().rev().fold(0.0, |sum, c| sum * u + c);
        value - function(left + width * u)
    };
    Job {
        name,
        text,
        pieces: count,
        sample: Box::new(sample),
    }
}

/// A double as the exact literal that a table of stored coefficients has.
fn literal(c: f64) -> String {
    format!(
        "\"{}\"",
        exact(&Rational::from_f64(c).expect("a finite coefficient"))
    )
}

/// The exact end k/count of an integer domain, as a numerator over `count`.
fn fraction(domain: [f64; 2], k: usize, count: usize) -> i64 {
    let (low, high) = (domain[0] as i64, domain[1] as i64);
    low * count as i64 + (high - low) * k as i64
}

fn newton_to_powers(nodes: &[f64], values: &[f64]) -> Vec<f64> {
    let n = nodes.len();
    let mut table = values.to_vec();
    for level in 1..n {
        for j in (level..n).rev() {
            table[j] = (table[j] - table[j - 1]) / (nodes[j] - nodes[j - level]);
        }
    }
    let mut powers = vec![0.0; n];
    for j in (0..n).rev() {
        for k in (1..n).rev() {
            powers[k] = powers[k - 1] - nodes[j] * powers[k];
        }
        powers[0] = table[j] - nodes[j] * powers[0];
    }
    powers
}

fn logarithm(count: usize) -> Job {
    interpolated(
        "log2(1+x), cubic",
        "log2(1+x)",
        |x| x.ln_1p() / std::f64::consts::LN_2,
        [0.0, 1.0],
        count,
        3,
    )
}

fn runge(count: usize) -> Job {
    let function = |x: f64| 1.0 / (1.0 + 25.0 * x * x);
    interpolated(
        "1/(1+25x^2), quintic",
        "1/(1+25*x*x)",
        function,
        [-1.0, 1.0],
        count,
        5,
    )
}

/// Bernstein coefficients of the Taylor polynomial of exp: b_j = sum_k C(j,k)/C(n,k)/k!.
fn bernstein() -> Job {
    const DEGREE: usize = 31;
    let coefficients: Vec<f64> = (0..=DEGREE)
        .map(|j| {
            let mut term = 1.0;
            let mut sum = 1.0;
            for k in 1..=j {
                term *= (j - k + 1) as f64 / ((DEGREE - k + 1) as f64 * k as f64);
                sum += term;
            }
            sum
        })
        .collect();
    let list: Vec<String> = coefficients.iter().map(|&c| literal(c)).collect();
    let text = format!(
        "{{\"reference\":{{\"formula\":\"exp(x)\"}},\"approximant\":{{\"basis\":\"bernstein\",\
         \"order\":\"ascending\",\"stored_as\":\"binary64\",\"pieces\":[{{\"on\":[\"0\",\"1\"],\
         \"coefficients\":[{}]}}]}},\"claims\":[{{\"of\":\"exact\",\"error\":\"absolute\"}}]}}",
        list.join(",")
    );
    let sample = move |_: usize, u: f64| {
        let mut row = coefficients.clone();
        for level in (1..row.len()).rev() {
            for j in 0..level {
                row[j] = row[j] * (1.0 - u) + row[j + 1] * u;
            }
        }
        row[0] - u.exp()
    };
    Job {
        name: "exp, one Bernstein piece of degree 31",
        text,
        pieces: 1,
        sample: Box::new(sample),
    }
}
