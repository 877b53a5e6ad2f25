//! Saddles followed through a parameter, each keeping its label.
//!
//! Method. From one parameter value to the next each saddle is foreseen by the line through its last
//! two places and refined, all together, by Ehrlich and Aberth's correction to Newton's method, which
//! keeps two points from settling on one saddle. The step is halved until no saddle moves by more than
//! 0.4 of its distance from the next one, so that none can be mistaken for another. Two saddles that
//! meet exactly have no labels of their own beyond that point; there the function stops with an error.
//!
//! Source: O. Aberth, Math. Comp. 27 (1973) 339; continuation by prediction and correction, textbook.

use super::Saddle;
use crate::Error;
use crate::integral::Phase;
use num_complex::Complex64;

/// Halvings of one step of the parameter.
const HALVINGS: u32 = 24;

/// A phase as a family in one real parameter: `family(x)` is the phase at `x`.
///
/// `start` are the saddles at `parameters[0]` (from [`locate`](super::locate), say). Returns one list for
/// each parameter, in the order of `start`.
///
/// # Errors
/// [`Error::NoConvergence`] where saddles can't be followed: one leaves through a singularity of the
/// phase, or the parameters step over more than some `2^24` times the scale on which saddles move.
///
/// ```
/// use merging_saddles::{Complex64, saddles::{Region, follow, locate}};
/// // f = z^3/3 - x z: saddles at +-sqrt x (elementary), followed past each other's distance.
/// let family = |x: f64| move |z: Complex64| (z * z * z / 3.0 - z * x, z * z - x);
/// let region = Region { low: Complex64::new(-3.1, -1.0), high: Complex64::new(3.0, 1.1) };
/// let start = locate(&family(4.0), region)?;
/// let paths = follow(family, &[4.0, 1.0, 0.25], &start)?;
/// for (path, saddle) in paths[2].iter().zip(&start) {
///     assert!((path.z - saddle.z * 0.25).norm() < 1e-12); // +-0.5 from +-2
/// }
/// # Ok::<(), merging_saddles::Error>(())
/// ```
pub fn follow<P: Phase>(
    family: impl Fn(f64) -> P,
    parameters: &[f64],
    start: &[Saddle],
) -> Result<Vec<Vec<Saddle>>, Error> {
    let Some(&first) = parameters.first() else { return Ok(Vec::new()) };
    let mut here: Vec<Complex64> = start.iter().map(|s| s.z).collect();
    let mut velocity = vec![Complex64::new(0.0, 0.0); here.len()];
    let mut at = first;
    let mut lists = vec![start.to_vec()];
    for &goal in &parameters[1..] {
        Error::require_finite("parameter", goal)?;
        let mut halvings = 0;
        let mut step = goal - at;
        while at != goal {
            if (goal - at).abs() <= step.abs() {
                step = goal - at;
            }
            let next = if step == goal - at { goal } else { at + step };
            let forecast: Vec<Complex64> =
                here.iter().zip(&velocity).map(|(z, v)| z + v * (next - at)).collect();
            match refine(&family(next), &forecast, &here) {
                Some(found) => {
                    let change = next - at;
                    for ((v, new), old) in velocity.iter_mut().zip(&found).zip(&here) {
                        *v = (new - old) / change;
                    }
                    here = found;
                    at = next;
                    halvings = halvings.max(1) - 1;
                    step *= 2.0;
                }
                None if halvings < HALVINGS => {
                    halvings += 1;
                    step *= 0.5;
                }
                None => {
                    return Err(Error::NoConvergence {
                        what: "following the saddles through the parameter",
                        limit: HALVINGS as usize,
                        remedy: "stop before a saddle reaches a singularity or meets another \
                                 exactly; merged saddles need no labels in a plan",
                    });
                }
            }
        }
        let phase = family(goal);
        lists.push(here.iter().map(|&z| Saddle { z, value: phase.value(z) }).collect());
    }
    Ok(lists)
}

/// Zeros of `f'` near the forecasts; None if one does not settle or might be another.
fn refine(
    phase: &dyn Phase,
    forecast: &[Complex64],
    before: &[Complex64],
) -> Option<Vec<Complex64>> {
    let mut z = forecast.to_vec();
    // Forecasts that coincide would repel each other without end.
    for j in 0..z.len() {
        if z[..j].contains(&z[j]) {
            z[j] = before[j];
        }
    }
    let mut settled = false;
    for _ in 0..40 {
        let mut largest = 0.0f64;
        for j in 0..z.len() {
            let [_, d, dd] = phase.jet(z[j]);
            if d.norm() == 0.0 {
                continue;
            }
            let newton = d / dd;
            let others = (0..z.len()).filter(|&other| z[other] != z[j]);
            let repulsion: Complex64 = others.map(|other| (z[j] - z[other]).inv()).sum();
            let change = newton / (1.0 - newton * repulsion);
            if !(change.re.is_finite() && change.im.is_finite()) {
                return None;
            }
            z[j] -= change;
            largest = largest.max(change.norm() / (1.0 + z[j].norm()));
        }
        if largest < 1e-13 {
            settled = true;
            break;
        }
    }
    // No saddle may move by more than part of its distance from the next: then none was mistaken.
    let unmistaken = (0..z.len()).all(|j| {
        (0..z.len()).all(|other| {
            other == j || (z[j] - before[j]).norm() < 0.4 * (before[j] - before[other]).norm()
        })
    });
    (settled && unmistaken).then_some(z)
}
