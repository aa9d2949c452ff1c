//! Random audits, with an approximant that is evaluated here from the definition of its basis.

use rug::ops::Pow;
use rug::{Integer, Rational};
use serde_json::{Value, json};

/// SplitMix64 (from memory): enough for the choice of cases, and the same everywhere.
pub struct Random(pub u64);

impl Random {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub fn below(&mut self, n: u64) -> u64 {
        self.next() % n
    }

    pub fn between(&mut self, low: i64, high: i64) -> i64 {
        low + self.below((high - low + 1) as u64) as i64
    }

    pub fn pick<'a, T>(&mut self, choices: &'a [T]) -> &'a T {
        &choices[self.below(choices.len() as u64) as usize]
    }

    pub fn one_in(&mut self, n: u64) -> bool {
        self.below(n) == 0
    }
}

/// A piece's polynomial, evaluated exactly; `None` for steps.
type Evaluator = Box<dyn Fn(&Rational) -> Rational>;

/// A claim's measure and its set: closed intervals, and the intervals left out.
pub struct Question {
    pub measure: Measure,
    pub on: [Rational; 2],
    pub except: Vec<[Rational; 2]>,
}

#[derive(Clone, Debug)]
pub enum Measure {
    Absolute,
    Relative,
    Mixed(Rational, Rational),
}

pub struct Case {
    pub document: Value,
    pub cuts: Vec<Rational>,
    pub owner_is_left: bool,
    pub pieces: Option<Vec<Evaluator>>,
    pub questions: Vec<Question>,
}

/// Every function of a formula, with an argument that stays in its domain for every real x.
const SHAPES: &[&str] = &[
    "sqrt(1.5+cos(@))",
    "cbrt(3+sin(@))",
    "cbrt(sin(@)-3)",
    "exp(0.7*sin(@))",
    "exp2(cos(@))",
    "expm1(sin(@)/3)",
    "log(2+sin(@))",
    "log2(2.5+cos(@))",
    "log10(3+sin(@))",
    "log1p(0.9*sin(@))",
    "sin(@)",
    "cos(@)",
    "tan(0.8*sin(@))",
    "asin(0.9*sin(@))",
    "acos(0.9*cos(@))",
    "atan(@)",
    "sinh(sin(@))",
    "cosh(cos(@))",
    "tanh(@)",
    "asinh(@)",
    "acosh(2.5+sin(@))",
    "atanh(0.9*tanh(@))",
    "erf(@)",
    "erfc(sin(@))",
    "fabs(sin(@)-1.5)",
    "pow(2+sin(@), -3/4)",
    "pow(2+cos(@), 1/3)",
    "pow(@, 2)",
    "pow(2+cos(@), -2)",
    "pow(1.5+sin(@), x/2)",
    "1/(1.25+cos(@))",
    "(@)/(2+sin(x))",
    "(@)*x",
    "(@)-pi/4",
    "e*(@)",
    "sin(@)/(3+x*x)",
];

fn reference(random: &mut Random) -> String {
    let mut text = format!(
        "{}*x+{}/7",
        random.pick(&["0.5", "-1", "1.25", "0x1.8p0", "3"]),
        random.between(-9, 9)
    );
    for _ in 0..random.between(1, 3) {
        text = random.pick(SHAPES).replace('@', &text);
    }
    text
}

fn number(x: &Rational) -> String {
    format!("{}/{}", x.numer(), x.denom())
}

fn binomial(n: usize, k: usize) -> Rational {
    Rational::from(Integer::from(n).binomial(k as u32))
}

fn horner(coefficients: &[Rational], u: &Rational) -> Rational {
    coefficients
        .iter()
        .rev()
        .fold(Rational::new(), |sum, c| sum * u + c)
}

/// H(s) by the definition of the two-point basis; `left` and `right` are Taylor coefficients in x.
fn hermite(left: &[Rational], right: &[Rational], ends: &[Rational; 2], x: &Rational) -> Rational {
    let width = Rational::from(&ends[1] - &ends[0]);
    let s = Rational::from(x - &ends[0]) / &width;
    let side = |own: &[Rational], other: &[Rational], s: &Rational, sign: i32| {
        let rest = Rational::from(1 - s);
        let n = other.len() - 1;
        let mut sum = Rational::new();
        for (j, c) in own.iter().enumerate() {
            let mut phi = Rational::new();
            for k in 0..own.len() - j {
                phi += binomial(n + k, k) * Rational::from(s.pow(k as u32));
            }
            phi *= Rational::from(s.pow(j as u32)) * Rational::from((&rest).pow(n as u32 + 1));
            let scale = Rational::from((&width).pow(j as u32)) * sign.pow(j as u32);
            sum += phi * c * scale;
        }
        sum
    };
    side(left, right, &s, 1) + side(right, left, &Rational::from(1 - &s), -1)
}

/// A random case; the approximant need not be near its reference, which keeps the error generic.
pub fn case(random: &mut Random) -> Case {
    let formula = reference(random);
    let left = Rational::from((random.between(-16, 16), 8));
    let width = Rational::from((random.between(1, 16), *random.pick(&[8, 16, 40])));
    let count = *random.pick(&[1usize, 1, 2, 3]);
    let basis = *random.pick(&["power", "chebyshev", "bernstein", "hermite", "steps"]);
    let count = if basis == "steps" { 1 } else { count };
    let cuts: Vec<Rational> = (0..=count)
        .map(|k| (&width * Rational::from((k, count))) + &left)
        .collect();
    let owner_is_left = random.one_in(2);
    let mut approximant = json!({
        "basis": basis,
        "stored_as": *random.pick(&["exact", "binary64"]),
    });
    if basis != "steps" {
        approximant["owner"] = json!(if owner_is_left { "left" } else { "right" });
    }
    let pieces = match basis {
        "steps" => {
            let step = *random.pick(&[
                "y = n/(1.5+t*t)",
                "y = n + 0.01*sin(3*t)*exp(t)",
                "y = n*cosh(t/2) - fabs(t+9)/16",
            ]);
            approximant["constants"] = json!({ "c": coefficients(random, 4) });
            approximant["steps"] = json!(["t = x - 1/8", "n = clenshaw(c, t)", step]);
            approximant["on"] = json!([number(&cuts[0]), number(&cuts[1])]);
            None
        }
        "hermite" => Some(hermite_pieces(random, &cuts, &mut approximant)),
        _ => Some(plain_pieces(random, basis, &cuts, &mut approximant)),
    };
    let questions: Vec<Question> = (0..random.between(1, 2))
        .map(|_| question(random, &left, &width))
        .collect();
    let claims: Vec<Value> = questions.iter().map(claim).collect();
    let document = json!({
        "reference": { "formula": formula },
        "approximant": approximant,
        "claims": claims,
    });
    Case {
        document,
        cuts,
        owner_is_left,
        pieces,
        questions,
    }
}

/// Multiples of 1/256, exact in every format that is used here.
fn coefficients(random: &mut Random, most: i64) -> Vec<String> {
    (0..=random.between(0, most))
        .map(|_| format!("{}/256", random.between(-400, 400)))
        .collect()
}

fn values(texts: &[String]) -> Vec<Rational> {
    texts
        .iter()
        .map(|text| text.parse::<Rational>().expect("a ratio"))
        .collect()
}

fn hermite_pieces(
    random: &mut Random,
    cuts: &[Rational],
    approximant: &mut Value,
) -> Vec<Evaluator> {
    let data: Vec<Vec<String>> = cuts.iter().map(|_| coefficients(random, 3)).collect();
    approximant["knots"] = cuts
        .iter()
        .zip(&data)
        .map(|(at, taylor)| json!({ "at": number(at), "taylor": taylor }))
        .collect();
    (1..cuts.len())
        .map(|k| {
            let ends = [cuts[k - 1].clone(), cuts[k].clone()];
            let (left, right) = (values(&data[k - 1]), values(&data[k]));
            let evaluate = move |x: &Rational| hermite(&left, &right, &ends, x);
            Box::new(evaluate) as Evaluator
        })
        .collect()
}

fn plain_pieces(
    random: &mut Random,
    basis: &str,
    cuts: &[Rational],
    approximant: &mut Value,
) -> Vec<Evaluator> {
    let custom = random.one_in(4);
    let variable = match basis {
        "power" if !custom => Some(*random.pick(&["x", "x-left", "unit", "centred"])),
        _ => None,
    };
    let (origin, scale) = (
        Rational::from((random.between(-3, 3), 2)),
        Rational::from((random.between(1, 5), 2)),
    );
    if custom {
        approximant["variable"] = json!({ "origin": number(&origin), "scale": number(&scale) });
    } else if let Some(variable) = variable {
        approximant["variable"] = json!(variable);
    }
    let descending = random.one_in(2);
    approximant["order"] = json!(if descending {
        "descending"
    } else {
        "ascending"
    });
    let halved = random.one_in(2);
    let parity = match basis {
        "bernstein" => None,
        _ => *random.pick(&[None, None, Some("odd"), Some("even")]),
    };
    if basis == "chebyshev" {
        approximant["first"] = json!(if halved { "halved" } else { "full" });
    }
    if let Some(parity) = parity {
        approximant["parity"] = json!(parity);
    }
    let mut listed = Vec::new();
    let mut evaluators: Vec<Evaluator> = Vec::new();
    for pair in cuts.windows(2) {
        let (left, right) = (pair[0].clone(), pair[1].clone());
        let mut texts = coefficients(random, 5);
        let width = Rational::from(&right - &left);
        let (origin, scale) = match (custom, basis, variable) {
            (true, ..) => (origin.clone(), scale.clone()),
            (_, "bernstein", _) | (_, _, Some("unit")) => (left.clone(), width),
            (_, _, Some("x")) => (Rational::new(), Rational::from(1)),
            (_, _, Some("x-left")) => (left.clone(), Rational::from(1)),
            _ => (Rational::from(&left + &right) / 2, width / 2),
        };
        let mut full = Vec::new();
        for value in values(&texts) {
            if parity == Some("odd") || (parity == Some("even") && !full.is_empty()) {
                full.push(Rational::new());
            }
            full.push(value);
        }
        if basis == "chebyshev" && halved {
            full[0] /= 2;
        }
        if descending {
            texts.reverse();
        }
        listed.push(json!({ "on": [number(&left), number(&right)], "coefficients": texts }));
        let basis = basis.to_owned();
        evaluators.push(Box::new(move |x| {
            let u = Rational::from(x - &origin) / &scale;
            match basis.as_str() {
                "power" => horner(&full, &u),
                "chebyshev" => chebyshev(&full, &u),
                _ => bernstein(&full, &u),
            }
        }));
    }
    approximant["pieces"] = json!(listed);
    evaluators
}

fn chebyshev(coefficients: &[Rational], u: &Rational) -> Rational {
    let (mut before, mut current) = (Rational::from(1), u.clone());
    let mut sum = coefficients[0].clone();
    for c in &coefficients[1..] {
        sum += Rational::from(c * &current);
        let next = Rational::from(&current * u) * 2 - &before;
        before = std::mem::replace(&mut current, next);
    }
    sum
}

fn bernstein(coefficients: &[Rational], u: &Rational) -> Rational {
    let n = coefficients.len() - 1;
    let rest = Rational::from(1 - u);
    coefficients
        .iter()
        .enumerate()
        .map(|(k, c)| {
            let powers =
                Rational::from(u.pow(k as u32)) * Rational::from((&rest).pow((n - k) as u32));
            binomial(n, k) * c * powers
        })
        .sum()
}

fn question(random: &mut Random, left: &Rational, width: &Rational) -> Question {
    let at = |k: i64| (width * Rational::from((k, 24))) + left;
    let measure = match random.below(4) {
        0 => Measure::Relative,
        1 => Measure::Mixed(
            random
                .pick(&["1/1000", "1/2", "3"])
                .parse()
                .expect("a ratio"),
            random.pick(&["0", "1/10", "7"]).parse().expect("a ratio"),
        ),
        _ => Measure::Absolute,
    };
    let on = if random.one_in(2) {
        let first = random.between(0, 20);
        [at(first), at(random.between(first + 1, 24))]
    } else {
        [at(0), at(24)]
    };
    // Some begin before the set or end after it, some touch each other, some lie outside.
    let except = (0..random.below(3))
        .map(|_| {
            let first = random.between(-6, 28);
            [at(first), at(first + random.between(0, 4))]
        })
        .collect();
    Question {
        measure,
        on,
        except,
    }
}

fn claim(question: &Question) -> Value {
    let interval = |ends: &[Rational; 2]| json!([number(&ends[0]), number(&ends[1])]);
    let mut claim = json!({ "of": "exact", "on": interval(&question.on) });
    match &question.measure {
        Measure::Absolute => claim["error"] = json!("absolute"),
        Measure::Relative => claim["error"] = json!("relative"),
        Measure::Mixed(absolute, relative) => {
            claim["error"] = json!("mixed");
            claim["absolute_part"] = json!(number(absolute));
            claim["relative_part"] = json!(number(relative));
            claim["at_most"] = json!("1e9");
        }
    }
    if !question.except.is_empty() {
        claim["except"] = question.except.iter().map(interval).collect();
    }
    claim
}

impl Question {
    /// Exactly: does the claim speak of x?
    pub fn contains(&self, x: &Rational) -> bool {
        let within = |ends: &[Rational; 2]| *x >= ends[0] && *x <= ends[1];
        within(&self.on) && !self.except.iter().any(within)
    }

    /// The closures of the intervals that are left of `on` after the exceptions. The error is
    /// continuous on a piece, so its supremum is that over the closure.
    fn intervals(&self) -> Vec<[Rational; 2]> {
        let mut except = self.except.clone();
        except.sort();
        let [mut left, right] = self.on.clone();
        let mut found = Vec::new();
        for [from, to] in except {
            found.push([left.clone(), from.min(right.clone())]);
            left = left.max(to);
        }
        found.push([left, right]);
        found.retain(|ends| ends[0] < ends[1]);
        found
    }

    /// True if no argument is left but single points.
    pub fn is_thin(&self) -> bool {
        self.intervals().is_empty()
    }
}

impl Case {
    /// True if the boundary or inner point x of a piece belongs to it.
    pub fn owns(&self, piece: usize, x: &Rational) -> bool {
        let [left, right] = [&self.cuts[piece], &self.cuts[piece + 1]];
        let (first, last) = (piece == 0, piece + 2 == self.cuts.len());
        if self.owner_is_left {
            (first || x > left) && x <= right
        } else {
            x >= left && (last || x < right)
        }
    }

    /// The parts of a claim's set on each piece: intervals, or a boundary that the piece owns.
    pub fn parts(&self, question: &Question) -> Vec<(usize, [Rational; 2])> {
        let mut parts = Vec::new();
        for (piece, ends) in self.cuts.windows(2).enumerate() {
            for interval in question.intervals() {
                let left = interval[0].clone().max(ends[0].clone());
                let right = interval[1].clone().min(ends[1].clone());
                let point = left == right && self.owns(piece, &left) && question.contains(&left);
                if left < right || point {
                    parts.push((piece, [left, right]));
                }
            }
        }
        parts
    }
}
