//! Time per point of the cuspoid integrals, over fixed sets of points.

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::Complex64;
use merging_saddles::special::cuspoid;
use std::hint::black_box;

/// Points spread over a box (fractional parts of multiples of irrational numbers).
fn points<const K: usize>(half: [f64; K], imaginary: f64) -> Vec<[Complex64; K]> {
    let step = [
        0.618_033_988_749_895,
        0.754_877_666_246_693,
        0.569_840_290_998_053,
        0.819_172_513_396_164,
    ];
    (1..=1024)
        .map(|i| {
            std::array::from_fn(|m| {
                let u = 2.0 * (i as f64 * step[m]).fract() - 1.0;
                let v = 2.0 * (i as f64 * (step[m] + 0.414_213_562_373_095)).fract() - 1.0;
                Complex64::new(half[m] * u, half[m] * v * imaginary)
            })
        })
        .collect()
}

/// One figure per set: the time of 1024 points.
fn run<T: Copy, U>(c: &mut Criterion, name: &str, points: &[T], f: impl Fn(T) -> U) {
    c.bench_function(name, |b| {
        b.iter(|| {
            for &p in points {
                black_box(f(black_box(p)));
            }
        })
    });
}

fn all(c: &mut Criterion) {
    run(c, "1024 between Pearcey complex", &points([12.0, 8.0], 0.5), |x| {
        cuspoid::between(&x, 2, 0)
    });
    run(c, "1024 between swallowtail", &points([10.0, 8.0, 6.0], 0.0), |x| {
        cuspoid::between(&x, 2, 0)
    });
    run(c, "1024 between butterfly", &points([10.0, 8.0, 6.0, 5.0], 0.0), |x| {
        cuspoid::between(&x, 3, 0)
    });
}

criterion_group!(benches, all);
criterion_main!(benches);
