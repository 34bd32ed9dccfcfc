//! The regression sets of the NIST Statistical Reference Datasets (StRD), National Institute of
//! Standards and Technology, <https://www.itl.nist.gov/div898/strd/>, through the core that fits curves.
//!
//! Files and their origin: `reference/nist-strd/README.md`. Certified values carry 11 digits
//! (nonlinear) and 15 digits (linear).

mod dual;
mod files;
mod models;

use dual::Dual;
use files::Set;
use parabound::fit::Precise;
use parabound::fit::linear::{self, Design};
use parabound::fit::nonlinear::{self, IterationSettings, Problem};

/// Agreeing digits: −log10 of the relative error, of the absolute error where the certified value is 0.
fn digits(found: f64, certified: f64) -> f64 {
    let error = if certified == 0.0 { found.abs() } else { ((found - certified) / certified).abs() };
    if error == 0.0 { 15.0 } else { (-error.log10()).clamp(0.0, 15.0) }
}

fn fewest(found: &[f64], certified: &[f64]) -> f64 {
    found.iter().zip(certified).map(|(f, c)| digits(*f, *c)).fold(15.0, f64::min)
}

struct SetProblem<'a>(&'a Set);

impl Problem for SetProblem<'_> {
    fn parameters(&self) -> usize {
        self.0.certified.len()
    }
    fn observations(&self) -> usize {
        self.0.y.len()
    }
    fn evaluate(&mut self, values: &[f64], residuals: &mut [f64], jacobian: &mut [f64]) -> bool {
        let b: Vec<Dual> = values.iter().enumerate().map(|(j, &v)| Dual::parameter(v, j)).collect();
        let n = self.0.y.len();
        for i in 0..n {
            let m = models::model(&self.0.name, &b, &self.0.x[i]);
            residuals[i] = m.value - self.0.y[i];
            (0..b.len()).for_each(|j| jacobian[j * n + i] = m.by[j]);
        }
        true
    }
}

fn standard_errors(unit_covariance: &[Vec<f64>], square_sum: f64, n: usize) -> Vec<f64> {
    let variance = square_sum / (n - unit_covariance.len()) as f64;
    (0..unit_covariance.len()).map(|j| (variance * unit_covariance[j][j]).sqrt()).collect()
}

/// Agreeing digits of one set from one start, and the fewest that pass.
struct Row {
    set: String,
    start: usize,
    /// Parameters, standard errors, residual sum.
    digits: [f64; 3],
    bounds: [f64; 3],
    /// Why it is an exception, where it is one.
    reason: &'static str,
}

const WHAT: [&str; 3] = ["parameters", "standard errors", "residual sum"];

impl Row {
    /// Prints the set's line.
    fn new(set: &Set, start: usize, values: &[f64], errors: &[f64], square_sum: f64, limits: Limits) -> Self {
        let digits =
            [fewest(values, &set.certified), fewest(errors, &set.errors), digits(square_sum, set.square_sum)];
        println!("strd {} {start} {:.1}", set.name, digits[0]);
        Self { set: set.name.clone(), start, digits, bounds: limits.bounds, reason: limits.reason }
    }

    /// No solution: no digit.
    fn failed(set: &Set, start: usize, limits: Limits) -> Self {
        println!("strd {} {start} 0.0", set.name);
        Self { set: set.name.clone(), start, digits: [0.0; 3], bounds: limits.bounds, reason: limits.reason }
    }

    fn short(&self) -> Vec<String> {
        let all = (0..3).filter(|&i| self.digits[i] < self.bounds[i]);
        all.map(|i| {
            let (digits, bound) = (self.digits[i], self.bounds[i]);
            format!("{} start {}: {} {digits:.1} < {bound}", self.set, self.start, WHAT[i])
        })
        .collect()
    }
}

/// Prints the table with the exceptions and their reasons, and demands every bound.
fn judge(rows: &[Row]) {
    println!("agreeing digits   start  {}", WHAT.join("  "));
    for row in rows {
        let [parameters, errors, sum] = row.digits;
        println!(
            "{:<16}  {:>5}  {parameters:>10.1}  {errors:>15.1}  {sum:>12.1}  {}",
            row.set, row.start, row.reason
        );
    }
    let short: Vec<String> = rows.iter().flat_map(Row::short).collect();
    assert!(short.is_empty(), "{short:#?}");
}

/// Fewest agreeing digits of parameters, standard errors and residual sum that pass.
#[derive(Clone, Copy)]
struct Limits {
    bounds: [f64; 3],
    reason: &'static str,
}

impl Limits {
    /// The print has 11 digits, which bounds the agreement at 10.3 at worst.
    fn nonlinear(name: &str) -> Self {
        match name {
            "Lanczos1" => Self {
                bounds: [10.0, 2.0, 2.0],
                reason: "its residual sum is 1.4e-25: residuals of 1e-13 in data near 1 keep three digits in double precision",
            },
            _ => Self { bounds: [10.0, 9.5, 9.5], reason: "" },
        }
    }

    /// The print has 15 digits; one or two more go where data or certified values are not exact in binary.
    fn linear(name: &str) -> Self {
        let reason = match name {
            "Wampler1" | "Wampler2" => {
                "certified standard errors and residual sum are zero: digits of the absolute error"
            }
            _ => "",
        };
        Self { bounds: [12.5, 12.0, 12.5], reason }
    }
}

#[test]
fn strd_nonlinear_sets_agree_from_both_starts() {
    let sets = files::nonlinear();
    assert_eq!(sets.len(), 27);
    let mut rows = Vec::new();
    for set in &sets {
        let limits = Limits::nonlinear(&set.name);
        for (k, start) in set.starts.iter().enumerate() {
            match nonlinear::solve(&mut SetProblem(set), start, IterationSettings::THOROUGH) {
                Ok(s) => {
                    let errors = standard_errors(&s.unit_covariance, s.weighted_square_sum, set.y.len());
                    rows.push(Row::new(set, k + 1, &s.values, &errors, s.weighted_square_sum, limits));
                }
                Err(error) => {
                    println!("{}: {error:?}", set.name);
                    rows.push(Row::failed(set, k + 1, limits));
                }
            }
        }
    }
    judge(&rows);
}

/// Linear sets have no start; they are printed with start 0.
#[test]
fn strd_linear_sets_agree() {
    let sets = files::linear();
    assert_eq!(sets.len(), 11);
    let mut rows = Vec::new();
    for set in &sets {
        let n = set.y.len();
        let column = |j: usize| set.x.iter().map(|x| Precise::new(x[j])).collect::<Vec<_>>();
        let predictors = set.x[0].len();
        let design = match set.name.as_str() {
            "NoInt1" | "NoInt2" => Design::from_columns(&[column(0)]),
            "Longley" => {
                let ones = std::iter::once(vec![Precise::new(1.0); n]);
                Design::from_columns(&ones.chain((0..predictors).map(column)).collect::<Vec<_>>())
            }
            _ => Design::powers(&column(0), set.certified.len() - 1),
        };
        let s = linear::solve(&design, &set.y, &vec![1.0; n]).unwrap();
        let errors = standard_errors(&s.unit_covariance, s.weighted_square_sum, n);
        let limits = Limits::linear(&set.name);
        rows.push(Row::new(set, 0, &s.coefficients, &errors, s.weighted_square_sum, limits));
    }
    judge(&rows);
}
