//! Reading quantities as people type them: `"6 in"`, `"9,600 ft2"`, `"1.4 kPa"`, `"14 / in"`.
//!
//! A quantity is one number and one unit. What does not pass is refused with what would: no unit, a unit of something else,
//! an unknown unit with a near one, a comma that could be a decimal point. Nothing is guessed.

use std::fmt;
use std::str::FromStr;

use super::{
    Area, CUBIC_METRES_PER_GALLON, DeckInertia, Flexibility, Flow, Inertia, Intensity, Length, Load, METRES_PER_FOOT,
    METRES_PER_INCH, Money, PASCALS_PER_PSF, ReturnPeriod, Time,
};

/// What a quantity measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Dimension {
    /// Lengths, depths and heights.
    Length,
    /// Areas.
    Area,
    /// Volume flows.
    Flow,
    /// Rain intensities.
    Intensity,
    /// Loads on a surface.
    Load,
    /// Spans of time.
    Time,
    /// Return periods.
    ReturnPeriod,
    /// Falls, as a ratio.
    Slope,
    /// Sag for each load on a roof.
    Flexibility,
    /// Second moments of area of members.
    Inertia,
    /// Second moments of area of decks, for each unit of their width.
    DeckInertia,
}

/// One unit: the spellings that pass, the first of them the one that messages show, and its size in SI.
type Unit = (&'static [&'static str], f64);

const LENGTHS: &[Unit] = &[
    (&["in", "inch", "inches", "\"", "\u{2033}", "\u{201d}"], METRES_PER_INCH),
    (&["ft", "foot", "feet", "'", "\u{2032}", "\u{2019}"], METRES_PER_FOOT),
    (&["mm", "millimetre", "millimetres", "millimeter", "millimeters"], 0.001),
    (&["cm", "centimetre", "centimetres", "centimeter", "centimeters"], 0.01),
    (&["m", "metre", "metres", "meter", "meters"], 1.0),
    (&["yd", "yard", "yards"], 3.0 * METRES_PER_FOOT),
];
const AREAS: &[Unit] = &[
    (&["ft2", "ft\u{b2}", "ft^2", "sq ft", "sqft", "sq. ft.", "sf", "square feet"], METRES_PER_FOOT * METRES_PER_FOOT),
    (&["m2", "m\u{b2}", "m^2", "sq m", "sqm", "square metres", "square meters"], 1.0),
    (&["in2", "in\u{b2}", "in^2", "sq in"], METRES_PER_INCH * METRES_PER_INCH),
    (&["mm2", "mm\u{b2}", "mm^2", "sq mm"], 1e-6),
    (&["cm2", "cm\u{b2}", "cm^2", "sq cm"], 1e-4),
    (&["ha"], 1e4),
];
const FLOWS: &[Unit] = &[
    (&["gpm", "gal/min", "usgpm"], CUBIC_METRES_PER_GALLON / 60.0),
    (&["l/s", "lps", "L/s"], 0.001),
    (&["m3/s", "m\u{b3}/s", "m^3/s"], 1.0),
    (&["cfs", "ft3/s", "ft\u{b3}/s", "ft^3/s"], METRES_PER_FOOT * METRES_PER_FOOT * METRES_PER_FOOT),
    (&["l/min", "L/min", "lpm"], 0.001 / 60.0),
    (&["m3/h", "m\u{b3}/h", "m^3/h"], 1.0 / 3600.0),
];
const INTENSITIES: &[Unit] = &[
    (&["in/h", "in/hr", "inch/h", "in./hr", "iph", "inches/hour", "in per hour"], METRES_PER_INCH / 3600.0),
    (&["mm/h", "mm/hr", "mm per hour"], 0.001 / 3600.0),
    (&["mm/min"], 0.001 / 60.0),
    (&["l/(s m2)", "l/s/m2", "l/(s\u{b7}m\u{b2})", "l/s\u{b7}m\u{b2}"], 0.001),
    (&["l/(s ha)", "l/s/ha", "l/(s\u{b7}ha)"], 1e-7),
];
const LOADS: &[Unit] = &[
    (&["psf", "lb/ft2", "lbf/ft2", "lb/ft\u{b2}", "lb/sq ft"], PASCALS_PER_PSF),
    (&["kPa", "kN/m2", "kN/m\u{b2}", "kN/m^2"], 1000.0),
    (&["Pa", "N/m2", "N/m\u{b2}", "N/m^2"], 1.0),
];
const TIMES: &[Unit] = &[
    (&["min", "minute", "minutes", "mins"], 60.0),
    (&["h", "hr", "hour", "hours"], 3600.0),
    (&["s", "sec", "second", "seconds"], 1.0),
];
const SLOPES: &[Unit] =
    &[(&["in/ft"], 1.0 / 12.0), (&["mm/m"], 0.001), (&["%", "percent"], 0.01), (&["ft/ft"], 1.0), (&["m/m"], 1.0)];
const FLEXIBILITIES: &[Unit] = &[
    (&["in/psf"], METRES_PER_INCH / PASCALS_PER_PSF),
    (&["mm/kPa", "mm/(kN/m2)", "mm/(kN/m\u{b2})"], 1e-6),
    (&["m/Pa"], 1.0),
];
const INERTIAS: &[Unit] = &[
    (&["in4", "in^4", "in\u{2074}"], METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH),
    (&["mm4", "mm^4", "mm\u{2074}"], 1e-12),
    (&["cm4", "cm^4", "cm\u{2074}"], 1e-8),
    (&["m4", "m^4", "m\u{2074}"], 1.0),
];
const DECK_INERTIAS: &[Unit] = &[
    (
        &["in4/ft", "in^4/ft", "in\u{2074}/ft"],
        METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH / METRES_PER_FOOT,
    ),
    (&["mm4/m", "mm^4/m", "mm\u{2074}/m"], 1e-12),
    (&["cm4/m", "cm^4/m", "cm\u{2074}/m"], 1e-8),
];
const RETURN_PERIODS: &[Unit] = &[(&["yr", "year", "years", "yrs", "y"], 1.0)];

/// Most that a quantity may be, in SI units: beyond it lengths would leave their grid of nanometres.
const MOST: f64 = 1e9;
/// Most that a price may be for one SI unit.
const MOST_PRICE: f64 = 1e15;

impl Dimension {
    const ALL: [Self; 11] = [
        Self::Length,
        Self::Area,
        Self::Flow,
        Self::Intensity,
        Self::Load,
        Self::Time,
        Self::ReturnPeriod,
        Self::Slope,
        Self::Flexibility,
        Self::Inertia,
        Self::DeckInertia,
    ];

    fn units(self) -> &'static [Unit] {
        match self {
            Self::Length => LENGTHS,
            Self::Area => AREAS,
            Self::Flow => FLOWS,
            Self::Intensity => INTENSITIES,
            Self::Load => LOADS,
            Self::Time => TIMES,
            Self::ReturnPeriod => RETURN_PERIODS,
            Self::Slope => SLOPES,
            Self::Flexibility => FLEXIBILITIES,
            Self::Inertia => INERTIAS,
            Self::DeckInertia => DECK_INERTIAS,
        }
    }

    /// A quantity as a file writes it, for messages.
    pub(crate) fn example(self) -> &'static str {
        match self {
            Self::Length => "6 in",
            Self::Area => "9600 ft2",
            Self::Flow => "250 gpm",
            Self::Intensity => "6.3 in/h",
            Self::Load => "30 psf",
            Self::Time => "15 min",
            Self::ReturnPeriod => "100 yr",
            Self::Slope => "0.25 in/ft",
            Self::Flexibility => "0.02 in/psf",
            Self::Inertia => "300 in4",
            Self::DeckInertia => "0.2 in4/ft",
        }
    }

    /// With its article, as a message says it.
    pub(crate) fn with_article(self) -> &'static str {
        match self {
            Self::Length => "a length",
            Self::Area => "an area",
            Self::Flow => "a flow",
            Self::Intensity => "a rain intensity",
            Self::Load => "a load",
            Self::Time => "a duration",
            Self::ReturnPeriod => "a return period",
            Self::Slope => "a slope",
            Self::Flexibility => "a flexibility",
            Self::Inertia => "a moment of inertia",
            Self::DeckInertia => "a moment of inertia of a deck",
        }
    }

    fn find(self, unit: &str) -> Option<f64> {
        let same = |names: &&[&str]| names.iter().any(|name| name.eq_ignore_ascii_case(unit));
        self.units().iter().find(|(names, _)| same(names)).map(|&(_, size)| size)
    }

    /// The value in SI of a quantity of this dimension.
    ///
    /// # Errors
    /// A [`Fault`] that says what was found; [`would_pass`] says what would pass.
    pub fn read(self, text: &str) -> Result<f64, Fault> {
        let (value, unit) = number_and_unit(text, Some(self))?;
        if unit.is_empty() {
            return Err(Fault::NoUnit { found: text.trim().into(), needs: self });
        }
        if is_more_than_a_unit(unit) {
            return Err(Fault::Several { found: text.trim().into() });
        }
        match self.find(unit).map(|size| value * size) {
            Some(value) if value.abs() <= MOST => Ok(value),
            Some(_) => Err(Fault::TooGreat { found: text.trim().into() }),
            None => Err(self.refuse(unit)),
        }
    }

    fn refuse(self, unit: &str) -> Fault {
        if let Some(is) = Self::ALL.into_iter().find(|dimension| dimension.find(unit).is_some()) {
            return Fault::WrongDimension { unit: unit.into(), is, needs: self };
        }
        let near = self
            .units()
            .iter()
            .flat_map(|(names, _)| names.iter())
            .map(|name| (strsim::osa_distance(&name.to_lowercase(), &unit.to_lowercase()), *name))
            .min()
            .filter(|(distance, name)| *distance <= 1.max(name.len() / 3) && *distance < name.len())
            .map(|(_, name)| name);
        Fault::UnknownUnit { unit: unit.into(), near, needs: self }
    }
}

/// The units of a dimension in the spelling that messages use: `in, ft, mm, cm, m or yd`.
pub fn would_pass(dimension: Dimension) -> String {
    let names: Vec<_> = dimension.units().iter().map(|(names, _)| names[0]).collect();
    match names.split_last() {
        Some((last, [])) => (*last).to_string(),
        Some((last, rest)) => format!("{} or {last}", rest.join(", ")),
        None => String::new(),
    }
}

/// Why a text is not the quantity that is wanted.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Fault {
    /// It does not begin with a number.
    NoNumber {
        /// What stands there.
        found: String,
        /// What the place wants; none where it is a number without a unit.
        needs: Option<Dimension>,
    },
    /// It begins with digits and signs that make no number.
    NotANumber {
        /// Those digits and signs.
        found: String,
        /// What the place wants; none where it is a number without a unit.
        needs: Option<Dimension>,
    },
    /// The number is not finite.
    NotFinite {
        /// What stands there.
        found: String,
        /// What the place wants; none where it is a number without a unit.
        needs: Option<Dimension>,
    },
    /// It is greater than anything on a roof.
    TooGreat {
        /// What stands there.
        found: String,
    },
    /// An area with one point before three digits, which could be a decimal point or part thousands.
    Point {
        /// The number as typed.
        found: String,
    },
    /// A comma where it could be a decimal point or a separator of thousands.
    Comma {
        /// The number as typed.
        found: String,
        /// It with the comma as a point.
        as_point: String,
        /// It with the comma taken out.
        taken_out: String,
    },
    /// A fraction, feet and inches, or several numbers in one text.
    Several {
        /// What stands there.
        found: String,
    },
    /// A number without a unit.
    NoUnit {
        /// The number as typed.
        found: String,
        /// What the place wants.
        needs: Dimension,
    },
    /// A unit of something else.
    WrongDimension {
        /// The unit as typed.
        unit: String,
        /// What it measures.
        is: Dimension,
        /// What the place wants.
        needs: Dimension,
    },
    /// A unit nobody knows.
    UnknownUnit {
        /// The unit as typed.
        unit: String,
        /// One that is spelt nearly so.
        near: Option<&'static str>,
        /// What the place wants.
        needs: Dimension,
    },
    /// A price that should be an amount per unit.
    NotAPrice {
        /// What stands there.
        found: String,
        /// What the price is per.
        per: Vec<Dimension>,
    },
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoNumber { found, .. } if found.is_empty() => write!(f, "this is empty"),
            Self::NoNumber { found, .. } => write!(f, "`{found}` does not begin with a number"),
            Self::NotANumber { found, .. } => write!(f, "`{found}` is not a number"),
            Self::NotFinite { found, .. } => write!(f, "`{found}` is not a finite number"),
            Self::TooGreat { found } => write!(f, "`{found}` is too great"),
            Self::Point { found } => write!(f, "the point in `{found}` can be read in two ways"),
            Self::Comma { found, .. } => write!(f, "the comma in `{found}` can be read in two ways"),
            Self::Several { found } => write!(f, "`{found}` is not one decimal number with one unit"),
            Self::NoUnit { found, needs } => write!(f, "`{found}` has no unit; this is {}", needs.with_article()),
            Self::WrongDimension { unit, is, needs } => {
                write!(f, "`{unit}` is a unit of {}; this is {}", bare(is.with_article()), needs.with_article())
            }
            Self::UnknownUnit { unit, needs, .. } => {
                write!(f, "`{unit}` is not a unit of {} known here", bare(needs.with_article()))
            }
            Self::NotAPrice { found, .. } => write!(f, "`{found}` is not a price per unit"),
        }
    }
}

impl Fault {
    /// What would pass instead.
    pub fn help(&self) -> String {
        match self {
            Self::NoNumber { needs: Some(needs), .. } | Self::NotFinite { needs: Some(needs), .. } => {
                format!("write a number and a unit, such as \"{}\"", needs.example())
            }
            Self::NotANumber { needs: Some(needs), .. } => {
                format!("write digits and at most one decimal point, such as \"{}\"", needs.example())
            }
            Self::NoNumber { .. } | Self::NotANumber { .. } | Self::NotFinite { .. } => "write a bare number".into(),
            Self::TooGreat { .. } => "no roof needs so much: check the number and its unit".into(),
            Self::Point { found } => {
                format!("write {found}0 if it is a decimal point, {} if it parts thousands", found.replace('.', ""))
            }
            Self::Comma { as_point, taken_out, .. } => format!(
                "write {as_point} if the comma is a decimal point, {taken_out} if it parts thousands; \
                 a comma passes only before whole groups of three digits in a whole number"
            ),
            Self::Several { .. } => "write 0.25 for 1/4, 2.5 in for 2 1/2 in, and 30 in for 2 ft 6 in".into(),
            Self::NoUnit { found, needs } => {
                format!("write \"{} {}\"; {} would pass", found, needs.units()[0].0[0], would_pass(*needs))
            }
            Self::UnknownUnit { near: Some(near), needs, .. } => {
                format!("did you mean `{near}`? {} would pass", would_pass(*needs))
            }
            Self::WrongDimension { needs, .. } | Self::UnknownUnit { near: None, needs, .. } => {
                format!("{} would pass", would_pass(*needs))
            }
            Self::NotAPrice { per, .. } => {
                let first: Vec<&str> = per.iter().map(|per| per.units()[0].0[0]).collect();
                let pass: Vec<String> = per.iter().map(|per| would_pass(*per)).collect();
                let unit = if per.len() > 1 { "a slash and a unit, and again" } else { "a slash and a unit" };
                format!("write an amount, {unit}: \"14 / {}\"; {} would pass", first.join(" / "), pass.join("; then "))
            }
        }
    }
}

/// The noun without its article.
fn bare(with_article: &str) -> &str {
    with_article.split_once(' ').map_or(with_article, |(_, noun)| noun)
}

/// Whether what stands behind a number is a fraction, a second number, or a unit with one more quantity behind it:
/// `1/2 in` of `2 1/2 in`, `- 8 in` of `6 - 8 in`, `ft 6 in` of `2 ft 6 in`.
fn is_more_than_a_unit(text: &str) -> bool {
    let is_digit = |c: char| c.is_ascii_digit();
    let is_unit = |text: &str| Dimension::ALL.iter().any(|dimension| dimension.find(text).is_some());
    if is_unit(text) {
        return false;
    }
    if text.trim_start_matches(['/', '-', ' ']).starts_with(is_digit) {
        return true;
    }
    // "ft3/min" has a digit too, but no unit of its own behind it.
    text.find(is_digit).zip(text.rfind(is_digit)).is_some_and(|(first, last)| {
        is_unit(text[..first].trim_end_matches(['-', ' '])) && is_unit(text[last + 1..].trim_start())
    })
}

/// Splits a text into its number and the unit behind it.
fn number_and_unit(text: &str, needs: Option<Dimension>) -> Result<(f64, &str), Fault> {
    let text = text.trim();
    let is_part = |c: char| c.is_ascii_digit() || ".,+-_".contains(c);
    let mut end = text.find(|c| !is_part(c)).unwrap_or(text.len());
    // An exponent belongs to the number only where digits follow: "1e3 ft2", not "3 edges".
    if text[end..].starts_with(['e', 'E']) {
        let digits = text[end + 1..].trim_start_matches(['+', '-']);
        if end > 0 && digits.starts_with(|c: char| c.is_ascii_digit()) {
            let sign = text[end + 1..].len() - digits.len();
            let length = digits.find(|c: char| !c.is_ascii_digit()).unwrap_or(digits.len());
            end += 1 + sign + length;
        }
    }
    let (number, unit) = (&text[..end], text[end..].trim());
    if !number.contains(|c: char| c.is_ascii_digit()) {
        let word = text.trim_start_matches(['+', '-']).to_ascii_lowercase();
        let not_finite = ["nan", "inf"].iter().any(|name| word.starts_with(name) && !word.starts_with("inch"));
        let found = text.to_string();
        return Err(if not_finite { Fault::NotFinite { found, needs } } else { Fault::NoNumber { found, needs } });
    }
    if needs == Some(Dimension::Area) && parts_thousands(number) {
        return Err(Fault::Point { found: number.to_string() });
    }
    let plain = without_commas(number)?;
    let Ok(value) = plain.parse::<f64>() else {
        // "2-1/2 in" is a fraction that a hyphen joins to its whole number.
        let fraction = unit.starts_with('/') && unit.contains(|c: char| c.is_ascii_digit());
        return Err(if fraction {
            Fault::Several { found: text.to_string() }
        } else {
            Fault::NotANumber { found: number.to_string(), needs }
        });
    };
    if value.is_finite() { Ok((value, unit)) } else { Err(Fault::NotFinite { found: text.to_string(), needs }) }
}

/// Whether the one point of a number may part thousands: three digits behind it, one to three before it.
fn parts_thousands(number: &str) -> bool {
    let Some((before, behind)) = number.split_once('.') else { return false };
    let all_digits = |part: &str| part.bytes().all(|b| b.is_ascii_digit());
    let opens = (1..=3).contains(&before.len()) && all_digits(before) && !before.starts_with('0');
    opens && behind.len() == 3 && all_digits(behind)
}

/// Takes commas out of a whole number from 1,000 whose groups behind the first are whole; refuses any other comma.
fn without_commas(number: &str) -> Result<String, Fault> {
    if !number.contains(',') {
        return Ok(number.to_string());
    }
    let taken_out: String = number.chars().filter(|&c| c != ',').collect();
    let digits = number.trim_start_matches(['+', '-']);
    let mut groups = digits.split(',');
    let first = groups.next().unwrap_or("");
    let all_digits = |group: &str| group.bytes().all(|b| b.is_ascii_digit());
    let opens = (1..=3).contains(&first.len()) && all_digits(first) && !first.starts_with('0');
    if opens && groups.all(|group| group.len() == 3 && all_digits(group)) {
        return Ok(taken_out);
    }
    let as_point = match number.matches(',').count() {
        1 if !number.contains('.') => number.replace(',', "."),
        _ => number.replace('.', "").replacen(',', ".", 1).replace(',', ""),
    };
    Err(Fault::Comma { found: number.to_string(), as_point, taken_out })
}

/// A price for each unit of a length or of an area, held per SI unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Priced(f64);

impl Priced {
    /// The amount for so many SI units.
    pub fn for_si(self, size: f64) -> f64 {
        self.0 * size
    }

    /// The amount for one SI unit.
    pub fn per_si(self) -> f64 {
        self.0
    }
}

/// Reads a price per unit of `per`: `"14 / in"`, `"0.2 / in2"`; with two dimensions per unit of both: `"0.07 / ft2 / psf"`.
///
/// # Errors
/// The [`Fault`] of the amount or of a unit.
pub fn read_price(text: &str, per: &[Dimension]) -> Result<Priced, Fault> {
    let not_a_price = || Fault::NotAPrice { found: text.trim().into(), per: per.to_vec() };
    let mut parts = text.split('/');
    let amount = parts.next().ok_or_else(not_a_price)?;
    let (value, rest) = match number_and_unit(amount, None) {
        Err(comma @ Fault::Comma { .. }) => return Err(comma),
        Err(_) => return Err(not_a_price()),
        Ok(amount) => amount,
    };
    let units: Vec<&str> = parts.map(str::trim).collect();
    if !rest.is_empty() || units.len() != per.len() || units.contains(&"") {
        return Err(not_a_price());
    }
    let mut price = value;
    for (per, unit) in per.iter().zip(units) {
        price /= per.find(unit).ok_or_else(|| per.refuse(unit))?;
    }
    if price.abs() <= MOST_PRICE { Ok(Priced(price)) } else { Err(Fault::TooGreat { found: text.trim().into() }) }
}

macro_rules! from_text {
    ($($quantity:ident: $make:path),+ $(,)?) => {$(
        impl FromStr for $quantity {
            type Err = Fault;
            fn from_str(text: &str) -> Result<Self, Fault> {
                Dimension::$quantity.read(text).map($make)
            }
        }
    )+};
}

from_text! {
    Area: Area::from_m2,
    Flow: Flow::from_m3_per_s,
    Intensity: Intensity::from_m_per_s,
    Load: Load::from_pa,
    Time: Time::from_s,
    ReturnPeriod: ReturnPeriod::from_years,
    Flexibility: Flexibility::from_m_per_pa,
    Inertia: Inertia::from_m4,
    DeckInertia: DeckInertia::from_m4_per_m,
}

impl FromStr for Length {
    type Err = Fault;
    fn from_str(text: &str) -> Result<Self, Fault> {
        Dimension::Length.read(text).map(|value| Self::from_m(value).on_grid())
    }
}

/// An amount of money without a unit, as a catalog's `each` gives it.
impl FromStr for Money {
    type Err = Fault;
    fn from_str(text: &str) -> Result<Self, Fault> {
        let (value, unit) = number_and_unit(text, None)?;
        let refused = || Fault::NoNumber { found: text.trim().into(), needs: None };
        if unit.is_empty() { Ok(Self::nearest(value)) } else { Err(refused()) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::System;
    use approx::assert_relative_eq;

    fn length(text: &str) -> Result<f64, Fault> {
        Dimension::Length.read(text)
    }

    #[test]
    fn a_point_that_may_part_thousands() {
        let fault = Dimension::Area.read("14.000 ft2").unwrap_err();
        assert_eq!(fault.to_string(), "the point in `14.000` can be read in two ways");
        assert_eq!(fault.help(), "write 14.0000 if it is a decimal point, 14000 if it parts thousands");
        for text in ["14.00 ft2", "14.0000 ft2", "0.125 ft2", "1400.125 ft2", "14,000 ft2"] {
            assert!(Dimension::Area.read(text).is_ok(), "{text}");
        }
        assert!(length("2.125 in").is_ok(), "an eighth of an inch is no thousand");
    }

    #[test]
    fn spellings_that_people_type() {
        for text in ["6 in", "6in", "6\"", "6 inch", "0.5 ft", "0.5'", "152.4 mm", " 15.24 cm "] {
            assert_relative_eq!(length(text).unwrap(), 0.1524, max_relative = 1e-12);
        }
        for text in ["9600 ft2", "9,600 sq ft", "9600 ft\u{b2}", "9.6e3 sf", "891.869184 m\u{b2}"] {
            assert_relative_eq!(Dimension::Area.read(text).unwrap(), 891.869_184, max_relative = 1e-12);
        }
        for text in ["3.6 in/h", "3.6 in/hr", "91.44 mm/h", "91.44 mm/hr"] {
            assert_relative_eq!(Dimension::Intensity.read(text).unwrap(), 2.54e-5, max_relative = 1e-12);
        }
        for text in ["1.4 kPa", "1.4 kN/m2", "1.4 kN/m\u{b2}", "1400 Pa"] {
            assert_relative_eq!(Dimension::Load.read(text).unwrap(), 1400.0, max_relative = 1e-12);
        }
        for text in ["2 l/s", "2 L/s"] {
            assert_relative_eq!(Dimension::Flow.read(text).unwrap(), 0.002, max_relative = 1e-12);
        }
        assert_relative_eq!(Dimension::Time.read("0.25 h").unwrap(), Dimension::Time.read("15 min").unwrap());
        assert_relative_eq!(Dimension::ReturnPeriod.read("100 yr").unwrap(), 100.0);
        // 0.0254 m over 47.88 Pa; a beam of 1500 in4 is one of 624.3e6 mm4. Unit arithmetic.
        assert_relative_eq!(Dimension::Flexibility.read("0.02 in/psf").unwrap(), 1.060_98e-5, max_relative = 1e-5);
        assert_relative_eq!(Dimension::Flexibility.read("10.6098 mm/kPa").unwrap(), 1.060_98e-5, max_relative = 1e-9);
        assert_relative_eq!(Dimension::Inertia.read("1500 in4").unwrap(), 624.347e-6, max_relative = 1e-5);
        assert_relative_eq!(Dimension::DeckInertia.read("0.2 in4/ft").unwrap(), 2.731e-7, max_relative = 1e-3);
    }

    /// 100 mm/h is 277.78 l/(s ha) and 1.667 mm/min. 1 ha is 1e4 m2, 1 l is 1e-3 m3: unit arithmetic.
    #[test]
    fn intensities_in_the_forms_of_several_codes() {
        let hundred = Dimension::Intensity.read("100 mm/h").unwrap();
        for (text, tolerance) in [("277.778 l/(s ha)", 1e-5), ("1.6667 mm/min", 1e-4), ("0.0277778 l/(s m2)", 1e-5)] {
            assert_relative_eq!(Dimension::Intensity.read(text).unwrap(), hundred, max_relative = tolerance);
        }
    }

    #[test]
    fn a_comma_passes_only_between_thousands() {
        assert_relative_eq!(length("1,234 mm").unwrap(), 1.234);
        assert_relative_eq!(length("12,345,678 mm").unwrap(), 12_345.678);
        for (text, as_point, taken_out) in [
            ("1,4 kPa", "1.4", "14"),
            ("0,600 m", "0.600", "0600"),
            ("1,2345 m", "1.2345", "12345"),
            ("1,234.5 m", "1.2345", "1234.5"),
            ("1.234,5 m", "1234.5", "1.2345"),
        ] {
            match number_and_unit(text, None) {
                Err(Fault::Comma { as_point: point, taken_out: out, .. }) => {
                    assert_eq!((point.as_str(), out.as_str()), (as_point, taken_out), "{text}");
                }
                other => panic!("{text}: {other:?}"),
            }
        }
    }

    #[test]
    fn refusals_say_what_was_found_and_what_would_pass() {
        let shown = |fault: Fault| format!("{fault}; {}", fault.help());
        assert_eq!(
            shown(length("6").unwrap_err()),
            "`6` has no unit; this is a length; write \"6 in\"; in, ft, mm, cm, m or yd would pass"
        );
        assert_eq!(
            shown(length("6 gpm").unwrap_err()),
            "`gpm` is a unit of flow; this is a length; in, ft, mm, cm, m or yd would pass"
        );
        assert_eq!(
            shown(length("6 inn").unwrap_err()),
            "`inn` is not a unit of length known here; did you mean `in`? in, ft, mm, cm, m or yd would pass"
        );
        assert_eq!(
            shown(length("nan in").unwrap_err()),
            "`nan in` is not a finite number; write a number and a unit, such as \"6 in\""
        );
        assert_eq!(
            shown(Dimension::Load.read("heavy").unwrap_err()),
            "`heavy` does not begin with a number; write a number and a unit, such as \"30 psf\""
        );
        let needs = Some(Dimension::Length);
        assert_eq!(length("1e999 in"), Err(Fault::NotFinite { found: "1e999 in".into(), needs }));
        assert_eq!(
            shown(Dimension::Area.read("1e308 ha").unwrap_err()),
            "`1e308 ha` is too great; no roof needs so much: check the number and its unit"
        );
        assert_eq!(length(""), Err(Fault::NoNumber { found: String::new(), needs }));
    }

    #[test]
    fn a_quantity_is_one_number_and_one_unit() {
        let several = [
            "2 1/2 in",
            "2-1/2 in",
            "1/2 in",
            "2 ft 6 in",
            "2ft6in",
            "2' 6\"",
            "2'-6\"",
            "6 - 8 in",
            "1 234 mm",
            "6/12",
        ];
        for text in several {
            let fault = length(text).unwrap_err();
            assert_eq!(fault.to_string(), format!("`{text}` is not one decimal number with one unit"));
            assert_eq!(fault.help(), "write 0.25 for 1/4, 2.5 in for 2 1/2 in, and 30 in for 2 ft 6 in");
        }
        for (text, number) in [("9_600 mm", "9_600"), ("6-8 in", "6-8"), ("1.2.3 in", "1.2.3"), ("--3 in", "--3")] {
            assert_eq!(
                length(text),
                Err(Fault::NotANumber { found: number.into(), needs: Some(Dimension::Length) }),
                "{text}"
            );
        }
        assert_eq!(length("6 ft2").unwrap_err().to_string(), "`ft2` is a unit of area; this is a length");
        assert_eq!(
            Dimension::Flow.read("6 m3/min").unwrap_err().to_string(),
            "`m3/min` is not a unit of flow known here"
        );
        assert_eq!(length("6 ft3").unwrap_err().to_string(), "`ft3` is not a unit of length known here");
    }

    #[test]
    fn prices_per_unit() {
        let price = read_price("14 / in", &[Dimension::Length]).unwrap();
        assert_relative_eq!(price.for_si(0.3048), 168.0, max_relative = 1e-12);
        assert!(read_price("14", &[Dimension::Length]).is_err());
        assert!(read_price("14 / gpm", &[Dimension::Length]).is_err());
        assert_eq!("250".parse::<Money>().unwrap(), Money::nearest(250.0));
        assert_eq!(System::Us.to_string(), "us");
    }
}
