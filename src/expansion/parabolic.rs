//! `F_mu(zeta) = integral_0^inf s^(mu - 1) exp(-s^2/2 - zeta s) ds`, `mu = lambda` and `lambda + 1`.
//!
//! It is `Gamma(mu) exp(zeta^2/4) U(mu - 1/2, zeta)`, the parabolic cylinder function (DLMF 12.5.1),
//! here for every complex `zeta`, as long as it is not beyond the range where the saddle `s = -zeta` is
//! better treated apart. With no quadratic term the same path gives `Gamma(mu)` (DLMF 5.2.1).
//!
//! Method. From 0 along a ray (`Re zeta >= 0` or small) or to the saddle and on; on the first piece
//! the exponential's Taylor series is integrated term by term against the power, which is exact at
//! the singular end; then 20-point Gauss-Legendre panels as long as the exponent and the distance
//! from 0 allow.

use super::incomplete::RULE;
use crate::ring::ZERO;
use num_complex::Complex64;

/// Beyond this modulus of `zeta^2` nothing is computed.
const FARTHEST: f64 = 500.0;
/// What is this many nepers below the peak does not count.
const FLOOR: f64 = 42.0;
/// Panels of one leg at most.
const PANELS: usize = 400;
/// Change of the exponent over one panel.
const BUDGET: f64 = 10.0;

/// `F_lambda` and `F_(lambda+1)`; None too far out.
pub(super) fn parabolic(lambda: f64, zeta: Complex64) -> Option<[Complex64; 2]> {
    if !(zeta.norm_sqr() <= FARTHEST && lambda > 0.0) {
        return None;
    }
    let mut integral = Integrand { lambda, linear: zeta, quadratic: 1.0, peak: f64::NEG_INFINITY };
    if zeta.re >= 0.0 || zeta.norm() < 2.0 {
        // Away from the real axis by at most 0.6: exp(-s^2/2) must fall off.
        let angle = if zeta.re >= 0.0 { -zeta.arg().clamp(-0.6, 0.6) } else { 0.0 };
        let (sum, _) = integral.ray(ZERO, Complex64::from_polar(1.0, angle), f64::INFINITY)?;
        return Some(sum);
    }
    let (first, arrived) = integral.ray(ZERO, -zeta / zeta.norm(), zeta.norm())?;
    if !arrived {
        return Some(first);
    }
    let (second, _) = integral.ray(-zeta, Complex64::new(1.0, 0.0), f64::INFINITY)?;
    Some([first[0] + second[0], first[1] + second[1]])
}

/// `Gamma(lambda)`.
pub(super) fn gamma(lambda: f64) -> Option<f64> {
    let one = Complex64::new(1.0, 0.0);
    let mut integral = Integrand { lambda, linear: one, quadratic: 0.0, peak: f64::NEG_INFINITY };
    let (sum, _) = integral.ray(ZERO, one, f64::INFINITY)?;
    Some(sum[0].re)
}

struct Integrand {
    lambda: f64,
    linear: Complex64,
    quadratic: f64,
    /// The largest logarithm of the modulus met.
    peak: f64,
}

impl Integrand {
    fn exponent(&self, s: Complex64) -> Complex64 {
        -(self.linear + s * (0.5 * self.quadratic)) * s
    }

    /// From a point along a direction over a length; whether the end was reached before the integrand
    /// was negligible. None if neither happens.
    fn ray(
        &mut self,
        from: Complex64,
        direction: Complex64,
        length: f64,
    ) -> Option<([Complex64; 2], bool)> {
        let mut sum = [ZERO; 2];
        let mut done = 0.0;
        if from == ZERO {
            let q = self.quadratic;
            // |linear| a + q a^2/2 = 1.
            let b = self.linear.norm();
            let a = (2.0 / (b + (b * b + 2.0 * q).sqrt())).min(length);
            sum = self.first(direction * a);
            done = a;
        }
        for _ in 0..PANELS {
            if done >= length {
                return Some((sum, true));
            }
            let start = from + direction * done;
            let slope = (self.linear + start * self.quadratic).norm();
            let by_exponent = if self.quadratic > 0.0 {
                2.0 * BUDGET / (slope + (slope * slope + 2.0 * BUDGET * self.quadratic).sqrt())
            } else {
                BUDGET / slope
            };
            let step = by_exponent.min(2.0 * start.norm()).min(length - done);
            let half = direction * (0.5 * step);
            let mut highest = f64::NEG_INFINITY;
            for (node, weight) in RULE {
                for s in [start + half * (1.0 - node), start + half * (1.0 + node)] {
                    let ln = s.ln() * (self.lambda - 1.0) + self.exponent(s);
                    highest = highest.max(ln.re + step.ln());
                    let term = ln.exp() * half * weight;
                    sum[0] += term;
                    sum[1] += term * s;
                }
            }
            done += step;
            self.peak = self.peak.max(highest);
            // Falling for good: the exponent does, and it outweighs the power.
            let end = from + direction * done;
            let fall = ((self.linear + end * self.quadratic) * direction).re;
            if highest < self.peak - FLOOR && fall * end.norm() > 2.0 * self.lambda.max(1.0) {
                return Some((sum, false));
            }
        }
        None
    }

    /// From 0 to `a`: `exp` as a Taylor series in `s`.
    fn first(&mut self, a: Complex64) -> [Complex64; 2] {
        let (mut last, mut c) = (ZERO, Complex64::new(1.0, 0.0));
        let mut sum = [ZERO; 2];
        for n in 0..40 {
            sum[0] += c / (self.lambda + n as f64);
            sum[1] += c / (self.lambda + (n + 1) as f64);
            // n c_n = -linear c_(n-1) - quadratic c_(n-2), each times a power of a.
            let next = -(self.linear * a * c + a * a * last * self.quadratic) / (n + 1) as f64;
            (last, c) = (c, next);
        }
        let power = (a.ln() * self.lambda).exp();
        self.peak = self.peak.max((power.norm() / self.lambda).ln());
        [sum[0] * power, sum[1] * power * a]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn gamma_and_parabolic_cylinder_values() {
        // Gamma(1/3), Gamma(1/2), Gamma(5), Gamma(30.5) (mpmath, 20 digits; DLMF 5.4 for the second).
        let third = 1.0 / 3.0;
        for (x, exact) in [
            (third, 2.678_938_534_707_747_6),
            (0.5, std::f64::consts::PI.sqrt()),
            (5.0, 24.0),
            (30.5, 4.822_696_933_490_909e31),
        ] {
            let got = gamma(x).expect("a value");
            assert!((got - exact).abs() < 4e-15 * exact, "{x}: {got:e} {exact:e}");
        }
        for [lambda, re, im, a, b, c, d] in TABLE {
            let got = parabolic(lambda, Complex64::new(re, im)).expect("a value");
            for (got, (x, y)) in got.into_iter().zip([(a, b), (c, d)]) {
                let exact = Complex64::new(x, y);
                let error = (got - exact).norm() / exact.norm();
                assert!(error < 3e-13, "{lambda} {re} {im}: {error:e}");
            }
        }
    }

    /// `lambda`, `zeta`, `F_lambda`, `F_(lambda+1)` from `Gamma(mu) exp(zeta^2/4) U(mu - 1/2, zeta)` (mpmath, 40 digits).
    #[rustfmt::skip]
    #[allow(clippy::approx_constant)]
    const TABLE: [[f64; 7]; 33] = [
        [0.3333333333333333, 0.0, 0.0, 3.1239892304477412, 0.0, 1.0747641207672394, 0.0],
        [0.3333333333333333, 0.5, 0.0, 2.692197003057732, 0.0, 0.6927688913779385, 0.0],
        [0.3333333333333333, 3.0, 4.0, 1.4993583075871382, -0.4642962750040534, 0.04077608775263168, -0.09737093481419516],
        [0.3333333333333333, -1.0, -0.5, 4.515633215114274, 1.5942056950336072, 2.4585980005702033, 2.214596196463857],
        [0.3333333333333333, -5.0, 0.25, 79742.93617682363, -213888.11402151533, 331920.43264026946, -1059295.251136294],
        [0.3333333333333333, -6.0, 7.0, 0.9235280052845743, -0.8822241378093791, -0.0470980173463307, 0.00395426780615157],
        [0.3333333333333333, 0.0, 10.0, 1.0793034524196419, -0.6231361387917727, -0.0210589476758771, -0.03647516732855366],
        [0.3333333333333333, 12.0, 0.0, 1.1683521785468673, 0.0, 0.032161084852691466, 0.0],
        [0.3333333333333333, -8.0, -8.5, 0.8414562164249108, 0.8201986555524979, 0.02746231407016821, -0.06760676548623402],
        [0.3333333333333333, -2.0, 15.0, 0.9138432229894431, -0.5832220878576153, -0.015511001757546813, -0.018334864690307057],
        [0.3333333333333333, 0.1, -14.0, 0.9650359558758375, 0.5540832323153079, -0.01311566001354601, 0.023231356993433313],
        [0.5, 0.0, 0.0, 2.155800549540928, 0.0, 1.0304485122949956, 0.0],
        [0.5, 0.5, 0.0, 1.7489447053589575, 0.0, 0.6400391193540316, 0.0],
        [0.5, 3.0, 4.0, 0.7163756945460219, -0.3449617901522735, 0.02023395615601899, -0.07765966700168507],
        [0.5, -1.0, -0.5, 3.5037983229049603, 1.6400415708667098, 2.4584614361820942, 2.4077350268382793],
        [0.5, -5.0, 0.25, 100884.96887839011, -278449.3419057201, 422277.3747521685, -1388325.0080581037],
        [0.5, -6.0, 7.0, 0.24080096270297582, -0.5308847658096191, -0.030086710374908062, 0.0208086116453035],
        [0.5, 0.0, 10.0, 0.3978529193531929, -0.3978529193531929, -0.02020377775559591, -0.02020377775559591],
        [0.5, 12.0, 0.0, 0.5103505820548997, 0.0, 0.021049003965588682, 0.0],
        [0.5, -8.0, -8.5, 0.20501916243107662, 0.4650168329371751, 0.08451566863473642, -0.09769697093386928],
        [0.5, -2.0, 15.0, 0.300465862350528, -0.3434894072313308, -0.01265722264132301, -0.008371882962522148],
        [0.5, 0.1, -14.0, 0.33681185183580525, 0.33439598087142586, -0.011947440341808536, 0.01220967928623622],
        [2.25, 0.0, 0.0, 1.0269776963671562, 0.0, 1.3827065604856164, 0.0],
        [2.25, 0.5, 0.0, 0.5513800254104966, 0.0, 0.6329992156161856, 0.0],
        [2.25, 3.0, 4.0, -0.0111457831161775, -0.028830403144299445, -0.012869402719099962, -0.005515028579228149],
        [2.25, -1.0, -0.5, 2.79027705829875, 3.7603235774994612, 4.000148621957999, 7.816950702428316],
        [2.25, -5.0, 0.25, 1258115.5346721779, -4748780.088670823, 5471332.366365868, -25215505.359589063],
        [2.25, -6.0, 7.0, 0.040725933202633784, 0.05454039636703603, 0.5565529723256079, 0.030969292964536207],
        [2.25, 0.0, 10.0, -0.006114584685592039, 0.00253274390505105, 0.0005899448066580366, 0.0014242527532854056],
        [2.25, 12.0, 0.0, 0.00412401640881165, 0.0, 0.0007566493848007558, 0.0],
        [2.25, -8.0, -8.5, 0.8723590121052284, -0.08812169300755583, 7.734106818939119, 6.647808060237229],
        [2.25, -2.0, 15.0, -0.0019566145263004075, 0.0016322476380531115, 0.0002839643123201334, 0.00025880031147610907],
        [2.25, 0.1, -14.0, -0.002832485095177743, -0.0011193623328806827, 0.00017956671630172907, -0.00046440195437534283],
    ];
}
