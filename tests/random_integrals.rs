//! Random integrals against their exact values: coverage and sharpness of the error figure.
//!
//! Polynomial phases of degree 2 to 6, saddles that merge to within 1e-6 of each other, phases
//! with sinh, cosh and exp; contours between random valleys, over several periods or with finite
//! end points, also on saddles; amplitudes 1, entire, with simple and double poles; wavenumbers
//! from 3 to 1e4. A plain run takes some 2,500, `cargo test --release --test random_integrals --
//! --ignored --nocapture` ten thousand others.
//!
//! The exact values come from double-double arithmetic (`support/exact.rs`), so that every answer's true error
//! is known and counts, down to the last rounding: covered is what lies within the figure alone, and the
//! ratio of figure to error is that of all answers. The yardstick is held against the same values.
// `!(a <= b)` is meant: NaN must fail.
#![allow(clippy::neg_cmp_op_on_partial_ord)]

#[path = "support/exact.rs"]
mod exact;
#[path = "support/mixing.rs"]
mod mixing;
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
                self.ratios.push(figure / error);
            }
        }
    }

    /// Of the sorted ratios.
    fn ratio(&self, part: f64) -> f64 {
        self.ratios.get((self.ratios.len() as f64 * part) as usize).copied().unwrap_or(0.0)
    }

    fn report(&mut self, name: &str) {
        self.ratios.sort_by(f64::total_cmp);
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
            self.ratio(0.5),
            self.ratio(0.95),
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

    /// At least the part `answered` of all is answered, 99.9 % of those are covered (of fewer than a
    /// thousand all but one), none is wrong; figure over error has at most these median and 95 %.
    fn check(&mut self, name: &str, answered: f64, (median, most): (f64, f64)) {
        self.report(name);
        assert!(self.wrong.is_empty(), "{name}: wrong without warning");
        assert!(self.uncovered.len() * 1000 <= self.answered.max(1000), "{name}: coverage");
        assert!(self.answered as f64 >= answered * self.cases as f64, "{name}: answered");
        assert!(self.unsure.len() * 50 <= self.cases, "{name}: exact values");
        assert!(self.ratio(0.5) <= median, "{name}: median of figure over error");
        assert!(self.ratio(0.95) <= most, "{name}: 95 % of figure over error");
    }
}

/// Median and 95 % of figure over true error: the aim. Five classes miss it by up to two fifths and have bars
/// of their own, for what samples of this size scatter: the largest on four times 10,000 cases were
/// clusters 19 and 106, ends near saddles 25 and 132, poles 23 and 132, unnamed poles 14 and 122, ends
/// with poles 19 and 141.
const BARS: (f64, f64) = (20.0, 100.0);

fn run(family: &Family, seeds: std::ops::Range<u64>) -> Tally {
    run_with(family, seeds, false)
}

/// `narrow`: with a plan for the one wavenumber.
fn run_with(family: &Family, seeds: std::ops::Range<u64>, narrow: bool) -> Tally {
    let mut tally = Tally::default();
    for seed in seeds {
        let case = family.case(seed);
        let k = case.k;
        let plan = if narrow { case.integral.plan_for(k..=k) } else { case.integral.plan() };
        let got = plan.and_then(|plan| plan.at(k));
        let yardstick = case.integral.quadrature(case.k, 1e-13);
        tally.enter(&case.label, got, yardstick, exact::exact(&case.recipe, case.k));
    }
    tally
}

#[test]
fn one_or_two_saddles() {
    run(&random::FEW_SADDLES, 0..400).check("degree 2 and 3", 0.99, BARS);
}

#[test]
fn many_saddles() {
    run(&random::MORE_SADDLES, 0..400).check("degree 4 to 6", 0.99, BARS);
}

#[test]
fn merging_saddles() {
    run(&random::CLUSTERS, 0..400).check("clusters", 0.98, (20.0, 115.0));
}

#[test]
fn entire_phases() {
    run(&random::ENTIRE, 0..250).check("entire phases", 0.99, BARS);
}

#[test]
fn finite_ends() {
    run(&random::ENDS, 0..250).check("finite ends", 0.99, BARS);
}

#[test]
fn finite_ends_on_and_near_saddles() {
    run(&random::ENDS_NEAR, 0..250).check("ends near saddles", 0.99, (27.0, 140.0));
}

#[test]
fn named_poles() {
    run(&random::POLES, 0..250).check("poles", 0.99, (26.0, 140.0));
}

#[test]
fn unnamed_poles() {
    run(&random::UNNAMED, 0..150).check("unnamed poles", 0.98, (20.0, 150.0));
}

#[test]
fn ends_and_poles() {
    run(&random::MIXED, 0..150).check("ends and poles", 0.97, (22.0, 165.0));
}

/// A plan for one wavenumber answers as often: close saddles fall back on their parts where a pole leaves the
/// whole no ring, an end high above the floor is followed down exactly.
#[test]
fn narrow_ranges() {
    for (family, seeds, answered) in [
        (&random::UNNAMED, 0..100, 0.97),
        (&random::MORE_SADDLES, 0..150, 0.99),
        (&random::ENDS, 10_240..10_300, 1.0),
    ] {
        run_with(family, seeds, true).check(family.name, answered, (32.0, 200.0));
    }
}

/// Cases that other seeds found, each with what was wrong. An ascent next to a saddle that was taken for a
/// branch cut lost a residue; chords of the exact value that looked calm in their middle; a pole outside the
/// ring, taken out where the ring saw it and added where it is.
#[test]
fn found_before() {
    for (family, seed) in [
        (&random::POLES, 400_877),
        (&random::ENDS, 50_001),
        (&random::MORE_SADDLES, 400_522),
        (&random::POLES, 50_956),
        (&random::MIXED, 50_141),
    ] {
        let tally = run(family, seed..seed + 1);
        let lists = [&tally.wrong, &tally.uncovered, &tally.unsure, &tally.yardstick];
        assert_eq!(tally.answered, 1, "{} seed {seed}: not answered", family.name);
        assert!(lists.iter().all(|list| list.is_empty()), "{lists:?}");
    }
}

/// Ten thousand more, by seeds from 10,000 on; `FIRST=20000` in the environment chooses others.
#[test]
#[ignore = "minutes; run in release"]
fn ten_thousand() {
    ten_thousand_with(false);
}

/// The same by plans for the one wavenumber.
#[test]
#[ignore = "minutes; run in release"]
fn ten_thousand_narrow() {
    ten_thousand_with(true);
}

fn ten_thousand_with(narrow: bool) {
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
    let first = std::env::var("FIRST").ok().and_then(|text| text.parse().ok()).unwrap_or(10_000);
    for (family, length) in lengths {
        run_with(family, first..first + length, narrow).report(family.name);
    }
}
