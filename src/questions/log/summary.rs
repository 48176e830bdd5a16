//! Statistics of the powers of a log.

use crate::physics::decibel::dbm_from_watt;
use crate::record::{LogRow, Role};
use crate::statistics::running::{Moments, Trend};
use serde::Serialize;

const S_PER_H: f64 = 3600.0;

/// Statistics of powers.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Summary {
    /// How many powers.
    pub count: usize,
    /// Mean, W: powers are averaged as powers, not as levels.
    pub mean_w: f64,
    /// The mean as a level, dBm; absent where it is not above 0 W.
    pub mean_dbm: Option<f64>,
    /// Standard deviation of a single power, W; absent for one power.
    pub standard_deviation_w: Option<f64>,
    /// The least power.
    pub least: Extreme,
    /// The greatest power.
    pub greatest: Extreme,
    /// Slope of the straight line of least squares through the powers over time, W per hour; absent without times.
    pub drift_w_per_h: Option<f64>,
    /// The same over the mean, per cent per hour; absent where the mean is not above 0 W.
    pub drift_percent_per_h: Option<f64>,
}

/// A power that stands out.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Extreme {
    /// The power, W.
    pub power_w: f64,
    /// As a level, dBm; absent where it is not above 0 W.
    pub power_dbm: Option<f64>,
    /// The line of its row, counted from 1.
    pub line: usize,
    /// Its time as it stands in the log; absent where it has none.
    pub time: Option<String>,
}

/// Gathers statistics row by row.
#[derive(Default)]
pub(super) struct Gathered {
    moments: Moments,
    trend: Trend,
    least: Option<Seen>,
    greatest: Option<Seen>,
}

/// A power that stands out so far; it may be overtaken by the next row, so its texts are made at the end.
struct Seen {
    power_w: f64,
    line: usize,
    time: Vec<u8>,
}

impl Gathered {
    /// Takes the power of a row; `since_s` is its time after the first one.
    pub(super) fn add(&mut self, power_w: f64, since_s: Option<f64>, row: &LogRow) {
        self.moments.add(power_w);
        if let Some(since_s) = since_s {
            self.trend.add(since_s, power_w);
        }
        if self.least.as_ref().is_none_or(|least| power_w < least.power_w) {
            see(&mut self.least, power_w, row);
        }
        if self.greatest.as_ref().is_none_or(|greatest| power_w > greatest.power_w) {
            see(&mut self.greatest, power_w, row);
        }
    }

    /// The statistics; nothing without powers.
    pub(super) fn summary(self) -> Option<Summary> {
        let (mean_w, least, greatest) = (self.moments.mean()?, self.least?, self.greatest?);
        let drift_w_per_h = self.trend.slope().map(|slope| slope * S_PER_H);
        Some(Summary {
            count: self.moments.count(),
            mean_w,
            mean_dbm: level(mean_w),
            standard_deviation_w: self.moments.standard_deviation(),
            least: least.extreme(),
            greatest: greatest.extreme(),
            drift_w_per_h,
            drift_percent_per_h: drift_w_per_h
                .filter(|_| mean_w > 0.0)
                .map(|drift| drift / mean_w * 100.0)
                .filter(|percent| percent.is_finite()),
        })
    }
}

/// A power as a level, where it has one.
pub(super) fn level(power_w: f64) -> Option<f64> {
    (power_w > 0.0).then(|| dbm_from_watt(power_w))
}

fn see(place: &mut Option<Seen>, power_w: f64, row: &LogRow) {
    let seen = place.get_or_insert(Seen { power_w, line: 0, time: Vec::new() });
    (seen.power_w, seen.line) = (power_w, row.line);
    seen.time.clear();
    seen.time.extend_from_slice(row.cell(Role::Date));
    seen.time.push(b' ');
    seen.time.extend_from_slice(row.cell(Role::Time));
}

impl Seen {
    fn extreme(self) -> Extreme {
        let time = String::from_utf8_lossy(self.time.trim_ascii()).into_owned();
        Extreme {
            power_w: self.power_w,
            power_dbm: level(self.power_w),
            line: self.line,
            time: Some(time).filter(|time| !time.is_empty()),
        }
    }
}
