//! The cut-off layer: U counts against max(|U|, |U_y| / (1 + |t|)), U_y against that times
//! (1 + |t|).

use crate::measured::{Measured, evaluate};
use crate::table::{Fault, Table};
use merging_saddles::guide::layer::{bound, free};

/// Both transition functions and their derivatives across the boundary; the time is that of both.
pub fn cutoff(table: &Table) -> Result<Measured, Fault> {
    let points: Vec<_> = table.complex_inputs("t")?.into_iter().zip(table.numbers("y")?).collect();
    let exact = [
        [table.complex_references("ub")?, table.complex_references("ub_y")?],
        [table.complex_references("uf")?, table.complex_references("uf_y")?],
    ];
    let (values, ns) = evaluate(&points, |&(t, y)| [bound(t, y), free(t, y)]);
    let pair = |which: usize| {
        let (exact, points) = (&exact[which], &points);
        values.iter().enumerate().map(move |(row, computed)| {
            let [u, u_y] = [exact[0][row], exact[1][row]];
            let size = 1.0 + points[row].0.norm();
            let scale = u.norm().max(u_y.norm() / size);
            // A refusal has no correct digit.
            computed[which].as_ref().map_or([f64::INFINITY; 2], |computed| {
                [u.distance(computed.u) / scale, u_y.distance(computed.u_y) / (scale * size)]
            })
        })
    };
    Ok(Measured::new(ns).pair(["ub", "ub_y"], pair(0)).pair(["uf", "uf_y"], pair(1)))
}
