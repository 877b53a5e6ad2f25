//! Random integrals against the yardstick: coverage and sharpness of the error figure.
//!
//! Polynomial phases of degree 2 to 6, saddles that merge to within 1e-6 of each other, phases
//! with sinh, cosh and exp; contours between random valleys, over several periods or with finite
//! end points, also on saddles; amplitudes 1, entire, with simple and double poles; wavenumbers
//! from 3 to 1e4. A plain run takes some 2,500, `cargo test --release --test random_integrals --
//! --ignored --nocapture` ten thousand others.
// `!(a <= b)` is meant: NaN must fail.
#![allow(clippy::neg_cmp_op_on_partial_ord)]

#[path = "support/exact.rs"]
mod exact;
#[path = "support/random.rs"]
#[allow(dead_code)]
mod random;

use exact::Exact;
use merging_saddles::{Error, Estimate};
use random::Family;

#[derive(Default)]
struct Tally {
    cases: usize,
    answered: usize,
    refused: Vec<String>,
    hopeless: Vec<String>,
    uncovered: Vec<String>,
    wrong: Vec<String>,
    /// Figure over true error.
    ratios: Vec<f64>,
    /// No exact value.
    unsure: Vec<String>,
    /// The yardstick failed, or its own figure did not hold.
    yardstick: Vec<String>,
}

impl Tally {
    fn enter(
        &mut self,
        label: &str,
        got: Result<Estimate, Error>,
        yardstick: Result<Estimate, Error>,
        exact: Option<Exact>,
    ) {
        self.cases += 1;
        let Some(exact) = exact else {
            return self.unsure.push(format!("{label}: no exact value"));
        };
        match yardstick {
            Err(reason) => self.yardstick.push(format!("{label}: no yardstick, {reason}")),
            Ok(value) => {
                let mantissa = value.scaled.mantissa_at(exact.exponent);
                let (error, size) = exact.difference(mantissa);
                let figure = value.relative_error * mantissa.norm();
                if !(error <= figure) {
                    let (error, figure) = (error / size, figure / size);
                    self.yardstick.push(format!(
                        "{label}: yardstick's error {error:.1e}, figure {figure:.1e}"
                    ));
                }
            }
        }
        match got {
            Err(reason) => self.refused.push(format!("{label}: refused, {reason}")),
            Ok(got) if got.relative_error >= 1.0 => {
                self.hopeless.push(format!("{label}: figure {:.1e}", got.relative_error));
            }
            Ok(got) => {
                self.answered += 1;
                // Both carry exponents: compare at the exact one's.
                let value = got.scaled.mantissa_at(exact.exponent);
                let (error, size) = exact.difference(value);
                let figure = got.relative_error * value.norm();
                // A NaN counts as wrong.
                if !(error <= figure) {
                    let line = format!(
                        "{label}: error {:.1e}, figure {:.1e}",
                        error / size,
                        figure / size
                    );
                    if error <= 30.0 * figure {
                        self.uncovered.push(line);
                    } else {
                        self.wrong.push(line);
                    }
                }
                if std::env::var("DUMP").is_ok() {
                    println!(
                        "RATIO {:.2e} {:.2e} {:.1} {label} {:?}",
                        error / size,
                        figure / size,
                        figure / error,
                        got.form
                    );
                }
                self.ratios.push(figure / error);
            }
        }
    }

    fn report(&mut self, name: &str) {
        self.ratios.sort_by(f64::total_cmp);
        let at = |q: f64| {
            self.ratios.get((self.ratios.len() as f64 * q) as usize).copied().unwrap_or(0.0)
        };
        println!(
            "{name}: {} cases, {} answered, {} refused, {} with a figure of 100 % or more, {} \
             without an exact value; uncovered {}, wrong {}; figure/error median {:.1}, 95 % \
             {:.1} of {}; yardstick failed or uncovered {}",
            self.cases,
            self.answered,
            self.refused.len(),
            self.hopeless.len(),
            self.unsure.len(),
            self.uncovered.len(),
            self.wrong.len(),
            at(0.5),
            at(0.95),
            self.ratios.len(),
            self.yardstick.len()
        );
        let lists = [
            &self.wrong,
            &self.uncovered,
            &self.refused,
            &self.hopeless,
            &self.unsure,
            &self.yardstick,
        ];
        for line in lists.into_iter().flatten() {
            println!("  {line}");
        }
    }

    /// At least the part `answered` of all is answered, 99.9 % of those are covered, none is wrong.
    fn check(&mut self, name: &str, answered: f64) {
        self.report(name);
        assert!(self.wrong.is_empty(), "{name}: wrong without warning");
        assert!(self.uncovered.len() * 1000 <= self.answered.max(1), "{name}: coverage");
        assert!(self.answered as f64 >= answered * self.cases as f64, "{name}: answered");
    }
}

fn run(family: &Family, seeds: std::ops::Range<u64>) -> Tally {
    let mut tally = Tally::default();
    for seed in seeds {
        let case = family.case(seed);
        let got = case.integral.plan().and_then(|plan| plan.at(case.k));
        let yardstick = case.integral.quadrature(case.k, 1e-13);
        tally.enter(&case.label, got, yardstick, exact::exact(&case.recipe, case.k));
    }
    tally
}

#[test]
fn one_or_two_saddles() {
    run(&random::FEW_SADDLES, 0..400).check("degree 2 and 3", 0.99);
}

#[test]
fn many_saddles() {
    run(&random::MORE_SADDLES, 0..400).check("degree 4 to 6", 0.95);
}

#[test]
fn merging_saddles() {
    run(&random::CLUSTERS, 0..400).check("clusters", 0.95);
}

#[test]
fn entire_phases() {
    run(&random::ENTIRE, 0..250).check("entire phases", 0.95);
}

#[test]
fn finite_ends() {
    run(&random::ENDS, 0..250).check("finite ends", 0.95);
}

#[test]
fn finite_ends_on_and_near_saddles() {
    run(&random::ENDS_NEAR, 0..250).check("ends near saddles", 0.95);
}

#[test]
fn named_poles() {
    run(&random::POLES, 0..250).check("poles", 0.95);
}

#[test]
fn unnamed_poles() {
    run(&random::UNNAMED, 0..150).check("unnamed poles", 0.95);
}

#[test]
fn ends_and_poles() {
    run(&random::MIXED, 0..150).check("ends and poles", 0.9);
}

/// Ten thousand more; `SEEDS=from..to` in the environment of the test chooses others.
#[test]
#[ignore = "minutes; run in release"]
fn ten_thousand() {
    let lengths = [
        (&random::FEW_SADDLES, 1600),
        (&random::MORE_SADDLES, 1600),
        (&random::CLUSTERS, 1600),
        (&random::ENTIRE, 1200),
        (&random::ENDS, 1000),
        (&random::ENDS_NEAR, 1000),
        (&random::POLES, 1000),
        (&random::UNNAMED, 400),
        (&random::MIXED, 600),
    ];
    let from: u64 = std::env::var("FROM").ok().and_then(|s| s.parse().ok()).unwrap_or(10_000);
    let only = std::env::var("ONLY").unwrap_or_default();
    for (family, length) in lengths {
        if !family.name.contains(&only) {
            continue;
        }
        run(family, from..from + length).report(family.name);
    }
}
