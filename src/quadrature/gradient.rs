//! The gradient of an integral by quadrature: each derivative's own integrand on its own flowed contour.

use crate::estimate::FieldGradient;
use crate::integral::{Amplitude, Gradient, Integral, ParameterDerivatives, Phase};
use crate::{Error, Estimate, Form};
use num_complex::Complex64;

/// A phase that is borrowed.
struct Borrowed<'a, P>(&'a P);

impl<P: Phase> Phase for Borrowed<'_, P> {
    fn value_and_derivative(&self, z: Complex64) -> (Complex64, Complex64) {
        self.0.value_and_derivative(z)
    }

    fn value(&self, z: Complex64) -> Complex64 {
        self.0.value(z)
    }

    fn jet(&self, z: Complex64) -> [Complex64; 3] {
        self.0.jet(z)
    }

    fn noise_scale(&self, z: Complex64) -> f64 {
        self.0.noise_scale(z)
    }
}

impl<const N: usize, P, A, F, G> Gradient<'_, N, P, A, F, G>
where
    P: Phase,
    A: Amplitude,
    F: ParameterDerivatives<N>,
    G: ParameterDerivatives<N>,
{
    /// The integral and its derivatives by [`Integral::quadrature`], each to the relative `tolerance`: the
    /// yardstick of [`GradientPlan::at`](crate::field::GradientPlan::at). A derivative that vanishes comes
    /// with an error figure above its value.
    ///
    /// Cost: `N + 1` quadratures.
    ///
    /// # Errors
    /// As [`Integral::quadrature`], and as [`Gradient::plan`] for moving ends.
    ///
    /// ```
    /// use merging_saddles::{Complex64 as C, Contour, Integral};
    /// // I(a) = integral of exp(-k (z^2 + a z)) dz = sqrt(pi/k) e^(k a^2/4) (Gauss; DLMF 7.7.3), so that
    /// // dI/da = (k a/2) I.
    /// let (a, k) = (0.5, 3.0);
    /// let i = C::new(0.0, 1.0);
    /// let integral = Integral::new(
    ///     |z: C| ((z * z + z * a) * i, (z * 2.0 + a) * i),
    ///     Contour::through([C::new(-3.0, 0.0), C::new(3.0, 0.0)]),
    /// );
    /// let u = integral.gradient(|z: C| [z * i]).quadrature(k, 1e-13)?;
    /// assert!((u.gradient[0].value / u.value.value - 0.5 * k * a).norm() < 1e-13);
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn quadrature(&self, k: f64, tolerance: f64) -> Result<FieldGradient<N>, Error> {
        let integral = self.integral();
        let value = integral.quadrature(k, tolerance)?;
        let ends = self.moving_ends()?;
        let [start, end] = integral.powers();
        let mut gradient = [value; N];
        for (j, slot) in gradient.iter_mut().enumerate() {
            let amplitude = |z: Complex64| self.integrand(j, k, z);
            let along = Integral::new(Borrowed(integral.phase()), integral.contour().clone())
                .amplitude(amplitude)
                .power_at_start(start)
                .power_at_end(end);
            *slot = along.quadrature(k, tolerance)?;
            for end in &ends {
                let (value, error) = end.at(j, k);
                *slot = *slot + Estimate::new(value, error, 0, Form::Quadrature { evaluations: 1 });
            }
        }
        Ok(FieldGradient { value, gradient })
    }
}
