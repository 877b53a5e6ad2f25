//! Algebraic end points: (z - z_0)^(lambda - 1) at a finite end of the contour.

mod coverage;
#[path = "support/mixing.rs"]
mod mixing;

use coverage::{Random, Tally, amplitude, valley};
use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64, Contour, Error, Integral};
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

/// nu, Gamma(nu + 1/2), k, J_nu(k).
#[allow(clippy::approx_constant)]
const POISSON: [(f64, f64, f64, f64); 6] = [
    (0.0, 1.772453850905516, 10.0, -0.24593576445134835),
    (0.25, 1.2254167024651776, 10.0, -0.20639378685517282),
    (0.25, 1.2254167024651776, 200.0, -0.03502205073463363),
    (1.0, 0.886226925452758, 30.0, -0.11875106261662294),
    (2.5, 2.0, 40.0, -0.08751431140932354),
    (0.75, 0.906402477055477, 3000.0, 0.00838844071847632),
];
/// a, Gamma(a + 1/2), z, U(a, z).
const CYLINDER: [(f64, f64, f64, f64); 8] = [
    (0.25, 1.2254167024651776, 0.0, 1.2542979867759794),
    (0.25, 1.2254167024651776, 1.5, 0.3529515293263894),
    (-0.25, 3.625609908221908, -0.001, 1.1333310922016258),
    (-0.25, 3.625609908221908, -2.0, 1.5600246119245142),
    (0.75, 0.906402477055477, -6.0, 34977.035461464584),
    (2.25, 1.6083594219855457, 3.0, 0.0033857479245722366),
    (1.0, 0.886226925452758, 9.0, 5.813907733237586e-11),
    (0.25, 1.2254167024651776, -12.0, 4743395056633868.0),
];
/// a, b, Gamma(a), k, U(a, b, k).
const TRICOMI: [(f64, f64, f64, f64, f64); 4] = [
    (0.25, 1.5, 3.625609908221908, 20.0, 0.47431594434040486),
    (0.5, 0.25, 1.772453850905516, 40.0, 0.15574111021905881),
    (2.25, 3.0, 1.1330030963193463, 100.0, 3.144840113057305e-05),
    (1.5, 1.0, 0.886226925452758, 1000.0, 3.155184679862715e-05),
];
/// a, b, B(a, b - a), k, real and imaginary part of M(a, b, i k).
const KUMMER: [(f64, f64, f64, f64, f64, f64); 3] = [
    (0.25, 1.5, 3.7081493546027438, 30.0, 0.38296896673955294, 0.1600012027968078),
    (0.75, 1.25, 2.3962804694711846, 100.0, 0.024659744715329373, -0.056645184814424175),
    (2.25, 3.0, 0.6942004590872447, 1000.0, 0.009721216791210206, -0.0020074550326748242),
];

#[test]
fn bessel_functions_by_poissons_integral() {
    // J_nu(k) = (k/2)^nu/(sqrt(pi) Gamma(nu + 1/2)) integral_-1^1 (1 - t^2)^(nu - 1/2) e^(i k t) dt (DLMF 10.9.4):
    // an algebraic end at either side. J and Gamma by arbitrary-precision arithmetic (mpmath).
    for (nu, gamma, k, j) in POISSON {
        let integral = Integral::new(
            |t: Complex64| (t, c(1.0, 0.0)),
            Contour::between([c(-1.0, 0.0), c(1.0, 0.0)]),
        )
        .power_at_start(nu + 0.5)
        .power_at_end(nu + 0.5);
        let exact = j * PI.sqrt() * gamma / (0.5 * k).powf(nu);
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        let miss = (yardstick.value - exact).norm();
        assert!(miss <= yardstick.error.max(4e-14 * exact.abs()), "{nu} {k}: {miss:e} {exact:e}");
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!("J_{nu}({k}): {:.1e}, figure {:.1e}", error / exact.abs(), got.relative_error);
        assert!(error <= got.error + 1e-15 * exact.abs() && got.relative_error < 1e-2);
    }
}

#[test]
fn parabolic_cylinder_functions() {
    // U(a, z) = e^(-z^2/4)/Gamma(a + 1/2) integral_0^inf t^(a - 1/2) e^(-t^2/2 - z t) dt (DLMF 12.5.1),
    // t = sqrt(k) s: the saddle s = -z/sqrt(k) through, off and on the end s = 0.
    for (a, gamma, z, u) in CYLINDER {
        let k = 9.0f64;
        let x = z / k.sqrt();
        let integral = Integral::new(
            move |s: Complex64| ((s * s * 0.5 + s * x) * c(0.0, 1.0), (s + x) * c(0.0, 1.0)),
            Contour::starting_at([c(0.0, 0.0), c(5.0, 0.0)]),
        )
        .power_at_start(a + 0.5);
        let exact = u * gamma * (0.25 * z * z).exp() / k.powf(0.5 * a + 0.25);
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 1e-12 * exact.abs(), "{a} {z}");
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!("U({a}, {z}): {:.1e}, figure {:.1e}", error / exact.abs(), got.relative_error);
        assert!(error <= got.error && got.relative_error < 1e-8);
    }
}

#[test]
fn confluent_hypergeometric_functions() {
    // U(a, b, k) = 1/Gamma(a) integral_0^inf e^(-k t) t^(a-1) (1 + t)^(b-a-1) dt (DLMF 13.4.4) and
    // M(a, b, i k) = Gamma(b)/(Gamma(a) Gamma(b-a)) integral_0^1 e^(i k t) t^(a-1) (1-t)^(b-a-1) dt (DLMF 13.4.1).
    for (a, b, gamma, k, u) in TRICOMI {
        let integral = Integral::new(
            |t: Complex64| (t * c(0.0, 1.0), c(0.0, 1.0)),
            Contour::starting_at([c(0.0, 0.0), c(2.0, 0.0)]),
        )
        .amplitude(move |t: Complex64| ((t + 1.0).ln() * (b - a - 1.0)).exp())
        .power_at_start(a);
        let exact = u * gamma;
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 1e-12 * exact);
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!("U({a}, {b}, {k}): {:.1e}, figure {:.1e}", error / exact, got.relative_error);
        assert!(error <= got.error && got.relative_error < 1e-5);
    }
    for (a, b, beta, k, re, im) in KUMMER {
        let integral = Integral::new(
            |t: Complex64| (t, c(1.0, 0.0)),
            Contour::between([c(0.0, 0.0), c(1.0, 0.0)]),
        )
        .power_at_start(a)
        .power_at_end(b - a);
        let exact = c(re, im) * beta;
        let yardstick = integral.quadrature(k, 1e-13).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 1e-12 * exact.norm());
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!(
            "M({a}, {b}, {k}i): {:.1e}, figure {:.1e}",
            error / exact.norm(),
            got.relative_error
        );
        assert!(error <= got.error && got.relative_error < 1e-5);
    }
}

#[test]
fn bad_powers_are_refused() {
    let phase = |z: Complex64| (z, c(1.0, 0.0));
    let contour = || Contour::starting_at([c(0.0, 0.0), c(0.0, 1.0)]);
    for lambda in [0.0, -1.0, f64::NAN, f64::INFINITY, 1e3] {
        let integral = Integral::new(phase, contour()).power_at_start(lambda);
        assert!(matches!(integral.plan(), Err(Error::Domain { .. })), "{lambda}");
        assert!(integral.quadrature(1.0, 1e-9).is_err(), "{lambda}");
    }
    let at_infinity = Integral::new(phase, contour()).power_at_end(0.5);
    assert!(matches!(at_infinity.plan(), Err(Error::Domain { .. })));
    let pole = Integral::new(phase, contour()).power_at_start(0.5).pole(c(3.0, 1.0));
    assert!(matches!(pole.plan(), Err(Error::Unsupported { .. })));
}

fn exponent(random: &mut Random) -> f64 {
    match random.below(4) {
        0 => 1.0 / 3.0,
        1 => 0.5,
        2 => random.within(0.1, 1.0),
        _ => random.within(1.0, 4.0),
    }
}

/// Start or finish on, near and away from saddles of phases of degree 1 to 3; some contours lead round
/// their end.
#[test]
fn random_algebraic_ends() {
    let mut random = Random(31);
    let mut tally = Tally::default();
    for case in 0..400 {
        let degree = 1 + random.below(3);
        let mut list: Vec<Complex64> = (0..=degree).map(|_| random.disc(1.0)).collect();
        list[degree] = Complex64::from_polar(1.0, 2.0 * PI * random.next());
        let lead = list[degree];
        let phase = Polynomial(list);
        let offset = 10f64.powf(random.within(-4.0, 0.3));
        let saddle = zero_of_slope(&phase, &mut random);
        let end = saddle + Complex64::from_polar(offset, 2.0 * PI * random.next());
        let far = valley(lead, degree, random.below(degree), 4.0 + 2.0 * end.norm());
        let around = end + Complex64::from_polar(random.within(0.3, 1.0), 2.0 * PI * random.next());
        let mut points = if random.next() < 0.5 { vec![end, around, far] } else { vec![end, far] };
        let lambda = exponent(&mut random);
        let contour = if random.next() < 0.5 {
            Contour::starting_at(points)
        } else {
            points.reverse();
            Contour::ending_at(points)
        };
        let k = 10f64.powf(random.within(0.5, 4.0));
        let at_start = contour.start() == merging_saddles::integral::Termination::Finite;
        let integral = Integral::new(phase, contour).amplitude(amplitude(&mut random));
        let integral =
            if at_start { integral.power_at_start(lambda) } else { integral.power_at_end(lambda) };
        let got = integral.plan().and_then(|plan| plan.at(k));
        let label =
            format!("case {case} degree {degree} k {k:.1} offset {offset:.1e} l {lambda:.2}");
        tally.enter(&label, got, integral.quadrature(k, 1e-13));
    }
    tally.check("algebraic ends", 0.95);
}

/// Both ends finite, one or both algebraic.
#[test]
fn random_pairs_of_ends() {
    let mut random = Random(32);
    let mut tally = Tally::default();
    for case in 0..200 {
        let degree = 1 + random.below(3);
        let mut list: Vec<Complex64> = (0..=degree).map(|_| random.disc(1.0)).collect();
        list[degree] = Complex64::from_polar(1.0, 2.0 * PI * random.next());
        let phase = Polynomial(list);
        let start = random.disc(1.5);
        let finish =
            start + Complex64::from_polar(random.within(0.5, 2.5), 2.0 * PI * random.next());
        let contour = if random.next() < 0.5 {
            Contour::between([start, finish])
        } else {
            Contour::between([start, start + random.disc(1.0), finish])
        };
        let (p, q) = (exponent(&mut random), exponent(&mut random));
        let (p, q) = match random.below(3) {
            0 => (p, 1.0),
            1 => (1.0, q),
            _ => (p, q),
        };
        let k = 10f64.powf(random.within(0.5, 3.5));
        let integral = Integral::new(phase, contour)
            .amplitude(amplitude(&mut random))
            .power_at_start(p)
            .power_at_end(q);
        let got = integral.plan().and_then(|plan| plan.at(k));
        let label = format!("case {case} degree {degree} k {k:.1} powers {p:.2} {q:.2}");
        tally.enter(&label, got, integral.quadrature(k, 1e-12));
    }
    tally.check("pairs of ends", 0.95);
}

fn zero_of_slope(phase: &Polynomial, random: &mut Random) -> Complex64 {
    use merging_saddles::Phase;
    let mut z = random.disc(1.0);
    for _ in 0..60 {
        let [_, d, dd] = phase.jet(z);
        let step = d / dd;
        if step.norm() < 1.0 {
            z -= step;
        }
    }
    z
}

#[test]
fn a_phase_that_is_bounded_at_infinity_is_mapped() {
    // f = i tanh z with g = 1/cosh(z) is, by t = tanh z, integral_-1^1 (1 - t^2)^(-1/2) e^(-k t) dt = pi I_0(k) (DLMF
    // 10.32.2); e^(-9) I_0(9) by mpmath.
    let mapped = Integral::new(
        |t: Complex64| (t * c(0.0, 1.0), c(0.0, 1.0)),
        Contour::between([c(-1.0, 0.0), c(1.0, 0.0)]),
    )
    .power_at_start(0.5)
    .power_at_end(0.5);
    let exact = PI * 0.13495952458172303 * 9f64.exp();
    let got = mapped.plan().and_then(|plan| plan.at(9.0)).expect("a value");
    assert!((got.value - exact).norm() <= got.error && got.relative_error < 1e-5);
    let yardstick = mapped.quadrature(9.0, 1e-13).expect("a yardstick");
    assert!((yardstick.value - exact).norm() < 1e-12 * exact);
}

/// An end near two saddles, merged or not, of phases of degree 3 to 5.
fn ends_near_two_saddles(seed: u64, cases: usize) -> Tally {
    let mut random = Random(seed);
    let mut tally = Tally::default();
    for case in 0..cases {
        let others = random.below(3);
        let apart = 10f64.powf(random.within(-5.0, 0.0));
        let centre = random.disc(0.5);
        let mut saddles =
            vec![centre, centre + Complex64::from_polar(apart, 2.0 * PI * random.next())];
        for _ in 0..others {
            let far = random.within(1.5, 3.0);
            saddles.push(centre + Complex64::from_polar(far, 2.0 * PI * random.next()));
        }
        let phase = from_saddles(Complex64::from_polar(1.0, 2.0 * PI * random.next()), &saddles);
        let degree = saddles.len() + 1;
        let offset = 10f64.powf(random.within(-5.0, 0.3));
        let offset = if random.below(10) == 0 { 0.0 } else { offset };
        let end = centre + Complex64::from_polar(offset, 2.0 * PI * random.next());
        let far = valley(phase.0[degree], degree, random.below(degree), 12.0);
        let around = end + Complex64::from_polar(random.within(0.3, 1.0), 2.0 * PI * random.next());
        let mut points = if random.next() < 0.3 { vec![end, around, far] } else { vec![end, far] };
        let lambda = exponent(&mut random);
        let at_start = random.next() < 0.5;
        if !at_start {
            points.reverse();
        }
        let k = 10f64.powf(random.within(0.5, 4.0));
        let g = amplitude(&mut random);
        let integral = if at_start {
            Integral::new(phase, Contour::starting_at(points)).amplitude(g).power_at_start(lambda)
        } else {
            Integral::new(phase, Contour::ending_at(points)).amplitude(g).power_at_end(lambda)
        };
        let got = integral.plan().and_then(|plan| plan.at(k));
        let label = format!(
            "case {case} degree {degree} k {k:.1} apart {apart:.1e} offset {offset:.1e} l {lambda:.2}"
        );
        tally.enter(&label, got, integral.quadrature(k, 1e-13));
    }
    tally
}

#[test]
fn random_algebraic_ends_near_two_saddles() {
    ends_near_two_saddles(33, 400).check("algebraic ends near two saddles", 0.95);
}

/// A phase with the given zeros of its derivative.
fn from_saddles(lead: Complex64, saddles: &[Complex64]) -> Polynomial {
    let mut slope = vec![lead];
    for s in saddles {
        let mut next = vec![c(0.0, 0.0); slope.len() + 1];
        for (j, a) in slope.iter().enumerate() {
            next[j + 1] += a;
            next[j] -= a * s;
        }
        slope = next;
    }
    let terms = slope.iter().enumerate().map(|(j, a)| a / (j + 1) as f64);
    Polynomial(std::iter::once(c(0.0, 0.0)).chain(terms).collect())
}
