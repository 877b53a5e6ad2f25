//! Cuspoid integrals against tables of 20 digits (the header of each says how it was made).
//!
//! The measure: with `T = 1 + sum_m |x_m|^(1/(K+2-m))` (the size of the outermost saddle) and
//! `S = max(|Psi|, |dPsi/dx_m| / T^m over m)`, an error of Psi counts against S, one of
//! `dPsi/dx_m` against `S T^m`.

#[path = "support/table.rs"]
mod table;

use merging_saddles::Complex64;
use merging_saddles::special::cuspoid::{self, Cuspoid};
use table::{judge, table};

/// Complex numbers from pairs.
fn complex(row: &[f64]) -> Vec<Complex64> {
    row.chunks(2).map(|p| Complex64::new(p[0], p[1])).collect()
}

fn real(row: &[f64]) -> Vec<Complex64> {
    row.iter().map(|x| Complex64::new(*x, 0.0)).collect()
}

/// The tables list x_K .. x_1.
fn parameters<const K: usize>(listed: &[Complex64]) -> [Complex64; K] {
    std::array::from_fn(|m| listed[K - 1 - m])
}

/// The largest error of Psi and the derivatives.
fn error<const K: usize>(
    x: &[Complex64; K],
    value: Cuspoid<Complex64, K>,
    exact: &[Complex64],
) -> f64 {
    let size = |(m, x): (usize, &Complex64)| x.norm().powf(1.0 / (K + 1 - m) as f64);
    let t = 1.0 + x.iter().enumerate().map(size).sum::<f64>();
    let got: Vec<Complex64> = std::iter::once(value.psi).chain(value.derivatives).collect();
    let scale = |m: usize| t.powi(m as i32);
    let s = (0..=K).map(|m| exact[m].norm() / scale(m)).fold(0.0, f64::max);
    (0..=K).map(|m| (got[m] - exact[m]).norm() / (s * scale(m))).fold(0.0, f64::max)
}

/// Errors of the descents along the real line; `width` is 1 for real parameters, 2 for complex.
fn descents<const K: usize>(name: &str, width: usize) -> Vec<f64> {
    let one = |row: Vec<f64>| {
        let (listed, exact) = row.split_at(width * K);
        let listed = if width == 1 { real(listed) } else { complex(listed) };
        let x = parameters::<K>(&listed);
        let v = cuspoid::real_line(&x).expect("finite parameters").to_complex();
        error(&x, v, &complex(exact))
    };
    table(name).into_iter().map(one).collect()
}

fn valleys<const K: usize>(name: &str) -> Vec<f64> {
    let one = |row: Vec<f64>| {
        let (listed, exact) = row[2..].split_at(2 * K);
        let x = parameters::<K>(&complex(listed));
        let v = cuspoid::between(&x, row[0] as usize, row[1] as usize).expect("finite parameters");
        error(&x, v.to_complex(), &complex(exact))
    };
    table(name).into_iter().map(one).collect()
}

#[test]
fn real_line_by_descents() {
    judge("Pearcey, real, descents", descents::<2>("pearcey_real", 1), 3e-15, 2e-15);
    judge("Pearcey, complex", descents::<2>("pearcey_complex", 2), 3e-15, 2e-15);
    judge("swallowtail, real", descents::<3>("swallowtail", 1), 5e-15, 2e-15);
    judge("swallowtail, complex", descents::<3>("swallowtail_complex", 2), 5e-15, 2e-15);
    judge("butterfly", descents::<4>("butterfly", 1), 1e-14, 1e-14);
}

#[test]
fn all_valleys() {
    judge("Pearcey, valleys", valleys::<2>("pearcey_valleys"), 3e-15, 3e-15);
    judge("swallowtail, valleys", valleys::<3>("swallowtail_valleys"), 3e-15, 3e-15);
    judge("butterfly, valleys", valleys::<4>("butterfly_valleys"), 1e-14, 1e-14);
}

#[test]
fn pearcey_on_the_real_line() {
    let (mut near, mut box_of_the_table, mut far, mut farther) = (vec![], vec![], vec![], vec![]);
    for row in table("pearcey_real").into_iter().chain(table("pearcey_far")) {
        let (x2, x1) = (row[0], row[1]);
        let x = [Complex64::new(x1, 0.0), Complex64::new(x2, 0.0)];
        let v = cuspoid::pearcey(x1, x2).expect("finite parameters");
        let error = error(&x, v, &complex(&row[2..]));
        let list = if x1.abs() <= 8.0 && x2.abs() <= 8.0 {
            &mut near
        } else if x1.abs() <= 32.0 && x2.abs() <= 16.0 {
            &mut box_of_the_table
        } else if x1.abs() <= 300.0 && x2.abs() <= 60.0 {
            &mut far
        } else {
            &mut farther
        };
        list.push(error);
    }
    judge("Pearcey, real, |x1|, |x2| <= 8", near, 3e-15, 3e-15);
    judge("Pearcey, real, box of the table", box_of_the_table, 1e-14, 5e-15);
    judge("Pearcey, real, outside", far, 5e-15, 3e-15);
    judge("Pearcey, real, up to 1e6", farther, 5e-15, 5e-15);
}

/// Phases up to 1e15.
#[test]
fn large_parameters() {
    let (mut three, mut four) = (vec![], vec![]);
    for row in table("cuspoid_far") {
        let exact = complex(&row[5..]);
        if row[0] == 3.0 {
            let v = cuspoid::swallowtail(row[1], row[2], row[3]).expect("finite parameters");
            let x = std::array::from_fn(|m| Complex64::new(row[m + 1], 0.0));
            three.push(error(&x, v, &exact));
        } else {
            let v = cuspoid::butterfly(row[1], row[2], row[3], row[4]).expect("finite parameters");
            let x = std::array::from_fn(|m| Complex64::new(row[m + 1], 0.0));
            four.push(error(&x, v, &exact));
        }
    }
    judge("swallowtail, large", three, 5e-15, 5e-15);
    judge("butterfly, large", four, 1e-14, 1e-14);
}

#[test]
fn zeros_of_the_pearcey_integral() {
    let path = format!("{}/tests/data/pearcey_zeros.csv", env!("CARGO_MANIFEST_DIR"));
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).unwrap();
    // More than the box of the table, x_2 >= -11 and x_1 <= 16, holds.
    let inside: Vec<_> =
        (1..=15).flat_map(|m| (0..m).map(move |p| cuspoid::pearcey_zero_inside(m, p))).collect();
    let outside: Vec<_> = (0..15).map(cuspoid::pearcey_zero_outside).collect();
    let mut seen = 0;
    for row in reader.records() {
        let row = row.unwrap();
        let (x1, x2): (f64, f64) = (row[2].parse().unwrap(), row[3].parse().unwrap());
        let list = if &row[0] == "inside" { &inside } else { &outside };
        let off = |z: &Result<cuspoid::PearceyZero, _>| {
            let z = z.as_ref().expect("the zero is found");
            (z.x1 - x1).hypot(z.x2 - x2)
        };
        let best = list.iter().map(off).fold(f64::INFINITY, f64::min);
        assert!(best < 2e-14 * x1.hypot(x2), "no zero at {x1}, {x2}: {best:e}");
        let near = cuspoid::pearcey_zero_near(x1 + 0.02, x2 - 0.03).unwrap();
        assert!((near.x1 - x1).hypot(near.x2 - x2) < 2e-14 * x1.hypot(x2), "{near:?}");
        seen += 1;
    }
    assert_eq!(seen, 61);
}

/// Zeros as printed: Kaminski & Paris, J. Comput. Appl. Math. 107 (1999), Table 1 (good to 4e-6).
#[test]
fn printed_zeros() {
    let outside = cuspoid::pearcey_zero_outside(0).unwrap();
    assert!((outside.x2 + 1.743600).abs() < 5e-6 && (outside.x1 - 2.352175).abs() < 5e-6);
    let inside = cuspoid::pearcey_zero_inside(1, 0).unwrap();
    assert!((inside.x2 + 4.378045).abs() < 5e-6 && (inside.x1 - 0.527678).abs() < 5e-6);
}

/// Five saddles at the edge of being one group, between two valleys whose way over the middle climbs by 29:
/// the value is the difference of two rays, each by quadrature with 60 digits (mpmath).
#[test]
fn arms_stay_low() {
    let x = [
        Complex64::new(-3.6429717543735665, -0.31779712398760823),
        Complex64::new(4.671632797076426, 2.165947965148653),
        Complex64::new(0.26502735975983516, -4.473013133250039),
        Complex64::new(-3.2148509999530765, 2.535017129675514),
    ];
    let exact = Complex64::new(0.913869459186435, 0.2840203573515999);
    let got = cuspoid::between(&x, 2, 1).unwrap().psi.to_complex();
    assert!((got - exact).norm() < 1e-14, "{got}");
}
