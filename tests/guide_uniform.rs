//! The uniform field: its integral against an independent quadrature, and its limits.

use merging_saddles::Complex64 as C;
use merging_saddles::guide::{Order, SlopingGuide, UniformField};
use merging_saddles::{Phase, Contour};

const I: C = C::new(0.0, 1.0);

#[path = "support/panels.rs"]
mod panels;
use panels::panels;
#[test]
fn look() {
    for m in [1.0, 0.55, 1.5] {
        for eps in [0.02] {
            let guide = SlopingGuide::new(1, m, eps).unwrap().order(Order::Next).tolerance(1.0);
            for t in [-3.0, -1.0, 0.0, 1.0, 3.0] {
                let h = guide.cutoff_width() - t * (m * m * eps as f64).cbrt();
                if h < 0.1 { continue }
                let omega = if t < 0.0 { guide.adiabatic(h).unwrap().gamma.re.asin() } else { 0.0 };
                for field in [guide.inside(h, 0.7 * h), guide.outside(h, 0.0), guide.outside(h, 5.0)] {
                    let field = field.unwrap();
                    let a = panels(&field, omega, m > 1.0);
                    let mut line = format!("m {m} eps {eps} t {t}: {a:.6}");
                    let g = if m < 1.0 { (0.5 * (m as f64).atanh()).min(0.5) } else { 0.5 };
                    for c in [
                        Contour::through([C::new(-1.5, 2.356), C::new(-g, 1.57), C::new(0.0, 0.0), C::new(1.5, 0.785)]),
                        Contour::through([C::new(-g, 1.57), C::new(0.0, 0.0), C::new(0.7, 0.3)]),
                        Contour::starting_at([C::new(-g, 1.57), C::new(0.0, 0.0), C::new(0.7, 0.3)]),
                        Contour::between([C::new(-g, 1.57), C::new(-0.2,0.6), C::new(0.7, 0.3)]),
                    ] {
                    match field.quadrature_along(c.clone()) {
                        Ok(b) => line += &format!(" | Q {:.1e} {:.1e} {:?}", (a - b.value).norm(), b.error, b.form),
                        Err(e) => line += &format!(" | Q {:.40}", format!("{e}")),
                    }
                    match field.evaluate_along(c) {
                        Ok(b) => line += &format!(" | {:.1e} {:.1e}", (a - b.value).norm(), b.error),
                        Err(e) => line += &format!(" | {:.70}", format!("{e}")),
                    }
                    }
                    println!("{line}");
                }
            }
        }
    }
}
