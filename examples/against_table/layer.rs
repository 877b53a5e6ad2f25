//! The cut-off layer: U counts against max(|U|, |U_y| / (1 + |t|)), U_y against that times
//! (1 + |t|).

use crate::measured::{Measured, evaluate};
use crate::table::{Fault, Table};
use merging_saddles::guide::layer::{bound, free};

/// Both transition functions and their derivatives across the boundary.
pub fn cutoff(table: &Table) -> Result<Measured, Fault> {
    let points: Vec<_> = table.complex_inputs("t")?.into_iter().zip(table.numbers("y")?).collect();
    let exact = [
        [table.complex_references("ub")?, table.complex_references("ub_y")?],
        [table.complex_references("uf")?, table.complex_references("uf_y")?],
    ];
    let (values, ns) = evaluate(&points, |&(t, y)| [bound(t, y), free(t, y)]);
    let mut measured = Measured::new(ns);
    for (which, names) in [["ub", "ub_y"], ["uf", "uf_y"]].into_iter().enumerate() {
        let errors: Vec<[f64; 2]> = (0..points.len())
            .map(|row| {
                let [u, u_y] = [0, 1].map(|part| exact[which][part][row]);
                let size = 1.0 + points[row].0.norm();
                let scale = u.norm().max(u_y.norm() / size);
                // A refusal has no correct digit.
                values[row][which].as_ref().map_or([f64::INFINITY; 2], |computed| {
                    [u.distance(computed.u) / scale, u_y.distance(computed.u_y) / (scale * size)]
                })
            })
            .collect();
        measured = measured
            .quantity(names[0], errors.iter().map(|e| e[0]))
            .quantity(names[1], errors.iter().map(|e| e[1]));
    }
    Ok(measured)
}
