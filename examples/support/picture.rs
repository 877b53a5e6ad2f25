//! The picture: level over range and position across, with the boundary, the cut-off and the beam.

use crate::colours::colour;
use plotters::coord::Shift;
use plotters::element::DashedPathElement;
use plotters::prelude::*;
use std::error::Error;

/// What is drawn; levels in dB.
pub struct Picture {
    pub title: String,
    pub subtitle: String,
    /// Centres of the cells, equally spaced.
    pub range: Vec<f64>,
    pub across: Vec<f64>,
    /// Level of each cell, one column of depths after the other; NaN where there is none.
    pub level_db: Vec<f64>,
    /// Quietest level of the scale; the loudest is 0.
    pub floor_db: f64,
    /// Names of the axes with their units.
    pub axes: [&'static str; 2],
    /// The boundary of the guide, and its name.
    pub bed: Vec<(f64, f64)>,
    pub bed_name: &'static str,
    /// The fit of it that the field is computed with.
    pub model_bed: Vec<(f64, f64)>,
    /// The beam's axis.
    pub beam: Vec<(f64, f64)>,
    /// Cut-off.
    pub cutoff: (f64, f64),
    /// How that is written.
    pub cutoff_name: String,
    /// Whether positions are counted downwards.
    pub downwards: bool,
}

type Area<'a> = DrawingArea<SVGBackend<'a>, Shift>;

const SIZE: (u32, u32) = (1180, 720);
const BAR_WIDTH: i32 = 150;
const INK: RGBColor = RGBColor(25, 25, 35);
const MARK: RGBColor = RGBColor(200, 40, 30);
const MODEL: RGBColor = RGBColor(245, 180, 60);
/// Cells without a value.
const GAP: RGBColor = RGBColor(150, 150, 150);
/// Levels are drawn in steps, so that neighbours of one column can be joined.
const STEP_DB: f64 = 1.0;

impl Picture {
    /// The picture as the text of an SVG file.
    pub fn svg(&self) -> Result<String, Box<dyn Error>> {
        let mut text = String::new();
        {
            let root = SVGBackend::with_string(&mut text, SIZE).into_drawing_area();
            root.fill(&WHITE)?;
            root.draw(&Text::new(self.title.clone(), (70, 14), font(22)))?;
            root.draw(&Text::new(self.subtitle.clone(), (70, 44), font(15)))?;
            let (_, below) = root.split_vertically(64);
            let (map, bar) = below.split_horizontally(SIZE.0 as i32 - BAR_WIDTH);
            self.draw_map(&map)?;
            self.draw_bar(&bar)?;
            root.present()?;
        }
        Ok(text)
    }

    fn draw_map(&self, area: &Area) -> Result<(), Box<dyn Error>> {
        let (half_range, half_depth) = (spacing(&self.range) / 2.0, spacing(&self.across) / 2.0);
        let ranges = self.range[0] - half_range..last(&self.range) + half_range;
        let bottom = last(&self.across) + half_depth;
        let mut chart = ChartBuilder::on(area)
            .margin(12)
            .x_label_area_size(52)
            .y_label_area_size(64)
            .build_cartesian_2d(
                ranges.clone(),
                if self.downwards { bottom..0.0 } else { 0.0..bottom },
            )?;
        chart.draw_series(self.cells(half_range, half_depth))?;
        chart
            .configure_mesh()
            .disable_mesh()
            .x_desc(self.axes[0])
            .y_desc(self.axes[1])
            .x_label_formatter(&|range| whole(*range))
            .y_label_formatter(&|depth| whole(*depth))
            .label_style(font(15))
            .axis_desc_style(font(16))
            .axis_style(INK)
            .draw()?;

        // A pale edge keeps the lines visible on every colour; the model's bed lies inside the
        // profile's where they agree.
        let lines = [
            (&self.bed, INK, 5u32, 2, 0, self.bed_name),
            (&self.model_bed, MODEL, 2, 0, 7, "fit round the cut-off"),
            (&self.beam, MARK, 2, 2, 9, "axis of the beam"),
        ];
        for (points, ink, width, edge, dash, name) in lines {
            let points: Vec<(f64, f64)> = points
                .iter()
                .copied()
                .filter(|(r, d)| ranges.contains(r) && (0.0..=bottom).contains(d))
                .collect();
            let halo = WHITE.stroke_width(width + edge);
            if edge > 0 {
                chart.draw_series([dashed(points.clone(), 0, halo)])?;
            }
            chart.draw_series([dashed(points, dash, ink.stroke_width(width))])?.label(name).legend(
                move |(x, y)| dashed(vec![(x, y), (x + 26, y)], dash, ink.stroke_width(width)),
            );
        }
        let (range, depth) = self.cutoff;
        let mark = MARK.stroke_width(1);
        chart.draw_series([PathElement::new([(range, 0.0), (range, bottom)], mark)])?;
        chart
            .draw_series([Circle::new((range, depth), 5, MARK.filled())])?
            .label(self.cutoff_name.clone())
            .legend(|(x, y)| Circle::new((x + 13, y), 5, MARK.filled()));
        chart
            .configure_series_labels()
            .position(if self.downwards {
                SeriesLabelPosition::LowerLeft
            } else {
                SeriesLabelPosition::UpperLeft
            })
            .background_style(WHITE.mix(0.9))
            .border_style(INK)
            .label_font(font(15))
            .margin(10)
            .draw()?;
        Ok(())
    }

    /// The cells, equal neighbours of a column joined; each reaches a little into the next, which
    /// is painted over it, so that no seam shows.
    fn cells(&self, half_range: f64, half_depth: f64) -> Vec<Rectangle<(f64, f64)>> {
        let rows = self.across.len();
        let mut cells = Vec::new();
        for (column, &range) in self.level_db.chunks(rows).zip(&self.range) {
            // No step where there is no value.
            let step = |row: usize| {
                let level = column[row];
                (!level.is_nan()).then(|| (level.clamp(self.floor_db, 0.0) / STEP_DB).round())
            };
            let mut first = 0;
            for row in 1..=rows {
                if row < rows && step(row) == step(first) {
                    continue;
                }
                let ink =
                    step(first).map_or(GAP, |step| colour(1.0 - step * STEP_DB / self.floor_db));
                let top = (range - half_range, self.across[first] - half_depth);
                let end = (
                    (range + 1.5 * half_range).min(last(&self.range) + half_range),
                    (self.across[row - 1] + 1.5 * half_depth).min(last(&self.across) + half_depth),
                );
                cells.push(Rectangle::new([top, end], ink.filled()));
                first = row;
            }
        }
        cells
    }

    fn draw_bar(&self, area: &Area) -> Result<(), Box<dyn Error>> {
        let mut chart = ChartBuilder::on(area)
            .margin(12)
            .margin_bottom(12 + 52)
            .margin_right(36)
            .y_label_area_size(72)
            .build_cartesian_2d(0.0..1.0, self.floor_db..0.0)?;
        let steps = (-self.floor_db / STEP_DB).round() as usize;
        chart.draw_series((0..steps).map(|step| {
            let top = -(step as f64) * STEP_DB;
            let ink = colour(1.0 - (top - STEP_DB / 2.0) / self.floor_db);
            let end = (top - 1.5 * STEP_DB).max(self.floor_db);
            Rectangle::new([(0.0, top), (1.0, end)], ink.filled())
        }))?;
        chart
            .configure_mesh()
            .disable_mesh()
            .disable_x_axis()
            .y_desc("level (dB)")
            .y_label_formatter(&|level| format!("{} ", whole(*level)))
            .label_style(font(15))
            .axis_desc_style(font(16))
            .axis_style(INK)
            .draw()?;
        Ok(())
    }
}

/// A line of dashes of the given length in pixels; 0 draws it whole.
fn dashed<P: Clone>(
    points: Vec<P>,
    dash: i32,
    style: ShapeStyle,
) -> DashedPathElement<std::vec::IntoIter<P>, i32> {
    DashedPathElement::new(points, if dash == 0 { 10_000 } else { dash }, dash, style)
}

/// To the nearest whole number, which is never written "-0".
fn whole(value: f64) -> String {
    format!("{:.0}", value.round() + 0.0)
}

fn font(size: i32) -> TextStyle<'static> {
    ("sans-serif", size).into_font().color(&INK)
}

fn spacing(values: &[f64]) -> f64 {
    values[1] - values[0]
}

fn last(values: &[f64]) -> f64 {
    values[values.len() - 1]
}
