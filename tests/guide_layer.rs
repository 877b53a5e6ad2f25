//! The transition functions against two tables, their equation and their limits.

use merging_saddles::guide::layer::{Transition, bound, bound_extended, free, free_extended};
use merging_saddles::{Complex64 as C, Error, Scaled};
use proptest::prelude::*;

const I: C = C::new(0.0, 1.0);

/// U against max(|U|, |U_y|/(1+|t|)), U_y against that times (1+|t|); the larger of the two.
fn error(t: C, got: [C; 2], exact: [C; 2]) -> f64 {
    let size = 1.0 + t.norm();
    let scale = exact[0].norm().max(exact[1].norm() / size);
    ((got[0] - exact[0]).norm() / scale).max((got[1] - exact[1]).norm() / (scale * size))
}

fn pair(x: Transition<C>) -> [C; 2] {
    [x.u, x.u_y]
}

fn rows(text: &str) -> impl Iterator<Item = Vec<f64>> {
    text.lines()
        .filter(|l| !l.starts_with('#'))
        .skip(1)
        .map(|l| l.split(',').map(|x| x.parse().unwrap()).collect())
}

/// Prints the distribution and holds its largest to a bar.
fn hold(what: &str, mut seen: Vec<f64>, bar: f64) {
    seen.sort_by(f64::total_cmp);
    let n = seen.len();
    println!(
        "{what}: max {:.1e}, p99 {:.1e}, median {:.1e}",
        seen[n - 1],
        seen[n * 99 / 100],
        seen[n / 2]
    );
    assert!(seen[n - 1] < bar, "{what}: {:?}", &seen[n - 5..]);
}

#[test]
fn table_of_values() {
    // tests/data/cutoff_layer.csv, computed with mpmath at 60 digits (its header says how).
    let mut seen = Vec::new();
    for v in rows(include_str!("data/cutoff_layer.csv")) {
        let (t, y) = (C::new(v[0], v[1]), v[2]);
        for (got, at) in [(bound(t, y).unwrap(), 3), (free(t, y).unwrap(), 7)] {
            let exact = [C::new(v[at], v[at + 1]), C::new(v[at + 2], v[at + 3])];
            seen.push(error(t, pair(got), exact));
        }
    }
    assert_eq!(seen.len(), 400);
    hold("table", seen, 5e-14);
}

#[test]
fn far_out_and_round_the_seam_of_the_regions() {
    // tests/data/cutoff_layer_far.csv, made by the script beside it (mpmath).
    let (mut seam, mut outer) = (Vec::new(), Vec::new());
    for (i, v) in rows(include_str!("data/cutoff_layer_far.csv")).enumerate() {
        let (t, y) = (C::new(v[0], v[1]), C::new(v[2], v[3]));
        let both = [(bound_extended(t, y), 4), (free_extended(t, y), 9)];
        for (got, at) in both {
            let (got, n) = (got.unwrap(), v[at] as i64);
            let exact = [C::new(v[at + 1], v[at + 2]), C::new(v[at + 3], v[at + 4])];
            let e = error(t, [got.u.mantissa_at(n), got.u_y.mantissa_at(n)], exact);
            if e > 1e-13 {
                println!("{t} {y} {e:e}");
            }
            if i < 80 { seam.push(e) } else { outer.push(e) }
        }
    }
    assert_eq!((seam.len(), outer.len()), (160, 320));
    hold("seam", seam, 1e-13);
    hold("far", outer, 1e-13);
}

#[test]
fn the_bound_mode_keeps_its_norm() {
    // Derived relation: the equation with U_y = t U, t real, keeps the integral of |U|^2.
    for t in [-6.0f64, -4.0, -2.5, -1.0, -0.3, 0.0, 0.7, 2.0, 4.5, 7.0, 10.0] {
        // Simpson's rule, out to y = 40 or beyond the fastest of the beam, y = 2 p t with p = 4.
        let step = if t < 0.0 { 0.0025 } else { 0.01 };
        let n = 2 * ((20.0 + 4.0 * t.max(0.0)) / step) as usize;
        let density = |j: usize| bound(t, step * j as f64).unwrap().u.norm_sqr();
        let inner: f64 = (1..n).map(|j| density(j) * if j % 2 == 1 { 4.0 } else { 2.0 }).sum();
        let norm = (density(0) + inner + density(n)) * step / 3.0;
        assert!((norm - 1.0).abs() < 1e-8, "t = {t}: {norm}");
    }
}

#[test]
fn limits_far_before_and_after_cut_off() {
    // Derived relations: the bound mode with its phase, and the decay at the boundary.
    for t in [-30.0f64, -300.0, -3000.0] {
        for y in [0.0, 0.3 / -t] {
            let exponent = C::new(t * y, std::f64::consts::FRAC_PI_4);
            // t^3/3 is an integer here: exact in the table's sense.
            let mode = (exponent + I * (t * t * t / 3.0)).exp() * (-2.0 * t).sqrt();
            let seen = (bound(t, y).unwrap().u / mode - 1.0).norm();
            assert!(
                seen < 3.0 / t.abs().powi(3) + 1e-11 + 1e-16 * t.abs().powi(3),
                "t = {t}: {seen}"
            );
        }
    }
    for t in [30.0f64, 300.0, 3000.0] {
        let edge = bound(t, 0.0).unwrap().u.norm() * t.powf(2.5);
        assert!((edge * 2f64.sqrt() - 1.0).abs() < 10.0 / t.powi(3), "t = {t}: {edge}");
    }
    // The beam: |U|^2 dy = 4 p^2 exp(-(4/3) p^3) dp at y = 2 p t, largest at p = 2^(-1/3).
    let t = 2000.0;
    for p in [0.4, 0.5f64.cbrt(), 1.2] {
        let density = bound(t, 2.0 * p * t).unwrap().u.norm_sqr() * 2.0 * t;
        assert!((density / (4.0 * p * p * (-4.0 / 3.0 * p * p * p).exp()) - 1.0).abs() < 1e-2);
    }
}

#[test]
fn bad_arguments_get_an_error() {
    assert!(matches!(bound(f64::NAN, 0.0), Err(Error::Domain { what: "t", .. })));
    assert!(matches!(free(0.0, f64::INFINITY), Err(Error::Domain { what: "y", .. })));
    assert!(matches!(bound(1e9, 0.0), Err(Error::NoDigits { .. })));
    assert!(matches!(free(0.0, 1e300), Err(Error::NoDigits { .. })));
    // Just inside the range: finite, and the boundary condition holds.
    let edge = bound_extended(-3e4, 0.0).unwrap();
    assert!(
        edge.u.is_finite() && (edge.u_y.ln_norm() - edge.u.ln_norm() - 3e4f64.ln()).abs() < 1e-9
    );
}

type Function = fn(C, C) -> Result<Transition<Scaled>, Error>;

/// A derivative by Cauchy's formula on a circle, and the size of its rounding errors over 1e-16.
fn derivative(order: i32, radius: f64, f: impl Fn(C) -> C) -> (C, f64) {
    const N: u32 = 32;
    let (mut sum, mut size) = (C::new(0.0, 0.0), 0.0f64);
    for j in 0..N {
        let turn = C::from_polar(1.0, std::f64::consts::TAU * f64::from(j) / f64::from(N));
        let value = f(turn * radius);
        size = size.max(value.norm());
        sum += value * turn.powi(-order);
    }
    // order! = order for 1 and 2.
    let factor = f64::from(order) / radius.powi(order);
    (sum * (factor / f64::from(N)), size * factor)
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn both_solve_the_equation(
        re in -7.0..8.0f64, im in -0.5..0.5f64, y in 0.0..20.0f64, sinks in 0.0..0.5f64,
    ) {
        // i U_t + U_yy = 0, and u_y is the derivative of u (definition).
        let (t, y) = (C::new(re, im), C::new(y, -sinks));
        for f in [bound_extended as Function, free_extended] {
            let here = f(t, y).unwrap();
            let n = here.u.exponent.max(here.u_y.exponent);
            // The function varies over 1/t^2, 1/y in t and 1/t in y.
            let radius = 2.0 / (2.0 + t.norm_sqr() + y.norm());
            let (u_t, a) = derivative(1, radius, |d| f(t + d, y).unwrap().u.mantissa_at(n));
            let (u_yy, b) = derivative(2, 2.0 / (2.0 + t.norm()), |d| f(t, y + d).unwrap().u.mantissa_at(n));
            let (u_y, c) = derivative(1, 2.0 / (2.0 + t.norm()), |d| f(t, y + d).unwrap().u.mantissa_at(n));
            prop_assert!((I * u_t + u_yy).norm() < 1e-13 * (a + b), "{} {}", u_t, u_yy);
            prop_assert!((u_y - here.u_y.mantissa_at(n)).norm() < 1e-13 * c);
        }
    }

    #[test]
    fn the_boundary_condition_holds(re in -40.0..40.0f64, im in -3.0..3.0f64) {
        // U_y = t U at y = 0 (definition).
        let t = C::new(re, im);
        for f in [bound_extended as Function, free_extended] {
            let here = f(t, C::new(0.0, 0.0)).unwrap();
            let n = here.u.exponent.max(here.u_y.exponent);
            let (u, u_y) = (here.u.mantissa_at(n), here.u_y.mantissa_at(n));
            prop_assert!((u_y - t * u).norm() < 1e-12 * (u.norm() * t.norm()).max(u_y.norm()).max(u.norm()));
        }
    }
}
