//! Between ratios and decibels, and between watts and dBm.
//!
//! Source: IEC 60027-3:2002 for the decibel of power quantities; 0 dBm is one milliwatt.

/// A power as a level: dB above one milliwatt.
///
/// * `power_w` – > 0
///
/// ```
/// use leastlight::physics::decibel::dbm_from_watt;
///
/// assert_eq!(dbm_from_watt(1e-3), 0.0);
/// ```
pub fn dbm_from_watt(power_w: f64) -> f64 {
    // Shifting by 30 dB afterwards keeps the digits of a power that is a round number of watts.
    db_from_ratio(power_w) + 30.0
}

/// A level in dB above one milliwatt as a power in W.
///
/// ```
/// use leastlight::physics::decibel::watt_from_dbm;
///
/// assert!((watt_from_dbm(-30.0) / 1e-6 - 1.0).abs() < 1e-15);
/// ```
pub fn watt_from_dbm(level_dbm: f64) -> f64 {
    ratio_from_db(level_dbm - 30.0)
}

/// A ratio of powers in dB.
///
/// * `ratio` – > 0
///
/// ```
/// use leastlight::physics::decibel::db_from_ratio;
///
/// assert_eq!(db_from_ratio(100.0), 20.0);
/// ```
pub fn db_from_ratio(ratio: f64) -> f64 {
    debug_assert!(ratio > 0.0);
    10.0 * libm::log10(ratio)
}

/// The ratio of powers that so many dB stand for.
///
/// ```
/// use leastlight::physics::decibel::ratio_from_db;
///
/// assert!((ratio_from_db(3.0) - 1.995).abs() < 0.001);
/// ```
pub fn ratio_from_db(db: f64) -> f64 {
    libm::pow(10.0, db / 10.0)
}
