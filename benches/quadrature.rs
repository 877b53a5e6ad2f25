//! The yardstick's cost as k grows: a phase with two merging saddles, a cusp, and a pole.

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::integral::Polynomial;
use merging_saddles::{Complex64 as C, Contour, Form, Integral};
use std::f64::consts::PI;
use std::hint::black_box;

/// `exp(k (sinh z - (1 + a) z))` (DLMF 10.9.17) on a contour well off the saddles.
fn fold(a: f64) -> Integral<impl Fn(C) -> (C, C)> {
    let phase = move |z: C| (-C::i() * (z.sinh() - z - a * z), -C::i() * (z.cosh() - 1.0 - a));
    let corners = [(3.0, -PI), (2.0, -PI), (0.0, 0.0), (2.0, PI), (3.0, PI)];
    Integral::new(phase, Contour::through(corners.map(|(x, y)| C::new(x, y))))
}

fn evaluations(form: Form) -> usize {
    if let Form::Quadrature { evaluations } = form { evaluations } else { 0 }
}

fn benches(criterion: &mut Criterion) {
    for (name, a) in [("fold a = 1e-9", 1e-9), ("fold a = 0.3", 0.3), ("fold a = -0.3", -0.3)] {
        let integral = fold(a);
        for k in [10.0, 1e3, 1e5] {
            let u = integral.quadrature(k, 1e-12).expect("a value");
            println!("{name}, k = {k}: {} evaluations", evaluations(u.form));
            criterion.bench_function(&format!("{name}, k = {k}"), |b| {
                b.iter(|| integral.quadrature(black_box(k), 1e-12));
            });
        }
    }
    let real = |x: f64| C::new(x, 0.0);
    let cusp = Polynomial([0.0, 4.0, -6.0, 0.0, 1.0].map(real).to_vec());
    let ends = [1.125, 0.125].map(|turn| C::from_polar(5.0, turn * PI));
    let pearcey = Integral::new(cusp.clone(), Contour::through([ends[0], real(0.0), ends[1]]));
    let pole = Integral::new(cusp, Contour::through([ends[0], C::new(0.0, 2.0), ends[1]]))
        .amplitude(|z: C| 1.0 / (z - C::new(0.0, 1.0)));
    for k in [10.0, 1e3, 1e5] {
        criterion.bench_function(&format!("cusp, k = {k}"), |b| {
            b.iter(|| pearcey.quadrature(black_box(k), 1e-12));
        });
        criterion.bench_function(&format!("cusp with a pole, k = {k}"), |b| {
            b.iter(|| pole.quadrature(black_box(k), 1e-12));
        });
    }
}

criterion_group!(all, benches);
criterion_main!(all);
