//! The fold integral of a generic entire phase: two saddles that coalesce at a = 0.
//!
//! I(k, a, g) = integral of g(z) exp(k (sinh z - (1 + a) z)) dz from +infinity - i pi to
//! +infinity + i pi; with g = 1 it is 2 pi i J_nu(k), nu = k (1 + a) (DLMF 10.9.17).
//! The error counts against |I|, and for a < 0, where I has zeros, against the largest single
//! contribution if that is larger.

use crate::measured::{Measured, evaluate, quantile};
use crate::reference::ComplexReference;
use crate::table::{Fault, Table};
use merging_saddles::integral::{Amplitude, Phase};
use merging_saddles::{Complex64, Contour, Error, Estimate, Integral};
use std::collections::BTreeSet;
use std::f64::consts::PI;

/// `-i (sinh z - (1 + a) z)`, with `1 + a` never rounded to a double.
struct Fold {
    a: f64,
}

/// `sinh z - z` to full relative accuracy.
fn sinh_less_z(z: Complex64) -> Complex64 {
    if z.norm_sqr() > 1.0 {
        return z.sinh() - z;
    }
    // z^3/3! + z^5/5! + ..: eight terms reach 1e-17 of the first one on the unit circle.
    let square = z * z;
    let series = (1..=8).rev().fold(Complex64::new(0.0, 0.0), |sum, n| {
        let n = f64::from(2 * n);
        (sum + 1.0) * square / (n * (n + 1.0))
    });
    series * z
}

impl Phase for Fold {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        let [f, df, _] = self.jet(z);
        (f, df)
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        let half = (z * 0.5).sinh();
        let down = Complex64::new(0.0, -1.0);
        [down * (sinh_less_z(z) - z * self.a), down * (half * half * 2.0 - self.a), down * z.sinh()]
    }

    fn noise_scale(&self, z: Complex64) -> f64 {
        sinh_less_z(z).norm() + (z * self.a).norm()
    }
}

/// The amplitudes of the table's column `g_id`.
#[derive(Clone, Copy)]
enum Weight {
    One,
    /// cosh(z/3)
    Cosh3,
    /// 1/(9 + z^2), the contour passing to the right of both poles
    Rat9,
}

impl Amplitude for Weight {
    fn value(&self, z: Complex64) -> Complex64 {
        match self {
            Weight::One => Complex64::new(1.0, 0.0),
            Weight::Cosh3 => (z / 3.0).cosh(),
            Weight::Rat9 => (z * z + 9.0).inv(),
        }
    }
}

fn integral(a: f64, weight: Weight) -> Integral<Fold, Weight> {
    let corner = |im: f64| Complex64::new(3.0, im);
    let contour = Contour::through([corner(-PI), Complex64::new(0.0, 0.0), corner(PI)]);
    Integral::new(Fold { a }, contour).amplitude(weight)
}

/// The size of the larger saddle's own contribution, or of both where they have merged.
fn contribution(k: f64, a: f64, weight: Weight) -> f64 {
    if a >= 0.0 {
        return 0.0;
    }
    let saddle = Complex64::new(0.0, (1.0 + a).acos());
    let curvature = saddle.sinh().norm();
    // 2 pi (2/k)^(1/3) Ai(0), from DLMF 10.19.8 at a = 0; Ai(0) from 9.2.3.
    let merged = 2.0 * PI * (2.0 / k).cbrt() * 0.355_028_053_887_817_2;
    (2.0 * PI / (k * curvature)).sqrt().min(merged) * weight.value(saddle).norm()
}

fn error_of(
    result: &Result<Estimate, Error>,
    exact: ComplexReference,
    scale: impl Fn(f64) -> f64,
) -> f64 {
    // A refusal has no correct digit.
    result.as_ref().map_or(f64::INFINITY, |u| exact.distance(u.value) / scale(exact.norm()))
}

/// The field at eight orders and at the order the plan chooses, and how well the error figure
/// covers.
pub fn uniform(table: &Table) -> Result<Measured, Fault> {
    let k = table.map("k", "a finite number above zero", |field| {
        field.parse().ok().filter(|k: &f64| k.is_finite() && *k > 0.0)
    })?;
    let a = table.numbers("a")?;
    let weight = table.map("g_id", "one of one, cosh3, rat9", |field| match field {
        "one" => Some(Weight::One),
        "cosh3" => Some(Weight::Cosh3),
        "rat9" => Some(Weight::Rat9),
        _ => None,
    })?;
    let exact = table.references_in("re", "im")?;
    let rows: Vec<usize> = (0..k.len()).collect();
    let (plans, plan_ns) = evaluate(&rows, |&row| integral(a[row], weight[row]).plan());
    let at_orders = |orders: Option<usize>| {
        evaluate(&rows, |&row| {
            let plan = plans[row].as_ref().map_err(Clone::clone)?;
            match orders {
                Some(orders) => plan.at_orders(k[row], orders),
                None => plan.at(k[row]),
            }
        })
    };
    let (eight, ns) = at_orders(Some(8));
    let (chosen, chosen_ns) = at_orders(None);
    let scale = |row: usize| {
        let single = contribution(k[row], a[row], weight[row]);
        move |norm: f64| norm.max(single)
    };
    let mut measured = Measured::new(ns);
    for (name, results) in [("orders_8", &eight), ("orders_chosen", &chosen)] {
        let errors: Vec<f64> =
            rows.iter().map(|&row| error_of(&results[row], exact[row], scale(row))).collect();
        measured = measured.quantity(name, errors.iter().copied());
        // The error falls with k: each decade on its own as well.
        for decade in k.iter().map(|k| k.log10().floor() as i32).collect::<BTreeSet<_>>() {
            let within = rows.iter().filter(|&&row| k[row].log10().floor() as i32 == decade);
            let name = format!("{name}_k_from_1e{decade}");
            measured = measured.quantity(name, within.map(|&row| errors[row]));
        }
        measured = measured.note(coverage(name, results, &exact));
    }
    Ok(measured
        .note(format!("orders_chosen ns_per_row={chosen_ns:.1}"))
        .note(format!("plan ns_per_row={plan_ns:.1}")))
}

/// How many error figures are at least the true error, and how much larger they are.
fn coverage(name: &str, results: &[Result<Estimate, Error>], exact: &[ComplexReference]) -> String {
    let answered: Vec<(f64, f64)> = results
        .iter()
        .zip(exact)
        .filter_map(|(result, exact)| {
            result.as_ref().ok().map(|u| (u.error, exact.distance(u.value)))
        })
        .collect();
    let covered = answered.iter().filter(|(figure, error)| figure >= error).count();
    let mut ratios: Vec<f64> = answered
        .iter()
        .filter(|(_, error)| *error > 0.0)
        .map(|(figure, error)| figure / error)
        .collect();
    ratios.sort_by(f64::total_cmp);
    let median = if ratios.is_empty() { 1.0 } else { quantile(&ratios, 0.5) };
    format!(
        "{name} figure_covers={:.4} figure_over_error_median={median:.1} refused={}",
        covered as f64 / answered.len().max(1) as f64,
        results.len() - answered.len()
    )
}
