//! Time per point of the Airy functions, over fixed sets of points.

mod support;

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::special::airy::*;
use support::{disc, line, run};

fn all(c: &mut Criterion) {
    let (near, far, wide) = (disc(8.0), disc(100.0), disc(20.0));
    run(c, "1024 airy |z|<8", &near, airy);
    run(c, "1024 airy |z|<20", &wide, airy);
    run(c, "1024 airy |z|<100", &far, airy);
    run(c, "1024 ai |z|<20", &wide, ai);
    run(c, "1024 bi |z|<20", &wide, bi);
    run(c, "1024 airy_scaled |z|<100", &far, airy_scaled);
    run(c, "1024 airy_extended |z|<100", &far, airy_extended);
    run(c, "1024 rotated |z|<20", &wide, rotated);
    run(c, "1024 airy_real -8..8", &line(-8.0, 8.0), airy_real);
    run(c, "1024 airy_real -100..100", &line(-100.0, 100.0), airy_real);
    run(c, "1024 ai_real -100..100", &line(-100.0, 100.0), ai_real);
    run(c, "1024 scorer |z|<20", &wide, scorer);
    run(c, "1024 scorer_real -20..20", &line(-20.0, 20.0), scorer_real);
    run(c, "1024 ai_integral |z|<20", &wide, ai_integral);
    run(c, "1024 modulus_phase -100..0", &line(-100.0, 0.0), modulus_phase);
    run(c, "1024 incomplete_airy |x|<20", &wide, |x| incomplete_airy(x, x * 0.2));
}

criterion_group!(benches, all);
criterion_main!(benches);
