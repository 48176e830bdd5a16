//! One formula with units a function.
//!
//! Conventions, everywhere below:
//!
//! * SI units; the unit is in the name. Plain numbers go in, a plain number comes out.
//! * Spectra are one-sided. A noise is its mean square in A² or its RMS value in A, as the name says.
//! * The noise bandwidth is ∫|H|²df/|H(0)|², not the −3 dB point ([`filter`] turns one into the other).
//! * Powers are optical and at the detector; an average power is that of equally frequent symbols.
//! * Decibels are 10 log₁₀ of a ratio of optical powers, also for an extinction ratio.

pub mod avalanche;
pub mod bias;
pub mod closed_form;
pub mod constants;
pub mod decibel;
pub mod decision;
pub mod excess_noise;
pub mod filter;
pub mod levels;
pub mod light;
pub mod meter;
pub mod miller;
pub mod noise;
pub mod quantum_limit;
pub mod receiver;
pub mod sensitivity;
pub mod spectrum;
