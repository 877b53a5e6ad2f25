//! Cost of a plan, of one evaluation at several wavenumbers, of both with a gradient, and of the yardstick
//! beside them.

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64, Contour, Integral};
use std::f64::consts::PI;
use std::hint::black_box;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

/// z^3/3 - 0.3 z: a closure of a few nanoseconds with two saddles near each other.
fn cheap() -> Integral<Polynomial> {
    let third = c(1.0 / 3.0, 0.0);
    Integral::new(
        Polynomial(vec![c(0.0, 0.0), c(-0.3, 0.0), c(0.0, 0.0), third]),
        Contour::through([
            Complex64::from_polar(3.0, 5.0 * PI / 6.0),
            c(0.0, 0.0),
            Complex64::from_polar(3.0, PI / 6.0),
        ]),
    )
}

/// u^4 + x2 u^2 + x1 u (DLMF 36.2.1): a closure of a few nanoseconds with three saddles.
fn cusp(x2: f64, x1: f64) -> Integral<impl Fn(Complex64) -> (Complex64, Complex64)> {
    Integral::new(
        move |z: Complex64| {
            let square = z * z;
            (z * (x1 + z * (x2 + square)), x1 + z * (2.0 * x2 + 4.0 * square))
        },
        Contour::through([
            Complex64::from_polar(3.0, PI + PI / 8.0),
            c(0.0, 0.0),
            Complex64::from_polar(3.0, PI / 8.0),
        ]),
    )
}

/// The Bessel fold, with the library's sinh and cosh in the closure.
fn fold(a: f64) -> Integral<impl Fn(Complex64) -> (Complex64, Complex64)> {
    Integral::new(
        move |z: Complex64| {
            (c(0.0, -1.0) * ((z.sinh() - z) - z * a), c(0.0, -1.0) * (z.cosh() - 1.0 - a))
        },
        Contour::through([c(3.0, -PI), c(0.0, 0.0), c(3.0, PI)]),
    )
}

/// A finite end next to the saddles of the cubic.
fn ended() -> Integral<Polynomial> {
    let cubic = cheap();
    let far = Complex64::from_polar(3.0, PI / 6.0);
    Integral::new(cubic.phase().clone(), Contour::starting_at([c(0.6, 0.0), far]))
}

fn plans(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("plan");
    let integral = cheap();
    group.bench_function("cubic", |b| b.iter(|| integral.plan().map(|_| ()).is_ok()));
    // Merged, near each other (all groupings are kept), apart.
    for (x2, x1) in [(0.0, 0.0), (-0.3, 0.05), (-2.0, 0.5), (-8.0, 1.0)] {
        let integral = cusp(x2, x1);
        group.bench_function(format!("cusp, x2 = {x2}, x1 = {x1}"), |b| {
            b.iter(|| integral.plan().map(|_| ()).is_ok());
        });
    }
    for a in [0.3, 1e-9] {
        let integral = fold(a);
        group.bench_function(format!("Bessel fold, a = {a}"), |b| {
            b.iter(|| integral.plan().map(|_| ()).is_ok());
        });
    }
    group.finish();
}

/// Plans with one and two parameters of the phase, and with two of both; against the plan alone.
fn gradients(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("plan with gradient");
    let (cubic, fold, ended) = (cheap(), fold(0.3), ended());
    let zero = c(0.0, 0.0);
    group.bench_function("cubic, 1", |b| {
        b.iter(|| cubic.gradient(|z: Complex64| [z]).plan().is_ok());
    });
    group.bench_function("cubic, 2", |b| {
        b.iter(|| cubic.gradient(|z: Complex64| [z, z * z]).plan().is_ok());
    });
    group.bench_function("cubic, 2 of phase and amplitude", |b| {
        let gradient =
            cubic.gradient(|z: Complex64| [z, zero]).amplitude(|z: Complex64| [z * z, z * 0.5]);
        b.iter(|| gradient.plan().is_ok());
    });
    group.bench_function("Bessel fold, a = 0.3, 2", |b| {
        b.iter(|| fold.gradient(|z: Complex64| [z.sinh(), z]).plan().is_ok());
    });
    group.bench_function("cubic with an end, alone", |b| b.iter(|| ended.plan().is_ok()));
    group.bench_function("cubic with an end, 1", |b| {
        b.iter(|| ended.gradient(|z: Complex64| [z]).plan().is_ok());
    });
    group.finish();
    let mut group = criterion.benchmark_group("at(k) with gradient");
    if let (Ok(alone), Ok(one), Ok(two)) = (
        fold.plan(),
        fold.gradient(|z: Complex64| [z.sinh()]).plan(),
        fold.gradient(|z: Complex64| [z.sinh(), z]).plan(),
    ) {
        for k in [10.0, 1e6] {
            group.bench_function(format!("fold, k = {k}, alone"), |b| {
                b.iter(|| alone.at(black_box(k)).map(|u| u.value));
            });
            group.bench_function(format!("fold, k = {k}, 1"), |b| {
                b.iter(|| one.at(black_box(k)).map(|u| u.value.value));
            });
            group.bench_function(format!("fold, k = {k}, 2"), |b| {
                b.iter(|| two.at(black_box(k)).map(|u| u.value.value));
            });
        }
    }
    if let (Ok(alone), Ok(one)) = (ended.plan(), ended.gradient(|z: Complex64| [z]).plan()) {
        group.bench_function("end near a fold, k = 100, alone", |b| {
            b.iter(|| alone.at(black_box(100.0)).map(|u| u.value));
        });
        group.bench_function("end near a fold, k = 100, 1", |b| {
            b.iter(|| one.at(black_box(100.0)).map(|u| u.value.value));
        });
    }
    group.finish();
}

fn evaluations(criterion: &mut Criterion) {
    let mut group = criterion.benchmark_group("at(k)");
    let integral = fold(1e-9);
    if let Ok(plan) = integral.plan() {
        for k in [10.0, 1e3, 1e6] {
            group.bench_function(format!("k = {k}"), |b| {
                b.iter(|| plan.at_orders(black_box(k), 6).map(|u| u.value));
            });
        }
    }
    if let Ok(plan) = cusp(-0.3, 0.05).plan() {
        for k in [10.0, 1e6] {
            group.bench_function(format!("cusp, k = {k}"), |b| {
                b.iter(|| plan.at_orders(black_box(k), 6).map(|u| u.value));
            });
        }
    }
    group.finish();
    let mut group = criterion.benchmark_group("yardstick");
    group.sample_size(20);
    for k in [10.0, 1e3, 1e6] {
        group.bench_function(format!("k = {k}"), |b| {
            b.iter(|| integral.quadrature(black_box(k), 1e-12).map(|u| u.value));
        });
    }
    group.finish();
}

criterion_group!(benches, plans, gradients, evaluations);
criterion_main!(benches);
