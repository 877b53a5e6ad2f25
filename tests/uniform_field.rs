//! Two saddles through their coalescence: 2 pi i J_{k(1+a)}(k) from its contour integral alone.
//!
//! Table: tests/data/uniform_field.csv (its header says how it was made; DLMF 10.9.17).

use merging_saddles::{Complex64, Contour, Integral};
use std::f64::consts::PI;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

struct Row {
    k: f64,
    a: f64,
    amplitude: String,
    exact: Complex64,
}

fn rows() -> Vec<Row> {
    let text = include_str!("data/uniform_field.csv");
    let lines = text.lines().filter(|line| !line.starts_with('#')).skip(1);
    lines
        .map(|line| {
            let fields: Vec<&str> = line.split(',').collect();
            let number = |n: usize| fields[n].parse::<f64>().expect("a number");
            Row {
                k: number(0),
                a: number(1),
                amplitude: fields[2].to_string(),
                exact: c(number(3), number(4)),
            }
        })
        .collect()
}

#[test]
fn relative_errors_at_eight_orders() {
    let mut worst = std::collections::BTreeMap::<u64, (f64, f64)>::new();
    let mut uncovered = 0;
    let mut sharpness = Vec::new();
    for row in rows() {
        let a = row.a;
        let amplitude = row.amplitude.clone();
        let integral = Integral::new(
            move |z: Complex64| {
                (c(0.0, -1.0) * ((z.sinh() - z) - z * a), c(0.0, -1.0) * (z.cosh() - 1.0 - a))
            },
            Contour::through([c(3.0, -PI), c(0.0, 0.0), c(3.0, PI)]),
        )
        .amplitude(move |z: Complex64| match amplitude.as_str() {
            "cosh3" => (z / 3.0).cosh(),
            "rat9" => (z * z + 9.0).inv(),
            _ => c(1.0, 0.0),
        });
        let got = integral.plan().and_then(|plan| plan.at_orders(row.k, 8));
        let got = got.unwrap_or_else(|e| panic!("k = {}, a = {}: {e}", row.k, a));
        let error = (got.value - row.exact).norm();
        if error > got.error {
            uncovered += 1;
            println!("uncovered k {} a {} {} {:e} {:e}", row.k, a, row.amplitude, error, got.error);
        }
        sharpness.push(got.error / error.max(1e-17 * row.exact.norm()));
        // Away from the zeros of J: the modulus of the oscillating field is about
        // 2 pi sqrt(2/(pi k)) (1 - (1+a)^2)^(-1/4) for a < 0 (DLMF 10.19.6, leading term).
        let modulus = if a < -0.5 / row.k.powf(2.0 / 3.0) {
            2.0 * PI * (2.0 / (PI * row.k)).sqrt() / (1.0 - (1.0 + a).powi(2)).powf(0.25)
        } else {
            row.exact.norm()
        };
        let near_zero = row.exact.norm() < 0.2 * modulus;
        let relative = error / row.exact.norm();
        let entry = worst.entry(row.k as u64).or_default();
        if !near_zero && relative > entry.0 {
            *entry = (relative, a);
        }
    }
    sharpness.sort_by(f64::total_cmp);
    println!("{worst:?}");
    println!(
        "figure/error median {:.1}, 95 % {:.1}",
        sharpness[sharpness.len() / 2],
        sharpness[sharpness.len() * 95 / 100]
    );
    assert_eq!(uncovered, 0);
    assert!(
        sharpness[sharpness.len() / 2] <= 20.0 && sharpness[sharpness.len() * 95 / 100] <= 100.0
    );
    for (k, (error, a)) in worst {
        let bar = match k {
            5 => 2e-7,
            10 => 3e-10,
            30 => 1e-12,
            _ => f64::max(3e-13, 4.0 * k as f64 * 2.2e-16),
        };
        assert!(error <= bar, "k = {k}, a = {a}: {error:e}");
    }
}
