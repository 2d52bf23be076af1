//! plan.toml: the names, the aim and the limit of a plan, and where its tables are.

use std::ops::Range;
use std::path::{Path, PathBuf};

use toml::de::{DeTable, DeValue};

use super::amount::parse_amount;
use super::currency::Currencies;
use super::encoding::decode;
use super::faults::Diagnostics;
use super::header::nearest;
use super::notes::Note;
use super::place::{Place, is_unseen};
use super::soundness::check_lines;
use crate::model::{Aim, Labels};

const KEYS: [&str; 9] = [
    "title",
    "aim",
    "budget",
    "require",
    "money",
    "return_unit",
    "period",
    "activities",
    "points",
];

/// A table of a plan.
#[derive(Debug)]
pub(super) struct TableFile {
    pub path: PathBuf,
    /// Where a plan file names it.
    pub place: Option<Place>,
}

impl TableFile {
    pub(super) fn named(path: &Path) -> Self {
        Self {
            path: path.to_owned(),
            place: None,
        }
    }
}

/// What a plan file says.
#[derive(Debug, Default)]
pub(super) struct PlanFile {
    pub labels: Labels,
    pub aim: Option<Aim>,
    pub budget: Option<f64>,
    pub require: Option<f64>,
    pub activities: Option<TableFile>,
    pub points: Option<TableFile>,
    pub notes: Vec<Note>,
    pub currencies: Currencies,
    /// Where `require`, or else `budget`, stands.
    pub limit_place: Option<Place>,
}

/// Reads a plan file; the paths in it are relative to the folder that it lies in.
///
/// The faults of its keys and values come along.
///
/// # Errors
/// A file that is no TOML.
pub(super) fn read_plan_file(
    path: &Path,
    file: &str,
    bytes: &[u8],
) -> Result<(PlanFile, Diagnostics), Diagnostics> {
    let (text, decoded) = decode(file, bytes)?;
    check_lines(file, &text, "plan file", "write one key = value a line")?;
    let table = DeTable::parse(&text).map_err(|fault| {
        let span = fault.span().unwrap_or(0..0);
        Diagnostics::of(
            "a plan file that cannot be read",
            Place::in_text(file, &text, span, None),
            fault
                .message()
                .lines()
                .next()
                .unwrap_or("this is not TOML")
                .to_owned(),
            "write one key = value a line; texts stand in double quotes",
        )
    })?;
    let mut reader = Reader {
        file,
        text: &text,
        faults: Diagnostics::default(),
        notes: decoded.into_iter().collect(),
        currencies: Currencies::default(),
    };
    let mut plan = PlanFile::default();
    let folder = path.parent().unwrap_or(Path::new(""));
    let mut names_activities = false;
    for (key, value) in table.get_ref() {
        let (name, span) = (key.get_ref().as_ref(), value.span());
        let value = value.get_ref();
        match name {
            "title" => plan.labels.title = reader.text_of(name, value, span),
            "money" => plan.labels.money = reader.text_of(name, value, span),
            "return_unit" => plan.labels.return_unit = reader.text_of(name, value, span),
            "period" => plan.labels.period = reader.period_of(value, span),
            "aim" => plan.aim = reader.aim_of(value, span),
            "budget" => {
                plan.limit_place
                    .get_or_insert_with(|| reader.place(span.clone(), name));
                plan.budget = reader.amount_of(name, value, span);
            }
            "require" => {
                plan.limit_place = Some(reader.place(span.clone(), name));
                plan.require = reader.amount_of(name, value, span);
            }
            "activities" => {
                names_activities = true;
                plan.activities = reader.table_of(name, value, span, folder);
            }
            "points" => plan.points = reader.table_of(name, value, span, folder),
            unknown => reader.refuse_key(unknown, key.span()),
        }
    }
    if !names_activities {
        reader.faults.add(
            "a plan without activities",
            || Place::file(file),
            format!("{file} does not name its table of activities"),
            "add a line such as activities = \"activities.csv\"",
        );
    }
    plan.notes = reader.notes;
    plan.currencies = reader.currencies;
    if let Some(money) = &plan.labels.money {
        plan.currencies.add_unit(money);
    }
    Ok((plan, reader.faults))
}

struct Reader<'a> {
    file: &'a str,
    text: &'a str,
    faults: Diagnostics,
    notes: Vec<Note>,
    currencies: Currencies,
}

impl Reader<'_> {
    fn place(&self, span: Range<usize>, key: &str) -> Place {
        Place::in_text(self.file, self.text, span, Some(key))
    }

    fn refuse(&mut self, key: &str, span: Range<usize>, what: String, mend: &str) {
        let place = self.place(span, key);
        self.faults.add("a value at fault", || place, what, mend);
    }

    fn refuse_key(&mut self, key: &str, span: Range<usize>) {
        const UNKNOWN: &str = "an unknown key";
        if !self.faults.keeps(UNKNOWN) {
            self.faults.count_one(UNKNOWN);
            return;
        }
        let what = format!("a plan file has no key named {key}");
        let mend = if key == "constraints" {
            "this version takes one budget or one requirement".to_owned()
        } else {
            match nearest(key, KEYS.into_iter()) {
                Some(meant) => format!("did you mean {meant}?"),
                None => format!("the keys are {}", KEYS.join(", ")),
            }
        };
        let place = self.place(span, key);
        self.faults.add(UNKNOWN, || place, what, mend);
    }

    fn text_of(&mut self, key: &str, value: &DeValue, span: Range<usize>) -> Option<String> {
        let DeValue::String(text) = value else {
            let what = format!("{key} must be a text");
            self.refuse(key, span, what, "put it in double quotes");
            return None;
        };
        let text = text.trim();
        if text.is_empty() {
            let what = format!("{key} is empty");
            self.refuse(key, span, what, "fill it in, or delete the line");
            return None;
        }
        if text.contains(is_unseen) {
            let what = format!("{key} has a line break or an invisible character in it");
            self.refuse(key, span, what, "write it on one line");
            return None;
        }
        Some(text.to_owned())
    }

    fn table_of(
        &mut self,
        key: &str,
        value: &DeValue,
        span: Range<usize>,
        folder: &Path,
    ) -> Option<TableFile> {
        let name = self.text_of(key, value, span.clone())?;
        Some(TableFile {
            path: folder.join(name),
            place: Some(self.place(span, key)),
        })
    }

    /// A period may be written as the bare number of a year.
    fn period_of(&mut self, value: &DeValue, span: Range<usize>) -> Option<String> {
        match value {
            DeValue::Integer(_) => Some(self.text[span].to_owned()),
            _ => self.text_of("period", value, span),
        }
    }

    fn aim_of(&mut self, value: &DeValue, span: Range<usize>) -> Option<Aim> {
        let written = self.text_of("aim", value, span.clone())?;
        let aim = [Aim::Maximise, Aim::Minimise]
            .into_iter()
            .find(|aim| aim.name() == written);
        if aim.is_none() {
            let what = format!("\"{written}\" is no aim");
            self.refuse("aim", span, what, "write \"maximise\" or \"minimise\"");
        }
        aim
    }

    /// A number, or a text that is an amount without doubt.
    fn amount_of(&mut self, key: &str, value: &DeValue, span: Range<usize>) -> Option<f64> {
        let found = match value {
            DeValue::Integer(_) | DeValue::Float(_) => {
                parse_amount(&self.text[span.clone()].replace('_', ""))
            }
            DeValue::String(text) => parse_amount(text),
            _ => {
                self.refuse(
                    key,
                    span,
                    format!("{key} must be a number"),
                    "write plain digits",
                );
                return None;
            }
        };
        match found {
            Ok(amount) => {
                if let Some(how) = amount.written {
                    let written = self.text[span].trim_matches('"');
                    self.notes.push(Note::reading(format!(
                        "{}: read {how} in {key}, \"{written}\"",
                        self.file
                    )));
                }
                self.currencies.add(amount.currency);
                Some(amount.value)
            }
            Err(fault) => {
                let mend = fault.mend();
                self.refuse(key, span, fault.to_string(), &mend);
                None
            }
        }
    }
}
