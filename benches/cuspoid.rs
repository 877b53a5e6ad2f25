//! Time per point of the cuspoid integrals, over fixed sets of points.

mod support;

use criterion::{Criterion, criterion_group, criterion_main};
use merging_saddles::Complex64;
use merging_saddles::special::cuspoid;
use support::run;

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

fn all(c: &mut Criterion) {
    let real = |half: [f64; 2]| -> Vec<(f64, f64)> {
        points(half, 0.0).iter().map(|p| (p[0].re, p[1].re)).collect()
    };
    let far = real([300.0, 60.0]).into_iter().filter(|p| p.0.abs() > 32.0 || p.1.abs() > 16.0);
    let far: Vec<_> = far.collect();
    run(c, "1024 pearcey |x1|<32, |x2|<16", &real([32.0, 16.0]), |(a, b)| cuspoid::pearcey(a, b));
    let name = format!("{} pearcey |x1|<300, |x2|<60", far.len());
    run(c, &name, &far, |(a, b)| cuspoid::pearcey(a, b));
    // Within eight Airy units of the caustic 8 x_2^3 + 27 x_1^2 = 0.
    let strip = real([8.0, 22.0]);
    let strip: Vec<_> = strip
        .into_iter()
        .map(|(zeta, x2)| {
            let x2 = x2 - 38.0;
            let unit = (12.0 * (-x2 / 6.0).sqrt()).cbrt();
            ((8.0f64 / 27.0).sqrt() * (-x2).powf(1.5) + zeta * unit, x2)
        })
        .collect();
    run(c, "1024 pearcey, caustic", &strip, |(a, b)| cuspoid::pearcey(a, b));
    let complex = points([12.0, 8.0], 0.5);
    run(c, "1024 complex Pearcey", &complex, |x| cuspoid::real_line(&x));
    let tail = points([10.0, 8.0, 6.0], 0.0);
    run(c, "1024 swallowtail", &tail, |x| cuspoid::swallowtail(x[0].re, x[1].re, x[2].re));
    let wing = points([10.0, 8.0, 6.0, 5.0], 0.0);
    run(c, "1024 butterfly", &wing, |x| cuspoid::butterfly(x[0].re, x[1].re, x[2].re, x[3].re));
    run(c, "1024 butterfly, five rays", &wing, |x| cuspoid::moments(&x, &[2, -1, 1, -3, 0, 1]));
}

criterion_group!(benches, all);
criterion_main!(benches);
