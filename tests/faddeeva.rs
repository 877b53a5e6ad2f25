//! The Faddeeva function and its kin against tables of 22 digits (the header of each says how it was
//! made), published values, and identities.
//!
//! The measure: |computed - exact| / |exact|, both components together; in the upper half plane for w
//! also each component on its own.
// `!(a <= b)` is meant: NaN must fail.
#![allow(clippy::neg_cmp_op_on_partial_ord)]

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
        if z.im >= 0.0 {
            parts.push(by_component(w(z), exact));
        }
    }
    judge("w", all, 1e-15, 8e-16);
    judge("w, upper half plane, each component", parts, 1.5e-15, 1e-15);
}

#[test]
fn w_with_the_exponent_apart() {
    let mut errors = vec![];
    for row in table("faddeeva_extended") {
        let v = w_extended(C::new(row[0], row[1]));
        errors.push(relative(v.mantissa_at_power(row[4] as i64), C::new(row[2], row[3])));
    }
    judge("w, exponent apart", errors, 2e-15, 1e-15);
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
            errors[k].push(relative(values[k], exact[k]));
        }
        if z.im == 0.0 {
            let f = fresnel_real(z.re);
            let values = [erf_real(z.re), erfc_real(z.re), dawson_real(z.re), f64::NAN, f.c, f.s];
            for k in [0, 1, 2, 4, 5] {
                real[k].push(relative(values[k].into(), exact[k]));
            }
        }
    }
    for (name, errors) in names.iter().zip(errors) {
        judge(name, errors, 2e-15, 1e-15);
    }
    for k in [0, 1, 2, 4, 5] {
        judge(&format!("{}, real", names[k]), real[k].clone(), 1e-15, 1e-15);
    }
}

#[test]
fn published_values() {
    // w(i) = e erfc 1, e from DLMF 4.2.11; erfc 1 = 0.15729 92070 50285: mpmath, 30 digits.
    let v = w(C::new(0.0, 1.0)).re;
    assert!((v - std::f64::consts::E * 0.157_299_207_050_285_13).abs() < 3e-16);
    // Zeros: DLMF tables 7.13.1 to 7.13.4 (m); mpmath, 30 digits, agrees.
    let zeros = [
        erf(C::new(1.450_616_163_2, 1.880_943_000_2)),
        erf(C::new(2.244_659_273_8, 2.616_575_140_7)),
        erfc(C::new(-1.354_810_128_1, 1.991_466_842_8)),
        fresnel(C::new(1.743_667_486_2, 0.305_735_063_6)).c,
        fresnel(C::new(2.009_257_011_8, 0.288_547_897_3)).s,
    ];
    for (k, value) in zeros.iter().enumerate() {
        assert!(value.norm() < 3e-9, "{k}: {value}");
    }
    // Limits: DLMF 7.2.3, 7.2.4, 7.2.9.
    let infinity = f64::INFINITY;
    assert_eq!(erf(C::new(infinity, 0.0)), C::new(1.0, 0.0));
    assert_eq!(erfc(C::new(-infinity, 0.0)), C::new(2.0, 0.0));
    assert_eq!(complex_fresnel(C::new(infinity, 0.0)), C::new(0.0, 0.0));
    assert_eq!(complex_fresnel(C::new(-infinity, 0.0)), C::new(1.0, 1.0));
    assert_eq!(fresnel_real(-infinity), Fresnel { c: -0.5, s: -0.5 });
}

/// Points with both coordinates of any size within the range, close to the axes at times.
fn points() -> impl Strategy<Value = C> {
    let one = || {
        prop_oneof![
            3 => -8.0..8.0,
            1 => -30.0..30.0,
            1 => (-14.0..1.0, any::<bool>()).prop_map(|(e, s): (f64, bool)| {
                if s { 10f64.powf(e) } else { -10f64.powf(e) }
            }),
        ]
    };
    (one(), one()).prop_map(|(x, y)| C::new(x, y))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// The mean over a circle is the value in the middle, and its first harmonic the derivative: across
    /// every seam of the method. w' = -2 z w + 2 i/sqrt(pi): DLMF 7.10.2.
    #[test]
    fn w_is_analytic(z in points()) {
        let (mut mean, mut slope, mut size) = (C::new(0.0, 0.0), C::new(0.0, 0.0), 0.0f64);
        let r = 0.2 / (1.0 + 0.3 * z.norm());
        for k in 0..20 {
            let direction = C::from_polar(1.0, std::f64::consts::TAU * k as f64 / 20.0);
            let value = w(z + direction * r);
            size = size.max(value.norm());
            mean += value / 20.0;
            slope += value / direction / (20.0 * r);
        }
        prop_assume!(size < 1e300);
        // The rounding of z itself counts by the size of the derivative.
        let noise = 2e-15 * size * (1.0 + z.norm_sqr());
        prop_assert!((mean - w(z)).norm() < noise, "{z}: {mean} {}", w(z));
        let exact = -2.0 * z * w(z) + C::new(0.0, std::f64::consts::FRAC_2_SQRT_PI);
        prop_assert!((slope - exact).norm() < noise / r, "{z}: {slope} {exact}");
    }

    #[test]
    fn symmetries(z in points()) {
        // DLMF 7.4.1 to 7.4.6.
        let f = fresnel(z);
        let g = fresnel(z * C::I);
        let huge = |a: C| a.norm().is_nan() || a.norm() >= 1e300;
        let same = |a: C, b: C| a == b || huge(a) && huge(b);
        prop_assert!(same(erf(-z), -erf(z)) && same(erf(z.conj()), erf(z).conj()));
        prop_assert!(same(w(-z.conj()), w(z).conj()));
        prop_assert!(same(dawson(-z), -dawson(z)) && same(dawson(z.conj()), dawson(z).conj()));
        prop_assert!(same(fresnel(-z).c, -f.c) && same(fresnel(z.conj()).s, f.s.conj()));
        prop_assert!(same(g.c, C::I * f.c) && same(g.s, -C::I * f.s));
        let sum = erfc(z) + erfc(-z);
        prop_assume!(erfc(z).norm() < 1e300 && erfc(-z).norm() < 1e300);
        prop_assert!((sum - 2.0).norm() < 1e-15 * (2.0 + erfc(z).norm()));
    }

    #[test]
    fn relations(z in points()) {
        let (e, scale) = ((-z * z).exp(), 1.0 + z.norm_sqr());
        let close = |a: C, b: C, size: f64| {
            (a - b).norm() < 3e-15 * size * scale || size.is_nan() || size >= 1e300
        };
        // erfc z = exp(-z^2) w(i z): DLMF 7.2.3; Dawson's integral: DLMF 7.5.1.
        let turned = w(C::I * z);
        if (1e-290..1e290).contains(&e.norm()) {
            prop_assert!(close(erfc(z), e * turned, erfc(z).norm()), "{z}: {}", erfc(z));
        }
        prop_assert!(close(erfc(z), 1.0 - erf(z), erf(z).norm().max(1.0)));
        prop_assert!(close(erfc_scaled(z), turned, turned.norm()));
        let f = C::new(0.0, 0.5 * std::f64::consts::PI.sqrt()) * (e - w(z));
        prop_assert!(close(dawson(z), f, e.norm() + w(z).norm()));
        // C + i S = (1 + i)/2 erf((1 - i) sqrt(pi) z/2): DLMF 7.5.8.
        let a = erf(C::new(1.0, -1.0) * (0.5 * std::f64::consts::PI.sqrt()) * z) * C::new(0.5, 0.5);
        let v = fresnel(z);
        let size = v.c.norm() + v.s.norm() + a.norm();
        prop_assert!(close(v.c + C::I * v.s, a, size), "{z}: {} {a}", v.c + C::I * v.s);
        let f = complex_fresnel(z);
        prop_assert!(close(f, C::new(0.5, 0.5) - a, 1.0 + a.norm()), "{z}: {f} {a}");
        // Exponents apart.
        for (plain, apart) in [
            (w(z), w_extended(z)),
            (erf(z), erf_extended(z)),
            (erfc(z), erfc_extended(z)),
            (erfc_scaled(z), erfc_scaled_extended(z)),
            (dawson(z), dawson_extended(z)),
            (f, complex_fresnel_extended(z)),
            (v.c, fresnel_extended(z).c),
            (v.s, fresnel_extended(z).s),
        ] {
            let size = plain.norm();
            if (1e-290..1e290).contains(&size) {
                prop_assert!((plain - apart.to_complex()).norm() < 4e-16 * size, "{z}: {plain}");
            }
        }
    }

    #[test]
    fn real_and_complex_agree(x in prop_oneof![-30.0..30.0f64, -2.0..2.0f64]) {
        let z = C::new(x, 0.0);
        let close = |a: f64, b: C| a == b.re || (a - b.re).abs() < 1.5e-15 * a.abs();
        prop_assert!(close(erf_real(x), erf(z)), "{} {}", erf_real(x), erf(z));
        prop_assert!(close(erfc_real(x), erfc(z)), "{} {}", erfc_real(x), erfc(z));
        prop_assert!(close(erfc_scaled_real(x), erfc_scaled(z)));
        prop_assert!(close(dawson_real(x), dawson(z)));
        let v = fresnel_real(x);
        prop_assert!(close(v.c, fresnel(z).c) && close(v.s, fresnel(z).s));
        // DLMF 7.2.9 with 7.2.6: what is left of C and S is F; its error counts against 1.
        let f = complex_fresnel(z);
        prop_assert!((C::new(v.c, v.s) + f - C::new(0.5, 0.5)).norm() < 1e-15);
    }
}

#[test]
fn extreme_arguments_are_answered() {
    let sizes = [
        0.0,
        5e-324,
        1e-310,
        1e-160,
        1e-20,
        0.5,
        6.5,
        27.0,
        1e8,
        1e9,
        2e9,
        1e20,
        1e154,
        1e300,
        f64::MAX,
        f64::INFINITY,
    ];
    for x in sizes {
        for y in sizes {
            for (x, y) in [(x, y), (-x, y), (x, -y), (-x, -y)] {
                let z = C::new(x, y);
                // Without a phase: finite, and as small as it must be.
                if y >= 0.0 && !z.im.is_sign_negative() {
                    let v = w(z);
                    assert!(v.norm() <= 1.0 + 1e-15, "w({z}) = {v}");
                }
                for v in
                    [erf(z), erfc(z), dawson(z), complex_fresnel(z), erfc_scaled(z), fresnel(z).c]
                {
                    let known = x.abs() <= 1e8 && y.abs() <= 1e8;
                    assert!(!known || !v.re.is_nan() && !v.im.is_nan(), "{z}: {v}");
                }
                let _ = (w_extended(z), erf_extended(z), dawson_extended(z), fresnel_extended(z));
            }
        }
        for x in [x, -x] {
            let real = [erf_real(x), erfc_real(x), erfc_scaled_real(x), dawson_real(x)];
            assert!(real.iter().all(|v| !v.is_nan()), "{x}: {real:?}");
            let f = fresnel_real(x);
            assert!(f.c.abs() < 0.8 && f.s.abs() < 0.8);
        }
    }
    assert_eq!(w(C::new(0.0, f64::NEG_INFINITY)).re, f64::INFINITY);
    assert_eq!(erf(C::new(0.0, 1e10)), C::new(0.0, f64::INFINITY));
    assert_eq!(w(C::new(1e-310, 0.0)).re, 1.0);
    assert!((erf_real(5e-310) / 5e-310 - std::f64::consts::FRAC_2_SQRT_PI).abs() < 1e-12);
    for z in [C::new(f64::NAN, 0.0), C::new(0.0, f64::NAN)] {
        for v in
            [w(z), erf(z), erfc(z), dawson(z), complex_fresnel(z), erfc_scaled(z), fresnel(z).s]
        {
            assert!(v.re.is_nan() || v.im.is_nan());
        }
    }
    assert!(erf_real(f64::NAN).is_nan() && erfc_real(f64::NAN).is_nan());
    assert!(dawson_real(f64::NAN).is_nan() && erfc_scaled_real(f64::NAN).is_nan());
    assert!(fresnel_real(f64::NAN).c.is_nan());
}
