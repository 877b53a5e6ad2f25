use merging_saddles::*;
fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}
#[test]
fn dbg() {
    let integral = Integral::new(
        |z: Complex64| (z.powi(4) - z * z * 0.3 + z * 0.1, z.powi(3) * 4.0 - z * 0.6 + 0.1),
        Contour::through([Complex64::from_polar(2.0, 3.5), Complex64::from_polar(2.0, 0.39)]),
    );
    println!("{}", integral.plan().unwrap().explain());
    println!(
        "{}",
        integral
            .clone()
            .amplitude(|z: Complex64| (z - c(0.5, 0.6)).inv())
            .pole(c(0.5, 0.6))
            .plan()
            .unwrap()
            .explain()
    );
    println!(
        "{}",
        integral
            .clone()
            .amplitude(|z: Complex64| (z - c(0.1, 0.1)).inv())
            .pole(c(0.1, 0.1))
            .plan()
            .unwrap()
            .explain()
    );
}
