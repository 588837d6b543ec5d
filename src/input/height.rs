//! Heights as people have them: above the low point, above the roof at the wall, or as an elevation of the project.
//!
//! All of them become heights above the low point, the one datum of the model.

use crate::units::{Dimension, Fault, Length};

use super::section::Cell;

/// From what heights in an area may count.
#[derive(Clone, Copy, Debug)]
pub(super) struct Datum {
    /// Elevation of the low point, where given.
    pub(super) low_point: Option<Length>,
    /// Roof surface at the wall above the low point.
    pub(super) roof_at_wall: Length,
}

/// What is wrong with a height.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum HeightFault {
    /// It is no length.
    Length(Fault),
    /// It counts from something unknown.
    From(String),
    /// It is an elevation, and the area gives none for its low point.
    NoDatum,
    /// It lies under the low point.
    Under,
}

impl HeightFault {
    /// What is wrong, of a value under a key.
    pub(super) fn title(&self, key: &str) -> String {
        match self {
            Self::Length(fault) => format!("`{key}`: {fault}"),
            Self::From(from) => format!("`{key}`: `{from}` is nothing that a height counts from"),
            Self::NoDatum => format!("`{key}` is an elevation, and the area has no `low_point`"),
            Self::Under => format!("`{key}` lies under the low point"),
        }
    }

    /// What would pass.
    pub(super) fn help(&self) -> String {
        match self {
            Self::Length(fault) => fault.help(),
            Self::From(_) => FORMS.into(),
            Self::NoDatum => "give the area the elevation of its low point: low_point = \"102.40 ft\"".into(),
            Self::Under => "heights are zero or more above the low point, the lowest of the area".into(),
        }
    }
}

const FORMS: &str = "\"2 in above low point\", \"2 in above roof at wall\" or \"elevation 102.57 ft\" would pass; 2 in alone is above the low point";

/// The height above the low point that a text means.
pub(super) fn read(text: &str, datum: &Datum) -> Result<Length, HeightFault> {
    let length = |text: &str| text.trim().parse::<Length>().map_err(HeightFault::Length);
    let height = if let Some(elevation) = text.trim().strip_prefix("elevation ") {
        (length(elevation)? - datum.low_point.ok_or(HeightFault::NoDatum)?).on_grid()
    } else {
        match text.split_once(" above ") {
            None => length(text)?,
            Some((height, from)) => match from.trim() {
                "low point" => length(height)?,
                "roof at wall" => (length(height)? + datum.roof_at_wall).on_grid(),
                other => return Err(HeightFault::From(other.into())),
            },
        }
    };
    if height < Length::ZERO { Err(HeightFault::Under) } else { Ok(height) }
}

/// The height above the low point that a value means; what is wrong with it is logged.
pub(super) fn of_cell(cell: &Cell<'_>, datum: &Datum) -> Option<Length> {
    let Some(text) = cell.as_text() else {
        // A bare number is refused with the units that it lacks.
        return cell.length();
    };
    match read(text, datum) {
        Ok(height) => Some(height),
        Err(fault) => {
            let label = format!("{} belongs here", Dimension::Length.with_article());
            cell.at_fault(fault.title(cell.key), label, fault.help());
            None
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A wall 20 ft up a slope of 1/4 in/ft stands 5 in above the low point: a sill 2 in above the roof there stands 7 in above
    /// it. By hand; 102.57 ft less 102.40 ft is 2.04 in.
    #[test]
    fn every_height_counts_from_the_low_point() {
        let datum = Datum { low_point: Some(Length::inches(102.4 * 12.0)), roof_at_wall: Length::inches(5.0) };
        let inches = |text| read(text, &datum).map(|height| (height.to_inches() * 1e6).round() / 1e6);
        assert_eq!(inches("2 in above roof at wall"), Ok(7.0));
        assert_eq!(inches("2 in above low point"), Ok(2.0));
        assert_eq!(inches("2.5 in"), Ok(2.5));
        assert_eq!(inches("elevation 102.57 ft"), Ok(2.04));
        assert_eq!(inches("elevation 102.3 ft"), Err(HeightFault::Under));
        assert_eq!(inches("2 in above the drain"), Err(HeightFault::From("the drain".into())));
        assert!(matches!(inches("two inches"), Err(HeightFault::Length(_))));
        let none = Datum { low_point: None, ..datum };
        assert_eq!(read("elevation 102.57 ft", &none), Err(HeightFault::NoDatum));
    }
}
