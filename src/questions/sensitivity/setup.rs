//! From a bench to a receiver in SI units: the one place where the sensitivity's inputs are converted.

use crate::bench::Bench;
use crate::bench::amplifier::{Amplifier, CircuitNoise};
use crate::bench::avalanche::{Avalanche, ExcessNoise as NoiseLaw};
use crate::bench::detector::{Detector, Responsivity};
use crate::bench::source::Format;
use crate::fault::{Code, Fault, Faults};
use crate::physics::closed_form::{self, IdealLink};
use crate::physics::constants::ZERO_CELSIUS_K;
use crate::physics::decibel::ratio_from_db;
use crate::physics::excess_noise::{ExcessNoise, FactorTable};
use crate::physics::filter::noise_bandwidth_ratio;
use crate::physics::receiver::Receiver;
use crate::physics::sensitivity::Link;
use crate::physics::{avalanche, light, noise};
use crate::questions::needs::Needs;
use crate::questions::spectral::Spectral;
use crate::statistics::normal::upper_tail_quantile;
use crate::tree::Tree;

/// A receiver and what is asked of it, in SI units.
#[derive(Debug, Clone)]
pub struct Setup {
    /// Everything but the gain; see [`Setup::link`].
    base: Link,
    /// Excess noise, for an avalanche detector.
    pub excess_noise: Option<ExcessNoise>,
    /// Mean gain; 1 for a PIN.
    pub gain: f64,
    /// Detector bandwidth at unit gain and gain–bandwidth product, Hz, as far as given.
    pub detector_bandwidth_hz: Option<f64>,
    /// Gain–bandwidth product, Hz.
    pub gain_bandwidth_hz: Option<f64>,
    /// −3 dB bandwidth of the electronics, Hz.
    pub bandwidth_hz: Option<f64>,
    /// The error ratio to reach.
    pub target: f64,
    /// Wavelength, m.
    pub wavelength_m: Option<f64>,
    /// Bits per second.
    pub bit_rate_hz: Option<f64>,
    /// The format.
    pub format: Format,
    /// Power that arrives at the detector, dBm.
    pub received_dbm: Option<f64>,
}

impl Setup {
    /// Reads all that the sensitivity needs.
    pub fn new(bench: &Bench) -> Result<Setup, Faults> {
        Setup::read(bench, |gain, needs| needs.number(gain, "/detector/avalanche/gain"))
    }

    /// The same where the bench's own gain is not asked for; without one it is 1.
    pub fn at_any_gain(bench: &Bench) -> Result<Setup, Faults> {
        Setup::read(bench, |_, _| Some(1.0))
    }

    fn read(
        bench: &Bench,
        mut wanted: impl FnMut(Option<f64>, &mut Needs) -> Option<f64>,
    ) -> Result<Setup, Faults> {
        let mut needs = Needs::default();
        let source = needs.part(&bench.source, "/source", "A source is needed: its format and wavelength.");
        let detector = needs.part(&bench.detector, "/detector", "A detector is needed.");
        let amplifier = needs.part(&bench.amplifier, "/amplifier", "The amplifier and its noise are needed.");
        let decision =
            needs.part(&bench.decision, "/decision", "A decision is needed: which error ratio to reach.");
        let target =
            decision.and_then(|part| needs.number(part.target_error_ratio, "/decision/target_error_ratio"));
        let wavelength_nm = source.and_then(|source| source.wavelength_nm);
        let responsivity = detector.and_then(|part| responsivity_a_per_w(part, wavelength_nm, &mut needs));
        let noise_bandwidth = amplifier.and_then(|part| noise_bandwidth_hz(part, &mut needs));
        let circuit = amplifier.and_then(|part| circuit_noise_a(part, bench, noise_bandwidth, &mut needs));
        let avalanche = detector.and_then(|part| part.avalanche.as_ref());
        let gain = avalanche.map(|part| wanted(part.gain, &mut needs));
        let noise = avalanche.map(|part| excess_noise(part, &mut needs));
        if let (Some(Some(gain)), Some(Some(noise))) = (gain, &noise)
            && gain > noise.reach()
        {
            let sentence = format!(
                "The table of excess noise ends at a gain of {}; {gain} lies outside, and nothing is guessed beyond a table.",
                noise.reach()
            );
            let given = Tree::Number(gain);
            needs.faults.push(Fault::new("/detector/avalanche/gain", Code::Range, given, &sentence));
        }
        let made = (|| {
            let (source, detector, amplifier, decision) = (source?, detector?, amplifier?, decision?);
            let loss_db = bench.path.as_ref().and_then(|path| path.loss_db).unwrap_or(0.0);
            let background = bench.surroundings.as_ref().and_then(|part| part.background_power_w);
            let receiver = Receiver {
                responsivity_a_per_w: responsivity?,
                gain: 1.0,
                excess_noise_factor: 1.0,
                noise_bandwidth_hz: noise_bandwidth?,
                circuit_noise_a: circuit?,
                dark_current_bulk_a: detector.dark_current_bulk_a.unwrap_or(0.0),
                dark_current_surface_a: detector.dark_current_surface_a.unwrap_or(0.0),
                background_power_w: background.unwrap_or(0.0),
                rin_per_hz: source.rin_db_per_hz.map_or(0.0, ratio_from_db),
            };
            Some(Setup {
                base: Link {
                    receiver,
                    format: source.format.into(),
                    extinction_ratio: source.extinction_ratio_db.map_or(f64::INFINITY, ratio_from_db),
                    threshold: decision.threshold.into(),
                },
                excess_noise: noise.flatten(),
                gain: gain.map_or(Some(1.0), |gain| gain)?,
                detector_bandwidth_hz: detector.bandwidth_hz,
                gain_bandwidth_hz: avalanche.and_then(|part| part.gain_bandwidth_hz),
                bandwidth_hz: amplifier.bandwidth_hz,
                target: target?,
                wavelength_m: wavelength_nm.map(|nm| nm * 1e-9),
                bit_rate_hz: source.symbol_rate_baud.map(|rate| rate * source.format.bits_per_symbol()),
                format: source.format,
                received_dbm: source.average_power_dbm.map(|launched| launched - loss_db),
            })
        })();
        needs.all(made)
    }

    /// Whether the detector has an avalanche.
    pub fn is_avalanche(&self) -> bool {
        self.excess_noise.is_some()
    }

    /// The link at another gain than the bench's, within the reach of its excess noise. Without an avalanche there is none
    /// but 1.
    pub fn link_at(&self, gain: f64) -> Link {
        let mut link = self.base;
        if let Some(noise) = &self.excess_noise {
            link.receiver.gain = gain;
            link.receiver.excess_noise_factor = noise.factor(gain);
        }
        link
    }

    /// The highest gain at which the excess noise is known, or `most`.
    pub fn reach(&self, most: f64) -> f64 {
        self.excess_noise.as_ref().map_or(most, |noise| noise.reach().min(most))
    }

    /// The best gain by the textbook's closed form; nothing where it has no upper end, for measured excess noise, and with
    /// more than two levels.
    pub fn closed_form_gain(&self) -> Option<f64> {
        let receiver = &self.base.receiver;
        let ideal = IdealLink {
            q_factor: upper_tail_quantile(self.target),
            responsivity_a_per_w: receiver.responsivity_a_per_w,
            noise_bandwidth_hz: receiver.noise_bandwidth_hz,
            circuit_noise_a: receiver.circuit_noise_a,
        };
        match (self.format, self.excess_noise.as_ref()?) {
            (Format::Pam4, _) | (_, ExcessNoise::Table(_)) => None,
            (Format::Nrz, ExcessNoise::McIntyre { ionisation_ratio }) => {
                closed_form::best_gain(&ideal, *ionisation_ratio)
            }
            (Format::Nrz, ExcessNoise::Power { exponent }) => {
                closed_form::best_gain_by_power(&ideal, *exponent)
            }
        }
    }

    /// The link on the bench.
    pub fn link(&self) -> Link {
        self.link_at(self.gain)
    }

    /// −3 dB bandwidth of the detector at a gain, Hz; nothing where none was given.
    pub fn detector_bandwidth_at(&self, gain: f64) -> Option<f64> {
        match (self.detector_bandwidth_hz, self.gain_bandwidth_hz) {
            (Some(unit_gain), Some(product)) => Some(avalanche::bandwidth_hz(gain, unit_gain, product)),
            (Some(unit_gain), None) => Some(unit_gain),
            (None, Some(product)) => Some(product / gain),
            (None, None) => None,
        }
    }
}

fn excess_noise(part: &Avalanche, needs: &mut Needs) -> Option<ExcessNoise> {
    const AT: &str = "/detector/avalanche/excess_noise";
    match &part.excess_noise {
        NoiseLaw::Mcintyre => {
            let ratio = needs.number(part.ionisation_ratio, "/detector/avalanche/ionisation_ratio");
            Some(ExcessNoise::McIntyre { ionisation_ratio: ratio? })
        }
        NoiseLaw::Power { exponent } => {
            let exponent = needs.number(*exponent, &format!("{AT}/exponent"));
            Some(ExcessNoise::Power { exponent: exponent? })
        }
        NoiseLaw::Table { points } => {
            let pairs: Vec<(f64, f64)> = points.iter().map(|point| (point.gain, point.factor)).collect();
            if pairs.iter().all(|(gain, _)| *gain == 1.0) {
                let sentence = "The measured excess noise is needed: its factor at a gain above 1 at least.";
                needs.faults.push(Fault::missing(&format!("{AT}/points"), sentence));
                return None;
            }
            let sentence = "The gains of the excess noise table lie too close for a curve through them.";
            let fault = |_| Fault::new(&format!("{AT}/points"), Code::Conflict, Tree::Null, sentence);
            needs.found(FactorTable::new(&pairs).map_err(fault)).map(ExcessNoise::Table)
        }
    }
}

fn responsivity_a_per_w(detector: &Detector, wavelength_nm: Option<f64>, needs: &mut Needs) -> Option<f64> {
    let sentence = "The detector's responsivity is needed: a value, a quantum efficiency or a table.";
    match needs.part(&detector.responsivity, "/detector/responsivity", sentence)? {
        Responsivity::Value { a_per_w } => needs.number(*a_per_w, "/detector/responsivity/a_per_w"),
        Responsivity::QuantumEfficiency { efficiency } => {
            let efficiency = needs.number(*efficiency, "/detector/responsivity/efficiency");
            let wavelength_nm = needs.number(wavelength_nm, "/source/wavelength_nm");
            Some(light::responsivity_a_per_w(efficiency?, wavelength_nm? * 1e-9))
        }
        Responsivity::Table { points } => {
            let wavelength_nm = needs.number(wavelength_nm, "/source/wavelength_nm")?;
            let table = Spectral::responsivity(points)?;
            let pointer = "/source/wavelength_nm";
            needs.found(table.at_field(wavelength_nm, pointer, "The detector's responsivity table"))
        }
    }
}

fn noise_bandwidth_hz(amplifier: &Amplifier, needs: &mut Needs) -> Option<f64> {
    if amplifier.noise_bandwidth_hz.is_some() {
        return amplifier.noise_bandwidth_hz;
    }
    let sentence = "The filter's shape is needed to make a noise bandwidth of the −3 dB bandwidth; \
                    or give the noise bandwidth itself.";
    let filter = needs.part(&amplifier.filter, "/amplifier/filter", sentence);
    let bandwidth_hz = needs.number(amplifier.bandwidth_hz, "/amplifier/bandwidth_hz")?;
    Some(bandwidth_hz * noise_bandwidth_ratio((*filter?).into()))
}

fn circuit_noise_a(
    amplifier: &Amplifier,
    bench: &Bench,
    noise_bandwidth_hz: Option<f64>,
    needs: &mut Needs,
) -> Option<f64> {
    let sentence = "The circuit noise is needed: rms, density, or load resistor.";
    match needs.part(&amplifier.noise, "/amplifier/noise", sentence)? {
        CircuitNoise::Rms { current_a } => needs.number(*current_a, "/amplifier/noise/current_a"),
        CircuitNoise::Density { a_per_rthz } => {
            let density = needs.number(*a_per_rthz, "/amplifier/noise/a_per_rthz");
            Some(density? * noise_bandwidth_hz?.sqrt())
        }
        CircuitNoise::Resistor { ohm, noise_figure_db, temperature_k } => {
            let room_k = bench.surroundings.as_ref().and_then(|part| part.temperature_c);
            let temperature_k = temperature_k.or(room_k.map(|celsius| celsius + ZERO_CELSIUS_K));
            let resistance_ohm = needs.number(*ohm, "/amplifier/noise/ohm");
            let temperature_k = needs.number(temperature_k, "/amplifier/noise/temperature_k");
            let noise_factor = ratio_from_db(noise_figure_db.unwrap_or(0.0));
            let (bandwidth_hz, ohm) = (noise_bandwidth_hz?, resistance_ohm?);
            let mean_square = noise::thermal_noise_a2(ohm, temperature_k?, noise_factor, bandwidth_hz);
            if !mean_square.is_finite() {
                let sentence = "The load resistance is so small that its noise is beyond all numbers.";
                needs.faults.push(Fault::new(
                    "/amplifier/noise/ohm",
                    Code::Range,
                    Tree::Number(ohm),
                    sentence,
                ));
                return None;
            }
            Some(mean_square.sqrt())
        }
    }
}
