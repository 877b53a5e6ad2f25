//! Closed contours and contours of several pieces.

mod coverage;
#[path = "support/mixing.rs"]
mod mixing;

use coverage::{Random, Tally, amplitude};
use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64, Contour, Error, Form, Integral};
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

fn circle(radius: f64, count: usize) -> Contour {
    let point = |n| Complex64::from_polar(radius, 0.3 + 2.0 * PI * n as f64 / count as f64);
    Contour::closed((0..count).map(point))
}

#[test]
fn bessel_functions_as_laurent_coefficients() {
    // exp(k (t - 1/t)/2) = sum J_n(k) t^n (DLMF 10.12.1): J_n(k) = (1/2 pi i) integral of
    // t^(-n-1) exp(k (t - 1/t)/2) round the origin. Values by arbitrary-precision arithmetic (mpmath).
    for (n, k, exact) in BESSEL {
        let integral = Integral::new(
            |t: Complex64| {
                let inverse = t.inv();
                ((t - inverse) * c(0.0, -0.5), (inverse * inverse + 1.0) * c(0.0, -0.5))
            },
            circle(1.3, 6),
        )
        .amplitude(move |t: Complex64| t.powi(-n - 1) * c(0.0, -0.5 / PI));
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 1e-13, "{n} {k} {}", yardstick.value - exact);
        let got = integral.plan_for(k..=k).and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!("J_{n}({k}): {error:.1e}, figure {:.1e}", got.error);
        assert!(error <= got.error && got.error < 1e-5);
        assert!(matches!(got.form, Form::Saddles { clusters: 2, largest: 1 }));
    }
}
/// Order, argument, value.
const BESSEL: [(i32, f64, f64); 4] = [
    (0, 20.0, 0.167_024_664_340_583_16),
    (1, 20.0, 0.066_833_124_175_850_05),
    (3, 50.0, 0.092_734_804_061_634_43),
    (2, 1000.0, -0.024_777_229_528_605_996),
];

#[test]
fn hermite_polynomials_from_their_generating_function() {
    // exp(2 x z - z^2) = sum H_n(x) z^n/n! (DLMF 18.12.15): with the pole alone inside the contour the
    // integral is 2 pi i H_n(x)/n!; H_1(x) = 2 x, H_0 = 1 (DLMF 18.5.14 ff). Simple and double pole.
    let (x, k) = (0.7, 5.0f64);
    for (n, exact) in [(0, 1.0), (1, 2.0 * x * k)] {
        let integral = Integral::new(
            move |z: Complex64| ((z * (2.0 * x) - z * z) * c(0.0, -1.0), (z - x) * c(0.0, 2.0)),
            circle(0.4, 5),
        )
        .amplitude(move |z: Complex64| z.powi(-n - 1))
        .pole(c(0.0, 0.0));
        let exact = c(0.0, 2.0 * PI) * exact;
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 1e-12 * exact.norm());
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        println!("H_{n}: {:.1e} {:.1e}", (got.value - exact).norm(), got.error);
        assert!((got.value - exact).norm() <= got.error && got.error < 1e-10 * exact.norm());
    }
}

#[test]
fn several_pieces_add_up() {
    // A contour between two valleys, whole and in two pieces that meet in a finite point; exponents far
    // outside the range of f64.
    let phase = || Polynomial(vec![c(1.0, -3.0), c(0.4, 0.1), c(0.0, 0.0), c(1.0, 0.0)]);
    let (from, to) =
        (Complex64::from_polar(4.0, 5.0 * PI / 6.0), Complex64::from_polar(4.0, PI / 6.0));
    let middle = c(0.2, 0.5);
    let whole = Integral::new(phase(), Contour::through([from, middle, to]));
    let first = Integral::new(phase(), Contour::ending_at([from, middle]));
    let second = Integral::new(phase(), Contour::starting_at([middle, to]));
    for k in [3.0, 30.0, 900.0] {
        let at = |i: &Integral<Polynomial>| i.plan().and_then(|plan| plan.at(k)).expect("a value");
        let sum = at(&first) + at(&second);
        let exact = whole.quadrature(k, 1e-13).expect("a yardstick");
        let difference = sum - exact;
        assert!(
            difference.scaled.ln_norm()
                <= (sum.relative_error.ln() + sum.scaled.ln_norm()).max(-1e300)
        );
        assert_eq!(difference.form, Form::Mixed);
        let halves = first.quadrature(k, 1e-13).expect("a value")
            + second.quadrature(k, 1e-13).expect("a value");
        assert!(matches!(halves.form, Form::Quadrature { .. }));
        let miss = halves - exact;
        assert!(
            miss.scaled.ln_norm() <= (miss.relative_error.ln() + miss.scaled.ln_norm()).max(-1e300)
        );
        let back = -(-exact);
        assert_eq!(back, exact);
    }
}

#[test]
fn what_encloses_nothing_is_refused_or_zero() {
    let entire = Integral::new(|z: Complex64| (z * z, z * 2.0), circle(1.0, 5));
    match entire.plan() {
        Err(Error::Undecided { .. }) => {}
        other => panic!("{:?}", other.map(|plan| plan.at(3.0))),
    }
    let flat = Contour::closed([c(0.0, 0.0), c(1.0, 0.0)]);
    let none = Integral::new(|z: Complex64| (z * z, z * 2.0), flat);
    assert!(matches!(none.plan(), Err(Error::Domain { .. })));
    assert!(matches!(none.quadrature(1.0, 1e-9), Err(Error::Domain { .. })));
}

/// f = a polynomial in z and 1/z, round the origin: an essential singularity inside.
#[test]
fn random_laurent_phases() {
    let mut random = Random(21);
    let mut tally = Tally::default();
    for case in 0..300 {
        let (up, down) = (1 + random.below(2), 1 + random.below(2));
        let lead = Complex64::from_polar(random.within(0.4, 1.0), 2.0 * PI * random.next());
        let deep = Complex64::from_polar(random.within(0.4, 1.0), 2.0 * PI * random.next());
        let middle = random.disc(1.0);
        let f = move |z: Complex64| {
            let inverse = z.inv();
            let (p, q) = (z.powi(up as i32), inverse.powi(down as i32));
            let slope = (lead * p * up as f64 - deep * q * down as f64) * inverse;
            (lead * p + deep * q + middle * z, slope + middle)
        };
        let count = 4 + random.below(5);
        let contour = circle(random.within(0.7, 1.5), count);
        let k = 10f64.powf(random.within(0.5, 4.0));
        let smooth = amplitude(&mut random);
        let integral = Integral::new(f, contour).amplitude(smooth);
        let got = integral.plan().and_then(|plan| plan.at(k));
        tally.enter(
            &format!("case {case} {up} {down} k {k:.1}"),
            got,
            integral.quadrature(k, 1e-13),
        );
    }
    tally.check("Laurent phases", 0.9);
}

/// Polynomial phases, simple and double poles inside and outside.
#[test]
fn random_poles_in_closed_contours() {
    let mut random = Random(22);
    let mut tally = Tally::default();
    for case in 0..200 {
        let degree = 2 + random.below(2);
        let phase = Polynomial((0..=degree).map(|_| random.disc(1.0)).collect());
        let (inside, outside) = (random.disc(0.7), Complex64::from_polar(2.0, 7.0 * random.next()));
        let (a, b, d) = (random.disc(1.0), random.disc(1.0), random.disc(1.0));
        let g = move |z: Complex64| {
            let (p, q) = ((z - inside).inv(), (z - outside).inv());
            1.0 + (a * p + b) * p + d * q
        };
        let k = 10f64.powf(random.within(0.3, 3.0));
        let integral = Integral::new(phase, circle(1.2, 7)).amplitude(g).pole(inside).pole(outside);
        let got = integral.plan().and_then(|plan| plan.at(k));
        tally.enter(&format!("case {case} k {k:.1}"), got, integral.quadrature(k, 1e-13));
    }
    tally.check("poles in closed contours", 0.9);
}
