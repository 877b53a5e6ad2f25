//! Every function of `special` over slices, at ordinary points and at extreme ones: bit for bit the
//! same as single calls, one clear error for slices of different lengths and for the first point that is
//! refused, never a panic; what comes as a `Result` is an error or finite.

use merging_saddles::special::{airy::*, cuspoid::*, faddeeva::*, umbilic::*};
use merging_saddles::{Complex64 as C, Error, Scaled};
use std::fmt::Debug;

/// Numbers of every size and kind.
const REALS: [f64; 29] = [
    0.0,
    -0.0,
    5e-324,
    -1e-310,
    1e-300,
    1e-160,
    -1e-20,
    1e-8,
    0.3,
    -1.0,
    2.5,
    -6.7,
    8.75,
    -8.9,
    15.9,
    -40.0,
    110.0,
    1e3,
    -1e5,
    3e7,
    -1e9,
    1e12,
    -2e12,
    1e77,
    1e154,
    -1e300,
    f64::INFINITY,
    f64::NEG_INFINITY,
    f64::NAN,
];

fn reals() -> Vec<f64> {
    REALS.to_vec()
}

fn complex() -> Vec<C> {
    REALS.iter().flat_map(|x| REALS.map(|y| C::new(*x, y))).collect()
}

/// All arrays of N of every third number and all of the first few kinds.
fn arrays<const N: usize>(from: &[f64]) -> Vec<[f64; N]> {
    let count = from.len().pow(N as u32);
    let digit = |n: usize, m: usize| from[n / from.len().pow(m as u32) % from.len()];
    (0..count).map(|n| std::array::from_fn(|m| digit(n, m))).collect()
}

/// A dozen kinds for functions of several numbers.
const FEW: [f64; 13] = [
    0.0,
    -5e-324,
    1e-200,
    -1e-9,
    0.7,
    -3.0,
    12.0,
    -900.0,
    4e4,
    -1e7,
    1e300,
    f64::NEG_INFINITY,
    f64::NAN,
];

fn complex_arrays<const N: usize>() -> Vec<[C; N]> {
    let list = arrays::<N>(&FEW);
    let turned = |n: usize| list[(n * 389 + 7) % list.len()];
    (0..list.len())
        .map(|n| std::array::from_fn(|m| C::new(list[n][m], turned(n)[m])))
        .chain(list.iter().map(|x| x.map(C::from)))
        .collect()
}

/// Bit for bit: floating-point numbers print with as many digits as they need, and NaN is NaN.
fn same(a: &impl Debug, b: &impl Debug) -> bool {
    format!("{a:?}") == format!("{b:?}")
}

fn check<P: Copy + Debug, V: Clone + Debug>(
    name: &str,
    points: &[P],
    single: impl Fn(P) -> Result<V, Error>,
    slice: impl Fn(&[P], &mut [V]) -> Result<(), Error>,
) {
    let values: Vec<Result<V, Error>> = points.iter().map(|p| single(*p)).collect();
    let (mut accepted, mut answers) = (vec![], vec![]);
    let mut refusal = None;
    for (point, value) in points.iter().zip(&values) {
        match value {
            Ok(value) => {
                accepted.push(*point);
                answers.push(value.clone());
            }
            Err(error) => refusal = Some((*point, error)),
        }
    }
    assert!(accepted.len() >= 4, "{name}: too few points are answered");
    // Every place starts with a value that is not its own.
    let mut out = answers.clone();
    out.rotate_left(1);
    slice(&accepted, &mut out).expect("single calls answered");
    for ((point, one), many) in accepted.iter().zip(&answers).zip(&out) {
        assert!(same(one, many), "{name}: {point:?} {one:?} {many:?}");
    }
    // The first refused point is named; what comes before it is filled.
    if let Some((point, error)) = refusal {
        let mut out = vec![answers[0].clone(); 3];
        let list = [accepted[1], point, accepted[2]];
        let got = slice(&list, &mut out).expect_err("a single call refused");
        assert!(same(&got, error), "{name}: {point:?} {got} {error}");
        assert!(same(&out[0], &answers[1]) && same(&out[2], &answers[0]), "{name}");
    }
    slice(&[], &mut []).expect("nothing to do");
    for wrong in [0, 1, 3] {
        let mut out = vec![answers[0].clone(); wrong];
        let error = slice(&accepted[..2], &mut out).expect_err("the lengths differ").to_string();
        assert!(error.contains(&format!("length of the output = {wrong}")), "{name}: {error}");
        assert!(out.iter().all(|v| same(v, &answers[0])), "{name}: nothing is written");
    }
}

/// Functions that answer every number.
macro_rules! infallible {
    ($points:expr; $($single:ident $slice:ident),*) => {
        $(check(stringify!($slice), &$points, |p| Ok($single(p)), $slice);)*
    };
}

#[test]
fn airy_functions() {
    infallible!(complex(); airy airy_slice, airy_scaled airy_scaled_slice,
        airy_extended airy_extended_slice, rotated rotated_slice,
        rotated_extended rotated_extended_slice, ai ai_slice, bi bi_slice, scorer scorer_slice,
        scorer_extended scorer_extended_slice, ai_integral ai_integral_slice,
        ai_integral_extended ai_integral_extended_slice);
    infallible!(reals(); airy_real airy_real_slice, airy_real_scaled airy_real_scaled_slice,
        ai_real ai_real_slice, bi_real bi_real_slice, scorer_real scorer_real_slice,
        ai_integral_real ai_integral_real_slice);
    check(
        "modulus_phase",
        &reals(),
        finite(modulus_phase, |v| v.modulus + v.prime_phase.recip()),
        modulus_phase_slice,
    );
    let pairs: Vec<[C; 2]> = complex_arrays();
    check("incomplete_airy", &pairs, |[x, a]| incomplete_airy(x, a), incomplete_airy_slice);
    let one = |[x, a]: [C; 2]| incomplete_airy_extended(x, a);
    let sum = |v: &IncompleteAiry<Scaled>| (v.i0 + v.i1).mantissa.norm();
    check("incomplete_airy_extended", &pairs, finite(one, sum), incomplete_airy_extended_slice);
}

#[test]
fn airy_zeros() {
    let numbers = [0, 1, 2, 3, 9, 10, 11, 1000, 1 << 40, usize::MAX];
    let place = |z: &Zero<f64>| z.location + z.value;
    check("ai_zero", &numbers, finite(ai_zero, place), ai_zero_slice);
    check("ai_prime_zero", &numbers, finite(ai_prime_zero, place), ai_prime_zero_slice);
    check("bi_zero", &numbers, finite(bi_zero, place), bi_zero_slice);
    check("bi_prime_zero", &numbers, finite(bi_prime_zero, place), bi_prime_zero_slice);
    let place = |z: &Zero<C>| (z.location + z.value).norm();
    check("bi_complex_zero", &numbers, finite(bi_complex_zero, place), bi_complex_zero_slice);
    let single = finite(bi_prime_complex_zero, place);
    check("bi_prime_complex_zero", &numbers, single, bi_prime_complex_zero_slice);
}

/// The function, with a look at what it answers.
fn finite<P: Copy + Debug, V>(
    function: impl Fn(P) -> Result<V, Error>,
    size: impl Fn(&V) -> f64,
) -> impl Fn(P) -> Result<V, Error> {
    move |point| {
        let value = function(point);
        if let Ok(value) = &value {
            assert!(size(value).is_finite(), "a silent NaN or infinity at {point:?}");
        }
        value
    }
}

#[test]
fn error_functions() {
    infallible!(complex(); w w_slice, w_extended w_extended_slice, erf erf_slice,
        erf_extended erf_extended_slice, erfc erfc_slice, erfc_extended erfc_extended_slice,
        erfc_scaled erfc_scaled_slice, erfc_scaled_extended erfc_scaled_extended_slice,
        dawson dawson_slice, dawson_extended dawson_extended_slice,
        complex_fresnel complex_fresnel_slice, fresnel fresnel_slice,
        complex_fresnel_extended complex_fresnel_extended_slice,
        fresnel_extended fresnel_extended_slice);
    infallible!(reals(); erf_real erf_real_slice, erfc_real erfc_real_slice,
        erfc_scaled_real erfc_scaled_real_slice, dawson_real dawson_real_slice,
        fresnel_real fresnel_real_slice);
}

fn size<const K: usize>(v: &Cuspoid<C, K>) -> f64 {
    v.psi.norm() + v.derivatives.iter().map(|d| d.norm()).sum::<f64>()
}

#[test]
fn cuspoids() {
    let one = finite(|[x1, x2]: [f64; 2]| pearcey(x1, x2), size);
    check("pearcey", &arrays(&REALS), one, pearcey_slice);
    let one = finite(|[x1, x2, x3]: [f64; 3]| swallowtail(x1, x2, x3), size);
    check("swallowtail", &arrays(&FEW), one, swallowtail_slice);
    let one = finite(|[x1, x2, x3, x4]: [f64; 4]| butterfly(x1, x2, x3, x4), size);
    check("butterfly", &arrays(&FEW), one, butterfly_slice);
    check("real_line", &complex_arrays::<1>(), |x| real_line(&x), real_line_slice);
    let apart = |v: &Cuspoid<Scaled, 2>| v.psi.mantissa.norm();
    check("real_line", &complex_arrays(), finite(|x| real_line::<2>(&x), apart), real_line_slice);
    let one = |x: [C; 3]| between(&x, 4, 1);
    check("between", &complex_arrays(), one, |x, out| between_slice(x, 4, 1, out));
    let one = |x: [C; 3]| moments(&x, &[2, -3, 0, 0, 1]);
    check("moments", &complex_arrays(), one, |x, out| moments_slice(x, &[2, -3, 0, 0, 1], out));
    // Wrong valleys and weights are refused as in single calls, at the first point.
    let zero = [[C::ZERO; 2]];
    let mut out = [real_line(&zero[0]).expect("a value")];
    assert!(
        between_slice(&zero, 4, 0, &mut out).expect_err("no valley 4").to_string().contains("4")
    );
    let mut out = [moments(&zero[0], &[1, -1, 0, 0]).expect("a value")];
    assert!(moments_slice(&zero, &[1, 1, 0, 0], &mut out).is_err());
}

#[test]
fn cuspoid_zeros() {
    let off = |z: &PearceyZero| z.x1.hypot(z.x2);
    let starts = [[2.3, -1.7], [0.5, -4.4], [-2.3, -1.7], [1e-300, -4.4], [5.0, 9.0], [1e300, 1.0]];
    let one = finite(|[x1, x2]: [f64; 2]| pearcey_zero_near(x1, x2), off);
    check("pearcey_zero_near", &starts, one, pearcey_zero_near_slice);
    let nan = pearcey_zero_near(f64::NAN, f64::INFINITY).expect_err("no number");
    assert!(matches!(nan, Error::Domain { .. }), "{nan}");
    let places = [[1, 0], [2, 1], [12, 3], [40, 39], [300, 7], [0, 0], [3, 3], [usize::MAX, 0]];
    let one = finite(|[row, place]: [usize; 2]| pearcey_zero_inside(row, place), off);
    check("pearcey_zero_inside", &places, one, pearcey_zero_inside_slice);
    let numbers = [0, 1, 2, 14, 1000, 1_000_000, usize::MAX];
    let one = finite(pearcey_zero_outside, off);
    check("pearcey_zero_outside", &numbers, one, pearcey_zero_outside_slice);
}

#[test]
fn umbilics() {
    let size = |v: &Umbilic| v.psi.norm() + v.derivatives.iter().map(|d| d.norm()).sum::<f64>();
    for (name, one, many) in [
        (
            "elliptic",
            elliptic as fn(f64, f64, f64) -> Result<Umbilic, Error>,
            elliptic_slice as fn(&[[f64; 3]], &mut [Umbilic]) -> Result<(), Error>,
        ),
        ("hyperbolic", hyperbolic, hyperbolic_slice),
    ] {
        check(name, &arrays(&FEW), finite(move |[x, y, z]: [f64; 3]| one(x, y, z), size), many);
    }
}
