//! The sea, the track and the modes that reach their cut-off on it.

use crate::profile::Profile;
use crate::table::Fault;
use crate::{Arguments, OWN_TRACK};
use merging_saddles::guide::{
    AcousticGuide, CutOffPlace, ModeCutOff, SlopingGuide, TwoLayer, level_db,
};
use merging_saddles::{Complex64, Error};
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
    guide: AcousticGuide,
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
            bottom_attenuation_db_per_wavelength: arguments.attenuation,
        })
        .map_err(|error| Fault(error.to_string()))?;
        let profile = match &arguments.profile {
            Some(path) => Profile::read(path)?,
            None => Profile::read(&Path::new(env!("CARGO_MANIFEST_DIR")).join(OWN_TRACK))?,
        };
        let [deep, shallow] = profile.depths_m();
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
        let [from, to] = profile.ranges_m();
        let modes = (trapped_at_end + 1..=trapped_at_start)
            .rev()
            .map(|mode| {
                let place = guide.cutoff_range_m(mode, |s| profile.depth_at(s), from, to)?;
                Ok((mode, place, run(&guide, mode, place)))
            })
            .collect::<Result<_, _>>()
            .map_err(fault)?;
        Ok(Scene { guide, profile, modes, trapped_at_end })
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
        let (water, bottom) = (self.guide.water_wavenumber(), self.guide.bottom_wavenumber());
        let q = (water * water - bottom * bottom).sqrt();
        let eps = bottom * 2.0 * place.slope_rad.tan() / q;
        let scaled = SlopingGuide::new(mode, self.guide.density_ratio(), eps)
            .map_err(|error| Fault(error.to_string()))?;
        Ok(Followed {
            scaled,
            q,
            mode,
            place: *place,
            run: *run,
            window_m: self.window_m(*place, run),
            beam_start_m: self.beam_start_m(*place, run),
        })
    }

    /// The ranges of the picture: on the track and before the shore.
    fn window_m(&self, place: CutOffPlace, run: &ModeCutOff) -> [f64; 2] {
        let [from, to] = self.profile.ranges_m().map(|range| range - place.range_m);
        let shore = run.cutoff_depth_m() / place.slope_rad.tan();
        let length = run.layer_range_m();
        let after = (BEFORE * length + self.beam_start_m(place, run)).max(AFTER * length);
        [from.max(-BEFORE * length), to.min(after).min(0.97 * shore)]
    }

    /// Energy of the scaled momentum p leaves where the width is Re h_n(p) = h_c/sqrt(1 + p^2): the
    /// stationary point of the uniform field's phase. The beam's axis has p = 2^(-1/3)/(q L_z).
    fn beam_start_m(&self, place: CutOffPlace, run: &ModeCutOff) -> f64 {
        let water = self.guide.water_wavenumber();
        let bottom = self.guide.bottom_wavenumber().re;
        let square = (run.take_off_angle_small_rad() * bottom).powi(2)
            / ((water - bottom) * (water + bottom));
        run.cutoff_depth_m() * (1.0 - 1.0 / (1.0 + square).sqrt()) / place.slope_rad.tan()
    }

    /// The largest distance between the profile and the plane bed within the picture.
    pub fn departure_m(&self, followed: &Followed) -> f64 {
        let [from, to] = followed.window_m;
        (0..=200)
            .map(|j| from + (to - from) * f64::from(j) / 200.0)
            .map(|s| {
                let profile = self.profile.depth_at(followed.place.range_m + s);
                (profile - followed.run.depth_m(s)).abs()
            })
            .fold(0.0, f64::max)
    }
}

/// The mode that is followed; its ranges are counted from cut-off.
pub struct Followed {
    pub mode: u32,
    pub place: CutOffPlace,
    pub run: ModeCutOff,
    /// First and last range of the picture.
    pub window_m: [f64; 2],
    /// Where the beam's axis leaves the bed.
    pub beam_start_m: f64,
    /// The same mode in scaled lengths, `q` metres to one.
    scaled: SlopingGuide,
    q: Complex64,
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
    /// Depth of the beam's axis below the bed, 0 before it leaves.
    pub fn beam_height_m(&self, range_m: f64) -> f64 {
        self.run.take_off_angle_small_rad() * (range_m - self.beam_start_m).max(0.0)
    }

    /// The level by the yardstick.
    pub fn level(&self, range_m: f64, depth_m: f64) -> Result<Level, Error> {
        let p = self.run.pressure_uniform(range_m, depth_m)?;
        Ok(Level { db: level_db(p.value), figure_db: decibels(p.relative_error), apart_db: 0.0 })
    }

    /// The level by expansions at the saddles.
    pub fn level_at_saddles(&self, range_m: f64, depth_m: f64) -> Result<Level, Error> {
        let level = self.level(range_m, depth_m)?;
        let water = self.run.depth_m(range_m);
        let field = if depth_m < water {
            self.scaled.inside(self.q * water, self.q * depth_m)?
        } else {
            self.scaled.outside(self.q * water, self.q * (depth_m - water))?
        };
        let (u, yardstick) = (field.evaluate()?, field.quadrature(1e-9)?);
        let ratio = u.value / yardstick.value;
        Ok(Level {
            db: level.db + level_db(ratio),
            figure_db: decibels(u.relative_error),
            apart_db: decibels((ratio - 1.0).norm()),
        })
    }
}

/// A mode on the slope at its cut-off, known in the water five transition lengths before.
fn run(guide: &AcousticGuide, mode: u32, place: CutOffPlace) -> Result<ModeCutOff, Error> {
    let anywhere = guide.upslope(mode, place.slope_rad, 2.0 * guide.cutoff_depth_m(mode)?)?;
    let reference_depth_m = anywhere.depth_m(-BEFORE * anywhere.layer_range_m());
    guide.upslope(mode, place.slope_rad, reference_depth_m)
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
