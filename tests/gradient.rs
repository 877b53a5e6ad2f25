//! Derivatives of integrals in their parameters: from one plan, against tables, closed forms and the yardstick.

use merging_saddles::integral::{Jet, Polynomial};
use merging_saddles::special::cuspoid;
use merging_saddles::{Complex64 as C, Contour, Error, FieldGradient, Integral};
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> C {
    C::new(re, im)
}

const ZERO: C = C::new(0.0, 0.0);

/// Every derivative is within its figure and the yardstick's of the yardstick, and the figure is below
/// `bar` times the size of the gradient.
fn agrees<const N: usize>(label: &str, got: &FieldGradient<N>, exact: &FieldGradient<N>, bar: f64) {
    let pairs = got.gradient.iter().zip(&exact.gradient);
    let size = exact.gradient.iter().map(|e| e.value.norm()).fold(0.0, f64::max);
    for (j, (got, exact)) in pairs.chain([(&got.value, &exact.value)]).enumerate() {
        let error = (got.value - exact.value).norm();
        println!(
            "{label} [{j}]: {:.15e} error {error:.1e} figure {:.1e} yardstick {:.1e}",
            got.value, got.error, exact.error
        );
        assert!(error <= got.error + exact.error, "{label} [{j}]");
        if j < N {
            assert!(got.error < bar * size, "{label} [{j}]: figure");
        }
    }
}

/// `k`, and the rest of each row.
fn table(text: &str) -> impl Iterator<Item = Vec<f64>> + '_ {
    let lines = text.lines().filter(|line| !line.starts_with('#')).skip(1);
    lines.map(|line| line.split(',').map(|field| field.parse().expect("a number")).collect())
}

/// 2 pi i J_nu(x) with x = k X, nu = k N (DLMF 10.9.17).
fn bessel(x: f64, n: f64) -> Integral<impl Fn(C) -> (C, C)> {
    let minus_i = c(0.0, -1.0);
    Integral::new(
        move |z: C| ((z.sinh() * x - z * n) * minus_i, (z.cosh() * x - n) * minus_i),
        Contour::through([c(3.0, -PI), ZERO, c(3.0, PI)]),
    )
}

#[test]
fn bessel_functions_in_argument_and_order() {
    let mut worst = 0.0f64;
    for row in table(include_str!("data/bessel_gradient.csv")) {
        let [k, x, n, j, dx, dn] = row[..] else { panic!("six columns") };
        let integral = bessel(x, n);
        let gradient = integral.gradient(|z: C| [z.sinh() * c(0.0, -1.0), z * c(0.0, 1.0)]);
        let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
        let factor = c(0.0, 2.0 * PI);
        let all = [got.value, got.gradient[0], got.gradient[1]];
        for (got, exact) in all.into_iter().zip([j, dx, dn]) {
            let error = (got.value - factor * exact).norm();
            // Next to a zero of one derivative the others set the scale.
            let scale = 2.0 * PI * [j, dx / k, dn / k].iter().map(|v| v.abs()).fold(0.0, f64::max);
            let scale = if exact == j { scale } else { scale * k };
            println!("k {k} x {x} n {n}: {:.1e}, figure {:.1e}", error / scale, got.error / scale);
            assert!(error <= got.error, "k {k} x {x} n {n}");
            assert!(got.error < if k < 50.0 { 1e-4 } else { 1e-10 } * scale);
            if k > 50.0 {
                worst = worst.max(error / scale);
            }
        }
    }
    println!("worst from k = 100 on: {worst:.1e}");
    assert!(worst < 2e-12);
}

#[test]
fn bessel_recurrence_through_the_coalescence() {
    // J_nu'(x) = (J_(nu-1)(x) - J_(nu+1)(x))/2 (DLMF 10.6.1): the derivative from one plan against the
    // values of two others.
    for k in [20.0, 300.0, 1e4] {
        for n in [0.95, 0.999, 1.0, 1.0 + 1e-9, 1.001, 1.05] {
            let integral = bessel(1.0, n);
            let gradient = integral.gradient(|z: C| [z.sinh() * c(0.0, -1.0)]);
            let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value").gradient[0];
            let near = |step: f64| bessel(1.0, n + step / k).plan().and_then(|plan| plan.at(k));
            let (below, above) = (near(-1.0).expect("a value"), near(1.0).expect("a value"));
            let exact = below - above;
            let error = (got.value / (0.5 * k) - exact.value).norm();
            let figure = got.error / (0.5 * k) + exact.error;
            let scale = below.value.norm().max(above.value.norm());
            println!("k {k} n {n}: {:.1e}, figures {:.1e}", error / scale, figure / scale);
            assert!(error <= figure && figure < 1e-7 * scale);
        }
    }
}

/// f = z^4 + x2 z^2 + x1 z along the real line.
fn cusp(x1: f64, x2: f64) -> Integral<Polynomial> {
    let coefficients = vec![ZERO, c(x1, 0.0), c(x2, 0.0), ZERO, c(1.0, 0.0)];
    let far = 3.0 + (x1.abs() + x2.abs()).sqrt();
    let ends = [C::from_polar(far, -7.0 * PI / 8.0), ZERO, C::from_polar(far, PI / 8.0)];
    Integral::new(Polynomial(coefficients), Contour::through(ends))
}

#[test]
fn gradient_of_a_cusp_caustic() {
    // I = k^(-1/4) Psi_2(x), x = (k^(3/4) x1, k^(1/2) x2) (DLMF 36.2.4, 36.6), so that dI/dx1 =
    // k^(1/2) dPsi/dx_1 and dI/dx2 = k^(1/4) dPsi/dx_2. The caustic is 8 x2^3 + 27 x1^2 = 0 (DLMF 36.4.5).
    let caustic = |x2: f64| (-8.0 * x2.powi(3) / 27.0).sqrt();
    let mut points = vec![(0.0, 0.0), (1e-4, 1e-3), (0.2, -1.0), (0.7, 0.5), (1.0, -2.0)];
    points.extend([(0.0, -1.0), (0.0, 0.3), (0.5, 0.0)]);
    for x2 in [-0.01, -0.3, -1.5] {
        let x1 = caustic(x2);
        points.extend([(x1, x2), (-x1, x2), (x1 * 1.001, x2), (x1 * 0.999, x2), (x1 * 1.1, x2)]);
    }
    let (mut worst, mut sharpness) = (0.0f64, Vec::new());
    for (x1, x2) in points {
        let integral = cusp(x1, x2);
        let plan = integral.gradient(|z: C| [z, z * z]).plan().expect("a plan");
        for k in [5.0f64, 30.0, 1e3, 1e5] {
            let root = k.powf(0.25);
            let at = [x1 * root.powi(3), x2 * root * root];
            let exact = cuspoid::real_line(&at.map(C::from)).expect("a value").to_complex();
            let t = 1.0 + at[0].abs().cbrt() + at[1].abs().sqrt();
            let [d1, d2] = exact.derivatives;
            let scale = exact.psi.norm().max(d1.norm() / t).max(d2.norm() / (t * t));
            let got = plan.at(k).expect("a value");
            let triples = [
                (got.value, exact.psi, 1.0, 1.0 / root),
                (got.gradient[0], d1, t, root * root),
                (got.gradient[1], d2, t * t, root),
            ];
            for (m, (got, exact, power, factor)) in triples.into_iter().enumerate() {
                let error = (got.value / factor - exact).norm() / (scale * power);
                let figure = got.error / factor / (scale * power);
                // The parameters at scale are rounded.
                let rounding = 4e-16 * (at[0].abs() * t + at[1].abs() * t * t);
                println!("x1 {x1} x2 {x2} k {k} [{m}]: {error:.1e}, figure {figure:.1e}");
                assert!(error <= figure + rounding + 1e-14, "x1 {x1} x2 {x2} k {k} [{m}]");
                assert!(figure < if k < 1e4 { 1e-9 } else { 1e-7 });
                worst = worst.max(error);
                if error > 3.0 * rounding + 3e-14 {
                    sharpness.push(figure / error);
                }
            }
        }
    }
    sharpness.sort_by(f64::total_cmp);
    println!("worst {worst:.1e}, figure/error median {:?}", sharpness.get(sharpness.len() / 2));
    assert!(worst < 1e-10);
}

#[test]
fn a_derivative_that_vanishes_by_symmetry_is_no_error() {
    // On the axis of the cusp dI/dx1 is zero, with an error figure.
    for x2 in [-1.0, -1e-3, 0.0, 0.5] {
        let integral = cusp(0.0, x2);
        let plan = integral.gradient(|z: C| [z, z * z]).plan().expect("a plan");
        for k in [5.0, 1e3] {
            let got = plan.at(k).expect("a value");
            let [across, along] = got.gradient;
            assert!(across.value.norm() <= across.error);
            assert!(across.error < 1e-7 * k * got.value.value.norm(), "{x2} {k}");
            assert!(along.relative_error < 1e-7);
        }
    }
    // The other way round: an odd amplitude, whose integral vanishes and whose derivative does not.
    let odd = cusp(0.0, -1.0).amplitude(|z: C| z);
    let got = odd.gradient(|z: C| [z]).plan().and_then(|plan| plan.at(50.0)).expect("a value");
    assert!(got.value.value.norm() <= got.value.error && got.gradient[0].relative_error < 1e-9);
}

#[test]
fn a_parameter_of_the_phase_alone_of_the_amplitude_alone_and_of_both() {
    // I = integral of (1 + b z^2) exp(i k (z^2 + a z)) dz over the real line, by completing the square
    // (elementary): sqrt(pi i/k) e^(-i k a^2/4) (1 + b (a^2/4 + i/(2 k))).
    let (a, b, k) = (0.3f64, 0.7f64, 12.0f64);
    let integral = Integral::new(
        move |z: C| (z * z + z * a, z * 2.0 + a),
        Contour::through([c(-2.0, -2.0), ZERO, c(2.0, 2.0)]),
    )
    .amplitude(move |z: C| 1.0 + z * z * b);
    let gradient = integral.gradient(|z: C| [z, ZERO]).amplitude(|z: C| [ZERO, z * z]);
    let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
    let front = (c(0.0, PI / k)).sqrt() * (c(0.0, -k * a * a / 4.0)).exp();
    let moment = c(a * a / 4.0, 0.5 / k);
    let exact = [
        front * (1.0 + b * moment),
        front * (c(0.0, -k * a / 2.0) * (1.0 + b * moment) + b * a / 2.0),
        front * moment,
    ];
    for (got, exact) in [got.value, got.gradient[0], got.gradient[1]].into_iter().zip(exact) {
        let error = (got.value - exact).norm();
        assert!(error <= got.error && got.relative_error < 1e-12, "{error:e} {:e}", got.error);
    }
    let check = gradient.quadrature(k, 1e-13).expect("a yardstick");
    agrees("square", &got, &check, 1e-11);
}

#[test]
fn finite_ends_that_stay_and_ends_that_move() {
    // f = z^3/3 - x z, from an end on, near and away from the saddles +-sqrt x.
    for (x, end, k) in [
        (0.5, 0.0, 30.0),
        (0.5, 0.5f64.sqrt(), 200.0),
        (0.5, 0.71, 40.0),
        (1e-6, 1e-3, 1000.0),
        (0.3, -0.9, 80.0),
        (0.3, 1.6, 300.0),
    ] {
        let integral = Integral::new(
            move |z: C| (z * z * z / 3.0 - z * x, z * z - x),
            Contour::starting_at([c(end, 0.0), C::from_polar(4.0, PI / 6.0)]),
        )
        .amplitude(|z: C| (z * 0.3).exp());
        let label = format!("x {x} end {end} k {k}");
        let still = integral.gradient(|z: C| [-z]);
        let got = still.plan().and_then(|plan| plan.at(k)).expect("a value");
        agrees(&label, &got, &still.quadrature(k, 1e-13).expect("a yardstick"), 1e-6);
        // The end moves with the second parameter, at the velocity 1.5; against a central difference of
        // the yardstick with Richardson's extrapolation (DLMF 3.4(i)).
        let moving = integral.gradient(|z: C| [-z, ZERO]).moving_start([ZERO, c(1.5, 0.0)]);
        let got = moving.plan().and_then(|plan| plan.at(k)).expect("a value");
        agrees(&label, &got, &moving.quadrature(k, 1e-13).expect("a yardstick"), 1e-6);
        let shifted = |t: f64| {
            let start = c(end + 1.5 * t, 0.0);
            let contour = Contour::starting_at([start, C::from_polar(4.0, PI / 6.0)]);
            let integral = Integral::new(move |z: C| (z * z * z / 3.0 - z * x, z * z - x), contour)
                .amplitude(|z: C| (z * 0.3).exp());
            integral.quadrature(k, 1e-14).expect("a yardstick").value
        };
        let difference = |h: f64| (shifted(h) - shifted(-h)) / (2.0 * h);
        let h = 0.01 / k;
        let exact = (difference(h) * 4.0 - difference(2.0 * h)) / 3.0;
        let error = (got.gradient[1].value - exact).norm();
        println!("{label}: against differences {error:.1e} of {:.1e}", exact.norm());
        assert!(error < 2e-7 * exact.norm());
    }
}

#[test]
fn both_ends_moving() {
    // Integral_a^b exp(i k z) dz = (e^(i k b) - e^(i k a))/(i k) (elementary).
    let (a, b, k) = (c(0.2, 0.1), c(1.3, 0.4), 25.0);
    let integral = Integral::new(|z: C| (z, c(1.0, 0.0)), Contour::between([a, b]));
    let gradient = integral
        .gradient(|_| [ZERO, ZERO])
        .moving_start([c(1.0, 0.0), ZERO])
        .moving_end([ZERO, c(0.0, 1.0)]);
    let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
    let at = |z: C| (z * c(0.0, k)).exp();
    for (got, exact) in got.gradient.iter().zip([-at(a), at(b) * c(0.0, 1.0)]) {
        assert!((got.value - exact).norm() <= got.error && got.error < 1e-12);
    }
    agrees("both", &got, &gradient.quadrature(k, 1e-13).expect("a yardstick"), 1e-9);
}

#[test]
fn named_poles_that_stay_and_poles_that_move() {
    // 1/(z - p) beside the saddle of z^2 and of a fold; p is the second parameter, so that dg/dp has a
    // double pole.
    for p in [c(0.02, 0.05), c(-0.3, -0.2), c(1e-3, 2e-3), c(0.8, 0.6)] {
        for k in [10.0, 400.0, 2e4] {
            let integral = Integral::new(
                |z: C| (z * z, z * 2.0),
                Contour::through([c(-2.0, -2.0), ZERO, c(2.0, 2.0)]),
            )
            .amplitude(move |z: C| (z - p).inv() + z)
            .pole(p);
            let gradient =
                integral.gradient(|z: C| [z, ZERO]).amplitude(move |z: C| [ZERO, (z - p).powi(-2)]);
            let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
            let exact = gradient.quadrature(k, 1e-13).expect("a yardstick");
            agrees(&format!("pole {p} k {k}"), &got, &exact, 1e-6);
            let fold = Integral::new(
                |z: C| (z * z * z / 3.0 - z * 1e-2, z * z - 1e-2),
                Contour::through([
                    C::from_polar(4.0, PI * 5.0 / 6.0),
                    C::from_polar(4.0, PI / 6.0),
                ]),
            )
            .amplitude(move |z: C| (z - p).inv())
            .pole(p);
            let gradient =
                fold.gradient(|z: C| [-z, ZERO]).amplitude(move |z: C| [ZERO, (z - p).powi(-2)]);
            let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
            let exact = gradient.quadrature(k, 1e-13).expect("a yardstick");
            agrees(&format!("fold, pole {p} k {k}"), &got, &exact, 1e-6);
        }
    }
    // A double pole that moves would be of third order: refused.
    let p = c(0.3, 0.2);
    let integral = Integral::new(
        |z: C| (z * z, z * 2.0),
        Contour::through([c(-2.0, -2.0), ZERO, c(2.0, 2.0)]),
    )
    .amplitude(move |z: C| (z - p).powi(-2))
    .pole(p);
    let refused =
        integral.gradient(|_| [ZERO]).amplitude(move |z: C| [(z - p).powi(-3) * 2.0]).plan();
    assert!(matches!(refused, Err(Error::Unsupported { .. })));
}

#[test]
fn algebraic_ends() {
    // Integral_0^inf t^(l-1) exp(-k a t) dt = Gamma(l) (k a)^(-l) (DLMF 5.9.1): its derivative in a is -l/a
    // times it.
    let (a, lambda) = (1.3, 1.0 / 3.0);
    let integral = Integral::new(
        move |t: C| (t * c(0.0, a), c(0.0, a)),
        Contour::starting_at([ZERO, c(3.0, 0.0)]),
    )
    .power_at_start(lambda);
    let gradient = integral.gradient(|t: C| [t * c(0.0, 1.0)]);
    let plan = gradient.plan().expect("a plan");
    for k in [3.0, 500.0] {
        let got = plan.at(k).expect("a value");
        let ratio = got.gradient[0].value / got.value.value;
        assert!((ratio + lambda / a).norm() < 1e-13);
        agrees("Gamma", &got, &gradient.quadrature(k, 1e-13).expect("a yardstick"), 1e-8);
    }
    // With a saddle near the end, both parameters of the phase, and the amplitude.
    for (x, lambda, k) in
        [(0.3, 0.5, 20.0), (1e-3, 1.7, 300.0), (-0.4, 0.25, 60.0), (1.5, 0.6, 40.0)]
    {
        let integral = Integral::new(
            move |t: C| (t * t - t * x, t * 2.0 - x),
            Contour::starting_at([ZERO, c(2.5, 2.5)]),
        )
        .amplitude(move |t: C| 1.0 + t * x)
        .power_at_start(lambda);
        let gradient = integral.gradient(|t: C| [-t, t * t]).amplitude(|t: C| [t, ZERO]);
        let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
        let exact = gradient.quadrature(k, 1e-13).expect("a yardstick");
        agrees(&format!("x {x} lambda {lambda} k {k}"), &got, &exact, 1e-6);
        assert!(matches!(
            integral.gradient(|t: C| [-t]).moving_start([c(1.0, 0.0)]).plan(),
            Err(Error::Unsupported { .. })
        ));
    }
}

#[test]
fn branch_points() {
    // f = z^2/2 - x z + b sqrt(z - z_b), z = z_b + w^2: the closures of the gradient take w.
    let (x, z_b) = (0.4, c(0.1, -0.2));
    for (b, k) in [(0.3, 30.0), (0.0, 200.0), (-0.5, 1000.0)] {
        let integral = Integral::with_root(
            z_b,
            move |z: Jet, root: Jet| z * z * 0.5 - z * x + root * b,
            |z: C, _| (z * 0.2).exp(),
            Contour::starting_at([z_b, c(4.0, 4.0)]),
        )
        .expect("an integral");
        let gradient = integral.gradient(move |w: C| [-(w * w + z_b), w]);
        let got = gradient.plan().and_then(|plan| plan.at(k)).expect("a value");
        let exact = gradient.quadrature(k, 1e-13).expect("a yardstick");
        agrees(&format!("b {b} k {k}"), &got, &exact, 1e-6);
    }
}

#[test]
fn bad_input_is_refused() {
    let integral = cusp(0.1, -0.3);
    let plan = integral.gradient(|z: C| [z]).plan().expect("a plan");
    assert!(
        plan.at(f64::NAN).is_err() && plan.at(-1.0).is_err() && plan.at_orders(9.0, 0).is_err()
    );
    let nan = integral.gradient(|_| [c(f64::NAN, 0.0)]);
    assert!(matches!(nan.plan(), Err(Error::NotFinite { .. })));
    assert!(nan.quadrature(9.0, 1e-9).is_err());
    let moving = integral.gradient(|z: C| [z]).moving_start([c(1.0, 0.0)]);
    assert!(matches!(moving.plan(), Err(Error::Domain { .. })));
    assert!(moving.quadrature(9.0, 1e-9).is_err());
    let finite = Integral::new(|z: C| (z, c(1.0, 0.0)), Contour::between([ZERO, c(1.0, 0.0)]));
    let moving = finite.gradient(|z: C| [z]).moving_end([c(f64::INFINITY, 0.0)]);
    assert!(matches!(moving.plan(), Err(Error::Domain { .. })));
    // No parameter at all.
    let none = finite.gradient(|_| []).plan().and_then(|plan| plan.at(9.0)).expect("a value");
    assert_eq!(none.gradient.len(), 0);
}

#[test]
fn the_value_is_that_of_the_plan() {
    let integral = cusp(0.1, -0.3);
    let plan = integral.plan().expect("a plan");
    let with = integral.gradient(|z: C| [z, z * z]).plan().expect("a plan");
    for k in [3.0, 100.0, 1e6] {
        assert_eq!(plan.at(k), with.at(k).map(|u| u.value));
        assert_eq!(plan.at_orders(k, 2), with.at_orders(k, 2).map(|u| u.value));
        assert_eq!(plan.at(k), with.field().at(k));
    }
}

#[test]
fn exponents_stay_apart() {
    // The field of a fold far on the dark side: e^(-k (2/3)) underflows, its local wave vector does not.
    // I = 2 pi k^(-1/3) Ai(k^(2/3)), dI/dx = 2 pi k^(1/3) Ai'(k^(2/3)): their ratio -> -k (DLMF 9.7.5, 9.7.6).
    let integral = Integral::new(
        |z: C| (z * z * z / 3.0 + z, z * z + 1.0),
        Contour::through([C::from_polar(4.0, PI * 5.0 / 6.0), C::from_polar(4.0, PI / 6.0)]),
    );
    let k = 2000.0;
    // With f turned by a constant, x + i y: the phase of the field falls with y.
    let u = integral.gradient(|z: C| [z, c(1.0, 0.0)]).plan().and_then(|plan| plan.at(k));
    let u = u.expect("a value");
    assert_eq!(u.value.value.norm(), 0.0);
    let [x, y] = u.local_wave_vector();
    assert!(x.abs() < 1e-6 && (y - k).abs() < 1e-9 * k, "{x} {y}");
    assert_eq!(u.flux(), [0.0, 0.0]);
}

#[test]
fn nonsense_does_no_harm() {
    // Derivatives that are not analytic, not finite or huge: a value with its figure or an error.
    type Slope = fn(C) -> [C; 1];
    let slopes: [Slope; 10] = [
        |z| [z / 0.0],
        |z| [if z.re > 0.3 { c(f64::NAN, 0.0) } else { z }],
        |z| [z * 1e300],
        |z| [z * 1e-300],
        |_| [c(f64::INFINITY, 0.0)],
        |z| [(z - 0.05).inv()],
        |z| [(z - c(0.1, 0.2)).ln()],
        |z| [(z * z + 0.01).sqrt()],
        |z| [z.conj()],
        |z| [(z * z * 40.0).exp()],
    ];
    let far = C::from_polar(4.0, PI / 6.0);
    let phase = |z: C| (z * z * z / 3.0 - z * 0.2, z * z - 0.2);
    let amplitude = |z: C| (z - c(0.3, 0.3)).inv();
    let through = Contour::through([C::from_polar(4.0, PI * 5.0 / 6.0), far]);
    let between = Contour::starting_at([c(0.4, 0.0), far]);
    for slope in slopes {
        for contour in [&through, &between] {
            let named =
                Integral::new(phase, contour.clone()).amplitude(amplitude).pole(c(0.3, 0.3));
            let powered = Integral::new(phase, contour.clone());
            let powered = if contour == &between { powered.power_at_start(0.4) } else { powered };
            for k in [3.0, 300.0] {
                let at = |plan: Result<merging_saddles::GradientPlan<1>, Error>| {
                    if let Ok(u) = plan.and_then(|plan| plan.at(k)) {
                        let [slope] = u.gradient;
                        assert!(slope.scaled.is_finite() && !slope.relative_error.is_nan());
                    }
                };
                at(named.gradient(slope).plan());
                at(named.gradient(|z: C| [z]).amplitude(slope).plan());
                at(powered.gradient(slope).plan());
                at(powered.gradient(|z: C| [z]).amplitude(slope).plan());
            }
        }
    }
}
