//! Umbilic integrals against tables of 20 digits (the header of each says how it was made).
//!
//! The measure: an error of Psi against max(|Psi|, 0.1), one of a derivative against the same of its own.

#[path = "support/table.rs"]
mod table;

use merging_saddles::special::airy::{airy, airy_real};
use merging_saddles::special::umbilic::{Umbilic, elliptic, hyperbolic};
use merging_saddles::{Complex64 as C, Error};
use proptest::prelude::*;
use std::f64::consts::PI;
use table::{judge, table};

fn four(v: &Umbilic) -> [C; 4] {
    let [x, y, z] = v.derivatives;
    [v.psi, x, y, z]
}

/// The largest error of the integral and its derivatives in a row of a table.
fn error(v: &Umbilic, row: &[f64]) -> f64 {
    let exact: Vec<C> = row[3..11].chunks(2).map(|p| C::new(p[0], p[1])).collect();
    let error = |(v, e): (C, &C)| (v - e).norm() / e.norm().max(0.1);
    four(v).into_iter().zip(&exact).map(error).fold(0.0, f64::max)
}

fn against(name: &str, function: fn(f64, f64, f64) -> Result<Umbilic, Error>) {
    let mut errors = vec![];
    for row in table(name) {
        let v = function(row[0], row[1], row[2]).expect("a value");
        errors.push(error(&v, &row));
    }
    judge(name, errors, 2e-14, 1e-14);
}

/// Tables of both kinds, which the last column tells apart.
fn both_kinds(name: &str, bar: f64) {
    let mut errors = [vec![], vec![]];
    for row in table(name) {
        let kind = row[11] as usize;
        let v = [elliptic, hyperbolic][kind](row[0], row[1], row[2]).expect("a value");
        errors[kind].push(error(&v, &row));
    }
    let [e, h] = errors;
    judge(&format!("elliptic, {name}"), e, bar, bar);
    judge(&format!("hyperbolic, {name}"), h, bar, bar);
}

#[test]
fn far_against_the_table() {
    both_kinds("umbilic_far", 1e-14);
}

/// Parameters up to 1e6, phases up to 1e16, on caustics too.
#[test]
fn large_against_the_table() {
    both_kinds("umbilic_large", 5e-14);
}

#[test]
fn elliptic_against_the_table() {
    against("elliptic_umbilic", elliptic);
}

#[test]
fn hyperbolic_against_the_table() {
    against("hyperbolic_umbilic", hyperbolic);
}

#[test]
fn at_the_origin() {
    // Psi^(E)(0) = (1/3) sqrt(pi) Gamma(1/6) = 3.28868, Psi^(H)(0) = (1/3) Gamma(1/3)^2 = 2.39224: DLMF 36.2.17
    // to 36.2.19; Gamma(1/6) = 5.56631 60017 80235, Gamma(1/3) = 2.67893 85347 07748 (mpmath, 30
    // digits).
    let e = elliptic(0.0, 0.0, 0.0).expect("a value");
    assert!((e.psi - PI.sqrt() * 5.566_316_001_780_235 / 3.0).norm() < 1e-14, "{e:?}");
    let h = hyperbolic(0.0, 0.0, 0.0).expect("a value");
    assert!((h.psi - 2.678_938_534_707_748f64.powi(2) / 3.0).norm() < 1e-14, "{h:?}");
}

#[test]
fn bad_parameters_are_refused() {
    for f in [elliptic, hyperbolic] {
        for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            for p in [[bad, 0.0, 0.0], [0.0, bad, 0.0], [0.0, 0.0, bad]] {
                assert!(matches!(f(p[0], p[1], p[2]), Err(Error::Domain { .. })));
            }
        }
        for p in [[1e11, 0.0, 0.0], [0.0, -1e11, 0.0], [0.0, 0.0, 1e6], [f64::MAX; 3]] {
            assert!(matches!(f(p[0], p[1], p[2]), Err(Error::NoDigits { .. })));
        }
        // Smaller than anything: as at the origin.
        let tiny = f(5e-324, -1e-310, 1e-200).expect("a value");
        assert!((tiny.psi - f(0.0, 0.0, 0.0).expect("a value").psi).norm() < 1e-14);
    }
}

/// Largest difference relative to what it counts against.
fn close(a: C, b: C, size: f64) -> bool {
    (a - b).norm() < 1e-11 * (0.1 + size)
}

/// Parameters of any size within the box, at times zero, tiny, or all but equal.
fn parameters() -> impl Strategy<Value = [f64; 3]> {
    let one = || {
        prop_oneof![
            4 => -8.0..8.0,
            1 => -1.0..1.0,
            1 => Just(0.0),
            1 => (-18.0..0.0f64, any::<bool>())
                .prop_map(|(e, s)| if s { 10f64.powf(e) } else { -10f64.powf(e) }),
        ]
    };
    prop_oneof![
        4 => [one(), one(), one()],
        1 => (one(), one(), -18.0..0.0f64).prop_map(|(x, z, e)| [x, x + 10f64.powf(e), z]),
    ]
}

/// Step of the differences.
const STEP: f64 = 8e-3;

/// `d/dp` of the derivatives at a point, by central differences of sixth order.
fn second(f: fn(f64, f64, f64) -> Result<Umbilic, Error>, p: [f64; 3], by: usize) -> [C; 3] {
    let mut sum = [C::new(0.0, 0.0); 3];
    // Weights 3/4, -3/20, 1/60: common practice.
    for (n, weight) in [(1.0, 0.75), (2.0, -0.15), (3.0, 1.0 / 60.0)] {
        for side in [1.0, -1.0] {
            let mut at = p;
            at[by] += side * n * STEP;
            let v = f(at[0], at[1], at[2]).expect("a value").derivatives;
            for (sum, v) in sum.iter_mut().zip(v) {
                *sum += v * (side * weight / STEP);
            }
        }
    }
    sum
}

/// Psi(x, y, z) is the conjugate of Psi(x, y, -z): DLMF 36.2.24.
fn conjugate(x: f64, y: f64, z: f64) -> Result<(), TestCaseError> {
    for f in [elliptic, hyperbolic] {
        let (a, b) = (f(x, y, z).expect("a value"), f(x, y, -z).expect("a value"));
        for (k, (a, b)) in four(&a).iter().zip(four(&b)).enumerate() {
            let b = if k == 3 { -b.conj() } else { b.conj() };
            prop_assert!(close(*a, b, a.norm()), "{a} {b}");
        }
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(300))]

    #[test]
    fn conjugate_in_z([x, y, z] in parameters()) {
        conjugate(x, y, z)?;
    }

    /// At any size that is answered.
    #[test]
    fn conjugate_at_any_size(x in -1.0..1.0f64, y in -1.0..1.0f64, z in -1.0..1.0f64, size in 1.0..10.0f64) {
        let size = 10f64.powf(size);
        let (x, y, z) = (x * size, y * size, z * 2.0 * size.sqrt());
        conjugate(x, y, z)?;
    }

    /// t -> -t in the elliptic, s <-> t in the hyperbolic integral.
    #[test]
    fn symmetric_in_y([x, y, z] in parameters()) {
        let (a, b) = (elliptic(x, y, z).expect("a value"), elliptic(x, -y, z).expect("a value"));
        prop_assert!(close(a.psi, b.psi, a.psi.norm()));
        prop_assert!(close(a.derivatives[1], -b.derivatives[1], a.derivatives[1].norm()));
        let (a, b) = (hyperbolic(x, y, z).expect("a value"), hyperbolic(y, x, z).expect("a value"));
        prop_assert!(close(a.psi, b.psi, a.psi.norm()));
        prop_assert!(close(a.derivatives[0], b.derivatives[1], a.derivatives[0].norm()));
    }

    /// Psi^(E)(x, y, 0) and Psi^(H)(x, y, 0) by Airy functions: DLMF 36.2.20, 36.2.21.
    #[test]
    fn airy_at_z_0([x, y, _] in parameters()) {
        let scale = 12f64.cbrt().recip();
        let (u, v) = (airy(C::new(x, y) * scale), airy(C::new(x, -y) * scale));
        let product = u.ai * v.bi * (2.0 * PI * PI * (2f64 / 3.0).powf(2.0 / 3.0));
        let psi = elliptic(x, y, 0.0).expect("a value").psi;
        // The real part may be small beside the product, of which it has the rounding.
        let size = product.re.abs() + 1e-4 * product.norm();
        prop_assert!(close(psi, product.re.into(), size), "{psi} {product}");
        let scale = 3f64.cbrt().recip();
        let exact = 4.0 * PI * PI * scale * scale * airy_real(x * scale).ai * airy_real(y * scale).ai;
        let psi = hyperbolic(x, y, 0.0).expect("a value").psi;
        prop_assert!(close(psi, exact.into(), exact.abs()), "{psi} {exact}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(60))]

    /// Differential equations of DLMF 36.10, from the derivatives that come with the values.
    #[test]
    fn differential_equations([x, y, z] in parameters()) {
        let p = [x, y, z];
        let i = C::I;
        // Truncation: the seventh derivative times STEP^6/140.
        let near = |a: C, b: C| (a - b).norm() < 1e-8 * (1.0 + a.norm() + b.norm());
        let v = elliptic(x, y, z).expect("a value");
        let (by_x, by_y) = (second(elliptic, p, 0), second(elliptic, p, 1));
        // 6 Psi_xy - 2 i z Psi_y + y Psi = 0
        prop_assert!(near(6.0 * by_x[1] - 2.0 * i * z * v.derivatives[1], -v.psi * y));
        // 3 (Psi_yy - Psi_xx) - 2 i z Psi_x + x Psi = 0
        prop_assert!(near(3.0 * (by_y[1] - by_x[0]) - 2.0 * i * z * v.derivatives[0], -v.psi * x));
        // i Psi_z + ... : the equation of evolution, i Psi_z = Psi_xx + Psi_yy
        prop_assert!(near(i * v.derivatives[2], by_x[0] + by_y[1]));
        let v = hyperbolic(x, y, z).expect("a value");
        let (by_x, by_y) = (second(hyperbolic, p, 0), second(hyperbolic, p, 1));
        // 3 Psi_xx + i z Psi_y - x Psi = 0 and the same with x and y exchanged
        prop_assert!(near(3.0 * by_x[0] + i * z * v.derivatives[1], v.psi * x));
        prop_assert!(near(3.0 * by_y[1] + i * z * v.derivatives[0], v.psi * y));
        // i Psi_z = Psi_xy
        prop_assert!(near(i * v.derivatives[2], by_x[1]));
    }
}
