//! The words of headers: which column is which, in which unit, and with which coverage factor.

use super::names::{Role, Unit};

/// What a header cell says.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Heading {
    /// The words as they stand there, on one line.
    pub(super) text: String,
    /// What the column holds, if the words say so.
    pub(super) role: Option<Role>,
    /// Its unit, if one of ours is named.
    pub(super) unit: Option<Unit>,
    /// A unit that is named but cannot be read here, such as V/W.
    pub(super) foreign: Option<String>,
}

const COVERAGE: &[&str] = &[
    "coverage factor",
    "erweiterungsfaktor",
    "uberdeckungsfaktor",
    "facteur d'elargissement",
    "factor de cobertura",
];
const SPREAD: &[&str] = &[
    "standard dev",
    "std dev",
    "stdev",
    "std. dev",
    "standardabw",
    "ecart type",
    "ecart-type",
    "desviacion est",
];
const EXPANDED: &[&str] =
    &["uncert", "unsicherheit", "incertitude", "incertidumbre", "expanded", "erweitert", "elargie", "±"];
const DEVIATION: &[&str] = &["deviation", "error", "abweichung", "fehler", "ecart", "erreur", "desviacion"];
const CORRECTION: &[&str] = &["correct", "korrekt", "correc", "faktor", "factor", "facteur"];
const RESPONSIVITY: &[&str] = &["respons", "sensitivity", "sensibil", "empfindlich", "reponse", "respuesta"];
pub(super) const WAVELENGTH: &[&str] = &[
    "wavelength",
    "wave length",
    "wellenlange",
    "wellenlaenge",
    "longueur d'onde",
    "longitud de onda",
    "lambda",
    "λ",
];

/// Units that a header may name and that no column here can be in.
const FOREIGN: &[&str] = &[
    "m", "cm", "mm", "pm", "Å", "Hz", "GHz", "THz", "eV", "cm-1", "1/cm", "ppm", "W", "mW", "µW", "dBm", "A",
    "µA", "nA", "pA", "V", "mV", "°C", "K", "s", "min", "dB/km",
];

/// Reads one header cell.
pub(super) fn heading(text: &str) -> Heading {
    let text = text.split_whitespace().collect::<Vec<_>>().join(" ");
    let (name, unit, foreign) = parted(&text);
    let role = role(&name, unit);
    Heading { role, unit, foreign, text }
}

/// Whether words speak of the coverage factor: `k`, or the term in one of the languages.
pub(super) fn is_coverage(text: &str) -> bool {
    let plain = folded(text);
    plain.trim().trim_end_matches([':', '=']).trim() == "k" || has(&plain, COVERAGE)
}

/// Whether words speak of a standard uncertainty, whose coverage factor is 1 by what it is.
pub(super) fn is_standard_uncertainty(text: &str) -> bool {
    let plain = folded(text);
    has(&plain, EXPANDED) && plain.contains("standard") && !has(&plain, &["expanded", "erweitert", "elargie"])
}

/// The coverage factor that a line or cell states: `k=2`, `k = 2,00`, `coverage factor;2`.
pub(super) fn coverage_factor(text: &str) -> Option<f64> {
    let plain = folded(text);
    let letter = plain.match_indices('k').find_map(|(at, _)| {
        let before = plain.get(..at)?.chars().next_back();
        let after = plain.get(at + 1..)?.trim_start();
        let alone = !before.is_some_and(|c| c.is_alphanumeric() || c == '_');
        let row_of_its_own = plain.get(..at)?.trim_matches(['#', '"', ' ']).is_empty();
        let marks: &[char] =
            if row_of_its_own { &['=', ':', ';', ',', '\t', '"', ' '] } else { &['=', ':', ' '] };
        let value = after.strip_prefix(marks)?.trim_start_matches(marks);
        alone.then(|| leading_number(value)).flatten()
    });
    let words = || {
        COVERAGE.iter().find_map(|term| {
            let after = plain.split_once(term)?.1;
            leading_number(after.trim_start_matches(|c: char| " \t:=;,\"()k".contains(c)))
        })
    };
    letter.or_else(words).filter(|k| (0.1..=10.0).contains(k))
}

/// The number at the start of a text; the mark before tenths may be either, for no k has thousands.
fn leading_number(text: &str) -> Option<f64> {
    let end = text.find(|c: char| !c.is_ascii_digit() && c != '.' && c != ',').unwrap_or(text.len());
    let digits = text.get(..end)?.trim_end_matches(['.', ',']).replace(',', ".");
    digits.parse().ok()
}

/// Parts a header into its name and its unit: `R [A/W]`, `λ / nm`, `U (k=2) / %`, `Responsivity A/W`.
fn parted(text: &str) -> (String, Option<Unit>, Option<String>) {
    let (mut name, mut inside, mut insides) = (String::new(), String::new(), Vec::new());
    let mut depth = 0_usize;
    for character in text.chars() {
        match character {
            '(' | '[' | '{' => depth += 1,
            ')' | ']' | '}' if depth > 0 => {
                depth -= 1;
                if depth == 0 {
                    insides.push(std::mem::take(&mut inside));
                }
            }
            other if depth > 0 => inside.push(other),
            other => name.push(other),
        }
    }
    insides.push(inside);
    let mut unit = insides.iter().find_map(|inside| Unit::written(inside));
    if unit.is_none()
        && let Some(written) = Unit::written(&name)
    {
        return (String::new(), Some(written), None);
    }
    let mut foreign = insides.into_iter().find(|inside| is_foreign(inside));
    // A unit at the end of the words, behind a slash, a comma, a space or, in our own names, an underscore.
    for (at, separator) in name.char_indices().filter(|(_, c)| " /,_".contains(*c)) {
        let Some(tail) = name.get(at + separator.len_utf8()..) else { continue };
        let own = match tail {
            "a_per_w" => Some(Unit::AmperePerWatt),
            _ => None,
        };
        if let Some(written) = own.or_else(|| Unit::written(tail)) {
            unit = unit.or(Some(written));
            name.truncate(at);
            break;
        }
        if separator == '/' && is_foreign(tail) {
            foreign = foreign.or_else(|| Some(tail.trim().to_owned()));
            name.truncate(at);
            break;
        }
    }
    let foreign = if unit.is_some() { None } else { foreign };
    (name.trim().trim_end_matches(['/', ',', ':']).trim().to_owned(), unit, foreign)
}

/// Whether a text is a unit that no column here can be in.
pub(super) fn is_foreign(text: &str) -> bool {
    let text = text.trim();
    FOREIGN.contains(&text) || (text.ends_with("/W") && text.len() <= 6)
}

/// What the words say, the more telling first: "uncertainty of the responsivity" is an uncertainty.
fn role(name: &str, unit: Option<Unit>) -> Option<Role> {
    let in_wavelength = matches!(unit, Some(Unit::Nanometre | Unit::Micrometre));
    let plain = folded(name);
    if is_coverage(&plain) || has(&plain, SPREAD) {
        return None;
    }
    let role = match name {
        "" => match unit? {
            Unit::Nanometre | Unit::Micrometre => Role::Wavelength,
            Unit::AmperePerWatt | Unit::MilliamperePerWatt => Role::Responsivity,
            Unit::Percent | Unit::Decibel => Role::Expanded,
            _ => return None,
        },
        "U" | "u" | "U95" | "U_95" | "U_rel" | "Urel" | "unc" | "unc." | "Unc" | "Unc." => Role::Expanded,
        "R" | "S" | "s" | "Resp" | "Resp." | "resp" | "resp." => Role::Responsivity,
        "CF" | "Cf" | "cf" | "KF" | "corr" | "corr." | "Corr" | "Corr." => Role::CorrectionFactor,
        "dev" | "dev." | "Dev" | "Dev." | "err" | "Err" => Role::Deviation,
        "wl" | "WL" => Role::Wavelength,
        _ if has(&plain, EXPANDED) => Role::Expanded,
        _ if has(&plain, DEVIATION) => Role::Deviation,
        _ if has(&plain, CORRECTION) => Role::CorrectionFactor,
        _ if has(&plain, RESPONSIVITY) => Role::Responsivity,
        _ if has(&plain, WAVELENGTH) => Role::Wavelength,
        _ if matches!(unit, Some(Unit::AmperePerWatt | Unit::MilliamperePerWatt)) => Role::Responsivity,
        _ => return None,
    };
    // The uncertainty or the error of the wavelength itself is nothing that is read here.
    (role == Role::Wavelength || !in_wavelength).then_some(role)
}

pub(super) fn has(plain: &str, words: &[&str]) -> bool {
    words.iter().any(|word| plain.contains(word))
}

/// Lower case without accents.
pub(super) fn folded(text: &str) -> String {
    text.chars()
        .flat_map(char::to_lowercase)
        .map(|c| match c {
            'à' | 'á' | 'â' | 'ä' => 'a',
            'è' | 'é' | 'ê' | 'ë' => 'e',
            'í' | 'î' | 'ï' => 'i',
            'ó' | 'ô' | 'ö' => 'o',
            'ú' | 'û' | 'ü' => 'u',
            'ç' => 'c',
            'ñ' => 'n',
            '’' => '\'',
            '\u{a0}' | '\u{202f}' | '\u{2009}' => ' ',
            other => other,
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use Role::*;

    #[test]
    fn headers_are_understood_in_four_languages_and_in_symbols() {
        for (text, role, unit) in [
            ("Wavelength (nm)", Some(Wavelength), Some(Unit::Nanometre)),
            ("λ / nm", Some(Wavelength), Some(Unit::Nanometre)),
            ("λ/µm", Some(Wavelength), Some(Unit::Micrometre)),
            ("Wellenlänge [nm]", Some(Wavelength), Some(Unit::Nanometre)),
            ("Longueur d’onde (nm)", Some(Wavelength), Some(Unit::Nanometre)),
            ("Longitud de onda, nm", Some(Wavelength), Some(Unit::Nanometre)),
            ("wavelength_nm", Some(Wavelength), Some(Unit::Nanometre)),
            ("nm", Some(Wavelength), Some(Unit::Nanometre)),
            ("R [A/W]", Some(Responsivity), Some(Unit::AmperePerWatt)),
            ("R(λ) / (A/W)", Some(Responsivity), Some(Unit::AmperePerWatt)),
            ("R/A/W", Some(Responsivity), Some(Unit::AmperePerWatt)),
            ("Responsivity A·W⁻¹", Some(Responsivity), Some(Unit::AmperePerWatt)),
            ("Spektrale Empfindlichkeit (mA/W)", Some(Responsivity), Some(Unit::MilliamperePerWatt)),
            ("responsivity_a_per_w", Some(Responsivity), Some(Unit::AmperePerWatt)),
            ("Sensibilidad", Some(Responsivity), None),
            ("Correction factor", Some(CorrectionFactor), None),
            ("Korrekturfaktor / 1", Some(CorrectionFactor), Some(Unit::One)),
            ("CF", Some(CorrectionFactor), None),
            ("Correction (dB)", Some(CorrectionFactor), Some(Unit::Decibel)),
            ("Abweichung in %", Some(Deviation), Some(Unit::Percent)),
            ("Écart (%)", Some(Deviation), Some(Unit::Percent)),
            ("Error %", Some(Deviation), Some(Unit::Percent)),
            ("U (k=2) / %", Some(Expanded), Some(Unit::Percent)),
            ("U95 [dB]", Some(Expanded), Some(Unit::Decibel)),
            ("Uncertainty of responsivity (A/W)", Some(Expanded), Some(Unit::AmperePerWatt)),
            ("Erweiterte Messunsicherheit / %", Some(Expanded), Some(Unit::Percent)),
            ("Incertitude élargie", Some(Expanded), None),
            ("Wavelength uncertainty (nm)", None, Some(Unit::Nanometre)),
            ("Standard deviation (%)", None, Some(Unit::Percent)),
            ("Coverage factor", None, None),
            ("Temperature (°C)", None, None),
            ("Power (dBm)", None, None),
        ] {
            let heading = heading(text);
            assert_eq!((heading.role, heading.unit), (role, unit), "{text:?}");
        }
        assert_eq!(heading("Responsivity (V/W)").foreign.as_deref(), Some("V/W"));
        assert_eq!(heading("Wavelength / THz").foreign.as_deref(), Some("THz"));
        assert_eq!(heading("Wavelength (vacuum)").foreign, None);
    }

    #[test]
    fn the_coverage_factor_is_found_only_where_it_is_stated() {
        for (text, expected) in [
            ("U (k=2) / %", Some(2.0)),
            ("k = 2,00", Some(2.0)),
            ("# expanded uncertainty, k = 2.13", Some(2.13)),
            ("k;2", Some(2.0)),
            ("Coverage factor;2", Some(2.0)),
            ("Erweiterungsfaktor k: 1,96", Some(1.96)),
            ("Facteur d’élargissement\t2", Some(2.0)),
            ("\"coverage factor\",\"2,5\"", Some(2.5)),
            ("U (%)", None),
            ("Risk = 2", None),
            ("check 2 times", None),
            ("k", None),
            ("k=200", None),
        ] {
            assert_eq!(coverage_factor(text), expected, "{text:?}");
        }
    }
}
