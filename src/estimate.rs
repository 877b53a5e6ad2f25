//! What every evaluation of an integral returns.

use crate::Scaled;
use crate::scaled::ldexp;
use num_complex::Complex64;
use std::ops::{Add, Neg, Sub};

/// How a value was obtained.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Form {
    /// Asymptotic contributions of clusters of saddle points (and of finite end points).
    Saddles {
        /// Clusters that contribute.
        clusters: usize,
        /// Saddles in the largest of them.
        largest: usize,
    },
    /// Finite end points alone; no saddle contributes.
    EndPoints,
    /// Quadrature along the contour, flowed downhill.
    Quadrature {
        /// Evaluations of the integrand.
        evaluations: usize,
    },
    /// A sum of values of which some come from expansions and some from quadrature.
    Mixed,
}

impl Form {
    /// Of a sum.
    fn and(self, other: Form) -> Form {
        match (self, other) {
            (
                Form::Saddles { clusters: a, largest: m },
                Form::Saddles { clusters: b, largest: n },
            ) => Form::Saddles { clusters: a + b, largest: m.max(n) },
            (saddles @ Form::Saddles { .. }, Form::EndPoints)
            | (Form::EndPoints, saddles @ Form::Saddles { .. }) => saddles,
            (Form::EndPoints, Form::EndPoints) => Form::EndPoints,
            (Form::Quadrature { evaluations: a }, Form::Quadrature { evaluations: b }) => {
                Form::Quadrature { evaluations: a + b }
            }
            _ => Form::Mixed,
        }
    }
}

/// A value with its error figure.
///
/// `value` and `error` go to infinity or zero where they leave the range of `f64`;
/// `scaled` and `relative_error` do not.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The value.
    pub value: Complex64,
    /// A bound that the absolute error is expected to stay below.
    pub error: f64,
    /// The value with its exponent apart.
    pub scaled: Scaled,
    /// `error / |value|`, also where both leave the range of `f64`; infinite at a zero.
    pub relative_error: f64,
    /// Orders of the expansion that were kept (the largest of all clusters); 0 for quadrature.
    pub orders: usize,
    /// How it was obtained.
    pub form: Form,
}

impl Estimate {
    /// From a scaled value and an error that carries its own exponent (its mantissa real).
    pub(crate) fn new(scaled: Scaled, error: Scaled, orders: usize, form: Form) -> Self {
        let relative_error = if error.is_zero() {
            0.0
        } else if scaled.is_zero() {
            f64::INFINITY
        } else {
            (error.ln_norm() - scaled.ln_norm()).exp()
        };
        Estimate {
            value: scaled.to_complex(),
            error: error.to_complex().re,
            scaled,
            relative_error,
            orders,
            form,
        }
    }

    /// The error with its exponent apart.
    fn scaled_error(&self) -> Scaled {
        if self.scaled.is_zero() {
            return Scaled::from(Complex64::new(self.error, 0.0));
        }
        let size = self.scaled.mantissa.norm() * self.relative_error;
        Scaled::new(Complex64::new(size, 0.0), self.scaled.exponent)
    }
}

/// The value of an integral and its derivatives in `N` parameters, each with its error figure. Given by
/// [`GradientPlan::at`](crate::GradientPlan::at) and
/// [`Gradient::quadrature`](crate::Gradient::quadrature).
///
/// ```
/// use merging_saddles::{Complex64 as C, Contour, Integral};
/// use std::f64::consts::PI;
/// // u(a) = integral of exp(i k (z^2 + a z)) dz = (pi i/k)^(1/2) exp(-i k a^2/4) (Gauss; DLMF 7.7.3): the local
/// // wavenumber in a is -k a/2 and the flux that times |u|^2 = pi/k.
/// let (a, k) = (0.5, 300.0);
/// let integral = Integral::new(
///     |z: C| (z * z + z * a, z * 2.0 + a),
///     Contour::through([C::new(-2.0, -2.0), C::new(2.0, 2.0)]),
/// );
/// let u = integral.gradient(|z: C| [z]).plan()?.at(k)?;
/// assert!((u.local_wave_vector()[0] + 0.5 * k * a).abs() < 1e-10);
/// assert!((u.flux()[0] + 0.5 * PI * a).abs() < 1e-12);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FieldGradient<const N: usize> {
    /// `u`, the integral.
    pub value: Estimate,
    /// `du/dx_j`.
    pub gradient: [Estimate; N],
}

impl<const N: usize> FieldGradient<N> {
    /// `Im(conj(u) du/dx_j)`: with places as parameters the flux of a scalar wave, up to the constant
    /// of its equation. Off by `|u| e_j + |du/dx_j| e` at most, `e` and `e_j` the error figures.
    pub fn flux(&self) -> [f64; N] {
        let along = self.value.scaled.conj();
        self.gradient.map(|slope| (along * slope.scaled).to_complex().im)
    }

    /// `Im((du/dx_j)/u)`: the derivatives of the phase of `u`. With places as parameters this is the local
    /// wave vector, and its direction that of the beam, also where the flux underflows; NaN at a zero of
    /// `u`.
    pub fn local_wave_vector(&self) -> [f64; N] {
        let u = self.value.scaled;
        let over = |slope: &Estimate| {
            let ratio = slope.scaled.mantissa / u.mantissa;
            ldexp(ratio.im, slope.scaled.exponent.saturating_sub(u.exponent))
        };
        std::array::from_fn(|j| over(&self.gradient[j]))
    }
}

/// An integral over a contour of several pieces is the sum of the integrals over the pieces: the
/// values are added, and so are the error figures.
///
/// ```
/// use merging_saddles::{Complex64 as C, Contour, Integral};
/// use std::f64::consts::PI;
/// // Bi(0) = 3^(-1/6)/Gamma(2/3) = 0.61492662744600073515 (DLMF 9.2.5) from Airy's integral over
/// // two pieces, Bi(z) = (1/2 pi) (from inf e^(-i pi/3) to -inf, plus from inf e^(i pi/3) to -inf) of
/// // exp(t^3/3 - z t) dt (DLMF 9.5.5).
/// let piece = |angle: f64| {
///     let points = [C::from_polar(2.0, angle), C::new(0.0, 0.0), C::new(-2.0, 0.0)];
///     Integral::new(|t: C| (t * t * t * C::new(0.0, -1.0 / 3.0), t * t * C::new(0.0, -1.0)),
///         Contour::through(points)).quadrature(1.0, 1e-13)
/// };
/// let bi = piece(-PI / 3.0)? + piece(PI / 3.0)?;
/// assert!((bi.value / (2.0 * PI) + 0.614926627446000735).norm() < 1e-14);
/// # Ok::<(), merging_saddles::Error>(())
/// ```
impl Add for Estimate {
    type Output = Estimate;
    fn add(self, other: Estimate) -> Estimate {
        Estimate::new(
            self.scaled + other.scaled,
            self.scaled_error() + other.scaled_error(),
            self.orders.max(other.orders),
            self.form.and(other.form),
        )
    }
}

impl Neg for Estimate {
    type Output = Estimate;
    fn neg(self) -> Estimate {
        Estimate { value: -self.value, scaled: -self.scaled, ..self }
    }
}

impl Sub for Estimate {
    type Output = Estimate;
    fn sub(self, other: Estimate) -> Estimate {
        self + -other
    }
}
