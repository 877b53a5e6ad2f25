use merging_saddles::*;
type C = Complex64;
fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}
#[test]
fn dbg() {
    let zeta = 0.5;
    let mi = c(0.0, -1.0);
    let f = move |s: C| ((s.ln() + (s * 0.5 - zeta) * s) * mi, (s.inv() + s - zeta) * mi);
    let it = Integral::new(f, Contour::through([c(1.0, -4.0), c(1.0, 0.0), c(1.0, 4.0)]))
        .amplitude(|s: C| s.sqrt().inv());
    match it.plan() {
        Ok(p) => println!("{}\n{:?}\n{:?}", p.explain(), p.at(10.5), it.quadrature(10.5, 1e-10)),
        Err(e) => println!("Z {e}"),
    }
    let (sin, cos) = 0.45f64.sin_cos();
    let f = move |w: C| {
        let (s, h) = (w.sinh(), w.cosh());
        ((cos - sin * s) * h, (cos - sin * s) * s - sin * h * h)
    };
    let q = std::f64::consts::FRAC_PI_4;
    let it = Integral::new(f, Contour::through([c(-3.0, -q), c(0.0, 0.0), c(3.0, -q)]))
        .amplitude(|w: C| w.cosh().inv())
        .pole(c(0.0, 2.0 * q))
        .pole(c(0.0, -2.0 * q));
    match it.plan() {
        Ok(p) => println!("{}\n{:?}\n{:?}", p.explain(), p.at(10.0), it.quadrature(10.0, 1e-10)),
        Err(e) => println!("Z {e}"),
    }
}
