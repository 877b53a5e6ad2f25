//! The yardstick against tables from arbitrary-precision arithmetic and against identities.

use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64 as C, Contour, Error, Estimate, Form, Integral, Scaled};
use proptest::prelude::*;
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> C {
    C::new(re, im)
}

fn rows(name: &str) -> Vec<Vec<String>> {
    let path = format!("{}/tests/data/{name}", env!("CARGO_MANIFEST_DIR"));
    let text = std::fs::read_to_string(path).unwrap();
    let mut lines = text.lines().filter(|l| !l.starts_with('#'));
    lines.next();
    lines.map(|l| l.split(',').map(str::to_owned).collect()).collect()
}

fn number(row: &[String], i: usize) -> f64 {
    row[i].parse().unwrap()
}

fn complex(row: &[String], i: usize) -> C {
    c(number(row, i), number(row, i + 1))
}

fn evaluations(u: &Estimate) -> usize {
    match u.form {
        Form::Quadrature { evaluations } => evaluations,
        _ => panic!("not a quadrature: {:?}", u.form),
    }
}

/// Errors over their figures, gathered over a table.
#[derive(Default)]
struct Tally {
    name: &'static str,
    relative: Vec<f64>,
    ratio: Vec<f64>,
    evaluations: Vec<f64>,
}

impl Tally {
    fn new(name: &'static str) -> Self {
        Tally { name, ..Tally::default() }
    }

    fn add(&mut self, u: &Estimate, exact: Scaled, label: &str) {
        let miss = u.scaled + -exact;
        let relative = (miss.ln_norm() - exact.ln_norm()).exp();
        let figure = u.relative_error * (u.scaled.ln_norm() - exact.ln_norm()).exp();
        let ratio = relative / figure;
        assert!(
            ratio <= 1.0,
            "{}: {label}: error {relative:.2e} above its figure {figure:.2e}",
            self.name
        );
        if ratio > 0.6 || self.name == "loose" && ratio > 0.5 {
            println!(
                "HIGH {} {ratio:.2} rel {relative:.2e} size {:.1e} {label}",
                self.name,
                exact.ln_norm()
            );
        }
        self.relative.push(relative);
        self.ratio.push(ratio);
        self.evaluations.push(evaluations(u) as f64);
    }

    /// The median figure may be at most 100 times the error.
    fn finish(mut self, rows: usize) {
        assert_eq!(self.ratio.len(), rows, "{}: rows", self.name);
        let mut line = self.name.to_owned();
        for (what, v) in [
            ("relative", &mut self.relative),
            ("ratio", &mut self.ratio),
            ("evaluations", &mut self.evaluations),
        ] {
            v.sort_by(f64::total_cmp);
            let n = v.len();
            let (mid, high, max) = (v[n / 2], v[n * 99 / 100], v[n - 1]);
            line += &format!("; {what}: median {mid:.2e}, 99 % {high:.2e}, max {max:.2e}");
        }
        println!("{line}");
        assert!(self.ratio[rows / 2] > 0.01, "{}: the figures are too wide", self.name);
    }
}

/// `exp(i k f) = exp(k (sinh z - (1 + a) z))`: two saddles that merge at a = 0.
fn fold(a: f64) -> impl Fn(C) -> (C, C) + Clone {
    move |z: C| (-C::i() * (z.sinh() - z - a * z), -C::i() * (z.cosh() - 1.0 - a))
}

fn fold_contour() -> Contour {
    Contour::through([c(3.0, -PI), c(2.0, -PI), c(0.0, 0.0), c(2.0, PI), c(3.0, PI)])
}

// DLMF 10.9.17: 2 pi i J_{k(1+a)}(k) for g = 1, and two more amplitudes.
#[test]
fn merging_saddles_of_a_transcendental_phase() {
    let rows = rows("uniform_field.csv");
    let mut tally = Tally::new("fold");
    for row in &rows {
        let (k, a) = (number(row, 0), number(row, 1));
        let exact = complex(row, 3);
        let integral = Integral::new(fold(a), fold_contour());
        let u = match row[2].as_str() {
            "one" => integral.quadrature(k, 1e-13),
            "cosh3" => integral.amplitude(|z: C| (z / 3.0).cosh()).quadrature(k, 1e-13),
            // The poles +-3i lie on the left of the contour.
            "rat9" => integral.amplitude(|z: C| 1.0 / (9.0 + z * z)).quadrature(k, 1e-13),
            other => panic!("amplitude {other}"),
        }
        .unwrap();
        tally.add(&u, exact.into(), &row.join(","));
        // Away from zeros: the modulus sqrt(J^2 + Y^2) is about (2/k)^(1/3) where J oscillates.
        if exact.norm() > 0.1 * k.powf(-0.5) {
            let relative = (u.value - exact).norm() / exact.norm();
            assert!(relative < 1e-13_f64.max(4.0 * k * f64::EPSILON), "{row:?}: {relative:e}");
        }
    }
    tally.finish(rows.len());
}

/// A cuspoid phase t^n + x_(n-2) t^(n-2) + .. + x_1 t (DLMF 36.2.1), `x` from x_(n-2) down.
fn cuspoid(x: &[C]) -> Polynomial {
    let mut coefficients = vec![c(0.0, 0.0)];
    coefficients.extend(x.iter().rev());
    coefficients.extend([c(0.0, 0.0), c(1.0, 0.0)]);
    Polynomial(coefficients)
}

/// From valley to valley of a polynomial phase, through 0.
fn between_valleys(phase: &Polynomial, from: f64, to: f64) -> Contour {
    let n = phase.0.len() - 1;
    let top = phase.0[n];
    let reach = (0..n)
        .map(|j| (phase.0[j].norm() / top.norm()).powf(1.0 / (n - j) as f64))
        .fold(0.0, f64::max);
    let far = |v: f64| {
        let angle = (0.5 * PI - top.arg() + 2.0 * PI * v) / n as f64;
        C::from_polar(1.0 + 2.0 * reach, angle)
    };
    Contour::through([far(from), c(0.0, 0.0), far(to)])
}

// DLMF 36.2.4: the cusp's integral along the real line, which ends in the valleys 2 and 0.
#[test]
fn pearcey_on_the_real_line() {
    let rows = rows("pearcey_real.csv");
    let mut tally = Tally::new("Pearcey");
    for row in &rows {
        let phase = cuspoid(&[c(number(row, 0), 0.0), c(number(row, 1), 0.0)]);
        let contour = between_valleys(&phase, 2.0, 0.0);
        let u = Integral::new(phase, contour).quadrature(1.0, 1e-12).unwrap();
        tally.add(&u, complex(row, 2).into(), &row.join(","));
    }
    tally.finish(rows.len());
}

#[test]
fn swallowtail_on_the_real_line() {
    let rows = rows("swallowtail.csv");
    let mut tally = Tally::new("swallowtail");
    for row in &rows {
        let x: Vec<C> = (0..3).map(|i| c(number(row, i), 0.0)).collect();
        let phase = cuspoid(&x);
        let contour = between_valleys(&phase, 2.0, 0.0);
        let u = Integral::new(phase, contour).quadrature(1.0, 1e-12).unwrap();
        tally.add(&u, complex(row, 3).into(), &row.join(","));
    }
    tally.finish(rows.len());
}

#[test]
fn cuspoids_between_any_valleys() {
    for (name, dimension) in
        [("pearcey_valleys.csv", 2), ("swallowtail_valleys.csv", 3), ("butterfly_valleys.csv", 4)]
    {
        let rows = rows(name);
        let mut tally = Tally::new(name);
        for row in &rows {
            let x: Vec<C> = (0..dimension).map(|i| complex(row, 2 + 2 * i)).collect();
            let phase = cuspoid(&x);
            let contour = between_valleys(&phase, number(row, 0), number(row, 1));
            let u = Integral::new(phase, contour).quadrature(1.0, 1e-12).unwrap();
            tally.add(&u, complex(row, 2 + 2 * dimension).into(), &row.join(","));
        }
        tally.finish(rows.len());
    }
}

#[test]
fn incomplete_airy_integrals_from_a_finite_end() {
    let rows = rows("incomplete_airy.csv");
    for moment in 0..2 {
        let mut tally = Tally::new("incomplete Airy");
        for row in &rows {
            let (x, a) = (complex(row, 0), complex(row, 2));
            let phase = Polynomial(vec![c(0.0, 0.0), x, c(0.0, 0.0), c(1.0 / 3.0, 0.0)]);
            let far = C::from_polar(3.0 + 2.0 * x.norm().sqrt() + 2.0 * a.norm(), PI / 6.0);
            let u = Integral::new(phase, Contour::starting_at([a, far]))
                .amplitude(move |t: C| t.powu(moment))
                .quadrature(1.0, 1e-12)
                .unwrap();
            let exact = complex(row, 4 + 2 * moment as usize);
            tally.add(&u, exact.into(), &row.join(","));
        }
        tally.finish(rows.len());
    }
}

#[test]
fn random_polynomial_phases_between_random_valleys() {
    let rows = rows("polynomial_phases.csv");
    let mut tally = Tally::new("polynomials");
    for row in &rows {
        let coefficients: Vec<C> = (7..row.len()).step_by(2).map(|i| complex(row, i)).collect();
        let phase = Polynomial(coefficients);
        let contour = between_valleys(&phase, number(row, 1), number(row, 2));
        let k = number(row, 0);
        let integral = Integral::new(phase, contour);
        let u = match row[3].as_str() {
            "one" => integral.quadrature(k, 1e-12),
            "cosh" => integral.amplitude(|z: C| (z * 0.5).cosh()).quadrature(k, 1e-12),
            _ => integral.amplitude(|z: C| z - 0.25).quadrature(k, 1e-12),
        }
        .unwrap();
        let exact = Scaled::new(complex(row, 4), row[6].parse().unwrap());
        tally.add(&u, exact, &row.join(","));
    }
    tally.finish(rows.len());
}

// DLMF 7.7.2: w(z) = (1/(pi i)) Int e^(-t^2)/(t - z) dt with the contour below the pole.
#[test]
fn a_pole_between_the_contour_and_the_saddle() {
    let rows = rows("faddeeva.csv");
    let mut tally = Tally::new("Faddeeva by its pole");
    for row in &rows {
        let (z, w) = (complex(row, 0), complex(row, 2));
        if z.norm() > 20.0 {
            continue;
        }
        let gauss = |t: C| (C::i() * t * t, 2.0 * C::i() * t);
        let edge = 6.0 + 2.0 * z.norm();
        let contour = if z.im > 1e-6 {
            Contour::through([c(-edge, 0.0), c(edge, 0.0)])
        } else {
            Contour::through([c(-edge, 0.0), c(z.re, z.im - 1.0), c(edge, 0.0)])
        };
        let u = Integral::new(gauss, contour)
            .amplitude(move |t: C| 1.0 / (t - z))
            .quadrature(1.0, 1e-12)
            .unwrap_or_else(|e| panic!("{row:?}: {e}"));
        tally.add(&u, (C::i() * PI * w).into(), &row.join(","));
    }
    let n = tally.ratio.len();
    assert!(n > 100);
    tally.finish(n);
}

// DLMF 7.7.1 on a path from 0: w(z) = (2/sqrt(pi)) Int_0^inf e^(-s^2 + 2 i z s) ds.
#[test]
fn error_functions_from_a_finite_end() {
    let rows = rows("faddeeva.csv");
    let mut tally = Tally::new("Faddeeva by its end");
    for row in &rows {
        let (z, w) = (complex(row, 0), complex(row, 2));
        let phase = Polynomial(vec![c(0.0, 0.0), 2.0 * z, C::i()]);
        let contour = Contour::starting_at([c(0.0, 0.0), c(3.0 + 3.0 * z.norm(), 0.0)]);
        let u = Integral::new(phase, contour)
            .quadrature(1.0, 1e-12)
            .unwrap_or_else(|e| panic!("{row:?}: {e}"));
        tally.add(&u, (w * (0.5 * PI.sqrt())).into(), &row.join(","));
    }
    tally.finish(rows.len());
}

/// Where few digits are asked for, the figure rests on the rule's error, not on rounding.
#[test]
fn loose_tolerances_are_met_and_figures_still_cover() {
    for tolerance in [1e-2, 1e-4, 1e-6, 1e-9] {
        let mut tally = Tally::new("loose");
        for row in rows("polynomial_phases.csv") {
            let coefficients: Vec<C> =
                (7..row.len()).step_by(2).map(|i| complex(&row, i)).collect();
            let phase = Polynomial(coefficients);
            let contour = between_valleys(&phase, number(&row, 1), number(&row, 2));
            let exact = Scaled::new(complex(&row, 4), row[6].parse().unwrap());
            let name = row[3].clone();
            let u = Integral::new(phase, contour)
                .amplitude(move |z: C| match name.as_str() {
                    "one" => c(1.0, 0.0),
                    "cosh" => (z * 0.5).cosh(),
                    _ => z - 0.25,
                })
                .quadrature(number(&row, 0), tolerance)
                .unwrap();
            tally.add(&u, exact, &row.join(","));
        }
        for row in rows("fold_extremes.csv").iter() {
            let u = Integral::new(fold(number(row, 1)), fold_contour())
                .quadrature(number(row, 0), tolerance)
                .unwrap();
            let exact = Scaled::new(c(0.0, number(row, 2)), row[3].parse().unwrap());
            tally.add(&u, exact, &row.join(","));
        }
        let rows = tally.ratio.len();
        assert!(rows > 200);
        tally.finish(rows);
    }
}

#[test]
fn wavenumbers_from_a_thousandth_to_ten_million() {
    let rows = rows("fold_extremes.csv");
    let mut tally = Tally::new("fold, extreme k");
    for row in &rows {
        let (k, a) = (number(row, 0), number(row, 1));
        let u = Integral::new(fold(a), fold_contour())
            .quadrature(k, 1e-12)
            .unwrap_or_else(|e| panic!("{row:?}: {e}"));
        let exact = Scaled::new(c(0.0, number(row, 2)), row[3].parse().unwrap());
        tally.add(&u, exact, &row.join(","));
    }
    tally.finish(rows.len());
}
