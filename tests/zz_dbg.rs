use merging_saddles::integral::Polynomial;
use merging_saddles::*;
use std::f64::consts::PI;
fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}
#[test]
fn dbg() {
    let a = c(-0.172, -1.457);
    let i = c(0.0, 1.0);
    let f = move |z: Complex64| ((z.sinh() - a * z) * -i, (z.cosh() - a) * -i);
    let it = Integral::new(f, Contour::through([c(5.0, -PI), c(0.0, 0.0), c(5.0, PI)]));
    println!("A {:?}", it.plan().map(|p| p.at(19.5)));
    let (a, kk) = (c(0.601, -1.316), 4.6);
    let f = move |z: Complex64| ((z.cosh() * -1.0 + a * z) * -i, (z.sinh() * -1.0 + a) * -i);
    let it = Integral::new(f, Contour::through([c(-5.0, 0.0), c(5.0, 0.0)]));
    println!("A {:?} {:?}", it.plan().map(|p| p.at(kk)), it.quadrature(kk, 1e-10));
}
