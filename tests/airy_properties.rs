//! Identities of the Airy functions, and inputs at the edges.

use merging_saddles::Complex64;
use merging_saddles::special::airy::*;
use proptest::prelude::*;
use std::f64::consts::PI;

fn omega() -> Complex64 {
    Complex64::new(-0.5, 0.75f64.sqrt())
}

fn disc(radius: f64) -> impl Strategy<Value = Complex64> {
    (0.0..radius, -PI..PI).prop_map(|(r, a)| Complex64::from_polar(r, a))
}

fn largest(terms: &[Complex64]) -> f64 {
    terms.iter().map(|t| t.norm()).fold(0.0, f64::max)
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..Default::default() })]

    /// DLMF 9.2.7.
    #[test]
    fn wronskian(z in disc(50.0)) {
        let v = airy(z);
        let (one, two) = (v.ai * v.bi_prime, v.ai_prime * v.bi);
        prop_assert!((one - two - 1.0 / PI).norm() <= 5e-15 * largest(&[one, two]).max(0.3));
    }

    /// DLMF 9.2.12: Ai(z) + w Ai(z w) + w^-1 Ai(z w^-1) = 0, w = e^(2 pi i/3).
    #[test]
    fn three_solutions(z in disc(60.0)) {
        let (v, r, w) = (airy(z), rotated(z), omega());
        let terms = [v.ai, w * r.plus, w.conj() * r.minus];
        let slopes = [v.ai_prime, w.conj() * r.plus_prime, w * r.minus_prime];
        let root = (1.0 + z.norm()).sqrt();
        let size = largest(&terms).max(largest(&slopes) / root);
        prop_assert!(terms.iter().sum::<Complex64>().norm() <= 5e-15 * size);
        prop_assert!(slopes.iter().sum::<Complex64>().norm() <= 5e-15 * size * root);
    }

    /// DLMF 9.2.11: Ai(z e^(-+2 pi i/3)) = e^(-+pi i/3) (Ai(z) +- i Bi(z))/2.
    #[test]
    fn rotation_from_both(z in disc(60.0)) {
        let (v, r) = (airy(z), rotated(z));
        let i = Complex64::I;
        let turn = Complex64::new(0.5, 0.75f64.sqrt());
        let size = largest(&[v.ai, v.bi]).max(largest(&[v.ai_prime, v.bi_prime]) / (1.0 + z.norm()).sqrt());
        let minus = turn.conj() * (v.ai + i * v.bi) * 0.5;
        let plus = turn * (v.ai - i * v.bi) * 0.5;
        prop_assert!((r.minus - minus).norm() <= 3e-15 * size);
        prop_assert!((r.plus - plus).norm() <= 3e-15 * size);
    }

    /// All four are real on the real axis, hence symmetric (DLMF 9.2(i)).
    #[test]
    fn conjugation(z in disc(100.0)) {
        let (v, c) = (airy(z), airy(z.conj()));
        prop_assert_eq!([v.ai, v.ai_prime, v.bi, v.bi_prime].map(|x| x.conj()), [c.ai, c.ai_prime, c.bi, c.bi_prime]);
        let (v, c) = (airy_scaled(z), airy_scaled(z.conj()));
        prop_assert_eq!([v.ai, v.ai_prime, v.bi, v.bi_prime].map(|x| x.conj()), [c.ai, c.ai_prime, c.bi, c.bi_prime]);
        let (v, c) = (rotated(z), rotated(z.conj()));
        prop_assert_eq!([v.plus, v.plus_prime].map(|x| x.conj()), [c.minus, c.minus_prime]);
    }

    /// The lattice, the expansions and the real forms meet without a step.
    #[test]
    fn continuity(angle in 0.0..PI, r in prop_oneof![Just(8.8), 0.5f64..9.0]) {
        let step = 1e-9;
        let (one, two) = (Complex64::from_polar(r - step, angle), Complex64::from_polar(r + step, angle));
        let (a, b, d) = (airy(one), airy(two), two - one);
        let root = (1.0 + r).sqrt();
        let size = a.bi.norm().max(a.bi_prime.norm() / root);
        // Second-order terms are below step^2 r^(3/2).
        prop_assert!((b.bi - a.bi - d * (a.bi_prime + b.bi_prime) * 0.5).norm() <= 3e-15 * size);
        let size = a.ai.norm().max(a.ai_prime.norm() / root);
        prop_assert!((b.ai - a.ai - d * (a.ai_prime + b.ai_prime) * 0.5).norm() <= 3e-15 * size);
    }

    /// Real argument and complex argument with a zero or tiny imaginary part.
    #[test]
    fn real_and_complex(x in -90.0..60.0f64) {
        let (v, c, t) = (airy_real(x), airy(x.into()), airy(Complex64::new(x, 1e-300)));
        prop_assert_eq!((v.ai, v.bi_prime), (c.ai.re, c.bi_prime.re));
        prop_assert_eq!(c.bi.im, 0.0);
        let size = v.ai.abs().max(v.ai_prime.abs() / (1.0 + x.abs()).sqrt());
        prop_assert!((t.ai - v.ai).norm() <= 2e-15 * size);
        let size = v.bi.abs().max(v.bi_prime.abs() / (1.0 + x.abs()).sqrt());
        prop_assert!((t.bi - v.bi).norm() <= 2e-15 * size);
    }

    /// The scaled forms are the plain ones times the exponential.
    #[test]
    fn scaling(z in disc(30.0)) {
        let zeta = 2.0 / 3.0 * z * z.sqrt();
        let (v, s) = (airy(z), airy_scaled(z));
        let tolerance = 1e-15 * (4.0 + 2.0 * zeta.norm());
        prop_assert!((v.ai * zeta.exp() - s.ai).norm() <= tolerance * (s.ai.norm() + s.ai_prime.norm()));
        prop_assert!((v.bi * (-zeta.re.abs()).exp() - s.bi).norm() <= tolerance * (s.bi.norm() + s.bi_prime.norm()));
        let r = airy_real_scaled(z.re);
        let c = airy_scaled(z.re.into());
        prop_assert_eq!(r.bi, c.bi.re);
        if z.re >= 0.0 {
            prop_assert!((r.ai - c.ai.re).abs() <= 1e-15 * r.ai && c.ai.im == 0.0);
        }
    }

    /// Gi + Hi = Bi (DLMF 9.12.11), and the phase functions reproduce the values (9.8.1, 9.8.5).
    #[test]
    fn scorer_and_modulus(z in disc(60.0)) {
        let (s, v) = (scorer(z), airy(z));
        let size = largest(&[s.gi, s.hi, v.bi]) + largest(&[s.gi_prime, s.hi_prime, v.bi_prime]) / (1.0 + z.norm()).sqrt();
        prop_assert!((s.gi + s.hi - v.bi).norm() <= 3e-15 * size);
        let e = scorer_extended(z);
        for (apart, value) in [(e.gi, s.gi), (e.gi_prime, s.gi_prime), (e.hi, s.hi), (e.hi_prime, s.hi_prime)] {
            prop_assert!((apart.to_complex() - value).norm() <= 1e-15 * size * (1.0 + z.norm()).sqrt());
        }
        let (i, e) = (ai_integral(z), ai_integral_extended(z));
        prop_assert!((e.to_infinity.to_complex() - i.to_infinity).norm() <= 1e-15 * i.to_infinity.norm());
        let x = -z.norm();
        let (m, v) = (modulus_phase(x).unwrap(), airy_real(x));
        let turn = 1e-15 * (3.0 + m.phase);
        prop_assert!((m.modulus * m.phase.sin() - v.ai).abs() <= turn * m.modulus);
        prop_assert!((m.modulus * m.phase.cos() - v.bi).abs() <= turn * m.modulus);
        prop_assert!((m.prime_modulus * m.prime_phase.sin() - v.ai_prime).abs() <= turn * m.prime_modulus);
        prop_assert!((m.prime_modulus * m.prime_phase.cos() - v.bi_prime).abs() <= turn * m.prime_modulus);
    }

    /// The equation of Hi, u'' = z u + 1/pi (DLMF 9.12.1), and the integral of Ai: differences over a
    /// short step against Simpson's rule.
    #[test]
    fn scorer_equation(z in disc(40.0), angle in -PI..PI) {
        let h = Complex64::from_polar(1e-3 / (1.0 + z.norm().sqrt()), angle);
        let (a, b, c) = (scorer(z - h), scorer(z), scorer(z + h));
        let step = ((z + h) - (z - h)) / 6.0;
        let size = largest(&[a.hi_prime, c.hi_prime]) + largest(&[a.hi, c.hi]) * (1.0 + z.norm()).sqrt();
        let second = |u: Complex64, z: Complex64| z * u + 1.0 / PI;
        let simpson = step * (second(a.hi, z - h) + 4.0 * second(b.hi, z) + second(c.hi, z + h));
        prop_assert!((c.hi_prime - a.hi_prime - simpson).norm() <= 5e-15 * size);
        let (i, j) = (ai_integral(z - h), ai_integral(z + h));
        let simpson = step * (airy(z - h).ai + 4.0 * airy(z).ai + airy(z + h).ai);
        let size = largest(&[i.to_infinity, j.to_infinity]);
        prop_assert!((i.to_infinity - j.to_infinity - simpson).norm() <= 5e-15 * size);
        prop_assert!((i.from_zero + i.to_infinity - 1.0 / 3.0).norm() <= 2e-15 * size.max(0.3));
    }

    /// Reflection t -> -conj(t): conj I_0(x, a) + I_0(conj x, -conj a) = 2 pi Ai(conj x) (from DLMF 9.5.4),
    /// and the same with t under the integral: -conj I_1 + I_1 = -2 pi i Ai'.
    #[test]
    fn incomplete_reflection(x in disc(60.0), a in disc(9.0), on_saddle in any::<bool>()) {
        let a = if on_saddle { (-x).sqrt() } else { a };
        let v = incomplete_airy_extended(x, a).unwrap();
        let w = incomplete_airy_extended(x.conj(), -a.conj()).unwrap();
        let whole = airy_extended(x.conj());
        for (one, two, sum) in [
            (v.i0.conj(), w.i0, whole.ai * (2.0 * PI)),
            (-v.i1.conj(), w.i1, whole.ai_prime * Complex64::new(0.0, -2.0 * PI)),
        ] {
            let top = [one, two, sum].iter().map(|s| s.exponent).max().unwrap();
            prop_assert!((one + two + -sum).mantissa_at(top).norm() <= 2e-14, "{x} {a}");
        }
    }

    /// I_m(x, a) - I_m(x, b) is the integral from a to b: the derivative by a, by central differences.
    #[test]
    fn incomplete_derivative(x in disc(20.0), a in disc(5.0), angle in -PI..PI) {
        let h = Complex64::from_polar(1e-3 / (1.0 + (a * a + x).norm()), angle);
        let (v, w) = (incomplete_airy(x, a - h).unwrap(), incomplete_airy(x, a + h).unwrap());
        let f = |t: Complex64| (Complex64::I * t * (t * t / 3.0 + x)).exp();
        let step = ((a + h) - (a - h)) / 6.0;
        let simpson = step * (f(a - h) + 4.0 * f(a) + f(a + h));
        let size = largest(&[v.i0, w.i0, simpson * 30.0]);
        prop_assert!((v.i0 - w.i0 - simpson).norm() <= 1e-14 * size);
        let g = |t: Complex64| t * f(t);
        let simpson = step * (g(a - h) + 4.0 * g(a) + g(a + h));
        // I_1 may be near a zero: its natural scale is |t| I_0 with t the saddle or the end.
        let natural = v.i0 * a.norm().max(x.norm().sqrt());
        let size = largest(&[v.i1, w.i1, natural, simpson * 30.0]);
        prop_assert!((v.i1 - w.i1 - simpson).norm() <= 1e-14 * size);
    }

    /// Every size of the arguments is answered or refused, and the refusal says why.
    #[test]
    fn incomplete_any_size(r in -30.0..8.0f64, s in -30.0..5.5f64, p in -PI..PI, q in -PI..PI) {
        let (x, a) = (Complex64::from_polar(10f64.powf(r), p), Complex64::from_polar(10f64.powf(s), q));
        match incomplete_airy_extended(x, a) {
            Ok(v) => prop_assert!(v.i0.is_finite() && v.i1.is_finite() && !v.i0.is_zero()),
            Err(e) => prop_assert!(matches!(e, merging_saddles::Error::NoDigits { .. }), "{e}"),
        }
    }

    /// No input makes any of them panic, and the modulus of what is plain never exceeds what is apart.
    #[test]
    fn any_bits(re in any::<f64>(), im in any::<f64>()) {
        let z = Complex64::new(re, im);
        let v = airy(z);
        let e = airy_extended(z);
        airy_scaled(z);
        rotated(z);
        rotated_extended(z);
        airy_real(re);
        ai(z);
        bi(z);
        ai_real(re);
        bi_real(re);
        airy_real_scaled(re);
        scorer(z);
        scorer_extended(z);
        ai_integral_extended(z);
        scorer_real(re);
        ai_integral(z);
        ai_integral_real(re);
        let _ = incomplete_airy(z, Complex64::new(im, re));
        prop_assert_eq!(modulus_phase(re).is_ok(), re <= 0.0 && re.is_finite());
        if e.ai.is_finite() {
            let plain = e.ai.to_complex();
            prop_assert!((v.ai - plain).norm() <= 1e-14 * plain.norm() + 1e-300 || !plain.norm().is_finite());
        }
    }
}

#[test]
fn values_at_the_origin() {
    // DLMF 9.2.3 to 9.2.6 with Gamma(1/3), Gamma(2/3) from 19-digit arithmetic (10-digit figures are
    // not enough here): 2.678938534707747634, 1.354117939426400417.
    let (third, two) = (2.678_938_534_707_747_6, 1.354_117_939_426_400_4);
    let three: f64 = 3.0;
    let v = airy_real(0.0);
    let exact = [
        three.powf(-2.0 / 3.0) / two,
        -three.powf(-1.0 / 3.0) / third,
        three.powf(-1.0 / 6.0) / two,
        three.powf(1.0 / 6.0) / third,
    ];
    for (value, exact) in [v.ai, v.ai_prime, v.bi, v.bi_prime].into_iter().zip(exact) {
        assert!((value / exact - 1.0).abs() < 4e-16, "{value} {exact}");
    }
}

#[test]
fn edges() {
    let tiny = airy(Complex64::new(5e-324, -5e-324));
    let origin = airy_real(0.0);
    assert_eq!((tiny.ai.re, tiny.bi.re), (origin.ai, origin.bi));
    let s = airy_scaled(Complex64::new(1e-300, 1e-300));
    assert_eq!((s.ai.re, s.bi.re), (origin.ai, origin.bi));

    for z in [Complex64::new(f64::NAN, 0.0), Complex64::new(1.0, f64::NAN)] {
        let (v, s, r) = (airy(z), airy_scaled(z), rotated(z));
        for x in [ai(z), bi(z), v.ai, v.bi, v.ai_prime, v.bi_prime, s.ai, s.bi, r.plus, r.minus] {
            assert!(x.re.is_nan() || x.im.is_nan());
        }
        assert!(airy_extended(z).ai.mantissa.re.is_nan());
    }
    assert!(airy_real(f64::NAN).bi.is_nan() && airy_real_scaled(f64::NAN).ai.is_nan());

    // Limits at infinity and underflow, DLMF 9.7.5 to 9.7.8.
    for x in [200.0, 1e5, 1e12, 1e13, 1e300, f64::INFINITY] {
        let (v, c) = (airy_real(x), airy(x.into()));
        assert_eq!((v.ai, v.ai_prime, v.bi, v.bi_prime), (0.0, 0.0, f64::INFINITY, f64::INFINITY));
        assert_eq!((ai_real(x), bi_real(x)), (0.0, f64::INFINITY));
        assert_eq!((c.ai.re, c.bi.re, c.bi.im), (0.0, f64::INFINITY, 0.0));
        let s = airy_real_scaled(x);
        let expected = 0.5 / (PI.sqrt() * x.sqrt().sqrt());
        assert!((s.ai - expected).abs() <= 1e-4 * expected);
        assert!(s.bi_prime >= 0.5 * x.sqrt().sqrt());
    }
    let v = airy_real(f64::NEG_INFINITY);
    assert_eq!((v.ai, v.bi), (0.0, 0.0));
    assert!(v.ai_prime.is_nan());
    // The phase of 10^20 is unknown: no digit is claimed.
    let v = airy_real(-1e14);
    assert!(v.ai.is_nan() && v.bi.is_nan());
    // Ai is recessive here whatever the phase.
    let v = airy(Complex64::new(1e300, 1e299));
    assert_eq!(v.ai, Complex64::ZERO);
    assert!(v.bi.re.is_nan());
    let r = rotated(Complex64::new(-1e200, 1e200));
    assert_eq!(r.minus, Complex64::ZERO);
    // e^zeta Ai needs no phase: g = 1/(2 sqrt(pi) z^(1/4)).
    for z in
        [Complex64::new(1e300, 1e300), Complex64::new(-1e20, 1e20), Complex64::new(0.0, -1e100)]
    {
        let s = airy_scaled(z);
        assert!((s.ai * z.sqrt().sqrt() * 2.0 * PI.sqrt() - 1.0).norm() < 1e-15);
        assert!((s.ai_prime / z.sqrt().sqrt() * 2.0 * PI.sqrt() + 1.0).norm() < 1e-15);
        assert!(s.bi.re.is_nan());
    }
}

/// On the cut `arg z = pi` for +0.0 and `-pi` for -0.0: e^zeta is conjugate, Bi is not affected.
#[test]
fn signed_zero_on_the_cut() {
    for x in [-0.5, -5.0, -50.0] {
        let (above, below) =
            (airy_scaled(Complex64::new(x, 0.0)), airy_scaled(Complex64::new(x, -0.0)));
        assert_eq!(above.ai, below.ai.conj());
        assert_eq!(above.bi.re, below.bi.re);
        let xi = 2.0 / 3.0 * (-x).powf(1.5);
        let expected = airy_real(x).ai * Complex64::new(0.0, -xi).exp();
        assert!((above.ai - expected).norm() < 1e-13);
    }
}
