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
