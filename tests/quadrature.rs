//! The yardstick against tables from arbitrary-precision arithmetic and against identities.

use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64 as C, Contour, Error, Estimate, Form, Integral, Scaled};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
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

// DLMF 9.5.4, turned: 2 pi Ai(x) = Int exp(i (t^3/3 + x t)) dt between the valleys 1 and 0.
#[test]
fn airy_function_of_complex_argument() {
    let rows = rows("airy_complex.csv");
    let mut tally = Tally::new("Airy");
    for row in &rows {
        let x = complex(row, 0);
        let phase = Polynomial(vec![c(0.0, 0.0), x, c(0.0, 0.0), c(1.0 / 3.0, 0.0)]);
        let contour = between_valleys(&phase, 1.0, 0.0);
        let u = Integral::new(phase, contour).quadrature(1.0, 1e-12).unwrap();
        tally.add(&u, (complex(row, 2) * (2.0 * PI)).into(), &row.join(","));
    }
    tally.finish(rows.len());
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

// Ball arithmetic, see polynomial_phases.py.
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

/// The signed sum of estimates that should vanish, over the largest of their figures.
fn closure(parts: &[(f64, &Estimate)]) -> f64 {
    let mut sum = Scaled::ZERO;
    let mut figure = f64::NEG_INFINITY;
    for (sign, u) in parts {
        sum = sum + u.scaled * *sign;
        figure = figure.max(u.relative_error.ln() + u.scaled.ln_norm());
    }
    (sum.ln_norm() - figure).exp() / parts.len() as f64
}

/// Any point of a square.
fn inside(size: f64) -> impl Strategy<Value = C> {
    (-size..size, -size..size).prop_map(|(x, y)| c(x, y))
}

fn any_k(from: f64, to: f64) -> impl Strategy<Value = f64> {
    (from.log10()..to.log10()).prop_map(|l| 10.0_f64.powf(l))
}

/// The residue theorem (DLMF 1.10.8) for `g = 1 + weight (z - p)^(-order)` and a quartic phase: the
/// contour above the pole minus the one below it gives -2 pi i times the residue.
fn residue_agrees(
    k: f64,
    x: (f64, f64),
    p: C,
    order: i32,
    weight: f64,
    clearance: f64,
    named: bool,
) -> bool {
    let phase = cuspoid(&[c(x.0, 0.0), c(x.1, 0.0)]);
    let value = |shift: f64| {
        let (from, to) = (C::from_polar(5.0, 1.125 * PI), C::from_polar(5.0, 0.125 * PI));
        let integral =
            Integral::new(phase.clone(), Contour::through([from, p + c(0.0, shift), to]))
                .amplitude(move |z: C| 1.0 + weight * (z - p).powi(-order));
        let integral = if named { integral.pole(p) } else { integral };
        integral.quadrature(k, 1e-10).unwrap()
    };
    let (above, below) = (value(clearance), value(-clearance));
    let f = ((p * p + x.0) * p + x.1) * p;
    let first = C::i() * k * ((4.0 * p * p + 2.0 * x.0) * p + x.1);
    let second = C::i() * k * (12.0 * p * p + 2.0 * x.0);
    let residue = match order {
        1 => c(1.0, 0.0),
        2 => first,
        _ => (first * first + second) * 0.5,
    };
    let jump = Scaled::exp(C::i() * k * f) * (residue * c(0.0, -2.0 * PI * weight));
    let miss = above.scaled + -below.scaled + -jump;
    let figure = (above.relative_error.ln() + above.scaled.ln_norm())
        .max(below.relative_error.ln() + below.scaled.ln_norm());
    // The jump itself is rounded: k f in double precision.
    let rounding = jump.ln_norm() + (8.0 * f64::EPSILON * (1.0 + k * 30.0)).ln();
    let top = figure.max(rounding);
    miss.ln_norm() < top + (2.0 * (figure - top).exp() + (rounding - top).exp()).ln()
}

// Poles that no local test sees: found by the loop integral at the end.
#[test]
fn weak_poles_are_found() {
    let mut state = 1_u64;
    let mut random = |from: f64, to: f64| {
        // A linear congruence modulo 2^64 (common practice), the upper bits.
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        from + (to - from) * (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    let mut right = 0;
    let total = 600;
    for n in 0..total {
        let k = 10.0_f64.powf(random(0.0, 4.0));
        let x = (random(-3.0, 3.0), random(-2.0, 2.0));
        let p = c(random(-2.0, 2.0), random(-2.0, 2.0));
        let weight = 10.0_f64.powf(random(-8.0, -4.0));
        right += i32::from(residue_agrees(k, x, p, 1 + n % 2, weight, random(0.05, 1.0), false));
    }
    println!("weak poles: {right} of {total}");
    assert!(1000 * right >= 995 * total, "{right} of {total}");
}

// Integral e^(-k t^2)/(t - q) dt over the real line is i pi w(sqrt(k) q), Im q > 0 (DLMF 7.7.2), and for the double
// pole its derivative in q (DLMF 7.10.2). The contour passes the pole as close as 1e-7, off the origin, so
// that its nodes are rounded.
#[test]
fn figures_cover_next_to_simple_and_double_poles() {
    use merging_saddles::special::faddeeva::w;
    let mut state = 3_u64;
    let mut random = |from: f64, to: f64| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        from + (to - from) * (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    for n in 0..1000 {
        let k = 10.0_f64.powf(random(0.0, 4.0));
        let side = if n % 2 == 0 { 1.0 } else { -1.0 };
        let p = c(1.0 + random(-3.0, 3.0) / k.sqrt(), side * 10.0_f64.powf(random(-7.0, -1.0)));
        let q = p - 1.0;
        let simple = C::from_polar(random(0.0, 1.0), random(0.0, 2.0 * PI));
        let double = C::from_polar(random(0.0, 1.0), random(0.0, 2.0 * PI));
        let double = if n % 3 == 0 { c(0.0, 0.0) } else { double };
        let g = move |z: C| {
            let inverse = (z - p).inv();
            (double * inverse + simple) * inverse
        };
        let f = |z: C| ((z - 1.0) * (z - 1.0) * C::i(), (z - 1.0) * c(0.0, 2.0));
        let got = Integral::new(f, Contour::through([c(-4.0, 0.0), c(6.0, 0.0)]))
            .amplitude(g)
            .quadrature(k, 1e-13)
            .unwrap();
        let x = q * k.sqrt() * side;
        let first = w(x);
        let slope = -2.0 * x * first + c(0.0, 2.0 / PI.sqrt());
        let (one, two) = (simple * first * side, double * slope * k.sqrt());
        let miss = (got.value - c(0.0, PI) * (one + two)).norm();
        // w to 1.3e-15 (its own test), and what its derivative is a difference of.
        let terms = 2.0 * x.norm() * first.norm() + 2.0 / PI.sqrt();
        let rounding = 1.5e-15 * PI * (one.norm() + double.norm() * k.sqrt() * terms);
        assert!(miss <= got.error + rounding, "k {k} p {p}: {miss:e} {:e}", got.error);
    }
}

// A contour led through a cluster of saddles that it need not cross: far above the pass, over several
// ridges. Its crossings cancel and must not be left in.
#[test]
fn clusters_that_need_not_be_crossed_are_left() {
    let mut state = 8_u64;
    let mut random = |from: f64, to: f64| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        from + (to - from) * (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    let mut worst = 0.0_f64;
    for n in 0..400 {
        let centre = C::from_polar(random(0.0, 1.0), random(0.0, 2.0 * PI));
        let size = 10.0_f64.powf(random(-5.0, -1.0));
        let mut slope = vec![C::from_polar(random(0.3, 2.0), random(0.0, 2.0 * PI))];
        for m in 0..3 + n % 3 {
            let off = if m < 3 { size } else { random(1.0, 2.0) };
            let s = centre + C::from_polar(off, random(0.0, 2.0 * PI));
            let mut next = vec![c(0.0, 0.0); slope.len() + 1];
            for (j, a) in slope.iter().enumerate() {
                next[j + 1] += a;
                next[j] -= a * s;
            }
            slope = next;
        }
        let degree = slope.len();
        let terms = slope.iter().enumerate().map(|(j, a)| a / (j + 1) as f64);
        let phase = Polynomial(std::iter::once(c(0.0, 0.0)).chain(terms).collect());
        let lead = phase.0[degree].arg();
        let valley =
            |v: usize| C::from_polar(9.0, (0.5 * PI - lead + 2.0 * PI * v as f64) / degree as f64);
        let k = 10.0_f64.powf(random(1.0, 3.5));
        let value = |middle: C| {
            let points = [valley(0), middle, valley(1 + n % (degree - 1))];
            Integral::new(phase.clone(), Contour::through(points)).quadrature(k, 1e-12).unwrap()
        };
        let (through, beside) = (value(centre), value(centre + C::from_polar(1.0, 1.0)));
        assert!(closure(&[(1.0, &through), (-1.0, &beside)]) < 1.0, "{n} k {k}");
        worst = worst.max(through.relative_error);
    }
    println!("through clusters: figures up to {worst:.1e}");
    assert!(worst < 1e-9);
}

// However weak a pole is: if it was named, the contour may be drawn across it.
#[test]
fn named_poles_of_any_weight_count() {
    let mut state = 5_u64;
    let mut random = |from: f64, to: f64| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        from + (to - from) * (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    for n in 0..600 {
        let k = 10.0_f64.powf(random(0.0, 4.0));
        let x = (random(-3.0, 3.0), random(-2.0, 2.0));
        let p = c(random(-2.0, 2.0), random(-2.0, 2.0));
        let weight = 10.0_f64.powf(random(-18.0, -4.0));
        let clearance = random(0.05, 1.0);
        let right = residue_agrees(k, x, p, 1 + n % 2, weight, clearance, true);
        assert!(right, "k {k} x {x:?} p {p} order {} weight {weight:e}", 1 + n % 2);
    }
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 200,
        rng_seed: RngSeed::Fixed(36),
        failure_persistence: None,
        ..ProptestConfig::default()
    })]

    // Cauchy's theorem: sinh-like phases with towers of saddles, any way from valley to valley.
    #[test]
    fn the_way_between_the_ends_does_not_matter(
        k in any_k(1e-2, 1e5),
        a in inside(1.5),
        b in inside(0.2),
        valleys in (0..3_i32, 0..3_i32),
        ways in (proptest::collection::vec(inside(4.0), 1..5), proptest::collection::vec(inside(4.0), 1..5)),
    ) {
        let f = move |z: C| {
            let h = (z.sinh() - a * z + b * z * z, z.cosh() - a + 2.0 * b * z);
            (-C::i() * h.0, -C::i() * h.1)
        };
        let end = |n: i32| c(5.0, PI * f64::from(2 * n + 1));
        let value = |way: &[C]| {
            let mut points = vec![end(-1 - valleys.0)];
            points.extend(way);
            points.push(end(valleys.1));
            Integral::new(f, Contour::through(points))
                .amplitude(|z: C| (z * 0.3).cos())
                .quadrature(k, 1e-11)
                .unwrap()
        };
        prop_assert!(closure(&[(1.0, &value(&ways.0)), (-1.0, &value(&ways.1))]) < 1.0);
    }

    #[test]
    fn pieces_add_up_and_amplitudes_are_linear(
        k in any_k(1e-2, 1e5),
        a in inside(2.0),
        b in inside(1.0),
        points in (inside(2.0), inside(2.0), inside(2.0), inside(2.0)),
        weight in inside(2.0),
    ) {
        let f = move |z: C| (z * z * z / 3.0 + b * z.cos() + a * z, z * z - b * z.sin() + a);
        let (start, way, cut, end) = points;
        let value = |path: &[C], u: C, v: C| {
            Integral::new(f, Contour::between(path.iter().copied()))
                .amplitude(move |z: C| u * (z * 0.5).exp() + v * z * z)
                .quadrature(k, 1e-11)
                .unwrap()
        };
        let one = c(1.0, 0.0);
        let whole = value(&[start, end], one, weight);
        let first = value(&[start, way, cut], one, weight);
        let second = value(&[cut, end], one, weight);
        prop_assert!(closure(&[(1.0, &first), (1.0, &second), (-1.0, &whole)]) < 1.0);
        let exponential = value(&[start, end], one, c(0.0, 0.0));
        let square = value(&[start, end], c(0.0, 0.0), weight);
        prop_assert!(closure(&[(1.0, &exponential), (1.0, &square), (-1.0, &whole)]) < 1.0);
    }

    #[test]
    fn poles_stay_on_their_side(
        k in any_k(1.0, 1e4),
        x in (-3.0..3.0_f64, -2.0..2.0_f64),
        p in inside(2.0),
        order in 1..4_i32,
        weight in any_k(1e-4, 1.0),
        clearance in 0.05..1.0_f64,
    ) {
        prop_assert!(residue_agrees(k, x, p, order, weight, clearance, false));
    }

    // A square root whose cut is turned away from the contour by two different angles.
    #[test]
    fn branch_cuts_are_not_crossed(
        k in any_k(0.1, 300.0),
        branch in (-1.5..1.5_f64, -2.0..2.0_f64).prop_map(|(x, y)| c(x, y)),
        x in inside(2.0),
        clearance in 0.1..1.0_f64,
        turns in (1.2..1.95_f64, 1.2..1.95_f64),
    ) {
        let phase = cuspoid(&[x, c(0.5, 0.0)]);
        let low = c(branch.re, -3.0);
        let value = |turn: f64| {
            let half = C::from_polar(1.0, 0.5 * (turn - PI));
            let points = [
                C::from_polar(5.0, 1.125 * PI),
                low,
                branch - c(0.0, clearance),
                low,
                C::from_polar(5.0, 0.125 * PI),
            ];
            Integral::new(phase.clone(), Contour::through(points))
                .amplitude(move |z: C| half * ((z - branch) / (half * half)).sqrt())
                .quadrature(k, 1e-11)
                .unwrap()
        };
        prop_assert!(closure(&[(1.0, &value(turns.0)), (-1.0, &value(turns.1))]) < 1.0);
    }
}

// DLMF 5.9.2 with t = k w: 1/Gamma(k) = k^(1-k)/(2 pi i) Int e^(k (w - ln w)) dw round the cut.
#[test]
fn hankel_loop_round_a_logarithm() {
    // Gamma(1/2) = sqrt(pi) (DLMF 5.4.6), Gamma(3) = 2, Gamma(11) = 10!.
    for (k, gamma) in [(0.5, PI.sqrt()), (3.0, 2.0), (11.0, 3_628_800.0)] {
        let f = |w: C| (-C::i() * (w - w.ln()), -C::i() * (1.0 - 1.0 / w));
        let contour = Contour::through([c(-5.0, -0.5), c(1.0, -0.5), c(1.0, 0.5), c(-5.0, 0.5)]);
        let u = Integral::new(f, contour).quadrature(k, 1e-13).unwrap();
        let exact = c(0.0, 2.0 * PI) * f64::powf(k, k - 1.0) / gamma;
        assert!((u.value - exact).norm() < u.error, "k = {k}: {} against {exact}", u.value);
        assert!(u.relative_error < 1e-12);
    }
}

// DLMF 10.9.19 (Schlaefli) as a closed loop: J_3(1), DLMF 10.2.2 summed in the test.
#[test]
fn closed_loop_round_an_essential_singularity() {
    let f = |w: C| (-C::i() * 0.5 * (w - 1.0 / w), -C::i() * 0.5 * (1.0 + 1.0 / (w * w)));
    let circle = (0..=16).map(|j| C::from_polar(1.0, -PI + f64::from(j) * PI / 8.0));
    let u = Integral::new(f, Contour::between(circle))
        .amplitude(|w: C| w.powi(-4) / c(0.0, 2.0 * PI))
        .quadrature(1.0, 1e-12)
        .unwrap();
    let mut term = 0.5_f64.powi(3) / 6.0;
    let mut sum = 0.0;
    for n in 1..20 {
        sum += term;
        term *= -0.25 / (f64::from(n) * f64::from(n + 3));
    }
    assert!((u.value - sum).norm() < u.error && u.error < 1e-12, "{u:?} against {sum}");
}

// Gamma(1/2) = sqrt(pi), DLMF 5.4.6: an amplitude with an integrable singularity at a finite end;
// turned by 90 degrees, so that the contour has to leave the real axis.
#[test]
fn an_algebraic_end_converges() {
    let u =
        Integral::new(|z: C| (z, c(1.0, 0.0)), Contour::starting_at([c(0.0, 0.0), c(1.0, 0.0)]))
            .amplitude(|z: C| 1.0 / z.sqrt())
            .quadrature(1.0, 1e-10)
            .unwrap();
    let exact = C::from_polar(PI.sqrt(), 0.25 * PI);
    assert!((u.value - exact).norm() < u.error && u.error < 1e-9, "{u:?}");
}

#[test]
fn slow_tails_and_growing_amplitudes_are_followed() {
    // Int_1^inf z^(-3/2) dz = 2.
    let log = |z: C| (C::i() * z.ln(), C::i() / z);
    let u = Integral::new(log, Contour::starting_at([c(1.0, 0.0), c(2.0, 0.0)]))
        .quadrature(1.5, 1e-10)
        .unwrap();
    assert!((u.value - 2.0).norm() < u.error && u.error < 1e-9, "{u:?}");
    // Int e^(-z^2 + 10 z) dz = sqrt(pi) e^25 with the growing factor in the amplitude.
    let gauss = |z: C| (C::i() * z * z, 2.0 * C::i() * z);
    let line = Contour::through([c(-3.0, 0.0), c(3.0, 0.0)]);
    let u = Integral::new(gauss, line).amplitude(|z: C| (10.0 * z).exp()).quadrature(1.0, 1e-12);
    let u = u.unwrap();
    assert!((u.value - PI.sqrt() * 25.0_f64.exp()).norm() < u.error, "{u:?}");
    assert!(u.relative_error < 1e-11);
}

// A contour on the real axis has to leave it: no cost that grows with k.
#[test]
fn fresnel_integral_from_a_flat_contour() {
    for k in [1e2, 1e4, 1e6] {
        let f = |z: C| (z * z, 2.0 * z);
        let value = |contour| Integral::new(f, contour).quadrature(k, 1e-12).unwrap();
        let piece = value(Contour::between([c(0.0, 0.0), c(1.0, 0.0)]));
        let rest = value(Contour::starting_at([c(1.0, 0.0), c(2.0, 0.5)]));
        assert!(evaluations(&piece) < 1000, "k = {k}: {}", evaluations(&piece));
        // Half of Int exp(i k z^2) dz = sqrt(pi/k) e^(i pi/4), DLMF 7.2.9 at infinity.
        let half = C::from_polar(0.5 * (PI / k).sqrt(), 0.25 * PI);
        assert!((piece.value + rest.value - half).norm() < piece.error + rest.error + 1e-16);
        assert!(piece.relative_error < 1e-9);
    }
}

// Ai(10^(2/3)) by DLMF 9.5.4 with the third valley visited on the way: the two crossings of the
// saddle -i are e^13 times the value and cancel.
#[test]
fn detours_are_cut_off() {
    let f = |t: C| (t * t * t / 3.0 + t, t * t + 1.0);
    let (from, to) = (C::from_polar(2.0, PI * 5.0 / 6.0), C::from_polar(2.0, PI / 6.0));
    let value = |way: &[C]| {
        let points = [&[from], way, &[to]].concat();
        Integral::new(f, Contour::through(points)).quadrature(10.0, 1e-12).unwrap()
    };
    let plain = value(&[]);
    let low = c(0.0, -3.0);
    for way in [vec![low, c(0.0, 3.0)], vec![low, c(4.0, -3.0), low, c(0.0, 3.0)], vec![low]] {
        let u = value(&way);
        assert!(closure(&[(1.0, &u), (-1.0, &plain)]) < 1.0);
        assert!(u.relative_error < 1e-12, "{way:?}: {u:?}");
    }
}

// The end's contribution e^(i k z^2)/(2 i k z) (DLMF 2.3.2) has turned 10^10 times against the
// saddle's, sqrt(pi/k) e^(i pi/4)/2: no digit of either may be lost.
#[test]
fn contributions_far_apart_in_phase() {
    let (k, end) = (1e3_f64, 1e4_f64);
    let u = Integral::new(|z: C| (z * z, 2.0 * z), Contour::between([c(0.0, 0.0), c(end, 0.0)]))
        .quadrature(k, 1e-12)
        .unwrap();
    // k end^2 = 10^11 is exact; the next term is smaller by 1/(2 k end^2).
    let edge = C::from_polar(1.0 / (2.0 * k * end), k * end * end - 0.5 * PI);
    let exact = C::from_polar(0.5 * (PI / k).sqrt(), 0.25 * PI) + edge;
    assert!((u.value - exact).norm() < u.error && u.relative_error < 1e-9, "{u:?}");
}

// DLMF 10.9.1 with all ends on the real axis: Int_0^(2 pi m) e^(i k cos t) dt = 2 pi m J_0(k).
#[test]
fn many_saddles_of_equal_height() {
    let f = |z: C| (z.cos(), -z.sin());
    let value = |k: f64, turns: f64| {
        Integral::new(f, Contour::between([c(0.0, 0.0), c(2.0 * PI * turns, 0.0)]))
            .quadrature(k, 1e-11)
            .unwrap()
    };
    // J_0(1) by its power series, DLMF 10.2.2.
    let mut term = 1.0;
    let mut sum = 0.0;
    for n in 1..20 {
        sum += term;
        term *= -0.25 / f64::from(n * n);
    }
    let one = value(1.0, 1.0);
    assert!((one.value - 2.0 * PI * sum).norm() < one.error, "{one:?}");
    for k in [10.0, 1e4] {
        let (single, many) = (value(k, 1.0), value(k, 50.0));
        assert!((many.value - single.value * 50.0).norm() < many.error + 50.0 * single.error);
        assert!(many.relative_error < 1e-8);
    }
}

#[test]
fn what_cannot_be_answered_is_refused() {
    let line = || Contour::through([c(-3.0, 0.0), c(3.0, 0.0)]);
    let square = |z: C| (z * z, 2.0 * z);
    let plain = Integral::new(square, line());
    for k in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert!(matches!(plain.quadrature(k, 1e-10), Err(Error::Domain { .. })), "k = {k}");
        assert!(matches!(plain.quadrature(1.0, k), Err(Error::Domain { .. })), "tolerance = {k}");
    }
    let nan = c(f64::NAN, 0.0);
    let bad = Integral::new(move |z: C| (z * z, nan), line()).quadrature(1.0, 1e-10);
    assert!(matches!(bad, Err(Error::NotFinite { .. })), "{bad:?}");
    let bad = Integral::new(square, line()).amplitude(move |_: C| nan).quadrature(1.0, 1e-10);
    assert!(matches!(bad, Err(Error::NotFinite { what: "amplitude", .. })), "{bad:?}");
    // No valley at the ends.
    let flat = Integral::new(|_: C| (c(0.0, 0.0), c(0.0, 0.0)), line()).quadrature(1.0, 1e-10);
    assert!(matches!(flat, Err(Error::Undecided { .. })), "{flat:?}");
    let on_saddle = Contour::through([c(-3.0, 0.0), c(0.0, 0.0)]);
    let bad = Integral::new(square, on_saddle).quadrature(1.0, 1e-10);
    assert!(matches!(bad, Err(Error::Undecided { .. })), "{bad:?}");
    // A derivative that is not that of the value, and a value that is not analytic.
    let bad = Integral::new(|z: C| (z * z, 3.0 * z), line()).quadrature(1.0, 1e-10);
    assert!(matches!(bad, Err(Error::Undecided { .. })), "{bad:?}");
    let bad = Integral::new(|z: C| (z * z.conj(), 2.0 * z), line()).quadrature(1.0, 1e-10);
    assert!(bad.is_err(), "{bad:?}");
    // A contour across a branch cut.
    let across = Contour::between([c(-1.0, 1.0), c(-1.0, -1.0)]);
    let bad = Integral::new(|z: C| (z.ln(), 1.0 / z), across).quadrature(10.0, 1e-10);
    assert!(matches!(bad, Err(Error::Undecided { .. })), "{bad:?}");
    // No digit left: the phase is unknown by many turns.
    let bad = Integral::new(|z: C| (1e17 + z * z, 2.0 * z), line()).quadrature(10.0, 1e-10);
    assert!(matches!(bad, Err(Error::NoDigits { .. })), "{bad:?}");
    // Too slow a decay: z^(-1/2) has no integral to infinity.
    let log = Contour::starting_at([c(1.0, 0.0), c(2.0, 0.0)]);
    let bad = Integral::new(|z: C| (C::i() * z.ln(), C::i() / z), log).quadrature(0.5, 1e-10);
    assert!(bad.is_err(), "{bad:?}");
}
