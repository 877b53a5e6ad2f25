//! The uniform field: its integral against plain panels on another path, and its limits.

#[path = "support/panels.rs"]
mod panels;

use merging_saddles::guide::layer::bound;
use merging_saddles::guide::{Order, SlopingGuide, UniformField};
use merging_saddles::{Complex64 as C, Error};
use panels::panels;
use std::f64::consts::FRAC_PI_4;

const I: C = C::new(0.0, 1.0);

/// The guide, its width at the layer's time `t`, and the angle of the bound mode's saddle.
fn at(mode: u32, m: f64, eps: f64, t: f64) -> (SlopingGuide, f64, f64) {
    let guide = SlopingGuide::new(mode, m, eps).unwrap().tolerance(1e-2);
    let h = guide.cutoff_width() - t * (m * m * eps).cbrt();
    let omega = if t < 0.0 { guide.adiabatic(h).unwrap().gamma.re.asin() } else { 0.0 };
    (guide, h, omega)
}

fn fields(guide: &SlopingGuide, h: f64) -> [UniformField; 4] {
    [
        guide.inside(h, 0.3 * h).unwrap(),
        guide.inside(h, h).unwrap(),
        guide.outside(h, 0.0).unwrap(),
        guide.outside(h, 5.0).unwrap(),
    ]
}

#[test]
fn quadrature_agrees_with_panels_on_another_path() {
    let mut worst = 0.0f64;
    for (mode, m) in [(1, 1.0), (3, 1.0), (1, 0.55), (2, 0.55), (1, 1.4)] {
        for eps in [0.1, 0.01, 0.001] {
            for t in [-3.0, -1.0, 0.0, 1.0, 2.5] {
                for order in [Order::Leading, Order::Next] {
                    let (guide, h, omega) = at(mode, m, eps, t);
                    if h < 0.1 {
                        continue;
                    }
                    let guide = guide.order(order);
                    for field in fields(&guide, h) {
                        let exact = panels(&field, omega, m > 1.0);
                        let got = field.quadrature(1e-10).unwrap();
                        // The two paths end at different places near the Brewster parameter.
                        let error = (got.value - exact).norm() - 3.0 * field.neglected();
                        assert!(
                            error <= 1e-10 * exact.norm(),
                            "mode {mode} m {m} eps {eps} t {t}: {} {exact}",
                            got.value
                        );
                        worst = worst.max(error / exact.norm());
                    }
                }
            }
        }
    }
    println!("worst {worst:.1e}");
}

#[test]
fn plan_agrees_with_quadrature_within_its_figure() {
    // Expansions at the two merging saddles, through their coalescence (t = 0).
    let (mut large, mut refused, mut total) = (0, 0, 0);
    for mode in [1, 2] {
        for eps in [0.02, 0.005, 1e-4] {
            for t in [-2.0, -0.5, 0.0, 1e-6, 0.5, 2.0] {
                let (guide, h, _) = at(mode, 1.0, eps, t);
                for field in fields(&guide, h) {
                    total += 1;
                    let exact = field.quadrature(1e-12).unwrap();
                    let got = match field.evaluate() {
                        Ok(got) => got,
                        Err(e) => { println!("{mode} {eps} {t} {:?} {e}", 0); refused += 1; continue }
                    };
                    let error = (got.value - exact.value).norm();
                    assert!(
                        error <= got.error + exact.error,
                        "mode {mode} eps {eps} t {t}: {error:e} over {:e}",
                        got.error
                    );
                    large += i32::from(got.relative_error > 1e-5);
                }
            }
        }
    }
    // An error figure that is always large would pass the above.
    println!("{refused} refused, {large} large, {total}");
    assert!(large < 10, "{large} of 144 figures are above 1e-5");
}

#[test]
fn field_is_continuous_at_the_boundary() {
    // The two amplitudes come from one difference equation: the mismatch is of second order.
    for m in [1.0, 0.55, 1.4] {
        let mismatch = |eps: f64, order| {
            let (guide, h, _) = at(1, m, eps, 0.5);
            let guide = guide.order(order);
            let a = guide.inside(h, h).unwrap().quadrature(1e-11).unwrap().value;
            let b = guide.outside(h, 0.0).unwrap().quadrature(1e-11).unwrap().value;
            (a - b).norm() / b.norm()
        };
        for (order, rate) in [(Order::Leading, 0.6), (Order::Next, 1.4)] {
            let (coarse, fine) = (mismatch(0.02, order), mismatch(0.005, order));
            let seen = (coarse / fine).log2() / 2.0;
            println!("m {m} {order:?}: {coarse:.1e} {fine:.1e} rate {seen:.2}");
            assert!(seen > rate, "m {m} {order:?}: {coarse} {fine}");
        }
        assert!(mismatch(0.005, Order::Next) < 1e-3);
    }
}

#[test]
fn layer_is_the_limit_at_cut_off() {
    // A U(t, y) with A = e^(-i pi/4) eps^(1/6) m^(-2/3) (derived relation), error of order eps^(1/3).
    for m in [1.0, 0.55] {
        for (t, y) in [(-1.0, 0.0), (0.0, 1.0), (1.0, 2.0)] {
            let difference = |eps: f64| {
                let (guide, h, _) = at(1, m, eps, t);
                let distance = y * (m / eps).cbrt();
                let u = guide.outside(h, distance).unwrap().quadrature(1e-10).unwrap().value;
                let a = (-I * FRAC_PI_4).exp() * eps.powf(1.0 / 6.0) * m.powf(-2.0 / 3.0);
                (u / (a * bound(t, y).unwrap().u) - 1.0).norm()
            };
            let (coarse, fine) = (difference(1e-4), difference(1e-7));
            let rate = (coarse / fine).log10() / 3.0;
            println!("m {m} t {t} y {y}: {coarse:.1e} {fine:.1e}, rate {rate:.2}");
            assert!(fine < 2e-2 && (rate - 1.0 / 3.0).abs() < 0.08);
        }
    }
}

#[test]
fn far_before_cut_off_it_is_the_adiabatic_mode() {
    for m in [1.0, 0.55, 1.4] {
        let guide = SlopingGuide::new(2, m, 1e-3).unwrap();
        let h = guide.cutoff_width() + 1.0;
        let mode = guide.adiabatic(h).unwrap();
        let x = 0.4 * h;
        let sine = -(mode.kappa * x).sin() * mode.antinode * mode.exponent.exp();
        let field = guide.inside(h, x).unwrap().quadrature(1e-10).unwrap().value;
        assert!((field / sine - 1.0).norm() < 2e-3, "m {m}: {field} {sine}");
    }
}

#[test]
fn losses_continue_analytically() {
    // The Cauchy-Riemann equations in eps: d/d(Im eps) = i d/d(Re eps), at fixed h and x.
    let value = |eps: C| {
        let guide = SlopingGuide::new(1, 0.55, eps).unwrap();
        guide.outside(1.7, 3.0).unwrap().quadrature(1e-12).unwrap().value
    };
    let (eps, step) = (C::new(0.05, 0.002), 1e-4);
    let along = (value(eps + step) - value(eps - step)) / (2.0 * step);
    let across = (value(eps + I * step) - value(eps - I * step)) / (2.0 * step);
    assert!((across / along - I).norm() < 1e-4, "{along} {across}");
}

#[test]
fn refusals_say_why() {
    let brewster = SlopingGuide::new(1, 3.0, 0.1).unwrap().outside(1.5, 1.0);
    assert!(matches!(brewster, Err(Error::Undecided { .. })), "{brewster:?}");
    assert!(brewster.unwrap_err().to_string().contains("Brewster"));
    let guide = SlopingGuide::new(1, 1.0, 0.1).unwrap();
    assert!(guide.outside(1.5, -1.0).is_err() && guide.inside(f64::NAN, 1.0).is_err());
    assert!(guide.inside(0.0, 0.0).is_err() && guide.adiabatic(1.5).is_err());
    for bad in [0.0, -0.1, 2.0, f64::NAN] {
        assert!(SlopingGuide::new(1, 1.0, bad).is_err(), "{bad}");
    }
    assert!(SlopingGuide::new(1, -1.0, 0.1).is_err());
    // A node of the mode is a value, not a refusal.
    assert_eq!(guide.inside(1.5, 0.0).unwrap().quadrature(1e-9).unwrap().value, C::from(0.0));
}
