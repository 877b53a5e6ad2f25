//! Points for the benches, and the loop over them.

#![allow(dead_code)] // Each bench uses its part.

use criterion::Criterion;
use merging_saddles::Complex64;
use std::hint::black_box;

/// Points spread over the disc `|z| <= radius` (golden-angle spiral).
pub fn disc(radius: f64) -> Vec<Complex64> {
    (0..1024)
        .map(|i| {
            let r = radius * ((i as f64 + 0.5) / 1024.0).sqrt();
            Complex64::from_polar(r, 2.399_963_229_728_653 * i as f64)
        })
        .collect()
}

/// Points spread over an interval.
pub fn line(low: f64, high: f64) -> Vec<f64> {
    (0..1024).map(|i| low + (high - low) * ((i * 389 % 1024) as f64 + 0.5) / 1024.0).collect()
}

/// One figure per set: the time of all its points.
pub fn run<T: Copy, U>(c: &mut Criterion, name: &str, points: &[T], f: impl Fn(T) -> U) {
    c.bench_function(name, |b| {
        b.iter(|| {
            for &p in points {
                black_box(f(black_box(p)));
            }
        })
    });
}
