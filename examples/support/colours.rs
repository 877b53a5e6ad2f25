//! A colour scale for levels, ordered by lightness alone.
//!
//! Quiet is pale, loud is dark: the lightness of the colour space OKLab (B. Ottosson 2020, cited
//! from memory) falls in equal steps while the hue goes round from sand over green and teal to
//! dark violet. Prints in grey and is read the same way by colour-blind people.

use plotters::style::RGBColor;

/// The colour of a fraction between 0 (quiet) and 1 (loud).
pub fn colour(fraction: f64) -> RGBColor {
    let u = fraction.clamp(0.0, 1.0);
    let lightness = 0.97 - 0.67 * u;
    // Little colour at the pale end, where the gamut is narrow.
    let chroma = 0.012 + 0.085 * (0.8 * std::f64::consts::PI * u.powf(0.8)).sin();
    let hue = (85.0 + 225.0 * u).to_radians();
    oklab(lightness, chroma * hue.cos(), chroma * hue.sin())
}

fn oklab(l: f64, a: f64, b: f64) -> RGBColor {
    let long = (l + 0.396_337_777_4 * a + 0.215_803_757_3 * b).powi(3);
    let medium = (l - 0.105_561_345_8 * a - 0.063_854_172_8 * b).powi(3);
    let short = (l - 0.089_484_177_5 * a - 1.291_485_548_0 * b).powi(3);
    RGBColor(
        channel(4.076_741_662_1 * long - 3.307_711_591_3 * medium + 0.230_969_929_2 * short),
        channel(-1.268_438_004_6 * long + 2.609_757_401_1 * medium - 0.341_319_396_5 * short),
        channel(-0.004_196_086_3 * long - 0.703_418_614_7 * medium + 1.707_614_701_0 * short),
    )
}

/// From linear light to a byte of sRGB.
fn channel(linear: f64) -> u8 {
    let x = linear.clamp(0.0, 1.0);
    let encoded = if x <= 0.003_130_8 { 12.92 * x } else { 1.055 * x.powf(1.0 / 2.4) - 0.055 };
    (255.0 * encoded).round() as u8
}
