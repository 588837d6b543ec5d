//! Tables of a TOML file, read key by key; whatever is wrong with a value is logged with its place, and reading goes on.
//!
//! A [`Section`] knows which keys its table takes. Any other key is refused when the section is opened: by what it is for if
//! it is known but not supported, else with a near name. Readers return `None` for what is absent or at fault; what is
//! absent and needed is a fault of the table.

use std::str::FromStr;
use std::sync::Arc;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use crate::units::{self, Dimension, Length, Priced};

use super::fault::{Fault, Log, Source, Span};

/// The keys that a table takes.
#[derive(Debug)]
pub(super) struct Keys {
    /// How messages name the table.
    pub(super) table: &'static str,
    /// Those it takes.
    pub(super) known: &'static [&'static str],
}

/// A file that is being read, and where its faults go.
#[derive(Clone, Copy)]
pub(super) struct Reader<'a> {
    pub(super) source: &'a Arc<Source>,
    pub(super) log: &'a Log,
}

impl Reader<'_> {
    pub(super) fn fault(
        &self,
        span: Span,
        title: impl Into<String>,
        label: impl Into<String>,
        help: impl Into<String>,
    ) {
        self.log.put(Fault::error(title).at(self.source, span, label).help(help));
    }

    pub(super) fn warn(&self, span: Span, title: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.log.put(Fault::warning(title).at(self.source, span, label).help(help));
    }
}

/// One table of a file.
pub(super) struct Section<'a> {
    pub(super) reader: Reader<'a>,
    keys: &'static Keys,
    table: &'a DeTable<'a>,
    /// Where the table stands: its header, or its braces.
    pub(super) span: Span,
}

/// A value of a table with its key.
#[derive(Clone, Copy)]
pub(super) struct Cell<'a> {
    pub(super) reader: Reader<'a>,
    pub(super) key: &'a str,
    value: &'a DeValue<'a>,
    span_start: usize,
    span_end: usize,
}

/// Most that a bare number may be: sums of prices stay within what an amount can hold.
const MOST: f64 = 1e12;

/// What kind of value stands there, in words.
fn kind_of(value: &DeValue<'_>) -> &'static str {
    match value {
        DeValue::String(_) => "a text",
        DeValue::Integer(_) | DeValue::Float(_) => "a bare number",
        DeValue::Boolean(_) => "true or false",
        DeValue::Datetime(_) => "a date",
        DeValue::Array(_) => "a list",
        DeValue::Table(_) => "a table",
    }
}

/// A fall as a ratio.
struct Slope(f64);

impl FromStr for Slope {
    type Err = units::Fault;
    fn from_str(text: &str) -> Result<Self, units::Fault> {
        Dimension::Slope.read(text).map(Self)
    }
}

/// The name in a list that is spelt most like `typed`, where one is near.
pub(super) fn near<'n>(typed: &str, names: impl IntoIterator<Item = &'n str>) -> Option<&'n str> {
    let typed = typed.to_lowercase();
    names
        .into_iter()
        .map(|name| (strsim::osa_distance(&name.to_lowercase(), &typed), name))
        .min_by_key(|&(distance, _)| distance)
        .filter(|&(distance, name)| distance <= 1.max(name.chars().count() / 3) && distance < name.chars().count())
        .map(|(_, name)| name)
}

/// What a key gives that may be absent: nothing where it is, and no answer where its value is at fault.
pub(super) fn optional<T>(read: Option<Option<T>>) -> Option<Option<T>> {
    read.map_or(Some(None), |value| value.map(Some))
}

/// `a, b or c`.
pub(super) fn any_of(names: &[&str]) -> String {
    match names {
        [] => String::new(),
        [one] => (*one).to_string(),
        [rest @ .., last] => format!("{} or {last}", rest.join(", ")),
    }
}

impl<'a> Section<'a> {
    /// Opens a table and refuses every key that it does not take.
    pub(super) fn open(reader: Reader<'a>, keys: &'static Keys, table: &'a DeTable<'a>, span: Span) -> Self {
        for key in table.keys() {
            let name: &str = key.get_ref();
            if keys.known.contains(&name) {
                continue;
            }
            let help = match near(name, keys.known.iter().copied()) {
                Some(near) => format!("did you mean `{near}`? {} takes {}", keys.table, any_of(keys.known)),
                None => format!("{} takes {}", keys.table, any_of(keys.known)),
            };
            reader.fault(
                key.span(),
                format!("unknown key `{name}` in {}", keys.table),
                "not a key of this table",
                help,
            );
        }
        Self { reader, keys, table, span }
    }

    /// The value of a key, where it stands in the table.
    pub(super) fn get(&self, key: &'static str) -> Option<Cell<'a>> {
        debug_assert!(self.keys.known.contains(&key), "{key} is not declared for {}", self.keys.table);
        self.table.get_key_value(key).map(|(name, value)| Cell::new(self.reader, name.get_ref(), value))
    }

    /// The value of a key that the table must have.
    pub(super) fn need(&self, key: &'static str, example: &str) -> Option<Cell<'a>> {
        let cell = self.get(key);
        if cell.is_none() {
            self.missing(&format!("`{key}` is missing in {}", self.keys.table), example);
        }
        cell
    }

    /// Logs that something the table must have is absent.
    pub(super) fn missing(&self, title: &str, help: &str) {
        // The table that is the whole file has no head that could be shown.
        let label = if self.span.is_empty() { "this file" } else { "this table" };
        self.reader.log.put(Fault::error(title).at(self.reader.source, self.span.clone(), label).help(help).absent());
    }

    /// The table under a key.
    pub(super) fn section(&self, key: &'static str, keys: &'static Keys) -> Option<Section<'a>> {
        self.get(key)?.section(keys)
    }

    /// The tables under a key, none for an entry that is not a table; no list at all where the key is absent or at fault.
    pub(super) fn sections(
        &self,
        key: &'static str,
        keys: &'static Keys,
        wanted: &str,
    ) -> Option<Vec<Option<Section<'a>>>> {
        let cell = self.get(key)?;
        match cell.value {
            DeValue::Array(tables) if tables.is_empty() => {
                cell.at_fault(format!("`{key}` is an empty list"), "nothing stands here", format!("write {wanted}"));
                None
            }
            DeValue::Array(tables) => {
                Some(tables.iter().map(|table| Cell::new(self.reader, cell.key, table).section(keys)).collect())
            }
            _ => {
                cell.refuse(wanted);
                None
            }
        }
    }
}

impl<'a> Cell<'a> {
    fn new(reader: Reader<'a>, key: &'a str, value: &'a Spanned<DeValue<'a>>) -> Self {
        let span = value.span();
        Self { reader, key, value: value.get_ref(), span_start: span.start, span_end: span.end }
    }

    pub(super) fn span(&self) -> Span {
        self.span_start..self.span_end
    }

    /// The table that the value is.
    pub(super) fn section(&self, keys: &'static Keys) -> Option<Section<'a>> {
        match self.value {
            DeValue::Table(table) => Some(Section::open(self.reader, keys, table, self.span())),
            _ => {
                self.refuse(&format!("a table with {}", any_of(keys.known)));
                None
            }
        }
    }

    /// Whether the value is a table.
    pub(super) fn is_table(&self) -> bool {
        matches!(self.value, DeValue::Table(_))
    }

    /// The entries of a table whose keys are names, not fixed words.
    pub(super) fn entries(&self, wanted: &str) -> Option<Vec<(Cell<'a>, Span)>> {
        match self.value {
            DeValue::Table(table) => Some(
                table.iter().map(|(key, value)| (Cell::new(self.reader, key.get_ref(), value), key.span())).collect(),
            ),
            _ => {
                self.refuse(wanted);
                None
            }
        }
    }

    /// The items of a list; one value counts as a list of one.
    pub(super) fn items(&self) -> Vec<Cell<'a>> {
        match self.value {
            DeValue::Array(items) => items.iter().map(|item| Cell::new(self.reader, self.key, item)).collect(),
            _ => vec![*self],
        }
    }

    /// Logs that the value is not what the key wants.
    pub(super) fn refuse(&self, wanted: &str) {
        let found = kind_of(self.value);
        self.at_fault(
            format!("`{}` must be {wanted}", self.key),
            format!("{found} stands here"),
            format!("write {wanted}"),
        );
    }

    pub(super) fn at_fault(&self, title: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.reader.fault(self.span(), title, label, help);
    }

    /// The text that the value is, if it is one.
    pub(super) fn as_text(&self) -> Option<&'a str> {
        match self.value {
            DeValue::String(text) => Some(text),
            _ => None,
        }
    }

    /// A text.
    pub(super) fn text(&self) -> Option<&'a str> {
        match self.value {
            DeValue::String(text) if text.trim().is_empty() => {
                self.at_fault(format!("`{}` is empty", self.key), "nothing stands here", "write a text");
                None
            }
            DeValue::String(text) => Some(text),
            _ => {
                self.refuse("a text in quotes");
                None
            }
        }
    }

    /// One of a few words.
    pub(super) fn word<T: Copy>(&self, choices: &[(&'static str, T)]) -> Option<T> {
        if !matches!(self.value, DeValue::String(_)) {
            let quoted: Vec<_> = choices.iter().map(|(name, _)| format!("\"{name}\"")).collect();
            self.refuse(&any_of(&quoted.iter().map(String::as_str).collect::<Vec<_>>()));
            return None;
        }
        let text = self.text()?;
        if let Some(&(_, choice)) = choices.iter().find(|(name, _)| *name == text) {
            return Some(choice);
        }
        let names: Vec<_> = choices.iter().map(|&(name, _)| name).collect();
        let would_pass = format!("{} would pass", any_of(&names));
        let help =
            near(text, names).map_or(would_pass.clone(), |near| format!("did you mean \"{near}\"? {would_pass}"));
        self.at_fault(format!("`{text}` is not a value of `{}`", self.key), "not one of its values", help);
        None
    }

    /// True or false.
    pub(super) fn yes_or_no(&self) -> Option<bool> {
        let yes = self.as_yes_or_no();
        if yes.is_none() {
            self.refuse("true or false");
        }
        yes
    }

    /// Whether the value is `true` or `false`; none where it is neither.
    pub(super) fn as_yes_or_no(&self) -> Option<bool> {
        match self.value {
            DeValue::Boolean(yes) => Some(*yes),
            _ => None,
        }
    }

    /// Whether the value is a bare number.
    pub(super) fn is_number(&self) -> bool {
        matches!(self.value, DeValue::Integer(_) | DeValue::Float(_))
    }

    /// A quantity with its unit.
    fn quantity<T: FromStr<Err = units::Fault>>(&self, dimension: Dimension) -> Option<T> {
        let text: String = match self.value {
            DeValue::String(text) => text.to_string(),
            DeValue::Integer(number) => number.as_str().to_string(),
            DeValue::Float(number) => number.as_str().to_string(),
            _ => {
                self.refuse(&format!("a number with a unit in quotes, such as \"{}\"", dimension.example()));
                return None;
            }
        };
        match text.parse() {
            Ok(quantity) => Some(quantity),
            Err(fault) => {
                let label = format!("{} belongs here", dimension.with_article());
                self.at_fault(format!("`{}`: {fault}", self.key), label, fault.help());
                None
            }
        }
    }

    /// A fall of zero or more, as a ratio: with its unit, or as `1:80`.
    pub(super) fn slope(&self) -> Option<f64> {
        let ratio = match self.value {
            DeValue::String(text) => text.split_once(':').and_then(|(rise, run)| {
                let (rise, run) = (rise.trim().parse::<f64>().ok()?, run.trim().parse::<f64>().ok()?);
                (run > 0.0 && rise.is_finite() && run.is_finite()).then(|| rise / run)
            }),
            _ => None,
        };
        ratio
            .or_else(|| self.quantity::<Slope>(Dimension::Slope).map(|slope| slope.0))
            .filter(|&fall| self.not_negative(fall))
    }

    /// A fall above zero, as a ratio.
    pub(super) fn positive_slope(&self) -> Option<f64> {
        self.slope().filter(|&fall| self.above_zero(fall))
    }

    /// A length of zero or more.
    pub(super) fn length(&self) -> Option<Length> {
        self.quantity::<Length>(Dimension::Length).filter(|length| self.not_negative(length.m()))
    }

    /// A length above zero.
    pub(super) fn positive_length(&self) -> Option<Length> {
        self.positive::<Length>(Dimension::Length, Length::m)
    }

    /// A quantity above zero.
    pub(super) fn positive<T: FromStr<Err = units::Fault> + Copy>(
        &self,
        dimension: Dimension,
        value: impl Fn(T) -> f64,
    ) -> Option<T> {
        self.quantity::<T>(dimension).filter(|&quantity| self.above_zero(value(quantity)))
    }

    /// A quantity of zero or more.
    pub(super) fn zero_or_more<T: FromStr<Err = units::Fault> + Copy>(
        &self,
        dimension: Dimension,
        value: impl Fn(T) -> f64,
    ) -> Option<T> {
        self.quantity::<T>(dimension).filter(|&quantity| self.not_negative(value(quantity)))
    }

    fn above_zero(&self, value: f64) -> bool {
        if value <= 0.0 {
            self.at_fault(format!("`{}` must be above zero", self.key), "not above zero", "write a value above zero");
        }
        value > 0.0
    }

    fn not_negative(&self, value: f64) -> bool {
        if value < 0.0 {
            self.at_fault(format!("`{}` must not be negative", self.key), "below zero", "write zero or more");
        }
        value >= 0.0
    }

    /// A bare number.
    pub(super) fn number(&self) -> Option<f64> {
        let number = match self.value {
            DeValue::Integer(number) => {
                i128::from_str_radix(&number.as_str().replace('_', ""), number.radix()).ok().map(|whole| whole as f64)
            }
            DeValue::Float(number) => number.as_str().replace('_', "").parse::<f64>().ok(),
            _ => {
                self.refuse("a bare number");
                return None;
            }
        };
        match number.filter(|number| number.is_finite()) {
            Some(number) if number.abs() > MOST => {
                self.at_fault(
                    format!("`{}` is too great", self.key),
                    "too great",
                    format!("up to {MOST:e} would pass"),
                );
                None
            }
            Some(number) => Some(number),
            None => {
                self.at_fault(
                    format!("`{}` must be a finite number", self.key),
                    "not a finite number",
                    "write a finite number",
                );
                None
            }
        }
    }

    /// A bare number of zero or more.
    pub(super) fn number_not_negative(&self) -> Option<f64> {
        self.number().filter(|&number| self.not_negative(number))
    }

    /// A price of zero or more per unit of one dimension, or of two.
    pub(super) fn price(&self, per: &[Dimension]) -> Option<Priced> {
        match units::read_price(self.text()?, per) {
            Ok(price) => self.not_negative(price.per_si()).then_some(price),
            Err(fault) => {
                self.at_fault(format!("`{}`: {fault}", self.key), "a price for each unit belongs here", fault.help());
                None
            }
        }
    }

    /// A bare number above zero.
    pub(super) fn number_positive(&self) -> Option<f64> {
        self.number().filter(|&number| self.above_zero(number))
    }

    /// A whole number within a range.
    pub(super) fn whole(&self, least: u32, most: u32) -> Option<u32> {
        let whole = match self.value {
            DeValue::Integer(number) => i64::from_str_radix(&number.as_str().replace('_', ""), number.radix()).ok(),
            DeValue::Float(_) => None,
            _ => {
                self.refuse(&format!("a whole number from {least} to {most}"));
                return None;
            }
        };
        let fits = whole.and_then(|whole| u32::try_from(whole).ok()).filter(|whole| (least..=most).contains(whole));
        if fits.is_none() {
            self.at_fault(
                format!("`{}` must be a whole number from {least} to {most}", self.key),
                if matches!(self.value, DeValue::Float(_)) { "not a whole number" } else { "outside that range" },
                format!("{least} to {most} would pass"),
            );
        }
        fits
    }
}
