//! Random numbers and the tally of error figures, for the tests against the yardstick.

#![allow(dead_code)] // Each test uses its part.

pub use super::mixing::Random;
use merging_saddles::{Complex64, Error, Estimate};
use std::f64::consts::PI;

/// Answers against the yardstick: how often the error figure covers the error, and how sharply.
#[derive(Default)]
pub struct Tally {
    cases: usize,
    answered: usize,
    refused: usize,
    hopeless: usize,
    uncovered: Vec<String>,
    wrong: Vec<String>,
    ratios: Vec<f64>,
    unsure: usize,
    reasons: Vec<String>,
}

impl Tally {
    pub fn enter(
        &mut self,
        label: &str,
        got: Result<Estimate, Error>,
        yardstick: Result<Estimate, Error>,
    ) {
        self.cases += 1;
        let Ok(exact) = yardstick else {
            self.unsure += 1;
            return;
        };
        match got {
            Err(reason) => {
                self.refused += 1;
                self.reasons.push(format!("{label}: refused, {reason}"));
            }
            Ok(got) if got.relative_error >= 1.0 => self.hopeless += 1,
            Ok(got) => {
                self.answered += 1;
                // Both carry exponents: compare at the yardstick's.
                let exponent = exact.scaled.exponent;
                let difference =
                    (got.scaled.mantissa_at(exponent) - exact.scaled.mantissa_at(exponent)).norm();
                let size = exact.scaled.mantissa.norm();
                let figure = got.relative_error * got.scaled.mantissa_at(exponent).norm();
                let doubt = exact.relative_error * size;
                if difference > figure + doubt {
                    let line = format!(
                        "{label}: error {:.1e}, figure {:.1e}, yardstick {:.1e}",
                        difference / size,
                        figure / size,
                        doubt / size
                    );
                    if difference > 30.0 * (figure + doubt) {
                        self.wrong.push(line);
                    } else {
                        self.uncovered.push(line);
                    }
                }
                if difference > 3.0 * doubt {
                    self.ratios.push(figure / difference);
                }
            }
        }
    }

    pub fn report(&mut self, name: &str) {
        self.ratios.sort_by(f64::total_cmp);
        let at = |q: f64| {
            self.ratios.get((self.ratios.len() as f64 * q) as usize).copied().unwrap_or(0.0)
        };
        println!(
            "{name}: {} cases, {} answered, {} refused, {} with a figure of 100 % or more, {} \
             without a yardstick; uncovered {}, wrong {}; figure/error median {:.1}, 95 % {:.1} of {}",
            self.cases,
            self.answered,
            self.refused,
            self.hopeless,
            self.unsure,
            self.uncovered.len(),
            self.wrong.len(),
            at(0.5),
            at(0.95),
            self.ratios.len()
        );
        for line in self.uncovered.iter().chain(&self.wrong).chain(&self.reasons).take(20) {
            println!("  {line}");
        }
    }

    /// Part of the cases that is answered.
    pub fn answered(&self) -> f64 {
        self.answered as f64 / self.cases.max(1) as f64
    }

    /// Adds another's cases.
    pub fn absorb(&mut self, other: Tally) {
        self.cases += other.cases;
        self.answered += other.answered;
        self.refused += other.refused;
        self.hopeless += other.hopeless;
        self.unsure += other.unsure;
        self.uncovered.extend(other.uncovered);
        self.wrong.extend(other.wrong);
        self.ratios.extend(other.ratios);
        self.reasons.extend(other.reasons);
    }

    pub fn check(&mut self, name: &str, answered: f64) {
        self.report(name);
        assert!(self.wrong.is_empty(), "{name}: wrong without warning");
        assert!(self.uncovered.len() * 1000 <= self.answered.max(1), "{name}: coverage");
        assert!(self.answered as f64 >= answered * self.cases as f64, "{name}: answered");
    }
}

/// 1, a quadratic or an exponential.
pub fn amplitude(random: &mut Random) -> impl Fn(Complex64) -> Complex64 + use<> {
    let kind = random.below(3);
    let (a, b) = (random.disc(1.0), random.disc(1.0));
    move |z: Complex64| match kind {
        0 => Complex64::new(1.0, 0.0),
        1 => 1.0 + a * z + b * z * z,
        _ => (a * z * 0.5).exp(),
    }
}

/// A point far out in valley `v` of `c z^degree`, where `i c z^degree` is negative.
pub fn valley(lead: Complex64, degree: usize, v: usize, radius: f64) -> Complex64 {
    let angle = (0.5 * PI - lead.arg() + 2.0 * PI * v as f64) / degree as f64;
    Complex64::from_polar(radius, angle)
}
