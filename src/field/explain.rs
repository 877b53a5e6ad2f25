//! A plan in words.

use super::plan::{Node, Plan};
use num_complex::Complex64;
use std::fmt::Write;

const NAMES: [&str; 6] = ["end point", "single saddle", "fold", "cusp", "swallowtail", "butterfly"];

impl Plan {
    /// A short text for a person: the saddles, how they are grouped, which groups the contour needs and
    /// between which of their valleys, the poles and the end points.
    ///
    /// ```
    /// use merging_saddles::{Complex64, Contour, Integral};
    /// let plan = Integral::new(
    ///     |z: Complex64| (z * z * z / 3.0 - z, z * z - 1.0),
    ///     Contour::through([Complex64::new(-3.0, 2.0), Complex64::new(3.0, 2.0)]),
    /// )
    /// .plan()?;
    /// let text = plan.explain();
    /// assert!(text.contains("2 saddles") && text.contains("fold"));
    /// # Ok::<(), merging_saddles::Error>(())
    /// ```
    pub fn explain(&self) -> String {
        let mut text = String::new();
        self.write(&mut text).expect("writing to a string does not fail");
        text
    }

    fn write(&self, text: &mut String) -> std::fmt::Result {
        writeln!(text, "{} saddles near the contour (f' = 0):", self.saddles.len())?;
        for (index, place) in self.saddles.iter().enumerate() {
            let height = place.exponent.re;
            let turned = place.exponent * Complex64::new(0.0, -1.0);
            writeln!(
                text,
                "  {index}: z = {:.6}, f = {:.6}, Re(i f) = {height:.6}",
                place.z, turned
            )?;
        }
        writeln!(text, "groups, each with what the contour makes of it:")?;
        for node in &self.nodes {
            self.write_group(text, node)?;
        }
        for pole in &self.poles {
            match pole.crossings {
                0 => writeln!(text, "pole at {:.6}: no residue; split off near a group", pole.z)?,
                n => writeln!(text, "pole at {:.6}: its residue counts {n:+} times", pole.z)?,
            }
        }
        for end in &self.ends {
            let role = if end.sign > 0.0 { "start" } else { "end" };
            let own =
                if end.own.is_some() { "a series of its own" } else { "no series of its own" };
            let near = end.near.len();
            writeln!(
                text,
                "finite {role} at {:.6}: {own}, inside the rings of {near} groups",
                end.at
            )?;
        }
        writeln!(
            text,
            "where a group and its parts are both known, the smaller error figure decides at each k;"
        )?;
        writeln!(text, "nothing with Re(i f) below {:.4} was looked at", self.floor)
    }

    fn write_group(&self, text: &mut String, node: &Node) -> std::fmt::Result {
        let members: Vec<usize> =
            (0..self.saddles.len()).filter(|n| node.members >> n & 1 == 1).collect();
        let name = NAMES.get(members.len()).copied().unwrap_or("group");
        write!(text, "  {name} of {members:?}: ")?;
        let Some(series) = &node.series else {
            return writeln!(
                text,
                "{}",
                if node.settled {
                    "too high or too low to matter"
                } else {
                    "no expansion that can be trusted"
                }
            );
        };
        if !series.contributes() {
            return writeln!(text, "does not contribute");
        }
        let degree = series.form().degree();
        let m = series.multiplicities();
        let mut parts = Vec::new();
        for v in 0..degree {
            let weight = m[(v + degree - 1) % degree] - m[v];
            if weight != 0 {
                parts.push(format!("{weight:+} valley {v}"));
            }
        }
        writeln!(text, "contributes, {} (of {degree} valleys)", parts.join(", "))
    }
}
