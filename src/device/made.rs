//! Devices made to measure: any width within a range, at the price that the catalog's tariff gives it.
//!
//! Which widths may be drawn is settled here: whole steps from the range's least to its greatest, and both ends themselves.
//! Which of them a layout should have belongs to `search`.

use std::sync::Arc;

use crate::units::{Length, Money, Priced};

use super::{Device, Size};

/// What a device costs: so much each, and so much for its dimensions.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Tariff {
    /// For the device, whatever its dimensions.
    pub each: f64,
    /// For each unit of width.
    pub per_width: Option<Priced>,
    /// For each unit of height.
    pub per_height: Option<Priced>,
    /// For each unit of width times height.
    pub per_area: Option<Priced>,
}

impl Tariff {
    /// What a device costs, as an amount that is not yet on whole millionths.
    pub fn amount(&self, device: &Device) -> f64 {
        let (width, height) = (device.width().map_or(0.0, Length::m), device.height().map_or(0.0, Length::m));
        let per = |price: Option<Priced>, size: f64| price.map_or(0.0, |price| price.for_si(size));
        self.each + per(self.per_width, width) + per(self.per_height, height) + per(self.per_area, width * height)
    }

    /// What a device costs. A wider one never costs less: no price for a dimension is negative.
    pub fn of(&self, device: &Device) -> Money {
        Money::nearest(self.amount(device))
    }
}

/// How a device is made to measure.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Made {
    /// The least width.
    pub from: Length,
    /// The greatest width.
    pub to: Length,
    /// Drawn widths are whole multiples of this, or one of the ends; above zero.
    pub round: Length,
    /// Step between the widths of the catalog's grid, on which layouts are searched before any is measured.
    pub grid: Length,
    /// What any width costs, where the catalog says.
    pub tariff: Option<Tariff>,
}

impl Made {
    /// The first whole multiple of `round` above `from`, as a count.
    fn first(&self) -> i64 {
        self.from.nm() / self.round.nm() + 1
    }

    /// Whole multiples of `round` between both ends.
    fn between(&self) -> i64 {
        ((self.to.nm() - 1) / self.round.nm() - self.first() + 1).max(0)
    }

    /// How many widths may be drawn.
    pub fn widths(&self) -> usize {
        if self.from.nm() >= self.to.nm() { 1 } else { self.between() as usize + 2 }
    }

    /// One of the widths that may be drawn, by its place from the least on; beyond the last the greatest.
    pub fn width(&self, place: usize) -> Length {
        match i64::try_from(place) {
            Ok(0) => self.from,
            Ok(place) if place <= self.between() => Length::from_nm((self.first() + place - 1) * self.round.nm()),
            _ => self.to,
        }
    }

    /// The place of the least width that may be drawn and is not under `width`; the last where there is none.
    pub fn rounded_up(&self, width: Length) -> usize {
        let (mut low, mut high) = (0, self.widths() - 1);
        while low < high {
            let middle = low + (high - low) / 2;
            if self.width(middle) >= width { high = middle } else { low = middle + 1 }
        }
        low
    }
}

impl Device {
    /// This device in another width; none for a kind that is not made to measure.
    #[must_use]
    pub fn with_width(&self, width: Length) -> Option<Self> {
        match *self {
            Self::Open { .. } => Some(Self::Open { width }),
            Self::Closed { height, .. } => Some(Self::Closed { width, height }),
            Self::Edge { .. } => Some(Self::Edge { width }),
            Self::Pipe { .. } | Self::Drain(_) | Self::Standpipe { .. } | Self::Rated { .. } => None,
        }
    }
}

impl Size {
    /// This size in another width, at the price of that; none where it is not made to measure.
    #[must_use]
    pub fn in_width(&self, width: Length) -> Option<Self> {
        let made = self.made.as_ref()?;
        let device = self.device.with_width(width)?;
        Some(Self {
            price: made.tariff.map(|tariff| tariff.of(&device)),
            device,
            made: Some(Arc::clone(made)),
            ..self.clone()
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn made(from: f64, to: f64, round: f64) -> Made {
        let inches = Length::inches;
        Made { from: inches(from), to: inches(to), round: inches(round), grid: inches(1.0), tariff: None }
    }

    fn widths(made: &Made) -> Vec<f64> {
        (0..made.widths()).map(|place| (made.width(place).to_inches() * 1e6).round() / 1e6).collect()
    }

    #[test]
    fn drawn_widths_are_whole_steps_and_both_ends() {
        assert_eq!(widths(&made(6.0, 7.0, 0.25)), [6.0, 6.25, 6.5, 6.75, 7.0]);
        assert_eq!(widths(&made(6.1, 6.9, 0.25)), [6.1, 6.25, 6.5, 6.75, 6.9]);
        assert_eq!(widths(&made(6.1, 6.2, 0.25)), [6.1, 6.2]);
        assert_eq!(widths(&made(6.1, 6.1, 0.25)), [6.1]);
        assert_eq!(widths(&made(6.0, 48.0, 100.0)), [6.0, 48.0]);
    }

    #[test]
    fn a_width_is_rounded_up_never_down() {
        let made = made(6.1, 6.9, 0.25);
        let up = |inches: f64| made.width(made.rounded_up(Length::inches(inches)));
        assert_eq!(up(5.0), Length::inches(6.1));
        assert_eq!(up(6.25), made.width(1));
        assert_eq!(up(6.250_001), made.width(2));
        assert_eq!(up(6.8), Length::inches(6.9));
        assert_eq!(up(9.0), Length::inches(6.9));
    }
}
