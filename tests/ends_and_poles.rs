//! A finite end point, a pole and one or two saddles together.

mod coverage;
#[path = "support/mixing.rs"]
mod mixing;

use coverage::{Random, Tally, amplitude, valley};
use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64, Contour, Integral};
use std::f64::consts::PI;

/// a, k, integral.
const GOODWIN: [(f64, f64, f64); 4] = [
    (1.0, 10.0, 0.24070166536750207),
    (0.125, 10.0, 1.1095078675104795),
    (0.0625, 1000.0, 0.35778585674837776),
    (0.5, 300.0, 0.09627098420390347),
];

#[test]
fn exponential_integral_with_a_saddle_on_the_end() {
    // integral_0^inf e^(-k t^2)/(t + a) dt; values by arbitrary-precision quadrature (mpmath): the
    // saddle lies on the end, the pole next to both. (As in DLMF 7.7.15 with e^(-k t^2)/(t + a).)
    let c = |re, im| Complex64::new(re, im);
    for (a, k, exact) in GOODWIN {
        let integral = Integral::new(
            |t: Complex64| (t * t * c(0.0, 1.0), t * c(0.0, 2.0)),
            Contour::starting_at([c(0.0, 0.0), c(3.0, 0.0)]),
        )
        .amplitude(move |t: Complex64| (t + a).inv())
        .pole(c(-a, 0.0));
        let got = integral.plan().and_then(|plan| plan.at(k)).expect("a value");
        let error = (got.value - exact).norm();
        println!("a {a} k {k}: {:.1e}, figure {:.1e}", error / exact, got.relative_error);
        assert!(error <= got.error && got.relative_error < 1e-9);
    }
}

#[test]
fn random_ends_and_poles_near_saddles() {
    let mut random = Random(41);
    let mut tally = Tally::default();
    for case in 0..400 {
        let degree = 2 + random.below(2);
        let saddle = random.disc(1.0);
        let near = 10f64.powf(random.within(-3.0, 0.3));
        let other = saddle + Complex64::from_polar(near, 2.0 * PI * random.next());
        let lead = Complex64::from_polar(1.0, 2.0 * PI * random.next());
        let zero = Complex64::new(0.0, 0.0);
        let coefficients = if degree == 2 {
            vec![zero, -saddle * lead, lead * 0.5]
        } else {
            let (sum, product) = (saddle + other, saddle * other);
            vec![zero, product * lead, -sum * lead * 0.5, lead / 3.0]
        };
        let phase = Polynomial(coefficients);
        let mut close = |low: f64| {
            Complex64::from_polar(10f64.powf(random.within(low, 0.0)), 2.0 * PI * random.next())
        };
        let start = saddle + close(-4.0);
        // Never on the end.
        let pole = start + close(-2.0);
        let far = valley(phase.0[degree], degree, random.below(degree), 12.0);
        // Nor on the contour as given: there quadrature loses digits that its figure does not show.
        if ((pole - start) / (far - start)).im.abs() * (far - start).norm() < 1e-3 {
            continue;
        }
        let contour = if random.next() < 0.5 {
            Contour::starting_at([start, far])
        } else {
            Contour::ending_at([far, start])
        };
        let smooth = amplitude(&mut random);
        let (simple, double) = (random.disc(1.0), random.disc(1.0));
        let double = if random.next() < 0.5 { double } else { zero };
        let g = move |z: Complex64| {
            let inverse = (z - pole).inv();
            smooth(z) + (double * inverse + simple) * inverse
        };
        let k = 10f64.powf(random.within(0.5, 4.0));
        let integral = Integral::new(phase, contour).amplitude(g).pole(pole);
        let got = integral.plan().and_then(|plan| plan.at(k));
        let label = format!(
            "case {case} degree {degree} k {k:.1} end {:.1e} pole {:.1e}",
            (start - saddle).norm(),
            (pole - start).norm()
        );
        tally.enter(&label, got, integral.quadrature(k, 1e-12));
    }
    tally.check("ends and poles", 0.97);
}
