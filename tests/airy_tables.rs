//! The Airy family against tables of 22 digits (the header of each says how it was made).
//!
//! The measure: an error of f counts against `max(|f|, |f'|/sqrt(1+|z|))`, one of f' against
//! `max(|f'|, |f| sqrt(1+|z|))`; for real x < 0 against the moduli `sqrt(Ai^2+Bi^2)` and
//! `sqrt(Ai'^2+Bi'^2)`.

use merging_saddles::special::airy::*;
use merging_saddles::{Complex64, Scaled};

/// The fields of a table in tests/data.
fn fields(name: &str) -> Vec<Vec<String>> {
    let path = format!("{}/tests/data/{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader =
        csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).expect("the table is there");
    reader.records().map(|row| row.unwrap().iter().map(String::from).collect()).collect()
}

/// The rows of a table of numbers.
fn table(name: &str) -> Vec<Vec<f64>> {
    let number = |x: &String| x.parse().expect("a number");
    fields(name).iter().map(|row| row.iter().map(number).collect()).collect()
}

/// Complex numbers from a row of real and imaginary parts.
fn complex(row: &[f64]) -> Vec<Complex64> {
    row.chunks(2).map(|p| Complex64::new(p[0], p[1])).collect()
}

/// Prints maximum, 99th percentile and median, and checks the first two.
fn judge(what: &str, mut errors: Vec<f64>, max: f64, p99: f64) {
    assert!(errors.len() >= 50 && errors.iter().all(|e| !e.is_nan()), "{what}: NaN or too few");
    errors.sort_by(f64::total_cmp);
    let at = |q: f64| errors[((errors.len() - 1) as f64 * q).round() as usize];
    let line = format!("{what}: max {:.2e}, p99 {:.2e}, median {:.2e}", at(1.0), at(0.99), at(0.5));
    println!("{line}");
    assert!(at(1.0) <= max && at(0.99) <= p99, "{line}");
}

/// Errors of f and f' on the natural scale at a point of modulus `r`.
fn natural(value: [Complex64; 2], exact: [Complex64; 2], r: f64) -> [f64; 2] {
    let root = (1.0 + r).sqrt();
    let (f, g) = (exact[0].norm(), exact[1].norm());
    [(value[0] - exact[0]).norm() / f.max(g / root), (value[1] - exact[1]).norm() / g.max(f * root)]
}

fn four<T: Copy>(v: Airy<T>) -> [T; 4] {
    [v.ai, v.ai_prime, v.bi, v.bi_prime]
}

fn natural_four(v: Airy<Complex64>, exact: &[Complex64], r: f64) -> Vec<f64> {
    let v = four(v);
    let mut out = natural([v[0], v[1]], [exact[0], exact[1]], r).to_vec();
    out.extend(natural([v[2], v[3]], [exact[2], exact[3]], r));
    out
}

#[test]
fn complex_argument() {
    let (mut plain, mut apart, mut alone) = (vec![], vec![], vec![]);
    for row in table("airy_complex") {
        let row = complex(&row);
        let z = row[0];
        plain.extend(natural_four(airy(z), &row[1..], z.norm()));
        alone.push(natural([ai(z), row[2]], [row[1], row[2]], z.norm())[0]);
        alone.push(natural([bi(z), row[4]], [row[3], row[4]], z.norm())[0]);
        let extended = four(airy_extended(z)).map(Scaled::to_complex);
        let [ai, ai_prime, bi, bi_prime] = extended;
        apart.extend(natural_four(Airy { ai, ai_prime, bi, bi_prime }, &row[1..], z.norm()));
    }
    judge("complex, alone", alone, 2e-15, 6e-16);
    judge("complex", plain, 2e-15, 6e-16);
    judge("complex, exponent apart", apart, 2e-15, 6e-16);
}

#[test]
fn complex_argument_scaled() {
    let mut errors = vec![];
    for row in table("airy_scaled") {
        let row = complex(&row);
        errors.extend(natural_four(airy_scaled(row[0]), &row[1..], row[0].norm()));
    }
    judge("scaled", errors, 2e-15, 6e-16);
}

/// One exact value with the exponent apart (three fields: the exponent can exceed 2^53).
fn exact(fields: &[String]) -> (Complex64, i64) {
    let part = |i: usize| fields[i].parse().expect("a number");
    (Complex64::new(part(0), part(1)), fields[2].parse().expect("an integer"))
}

/// A value and its derivative with the exponent apart, judged at the exponent of the exact value.
fn apart(value: [Scaled; 2], fields: &[String], r: f64) -> [f64; 2] {
    let ((f, top), (g, other)) = (exact(fields), exact(&fields[3..]));
    let g = g * 2f64.powi((other - top) as i32);
    natural(value.map(|v| v.mantissa_at(top)), [f, g], r)
}

#[test]
fn exponent_apart_and_rotated() {
    let (mut near, mut far, mut rotation) = (vec![], vec![], vec![]);
    for row in fields("airy_extended") {
        let z = Complex64::new(row[0].parse().unwrap(), row[1].parse().unwrap());
        let r = z.norm();
        let (v, w) = (airy_extended(z), rotated_extended(z));
        let mut errors = apart([v.ai, v.ai_prime], &row[2..8], r).to_vec();
        errors.extend(apart([v.bi, v.bi_prime], &row[8..14], r));
        errors.extend(apart([w.plus, w.plus_prime], &row[14..20], r));
        errors.extend(apart([w.minus, w.minus_prime], &row[20..26], r));
        if r <= 100.0 {
            let p = rotated(z);
            let parts = |a: Complex64, b: Complex64| [Scaled::from(a), Scaled::from(b)];
            rotation.extend(apart(parts(p.plus, p.plus_prime), &row[14..20], r));
            rotation.extend(apart(parts(p.minus, p.minus_prime), &row[20..26], r));
        }
        if r <= 1e6 { near.extend(errors) } else { far.extend(errors) }
    }
    judge("rotated", rotation, 2e-15, 6e-16);
    judge("exponent apart, |z| <= 1e6", near, 2e-15, 6e-16);
    // The phase of up to 10^18 in double-double is what limits these.
    judge("exponent apart, |z| <= 1e12", far, 1e-14, 1e-14);
}

#[test]
fn real_argument() {
    let (mut plain, mut alone, mut scaled) = (vec![], vec![], vec![]);
    for row in table("airy_real") {
        let x = row[0];
        let exact = &row[1..];
        let root = (1.0 + x.abs()).sqrt();
        let scales = if x < 0.0 {
            let (m, n) = (exact[0].hypot(exact[2]), exact[1].hypot(exact[3]));
            [m, n, m, n]
        } else {
            let pair = |f: f64, g: f64| [f.abs().max(g.abs() / root), g.abs().max(f.abs() * root)];
            let (a, b) = (pair(exact[0], exact[1]), pair(exact[2], exact[3]));
            [a[0], a[1], b[0], b[1]]
        };
        let v = four(airy_real(x));
        plain.extend((0..4).map(|i| (v[i] - exact[i]).abs() / scales[i]));
        alone.push((ai_real(x) - exact[0]).abs() / scales[0]);
        alone.push((bi_real(x) - exact[2]).abs() / scales[2]);
        // The scaled values where the exponential is known without effort.
        if (0.0..1e-12).contains(&x.abs()) {
            let v = four(airy_real_scaled(x));
            scaled.extend((0..4).map(|i| (v[i] - exact[i]).abs() / scales[i]));
        }
    }
    judge("real, alone", alone, 1e-15, 6e-16);
    judge("real", plain, 1e-15, 6e-16);
    assert!(scaled.iter().all(|e| *e < 1e-15) && scaled.len() >= 4);
}

#[test]
fn real_zeros() {
    let mut errors = vec![];
    for row in table("airy_zeros") {
        let k = row[0] as usize;
        for (i, zero) in
            [ai_zero(k), ai_prime_zero(k), bi_zero(k), bi_prime_zero(k)].iter().enumerate()
        {
            let zero = zero.as_ref().expect("k is at least 1");
            errors.push((zero.location / row[2 * i + 1] - 1.0).abs());
            errors.push((zero.value / row[2 * i + 2] - 1.0).abs());
        }
    }
    judge("real zeros", errors, 1e-15, 1e-15);
    assert!(ai_zero(0).is_err() && bi_complex_zero(0).is_err());
}

#[test]
fn complex_zeros() {
    let mut errors = vec![];
    for row in table("airy_complex_zeros") {
        let k = row[0] as usize;
        let exact = complex(&row[1..]);
        for (i, zero) in [bi_complex_zero(k), bi_prime_complex_zero(k)].iter().enumerate() {
            let zero = zero.as_ref().expect("k is at least 1");
            errors.push((zero.location / exact[2 * i] - 1.0).norm());
            errors.push((zero.value / exact[2 * i + 1] - 1.0).norm());
        }
    }
    judge("complex zeros", errors, 1e-15, 1e-15);
}

/// Relative to the modulus.
fn relative(value: Complex64, exact: Complex64) -> f64 {
    if exact.norm() == 0.0 { value.norm() } else { (value - exact).norm() / exact.norm() }
}

#[test]
fn scorer_functions() {
    let (mut errors, mut far, mut scale) = (vec![], vec![], vec![]);
    let rows =
        table("scorer").into_iter().chain(table("airy_integrals").into_iter().map(|mut r| {
            r.drain(2..6);
            r
        }));
    for row in rows {
        let row = complex(&row);
        let (z, r) = (row[0], row[0].norm());
        let v = scorer(z);
        let values = [v.gi, v.gi_prime, v.hi, v.hi_prime];
        let list = if r <= 25.0 { &mut errors } else { &mut far };
        list.extend((0..4).map(|i| relative(values[i], row[i + 1])));
        scale.extend(natural([values[0], values[1]], [row[1], row[2]], r));
        scale.extend(natural([values[2], values[3]], [row[3], row[4]], r));
    }
    // Two of the points lie close to zeros: 2e-14 and 3e-15 there.
    judge("scorer |z| <= 25, relative", errors, 3e-14, 1e-15);
    judge("scorer |z| <= 100, relative", far, 1e-15, 1e-15);
    judge("scorer, natural scale", scale, 2e-15, 1e-15);
}

#[test]
fn integrals_of_ai() {
    let (mut zero, mut infinity) = (vec![], vec![]);
    for row in table("airy_integrals") {
        let row = complex(&row);
        let v = ai_integral(row[0]);
        zero.push(relative(v.from_zero, row[1]));
        infinity.push(relative(v.to_infinity, row[2]));
    }
    judge("integral of Ai from 0", zero, 1e-15, 1e-15);
    judge("integral of Ai to infinity", infinity, 1e-15, 1e-15);
}

/// theta(a_k) = k pi, theta(b_k) = (k - 1/2) pi, phi(a'_k) = (k - 1) pi, phi(b'_k) = (k - 1/2) pi
/// (DLMF 9.8.3, 9.8.7 with the values at 0), and the moduli from the values there.
#[test]
fn modulus_and_phase() {
    use std::f64::consts::PI;
    let mut errors = vec![];
    for row in table("airy_zeros") {
        let k = row[0];
        let at = |i: usize| modulus_phase(row[i]).expect("zeros are negative");
        let (a, a1, b, b1) = (at(1), at(3), at(5), at(7));
        let phases = [
            (a.phase, k),
            (a1.prime_phase, k - 1.0),
            (b.phase, k - 0.5),
            (b1.prime_phase, k - 0.5),
        ];
        errors.extend(
            phases.map(|(value, turns)| (value - turns * PI).abs() / (turns * PI).max(1.0)),
        );
        // At a zero of one function the other is the modulus; by the Wronskian (DLMF 9.2.7) it is
        // 1/(pi |value|), value being what the table lists beside the zero.
        for (modulus, value) in [
            (a.modulus, row[2]),
            (a1.prime_modulus, row[4]),
            (b.modulus, row[6]),
            (b1.prime_modulus, row[8]),
        ] {
            errors.push((modulus * value.abs() * PI - 1.0).abs());
        }
        // DLMF 9.8.13.
        for v in [a, a1, b, b1] {
            let sine = (v.phase - v.prime_phase).sin();
            // The phases themselves are rounded: their last place times the slope of the sine.
            let tolerance =
                4.0 * f64::EPSILON * (1.0 + v.phase.abs() * v.modulus * v.prime_modulus);
            assert!((v.modulus * v.prime_modulus * sine * PI - 1.0).abs() <= 4.0 * tolerance);
        }
    }
    judge("modulus and phase", errors, 1e-15, 1e-15);
}

#[test]
fn incomplete_integrals() {
    let (mut errors, mut far) = (vec![], vec![]);
    for row in table("incomplete_airy") {
        let row = complex(&row);
        let v = incomplete_airy(row[0], row[1]).expect("finite arguments of moderate size");
        errors.extend([relative(v.i0, row[2]), relative(v.i1, row[3])]);
    }
    for row in fields("incomplete_airy_far") {
        let number = |i: usize| -> f64 { row[i].parse().unwrap() };
        let (x, a) = (Complex64::new(number(0), number(1)), Complex64::new(number(2), number(3)));
        let v = incomplete_airy_extended(x, a).expect("finite arguments of moderate size");
        for (value, fields) in [(v.i0, &row[4..7]), (v.i1, &row[7..10])] {
            let (digits, exponent) = exact(fields);
            far.push(relative(value.mantissa_at(exponent), digits));
        }
    }
    judge("incomplete Airy", errors, 2e-15, 2e-15);
    judge("incomplete Airy, larger arguments", far, 5e-15, 5e-15);
}
