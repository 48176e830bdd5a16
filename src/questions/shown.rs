//! What an answer looks like on paper: the same few shapes for every question.

use crate::quantity::write;
use serde::Serialize;

/// An answer, ready to be shown.
#[derive(Debug, Clone, PartialEq, Serialize, Default)]
pub struct Shown {
    /// The answer in one sentence.
    pub headline: Headline,
    /// What else was found, each with its unit.
    pub facts: Vec<Fact>,
    /// What the answer is made of; the shares of each budget add up to one.
    pub budgets: Vec<Budget>,
    /// Tables.
    pub tables: Vec<Table>,
    /// Where light, voltage or glass can hurt.
    pub cautions: Vec<Caution>,
    /// What makes this answer doubtful, each ending in advice.
    pub doubts: Vec<String>,
    /// What was assumed, and whose method it is.
    pub notes: Vec<String>,
}

/// A figure and the rest of its sentence.
#[derive(Debug, Clone, PartialEq, Serialize, Default)]
pub struct Headline {
    /// Value and unit.
    pub figure: String,
    /// The sentence that goes on from it.
    pub sentence: String,
    /// The figure for a spreadsheet, with its unit.
    pub copy: String,
}

/// A named figure.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Fact {
    /// What it is.
    pub name: String,
    /// Value and unit.
    pub figure: String,
    /// A remark; empty where there is none.
    pub note: String,
    /// The figure for a spreadsheet, with its unit.
    pub copy: String,
}

impl Fact {
    /// A figure in a unit, to be shown with the prefix that suits.
    pub fn prefixed(name: &str, value: f64, unit: &str) -> Fact {
        Fact::of(name, write::prefixed(value, unit, 4), value, unit)
    }

    /// A figure with a fixed count of decimals.
    pub fn fixed(name: &str, value: f64, decimals: usize, unit: &str) -> Fact {
        Fact::of(name, joined(&write::fixed(value, decimals), unit), value, unit)
    }

    /// A pure number.
    pub fn number(name: &str, value: f64) -> Fact {
        Fact::of(name, write::significant(value, 4), value, "")
    }

    /// A pure number that was given.
    pub fn given(name: &str, value: f64) -> Fact {
        Fact::of(name, write::brief(value, 6), value, "")
    }

    /// An error ratio.
    pub fn ratio(name: &str, value: f64) -> Fact {
        Fact::of(name, write::scientific(value, 3), value, "")
    }

    fn of(name: &str, figure: String, value: f64, unit: &str) -> Fact {
        Fact { name: name.to_owned(), figure, note: String::new(), copy: joined(&write::plain(value), unit) }
    }

    /// The same with a remark.
    pub fn noted(self, note: impl Into<String>) -> Fact {
        Fact { note: note.into(), ..self }
    }
}

/// A number and its unit.
pub fn joined(number: &str, unit: &str) -> String {
    if unit.is_empty() { number.to_owned() } else { format!("{number} {unit}") }
}

/// What a quantity is made of.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Budget {
    /// Of what.
    pub title: String,
    /// The whole, with its unit.
    pub total: String,
    /// The parts.
    pub rows: Vec<BudgetRow>,
}

/// One cause in a budget.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BudgetRow {
    /// What contributes.
    pub cause: String,
    /// How much, with its unit.
    pub figure: String,
    /// Its share of the whole.
    pub share: f64,
}

/// A table of texts.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Table {
    /// Of what.
    pub title: String,
    /// The heads of its columns, with units.
    pub columns: Vec<String>,
    /// Its rows.
    pub rows: Vec<Vec<String>>,
}

/// A caution for people and things.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Caution {
    /// What can hurt.
    pub about: &'static str,
    /// What to do about it, and whose rules decide.
    pub sentence: &'static str,
}

/// Light that cannot be seen.
pub const INVISIBLE_LIGHT: Caution = Caution {
    about: "Invisible light",
    sentence: "Light at these wavelengths cannot be seen and can injure the eye. Never look into a fibre or a \
               connector, with or without optics. The hazard class under IEC 60825-1 and -2 and the laser \
               safety officer decide what may be opened and when, not this page.",
};

/// Bare fibre and connectors.
pub const GLASS: Caution = Caution {
    about: "Glass and connectors",
    sentence: "Wear safety glasses where fibre is cut, and put the shards into their bin. Inspect and clean \
               connectors before mating: dirt costs more than any number on this page, and burns in at high power.",
};

/// The bias of an avalanche photodiode.
pub const BIAS_VOLTAGE: Caution = Caution {
    about: "Bias voltage",
    sentence: "An avalanche photodiode runs at tens to hundreds of volts. Limit the supply's current, insulate \
               the leads and discharge before touching. Work on it is for qualified persons under the local \
               electrical rules.",
};

/// Too much light on the detector.
pub const OVERLOAD: Caution = Caution {
    about: "Overload",
    sentence: "The power here is above 1 mW: it may overload or destroy a receiver. Check the detector's \
               damage limit and put an attenuator in first.",
};

/// What light does at full gain.
pub const OVERLOAD_CURRENT: Caution = Caution {
    about: "Overload current",
    sentence: "At full gain a burst of light becomes a current that can destroy an avalanche photodiode before a hand \
               moves. Set the supply's current limit first, raise the bias slowly, and begin with the light attenuated.",
};
