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
//!   receivers. For sound there are besides [`ModeCutOff`] (the same with metres in the names) and
//!   [`AcousticGuide::source`] (modes added with their phases; [`SlabGuide::launch`] and [`QuantumWell::launch`] take
//!   any field apart into modes). [`sensitivities`] differentiates any result with
//!   respect to all figures.
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
//! # What to call
//!
//! | you ask | for sound | for light | for a well |
//! | --- | --- | --- | --- |
//! | how many modes are trapped | [`AcousticGuide::mode_count`] | [`SlabGuide::mode_count`] | [`QuantumWell::state_count`] |
//! | where each of them is cut off | [`AcousticGuide::cutoffs`] | [`SlabGuide::cutoffs`] | [`QuantumWell::releases`] |
//! | one mode along a profile | [`AcousticGuide::along`], [`ModeCutOff::passage`] | [`SlabGuide::along`] | [`QuantumWell::along`] |
//! | a source, or any field sent in | [`AcousticGuide::source`] | [`SlabGuide::launch`] | [`QuantumWell::launch`] |
//!
//! and of one mode's [`Passage`], in the units of its guide:
//!
//! | you ask | call |
//! | --- | --- |
//! | over what range it leaves, how far the field reaches outside | [`Passage::layer_range`], [`Passage::layer_height`] |
//! | the field at a place before or after, inside or outside | [`Passage::value`] |
//! | levels along a line of receivers | [`Passage::levels_db`] |
//! | how good that is | [`Passage::station`] |
//! | energy left inside | [`Passage::energy_inside`] |
//! | the beam's angle and width, where it arrives | [`Passage::beam`], [`Passage::footprint`] |
//! | energy per angle or momentum | [`Passage::radiation_per_rad`], [`Passage::radiation_per_wavenumber`] |
//! | a derivative of any of this | [`sensitivities`] |
//!
//! # How good the formulas are
//!
//! Sound and light have the wide-angle form ([`SlopingGuide::wide_angle`]). Against finite elements for Helmholtz's equation over
//! a bed that is flat at first and then straight (`tests/guide_helmholtz.rs`; the tables are good to 1e-8, the
//! reflected energy is below 1e-9), errors `inside / outside` as below, one complex constant taken out at `t = -1` whose modulus
//! is 0.990 to 0.999; outside up to 12 layer lengths; `delta` is `(q/k)^2`, 0.28 for 1500 over 1700 m/s, 1.25 for glass in air:
//!
//! | mode | m | delta | eps | t = -1 | t = 0 | t = 2 | t = 3 | one-way equation, t = 2 | t = 3 |
//! | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |
//! | 1 | 1 | 0.28 | 0.05 | 8.9e-4 / 1.6e-3 | 8.1e-4 / 1.1e-3 | 9.2e-3 / 1.9e-3 | 3.5e-2 / 3.0e-3 | 1.2e-2 / 2.4e-2 | 4.0e-2 / 3.4e-2 |
//! | 1 | 0.67 | 0.28 | 0.19 | 1.0e-2 / 3.3e-2 | 9.4e-3 / 1.9e-2 | 2.3e-2 / 1.5e-2 | 7.2e-2 / 1.7e-2 | 5.1e-2 / 7.9e-2 | 8.3e-2 / 1.3e-1 |
//! | 1 | 0.56 | 0.21 | 0.1 | 3.1e-3 / 8.7e-3 | 3.0e-3 / 5.3e-3 | 6.3e-3 / 4.2e-3 | 2.1e-2 / 4.8e-3 | 2.7e-2 / 3.8e-2 | 2.8e-2 / 6.3e-2 |
//! | 2 | 0.67 | 0.28 | 0.1 | 1.0e-2 / 2.3e-2 | 9.8e-3 / 1.6e-2 | 1.1e-2 / 1.2e-2 | 2.5e-2 / 1.4e-2 | 2.8e-2 / 2.9e-2 | 5.4e-2 / 4.9e-2 |
//! | 1 | 1 | 1.25 | 0.05 | 1.0e-3 / 1.8e-3 | 8.6e-4 / 1.2e-3 | 9.2e-3 / 1.9e-3 | 3.5e-2 / 2.9e-3 | 2.2e-2 / 1.1e-1 | 5.5e-2 / 1.6e-1 |
//! | 1 | 1 | 1.25 | 0.1 | 2.5e-3 / 9.5e-3 | 1.8e-3 / 5.5e-3 | 2.2e-2 / 5.8e-3 | 8.6e-2 / 8.5e-3 | 3.9e-2 / 1.8e-1 | 1.1e-1 / 2.5e-1 |
//!
//! The beams of these six cases leave at 8.3 to 21 degrees; [`Passage::beam`] says so to 0.1 to 0.5 degrees, and the energy per
//! angle is right to half of `eps` of its maximum, best at large angles.
//!
//! Everything below is measured against solutions of the one-way equation ([`Passage::paraxial`]) by finite elements
//! (`tests/support/tapered.rs`), which are good to 3e-5 inside and 5e-6 outside where this was tried (`m` 0.55 and
//! 1.5, modes 1 and 3, both bends). Unless said otherwise:
//!
//! - errors are `inside / outside`: relative L2 norms of the difference over `0 < x < h` and over ten layer lengths
//!   `(m/eps)^(1/3)` outside, `t = r/(m^2 eps)^(1/3)` with the range `r` from cut-off in scaled units;
//! - the mode starts on a flat guide, so that no other mode is excited, and one complex constant per run is taken out, the
//!   one that fits best at `t = 0` over both sides. Its phase is that of the start. Its modulus over that of a mode of unit
//!   energy is within 1.2e-3 of 1 (leading order: 7.1e-3), so the incoming energy is not fitted away;
//! - the formula goes the whole way of a user: a sea in metres, a fitted profile, the pressure.
//!
//! The next order ([`Order::Next`]) at `eps = 0.01`, and the exponents of `eps` at `t = 0` and 2 (between `eps = 0.04` and
//! 0.01; for `m = 1.5` on curved profiles between 0.01 and 0.0025). The width is `h_c - r + bend r^2`. Made by
//! `errors_of_all_cases` in `tests/guide_accuracy.rs`, which has `t = -1` and 1 and the other `eps` as well (for a bend of -0.2,
//! where the profile turns not far before cut-off, higher modes at `eps = 0.04` are refused or slow; see the losses below):
//!
//! | mode | m | bend | t = -2 | t = 0 | t = 2 | exponents, t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- | --- | --- | --- |
//! | 1 | 0.55 | 0 | 4.7e-5 / 8.7e-5 | 4.2e-5 / 7.5e-5 | 2.2e-4 / 9.4e-5 | 1.85 / 1.83 | 1.42 / 1.62 |
//! | 2 | 0.55 | 0 | 1.3e-4 / 2.3e-4 | 1.2e-4 / 2.3e-4 | 2.0e-4 / 2.6e-4 | 1.87 / 1.82 | 1.65 / 1.62 |
//! | 3 | 0.55 | 0 | 2.5e-4 / 4.2e-4 | 2.4e-4 / 4.4e-4 | 2.8e-4 / 4.6e-4 | 1.91 / 1.83 | 1.81 / 1.68 |
//! | 1 | 1 | 0 | 6.6e-5 / 7.4e-5 | 3.5e-5 / 6.4e-5 | 1.0e-3 / 1.3e-4 | 1.80 / 1.85 | 1.34 / 1.55 |
//! | 2 | 1 | 0 | 1.4e-4 / 2.0e-4 | 1.1e-4 / 2.1e-4 | 8.9e-4 / 2.9e-4 | 1.79 / 1.84 | 1.24 / 1.61 |
//! | 3 | 1 | 0 | 2.4e-4 / 3.8e-4 | 2.0e-4 / 4.0e-4 | 7.1e-4 / 4.7e-4 | 1.82 / 1.85 | 1.35 / 1.65 |
//! | 1 | 1.5 | 0 | 1.2e-4 / 9.5e-5 | 2.3e-5 / 4.9e-5 | 3.1e-3 / 2.4e-4 | 1.99 / 1.83 | 1.33 / 1.44 |
//! | 2 | 1.5 | 0 | 1.9e-4 / 1.8e-4 | 8.7e-5 / 1.6e-4 | 2.8e-3 / 3.5e-4 | 1.88 / 1.84 | 1.29 / 1.52 |
//! | 3 | 1.5 | 0 | 2.7e-4 / 3.3e-4 | 1.7e-4 / 3.3e-4 | 2.5e-3 / 4.8e-4 | 1.88 / 1.84 | 1.20 / 1.57 |
//! | 1 | 0.55 | 0.2 | 1.3e-4 / 1.1e-4 | 1.1e-4 / 2.0e-4 | 3.2e-4 / 9.7e-4 | 1.54 / 1.48 | 1.07 / 1.05 |
//! | 2 | 0.55 | 0.2 | 2.6e-4 / 3.7e-4 | 2.2e-4 / 4.2e-4 | 2.5e-4 / 1.1e-3 | 1.88 / 1.82 | 1.76 / 1.22 |
//! | 3 | 0.55 | 0.2 | 5.7e-4 / 9.3e-4 | 5.0e-4 / 9.1e-4 | 4.4e-4 / 1.4e-3 | 1.96 / 1.88 | 1.95 / 1.46 |
//! | 1 | 1 | 0.2 | 1.9e-4 / 1.4e-4 | 1.1e-4 / 2.3e-4 | 1.0e-3 / 1.4e-3 | 1.43 / 1.37 | 0.87 / 1.05 |
//! | 2 | 1 | 0.2 | 2.7e-4 / 2.8e-4 | 1.8e-4 / 3.6e-4 | 8.5e-4 / 1.5e-3 | 1.73 / 1.77 | 1.09 / 1.13 |
//! | 3 | 1 | 0.2 | 4.2e-4 / 6.2e-4 | 3.0e-4 / 6.1e-4 | 6.8e-4 / 1.6e-3 | 1.84 / 1.89 | 1.40 / 1.25 |
//! | 1 | 1.5 | 0.2 | 2.5e-4 / 1.9e-4 | 7.9e-5 / 1.8e-4 | 2.0e-3 / 1.6e-3 | 1.28 / 1.06 | 0.75 / 1.03 |
//! | 2 | 1.5 | 0.2 | 3.2e-4 / 2.7e-4 | 1.5e-4 / 2.7e-4 | 1.9e-3 / 1.6e-3 | 1.50 / 1.32 | 0.73 / 1.05 |
//! | 3 | 1.5 | 0.2 | 4.4e-4 / 5.2e-4 | 2.4e-4 / 4.7e-4 | 1.7e-3 / 1.7e-3 | 1.66 / 1.56 | 0.73 / 1.08 |
//! | 1 | 0.55 | -0.2 | 1.5e-4 / 1.3e-4 | 9.9e-5 / 2.0e-4 | 9.2e-4 / 9.4e-4 | 1.16 / 1.11 | 1.16 / 1.02 |
//! | 2 | 0.55 | -0.2 | 1.9e-4 / 1.2e-4 | 1.4e-4 / 2.8e-4 | 4.4e-4 / 9.6e-4 | 1.24 / 1.17 | 0.92 / 1.06 |
//!
//! and the leading order ([`Order::Leading`]):
//!
//! | mode | m | bend | t = -2 | t = 0 | t = 2 | exponents, t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- | --- | --- | --- |
//! | 1 | 1 | 0 | 1.0e-2 / 7.4e-3 | 6.1e-3 / 1.1e-2 | 2.7e-2 / 2.1e-2 | 0.73 / 0.79 | 0.68 / 0.68 |
//! | 3 | 1 | 0 | 1.4e-2 / 2.0e-2 | 1.1e-2 / 2.3e-2 | 2.1e-2 / 2.4e-2 | 0.87 / 0.92 | 0.64 / 0.80 |
//! | 1 | 0.55 | 0.2 | 1.0e-2 / 1.1e-2 | 7.7e-3 / 1.4e-2 | 1.4e-2 / 2.1e-2 | 0.78 / 0.77 | 0.72 / 0.64 |
//! | 1 | 1.5 | 0.2 | 1.5e-2 / 8.0e-3 | 3.2e-3 / 6.8e-3 | 5.1e-2 / 1.7e-2 | 0.79 / 0.75 | 0.61 / 0.64 |
//!
//! [`Passage::departure`] covers the errors in all these rows but for `m = 1.5` on curved profiles before cut-off, where it
//! falls to half of them: what drifts on both sides alike leaves no mismatch. [`Passage::station`] covers that as well.
//!
//! Far down the exponents of what is left out, measured by [`SlopingGuide::mismatch`], are 2/3 for the leading order, 4/3
//! for the next order on a straight profile and 1 on a curved one, for any `m` and mode
//! (`exponents_of_what_the_orders_leave_out`). [`Order::LocalSlope`] leaves 2/3 on a curved profile as well, with a
//! coefficient that is some ten times smaller and vanishes where the Schwarzian derivative of the range against width does.
//!
//! Losses of 0.5 dB per wavelength outside (speeds 1500 and 1700) at `eps = 0.02`, for `m = 1.5` on curved profiles 0.1 dB and
//! `eps = 0.01`; next order, `errors_with_losses` in the same file:
//!
//! | mode | m | bend | t = -2 | t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- | --- |
//! | 1 | 0.55 | 0 | 1.3e-4 / 4.1e-4 | 1.2e-4 / 2.6e-4 | 5.4e-4 / 2.6e-4 |
//! | 2 | 0.55 | 0 | 3.3e-4 / 1.0e-3 | 3.2e-4 / 7.8e-4 | 4.0e-4 / 5.9e-4 |
//! | 3 | 0.55 | 0 | 5.9e-4 / 1.8e-3 | 5.9e-4 / 1.5e-3 | 6.4e-4 / 1.1e-3 |
//! | 1 | 1 | 0 | 1.7e-4 / 3.5e-4 | 1.2e-4 / 2.2e-4 | 2.5e-3 / 3.7e-4 |
//! | 2 | 1 | 0 | 3.3e-4 / 9.2e-4 | 3.1e-4 / 6.8e-4 | 1.4e-3 / 7.0e-4 |
//! | 3 | 1 | 0 | 5.5e-4 / 1.7e-3 | 5.4e-4 / 1.3e-3 | 8.5e-4 / 9.7e-4 |
//! | 1 | 1.5 | 0 | 3.0e-4 / 3.4e-4 | 1.0e-4 / 1.9e-4 | 7.5e-3 / 6.3e-4 |
//! | 2 | 1.5 | 0 | 3.9e-4 / 8.6e-4 | 2.9e-4 / 6.0e-4 | 4.9e-3 / 9.1e-4 |
//! | 3 | 1.5 | 0 | 5.3e-4 / 1.6e-3 | 5.0e-4 / 1.2e-3 | 2.9e-3 / 1.1e-3 |
//! | 1 | 0.55 | 0.2 | 2.9e-4 / 6.5e-4 | 2.5e-4 / 5.3e-4 | 5.8e-4 / 1.7e-3 |
//! | 2 | 0.55 | 0.2 | 7.1e-4 / 2.0e-3 | 6.3e-4 / 1.5e-3 | 6.7e-4 / 1.7e-3 |
//! | 3 | 0.55 | 0.2 | 1.6e-3 / 4.6e-3 | 1.4e-3 / 3.5e-3 | 1.3e-3 / 2.8e-3 |
//! | 1 | 1 | 0.2 | 4.2e-4 / 5.5e-4 | 2.8e-4 / 5.2e-4 | 1.6e-3 / 2.6e-3 |
//! | 2 | 1 | 0.2 | 6.7e-4 / 1.6e-3 | 5.1e-4 / 1.1e-3 | 1.2e-3 / 2.3e-3 |
//! | 3 | 1 | 0.2 | 1.1e-3 / 3.3e-3 | 8.9e-4 / 2.2e-3 | 1.2e-3 / 2.3e-3 |
//! | 1 | 1.5 | 0.2 | 2.5e-4 / 1.8e-4 | 7.9e-5 / 1.8e-4 | 2.0e-3 / 1.5e-3 |
//! | 2 | 1.5 | 0.2 | 3.1e-4 / 2.5e-4 | 1.5e-4 / 2.7e-4 | 1.7e-3 / 1.5e-3 |
//! | 3 | 1.5 | 0.2 | 4.2e-4 / 5.2e-4 | 2.3e-4 / 4.7e-4 | 1.6e-3 / 1.6e-3 |
//! | 1 | 0.55 | -0.2 | 2.5e-4 / 2.3e-4 | 1.5e-4 / 3.5e-4 | 2.0e-3 / 1.6e-3 |
//! | 2 | 0.55 | -0.2 | 2.5e-4 / 5.0e-5 | 1.6e-4 / 4.0e-4 | 4.1e-4 / 1.1e-3 |
//! | 3 | 0.55 | -0.2 | 4.3e-4 / 7.7e-4 | 3.3e-4 / 8.1e-4 | 2.4e-4 / 1.3e-3 |
//! | 1 | 1 | -0.2 | 5.0e-4 / 4.2e-4 | 1.7e-4 / 4.0e-4 | 8.2e-3 / 2.4e-3 |
//! | 2 | 1 | -0.2 | 4.4e-4 / 3.4e-4 | 1.9e-4 / 4.4e-4 | 3.9e-3 / 1.8e-3 |
//! | 3 | 1 | -0.2 | 4.4e-4 / 2.4e-4 | 1.9e-4 / 4.5e-4 | 1.5e-3 / 1.2e-3 |
//! | 1 | 1.5 | -0.2 | 4.3e-4 / 4.0e-4 | 4.9e-5 / 2.0e-4 | 9.6e-3 / 1.3e-3 |
//! | 2 | 1.5 | -0.2 | 4.3e-4 / 3.9e-4 | 6.1e-5 / 1.9e-4 | 8.6e-3 / 1.3e-3 |
//! | 3 | 1.5 | -0.2 | 4.2e-4 / 3.7e-4 | 8.6e-5 / 2.3e-4 | 7.1e-3 / 1.2e-3 |
//!
//! With more loss on the way (0.5 dB at `eps = 0.01`) the trace of mode 1 that is in any run, some 1e-4, outlives a higher mode in
//! the water, and the comparison ends.
//!
//! Other modes, profiles and losses, from `tests/guide_profiles.rs` (there `t = 0` and 2; the profile is `h_c - r + c r^2`; "losses" are `eps (1 + 0.004 i)` outside and a well
//! of `1 + 0.01 i` inside):
//!
//! | mode | m | profile | eps | order | t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- | --- | --- |
//! | 2 even | 1 | straight | 0.02 | next | 2.4e-4 / 4.6e-4 | 2.4e-3 / 6.2e-4 |
//! | 2 even | 0.55 | straight | 0.02 | next | 2.6e-4 / 5.4e-4 | 5.0e-4 / 5.5e-4 |
//! | 1 | 1 | `c = 1/4` | 0.01 | leading | 6.1e-3 / 1.1e-2 | 3.3e-2 / 2.1e-2 |
//! | 1 | 1 | `c = 1/4` | 0.01 | local slope | 4.6e-4 / 9.7e-4 | 1.1e-2 / 1.3e-3 |
//! | 1 | 1 | `c = 1/4` | 0.01 | next | 1.5e-4 / 4.0e-4 | 1.0e-3 / 1.7e-3 |
//! | 1 | 1 | `c = -1/5` | 0.01 | leading | 6.1e-3 / 1.1e-2 | 3.7e-2 / 2.3e-2 |
//! | 1 | 1 | `c = -1/5` | 0.01 | local slope | 1.9e-4 / 4.8e-4 | 9.0e-3 / 2.1e-3 |
//! | 1 | 1 | `c = -1/5` | 0.01 | next | 1.1e-4 / 3.1e-4 | 3.7e-3 / 1.4e-3 |
//! | 2 | 0.55 | `c = 1/4` | 0.02 | next | 8.2e-4 / 1.7e-3 | 9.7e-4 / 2.9e-3 |
//! | 1 | 0.55 | the same with losses | 0.02 | next | 3.1e-4 / 6.3e-4 | 7.3e-4 / 2.5e-3 |
//! | 2 | 0.55 | the same with losses | 0.02 | next | 8.3e-4 / 1.7e-3 | 9.8e-4 / 3.0e-3 |
//!
//! The energy of the formula inside and (weight `m`) outside is that of the incoming mode to 8.3e-4 at `eps = 0.01`, modes 1
//! to 3, `m` 0.55 to 1.5, `t` from -2 to 2 (`energy_of_the_field_is_that_of_the_incoming_mode`).
//!
//! Steep and bent, `eps = 0.1`, `m = 1`, next order (`steep_and_bent` in `tests/guide_accuracy.rs`; `-`: before the fitted
//! part of the profile; mode 2 with a bend of -0.2 is refused there, since the profile turns):
//!
//! | mode | bend | t = -2 | t = 0 | t = 2 |
//! | --- | --- | --- | --- | --- |
//! | 1 | 0 | 2.8e-3 / 1.3e-2 | 2.3e-3 / 4.5e-3 | 2.3e-2 / 4.7e-3 |
//! | 1 | 0.1 | - | 3.1e-3 / 6.0e-3 | 1.1e-2 / 1.0e-2 |
//! | 1 | 0.2 | - | 3.8e-3 / 7.5e-3 | 1.1e-2 / 1.6e-2 |
//! | 2 | 0 | 8.6e-3 / 2.7e-2 | 8.0e-3 / 1.5e-2 | 1.4e-2 / 1.2e-2 |
//! | 2 | 0.1 | 1.5e-2 / 4.9e-2 | 1.6e-2 / 2.2e-2 | 3.0e-2 / 1.8e-2 |
//!
//! A curved profile is known as a polynomial of the range round the cut-off, which is inverted at complex widths. Where
//! its bend counts for nearly as much in the phase as the straight profile, or where it turns, the field is refused if
//! what lies there is above the tolerance ([`SlopingGuide::tolerance`]), else it is in the error figure. On a taper
//! along a raised cosine (mode 1, `m = 1`, `eps = 0.05`, `t` from -1.8 to 2.4) nothing above 1e-16 is neglected, and
//! [`Passage::departure`] is 4e-3 before and at cut-off, 2e-2 at `t = 1.2`.
//!
//! # Scaling laws
//!
//! Amplitude inside at cut-off for unit energy, solution and [`Order::Next`], `m = 1`; `p` is the exponent of `eps` from the
//! row above (of the solution and of the formula, the same to 1e-4 below `eps = 1e-3`), 1/6 in the limit
//! (`scaling_laws_far_down` in `tests/guide_revival.rs`; starts at `t = -10.5` and -13 agree to 2e-5):
//!
//! | eps | mode 1 | formula | p | mode 2 | formula | p | mode 3 | formula | p |
//! | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |
//! | 1e-2 | 0.37688 | 0.37688 | | 0.35342 | 0.35304 | | 0.32659 | 0.32583 | |
//! | 1e-3 | 0.25810 | 0.25810 | 0.1644 | 0.25365 | 0.25363 | 0.1441 | 0.24633 | 0.24627 | 0.1225 |
//! | 3e-4 | 0.21135 | 0.21135 | 0.1660 | 0.20964 | 0.20963 | 0.1583 | 0.20652 | 0.20651 | 0.1464 |
//! | 1e-4 | 0.17605 | 0.17605 | 0.1664 | 0.17535 | 0.17535 | 0.1626 | 0.17401 | 0.17401 | 0.1559 |
//! | 3e-5 | 0.14406 | 0.14406 | 0.1665 | 0.14381 | 0.14381 | 0.1647 | 0.14330 | 0.14330 | 0.1613 |
//! | 1e-5 | 0.11997 | 0.11997 | 0.1666 | 0.11986 | 0.11986 | 0.1658 | 0.11966 | 0.11966 | 0.1641 |
//!
//! Mode 1 with `m = 0.55` and 1.5 is at 0.1662 and 0.1666 in the last row. Mode 2 after its release, `m = 1`: the static field
//! inside half way to the cut-off of mode 1, and its revival there ([`SlopingGuide::revival`]) and one layer's time later;
//! `p` is 1 and 2/3 in the limit (the same test):
//!
//! | eps | static | p | revival | formula | p | later | formula | p |
//! | --- | --- | --- | --- | --- | --- | --- | --- | --- |
//! | 3e-2 | 1.094e-2 | | 1.465e-2 | 1.450e-2 | | 1.144e-2 | 1.144e-2 | |
//! | 1e-2 | 3.626e-3 | 1.005 | 7.006e-3 | 6.972e-3 | 0.672 | 5.502e-3 | 5.502e-3 | 0.666 |
//! | 3e-3 | 1.083e-3 | 1.003 | 3.131e-3 | 3.125e-3 | 0.669 | 2.466e-3 | 2.465e-3 | 0.667 |
//! | 1e-3 | 3.600e-4 | 1.003 | 1.504e-3 | 1.502e-3 | 0.668 | 1.185e-3 | 1.185e-3 | 0.667 |
//! | 3e-4 | 1.085e-4 | 0.996 | 6.733e-4 | 6.732e-4 | 0.667 | 5.312e-4 | 5.312e-4 | 0.667 |
//! | 1e-4 | 3.444e-5 | 1.044 | 3.236e-4 | 3.236e-4 | 0.667 | 2.554e-4 | 2.554e-4 | 0.667 |
//!
//! Other guides at `eps = 0.01`, formula over solution at the lower cut-off and one layer's time later
//! (`revivals_of_other_guides`): `m = 0.55` 1.04 and 0.88, even modes 1.02 and 0.90, the profile `h_c - r + r^2/25` 0.98 and 0.99,
//! losses (`eps (1 + 0.004 i)`) 0.99 and 1.00. The first two come near 1 like `eps^(1/3)` (1.008 and 0.94, 1.005 and 0.96 at
//! `eps = 0.001`), since their layer has a correction of that order.
//!
//! # The benchmark wedge
//!
//! 25 Hz, 1500 over 1700 m/s, density ratio 1.5, 0.5 dB per wavelength, 200 m deep, 1 in 20; `eps = 0.19`
//! (`tests/guide_wedge.rs`; `t` from -1 to 2, the constant taken at `t = -1`, outside up to six layer lengths): outside 1
//! to 2 % in mode 1, 2 to 5 % in mode 2, 2 to 8 % in mode 3; inside 1.5 to 3, 5 to 6 and 10 %, since modes couple at such a
//! slope. Levels of the beam are within 0.4 dB, those in the water within 1 dB. [`Passage::departure`] covers them.
//! [`Passage::station`] makes an error figure of it that covered every one of 914 points of four runs (`eps` 0.02 and 0.1,
//! straight and curved), 8 to 15 times the error at the median (`tests/guide_profiles.rs`).
//!
//! # Caution
//!
//! Levels from an idealised two-layer model are no basis alone for decisions on the exposure of divers, swimmers or
//! marine animals, on laser safety, or for navigation: real water is layered and rough, real bottoms carry shear and
//! are not uniform, real chips are three-dimensional and have rough edges. Local rules and licensed practice decide.

mod acoustic;
mod adiabatic;
mod along;
mod beam;
mod contour;
mod curve;
mod dispersion;
pub mod layer;
mod modes;
mod passage;
mod profile;
mod revival;
mod second;
mod sensitivity;
mod slab;
mod source;
mod station;
mod symmetric;
mod table;
mod uniform;
mod well;
mod wide;

pub use acoustic::{AcousticGuide, CutOffPlace, ModeCutOff, TwoLayer, level_db};
pub use adiabatic::Adiabatic;
pub use beam::{Beam, Footprint};
pub use dispersion::{ModeAmplitude, ModePhase};
pub use passage::Passage;
pub use profile::Profile;
pub use revival::revival;
pub use sensitivity::{Derivative, Figure, Figures, Sensitivities, sensitivities};
pub use slab::{Polarization, Slab, SlabGuide};
pub use source::SourceField;
pub use station::Station;
pub use symmetric::LaunchedField;
pub use uniform::{Order, SlopingGuide, UniformField};
pub use well::QuantumWell;
