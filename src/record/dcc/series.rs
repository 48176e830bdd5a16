//! The numbers of a quantity with their units and uncertainties, in each way in which D-SI writes them.

use super::unit::understood;
use super::xml::{DCC, SI, child, is, text};
use roxmltree::Node;

/// Numbers as they are written.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Series {
    pub(super) values: Vec<Written>,
}

/// One number as it is written.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Written {
    pub(super) number: String,
    pub(super) unit: String,
    pub(super) uncertainty: Option<Uncertainty>,
}

/// The uncertainty of a number.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Uncertainty {
    /// In the unit of the number, or relative where it says so.
    pub(super) number: String,
    /// The unit of a relative one; nothing for one in the unit of the number.
    pub(super) relative_unit: Option<String>,
    /// The coverage factor; nothing where none is written.
    pub(super) k: Option<f64>,
    /// Whether it is a standard uncertainty, whose k is 1 by what it is.
    pub(super) standard: bool,
}

/// Reads the numbers of a quantity; a sentence where it holds something else.
pub(super) fn series(quantity: Node) -> Result<Series, String> {
    let relative = child(quantity, DCC, "relativeUncertainty");
    let mut found = match quantity.children().find(|node| holds_numbers(*node)) {
        Some(node) if is(node, SI, "hybrid") => hybrid(node)?,
        Some(node) => plain(node)?,
        None => return Err("It holds no real numbers.".to_owned()),
    };
    if let Some(relative) = relative.and_then(|node| node.first_element_child()) {
        let shares = plain(relative)?.values;
        for (at, value) in
            found.values.iter_mut().enumerate().filter(|(_, value)| value.uncertainty.is_none())
        {
            let share = if shares.len() == 1 { shares.first() } else { shares.get(at) };
            value.uncertainty = share.map(|share| Uncertainty {
                number: share.number.clone(),
                relative_unit: Some(share.unit.clone()),
                k: None,
                standard: false,
            });
        }
    }
    if found.values.is_empty() { Err("It holds no numbers.".to_owned()) } else { Ok(found) }
}

fn holds_numbers(node: Node) -> bool {
    ["real", "realListXMLList", "hybrid", "list", "realList"].iter().any(|name| is(node, SI, name))
}

/// The same quantity in several units: the first of which the unit is known here, else the first.
fn hybrid(node: Node) -> Result<Series, String> {
    let all: Vec<Series> =
        node.children().filter(|node| holds_numbers(*node)).map(plain).collect::<Result<_, _>>()?;
    let known = |series: &&Series| series.values.iter().all(|value| understood(&value.unit).is_some());
    let chosen = all.iter().find(known).or_else(|| all.first()).cloned();
    chosen.ok_or_else(|| "It holds no real numbers.".to_owned())
}

fn plain(node: Node) -> Result<Series, String> {
    match node.tag_name().name() {
        "real" | "relativeUncertaintySingle" => {
            Ok(Series { values: vec![one(node, &text(child(node, SI, "unit")), None)] })
        }
        "realListXMLList" | "relativeUncertaintyXmlList" => blank_separated(node),
        _ => Ok(listed(node)),
    }
}

/// A single number.
fn one(node: Node, unit: &str, shared: Option<&Uncertainty>) -> Written {
    let number = text(child(node, SI, "value"));
    Written { number, unit: unit.to_owned(), uncertainty: uncertainty(node).or_else(|| shared.cloned()) }
}

/// The uncertainty of a single number, in either dialect.
fn uncertainty(node: Node) -> Option<Uncertainty> {
    let newer = child(node, SI, "measurementUncertaintyUnivariate");
    let value = |node: Node, name: &str| {
        let number = text(child(node, SI, name));
        (!number.is_empty()).then_some(number)
    };
    let k = |node: Node| text(child(node, SI, "coverageFactor")).parse().ok();
    let absolute = |number, k, standard| Uncertainty { number, relative_unit: None, k, standard };
    if let Some(expanded) = child(node, SI, "expandedUnc") {
        return Some(absolute(value(expanded, "uncertainty")?, k(expanded), false));
    }
    let inside = newer.unwrap_or(node);
    if let Some(expanded) = child(inside, SI, "expandedMU") {
        return Some(absolute(value(expanded, "valueExpandedMU")?, k(expanded), false));
    }
    // A standard uncertainty stands by itself or before an interval.
    let standard = [
        ("standardMU", "valueStandardMU"),
        ("coverageIntervalMU", "valueStandardMU"),
        ("coverageInterval", "standardUnc"),
    ];
    standard.iter().find_map(|(name, within)| {
        let number = value(child(inside, SI, name)?, within)?;
        Some(absolute(number, Some(1.0), true))
    })
}

/// Numbers in one text, parted by blanks; a unit, an uncertainty or a k alone stands for all of them.
fn blank_separated(node: Node) -> Result<Series, String> {
    let list = |node: Node, name: &str| -> Vec<String> {
        text(child(node, SI, name)).split(' ').filter(|part| !part.is_empty()).map(str::to_owned).collect()
    };
    let numbers = list(node, "valueXMLList");
    let units = list(node, "unitXMLList");
    let count = numbers.len();
    let fits = |list: &[String], what: &str| {
        if list.len() <= 1 || list.len() == count {
            return Ok(());
        }
        Err(format!(
            "It has {count} numbers and {} {what}; one for all or one for each is needed.",
            list.len()
        ))
    };
    fits(&units, "units")?;
    let newer = child(node, SI, "measurementUncertaintyUnivariateXMLList").unwrap_or(node);
    let kinds = [
        (node, "expandedUncXMLList", "uncertaintyXMLList", false),
        (newer, "expandedMUXMLList", "valueExpandedMUXMLList", false),
        (newer, "standardMUXMLList", "valueStandardMUXMLList", true),
        (newer, "coverageIntervalMUXMLList", "valueStandardMUXMLList", true),
        (node, "coverageIntervalXMLList", "standardUncXMLList", true),
    ];
    let found = kinds
        .iter()
        .find_map(|(parent, name, within, standard)| Some((child(*parent, SI, name)?, *within, *standard)));
    let (uncertainties, factors, standard) = match found {
        Some((node, within, standard)) => (list(node, within), list(node, "coverageFactorXMLList"), standard),
        None => (Vec::new(), Vec::new(), false),
    };
    fits(&uncertainties, "uncertainties")?;
    fits(&factors, "coverage factors")?;
    let at = |list: &[String], index: usize| list.get(if list.len() == 1 { 0 } else { index }).cloned();
    let value = |(index, number): (usize, String)| {
        let k = if standard { Some(1.0) } else { at(&factors, index).and_then(|k| k.parse().ok()) };
        let uncertainty =
            at(&uncertainties, index).map(|number| Uncertainty { number, relative_unit: None, k, standard });
        Written { number, unit: at(&units, index).unwrap_or_default(), uncertainty }
    };
    Ok(Series { values: numbers.into_iter().enumerate().map(value).collect() })
}

/// Numbers one by one; a unit and an uncertainty may stand once before them.
fn listed(node: Node) -> Series {
    let reals = node.descendants().filter(|node| is(*node, SI, "real"));
    let value = |real: Node| {
        let above = |names: &[&str]| {
            real.ancestors()
                .take_while(|up| up.range().start >= node.range().start)
                .find_map(|up| names.iter().find_map(|name| child(up, SI, name)))
        };
        let unit = child(real, SI, "unit").or_else(|| above(&["listUnit"]));
        let shared = above(&["listUnivariateUnc", "listMeasurementUncertaintyUnivariate"]);
        one(real, &text(unit), shared.and_then(uncertainty).as_ref())
    };
    Series { values: reals.map(value).collect() }
}
