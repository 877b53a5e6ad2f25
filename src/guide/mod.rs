//! A mode driven through its cut-off: the field of a slowly narrowing guide.
//!
//! A guide that gets narrower loses its modes one by one. Each goes through its cut-off, where it
//! is no longer reflected at the boundary, and leaves as a beam into the medium outside. Ray and
//! mode pictures fail there; a uniform integral with two merging saddles does not.
//!
//! Three floors:
//!
//! - [`layer`]: the transition functions at cut-off, in closed form by Airy functions. Cheap, and
//!   right to some `eps^(1/3)` near cut-off. [`revival`]: what a released mode does at the cut-offs of lower ones.
//! - [`SlopingGuide`]: the uniform field in scaled units, before, at and after cut-off, inside and outside, for
//!   any mode, parity and density ratio, on straight and curved profiles.
//! - Three physics on one core, each in its own units, along a [`Profile`] of the caller's own:
//!   [`AcousticGuide`] (sound in water over a sloping bottom, metres), [`SlabGuide`] (light in a tapered slab, TE and TM,
//!   nanometres), [`QuantumWell`] (states of a narrowing well, scaled). Each gives a [`Passage`]: the field
//!   everywhere, its error figure, the [`Beam`] and its [`Footprint`], the energy left inside, levels along a line of
//!   receivers. For sound there are besides [`ModeCutOff`] (the same with metres in the names),
//!   [`AcousticGuide::source`] (modes added with their phases) and [`sensitivities`].
//!
//! ```
//! use merging_saddles::guide::{AcousticGuide, TwoLayer, level_db};
//! // Mode 1 at 50 Hz runs up a bed of 1 in 40 over sand; depths of 120 m trap five modes or so.
//! let guide = AcousticGuide::new(TwoLayer {
//!     frequency_hz: 50.0,
//!     water_speed_m_per_s: 1500.0,
//!     bottom_speed_m_per_s: 1700.0,
//!     water_density_kg_per_m3: 1000.0,
//!     bottom_density_kg_per_m3: 1900.0,
//!     water_attenuation_db_per_wavelength: 0.0,
//!     bottom_attenuation_db_per_wavelength: 0.5,
//! })?;
//! let cut_off = guide.upslope(1, (1f64 / 40.0).atan(), 40.0)?;
//! println!("cut off in {:.1} m of water", cut_off.cutoff_depth_m());
//! for range_m in [-400.0, 0.0, 400.0] {
//!     let bed_m = cut_off.depth_m(range_m);
//!     let p = cut_off.pressure_layer(range_m, bed_m)?;
//!     println!("{range_m} m: {:.1} dB re incoming mode", level_db(p));
//! }
//! # Ok::<(), merging_saddles::Error>(())
//! ```
//!
//! # How good the formulas are
//!
//! Relative L2 errors inside / outside against a solution of the one-way equation, at the layer's time
//! `t = 0` and `t = 2`, one constant phase taken out (`tests/guide_pde.rs`, `tests/guide_profiles.rs`; even and
//! higher modes start from a flat guide, so that no other mode is excited; the tests run some rows at
//! `eps = 0.02` to be quick):
//!
//! | mode | m | profile | eps | order | t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- | --- | --- |
//! | 1 | 1 | straight | 0.01 | leading | 6.5e-3 / 1.5e-2 | 3.2e-2 / 2.6e-2 |
//! | 1 | 1 | straight | 0.01 | next | 1.7e-5 / 1.5e-4 | 1.0e-3 / 1.6e-4 |
//! | 1 | 1 | straight | 0.1 | next | 1.7e-3 / 1.4e-2 | 1.9e-2 / 8.0e-3 |
//! | 2 even | 1 | straight | 0.01 | next | 1.0e-4 / 1.0e-4 | 1.0e-3 / 2.1e-4 |
//! | 2 even | 0.55 | straight | 0.01 | next | 1.2e-4 / 1.1e-4 | 2.4e-4 / 1.7e-4 |
//! | 2 | 1 | straight | 0.01 | next | 4.0e-4 / 1.3e-4 | 1.2e-3 / 3.8e-4 |
//! | 2 | 0.55 | straight | 0.01 | next | 4.2e-4 / 1.1e-4 | 5.5e-4 / 3.5e-4 |
//! | 3 | 1.5 | straight | 0.02 | next | 2.1e-4 / 1.6e-3 | 5.3e-3 / 1.7e-3 |
//! | 1 | 1 | `h_c - r + r^2/4` | 0.01 | leading | 6.1e-3 / 1.1e-2 | 3.3e-2 / 2.1e-2 |
//! | 1 | 1 | `h_c - r + r^2/4` | 0.01 | local slope | 4.6e-4 / 9.7e-4 | 1.1e-2 / 1.3e-3 |
//! | 1 | 1 | `h_c - r + r^2/4` | 0.01 | next | 1.5e-4 / 4.0e-4 | 1.0e-3 / 1.7e-3 |
//! | 1 | 1 | `h_c - r - r^2/5` | 0.01 | leading | 6.1e-3 / 1.1e-2 | 3.7e-2 / 2.3e-2 |
//! | 1 | 1 | `h_c - r - r^2/5` | 0.01 | local slope | 1.9e-4 / 4.8e-4 | 9.0e-3 / 2.1e-3 |
//! | 1 | 1 | `h_c - r - r^2/5` | 0.01 | next | 1.1e-4 / 3.1e-4 | 3.7e-3 / 1.4e-3 |
//! | 2 | 0.55 | `h_c - r + r^2/4` | 0.02 | leading | 1.4e-2 / 4.1e-2 | 1.6e-2 / 4.0e-2 |
//! | 2 | 0.55 | `h_c - r + r^2/4` | 0.02 | next | 6.9e-4 / 1.8e-3 | 9.6e-4 / 3.0e-3 |
//! | 1 | 0.55 | the same with losses | 0.02 | next | 3.2e-4 / 6.3e-4 | 7.4e-4 / 2.5e-3 |
//! | 2 | 0.55 | the same with losses | 0.02 | next | 7.1e-4 / 1.8e-3 | 9.9e-4 / 3.2e-3 |
//!
//! On the curved profiles one complex constant is taken out: the start of the solution leaves some tenths of a per
//! cent of the mode behind. Losses are `eps (1 + 0.004 i)` and a well of `1 + 0.01 i`, outside and inside.
//!
//! A curved profile is known as a polynomial of the range round the cut-off, which is inverted at complex widths. Where
//! its bend counts for nearly as much in the phase as the straight profile, or where it turns, the field is refused if
//! what lies there is above the tolerance ([`SlopingGuide::tolerance`]), else it is in the error figure. On a taper
//! along a raised cosine (mode 1, `m = 1`, `eps = 0.05`, `t` from -1.8 to 2.4) nothing above 1e-16 is neglected, and
//! [`Passage::departure`] is 4e-3 before and at cut-off, 2e-2 at `t = 1.2`.
//!
//! Revivals ([`SlopingGuide::revival`]) at `eps = 0.01`, formula over solution at the lower cut-off and one layer's time
//! later: `m = 0.55` 1.08 and 0.91, even modes 1.04 and 0.90, the profile `h_c - r + r^2/25` 0.98 and 1.12, losses
//! (`eps (1 + 0.004 i)`) 1.01 and 0.99 (`tests/guide_revival.rs`, ignored test).
//!
//! The benchmark wedge (25 Hz, 1500 over 1700 m/s, density ratio 1.5, 0.5 dB per wavelength, 200 m deep, 1 in 20;
//! `eps = 0.19`) in `tests/guide_wedge.rs`: outside 1 to 3 % in mode 1, 4 to 6 % in mode 2, 5 to 12 % in mode 3; inside 2 to 3, 6
//! to 8 and 13 to 15 %, since modes couple at such a slope. Levels of the beam are within 0.4 dB, those in the water
//! within 1.4 dB. [`Passage::departure`] covers them. [`Passage::station`] makes an error figure of it
//! that covered every one of 1010 points of four runs (`eps` 0.02 and 0.1, straight and curved), 9 to 16 times the error
//! at the median.
//!
//! # Caution
//!
//! Levels from an idealised two-layer model are no basis alone for decisions on the exposure of divers, swimmers or
//! marine animals, on laser safety, or for navigation: real water is layered and rough, real bottoms carry shear and
//! are not uniform, real chips are three-dimensional and have rough edges. Local rules and licensed practice decide.

mod acoustic;
mod adiabatic;
mod beam;
mod contour;
mod curve;
mod dispersion;
pub mod layer;
mod passage;
mod profile;
mod revival;
mod second;
mod sensitivity;
mod slab;
mod source;
mod station;
mod table;
mod uniform;
mod well;

pub use acoustic::{AcousticGuide, CutOffPlace, ModeCutOff, TwoLayer, level_db};
pub use adiabatic::Adiabatic;
pub use beam::{Beam, Footprint};
pub use dispersion::{ModeAmplitude, ModePhase};
pub use passage::Passage;
pub use profile::Profile;
pub use revival::revival;
pub use sensitivity::{Sensitivities, sensitivities};
pub use slab::{Polarization, Slab, SlabGuide};
pub use source::SourceField;
pub use station::Station;
pub use uniform::{Order, SlopingGuide, UniformField};
pub use well::QuantumWell;
