//! Square-root branch points, removed by z = z_b + w^2.

mod coverage;
#[path = "support/mixing.rs"]
mod mixing;

use coverage::{Random, Tally, amplitude, valley};
use merging_saddles::integral::Jet;
use merging_saddles::{Complex64, Contour, Integral};
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

#[test]
fn modified_bessel_function_over_its_cut() {
    // e^k K_0(k) = integral_1^inf e^(-k (t - 1)) (t^2 - 1)^(-1/2) dt (DLMF 10.32.8); values of
    // e^k K_0(k) by arbitrary-precision arithmetic (mpmath, 20 digits).
    let integral = Integral::over_root(
        c(1.0, 0.0),
        |t: Jet, _| (t - 1.0) * c(0.0, 1.0),
        |t, _| (t + 1.0).sqrt().inv(),
        Contour::starting_at([c(1.0, 0.0), c(4.0, 0.0)]),
    )
    .expect("an integral");
    let plan = integral.plan().expect("a plan");
    // The other branch point, at distance 2, bounds the orders: e^(-2 k) at best.
    for (k, exact, bar) in [(2.0, K0_2, 0.1), (10.0, K0_10, 1e-7), (300.0, K0_300, 1e-12)] {
        let got = plan.at(k).expect("a value");
        let error = (got.value - exact).norm() / exact;
        println!("k {k}: {error:.1e}, figure {:.1e}", got.relative_error);
        assert!(error <= got.relative_error);
        assert!(got.relative_error < bar);
        let yardstick = integral.quadrature(k, 1e-14).expect("a yardstick");
        assert!((yardstick.value - exact).norm() < 2e-14 * exact);
    }
}
const K0_2: f64 = 0.841_568_215_070_771_4;
const K0_10: f64 = 0.391_631_934_436_598_67;
const K0_300: f64 = 0.072_330_031_739_607_3;

#[test]
fn hankel_contour_round_the_cut() {
    // 1/Gamma(z) = (1/2 pi i) integral e^t t^(-z) dt from -inf round the origin to -inf (DLMF 5.9.2), z =
    // 5/2, t scaled by k: 2 pi i k^(-3/2)/Gamma(5/2), Gamma(5/2) = 3 sqrt(pi)/4 (DLMF 5.4.6, 5.5.1).
    // The root turns by half a circle from its principal value at the start; w = 0 is a pole of the lifted amplitude 2 w^-4.
    let integral = Integral::with_root(
        c(0.0, 0.0),
        |t: Jet, _| t * c(0.0, -1.0),
        |_, root: Complex64| root.powi(-5),
        Contour::through([c(-4.0, -0.5), c(1.0, 0.0), c(-4.0, 0.5)]),
    )
    .expect("an integral");
    let k = 3.0f64;
    let exact = c(0.0, 2.0 * PI) * k.powf(1.5) / (0.75 * PI.sqrt());
    let got = integral.quadrature(k, 1e-13).expect("a value");
    println!("{} {}", got.value, exact);
    assert!((got.value - exact).norm() < 1e-13 * exact.norm());
}

/// f = polynomial in z + b root, g smooth or divided by the root; contours between valleys, past the
/// branch point on a random side, or starting there.
#[test]
fn random_branch_points_near_saddles() {
    let mut random = Random(11);
    let mut tally = Tally::default();
    for case in 0..400 {
        let degree = 2 + random.below(2);
        let mut coefficients: Vec<Complex64> = (0..=degree).map(|_| random.disc(1.0)).collect();
        coefficients[degree] = Complex64::from_polar(1.0, 2.0 * PI * random.next());
        let lead = coefficients[degree];
        let strength = if random.next() < 0.3 { 0.0 } else { random.within(0.0, 1.0) };
        let b = Complex64::from_polar(strength, 2.0 * PI * random.next());
        // On, near or away from a zero of the polynomial's derivative.
        let mut saddle = random.disc(1.0);
        for _ in 0..60 {
            let (mut d, mut dd) = (c(0.0, 0.0), c(0.0, 0.0));
            for (n, a) in coefficients.iter().enumerate().skip(1).rev() {
                dd = dd * saddle + d;
                d = d * saddle + a * n as f64;
            }
            let step = d / dd;
            if step.norm() < 1.0 {
                saddle -= step;
            }
        }
        let offset = 10f64.powf(random.within(-4.0, 0.3));
        let z_b = saddle + Complex64::from_polar(offset, 2.0 * PI * random.next());
        let radius = 3.0 + 2.0 * z_b.norm();
        let far = |v: usize| valley(lead, degree, v, radius);
        let v = random.below(degree);
        let other = (v + 1 + random.below(degree - 1)) % degree;
        let aside = Complex64::from_polar(random.within(0.05, 0.5), 2.0 * PI * random.next());
        let contour = match random.below(3) {
            0 => Contour::starting_at([z_b, far(v)]),
            1 => Contour::ending_at([far(v), z_b]),
            _ => Contour::through([far(v), z_b + aside, far(other)]),
        };
        let list = coefficients.clone();
        let f = move |z: Jet, root: Jet| {
            list.iter().rev().fold(Jet::constant(c(0.0, 0.0)), |sum, &a| sum * z + a) + root * b
        };
        let smooth = amplitude(&mut random);
        let (p, q) = (random.disc(1.0), random.disc(1.0));
        let g = move |z: Complex64, root: Complex64| smooth(z) * p + root * q;
        let k = 10f64.powf(random.within(0.5, 4.0));
        let label = format!("case {case} degree {degree} k {k:.1} offset {offset:.1e} b {b:.2}");
        let outcome = if random.next() < 0.5 {
            Integral::with_root(z_b, f, g, contour).map(|integral| {
                let got = integral.plan().and_then(|plan| plan.at(k));
                (got, integral.quadrature(k, 1e-13))
            })
        } else {
            Integral::over_root(z_b, f, g, contour).map(|integral| {
                let got = integral.plan().and_then(|plan| plan.at(k));
                (got, integral.quadrature(k, 1e-13))
            })
        };
        let (got, exact) = outcome.expect("an integral");
        tally.enter(&label, got, exact);
    }
    tally.check("branch points", 0.95);
}
