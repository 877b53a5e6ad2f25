//! Time per point of the umbilic integrals with their derivatives, over fixed sets of points.

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::special::umbilic::{Umbilic, elliptic, hyperbolic};
use std::hint::black_box;

/// Points spread over a cube (fractional parts of multiples of irrational numbers).
fn points(half: f64) -> Vec<[f64; 3]> {
    let step = [0.618_033_988_749_895, 0.754_877_666_246_693, 0.569_840_290_998_053];
    (1..=256).map(|i| step.map(|s| half * (2.0 * (i as f64 * s).fract() - 1.0))).collect()
}

/// One figure per set: the time of 256 points.
fn run(c: &mut Criterion, name: &str, half: f64, f: impl Fn([f64; 3]) -> Option<Umbilic>) {
    let points = points(half);
    c.bench_function(name, |b| {
        b.iter(|| {
            for &p in &points {
                black_box(f(black_box(p)));
            }
        })
    });
}

fn all(c: &mut Criterion) {
    run(c, "256 elliptic, up to 6", 6.0, |[x, y, z]| elliptic(x, y, z).ok());
    run(c, "256 hyperbolic, up to 6", 6.0, |[x, y, z]| hyperbolic(x, y, z).ok());
    run(c, "256 elliptic, up to 10000", 1e4, |[x, y, z]| elliptic(x, y, z).ok());
    run(c, "256 hyperbolic, up to 10000", 1e4, |[x, y, z]| hyperbolic(x, y, z).ok());
    run(c, "256 elliptic, up to 50", 50.0, |[x, y, z]| elliptic(x, y, z).ok());
    run(c, "256 hyperbolic, up to 50", 50.0, |[x, y, z]| hyperbolic(x, y, z).ok());
}

criterion_group!(benches, all);
criterion_main!(benches);
