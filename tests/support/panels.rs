//! Plain panels of Gauss-Legendre along a path that suits the field of a tapered guide.

use merging_saddles::guide::UniformField;
use merging_saddles::{Complex64 as C, Phase};

const I: C = C::new(0.0, 1.0);

/// Gauss-Legendre panels along a path on which the integrand is nowhere larger than at the
/// saddles: up the imaginary axis to the bound mode's saddle `i omega` (0 beyond cut-off), from
/// there into the left valley; on the right along the real axis.
pub fn panels(field: &UniformField, omega: f64, brewster: bool) -> C {
    let from = I * omega;
    let left = [C::new(0.0, 0.0), from, from + C::new(-0.35, 0.3), C::new(-0.45, 1.571), C::new(-3.0, 2.356)];
    let lift = if brewster { 0.02 } else { 0.0 };
    let right = [C::new(0.0, 0.0), C::new(0.05, lift), C::new(3.0, lift)];
    leg(field, &right) - leg(field, &left)
}

fn leg(field: &UniformField, path: &[C]) -> C {
    // Nodes and weights of the 8-point rule (DLMF 3.5.28 by Newton iteration below).
    let rule = gauss();
    let k = field.wavenumber();
    let integral = field.integral();
    let mut sum = C::new(0.0, 0.0);
    for ends in path.windows(2) {
        let n = 400;
        let step = (ends[1] - ends[0]) / f64::from(n);
        for j in 0..n {
            for (x, weight) in &rule {
                let w = ends[0] + step * (f64::from(j) + 0.5 * (1.0 + x));
                let e = (I * k * integral.phase().value(w)).exp();
                if e.norm() > 1e-40 { sum += integral.amplitude_at(w) * e * step * (0.5 * weight); }
            }
        }
    }
    sum * field.prefactor()
}

fn gauss() -> Vec<(f64, f64)> {
    (1..=8)
        .map(|i| {
            let mut x = (std::f64::consts::PI * (f64::from(i) - 0.25) / 8.5).cos();
            let mut slope = 1.0;
            for _ in 0..10 {
                let (mut a, mut b) = (1.0, x);
                for n in 1..8 {
                    let n = f64::from(n);
                    (a, b) = (b, ((2.0 * n + 1.0) * x * b - n * a) / (n + 1.0));
                }
                slope = 8.0 * (a - x * b) / (1.0 - x * x);
                x -= b / slope;
            }
            (x, 2.0 / ((1.0 - x * x) * slope * slope))
        })
        .collect()
}

