//! Umbilic integrals against tables of 20 digits (the header of each says how it was made).
//!
//! The measure: an error of Psi against max(|Psi|, 0.1), one of a derivative against the same of its own.

use merging_saddles::Complex64 as C;
use merging_saddles::special::umbilic::{Umbilic, elliptic, hyperbolic};

/// The numbers of a table in tests/data; the last column names the kind of point.
fn table(name: &str) -> Vec<Vec<f64>> {
    let path = format!("{}/tests/data/{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader =
        csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).expect("the table is there");
    reader
        .records()
        .map(|row| row.unwrap().iter().take(11).map(|x| x.parse().expect("a number")).collect())
        .collect()
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

fn four(v: &Umbilic) -> [C; 4] {
    let [x, y, z] = v.derivatives;
    [v.psi, x, y, z]
}

fn against(name: &str, function: fn(f64, f64, f64) -> Result<Umbilic, merging_saddles::Error>) {
    let mut errors = vec![];
    for row in table(name) {
        let v = function(row[0], row[1], row[2]);
        let Ok(v) = v else { println!("FAIL {row:?} {v:?}"); errors.push(1e9); continue };
        let exact: Vec<C> = row[3..].chunks(2).map(|p| C::new(p[0], p[1])).collect();
        let error = |(v, e): (C, &C)| (v - e).norm() / e.norm().max(0.1);
        let e = four(&v).into_iter().zip(&exact).map(error).fold(0.0, f64::max);
        if e > 1e-12 { println!("{row:?} {v:?} {e:e}"); }
        errors.push(e);
    }
    judge(name, errors, 1e-13, 1e-13);
}

#[test]
fn elliptic_against_the_table() {
    against("elliptic_umbilic", elliptic);
}

#[test]
fn hyperbolic_against_the_table() {
    against("hyperbolic_umbilic", hyperbolic);
}
