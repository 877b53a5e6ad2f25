//! An integral together with its derivatives in parameters of phase, amplitude and ends.

use super::{Amplitude, Integral, Phase, Termination};
use crate::{Error, Scaled};
use num_complex::Complex64;

/// Derivatives of a phase or an amplitude in `N` parameters at fixed `z`. Every closure
/// `Fn(Complex64) -> [Complex64; N]` is one.
pub trait ParameterDerivatives<const N: usize> {
    /// All of them at `z`.
    fn at(&self, z: Complex64) -> [Complex64; N];

    /// Whether any of them may differ from zero.
    fn vary(&self) -> bool {
        true
    }
}

impl<const N: usize, F: Fn(Complex64) -> [Complex64; N]> ParameterDerivatives<N> for F {
    fn at(&self, z: Complex64) -> [Complex64; N] {
        self(z)
    }
}

/// The derivatives of an amplitude that depends on no parameter.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Fixed;

impl<const N: usize> ParameterDerivatives<N> for Fixed {
    fn at(&self, _: Complex64) -> [Complex64; N] {
        [Complex64::new(0.0, 0.0); N]
    }

    fn vary(&self) -> bool {
        false
    }
}

/// An integral with what its derivatives in `N` parameters need, made by [`Integral::gradient`]. It is
/// planned or integrated like the integral itself.
#[derive(Clone, Debug)]
pub struct Gradient<'a, const N: usize, P, A, F, G = Fixed> {
    integral: &'a Integral<P, A>,
    phase: F,
    amplitude: G,
    /// `dz/dx_j` of the contour's start and end.
    ends: [[Complex64; N]; 2],
}

impl<P: Phase, A: Amplitude> Integral<P, A> {
    /// The integral with its derivatives in parameters `x_1 .. x_N` of the phase, given by a closure that
    /// returns all `df/dx_j` at fixed `z` as an array: with
    /// `I(k; x) = integral of g(z; x) exp(i k f(z; x)) dz`,
    ///
    /// `dI/dx_j = integral of (i k (df/dx_j) g + dg/dx_j) exp(i k f) dz`.
    ///
    /// Where the amplitude depends on them too, add [`Gradient::amplitude`]; where an end of the contour
    /// moves with them, [`Gradient::moving_start`] or [`Gradient::moving_end`]. Then
    /// [`Gradient::plan`] gives a plan whose values bring their gradient along, and
    /// [`Gradient::quadrature`] the same by quadrature.
    ///
    /// A pole of the amplitude that moves with `x_j` gives `dg/dx_j` a double pole in the same place: write
    /// that into the amplitude's derivatives; it is measured where [`Integral::pole`] named it. (A double
    /// pole that moves would be of order three, which is refused.)
    ///
    /// The closures take the variable of the integral. For an integral with a branch point that is the
    /// root `w`: the derivatives are those at fixed `w` of `f(z_b + w^2, w)`, and of the amplitude with its
    /// factor `2 w` ([`Integral::over_root`]: `2`).
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral, special::airy::airy_real};
    /// use std::f64::consts::PI;
    /// // I(x) = integral of exp(i k (t^3/3 + x t)) dt = 2 pi k^(-1/3) Ai(k^(2/3) x) (DLMF 9.5.4), so that
    /// // dI/dx = 2 pi k^(1/3) Ai'(k^(2/3) x). At x = 0 Ai' = -0.258819403792806798 (DLMF 9.2.4).
    /// let x = 0.0;
    /// let integral = Integral::new(
    ///     move |t: C| (t * t * t / 3.0 + t * x, t * t + x),
    ///     Contour::through([C::from_polar(2.0, PI * 5.0 / 6.0), C::from_polar(2.0, PI / 6.0)]),
    /// );
    /// let plan = integral.gradient(|t: C| [t]).plan()?; // df/dx = t
    /// let u = plan.at(1000.0)?;
    /// assert!((u.gradient[0].value.re / (20.0 * PI) + 0.258819403792806798).abs() < 1e-12);
    /// let check = integral.gradient(|t: C| [t]).quadrature(1000.0, 1e-12)?;
    /// assert!((u.gradient[0].value - check.gradient[0].value).norm() < 1e-10);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn gradient<const N: usize, F>(&self, phase: F) -> Gradient<'_, N, P, A, F>
    where
        F: Fn(Complex64) -> [Complex64; N],
    {
        let ends = [[Complex64::new(0.0, 0.0); N]; 2];
        Gradient { integral: self, phase, amplitude: Fixed, ends }
    }
}

impl<'a, const N: usize, P, A, F> Gradient<'a, N, P, A, F> {
    /// Adds the amplitude's own derivatives `dg/dx_j` at fixed `z`. A parameter of the amplitude alone has
    /// zero as its derivative of the phase.
    pub fn amplitude<G>(self, amplitude: G) -> Gradient<'a, N, P, A, F, G>
    where
        G: Fn(Complex64) -> [Complex64; N],
    {
        Gradient { integral: self.integral, phase: self.phase, amplitude, ends: self.ends }
    }
}

impl<const N: usize, P, A, F, G> Gradient<'_, N, P, A, F, G> {
    /// The contour's finite start moves with the parameters: its `dz_0/dx_j`. Adds
    /// `-g(z_0) exp(i k f(z_0)) dz_0/dx_j`.
    ///
    /// An end with a power ([`Integral::power_at_start`]) may not move: take `z - z_0` as the variable, so
    /// that the parameter goes into phase and amplitude.
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// // I(a) = integral_a^inf exp(-k z^2) dz, dI/da = -exp(-k a^2) (DLMF 7.2.2).
    /// let a = 0.3f64;
    /// let integral = Integral::new(
    ///     |z: C| (z * z * C::new(0.0, 1.0), z * C::new(0.0, 2.0)),
    ///     Contour::starting_at([C::new(a, 0.0), C::new(4.0, 0.0)]),
    /// );
    /// let zero = C::new(0.0, 0.0); // f and g do not depend on a
    /// let gradient = integral.gradient(|_| [zero]).moving_start([C::new(1.0, 0.0)]);
    /// let slope = gradient.plan()?.at(20.0)?.gradient[0];
    /// assert!((slope.value.re + (-20.0 * a * a).exp()).abs() < 1e-15);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn moving_start(mut self, velocity: [Complex64; N]) -> Self {
        self.ends[0] = velocity;
        self
    }

    /// The same for the contour's finite end `z_1`. Adds `g(z_1) exp(i k f(z_1)) dz_1/dx_j`.
    pub fn moving_end(mut self, velocity: [Complex64; N]) -> Self {
        self.ends[1] = velocity;
        self
    }
}

impl<'a, const N: usize, P, A, F, G> Gradient<'a, N, P, A, F, G>
where
    P: Phase,
    A: Amplitude,
    F: ParameterDerivatives<N>,
    G: ParameterDerivatives<N>,
{
    /// The integral.
    pub fn integral(&self) -> &'a Integral<P, A> {
        self.integral
    }

    /// How many amplitudes the derivatives are integrals of.
    pub(crate) fn amplitudes(&self) -> usize {
        if self.amplitude.vary() { 2 * N } else { N }
    }

    /// `(df/dx_j) g`, followed by `dg/dx_j`.
    pub(crate) fn fill(&self, z: Complex64, values: &mut [Complex64]) {
        let g = self.integral.amplitude_at(z);
        let (first, second) = values.split_at_mut(N);
        for (value, slope) in first.iter_mut().zip(self.phase.at(z)) {
            *value = slope * g;
        }
        if !second.is_empty() {
            second.copy_from_slice(&self.amplitude.at(z));
        }
    }

    /// `i k (df/dx_j) g + dg/dx_j`.
    pub(crate) fn integrand(&self, j: usize, k: f64, z: Complex64) -> Complex64 {
        let first = self.phase.at(z)[j] * self.integral.amplitude_at(z) * Complex64::new(0.0, k);
        if self.amplitude.vary() { first + self.amplitude.at(z)[j] } else { first }
    }

    /// Refuses derivatives that are not finite on the contour.
    pub(crate) fn check(&self) -> Result<(), Error> {
        let finite = |list: &[Complex64; N]| list.iter().all(|c| c.norm_sqr().is_finite());
        let points = self.integral.contour().points();
        if let Some(&at) = points.iter().find(|&&z| !finite(&self.phase.at(z))) {
            return Err(Error::NotFinite { what: "phase's derivative in a parameter", at });
        }
        // At its ends the amplitude may be singular.
        let inner = points.iter().skip(1).take(points.len().saturating_sub(2));
        if let Some(&at) = inner.into_iter().find(|&&z| !finite(&self.amplitude.at(z))) {
            return Err(Error::NotFinite { what: "amplitude's derivative in a parameter", at });
        }
        Ok(())
    }

    /// The ends that move.
    ///
    /// # Errors
    /// If such an end is not finite or has a power, or a velocity is not finite.
    pub(crate) fn moving_ends(&self) -> Result<Vec<MovingEnd<N>>, Error> {
        let contour = self.integral.contour();
        let points = contour.points();
        let ends = [(points.first(), contour.start(), -1.0), (points.last(), contour.end(), 1.0)];
        let mut list = Vec::new();
        for ((at, termination, sign), velocity) in ends.into_iter().zip(&self.ends) {
            let Some(&at) = at else { continue };
            if velocity.iter().all(|v| v.norm_sqr() == 0.0) {
                continue;
            }
            if let Some(&value) = velocity.iter().find(|v| !v.norm_sqr().is_finite()) {
                let remedy = "give finite numbers";
                return Err(Error::Domain { what: "velocity of an end", value, remedy });
            }
            if termination != Termination::Finite {
                let remedy = "only a finite end can move: elsewhere the derivatives of phase and \
                              amplitude are all";
                return Err(Error::Domain {
                    what: "moving end that is not finite",
                    value: at,
                    remedy,
                });
            }
            if self.integral.powers() != [1.0; 2] {
                return Err(Error::Unsupported {
                    what: format!("a moving end at {at} of a contour with an algebraic end"),
                    remedy: "take the distance from the end as the variable, so that the parameter goes \
                             into phase and amplitude",
                });
            }
            let g = self.integral.amplitude_at(at);
            let phase = self.integral.phase();
            list.push(MovingEnd {
                exponent: Complex64::new(0.0, 1.0) * phase.value(at),
                noise_scale: phase.noise_scale(at),
                weights: velocity.map(|v| v * g * sign),
            });
        }
        Ok(list)
    }
}

/// The boundary term of an end that moves.
#[derive(Clone, Copy, Debug)]
pub(crate) struct MovingEnd<const N: usize> {
    exponent: Complex64,
    noise_scale: f64,
    /// `g dz/dx_j` with the sign of the end.
    weights: [Complex64; N],
}

impl<const N: usize> MovingEnd<N> {
    /// The term of one parameter at wavenumber `k`, and its rounding error.
    pub fn at(&self, j: usize, k: f64) -> (Scaled, Scaled) {
        let value = Scaled::exp(self.exponent * k) * self.weights[j];
        (value, value.norm() * (4.0 * f64::EPSILON * (1.0 + k * self.noise_scale)))
    }
}
