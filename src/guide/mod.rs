//! A mode driven through its cut-off: the field of a slowly narrowing guide.
//!
//! A guide that gets narrower loses its modes one by one. Each goes through its cut-off, where it
//! is no longer reflected at the boundary, and leaves as a beam into the medium outside. Ray and
//! mode pictures fail there; a uniform integral with two merging saddles does not.
//!
//! Three floors:
//!
//! - [`layer`]: the transition functions at cut-off, in closed form by Airy functions. Cheap, and
//!   right to some `eps^(1/3)` near cut-off.
//! - [`SlopingGuide`]: the uniform field in scaled units at constant slope, before, at and after
//!   cut-off, inside and outside, for any mode and density ratio.
//! - [`AcousticGuide`]: both in physical units, for sound in water over a sloping bottom: cut-off depths and
//!   ranges, the beam's take-off angle, pressures and levels.
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
//! # Caution
//!
//! Levels from an idealised two-layer model with a plane bed are no basis alone for decisions on the exposure of
//! divers, swimmers or marine animals, nor for navigation: real water is layered and rough, real bottoms carry
//! shear and are not uniform. Local rules and licensed practice decide.

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
mod sensitivity;
mod slab;
mod source;
mod uniform;
mod well;

pub use acoustic::{AcousticGuide, CutOffPlace, ModeCutOff, TwoLayer, level_db};
pub use adiabatic::Adiabatic;
pub use beam::{Beam, Footprint};
pub use dispersion::{ModeAmplitude, ModePhase};
pub use passage::{Passage, Station};
pub use profile::Profile;
pub use revival::revival;
pub use sensitivity::{Sensitivities, sensitivities};
pub use slab::{Polarization, Slab, SlabGuide};
pub use source::SourceField;
pub use uniform::{Order, SlopingGuide, UniformField};
pub use well::QuantumWell;
