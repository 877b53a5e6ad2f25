//! The Faddeeva function and its kin against tables of 22 digits (the header of each says how it was
//! made), published values, and identities.
//!
//! The measure: |computed - exact| / |exact|, both components together; in the upper half plane for w
//! also each component on its own.

use merging_saddles::special::faddeeva::*;
use merging_saddles::{Complex64 as C, Scaled};
use proptest::prelude::*;

/// The rows of a table in tests/data.
fn table(name: &str) -> Vec<Vec<f64>> {
    let path = format!("{}/tests/data/{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader =
        csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).expect("the table is there");
    let number = |x: &str| x.parse().expect("a number");
    reader.records().map(|row| row.unwrap().iter().map(number).collect()).collect()
}

/// Prints maximum, 99th percentile and median, and checks the first two.
fn judge(what: &str, mut errors: Vec<f64>, max: f64, p99: f64) {
    assert!(errors.len() >= 30 && errors.iter().all(|e| !e.is_nan()), "{what}: NaN or too few");
    errors.sort_by(f64::total_cmp);
    let at = |q: f64| errors[((errors.len() - 1) as f64 * q).round() as usize];
    let line = format!("{what}: max {:.2e}, p99 {:.2e}, median {:.2e}", at(1.0), at(0.99), at(0.5));
    println!("{line}");
    assert!(at(1.0) <= max && at(0.99) <= p99, "{line}");
}

fn relative(value: C, exact: C) -> f64 {
    if value == exact { 0.0 } else { (value - exact).norm() / exact.norm() }
}

/// Each component on its own.
fn by_component(value: C, exact: C) -> f64 {
    let one = |v: f64, e: f64| if v == e { 0.0 } else { ((v - e) / e).abs() };
    one(value.re, exact.re).max(one(value.im, exact.im))
}

#[test]
fn w_against_the_table() {
    let (mut all, mut parts) = (vec![], vec![]);
    for row in table("faddeeva") {
        let (z, exact) = (C::new(row[0], row[1]), C::new(row[2], row[3]));
        all.push(relative(w(z), exact));
        if all[all.len() - 1] > 2e-15 { println!("{row:?} {:e}", all[all.len() - 1]); }
        if z.im >= 0.0 {
            parts.push(by_component(w(z), exact));
            if parts[parts.len() - 1] > 2e-15 { println!("part {row:?} {:e}", parts[parts.len() - 1]); }
        }
    }
    judge("w", all, 4e-15, 2e-15);
    judge("w, upper half plane, each component", parts, 4e-15, 2e-15);
}

#[test]
fn w_with_the_exponent_apart() {
    let mut errors = vec![];
    for row in table("faddeeva_extended") {
        let v = w_extended(C::new(row[0], row[1]));
        errors.push(relative(v.mantissa_at_power(row[4] as i64), C::new(row[2], row[3])));
    }
    judge("w, exponent apart", errors, 4e-15, 2e-15);
}

/// `value / 2^exponent`.
trait AtPower {
    fn mantissa_at_power(self, exponent: i64) -> C;
}

impl AtPower for Scaled {
    fn mantissa_at_power(self, exponent: i64) -> C {
        Scaled { exponent: self.exponent - exponent, ..self }.to_complex()
    }
}

#[test]
fn error_functions_against_the_table() {
    let names = ["erf", "erfc", "Dawson", "F", "C", "S"];
    let mut errors: [Vec<f64>; 6] = Default::default();
    let mut real: [Vec<f64>; 6] = Default::default();
    for row in table("error_functions") {
        let z = C::new(row[0], row[1]);
        let exact: Vec<C> = row[2..].chunks(2).map(|p| C::new(p[0], p[1])).collect();
        let f = fresnel(z);
        let values = [erf(z), erfc(z), dawson(z), complex_fresnel(z), f.c, f.s];
        for k in 0..6 {
            let e = relative(values[k], exact[k]);
            if e > 2e-15 { println!("{} {z} {} {} {e:e}", names[k], values[k], exact[k]); }
            errors[k].push(e);
        }
        if z.im == 0.0 {
            let f = fresnel_real(z.re);
            let values =
                [erf_real(z.re), erfc_real(z.re), dawson_real(z.re), f64::NAN, f.c, f.s];
            for k in [0, 1, 2, 4, 5] {
                real[k].push(relative(values[k].into(), exact[k]));
            }
        }
    }
    for (name, errors) in names.iter().zip(errors) {
        judge(name, errors, 4e-15, 2e-15);
    }
    for k in [0, 1, 2, 4, 5] {
        judge(&format!("{}, real", names[k]), real[k].clone(), 4e-15, 2e-15);
    }
}
