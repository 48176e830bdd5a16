//! Which column holds what: from the header, from a person's choices, else from the order.

use super::choices::{Choices, clash};
use super::names::{Role, Unit};
use super::words::Heading;
use crate::bench::meter::CertificateForm;
use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;

/// One of the columns that are read.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Used {
    /// Its place, counted from 0.
    pub(super) index: usize,
    /// The unit of its numbers.
    pub(super) unit: Unit,
    /// Whether a unit behind a number counts more: not if a person chose the column's unit.
    pub(super) cells_may_differ: bool,
}

/// The columns that are read.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Columns {
    pub(super) wavelength: Used,
    pub(super) value: Used,
    pub(super) value_role: Role,
    pub(super) expanded: Option<Used>,
    pub(super) form: CertificateForm,
}

/// What is known of the columns before they are assigned.
pub(super) struct Known<'a> {
    pub(super) headings: &'a [Heading],
    /// Whether the column holds numbers.
    pub(super) numeric: &'a [bool],
    /// The unit behind the first number of the column.
    pub(super) cell_units: &'a [Option<Unit>],
    pub(super) has_header: bool,
    /// What a person decided.
    pub(super) choices: &'a Choices,
    /// The forms that can be read here, the one assumed first.
    pub(super) forms: &'a [CertificateForm],
}

impl Known<'_> {
    /// Assigns the columns; sentences about what was assumed go to `said`.
    pub(super) fn columns(&self, said: &mut Vec<String>) -> Result<Columns, Faults> {
        let mut faults = Faults::new();
        for (at, choice) in self.choices.columns.iter().enumerate() {
            if choice.index >= self.headings.len() {
                let sentence = format!(
                    "The index must be below {}, the number of columns; {} was given.",
                    self.headings.len(),
                    choice.index
                );
                let pointer = format!("/choices/columns/{at}/index");
                faults.push(Fault::new(&pointer, Code::Range, (choice.index as f64).into(), &sentence));
            }
        }
        if let Some(form) = self.choices.form.filter(|form| !self.forms.contains(form)) {
            let sentence = format!("Only responsivities can be read here; {} was given.", form.word());
            faults.push(Fault::new("/choices/form", Code::Conflict, form.word().into(), &sentence));
        }
        if !faults.is_empty() {
            return Err(faults);
        }
        let mut roles: Vec<Option<Role>> = (0..self.headings.len()).map(|index| self.role(index)).collect();
        // Without a word about any column, and nothing ruled out by hand, the third one is the uncertainty.
        let by_order = self.forms.contains(&CertificateForm::CorrectionFactor)
            && self.headings.iter().all(|heading| heading.role.is_none())
            && self.choices.columns.iter().all(|choice| choice.role != Some(Role::Ignored));

        let wavelength = first(&roles, |role| role == Role::Wavelength);
        let wavelength = wavelength.or_else(|| {
            let index = self.next_free(&roles, &[Role::Wavelength])?;
            if self.has_header {
                said.push(format!("{} was taken for the wavelength.", self.column(index)));
            }
            Some(index)
        });
        if let Some(index) = wavelength {
            self.settle(&mut roles, index, Role::Wavelength, said);
        }
        let value = self.value(&mut roles, said);
        let expanded = first(&roles, |role| role == Role::Expanded);
        let expanded =
            expanded.or_else(|| by_order.then(|| self.next_free(&roles, &[Role::Expanded])).flatten());
        if let Some(index) = expanded {
            self.settle(&mut roles, index, Role::Expanded, said);
        }
        let (Some(wavelength), Some((value, value_role, form))) = (wavelength, value) else {
            let what = if wavelength.is_none() { "wavelengths" } else { self.wanted() };
            let sentence = format!(
                "A table needs one column of wavelengths and one of {}; no column of {what} was found{}: choose \
                 the columns.",
                self.wanted(),
                self.found()
            );
            return Err(vec![Fault::missing("", &sentence)]);
        };
        let mut used =
            |index, role| self.used(index, role, form, said).map_err(|fault| faults.push(fault)).ok();
        let (wavelength, value) = (used(wavelength, Role::Wavelength), used(value, value_role));
        let expanded = expanded.map(|index| used(index, Role::Expanded));
        match (wavelength, value, expanded) {
            (Some(wavelength), Some(value), None) => {
                Ok(Columns { wavelength, value, value_role, expanded: None, form })
            }
            (Some(wavelength), Some(value), Some(Some(expanded))) => {
                Ok(Columns { wavelength, value, value_role, expanded: Some(expanded), form })
            }
            _ => Err(faults),
        }
    }

    /// What a column holds by choice, else by its header.
    fn role(&self, index: usize) -> Option<Role> {
        let chosen = |choice: &&super::ColumnChoice| choice.index == index && choice.role.is_some();
        if let Some(choice) = self.choices.columns.iter().find(chosen) {
            return choice.role;
        }
        let role = self.headings.get(index)?.role?;
        let displaced = self.choices.columns.iter().filter_map(|choice| choice.role).any(|c| clash(c, role));
        let read_here = match role {
            Role::CorrectionFactor | Role::Deviation | Role::Expanded => {
                self.forms.contains(&CertificateForm::CorrectionFactor)
            }
            _ => true,
        };
        Some(if displaced || !read_here { Role::Ignored } else { role })
    }

    /// The column of values, its role, and the form that follows.
    fn value(
        &self,
        roles: &mut [Option<Role>],
        said: &mut Vec<String>,
    ) -> Option<(usize, Role, CertificateForm)> {
        let form_of = |role| {
            if role == Role::Responsivity {
                CertificateForm::Responsivity
            } else {
                CertificateForm::CorrectionFactor
            }
        };
        let candidates = [Role::Responsivity, Role::CorrectionFactor, Role::Deviation]
            .into_iter()
            .filter_map(|role| Some((first(roles, |other| other == role)?, role)));
        let wanted = self.choices.form;
        let found = candidates.clone().find(|(_, role)| wanted.is_none_or(|form| form == form_of(*role)));
        let (index, role) = match (found, candidates.clone().next(), wanted) {
            (Some(found), _, _) => found,
            // Another form was chosen than the header names: the choice counts.
            (None, Some((index, _)), Some(form)) => (index, role_of(form)),
            (None, _, _) => {
                let form = wanted.or(self.forms.first().copied())?;
                let index = self.next_free(roles, &[role_of(form)])?;
                if wanted.is_none() {
                    let other =
                        if self.forms.len() > 1 { "; it can be changed to correction factors" } else { "" };
                    said.push(format!(
                        "{} was taken for the responsivity, since nothing says what it holds{other}.",
                        self.column(index)
                    ));
                }
                (index, role_of(form))
            }
        };
        for (other, one) in roles.iter_mut().enumerate() {
            if other != index && one.is_some_and(Role::is_value) {
                said.push(format!("{} also holds values; it was not read.", self.column(other)));
                *one = Some(Role::Ignored);
            }
        }
        self.settle(roles, index, role, said);
        Some((index, role, form_of(role)))
    }

    /// Gives a role to one column and takes it from all others.
    fn settle(&self, roles: &mut [Option<Role>], index: usize, role: Role, said: &mut Vec<String>) {
        for (other, one) in roles.iter_mut().enumerate() {
            if other == index {
                *one = Some(role);
            } else if *one == Some(role) {
                said.push(format!("{} was not read; {} came first.", self.column(other), self.column(index)));
                *one = Some(Role::Ignored);
            }
        }
    }

    /// The first column of numbers that nothing is known of and whose unit does not forbid the role.
    fn next_free(&self, roles: &[Option<Role>], wanted: &[Role]) -> Option<usize> {
        roles.iter().enumerate().find_map(|(index, role)| {
            let heading = self.headings.get(index)?;
            let unit = heading.unit.or(self.cell_units.get(index).copied().flatten());
            let fits = unit.is_none_or(|unit| wanted.iter().any(|role| role.units().contains(&unit)));
            let free = role.is_none() && self.numeric.get(index) == Some(&true);
            // A column with a name that says something else is not taken for a value by its place.
            (free && fits && heading.foreign.is_none()).then_some(index)
        })
    }

    fn used(
        &self,
        index: usize,
        role: Role,
        form: CertificateForm,
        said: &mut Vec<String>,
    ) -> Result<Used, Fault> {
        let chosen = self.choices.columns.iter().find(|choice| choice.index == index).and_then(|c| c.unit);
        let heading = self.headings.get(index).cloned().unwrap_or_default();
        let cell_unit = self.cell_units.get(index).copied().flatten();
        let allowed: Vec<Unit> =
            role.units().iter().copied().filter(|unit| fits(*unit, role, form)).collect();
        // A header that speaks of another quantity than the one chosen has no say about the unit.
        let renamed = heading.role.is_some_and(|named| named != role);
        let written = heading.unit.filter(|_| !renamed).or(cell_unit);
        let foreign = heading.foreign.filter(|_| !renamed && written.is_none());
        let bad = match (chosen, written, foreign) {
            (Some(unit), _, _) | (None, Some(unit), _) if allowed.contains(&unit) => {
                return Ok(Used { index, unit, cells_may_differ: chosen.is_none() });
            }
            (Some(unit), _, _) | (None, Some(unit), _) => unit.name().to_owned(),
            (None, None, Some(unit)) => unit,
            (None, None, None) => {
                let unit = role.units().first().copied().unwrap_or(Unit::One);
                if unit != Unit::One {
                    said.push(format!("{} names no unit; {} was assumed.", self.column(index), unit.name()));
                }
                return Ok(Used { index, unit, cells_may_differ: true });
            }
        };
        let names: Vec<&str> = allowed.iter().map(|unit| unit.name()).collect();
        let sentence = format!(
            "The {} must be in {}; {} is in {bad}: choose the column or its unit.",
            words(role),
            names.join(" or "),
            self.column(index)
        );
        Err(Fault::new("", Code::Unreadable, Tree::Text(bad), &sentence))
    }

    /// A column, for a sentence.
    fn column(&self, index: usize) -> String {
        match self.headings.get(index) {
            Some(heading) if !heading.text.is_empty() => {
                format!("Column {} \"{}\"", index + 1, super::rows::excerpt(&heading.text))
            }
            _ => format!("Column {}", index + 1),
        }
    }

    fn wanted(&self) -> &'static str {
        if self.forms.len() > 1 { "responsivities or correction factors" } else { "responsivities" }
    }

    fn found(&self) -> String {
        let names: Vec<&str> =
            self.headings.iter().map(|h| h.text.as_str()).filter(|text| !text.is_empty()).take(8).collect();
        if names.is_empty() { String::new() } else { format!(" among \"{}\"", names.join("\", \"")) }
    }
}

fn first(roles: &[Option<Role>], wanted: impl Fn(Role) -> bool) -> Option<usize> {
    roles.iter().position(|role| role.is_some_and(&wanted))
}

fn role_of(form: CertificateForm) -> Role {
    match form {
        CertificateForm::Responsivity => Role::Responsivity,
        CertificateForm::CorrectionFactor => Role::CorrectionFactor,
    }
}

/// Whether an uncertainty in this unit belongs to values of this form.
fn fits(unit: Unit, role: Role, form: CertificateForm) -> bool {
    role != Role::Expanded
        || match unit {
            Unit::AmperePerWatt | Unit::MilliamperePerWatt => form == CertificateForm::Responsivity,
            Unit::One => form == CertificateForm::CorrectionFactor,
            _ => true,
        }
}

fn words(role: Role) -> &'static str {
    match role {
        Role::Wavelength => "wavelength",
        Role::Responsivity => "responsivity",
        Role::CorrectionFactor => "correction factor",
        Role::Deviation => "deviation",
        Role::Expanded => "uncertainty",
        Role::SpectralPower => "power per nm",
        Role::Power => "power",
        Role::Time => "time",
        Role::Voltage => "bias",
        Role::Gain => "gain",
        Role::NoiseFactor => "excess noise factor",
        Role::DarkCurrent => "dark current",
        Role::Current => "current",
        Role::Bandwidth => "bandwidth",
        Role::Temperature => "temperature",
        Role::Standard => "standard uncertainty",
        _ => "column",
    }
}
