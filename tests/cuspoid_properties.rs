//! Cuspoid integrals: identities and published values, in random parameters.

use merging_saddles::special::airy::airy;
use merging_saddles::special::cuspoid::{
    Cuspoid, between, butterfly, moments, pearcey, pearcey_zero_inside, pearcey_zero_near,
    pearcey_zero_outside, real_line, swallowtail,
};
use merging_saddles::{Complex64, Error, Scaled};
use proptest::prelude::*;
use std::f64::consts::{PI, TAU};

const ZERO: Complex64 = Complex64::new(0.0, 0.0);

/// DLMF 36.2.16, five decimals.
#[test]
fn printed_values_at_the_origin() {
    let near = |v: Complex64, re: f64, im: f64| assert!((v - Complex64::new(re, im)).norm() < 8e-6);
    near(real_line(&[ZERO]).unwrap().to_complex().psi, 1.54669, 0.0);
    near(pearcey(0.0, 0.0).unwrap().psi, 1.67481, 0.69373);
    near(swallowtail(0.0, 0.0, 0.0).unwrap().psi, 1.74646, 0.0);
    near(butterfly(0.0, 0.0, 0.0, 0.0).unwrap().psi, 1.79222, 0.48022);
}

/// DLMF 36.2.15: `2/(K+2) Gamma(1/(K+2))` times `exp(i pi/(2(K+2)))` or `cos(pi/(2(K+2)))`.
#[test]
fn closed_form_at_the_origin() {
    // Gamma(1/3) .. Gamma(1/6) (DLMF 5.4; 17 digits by mpmath).
    const GAMMA: [f64; 4] = [
        2.678_938_534_707_748,
        3.625_609_908_221_908,
        4.590_843_711_998_803,
        5.566_316_001_780_235,
    ];
    let exact = |k: usize| {
        let d = (k + 2) as f64;
        let turn = Complex64::from_polar(1.0, PI / (2.0 * d));
        let turn = if k.is_multiple_of(2) { turn } else { Complex64::new(turn.re, 0.0) };
        turn * (2.0 / d * GAMMA[k - 1])
    };
    let got = [
        real_line(&[ZERO; 1]).unwrap().psi.to_complex(),
        real_line(&[ZERO; 2]).unwrap().psi.to_complex(),
        real_line(&[ZERO; 3]).unwrap().psi.to_complex(),
        real_line(&[ZERO; 4]).unwrap().psi.to_complex(),
    ];
    for (k, v) in got.iter().enumerate() {
        assert!((v - exact(k + 1)).norm() < 1e-15 * 4.0, "{k} {v} {}", exact(k + 1));
    }
    assert!((pearcey(0.0, 0.0).unwrap().psi - exact(2)).norm() < 1e-15);
}

/// A complex number in a disc.
fn disc(radius: f64) -> impl Strategy<Value = Complex64> {
    (0.0..1.0f64, 0.0..TAU).prop_map(move |(u, a)| Complex64::from_polar(radius * u.sqrt(), a))
}

/// K parameters whose outermost saddle has about the given size at most.
fn parameters<const K: usize>(size: f64) -> impl Strategy<Value = [Complex64; K]> {
    (prop::array::uniform4(disc(1.0)), 0.05..size)
        .prop_map(|(x, size)| std::array::from_fn(|m| x[m] * size.powi((K + 1 - m) as i32)))
}

/// `T` of the cuspoid scale.
fn reach<const K: usize>(x: &[Complex64; K]) -> f64 {
    1.0 + (0..K).map(|m| x[m].norm().powf(1.0 / (K + 1 - m) as f64)).sum::<f64>()
}

/// Psi and the derivatives in units of `T^m`, all as mantissas at one exponent.
fn parts<const K: usize>(v: &Cuspoid<Scaled, K>, t: f64, exponent: i64) -> Vec<Complex64> {
    let mut out = vec![v.psi.mantissa_at(exponent)];
    for (m, d) in v.derivatives.iter().enumerate() {
        out.push(d.mantissa_at(exponent) / t.powi(m as i32 + 1));
    }
    out
}

fn top<const K: usize>(v: &Cuspoid<Scaled, K>) -> i64 {
    v.derivatives.iter().fold(v.psi.exponent, |top, d| top.max(d.exponent))
}

/// The largest difference of two, on the scale of the larger.
fn difference<const K: usize>(a: &Cuspoid<Scaled, K>, b: &Cuspoid<Scaled, K>, t: f64) -> f64 {
    let exponent = top(a).max(top(b));
    let (a, b) = (parts(a, t, exponent), parts(b, t, exponent));
    let size = |v: &[Complex64]| v.iter().map(|c| c.norm()).fold(0.0, f64::max);
    let gap: Vec<Complex64> = a.iter().zip(&b).map(|(a, b)| a - b).collect();
    size(&gap) / size(&a).max(size(&b))
}

fn times<const K: usize>(v: &Cuspoid<Scaled, K>, factor: Complex64) -> Cuspoid<Scaled, K> {
    Cuspoid { psi: v.psi * factor, derivatives: v.derivatives.map(|d| d * factor) }
}

fn minus<const K: usize>(v: &Cuspoid<Scaled, K>) -> Cuspoid<Scaled, K> {
    times(v, Complex64::new(-1.0, 0.0))
}

fn plus<const K: usize>(a: &Cuspoid<Scaled, K>, b: &Cuspoid<Scaled, K>) -> Cuspoid<Scaled, K> {
    Cuspoid {
        psi: a.psi + b.psi,
        derivatives: std::array::from_fn(|m| a.derivatives[m] + b.derivatives[m]),
    }
}

/// All valleys in turn: the way round closes (Cauchy's theorem).
fn loop_closes<const K: usize>(x: &[Complex64; K]) -> Result<(), TestCaseError> {
    let side = |v: usize| between(x, v, (v + 1) % (K + 2)).unwrap();
    let half = (0..K + 1).map(side).reduce(|a, b| plus(&a, &b)).unwrap();
    // The terms that cancel may exceed what is left.
    let largest = (0..K + 2).map(|v| top(&side(v))).max().unwrap();
    let t = reach(x);
    let (a, b) = (parts(&half, t, largest), parts(&side(K + 1), t, largest));
    for (a, b) in a.iter().zip(&b) {
        prop_assert!((a + b).norm() < 3e-14, "{x:?}: {a} {b}");
    }
    // A pair the other way round; twice the same valley.
    prop_assert!(difference(&between(x, 1, 0).unwrap(), &minus(&side(0)), t) < 1e-15);
    prop_assert!(between(x, 1, 1).unwrap().psi.is_zero());
    Ok(())
}

/// `t -> w t`, `w = exp(2 pi i/(K+2))`, leads from valley to valley (DLMF 36.6, rotated).
fn turns<const K: usize>(x: &[Complex64; K], from: usize, to: usize) -> Result<(), TestCaseError> {
    let n = K + 2;
    let (from, to) = (from % n, to % n);
    prop_assume!(from != to);
    let w = |m: usize| Complex64::from_polar(1.0, TAU * (m % n) as f64 / n as f64);
    let turned: [Complex64; K] = std::array::from_fn(|m| x[m] * w(m + 1));
    let v = between(x, (from + 1) % n, (to + 1) % n).unwrap();
    let u = between(&turned, from, to).unwrap();
    let back = Cuspoid {
        psi: u.psi * w(1),
        derivatives: std::array::from_fn(|m| u.derivatives[m] * w(m + 2)),
    };
    // The rounded factors move the parameters: the phase of size T^(K+2) moves by that much.
    let allowed = 3e-14 + 2e-15 * reach(x).powi(n as i32);
    prop_assert!(difference(&v, &back, reach(x)) < allowed, "{x:?} {from} {to}");
    Ok(())
}

/// `integral of f' exp(i f) dt = 0` as a differential equation in x_1 (DLMF 36.10(i)):
/// `(K+2) M_(K+1) + sum_m m x_m M_(m-1) = 0`, `M_n = (-i)^n d^n Psi/dx_1^n`; the derivatives by
/// Cauchy's formula on a circle in the complex x_1 plane. Also `dPsi/dx_m = i M_m`
/// (DLMF 36.10(ii)).
fn satisfies_equations<const K: usize>(x: &[Complex64; K]) -> Result<(), TestCaseError> {
    const POINTS: usize = 32;
    let radius = 1.0;
    let mut taylor = [ZERO; 6];
    let mut largest = 0.0f64;
    for k in 0..POINTS {
        let turn =
            |n: usize| Complex64::from_polar(1.0, TAU * (k * n % POINTS) as f64 / POINTS as f64);
        let mut there = *x;
        there[0] += turn(1) * radius;
        let psi = real_line(&there).unwrap().to_complex().psi;
        largest = largest.max(psi.norm());
        for (n, c) in taylor.iter_mut().enumerate() {
            *c += psi * turn(n).conj() / POINTS as f64;
        }
    }
    let mut m = [ZERO; 6];
    let mut factor = Complex64::new(1.0, 0.0);
    for n in 0..6 {
        m[n] = taylor[n] * factor;
        factor *= Complex64::new(0.0, -1.0) * (n + 1) as f64 / radius;
    }
    let t = reach(x);
    // Rounding on the circle counts n! times in the n-th derivative.
    let scale = (0..=K).map(|n| m[n].norm() / t.powi(n as i32)).fold(largest, f64::max);
    let here = real_line(x).unwrap().to_complex();
    prop_assert!(
        (here.psi - m[0]).norm() < 1e-13 * scale,
        "{x:?} {:e} {scale} {t}",
        (here.psi - m[0]).norm()
    );
    for (n, m) in m.iter().enumerate().take(K + 1).skip(1) {
        let error = here.derivatives[n - 1] - Complex64::new(0.0, 1.0) * m;
        prop_assert!(error.norm() < 2e-12 * scale * t.powi(n as i32), "{x:?} {n} {error}");
    }
    let sum = m[K + 1] * (K + 2) as f64
        + (1..=K).map(|n| x[n - 1] * m[n - 1] * n as f64).sum::<Complex64>();
    prop_assert!(sum.norm() < 1e-11 * scale * t.powi(K as i32 + 1), "{x:?} {sum}");
    Ok(())
}

/// DLMF 36.2(iii): for even K odd parameters may change sign; for odd K even ones, with the
/// complex conjugate.
fn is_symmetric<const K: usize>(x: &[f64; K]) -> Result<(), TestCaseError> {
    let at = |sign: f64, parity: usize| {
        let flipped: [Complex64; K] = std::array::from_fn(|m| {
            Complex64::new(if (m + 1) % 2 == parity { sign * x[m] } else { x[m] }, 0.0)
        });
        real_line(&flipped).unwrap()
    };
    let parity = usize::from(K.is_multiple_of(2));
    let (a, b) = (at(1.0, parity), at(-1.0, parity));
    let back = if K.is_multiple_of(2) {
        let sign = |m: usize| Complex64::new(if m % 2 == 1 { -1.0 } else { 1.0 }, 0.0);
        Cuspoid { psi: b.psi, derivatives: std::array::from_fn(|m| b.derivatives[m] * sign(m + 1)) }
    } else {
        let sign = |m: usize| Complex64::new(if m.is_multiple_of(2) { -1.0 } else { 1.0 }, 0.0);
        Cuspoid {
            psi: b.psi.conj(),
            derivatives: std::array::from_fn(|m| b.derivatives[m].conj() * sign(m + 1)),
        }
    };
    let t = 1.0 + (0..K).map(|m| x[m].abs().powf(1.0 / (K + 1 - m) as f64)).sum::<f64>();
    prop_assert!(difference(&a, &minus(&minus(&back)), t) < 3e-14, "{x:?}");
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn loops_close(a in parameters::<1>(8.0), b in parameters::<2>(5.0), c in parameters::<3>(4.0), d in parameters::<4>(3.0)) {
        loop_closes(&a)?;
        loop_closes(&b)?;
        loop_closes(&c)?;
        loop_closes(&d)?;
    }

    #[test]
    fn valleys_turn(b in parameters::<2>(4.0), c in parameters::<3>(3.0), d in parameters::<4>(2.5), from in 0usize..60, to in 0usize..60) {
        turns(&b, from, to)?;
        turns(&c, from, to)?;
        turns(&d, from, to)?;
    }

    #[test]
    fn equations_hold(b in parameters::<2>(2.0), c in parameters::<3>(1.6), d in parameters::<4>(1.4)) {
        satisfies_equations(&b)?;
        satisfies_equations(&c)?;
        satisfies_equations(&d)?;
    }

    #[test]
    fn symmetries_hold(x in prop::array::uniform4(-1.0..1.0f64), size in 0.1..4.0f64) {
        let scaled = |k: usize, m: usize| x[m] * size.powi((k + 1 - m) as i32);
        is_symmetric::<2>(&std::array::from_fn(|m| scaled(2, m)))?;
        is_symmetric::<3>(&std::array::from_fn(|m| scaled(3, m)))?;
        is_symmetric::<4>(&std::array::from_fn(|m| scaled(4, m)))?;
    }

    /// DLMF 36.2.13: `Psi_1(x) = 2 pi 3^(-1/3) Ai(3^(-1/3) x)`.
    #[test]
    fn one_parameter_is_airy(x in disc(12.0)) {
        let third = 3f64.powf(-1.0 / 3.0);
        let v = real_line(&[x]).unwrap().to_complex();
        let a = airy(x * third);
        let (psi, slope) = (a.ai * (TAU * third), a.ai_prime * (TAU * third * third));
        let scale = psi.norm().max(slope.norm() / reach(&[x]));
        prop_assert!((v.psi - psi).norm() < 5e-14 * scale, "{x}");
        prop_assert!((v.derivatives[0] - slope).norm() < 5e-14 * scale * reach(&[x]), "{x}");
    }

    /// The table and the lone saddles against the descents.
    #[test]
    fn pearcey_agrees_with_descents(x1 in -300.0..300.0f64, x2 in -60.0..60.0f64, part in 0.0..1.0f64) {
        // Everywhere, in the box of the table, round the caustic.
        let caustic = (8.0f64 / 27.0).sqrt() * x2.abs().powf(1.5);
        for (x1, x2) in [(x1, x2), (x1 / 10.0, x2 / 4.0), (caustic * (1.2 - 0.4 * part), -x2.abs())] {
            let x = [Complex64::new(x1, 0.0), Complex64::new(x2, 0.0)];
            let v = pearcey(x1, x2).unwrap();
            let v = Cuspoid { psi: Scaled::from(v.psi), derivatives: v.derivatives.map(Scaled::from) };
            let w = real_line(&x).unwrap();
            prop_assert!(difference(&v, &w, reach(&x)) < 2e-14, "{x1} {x2}");
        }
    }

    /// Weights on all valleys: the same as pairs, added.
    #[test]
    fn weights_add_up(x in parameters::<4>(2.0), w in prop::array::uniform5(-2i32..3)) {
        let weights = [w[0], w[1], w[2], w[3], w[4], -w.iter().sum::<i32>()];
        let got = moments(&x, &weights).unwrap();
        let pairs = (0..5).map(|v| {
            times(&between(&x, 5, v).unwrap(), Complex64::new(f64::from(w[v]), 0.0))
        });
        let pairs: Vec<_> = pairs.collect();
        let sum = pairs.iter().copied().reduce(|a, b| plus(&a, &b)).unwrap();
        let exponent = pairs.iter().map(top).max().unwrap();
        let gap = Scaled::new(got.mantissas[0], got.exponent) + (-sum.psi);
        prop_assert!(gap.mantissa_at(exponent).norm() < 1e-13 * reach(&x).powi(4), "{x:?} {weights:?}");
    }

    /// Anything at all: an answer or an error, in bounded time.
    #[test]
    fn anything_has_an_answer(bits in prop::array::uniform8(any::<u64>()), from in 0usize..8, to in 0usize..8) {
        let number = |i: usize| f64::from_bits(bits[i]);
        let x: [Complex64; 4] = std::array::from_fn(|m| Complex64::new(number(2 * m), number(2 * m + 1)));
        let finite = |v: Cuspoid<Scaled, 4>| v.psi.is_finite() && v.derivatives.iter().all(|d| d.is_finite());
        if let Ok(v) = between(&x, from, to) {
            prop_assert!(finite(v), "{x:?}");
        }
        let real = x.map(|x| x.re);
        let _ = (pearcey(real[0], real[1]), pearcey_zero_near(real[0], real[1]));
        let _ = (swallowtail(real[0], real[1], real[2]), butterfly(real[0], real[1], real[2], real[3]));
    }
}

/// Extreme parameters that proptest would rarely hit.
#[test]
fn extremes_are_answered() {
    let values = [
        0.0,
        -0.0,
        5e-324,
        -1e-310,
        1e-300,
        1e-160,
        1e-20,
        1e-8,
        1.0,
        -1.0,
        1e3,
        -1e5,
        1e7,
        -1e8,
        1e12,
        1e77,
        -1e154,
        1e300,
        f64::MAX,
        f64::INFINITY,
        f64::NEG_INFINITY,
        f64::NAN,
    ];
    let mut refused = 0;
    for &a in &values {
        for &b in &values {
            match pearcey(a, b) {
                Ok(v) => {
                    assert!(v.psi.is_finite() && a.is_finite() && b.is_finite(), "{a} {b}");
                    let w = real_line(&[Complex64::new(a, 0.0), Complex64::new(b, 0.0)]).unwrap();
                    assert!((v.psi - w.psi.to_complex()).norm() < 2e-14, "{a} {b} {v:?} {w:?}");
                }
                Err(Error::NoDigits { digits, .. }) => {
                    assert!(digits < 0.5, "{digits}");
                    refused += 1;
                }
                Err(Error::Domain { .. }) => assert!(!(a.is_finite() && b.is_finite())),
                Err(other) => panic!("{a} {b}: {other}"),
            }
            for &c in &values {
                let finite = a.is_finite() && b.is_finite() && c.is_finite();
                match swallowtail(a, b, c) {
                    Ok(v) => assert!(v.psi.is_finite() && finite, "{a} {b} {c}"),
                    Err(Error::NoDigits { .. }) => assert!(finite),
                    Err(Error::Domain { .. }) => assert!(!finite),
                    Err(other) => panic!("{a} {b} {c}: {other}"),
                }
                match butterfly(a, b, c, a) {
                    Ok(v) => assert!(v.psi.is_finite() && finite, "{a} {b} {c}"),
                    Err(Error::NoDigits { .. }) => assert!(finite),
                    Err(Error::Domain { .. }) => assert!(!finite),
                    Err(other) => panic!("{a} {b} {c}: {other}"),
                }
            }
        }
    }
    assert!(refused > 50);
}

/// Every refusal names the value.
#[test]
fn refusals_name_the_value() {
    let text = |r: Result<(), Error>| r.unwrap_err().to_string();
    assert!(text(pearcey(f64::NAN, 0.0).map(|_| ())).contains("x_1 = NaN"));
    assert!(text(pearcey(0.0, 1e9).map(|_| ())).contains("1000000000"));
    assert!(text(moments(&[ZERO; 2], &[1, 0, 0, 0]).map(|_| ())).contains("weights"));
    assert!(text(moments(&[ZERO; 2], &[1, -1]).map(|_| ())).contains("weights"));
    assert!(text(moments(&[], &[1, -1]).map(|_| ())).contains("0 parameters"));
    assert!(text(moments(&[ZERO; 5], &[0; 7]).map(|_| ())).contains("5 parameters"));
    assert!(text(between(&[ZERO; 2], 4, 0).map(|_| ())).contains("valley = 4"));
    assert!(text(between(&[ZERO; 9], 8, 0).map(|_| ())).contains("valley = 8"));
    assert!(text(pearcey_zero_inside(0, 0).map(|_| ())).contains("row"));
    assert!(text(pearcey_zero_inside(3, 3).map(|_| ())).contains("place = 3"));
}

/// Row m inside the cusp has m zeros, all different; those outside follow the caustic.
#[test]
fn zeros_are_complete_and_distinct() {
    let mut list = vec![];
    for row in 1..=12 {
        for place in 0..row {
            let z = pearcey_zero_inside(row, place).unwrap();
            assert!(8.0 * z.x2.powi(3) + 27.0 * z.x1 * z.x1 < 0.0, "{row} {place} {z:?}");
            list.push(z);
        }
    }
    for n in 0..40 {
        let z = pearcey_zero_outside(n).unwrap();
        assert!(8.0 * z.x2.powi(3) + 27.0 * z.x1 * z.x1 > 0.0, "{n} {z:?}");
        list.push(z);
    }
    for (i, a) in list.iter().enumerate() {
        let v = pearcey(a.x1, a.x2).unwrap();
        assert!(v.psi.norm() < 1e-12, "{a:?} {}", v.psi);
        assert!(list[..i].iter().all(|b| (a.x1 - b.x1).hypot(a.x2 - b.x2) > 0.1), "{a:?}");
    }
}
