//! A saddle far from all others: one straight line through it in the plane of r, trapezoidal rule.
//!
//! With `r = r_hub (1 + e)` the integrand is `(1 + e)^(-1/2) e^(H - H_hub) de`, H without its q/2 a cubic in e and
//! `1/(1 + e)` (see `landscape`). On the line of steepest descent the exponent is `-x^2` and small other terms, on
//! which the trapezoidal rule converges like `e^-(pi/step)^2`.

use super::super::panels::exponentials;
use super::landscape::Hub;
use super::panel::Moments;
use num_complex::Complex64;

/// The part of the distance from r = 0 that the rule may take.
const WIDEST: f64 = 0.3;
/// The other terms together where `x` is 9 (all rules) and 6 (the shorter ones).
const LONG: f64 = 48.0;
const SHORT: f64 = 9.0;
const SHORTEST: f64 = 1.0;

/// The terms beyond the second where that one is `far^2`.
fn others(hub: &Hub, far: f64) -> f64 {
    let [first, second, third] = hub.cubic;
    let reach = far / second.norm().sqrt();
    if reach > WIDEST {
        return f64::INFINITY;
    }
    let rest = third.norm() + hub.terms[3].norm() / (1.0 - reach);
    reach * (first.norm() + reach * reach * rest)
}

/// Whether the rule holds.
pub(super) fn is_lone(hub: &Hub) -> bool {
    others(hub, 9.0) < LONG
}

/// Moments along the line in the direction (of q) that makes an acute angle with `along`.
pub(super) fn moments(hub: &Hub, along: Complex64) -> Moments {
    match others(hub, 6.0) {
        x if x < SHORTEST => rule::<28>(hub, along, 0.48),
        x if x < SHORT => rule::<40>(hub, along, 0.38),
        _ => rule::<64>(hub, along, 0.29),
    }
}

fn rule<const N: usize>(hub: &Hub, along: Complex64, step: f64) -> Moments {
    let [first, second, third] = hub.cubic;
    let inner = hub.terms[3];
    let mut scale = (-second).sqrt().inv();
    if (scale * along.conj()).re < 0.0 {
        scale = -scale;
    }
    let (mut re, mut im) = ([0.0; N], [0.0; N]);
    let mut offsets = [Complex64::ZERO; N];
    for k in 0..N {
        let e = scale * (step * (k as f64 - 0.5 * (N - 1) as f64));
        let ratio = e + 1.0;
        let over = inner * ratio.conj() * (1.0 / ratio.norm_sqr());
        let exponent = e * (first + e * (second + e * (third - over)));
        (re[k], im[k], offsets[k]) = (exponent.re, exponent.im, e);
    }
    exponentials(&mut re, &mut im);
    let mut sums = [Complex64::ZERO; 4];
    for k in 0..N {
        let e = offsets[k];
        let ratio = e + 1.0;
        // 1/sqrt(ratio), Re ratio > 0.
        let size = ratio.norm_sqr().sqrt();
        let root = (0.5 * (size + ratio.re)).sqrt();
        let inverse_root = Complex64::new(root, -0.5 * ratio.im / root) * (1.0 / size);
        let value = Complex64::new(re[k], im[k]) * inverse_root;
        let next = value * e;
        sums[0] += value;
        sums[1] += next;
        sums[2] += next * e;
        sums[3] += next * ratio.conj() * (1.0 / (size * size));
    }
    sums.map(|sum| sum * scale * step)
}
