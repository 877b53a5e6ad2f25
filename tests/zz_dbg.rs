use merging_saddles::*;
use std::cell::Cell;
use std::f64::consts::PI;
fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}
#[test]
fn dbg() {
    let n = Cell::new(0usize);
    let f = |z: Complex64| {
        n.set(n.get() + 1);
        (z * z * z / 3.0 - z * 0.3, z * z - 0.3)
    };
    let i = Integral::new(
        f,
        Contour::through([
            Complex64::from_polar(3.0, 5.0 * PI / 6.0),
            c(0.0, 0.0),
            Complex64::from_polar(3.0, PI / 6.0),
        ]),
    );
    for _ in 0..200 {
        std::hint::black_box(i.plan().is_ok());
    }
    println!("EV {}", n.get() / 200);
}
