use merging_saddles::{Complex64 as C, Contour, Integral};
use std::f64::consts::PI;
fn main() {
    let (k, a) = (1e4, -0.01);
    let f = move |z: C| (-C::i() * (z.sinh() - z - a * z), -C::i() * (z.cosh() - 1.0 - a));
    let c = Contour::through([
        C::new(3.0, -PI),
        C::new(2.0, -PI),
        C::new(0.0, 0.0),
        C::new(2.0, PI),
        C::new(3.0, PI),
    ]);
    let i = Integral::new(f, c);
    println!("{:?}", i.quadrature(k, 1e-13));
}
