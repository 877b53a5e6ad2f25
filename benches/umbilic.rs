//! Time per point of the umbilic integrals with their derivatives, over fixed sets of points.

mod support;

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::special::umbilic::{elliptic, hyperbolic};
use support::run;

/// Points spread over a cube (fractional parts of multiples of irrational numbers).
fn points(half: f64) -> Vec<[f64; 3]> {
    let step = [0.618_033_988_749_895, 0.754_877_666_246_693, 0.569_840_290_998_053];
    (1..=256).map(|i| step.map(|s| half * (2.0 * (i as f64 * s).fract() - 1.0))).collect()
}

fn all(c: &mut Criterion) {
    for half in [6.0, 50.0, 1e4] {
        let points = points(half);
        run(c, &format!("256 elliptic, up to {half}"), &points, |[x, y, z]| elliptic(x, y, z).ok());
        run(c, &format!("256 hyperbolic, up to {half}"), &points, |[x, y, z]| {
            hyperbolic(x, y, z).ok()
        });
    }
}

criterion_group!(benches, all);
criterion_main!(benches);
