//! The field of a tapered guide by plain Gauss-Legendre panels on a path of its own.

use merging_saddles::guide::UniformField;
use merging_saddles::{Complex64 as C, Phase};

const I: C = C::new(0.0, 1.0);

/// Up the imaginary axis to the bound mode's saddle `i omega` (0 beyond cut-off), where the
/// integrand keeps its size, from there into the left valley; on the right along the real axis, just above
/// it and up to `0.98` of the Brewster parameter where there is one.
pub fn panels(field: &UniformField, omega: f64, brewster: bool) -> C {
    let from = I * omega;
    let left = [
        C::new(0.0, 0.0),
        from,
        from + C::new(-0.35, 0.3),
        C::new(-0.45, 1.571),
        C::new(-3.0, 2.356),
    ];
    let (lift, end) = if brewster { (0.001, 0.98 * (1.0f64 / 1.4).atanh()) } else { (0.0, 3.0) };
    let right = [C::new(0.0, 0.0), C::new(0.05, lift), C::new(end, lift)];
    leg(field, &right) - leg(field, &left)
}

fn leg(field: &UniformField, path: &[C]) -> C {
    const PANELS: u32 = 250;
    let rule = gauss();
    let (k, integral) = (field.wavenumber(), field.integral());
    let mut sum = C::new(0.0, 0.0);
    for ends in path.windows(2) {
        let step = (ends[1] - ends[0]) / f64::from(PANELS);
        for j in 0..PANELS {
            for (x, weight) in &rule {
                let w = ends[0] + step * (f64::from(j) + 0.5 * (1.0 + x));
                let factor = (I * k * integral.phase().value(w)).exp();
                if factor.norm() > 1e-40 {
                    sum += integral.amplitude_at(w) * factor * step * (0.5 * weight);
                }
            }
        }
    }
    sum * field.prefactor()
}

/// Nodes and weights of the 8-point rule, by Newton iteration on the Legendre polynomial
/// (recurrence DLMF 18.9.1, weights DLMF 3.5.22 with 3.5.24).
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
