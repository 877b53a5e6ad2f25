//! Contours: a path of points whose ends are finite or run on downhill to infinity.

use crate::Error;
use num_complex::Complex64;

/// What happens at one end of a contour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Termination {
    /// From the last point the contour runs on to infinity, down the steepest descent of
    /// `|exp(i k f)|`.
    Downhill,
    /// The contour ends at the point: a finite end point.
    Finite,
}

/// A path of straight pieces in the complex plane.
///
/// Only its homotopy class matters: the points say round which side of a singularity it passes
/// and in which valleys it ends, not where the integrand is sampled.
#[derive(Clone, Debug, PartialEq)]
pub struct Contour {
    points: Vec<Complex64>,
    start: Termination,
    end: Termination,
}

impl Contour {
    /// From infinity, through the points in their order, to infinity. At the first and the last
    /// point the path should already be in its valley: it runs on by steepest descent.
    pub fn through(points: impl IntoIterator<Item = Complex64>) -> Self {
        Contour::new(points, Termination::Downhill, Termination::Downhill)
    }

    /// From the first point to the last, both finite end points.
    pub fn between(points: impl IntoIterator<Item = Complex64>) -> Self {
        Contour::new(points, Termination::Finite, Termination::Finite)
    }

    /// From the first point, a finite end point, through the others to infinity.
    pub fn starting_at(points: impl IntoIterator<Item = Complex64>) -> Self {
        Contour::new(points, Termination::Finite, Termination::Downhill)
    }

    /// From infinity through the points to the last, a finite end point.
    pub fn ending_at(points: impl IntoIterator<Item = Complex64>) -> Self {
        Contour::new(points, Termination::Downhill, Termination::Finite)
    }

    fn new(
        points: impl IntoIterator<Item = Complex64>,
        start: Termination,
        end: Termination,
    ) -> Self {
        let mut points: Vec<Complex64> = points.into_iter().collect();
        points.dedup();
        Contour { points, start, end }
    }

    /// The points, without repeated neighbours.
    pub fn points(&self) -> &[Complex64] {
        &self.points
    }

    /// What happens before the first point.
    pub fn start(&self) -> Termination {
        self.start
    }

    /// What happens after the last point.
    pub fn end(&self) -> Termination {
        self.end
    }

    /// Refuses fewer than two points and coordinates that are not finite.
    pub(crate) fn check(&self) -> Result<(), Error> {
        if let Some(&z) = self.points.iter().find(|z| !z.re.is_finite() || !z.im.is_finite()) {
            return Err(Error::Domain {
                what: "contour point",
                value: z,
                remedy: "give finite points; an end at infinity is written as a point in its \
                         valley from which the contour runs on downhill",
            });
        }
        if self.points.len() < 2 {
            return Err(Error::domain(
                "number of distinct contour points",
                self.points.len() as f64,
                "give two or more",
            ));
        }
        Ok(())
    }
}
