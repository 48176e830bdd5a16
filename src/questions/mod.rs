//! What someone came to find out: one question a file, each a pure function of the bench.

pub mod avalanche_bias;
pub mod curve;
pub mod device_fit;
pub mod log;
pub mod needs;
pub mod prepared;
pub mod reading;
pub mod sensitivity;
pub mod shown;
pub mod spectral;
pub mod transfer;

use crate::bench::Bench;
use crate::fault::Faults;
use prepared::Prepared;
use serde::Serialize;

/// Named numbers of an answer; a number that does not exist for this bench is absent.
pub type Numbers = Vec<(&'static str, Option<f64>)>;

/// A question that can be asked of a bench.
#[derive(Debug, Clone, Copy)]
pub struct Question {
    /// Its name for scripts.
    pub name: &'static str,
    /// The question in plain words.
    pub asks: &'static str,
    /// The parts and numbers of the bench that it reads, by pointer; a part stands for all of its fields.
    pub fields: &'static [&'static str],
    /// The whole answer.
    pub ask: fn(&Bench) -> Result<Answer, Faults>,
    /// Only its numbers, for sweeps and searches.
    pub numbers: fn(&Bench) -> Result<Numbers, Faults>,
    /// The numbers whose uncertainty is offered, with what each is called; the headline's own comes first.
    pub uncertain: &'static [(&'static str, &'static str)],
    /// One of its numbers made ready to be asked for many times.
    pub prepare: fn(&Bench, &'static str) -> Result<Prepared, Faults>,
}

/// All questions.
pub const QUESTIONS: &[Question] = &[
    Question {
        name: "sensitivity",
        asks: "How little light is enough?",
        fields: &[
            "/source",
            "/path",
            "/detector/responsivity",
            "/detector/dark_current_bulk_a",
            "/detector/dark_current_surface_a",
            "/detector/bandwidth_hz",
            "/detector/avalanche/gain",
            "/detector/avalanche/ionisation_ratio",
            "/detector/avalanche/excess_noise",
            "/detector/avalanche/gain_bandwidth_hz",
            "/amplifier",
            "/decision",
            "/surroundings",
        ],
        ask: |bench| sensitivity::ask(bench).map(|answer| Answer::Sensitivity(Box::new(answer))),
        numbers: sensitivity::numbers,
        uncertain: &[
            ("average_power_w", "the sensitivity"),
            ("average_power_dbm", "the sensitivity, as a level"),
        ],
        prepare: sensitivity::prepare,
    },
    Question {
        name: "reading",
        asks: "What is this reading worth?",
        fields: &[
            "/source/wavelength_nm",
            "/source/linewidth_nm",
            "/source/spectrum",
            "/meter",
            "/detector/responsivity/kind",
            "/detector/responsivity/points",
        ],
        ask: |bench| reading::ask(bench).map(|answer| Answer::Reading(Box::new(answer))),
        numbers: reading::numbers,
        uncertain: &[
            ("power_w", "the absolute power"),
            ("ratio", "the ratio to the other reading"),
            ("correction_factor", "the correction alone"),
        ],
        prepare: reading::prepare,
    },
    Question {
        name: "avalanche_bias",
        asks: "Where should the avalanche bias sit?",
        fields: &["/source", "/path", "/detector", "/amplifier", "/decision", "/surroundings"],
        ask: |bench| avalanche_bias::ask(bench).map(|answer| Answer::AvalancheBias(Box::new(answer))),
        numbers: avalanche_bias::numbers,
        uncertain: &[("bias_v", "the bias"), ("best_gain", "the best gain")],
        prepare: avalanche_bias::prepare,
    },
    Question {
        name: "device_fit",
        asks: "What is this device?",
        fields: &["/measurements"],
        ask: |bench| device_fit::ask(bench).map(|answer| Answer::DeviceFit(Box::new(answer))),
        numbers: device_fit::numbers,
        // A fit brings its own intervals, from the scatter of the points.
        uncertain: &[],
        prepare: |_, of| Ok(Prepared::by_numbers(device_fit::numbers, of)),
    },
];

/// An answer to any question.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Answer {
    /// How little light is enough.
    Sensitivity(Box<sensitivity::Answer>),
    /// What a reading is worth.
    Reading(Box<reading::Answer>),
    /// Where the avalanche bias should sit.
    AvalancheBias(Box<avalanche_bias::Answer>),
    /// What a device is.
    DeviceFit(Box<device_fit::Answer>),
}

impl Answer {
    /// The answer as it is shown, and what is drawn.
    pub fn shown_mut(&mut self) -> (&mut shown::Shown, &mut Vec<curve::Curve>) {
        match self {
            Answer::Sensitivity(answer) => (&mut answer.shown, &mut answer.curves),
            Answer::Reading(answer) => (&mut answer.shown, &mut answer.curves),
            Answer::AvalancheBias(answer) => (&mut answer.shown, &mut answer.curves),
            Answer::DeviceFit(answer) => (&mut answer.shown, &mut answer.curves),
        }
    }
}
