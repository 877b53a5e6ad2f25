use merging_saddles::{Complex64 as C, Contour, Form, Integral};
use std::f64::consts::PI;
fn main() {
    let text = std::fs::read_to_string("/work/shared/reference/uniform_field.csv").unwrap();
    let mut all = vec![];
    for line in text.lines().filter(|l| !l.starts_with('#') && !l.starts_with("k,")) {
        let v: Vec<&str> = line.split(',').collect();
        let k: f64 = v[0].parse().unwrap();
        let a: f64 = v[1].parse().unwrap();
        let im: f64 = v[4].parse().unwrap();
        let f = move |z: C| (-C::i() * (z.sinh() - z - a * z), -C::i() * (z.cosh() - 1.0 - a));
        let c = Contour::through([
            C::new(3.0, -PI),
            C::new(2.0, -PI),
            C::new(0.0, 0.0),
            C::new(2.0, PI),
            C::new(3.0, PI),
        ]);
        let i = Integral::new(f, c);
        let t = std::time::Instant::now();
        let u = match v[2] {
            "one" => i.quadrature(k, 1e-13),
            "cosh3" => i.amplitude(|z: C| (z / 3.0).cosh()).quadrature(k, 1e-13),
            _ => i.amplitude(|z: C| 1.0 / (9.0 + z * z)).quadrature(k, 1e-13),
        };
        let us = t.elapsed().as_secs_f64() * 1e6;
        match u {
            Ok(u) => {
                let e = (u.value - C::new(0.0, im)).norm();
                let Form::Quadrature { evaluations } = u.form else { panic!() };
                println!(
                    "{k} {a:.3e} {} rel {:.2e} fig {:.2e} ratio {:.3} evals {evaluations} us {us:.0}",
                    v[2],
                    e / im.abs(),
                    u.error / im.abs(),
                    e / u.error
                );
                all.push(e / u.error);
            }
            Err(e) => println!("{line}: {e}"),
        }
    }
    all.sort_by(f64::total_cmp);
    println!("n {} max {:.3} median {:.4} ", all.len(), all[all.len() - 1], all[all.len() / 2]);
}
