//! The sea, the track and the modes that reach their cut-off on it.

use crate::profile;
use crate::table::Fault;
use crate::{Arguments, OWN_TRACK};
use merging_saddles::Error;
use merging_saddles::guide::{AcousticGuide, CutOffPlace, ModeCutOff, Profile, TwoLayer, level_db};
use std::f64::consts::LN_10;
use std::path::Path;

/// How far the picture reaches, in transition lengths: before cut-off and beyond the start of the
/// beam, and at least after cut-off.
pub const BEFORE: f64 = 5.0;
const AFTER: f64 = 7.0;
/// With more modes than this nobody looks at a single one.
const MOST_MODES: u32 = 1000;

/// A track in a two-layer sea.
pub struct Scene {
    pub profile: Profile,
    /// Modes cut off on the track, the highest (the first to go) first; a mode at whose cut-off the
    /// bed is flat or too steep comes with the reason.
    pub modes: Vec<(u32, CutOffPlace, Result<ModeCutOff, Error>)>,
    /// Modes still trapped at the end.
    pub trapped_at_end: u32,
}

impl Scene {
    pub fn new(arguments: &Arguments) -> Result<Scene, Fault> {
        let guide = AcousticGuide::new(TwoLayer {
            frequency_hz: arguments.frequency_hz,
            water_speed_m_per_s: arguments.water_speed,
            bottom_speed_m_per_s: arguments.bottom_speed,
            water_density_kg_per_m3: arguments.water_density,
            bottom_density_kg_per_m3: arguments.bottom_density,
            water_attenuation_db_per_wavelength: arguments.water_attenuation,
            bottom_attenuation_db_per_wavelength: arguments.attenuation,
        })
        .map_err(|error| Fault(error.to_string()))?;
        let profile = match &arguments.profile {
            Some(path) => profile::read(path)?,
            None => profile::read(&Path::new(env!("CARGO_MANIFEST_DIR")).join(OWN_TRACK))?,
        };
        let [from, to] = profile.ranges();
        let [deep, shallow] = [profile.width(from), profile.width(to)];
        let fault = |error: Error| Fault(error.to_string());
        let trapped_at_start = guide.mode_count(deep).map_err(fault)?;
        let trapped_at_end = guide.mode_count(shallow).map_err(fault)?;
        if trapped_at_start == trapped_at_end {
            return Err(Fault(none_lost(&guide, arguments, [deep, shallow], trapped_at_end)?));
        }
        if trapped_at_start > MOST_MODES {
            return Err(Fault(format!(
                "the track traps {trapped_at_start} modes where it begins, more than the \
                 {MOST_MODES} that are followed one by one: lower --frequency-hz or cut the deep \
                 part off the profile"
            )));
        }
        let modes = (trapped_at_end + 1..=trapped_at_start)
            .rev()
            .map(|mode| {
                let place = guide.cutoff_place(mode, &profile)?;
                Ok((mode, place, run(&guide, mode, &profile, place)))
            })
            .collect::<Result<_, _>>()
            .map_err(fault)?;
        Ok(Scene { profile, modes, trapped_at_end })
    }

    /// The mode to follow: the one asked for, or the lowest that is cut off.
    pub fn followed(&self, mode: Option<u32>) -> Result<Followed, Fault> {
        let lowest = self.trapped_at_end + 1;
        let mode = mode.unwrap_or(lowest);
        let Some((_, place, run)) = self.modes.iter().find(|(number, ..)| *number == mode) else {
            return Err(Fault(format!(
                "mode {mode} has no cut-off on this track: give --mode a number from {lowest} to {}",
                self.trapped_at_end as usize + self.modes.len()
            )));
        };
        let run = run.as_ref().map_err(|error| {
            Fault(format!("mode {mode}, cut off at {:.1} m: {error}", place.range_m))
        })?;
        // At a strong contrast there may be no beam below a right angle: the leading order then.
        let axis_rad = match run.passage().beam() {
            Ok(beam) => beam.axis_rad,
            Err(_) => run.take_off_angle_small_rad().min(1.5),
        };
        // The ray is a line through this point, which need not lie on the bed.
        let (start_m, depth_m) = run.passage().ray_start(axis_rad);
        let beam_start_m = leaves_bed(run, [start_m, depth_m], axis_rad, place.range_m);
        Ok(Followed {
            mode,
            place: *place,
            run: run.clone(),
            window_m: self.window_m(*place, run, beam_start_m),
            beam_start_m,
            axis_rad,
        })
    }

    /// The ranges of the picture: on the track and before the shore.
    fn window_m(&self, place: CutOffPlace, run: &ModeCutOff, beam_start_m: f64) -> [f64; 2] {
        let [from, to] = self.profile.ranges();
        let length = run.layer_range_m();
        let after = (BEFORE * length + beam_start_m).max(place.range_m + AFTER * length);
        [from.max(place.range_m - BEFORE * length), to.min(after)]
    }
}

/// The mode that is followed.
pub struct Followed {
    pub mode: u32,
    pub place: CutOffPlace,
    pub run: ModeCutOff,
    /// First and last range of the picture.
    pub window_m: [f64; 2],
    /// Where the beam's axis leaves the bed.
    pub beam_start_m: f64,
    /// Its angle from the surface.
    pub axis_rad: f64,
}

/// A level and its error figure, and how far the yardstick is from it.
pub struct Level {
    pub db: f64,
    pub figure_db: f64,
    pub apart_db: f64,
}

/// What a relative error means in dB.
fn decibels(relative: f64) -> f64 {
    20.0 * relative.ln_1p() / LN_10
}

impl Followed {
    /// Depth of the beam's axis where it is on its way. In the one-way equation, which the picture shows, the
    /// axis falls by the sine of its angle.
    pub fn beam_depth_m(&self, range_m: f64) -> f64 {
        let (start_m, depth_m) = self.run.passage().ray_start(self.axis_rad);
        depth_m + self.axis_rad.sin() * (range_m - start_m)
    }

    /// The level by the yardstick, or of a bed that goes on straight before the fitted part of the track.
    pub fn level(&self, range_m: f64, depth_m: f64) -> Result<Level, Error> {
        let passage = self.run.passage();
        if range_m < passage.fitted_from() {
            let p = passage.value(range_m, depth_m)?;
            // No more than the adiabatic form leaves out.
            let figure_db = decibels(self.run.eps());
            return Ok(Level { db: level_db(p), figure_db, apart_db: 0.0 });
        }
        let p = passage.field(range_m, depth_m)?;
        Ok(Level { db: level_db(p.value), figure_db: decibels(p.relative_error), apart_db: 0.0 })
    }

    /// The level by expansions at the saddles.
    pub fn level_at_saddles(&self, range_m: f64, depth_m: f64) -> Result<Level, Error> {
        let passage = self.run.passage();
        let yardstick = passage.field(range_m, depth_m)?;
        let u = passage.field_at_saddles(range_m, depth_m)?;
        Ok(Level {
            db: level_db(u.value),
            figure_db: decibels(u.relative_error),
            apart_db: decibels((u.value / yardstick.value - 1.0).norm()),
        })
    }

    /// The whole error figure of the level in dB, that of the formula and of the smoothing included.
    pub fn whole_figure_db(&self, range_m: f64, depth_m: f64) -> Result<f64, Error> {
        let station = self.run.passage().station(range_m)?;
        Ok(decibels(station.field(depth_m)?.relative_error))
    }
}

/// Where the beam's axis crosses the bed, near the point from which its ray is counted.
fn leaves_bed(run: &ModeCutOff, [start_m, depth_m]: [f64; 2], axis_rad: f64, cut_m: f64) -> f64 {
    let below =
        |range_m: f64| depth_m + axis_rad.sin() * (range_m - start_m) > run.depth_m(range_m);
    let (mut before, mut after) = (cut_m.min(start_m), start_m + run.layer_range_m());
    if below(before) || !below(after) {
        return start_m;
    }
    for _ in 0..60 {
        let middle = 0.5 * (before + after);
        if below(middle) { after = middle } else { before = middle }
    }
    after
}

/// A mode on the track at its cut-off, known in the water five transition lengths before.
fn run(
    guide: &AcousticGuide,
    mode: u32,
    profile: &Profile,
    place: CutOffPlace,
) -> Result<ModeCutOff, Error> {
    let [from, _] = profile.ranges();
    let near = guide.along(mode, profile.clone(), from)?;
    let reference_m = (place.range_m - BEFORE * near.layer_range_m()).max(from);
    guide.along(mode, profile.clone(), reference_m)
}

/// Why no mode is lost, and what to change.
fn none_lost(
    guide: &AcousticGuide,
    arguments: &Arguments,
    [deep, shallow]: [f64; 2],
    trapped: u32,
) -> Result<String, Fault> {
    let cutoff = |mode| guide.cutoff_depth_m(mode).map_err(|error| Fault(error.to_string()));
    if trapped == 0 {
        let depth = cutoff(1)?;
        return Ok(format!(
            "no mode is trapped anywhere on the track: mode 1 needs {depth:.1} m of water at this \
             frequency and the track begins in {deep} m: raise --frequency-hz above {:.1}",
            arguments.frequency_hz * depth / deep
        ));
    }
    let depth = cutoff(trapped)?;
    Ok(format!(
        "no mode reaches its cut-off: mode {trapped}, the highest, is cut off in {depth:.1} m of \
         water and the track ends in {shallow} m: extend the profile into shallower water or set \
         --frequency-hz below {:.1}",
        arguments.frequency_hz * depth / shallow
    ))
}
