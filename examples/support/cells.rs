//! The cells of a picture, computed column by column on all processors.

use indicatif::{ProgressBar, ProgressStyle};
use merging_saddles::guide::{Passage, level_db};
use std::sync::Mutex;

/// Centres of `count` equal cells.
pub fn centres(from: f64, to: f64, count: u16) -> Vec<f64> {
    let step = (to - from) / f64::from(count);
    (0..count).map(|j| from + step * (f64::from(j) + 0.5)).collect()
}

/// The level of a cell in dB; NaN where there is no value. Where the adiabatic mode has fallen well below the floor on its
/// way out from the boundary, the floor: the field itself, whose integral is dear so far out, falls faster.
pub fn level(passage: &Passage, range: f64, x: f64, floor_db: f64) -> f64 {
    let boundary = passage.profile().width(range);
    let modes = (passage.adiabatic(range, x), passage.adiabatic(range, boundary));
    match modes {
        (Ok(there), Ok(here)) if level_db(there / here) < floor_db - 10.0 => floor_db,
        _ => passage.value(range, x).map_or(f64::NAN, level_db),
    }
}

/// Levels of all cells, one column after the other; NaN where there is no value.
pub fn levels(ranges: &[f64], across: &[f64], cell: impl Fn(f64, f64) -> f64 + Sync) -> Vec<f64> {
    let bar = ProgressBar::new(ranges.len() as u64).with_message("picture");
    if let Ok(style) =
        ProgressStyle::with_template("{msg} [{bar:40}] {pos}/{len} columns, {eta} left")
    {
        bar.set_style(style);
    }
    let mut levels = vec![f64::NAN; ranges.len() * across.len()];
    let columns = Mutex::new(levels.chunks_mut(across.len()).zip(ranges));
    let work = || {
        // A poisoned lock means that another worker panicked; the scope hands its panic on.
        while let Some((column, &range)) = columns.lock().ok().and_then(|mut left| left.next()) {
            for (level, &x) in column.iter_mut().zip(across) {
                *level = cell(range, x);
            }
            bar.inc(1);
        }
    };
    std::thread::scope(|scope| {
        for _ in 0..std::thread::available_parallelism().map_or(1, usize::from) {
            scope.spawn(work);
        }
    });
    bar.finish_and_clear();
    levels
}
