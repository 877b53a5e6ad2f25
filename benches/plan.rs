//! Cost of a plan, of one evaluation at several wavenumbers, and of the yardstick beside them.

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

criterion_group!(benches, plans, evaluations);
criterion_main!(benches);
