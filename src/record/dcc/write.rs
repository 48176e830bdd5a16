//! Writes a digital calibration certificate, version 3.3.0 with D-SI 2.2.

use super::administration::{Administration, Contact};
use super::xml::{DCC, SI, Writer};
use crate::bench::meter::{Certificate, CertificateForm, CertificatePoint};
use crate::bench::reader::Reader;
use crate::fault::{Fault, Faults};
use crate::tree::Tree;

/// The version that is written.
const VERSION: &str = "3.3.0";

/// Words of the certificate in the languages that have them here, English first: what is not among them is in English
/// and says no language.
struct Terms {
    language: &'static str,
    result: &'static str,
    method: &'static str,
    wavelength: &'static str,
    responsivity: &'static str,
    correction_factor: &'static str,
    temperature: &'static str,
    certificate_number: &'static str,
}

const TERMS: [Terms; 4] = [
    Terms {
        language: "en",
        result: "Calibration of an optical power meter",
        method: "Method",
        wavelength: "Wavelength",
        responsivity: "Responsivity",
        correction_factor: "Correction factor",
        temperature: "Ambient temperature",
        certificate_number: "Certificate number",
    },
    Terms {
        language: "de",
        result: "Kalibrierung eines optischen Leistungsmessers",
        method: "Verfahren",
        wavelength: "Wellenlänge",
        responsivity: "Empfindlichkeit",
        correction_factor: "Korrekturfaktor",
        temperature: "Umgebungstemperatur",
        certificate_number: "Nummer des Kalibrierscheins",
    },
    Terms {
        language: "fr",
        result: "Étalonnage d’un mesureur de puissance optique",
        method: "Méthode",
        wavelength: "Longueur d’onde",
        responsivity: "Réponse",
        correction_factor: "Facteur de correction",
        temperature: "Température ambiante",
        certificate_number: "Numéro du certificat",
    },
    Terms {
        language: "es",
        result: "Calibración de un medidor de potencia óptica",
        method: "Método",
        wavelength: "Longitud de onda",
        responsivity: "Respuesta",
        correction_factor: "Factor de corrección",
        temperature: "Temperatura ambiente",
        certificate_number: "Número del certificado",
    },
];

/// Writes a certificate with what a person said beside it. Nothing is made up: what the schema demands and is not given
/// is a fault under `/administration`. `reader` says whether its numbers may be typed texts.
pub fn write_dcc(certificate: &Certificate, administration: &Tree, reader: Reader) -> Result<String, Faults> {
    let mut faults = Faults::new();
    let with = certificate.points.iter().filter(|point| point.expanded_percent.is_some()).count();
    if with > 0 && with < certificate.points.len() {
        let sentence = "Either all points of a digital certificate state an uncertainty or none.";
        faults.push(Fault::missing("/meter/certificate/points", sentence));
    }
    if with > 0 && certificate.coverage_factor.is_none() {
        let sentence = "The coverage factor k is needed to write the uncertainties.";
        faults.push(Fault::missing("/meter/certificate/coverage_factor", sentence));
    }
    let given =
        Administration::read(administration, with > 0, reader).map_err(|found| faults.extend(found)).ok();
    let (Some(given), true) = (given, faults.is_empty()) else {
        return Err(faults);
    };
    let mut writer = Writer::default();
    let names = [("schemaVersion", VERSION), ("xmlns:dcc", DCC), ("xmlns:si", SI)];
    let known = TERMS.iter().find(|terms| terms.language == given.language);
    let terms = known.unwrap_or(&TERMS[0]);
    let words = Words { language: &given.language, terms, translated: known.is_some() };
    writer.element("dcc:digitalCalibrationCertificate", &names, |w| {
        w.element("dcc:administrativeData", &[], |w| administrative(w, &given, &words));
        w.element("dcc:measurementResults", &[], |w| {
            w.element("dcc:measurementResult", &[], |w| result(w, certificate, &given, &words));
        });
    });
    Ok(writer.finish())
}

/// In which words a certificate speaks.
struct Words<'a> {
    language: &'a str,
    terms: &'static Terms,
    translated: bool,
}

impl Words<'_> {
    /// A text of our own.
    fn term(&self, w: &mut Writer, element: &'static str, term: &str) {
        let language = [("lang", self.language)];
        let attributes = if self.translated { &language[..] } else { &[] };
        w.element(element, &[], |w| w.text("dcc:content", attributes, term));
    }

    /// A text that a person gave in the certificate's language.
    fn given(&self, w: &mut Writer, element: &'static str, text: &str) {
        w.element(element, &[], |w| w.text("dcc:content", &[("lang", self.language)], text));
    }
}

/// A proper name, which is the same in all languages.
fn name(w: &mut Writer, element: &'static str, text: &str) {
    w.element(element, &[], |w| w.text("dcc:content", &[], text));
}

fn software(w: &mut Writer, list: &'static str) {
    w.element(list, &[], |w| {
        w.element("dcc:software", &[], |w| {
            name(w, "dcc:name", "Leastlight");
            w.text("dcc:release", &[], &format!("v{}", env!("CARGO_PKG_VERSION")));
            w.text("dcc:type", &[], "application");
        });
    });
}

fn administrative(w: &mut Writer, given: &Administration, words: &Words) {
    software(w, "dcc:dccSoftware");
    w.element("dcc:coreData", &[], |w| {
        w.text("dcc:countryCodeISO3166_1", &[], &given.laboratory.country);
        w.text("dcc:usedLangCodeISO639_1", &[], &given.language);
        w.text("dcc:mandatoryLangCodeISO639_1", &[], &given.language);
        w.text("dcc:uniqueIdentifier", &[], &given.unique_identifier);
        w.text("dcc:beginPerformanceDate", &[], &given.begin_date);
        w.text("dcc:endPerformanceDate", &[], &given.end_date);
        w.text("dcc:performanceLocation", &[], given.location);
        if !given.issue_date.is_empty() {
            w.text("dcc:issueDate", &[], &given.issue_date);
        }
    });
    w.element("dcc:items", &[], |w| {
        w.element("dcc:item", &[], |w| {
            let item = &given.item;
            words.given(w, "dcc:name", &item.name);
            if !item.manufacturer.is_empty() {
                w.element("dcc:manufacturer", &[], |w| name(w, "dcc:name", &item.manufacturer));
            }
            if !item.model.is_empty() {
                w.text("dcc:model", &[], &item.model);
            }
            identification(w, item.identified_by, &item.identification, |_| {});
        });
    });
    w.element("dcc:calibrationLaboratory", &[], |w| contact(w, "dcc:contact", &given.laboratory));
    w.element("dcc:respPersons", &[], |w| {
        w.element("dcc:respPerson", &[], |w| {
            w.element("dcc:person", &[], |w| name(w, "dcc:name", &given.responsible_person));
        });
    });
    contact(w, "dcc:customer", &given.customer);
}

fn contact(w: &mut Writer, element: &'static str, contact: &Contact) {
    w.element(element, &[], |w| {
        name(w, "dcc:name", &contact.name);
        w.element("dcc:location", &[], |w| {
            if !contact.city.is_empty() {
                w.text("dcc:city", &[], &contact.city);
            }
            w.text("dcc:countryCode", &[], &contact.country);
        });
    });
}

fn identification(w: &mut Writer, issuer: &str, value: &str, named: impl FnOnce(&mut Writer)) {
    w.element("dcc:identifications", &[], |w| {
        w.element("dcc:identification", &[], |w| {
            w.text("dcc:issuer", &[], issuer);
            w.text("dcc:value", &[], value);
            named(w);
        });
    });
}

fn result(w: &mut Writer, certificate: &Certificate, given: &Administration, words: &Words) {
    let terms = words.terms;
    words.term(w, "dcc:name", terms.result);
    w.element("dcc:usedMethods", &[], |w| {
        w.element("dcc:usedMethod", &[], |w| {
            words.term(w, "dcc:name", terms.method);
            let sentences: Vec<&str> = std::iter::once(given.method.as_str())
                .chain(given.history.iter().map(String::as_str))
                .collect();
            words.given(w, "dcc:description", &sentences.join("; "));
        });
    });
    software(w, "dcc:usedSoftware");
    if let Some(reference) = &given.reference {
        w.element("dcc:measuringEquipments", &[], |w| {
            w.element("dcc:measuringEquipment", &[], |w| {
                words.given(w, "dcc:name", &reference.name);
                identification(w, "other", &reference.certificate, |w| {
                    words.term(w, "dcc:name", terms.certificate_number);
                });
            });
        });
    }
    if let Some(temperature_c) = given.temperature_c {
        w.element("dcc:influenceConditions", &[], |w| {
            w.element("dcc:influenceCondition", &[("refType", "basic_temperature")], |w| {
                words.term(w, "dcc:name", terms.temperature);
                w.element("dcc:data", &[], |w| {
                    w.element("dcc:quantity", &[], |w| {
                        words.term(w, "dcc:name", terms.temperature);
                        w.element("si:real", &[], |w| {
                            w.text("si:value", &[], &temperature_c.to_string());
                            w.text("si:unit", &[], r"\degreecelsius");
                        });
                    });
                });
            });
        });
    }
    w.element("dcc:results", &[], |w| {
        w.element("dcc:result", &[], |w| {
            words.term(w, "dcc:name", terms.result);
            w.element("dcc:data", &[], |w| {
                w.element("dcc:list", &[], |w| table(w, certificate, given, words))
            });
        });
    });
}

fn table(w: &mut Writer, certificate: &Certificate, given: &Administration, words: &Words) {
    let list = |of: fn(&CertificatePoint) -> f64| -> String {
        let numbers: Vec<String> = certificate.points.iter().map(|point| of(point).to_string()).collect();
        numbers.join(" ")
    };
    // The common vocabulary has no word for a correction factor.
    let (term, unit, meaning): (_, _, &[(&str, &str)]) = match certificate.form {
        CertificateForm::Responsivity => {
            (words.terms.responsivity, r"\ampere\watt\tothe{-1}", &[("refType", "basic_measuredValue")])
        }
        CertificateForm::CorrectionFactor => (words.terms.correction_factor, r"\one", &[]),
    };
    w.element("dcc:quantity", &[("refType", "basic_nominalValue")], |w| {
        words.term(w, "dcc:name", words.terms.wavelength);
        w.element("si:realListXMLList", &[], |w| {
            w.text("si:valueXMLList", &[], &list(|point| point.wavelength_nm));
            w.text("si:unitXMLList", &[], r"\nano\metre");
        });
    });
    w.element("dcc:quantity", meaning, |w| {
        words.term(w, "dcc:name", term);
        w.element("si:realListXMLList", &[], |w| {
            w.text("si:valueXMLList", &[], &list(|point| point.value));
            w.text("si:unitXMLList", &[], unit);
            let (Some(k), Some(probability)) = (certificate.coverage_factor, given.coverage_probability)
            else {
                return;
            };
            if certificate.points.iter().any(|point| point.expanded_percent.is_none()) {
                return;
            }
            w.element("si:measurementUncertaintyUnivariateXMLList", &[], |w| {
                w.element("si:expandedMUXMLList", &[], |w| {
                    // In the unit of the value.
                    let absolute = |point: &CertificatePoint| {
                        point.value * point.expanded_percent.unwrap_or(0.0) / 100.0
                    };
                    w.text("si:valueExpandedMUXMLList", &[], &list(absolute));
                    w.text("si:coverageFactorXMLList", &[], &k.to_string());
                    w.text("si:coverageProbabilityXMLList", &[], &probability.to_string());
                });
            });
        });
    });
}
