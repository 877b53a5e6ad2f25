//! What is measured of a table: errors per quantity and the time of one evaluation.

use std::fmt::Write;
use std::hint::black_box;
use std::time::{Duration, Instant};

/// The result of one table.
pub struct Measured {
    quantities: Vec<(String, Vec<f64>)>,
    notes: Vec<String>,
    ns_per_row: f64,
}

impl Measured {
    pub fn new(ns_per_row: f64) -> Self {
        Measured { quantities: Vec::new(), notes: Vec::new(), ns_per_row }
    }

    /// Adds the errors of one quantity, one per row.
    pub fn quantity(mut self, name: impl Into<String>, errors: impl Iterator<Item = f64>) -> Self {
        // A NaN is as wrong as can be and must not vanish in a comparison.
        let errors = errors.map(|e| if e.is_nan() { f64::INFINITY } else { e }).collect();
        self.quantities.push((name.into(), errors));
        self
    }

    /// Adds the errors of a function and its derivative.
    pub fn pair(self, names: [&str; 2], errors: impl Iterator<Item = [f64; 2]>) -> Self {
        let (f, df): (Vec<f64>, Vec<f64>) = errors.map(|[f, df]| (f, df)).unzip();
        self.quantity(names[0], f.into_iter()).quantity(names[1], df.into_iter())
    }

    /// Adds a line that is printed as it stands after the table's name.
    pub fn note(mut self, note: String) -> Self {
        self.notes.push(note);
        self
    }

    /// The lines to print.
    pub fn report(&self, name: &str) -> String {
        let mut text = String::new();
        for (quantity, errors) in &self.quantities {
            let mut sorted = errors.clone();
            sorted.sort_by(f64::total_cmp);
            let (max, p99, median) =
                (quantile(&sorted, 1.0), quantile(&sorted, 0.99), quantile(&sorted, 0.5));
            let rows = sorted.len();
            // Writing to a String cannot fail.
            let _ = writeln!(
                text,
                "{name} {quantity} rows={rows} max={max:.2e} p99={p99:.2e} median={median:.2e}"
            );
        }
        for note in &self.notes {
            let _ = writeln!(text, "{name} {note}");
        }
        let _ = writeln!(text, "{name} ns_per_row={:.1}", self.ns_per_row);
        text
    }
}

/// The smallest value that at least the given fraction of the values do not exceed.
pub fn quantile(sorted: &[f64], fraction: f64) -> f64 {
    let rank = (fraction * sorted.len() as f64).ceil() as usize;
    sorted[rank.clamp(1, sorted.len()) - 1]
}

/// The values of all rows and the nanoseconds per row of the best pass.
pub fn evaluate<I, O>(rows: &[I], function: impl Fn(&I) -> O) -> (Vec<O>, f64) {
    const MOST_PASSES: usize = 200;
    const LEAST_PASSES: usize = 3;
    const ENOUGH: Duration = Duration::from_millis(500);
    let values = rows.iter().map(&function).collect();
    let mut best = Duration::MAX;
    let mut spent = Duration::ZERO;
    for pass in 0..MOST_PASSES {
        if pass >= LEAST_PASSES && spent > ENOUGH {
            break;
        }
        let start = Instant::now();
        for row in rows {
            black_box(function(black_box(row)));
        }
        let took = start.elapsed();
        best = best.min(took);
        spent += took;
    }
    (values, best.as_nanos() as f64 / rows.len() as f64)
}
