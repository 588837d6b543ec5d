//! The rules of the place itself: what may stand in an area, at which heights, and what its parapet has room for.
//!
//! The search asks them before it computes any water, and a report can say which of them left nothing.

use crate::device::{Kind, Place, Size};
use crate::roof::Catchment;
use crate::units::Length;

use super::RuleAt;

/// Why a size cannot stand in an area at all.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Misfit {
    /// The area takes other kinds only.
    Kind {
        /// The size's kind.
        found: Kind,
    },
    /// None of the size's own set heights lies within the area's range.
    SetHeight {
        /// Least and greatest of its own.
        own: (Length, Length),
        /// Least and greatest of the area.
        area: (Length, Length),
    },
    /// Every set height stands below the roof surface at the parapet.
    RoofAtWall {
        /// The highest of them.
        highest: Length,
        /// The roof surface there.
        roof: Length,
    },
    /// The top of the opening reaches the top of the parapet at every set height.
    Parapet {
        /// Top of the opening at its lowest set height.
        top: Length,
        /// Top of the parapet.
        parapet: Length,
    },
    /// One opening alone is longer than the edge.
    Edge {
        /// Its width.
        width: Length,
        /// The edge; zero where edge devices are forbidden.
        edge: Length,
    },
    /// A rule of a binding set leaves it no place.
    Rule(RuleAt),
}

/// Where a size may stand in an area.
#[derive(Clone, Debug, PartialEq)]
pub struct Stand {
    /// The set heights that a layout may be reported at, rising; never empty.
    pub heights: Vec<Length>,
    /// The highest to which it may be lifted: the end of its range, or where the top of its opening meets the parapet's.
    pub highest: Length,
}

/// The set heights at which a size may stand in an area.
///
/// They are the size's own that lie within the area's range, or the area's where the size has none; for an edge device
/// those not below the roof surface at the parapet; for a closed opening under a parapet of known height those at which
/// its top stays below the parapet's.
///
/// # Errors
/// The rule that leaves none, in that order.
pub fn stands(size: &Size, area: &Catchment) -> Result<Stand, Misfit> {
    let kind = size.device.kind();
    if !area.takes(kind) {
        return Err(Misfit::Kind { found: kind });
    }
    let at_edge = size.place == Place::Edge;
    if let (true, Some(edge)) = (at_edge, area.edge)
        && (edge == Length::ZERO || edge_used([(size, 1)], area) > edge.nm())
    {
        return Err(Misfit::Edge { width: size.clear_width(), edge });
    }
    let mut heights = in_range(size, area)?;
    if at_edge {
        let highest = heights[heights.len() - 1];
        heights.retain(|&height| height >= area.roof_at_wall);
        if heights.is_empty() {
            return Err(Misfit::RoofAtWall { highest, roof: area.roof_at_wall });
        }
    }
    let mut highest = heights[heights.len() - 1];
    if let (true, Some(parapet), Some(opening)) = (at_edge, area.parapet.height, size.device.height()) {
        let top = heights[0] + opening;
        let under = Length::from_nm(parapet.nm() - opening.nm() - 1);
        heights.retain(|&height| height <= under);
        if heights.is_empty() {
            return Err(Misfit::Parapet { top, parapet });
        }
        highest = highest.min(under);
    }
    Ok(Stand { heights, highest })
}

fn in_range(size: &Size, area: &Catchment) -> Result<Vec<Length>, Misfit> {
    let ends = |heights: &[Length]| (heights[0], heights[heights.len() - 1]);
    match (&size.set_heights, &area.set_heights) {
        (Some(own), Some(range)) => {
            let (least, greatest) = ends(range);
            let within: Vec<_> = own.iter().copied().filter(|height| (least..=greatest).contains(height)).collect();
            if within.is_empty() {
                Err(Misfit::SetHeight { own: ends(own), area: (least, greatest) })
            } else {
                Ok(within)
            }
        }
        (Some(own), None) => Ok(own.to_vec()),
        (None, Some(range)) => Ok(range.clone()),
        // Input asks for an area's range wherever a size without its own may stand.
        (None, None) => Ok(vec![Length::ZERO]),
    }
}

/// Edge that openings and the gaps between them take up, in whole nanometres: sum of widths + gap (n - 1).
pub fn edge_used<'a>(groups: impl IntoIterator<Item = (&'a Size, u32)>, area: &Catchment) -> i64 {
    let at_edge = groups.into_iter().filter(|(size, _)| size.place == Place::Edge);
    let (widths, openings) = at_edge.fold((0_i64, 0_i64), |(widths, openings), (size, count)| {
        let count = i64::from(count);
        (widths.saturating_add(size.clear_width().nm().saturating_mul(count)), openings + count)
    });
    if openings == 0 { 0 } else { widths.saturating_add(area.gap.nm().saturating_mul(openings - 1)) }
}
