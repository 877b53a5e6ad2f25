//! The ways to give a phase agree with each other.

use merging_saddles::integral::{Formula, Jet, Polynomial, ValueOnly};
use merging_saddles::{Complex64, Phase};
use proptest::prelude::*;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

proptest! {
    #[test]
    fn every_function_of_a_jet_has_the_derivatives_of_its_values(re in 0.3f64..2.0, im in -1.0f64..1.0) {
        type Of<T> = (&'static str, fn(T) -> T);
        let jets: [Of<Jet>; 9] = [
            ("exp", |z| z.exp()), ("ln", |z| z.ln()), ("sqrt", |z| z.sqrt()),
            ("sin", |z| z.sin()), ("cos", |z| z.cos()), ("sinh", |z| z.sinh()),
            ("cosh", |z| z.cosh()), ("powi", |z| z.powi(5)),
            ("quotient", |z| (z * z - 2.0) / (z + c(1.0, 3.0)) * 0.5 - z.powi(-2)),
        ];
        let z = c(re, im);
        for (name, f) in jets {
            // Cauchy's formula on a circle of radius 0.1 by the trapezoidal rule.
            let value = |z: Complex64| f(Jet::variable(z)).value;
            let (mut first, mut second) = (c(0.0, 0.0), c(0.0, 0.0));
            for n in 0..32 {
                let turn = Complex64::from_polar(1.0, std::f64::consts::TAU * f64::from(n) / 32.0);
                let v = value(z + turn * 0.1);
                first += v / turn / 3.2;
                second += v / (turn * turn) * 2.0 / 0.32;
            }
            let jet = f(Jet::variable(z));
            prop_assert!((jet.first - first).norm() < 1e-11 * (1.0 + first.norm()), "{name}");
            prop_assert!((jet.second - second).norm() < 1e-9 * (1.0 + second.norm()), "{name}");
        }
    }

    #[test]
    fn four_ways_to_give_a_cubic_agree(re in -2.0f64..2.0, im in -2.0f64..2.0) {
        let z = c(re, im);
        let polynomial = Polynomial(vec![c(1.0, 0.0), c(0.0, 2.0), c(0.0, 0.0), c(0.5, 0.0)]);
        let formula = Formula(|z: Jet| z.powi(3) * 0.5 + z * c(0.0, 2.0) + 1.0);
        let closure = |z: Complex64| (z.powi(3) * 0.5 + z * c(0.0, 2.0) + 1.0, z * z * 1.5 + c(0.0, 2.0));
        let value_only = ValueOnly(|z: Complex64| z.powi(3) * 0.5 + z * c(0.0, 2.0) + 1.0);
        let exact = polynomial.jet(z);
        let phases: [(&dyn Phase, f64); 3] = [(&formula, 1e-14), (&closure, 1e-5), (&value_only, 1e-4)];
        for (phase, second) in phases {
            let jet = phase.jet(z);
            prop_assert!((jet[0] - exact[0]).norm() < 1e-14);
            prop_assert!((jet[1] - exact[1]).norm() < 2e-13);
            prop_assert!((jet[2] - exact[2]).norm() < second);
        }
    }
}

#[test]
fn a_jump_of_the_closure_on_the_contour_is_refused() {
    use merging_saddles::{Contour, Error, Integral};
    // Hankel's phase z - ln z (DLMF 5.9.2) on a contour round the origin: the principal logarithm jumps by 2 pi i on the
    // negative axis. Turned away, the cut is met no more.
    let minus_i = c(0.0, -1.0);
    let contour = || {
        Contour::through([
            c(-3.0, -1.0),
            c(0.5, -1.0),
            c(1.0, 0.0),
            c(0.5, 1.0),
            c(-1.0, 0.3),
            c(-3.0, -0.3),
        ])
    };
    let principal = move |z: Complex64| ((z - z.ln()) * minus_i, (1.0 - z.inv()) * minus_i);
    let jumps = Integral::new(principal, contour());
    for refused in [jumps.plan().map(|_| ()), jumps.quadrature(5.0, 1e-9).map(|_| ())] {
        assert!(matches!(refused, Err(Error::Undecided { .. })), "{refused:?}");
    }
    let reason = jumps.plan().err().map(|e| e.to_string()).unwrap_or_default();
    assert!(reason.contains("jumps by") && reason.contains("branch cut"), "{reason}");
    // On the sheet alone it is answered.
    let loop_ =
        Contour::through([c(-3.0, -1.0), c(0.5, -1.0), c(1.0, 0.0), c(0.5, 1.0), c(-3.0, 1.0)]);
    let sheet = Integral::new(principal, loop_);
    let (plan, yardstick) =
        (sheet.plan().unwrap().at(9.0).unwrap(), sheet.quadrature(9.0, 1e-12).unwrap());
    assert!((plan.value - yardstick.value).norm() <= plan.error + yardstick.error);
}

#[test]
fn a_rational_phase_bounded_at_infinity_is_mapped() {
    use merging_saddles::integral::{Formula, Jet};
    use merging_saddles::{Contour, Integral};
    use num_traits::Inv;
    // f = 1/z + 1/(2 z^2) with z = 1/t: infinity is at t = 0, where dz = -dt/t^2 has a double pole.
    let f = |z: Jet| z.inv() + (z * z).inv() * 0.5;
    let ends = [c(0.05, 0.4), c(2.0, 1.0), c(0.1, -0.6)];
    let direct = Integral::new(Formula(f), Contour::between(ends));
    let mapped = direct
        .clone()
        .mapped(|t: Jet| t.inv(), Contour::between(ends.map(|z| z.inv())))
        .pole(c(0.0, 0.0));
    for k in [5.0, 40.0, 300.0] {
        let yardstick = mapped.quadrature(k, 1e-12).unwrap();
        let plan = mapped.plan().and_then(|plan| plan.at(k)).unwrap();
        let given = direct.quadrature(k, 1e-12).unwrap();
        for other in [plan, given] {
            // Relative, since both are beyond the range of doubles at the largest k.
            let miss = (other.scaled + -yardstick.scaled).ln_norm() - yardstick.scaled.ln_norm();
            let figure = other.relative_error + yardstick.relative_error;
            assert!(miss.exp() <= figure, "k {k}: {:e} {figure:e}", miss.exp());
        }
        assert!(plan.relative_error < 1e-3);
    }
}
