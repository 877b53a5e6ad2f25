//! Nonsense and extremes: no panic, no silent NaN, no endless work, and where a value comes its
//! error figure holds.
//!
//! Work is counted in evaluations of the caller's phase, never in time.
// `!(a <= b)` is meant: NaN must fail; the lists of closures are read once.
#![allow(clippy::neg_cmp_op_on_partial_ord, clippy::type_complexity)]

#[path = "support/mixing.rs"]
mod mixing;
#[path = "support/random.rs"]
#[allow(dead_code)]
mod random;

use merging_saddles::integral::{Amplitude, Polynomial};
use merging_saddles::{Complex64, Contour, Error, Estimate, Integral, Phase};
use random::{AnyPhase, Case, Random};
use std::cell::Cell;
use std::f64::consts::PI;

type C = Complex64;

fn c(re: f64, im: f64) -> C {
    C::new(re, im)
}

/// Evaluations that one plan and one quadrature may cost, far above what any sane integral needs.
const MOST_PLAN: usize = 2_000_000;
const MOST_QUADRATURE: usize = 3_000_000;

/// A phase that counts its evaluations.
struct Counted<P> {
    inner: P,
    count: Cell<usize>,
}

impl<P: Phase> Phase for Counted<P> {
    fn value_and_derivative(&self, z: C) -> (C, C) {
        self.count.set(self.count.get() + 1);
        self.inner.value_and_derivative(z)
    }

    fn jet(&self, z: C) -> [C; 3] {
        self.count.set(self.count.get() + 1);
        self.inner.jet(z)
    }
}

/// Plans and values, and the yardstick for some wavenumbers; panics if a NaN comes back or too much
/// work was done.
fn exercise<P: Phase, A: Amplitude>(
    label: &str,
    (phase, g): (P, A),
    contour: Contour,
    poles: &[C],
    (ks, yardstick): (&[f64], &[f64]),
) {
    let counted = Counted { inner: phase, count: Cell::new(0) };
    let mut integral = Integral::new(counted, contour).amplitude(g);
    for &pole in poles {
        integral = integral.pole(pole);
    }
    let sound = |what: &str, k: f64, most: usize, got: Result<Estimate, Error>| {
        if let Ok(u) = got {
            let fine = !u.value.re.is_nan() && !u.value.im.is_nan() && !u.error.is_nan();
            assert!(fine && !u.relative_error.is_nan(), "{label}: {what} k {k}: {u:?}");
        }
        let count = integral.phase().count.take();
        assert!(count < most, "{label}: {what} k {k}: {count} evaluations");
    };
    let plan = integral.plan();
    for &k in ks {
        if let Ok(plan) = &plan {
            sound("plan", k, MOST_PLAN, plan.at(k));
            sound("one order", k, 1, plan.at_orders(k, 1));
        }
        if k == 1.0 || !(k > 0.0) {
            let narrow = integral.plan_for(k..=k).and_then(|plan| plan.at(k));
            sound("narrow plan", k, 2 * MOST_PLAN, narrow);
        }
    }
    for &k in yardstick {
        sound("yardstick", k, MOST_QUADRATURE, integral.quadrature(k, 1e-10));
    }
}

const WAVENUMBERS: [f64; 9] =
    [1e-300, 1e-6, 0.1, 1.0, 100.0, 1e8, 1e300, f64::NAN, f64::NEG_INFINITY];

fn contours() -> Vec<Contour> {
    let zero = c(0.0, 0.0);
    vec![
        Contour::through([c(-1.0, -1.0), c(1.0, 1.0)]),
        Contour::through([c(-1.0, -1.0), zero, zero, c(1.0, 1.0), c(1.0, 1.0)]),
        Contour::between([c(-1.0, 0.0), c(1.0, 0.0)]),
        Contour::between([zero, c(1.0, 0.0), c(0.0, 1.0), zero]),
        Contour::starting_at([zero, c(1.0, 1.0)]),
        Contour::ending_at([c(1e-150, 0.0), c(0.0, 1e-150)]),
        Contour::through([c(-1e150, 0.0), c(1e150, 0.0)]),
        Contour::between([c(1e8, 0.0), c(1e8, 1.0)]),
        Contour::through([zero]),
        Contour::between(std::iter::empty()),
        Contour::through([c(f64::INFINITY, 0.0), zero]),
    ]
}

#[test]
fn nonsense_phases() {
    let i = c(0.0, 1.0);
    let nan = c(f64::NAN, 0.0);
    let phases: Vec<(&str, Box<dyn Fn(C) -> (C, C)>)> = vec![
        ("constant", Box::new(|_| (c(1.0, 2.0), c(0.0, 0.0)))),
        ("zero", Box::new(|_| (c(0.0, 0.0), c(0.0, 0.0)))),
        ("linear", Box::new(|z| (z, c(1.0, 0.0)))),
        (
            "NaN on a half-plane",
            Box::new(move |z| if z.re > 0.3 { (nan, nan) } else { (z * z, z * 2.0) }),
        ),
        ("NaN everywhere", Box::new(move |_| (nan, nan))),
        ("infinite", Box::new(|z| (z * f64::INFINITY, c(f64::INFINITY, 0.0)))),
        ("not analytic", Box::new(|z| (c(z.norm_sqr(), 0.0), z.conj()))),
        ("wrong derivative", Box::new(|z| (z * z, z * 7.0 + 1.0))),
        ("no derivative", Box::new(|z| (z * z, c(0.0, 0.0)))),
        ("steps", Box::new(|z| (c(z.re.floor(), z.im), c(0.0, 1.0)))),
        ("noise", Box::new(|z| (c((z.re * 1e9).sin(), (z.im * 1e9).cos()), z))),
        ("huge", Box::new(|z| (z * z * 1e300, z * 2e300))),
        ("tiny", Box::new(|z| (z * z * 1e-300, z * 2e-300))),
        ("essential singularity", Box::new(|z| (z.inv().exp(), -z.inv().exp() / (z * z)))),
        ("double exponential", Box::new(|z| (z.exp().exp(), z.exp().exp() * z.exp()))),
        ("many saddles", Box::new(move |z| ((z * 300.0).sin() * i, (z * 300.0).cos() * i * 300.0))),
        ("branch cut across", Box::new(|z| (z.sqrt(), z.sqrt().inv() * 0.5))),
        ("pole", Box::new(|z| (z.inv(), -(z * z).inv()))),
        ("steep", Box::new(|z| (z.powi(40), z.powi(39) * 40.0))),
    ];
    for (name, phase) in &phases {
        for (n, contour) in contours().into_iter().enumerate() {
            let label = format!("{name}, contour {n}");
            let yardstick: &[f64] = if n < 1 { &[1.0] } else { &[] };
            let one = |_: C| c(1.0, 0.0);
            exercise(&label, (phase, one), contour, &[], (&WAVENUMBERS, yardstick));
        }
    }
}

#[test]
fn nonsense_amplitudes_and_poles() {
    let nan = c(f64::NAN, 0.0);
    let amplitudes: Vec<(&str, Box<dyn Fn(C) -> C>)> = vec![
        ("zero", Box::new(|_| c(0.0, 0.0))),
        ("NaN", Box::new(move |_| nan)),
        ("NaN far out", Box::new(move |z| if z.norm() > 1.2 { nan } else { z })),
        ("huge", Box::new(|_| c(1e300, 1e300))),
        ("tiny", Box::new(|_| c(1e-300, 0.0))),
        ("growing", Box::new(|z| (z * z * 3.0).exp())),
        ("simple pole on the contour", Box::new(|z| z.inv())),
        ("essential", Box::new(|z| (z - 0.1).inv().exp())),
        ("conjugate", Box::new(|z| z.conj())),
    ];
    let lists: Vec<Vec<C>> = vec![
        vec![],
        vec![c(0.0, 0.0)],
        vec![c(0.1, 0.0), c(0.1, 0.0), c(0.1, 1e-14)],
        vec![nan],
        vec![c(1e200, 0.0)],
        vec![c(0.3, 0.2); 40],
    ];
    let square = |z: C| (z * z, z * 2.0);
    for (name, g) in &amplitudes {
        for poles in &lists {
            let label = format!("{name}, {} poles", poles.len());
            let line = Contour::through([c(-1.0, -1.0), c(1.0, 1.0)]);
            let ks: (&[f64], &[f64]) = (&[0.1, 30.0, 1e6], &[30.0]);
            exercise(&label, (square, g), line, poles, ks);
            let half = Contour::starting_at([c(0.0, 0.0), c(1.0, 1.0)]);
            exercise(&label, (square, g), half, poles, ks);
        }
    }
}

#[test]
fn random_nonsense() {
    let mut random = Random::new(1);
    for case in 0..150 {
        let degree = random.below(9);
        let coefficients: Vec<C> = (0..=degree)
            .map(|_| {
                let size = random.power(-200.0, 200.0);
                if random.chance(0.1) { c(0.0, 0.0) } else { size * random.turn() }
            })
            .collect();
        let points: Vec<C> = (0..random.below(6))
            .map(|_| {
                let size = random.power(-50.0, 50.0);
                size * random.turn()
            })
            .collect();
        let contour = match random.below(4) {
            0 => Contour::through(points),
            1 => Contour::between(points),
            2 => Contour::starting_at(points),
            _ => Contour::ending_at(points),
        };
        let k = random.power(-100.0, 100.0);
        let label = format!("case {case}: {coefficients:?} {contour:?} k {k}");
        let phase = Polynomial(coefficients);
        exercise(&label, (phase, |z: C| z), contour, &[], (&[k, 10.0], &[k]));
    }
}

/// `f(z) = c f_0(z/s) + b`: an integral in other units.
struct Rescaled<'a> {
    case: &'a Case,
    factor: f64,
    length: f64,
    offset: f64,
}

impl Phase for Rescaled<'_> {
    fn value_and_derivative(&self, z: C) -> (C, C) {
        let [f, d, _] = self.jet(z);
        (f, d)
    }

    fn jet(&self, z: C) -> [C; 3] {
        let [f, d, dd] = self.case.integral.phase().jet(z / self.length);
        let slope = self.factor / self.length;
        [f * self.factor + self.offset, d * slope, dd * (slope / self.length)]
    }

    fn noise_scale(&self, z: C) -> f64 {
        let inner = self.case.integral.phase().noise_scale(z / self.length);
        inner * self.factor + self.offset.abs()
    }
}

fn scaled_contour(contour: &Contour, length: f64) -> Contour {
    use merging_saddles::integral::Termination::{Downhill, Finite};
    let points: Vec<C> = contour.points().iter().map(|z| z * length).collect();
    match (contour.start(), contour.end()) {
        (Finite, Finite) => Contour::between(points),
        (Finite, _) => Contour::starting_at(points),
        (Downhill, Finite) => Contour::ending_at(points),
        _ => Contour::through(points),
    }
}

/// The difference of two values of which one is `factor` times the other, and their error figures,
/// all relative to the second.
fn compare(got: &Estimate, exact: &Estimate, factor: f64) -> (f64, f64) {
    let exponent = exact.scaled.exponent;
    let size = exact.scaled.mantissa.norm();
    let value = got.scaled.mantissa_at(exponent) / factor;
    let error = (value - exact.scaled.mantissa_at(exponent)).norm() / size;
    (error, got.relative_error * value.norm() / size + exact.relative_error)
}

#[test]
fn units_do_not_matter() {
    let families =
        [random::FEW_SADDLES, random::MORE_SADDLES, random::CLUSTERS, random::POLES, random::ENDS];
    // Factor of the phase, unit of length, offset of the phase.
    let units = [
        (1.0, 1.0, 0.0),
        (1e8, 1.0, 0.0),
        (1e-8, 1.0, 0.0),
        (1.0, 1e3, 0.0),
        (1.0, 1e-3, 0.0),
        (1e8, 1e-3, 0.0),
        (1.0, 1.0, 1e3),
    ];
    let mut faults = Vec::new();
    let mut answered = [0usize; 7];
    let mut all = 0;
    for family in &families {
        for seed in 20_000..20_050 {
            let case = family.case(seed);
            let Ok(exact) = case.integral.quadrature(case.k, 1e-13) else { continue };
            all += 1;
            for (n, &(factor, length, offset)) in units.iter().enumerate() {
                let phase = Rescaled { case: &case, factor, length, offset };
                let g = |z: C| case.integral.amplitude_at(z / length);
                let contour = scaled_contour(case.integral.contour(), length);
                let mut integral = Integral::new(phase, contour).amplitude(g);
                for &pole in case.integral.poles() {
                    integral = integral.pole(pole * length);
                }
                let k = case.k / factor;
                let Ok(got) = integral.plan_for(k..=k).and_then(|plan| plan.at(k)) else {
                    continue;
                };
                answered[n] += 1;
                if offset != 0.0 {
                    // The modulus alone: the phase k b is not in the unshifted value.
                    let (a, b) = (got.scaled.ln_norm(), exact.scaled.ln_norm());
                    let allowed = got.relative_error + exact.relative_error + 1e-12;
                    if !((a - b).abs() <= 2.0 * allowed) && allowed < 0.1 {
                        faults.push(format!("{} offset {offset}: {:.1e}", case.label, a - b));
                    }
                    continue;
                }
                let (error, figure) = compare(&got, &exact, length);
                if !(error <= figure) {
                    faults.push(format!(
                        "{} factor {factor} length {length}: error {error:.1e}, figures {figure:.1e}",
                        case.label
                    ));
                }
            }
        }
    }
    println!("{answered:?} of {all} answered in each system of units");
    assert!(faults.is_empty(), "{faults:#?}");
    for n in 1..units.len() {
        assert!(answered[n] * 100 >= answered[0] * 98, "{:?}: {answered:?}", units[n]);
    }
}

#[test]
fn contours_of_one_class_give_one_value() {
    // f = z^3/3 - z (Airy's phase): a straight way, detours, a loop, through both saddles, there and
    // back again.
    let phase =
        || AnyPhase::Polynomial(Polynomial([0.0, -1.0, 0.0, 1.0 / 3.0].map(C::from).to_vec()));
    let (from, to) = (C::from_polar(4.0, 5.0 * PI / 6.0), C::from_polar(4.0, PI / 6.0));
    let ways: [Vec<C>; 5] = [
        vec![from, to],
        vec![from, c(-1.0, 0.0), c(1.0, 0.0), to],
        vec![from, c(0.0, -5.0), to],
        vec![from, c(-1.0, 0.0), c(0.0, 3.0), c(-1.0, 0.0), c(-1.0, 0.0), c(1.0, 0.0), to],
        vec![from, c(1.0, 1.0), c(-1.0, 1.0), c(-1.0, -1.0), c(1.0, -1.0), c(1.0, 1.0), to],
    ];
    for k in [5.0, 50.0, 2000.0] {
        let mut first: Option<Estimate> = None;
        for way in &ways {
            let integral = Integral::new(phase(), Contour::through(way.clone()));
            let got = integral.plan().and_then(|plan| plan.at(k));
            let got = got.unwrap_or_else(|e| panic!("k {k} {way:?}: {e}"));
            assert!(got.relative_error < 1e-9, "k {k}: {}", got.relative_error);
            if let Some(first) = first {
                let (error, figure) = compare(&got, &first, 1.0);
                assert!(error <= figure, "k {k} {way:?}: {error:.1e} {figure:.1e}");
            }
            first = first.or(Some(got));
        }
        let back = Contour::through([from, c(1.0, 0.0), to, c(0.0, 0.0), from]);
        match Integral::new(phase(), back).plan().and_then(|plan| plan.at(k)) {
            Ok(nothing) => assert!(nothing.value.norm() <= nothing.error, "{nothing:?}"),
            Err(reason) => println!("there and back: {reason}"),
        }
    }
}

#[test]
fn extreme_wavenumbers() {
    // A plan for k from 2 on also answers below, with a figure that holds.
    let mut faults = Vec::new();
    let mut answered = 0;
    for family in [random::FEW_SADDLES, random::MORE_SADDLES, random::ENDS, random::POLES] {
        for seed in 21_000..21_020 {
            let case = family.case(seed);
            let Ok(plan) = case.integral.plan() else { continue };
            for k in [1e-3, 0.03, 0.5, 1e5, 1e6, 1e8] {
                let (Ok(got), Ok(exact)) = (plan.at(k), case.integral.quadrature(k, 1e-12)) else {
                    continue;
                };
                answered += 1;
                let (error, figure) = compare(&got, &exact, 1.0);
                if !(error <= figure) {
                    faults.push(format!("{} at {k}: {error:.1e} {figure:.1e}", case.label));
                }
            }
        }
    }
    println!("{answered} answered");
    assert!(faults.is_empty(), "{faults:#?}");
}
