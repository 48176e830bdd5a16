//! A digital certificate as it is read: what it states, and what was taken for what.

use super::chosen::{Chosen, Taken};
use super::points::{DccCertificate, certificate};
use super::quantity::{DccQuantity, quantities};
use super::xml::{DCC, SIGNATURE, child, down, in_words, is, parsed, text};
use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use serde::Serialize;

/// What was read of a digital certificate.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DccReading {
    /// The version of the format that the file names.
    pub schema_version: String,
    /// The certificate's number.
    pub identifier: String,
    /// Who calibrated.
    pub laboratory: String,
    /// What was calibrated.
    pub item: String,
    /// When it was done, as it is written.
    pub end_date: String,
    /// Whether the file is signed. A signature is never verified here.
    pub signed: bool,
    /// What it states.
    pub quantities: Vec<DccQuantity>,
    /// Which quantities were taken for what.
    pub taken: Taken,
    /// Whether that is a guess, to be confirmed by choosing.
    pub guessed: bool,
    /// The meter's certificate; absent while it is not known which quantities make it.
    pub certificate: Option<DccCertificate>,
    /// What was assumed or left out, one sentence each.
    pub notes: Vec<String>,
}

/// Reads a digital calibration certificate: lists its quantities, guesses from units and names which of them make the
/// certificate of a meter, and makes it.
///
/// `choices` overrule the guess: `{ wavelength, value, expanded, form, coverage_factor }`, the first three being
/// indices of quantities; `expanded` may also be `"none"`, so that no uncertainty is taken. Units that are no wavelength, responsivity or ratio are listed, and refused by name where they
/// are chosen.
///
/// ```text
/// deviation d       c = 1/(1 + d),  U_% = 100 U/(1 + d)         d = (indicated − true)/true
/// otherwise         U_% = 100 U/value
/// several k         U of each point is brought to the greatest k
/// ```
pub fn read_dcc(text_of_file: &str, choices: &Tree) -> Result<DccReading, Faults> {
    let text_of_file = text_of_file.strip_prefix('\u{feff}').unwrap_or(text_of_file);
    if text_of_file.trim().is_empty() {
        return Err(vec![Fault::missing(
            "",
            "A digital calibration certificate is needed; the text is empty.",
        )]);
    }
    let document = parsed(text_of_file)?;
    let root = document.root_element();
    if !is(root, DCC, "digitalCalibrationCertificate") {
        let found = root.tag_name().name();
        let sentence = format!(
            "A digital calibration certificate begins with the element digitalCalibrationCertificate; this file begins \
             with {found}."
        );
        return Err(vec![Fault::new("", Code::Unreadable, found.into(), &sentence)]);
    }
    let (quantities, mut notes) = quantities(root);
    if quantities.is_empty() {
        let sentence = "The certificate states no quantity that could be read among its results.";
        return Err(vec![Fault::new("", Code::Unreadable, Tree::Null, sentence)]);
    }
    let schema_version = root.attribute("schemaVersion").unwrap_or("").trim().to_owned();
    notes.extend(version_note(&schema_version));
    let signed = root.children().any(|node| is(node, SIGNATURE, "Signature"));
    if signed {
        notes.push("A signature is present; it was not verified.".to_owned());
    }
    let chosen = Chosen::read(choices, &quantities)?;
    let (taken, guessed) = chosen.taken(&quantities, &mut notes);
    let certificate = match (taken.wavelength, taken.value, taken.form) {
        (Some(wavelength), Some(value), Some(form)) => {
            let columns = [Some(wavelength), Some(value), taken.expanded];
            Some(certificate(&quantities, columns, form, &chosen, &mut notes)?)
        }
        _ => {
            notes.push(
                "Which quantities make the certificate cannot be told from units and names: choose them."
                    .to_owned(),
            );
            None
        }
    };
    let administration =
        |path: &[&str]| down(root, &["administrativeData"]).and_then(|node| down(node, path));
    let name_of = |path: &[&str]| in_words(administration(path).and_then(|node| child(node, DCC, "name")));
    Ok(DccReading {
        schema_version,
        identifier: text(administration(&["coreData", "uniqueIdentifier"])),
        laboratory: name_of(&["calibrationLaboratory", "contact"]),
        item: name_of(&["items", "item"]),
        end_date: text(administration(&["coreData", "endPerformanceDate"])),
        signed,
        quantities,
        taken,
        guessed,
        certificate,
        notes,
    })
}

/// What to say of a version other than those that were looked at.
fn version_note(version: &str) -> Option<String> {
    let mut parts = version.split('.').map(|part| part.parse::<u32>().unwrap_or(u32::MAX));
    let known = matches!((parts.next(), parts.next()), (Some(2), Some(4..)) | (Some(3), Some(0..=3)));
    let named = if version.is_empty() { "no version" } else { version };
    (!known).then(|| {
        format!(
            "Versions 2.4 to 3.3 of the format are known here; the file names {named}. Compare the numbers."
        )
    })
}
