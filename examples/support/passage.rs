//! What the programs that follow one mode through its cut-off have in common: a table along the guide and the picture.

use crate::cells::{centres, level, levels};
use crate::output;
use crate::picture::Picture;
use crate::table::Fault;
use merging_saddles::Error;
use merging_saddles::guide::{Passage, Profile, level_db};
use std::f64::consts::PI;
use std::path::Path;

/// The quietest level of the picture.
const FLOOR_DB: f64 = -40.0;

pub fn fault(error: Error) -> Fault {
    Fault(error.to_string())
}

/// A half width that falls from one value to another along a raised cosine: no kink at either end.
pub fn raised_cosine(from: f64, to: f64, length: f64) -> Result<Profile, Error> {
    Profile::from_fn(0.0, length, move |s| {
        let (angle, half) = (PI * s / length, 0.5 * (from - to));
        (to + half * (1.0 + angle.cos()), -half * angle.sin() * PI / length)
    })
}

/// Rows round the cut-off: range over `unit`, energy inside, level at the boundary, and how well the formula holds.
pub fn print_rows(passage: &Passage, unit: f64) -> Result<(), Error> {
    for j in -3..=5 {
        let range = passage.cutoff_range() + 0.6 * passage.layer_range() * f64::from(j);
        if range < passage.fitted_from() || range > passage.profile().ranges()[1] {
            continue;
        }
        let wall = passage.field(range, passage.profile().width(range))?;
        println!(
            "{:11.1} {:11.4} % {:19.2} {:17.0e}",
            range / unit,
            100.0 * passage.energy_inside(range)?,
            level_db(wall.value),
            passage.departure(range)?
        );
    }
    Ok(())
}

/// What a picture of a passage says, and in which unit of length.
pub struct Words {
    pub title: String,
    pub subtitle: String,
    pub axes: [&'static str; 2],
    pub boundary: &'static str,
    pub cutoff: &'static str,
    pub unit: f64,
    /// Unit of ranges in the name of the cut-off.
    pub range_unit: &'static str,
}

/// Draws the field, with the beam's axis from where it leaves the boundary: a line of the given start and slope.
pub fn draw(
    passage: &Passage,
    [start, out]: [f64; 2],
    slope: f64,
    [columns, rows]: [u16; 2],
    words: Words,
    file: &Path,
) -> Result<(), Fault> {
    let [first, last] = passage.profile().ranges();
    let (cut, length) = (passage.cutoff_range(), passage.layer_range());
    let (from, to) = (first.max(cut - 5.0 * length), last.min(cut + 7.0 * length));
    let axis = |s: f64| out + slope * (s - start);
    let width = |s: f64| passage.profile().width(s);
    let leaves = meeting(&axis, &width, [cut.max(from), start.max(cut) + length]);
    let top = (1.5 * axis(to)).max(3.0 * passage.cutoff_width());
    let (ranges, across) = (centres(from, to, columns), centres(0.0, top, rows));
    let level_db = levels(&ranges, &across, |s, x| level(passage, s, x, FLOOR_DB));
    let unit = words.unit;
    let scaled = |points: Vec<(f64, f64)>| -> Vec<(f64, f64)> {
        points.into_iter().map(|(s, x)| (s / unit, x / unit)).collect()
    };
    let line = |first: f64, x: &dyn Fn(f64) -> f64| -> Vec<(f64, f64)> {
        let ranges = (0..=100).map(|j| first + (to - first) * f64::from(j) / 100.0);
        scaled(ranges.map(|s| (s, x(s))).collect())
    };
    let cutoff = cut / unit;
    let picture = Picture {
        title: words.title,
        subtitle: words.subtitle,
        axes: words.axes,
        bed: line(from, &width),
        bed_name: words.boundary,
        model_bed: scaled(passage.fitted_profile()),
        beam: line(leaves, &axis),
        cutoff: (cutoff, passage.cutoff_width() / unit),
        cutoff_name: format!("{}, {cutoff:.0}{}", words.cutoff, words.range_unit),
        downwards: false,
        range: ranges.iter().map(|s| s / unit).collect(),
        across: across.iter().map(|x| x / unit).collect(),
        level_db,
        floor_db: FLOOR_DB,
    };
    let svg = picture.svg().map_err(|error| Fault(format!("the picture: {error}")))?;
    output::write_whole(file, &svg)?;
    println!("\npicture: {}", file.display());
    Ok(())
}

/// Where a line meets the boundary, between two ranges; the second if it does not.
pub fn meeting(
    line: &dyn Fn(f64) -> f64,
    boundary: &dyn Fn(f64) -> f64,
    [mut before, mut after]: [f64; 2],
) -> f64 {
    let outside = |s: f64| line(s) > boundary(s);
    if outside(before) || !outside(after) {
        return after;
    }
    for _ in 0..60 {
        let middle = 0.5 * (before + after);
        if outside(middle) { after = middle } else { before = middle }
    }
    after
}
