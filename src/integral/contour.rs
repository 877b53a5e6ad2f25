//! Contours: a path of points, closed or with ends that are finite or run on downhill to infinity.

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
    /// The contour comes back to where it began: no end at all.
    Closed,
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

    /// Round through the points and back to the first: a closed contour, counterclockwise if the
    /// points are given so. The integrand has to come back to its value, too.
    pub fn closed(points: impl IntoIterator<Item = Complex64>) -> Self {
        let mut points: Vec<Complex64> = points.into_iter().collect();
        points.extend(points.first().copied());
        Contour::new(points, Termination::Closed, Termination::Closed)
    }

    pub(crate) fn new(
        points: impl IntoIterator<Item = Complex64>,
        start: Termination,
        end: Termination,
    ) -> Self {
        let mut points: Vec<Complex64> = points.into_iter().collect();
        points.dedup();
        Contour { points, start, end }
    }

    /// The points, without repeated neighbours; a closed contour ends with its first point.
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

    /// Whether it comes back to where it began.
    pub fn is_closed(&self) -> bool {
        self.start == Termination::Closed
    }

    /// Refuses fewer than two points (closed: three) and coordinates that are not finite.
    pub(crate) fn check(&self) -> Result<(), Error> {
        if let Some(&z) = self.points.iter().find(|z| !z.re.is_finite() || !z.im.is_finite()) {
            return Err(Error::Domain {
                what: "contour point",
                value: z,
                remedy: "give finite points; an end at infinity is written as a point in its \
                         valley from which the contour runs on downhill",
            });
        }
        if self.is_closed() && self.points.len() < 4 {
            return Err(Error::domain(
                "number of distinct points of a closed contour",
                self.points.len().saturating_sub(1) as f64,
                "give three or more",
            ));
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
