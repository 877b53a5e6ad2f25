//! Several modes of one guide: which of them a profile cuts off, and their passages.

use super::passage::{Media, ModeNumber, Passage};
use super::profile::Profile;
use crate::Error;

/// How many modes a profile keeps, and how many are trapped at its first range (a plane one: range 0).
pub(super) fn counts(
    profile: &Profile,
    count: impl Fn(f64) -> Result<u32, Error>,
) -> Result<[u32; 2], Error> {
    let [from, to] = profile.ranges();
    if from.is_infinite() {
        // No width at all, at the tip, traps as much as hardly any.
        return Ok([count(f64::MIN_POSITIVE)?, count(profile.width(0.0))?]);
    }
    // The narrowest place, among the steps of `Profile::first_range_of_width`.
    const STEPS: u32 = 2000;
    let step = (to - from) / f64::from(STEPS);
    let width = |range: f64| {
        let width = profile.width(range);
        Error::require_finite("width of the profile", width).map(|()| width)
    };
    let first = width(from)?;
    let mut least = first;
    for j in 1..=STEPS {
        least = least.min(width(if j == STEPS { to } else { from + step * f64::from(j) })?);
    }
    let [last, first] = [count(least.max(f64::MIN_POSITIVE))?, count(first)?];
    if first.saturating_sub(last) > 10_000 {
        let remedy = "cut the wide part off the profile or take a longer wavelength";
        return Err(Error::domain("number of modes cut off", f64::from(first - last), remedy));
    }
    Ok([last, first])
}

/// A mode from a range on, whether the profile cuts it off or keeps it.
pub(super) fn passage(
    media: Media,
    number: ModeNumber,
    profile: &Profile,
    reference: f64,
    kept: bool,
) -> Result<Passage, Error> {
    let make = if kept { Passage::trapped } else { Passage::new };
    make(media, number, profile.clone(), reference)
}

/// Refuses to add up no modes or too many.
pub(super) fn check_count(count: u32) -> Result<(), Error> {
    if count == 0 || count > 200 {
        let remedy = "choose a width and wavelength that trap 1 to 200 modes at the source";
        return Err(Error::domain("modes trapped at the source", f64::from(count), remedy));
    }
    Ok(())
}
