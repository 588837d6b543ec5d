//! What makes one layout better than another.

use std::cmp::Ordering;

/// One thing that layouts are ranked by.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Criterion {
    /// Least cost.
    Cost,
    /// Least rain load in the worst case.
    Load,
    /// Fewest devices.
    Count,
    /// Least total width; a rated device without a width counts as none.
    Width,
    /// Fewest distinct sizes.
    Sizes,
    /// Highest set height of the lowest sill.
    SetHeight,
    /// Least governing utilisation; how near an area without a layout comes to one. No file asks for it.
    Utilisation,
}

impl Criterion {
    /// What a file may name, in the order in which ties are broken.
    pub const ALL: [Self; 6] = [Self::Cost, Self::Load, Self::Count, Self::Width, Self::Sizes, Self::SetHeight];

    /// The name in files.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Cost => "cost",
            Self::Load => "load",
            Self::Count => "count",
            Self::Width => "width",
            Self::Sizes => "sizes",
            Self::SetHeight => "set-height",
            Self::Utilisation => "utilisation",
        }
    }

    /// Whether it is a sum over the devices, known without any water level.
    pub(super) const fn is_sum(self) -> bool {
        matches!(self, Self::Cost | Self::Count | Self::Width | Self::Sizes)
    }
}

/// Criteria in the order in which they decide: those asked for, then the others as ties. What is still equal goes by the
/// order of the sizes in the catalogs.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Order {
    criteria: Vec<Criterion>,
    /// How many of them stand before the first that needs a water level.
    sums: usize,
}

impl Order {
    /// The order for `rank_by`; cost breaks ties only where every device is `priced`.
    pub(super) fn new(rank_by: &[Criterion], priced: bool) -> Self {
        let mut criteria = rank_by.to_vec();
        for criterion in Criterion::ALL {
            if !criteria.contains(&criterion) && (criterion != Criterion::Cost || priced) {
                criteria.push(criterion);
            }
        }
        let sums = criteria.iter().position(|criterion| !criterion.is_sum()).unwrap_or(criteria.len());
        Self { criteria, sums }
    }

    /// The criteria, first things first.
    pub(super) fn criteria(&self) -> &[Criterion] {
        &self.criteria
    }

    /// Those before the first that needs a water level.
    pub(super) fn sums(&self) -> &[Criterion] {
        &self.criteria[..self.sums]
    }

    /// Those between the first criterion that needs a water level and the next that does.
    pub(super) fn sums_behind_level(&self) -> &[Criterion] {
        let behind = &self.criteria[self.sums + 1..];
        let count = behind.iter().take_while(|criterion| criterion.is_sum()).count();
        &behind[..count]
    }

    /// The first criterion that needs a water level; one always stands in the order.
    pub(super) fn first_level(&self) -> Criterion {
        self.criteria[self.sums]
    }

    /// Whether the set height decides before the load does: then sills are reported as high as they may stand.
    pub(super) fn prefers_high_sills(&self) -> bool {
        let place = |wanted| self.criteria.iter().position(|&criterion| criterion == wanted);
        place(Criterion::SetHeight) < place(Criterion::Load)
    }
}

/// The sums of a layout, all in whole units.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Sums {
    /// Cost in millionths; zero where it plays no part.
    pub(super) cost: i64,
    /// Devices.
    pub(super) count: i64,
    /// Total width in nanometres.
    pub(super) width: i64,
    /// Distinct sizes.
    pub(super) sizes: i64,
}

impl Sums {
    /// The value of a criterion that is a sum; zero for any other.
    pub(super) fn value(&self, criterion: Criterion) -> i64 {
        match criterion {
            Criterion::Cost => self.cost,
            Criterion::Count => self.count,
            Criterion::Width => self.width,
            Criterion::Sizes => self.sizes,
            Criterion::Load | Criterion::SetHeight | Criterion::Utilisation => 0,
        }
    }

    /// These sums against others, by the given criteria.
    pub(super) fn compare(&self, other: &Self, by: &[Criterion]) -> Ordering {
        by.iter()
            .map(|&criterion| self.value(criterion).cmp(&other.value(criterion)))
            .find(|ordering| ordering.is_ne())
            .unwrap_or(Ordering::Equal)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_not_asked_for_breaks_ties() {
        use Criterion::{Cost, Count, Load, SetHeight, Sizes, Width};
        let order = Order::new(&[Width, SetHeight], false);
        assert_eq!(order.criteria(), [Width, SetHeight, Load, Count, Sizes]);
        assert_eq!((order.sums(), order.first_level()), (&[Width][..], SetHeight));
        assert!(order.prefers_high_sills());
        let usual = Order::new(&[Cost, Load], true);
        assert_eq!(usual.criteria(), [Cost, Load, Count, Width, Sizes, SetHeight]);
        assert!(!usual.prefers_high_sills());
    }
}
