//! The one API: isolated saddles, two merging saddles, finite end points.

use merging_saddles::{Complex64, Contour, Error, Integral};

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

#[test]
fn stirling_series_from_the_gamma_integral() {
    // Gamma(k + 1) = k^(k+1) integral_0^inf exp(k (ln z - z)) dz (DLMF 5.9.1); values of
    // Gamma(k+1) e^k k^(-k-1/2) from the factorials 10!, 20! (elementary).
    let integral = Integral::new(
        |z: Complex64| (c(0.0, -1.0) * (z.ln() - z), c(0.0, -1.0) * (z.inv() - 1.0)),
        Contour::through([c(0.3, 0.0), c(1.0, 0.0), c(3.0, 0.0)]),
    );
    let plan = integral.plan().expect("a plan");
    for (k, factorial) in [(10.0f64, 3628800.0f64), (20.0, 2432902008176640000.0)] {
        let exact = factorial / k.powf(k + 1.0);
        let got = plan.at(k).expect("a value");
        let error = (got.value - exact).norm();
        println!("{k} {:.2e} {:.2e} {}", error / exact, got.relative_error, got.orders);
        assert!(error <= got.error && error < 1e-11 * exact, "{k}: {error:e} {:e}", got.error);
    }
}

#[test]
fn end_point_away_from_saddles() {
    // integral_1^inf exp(-k z^2) dz = sqrt(pi/k)/2 erfc(sqrt k) (DLMF 7.2.2); erfc(2) and erfc(5)
    // are 4.67773498104726583793e-3 and 1.53745979442803485019e-12 (mpmath, 21 digits).
    let integral = Integral::new(
        |z: Complex64| (c(0.0, 1.0) * z * z, c(0.0, 2.0) * z),
        Contour::starting_at([c(1.0, 0.0), c(4.0, 0.0)]),
    );
    let plan = integral.plan().expect("a plan");
    // Eleven orders of DLMF 7.12.1 leave 0.1 at k = 4 and 21!!/50^11 = 3e-9 at k = 25.
    for (k, erfc, bound) in
        [(4.0f64, 4.677_734_981_047_266e-3, 0.2), (25.0, 1.537_459_794_428_035e-12, 1e-7)]
    {
        let exact = (std::f64::consts::PI / k).sqrt() / 2.0 * erfc;
        let got = plan.at(k).expect("a value");
        let error = (got.value - exact).norm();
        println!("{k} {:.2e} {:.2e} {}", error / exact, got.relative_error, got.orders);
        assert!(error <= got.error && got.relative_error < bound);
    }
}

#[test]
fn bad_input_gets_one_clear_error() {
    let phase = |z: Complex64| (z * z, z * 2.0);
    let plan = Integral::new(phase, Contour::through([c(-1.0, -1.0), c(1.0, 1.0)])).plan();
    let plan = plan.expect("a plan");
    for k in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert!(matches!(plan.at(k), Err(Error::Domain { .. })), "{k}");
    }
    assert!(plan.at_orders(3.0, 0).is_err());
    let one = Integral::new(phase, Contour::through([c(1.0, 0.0), c(1.0, 0.0)]));
    assert!(matches!(one.plan(), Err(Error::Domain { .. })));
    let nan = Integral::new(phase, Contour::through([c(1.0, 0.0), c(f64::NAN, 0.0)]));
    assert!(matches!(nan.plan(), Err(Error::Domain { .. })));
    let hole = Integral::new(
        |z: Complex64| (z.inv(), -z.inv() * z.inv()),
        Contour::through([c(0.0, 0.0), c(1.0, 0.0)]),
    );
    assert!(matches!(hole.plan(), Err(Error::NotFinite { .. })));
}

#[test]
fn a_plan_explains_itself() {
    let integral = Integral::new(
        |z: Complex64| (z.powi(4) - z * z * 0.3 + z * 0.1, z.powi(3) * 4.0 - z * 0.6 + 0.1),
        Contour::through([Complex64::from_polar(2.0, 3.5), Complex64::from_polar(2.0, 0.39)]),
    )
    .amplitude(|z: Complex64| (z - c(0.5, 0.6)).inv())
    .pole(c(0.5, 0.6));
    let text = integral.plan().expect("a plan").explain();
    println!("{text}");
    assert!(text.contains("3 saddles") && text.contains("cusp of [") && text.contains("pole at"));
}
