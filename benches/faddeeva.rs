//! Time per point of the Faddeeva function and its kin, over fixed sets of points.

mod support;

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::Complex64;
use merging_saddles::special::faddeeva::*;
use support::{disc, line, run};

/// The same in the upper half plane.
fn half_disc(radius: f64) -> Vec<Complex64> {
    disc(radius).into_iter().map(|z| Complex64::new(z.re, z.im.abs())).collect()
}

fn all(c: &mut Criterion) {
    let (near, wide) = (disc(6.0), disc(20.0));
    run(c, "1024 w upper |z|<3", &half_disc(3.0), w);
    run(c, "1024 w upper |z|<6", &half_disc(6.0), w);
    run(c, "1024 w upper |z|<100", &half_disc(100.0), w);
    run(c, "1024 w |z|<6", &near, w);
    run(c, "1024 w |z|<20", &wide, w);
    run(c, "1024 w_extended |z|<20", &wide, w_extended);
    run(c, "1024 erf |z|<6", &near, erf);
    run(c, "1024 erfc |z|<6", &near, erfc);
    run(c, "1024 dawson |z|<6", &near, dawson);
    run(c, "1024 complex_fresnel |z|<6", &near, complex_fresnel);
    run(c, "1024 fresnel |z|<6", &near, fresnel);
    run(c, "1024 erf_real -5..5", &line(-5.0, 5.0), erf_real);
    run(c, "1024 erfc_real -5..20", &line(-5.0, 20.0), erfc_real);
    run(c, "1024 erfc_scaled_real -5..20", &line(-5.0, 20.0), erfc_scaled_real);
    run(c, "1024 dawson_real -10..10", &line(-10.0, 10.0), dawson_real);
    run(c, "1024 fresnel_real -10..10", &line(-10.0, 10.0), fresnel_real);
}

criterion_group!(benches, all);
criterion_main!(benches);
