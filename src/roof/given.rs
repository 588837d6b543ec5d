//! Layouts that someone gave: a drawing to review, a survey of what is there, a contractor's substitution.

use crate::device::Size;
use crate::units::Length;

use super::layout::Group;

/// A layout of an area, by name.
#[derive(Clone, Debug)]
pub struct Given {
    /// Its name; one area has no two of one name.
    pub name: String,
    /// Index of the area.
    pub area: usize,
    /// Its groups, in the order in which they were given; at least one, at most [`super::MOST_OUTLETS`].
    pub groups: Vec<GivenGroup>,
}

/// So many of one size at one set height.
#[derive(Clone, Debug)]
pub struct GivenGroup {
    /// The size: one of a catalog, one of a catalog's device with dimensions of its own, or one described in place.
    pub size: Size,
    /// How many.
    pub count: u32,
    /// Sill or rim above the low point.
    pub set_height: Length,
}

impl GivenGroup {
    /// It as a group of a layout.
    pub fn group(&self) -> Group<'_> {
        Group { size: &self.size, count: self.count, set_height: self.set_height }
    }
}

impl Given {
    /// The groups as a layout.
    pub fn groups(&self) -> Vec<Group<'_>> {
        self.groups.iter().map(GivenGroup::group).collect()
    }
}
