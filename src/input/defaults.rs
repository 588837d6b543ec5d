//! What is taken where a file says nothing, once: the code, the messages and the README's table read it here.

use std::ops::RangeInclusive;

use crate::search::Criterion;
use crate::units::{Length, Load, System};

/// Most groups in one layout.
pub(super) const MIX: u32 = 1;
/// Layouts listed for each area.
pub(super) const KEEP: u32 = 8;
/// Least and most devices in one area.
pub(super) const COUNT: RangeInclusive<u32> = 1..=8;
/// Part of a wall that counts.
pub(super) const WALL_SHARE: f64 = 0.5;
/// Part of an area's demand that runs on to the one that receives from it.
pub(super) const SHARE: f64 = 1.0;
/// Slope of a channel: the least that a gutter or valley has, and the deepest water.
pub(super) const CHANNEL_SLOPE: f64 = 0.0;
/// Roughness of a channel, Manning's n: membrane or sheet metal. Common practice.
pub(super) const CHANNEL_ROUGHNESS: f64 = 0.013;
/// Greatest raise of a load limit that strength is paid for, where a file speaks US units, and where SI.
pub(super) const MOST_RAISE_US: Load = Load::psf(20.0);
pub(super) const MOST_RAISE_SI: Load = Load::from_pa(1000.0);
/// What layouts are ranked by.
pub(super) const RANK_BY: [Criterion; 2] = [Criterion::Cost, Criterion::Load];

/// Step that made widths are rounded up to.
pub(super) const fn round(system: System) -> Length {
    match system {
        System::Us => Length::inches(0.25),
        System::Si => Length::mm(5.0),
    }
}

/// Step of the grid on which widths that may be any are searched before they are measured.
pub(super) const fn coarse_widths(system: System) -> Length {
    match system {
        System::Us => Length::inches(1.0),
        System::Si => Length::mm(25.0),
    }
}

/// One default: the key, what is taken, and what that means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Default {
    /// The key, with the table it belongs to.
    pub key: &'static str,
    /// What is taken.
    pub value: &'static str,
    /// What that means, in words.
    pub meaning: &'static str,
}

/// Every default, in the order of the files.
pub static DEFAULTS: [Default; 17] = [
    entry("search.rank_by", "cost, load", "the cheapest first; of equals the one with less load"),
    entry("search.keep", "8", "eight layouts are listed for each area"),
    entry("search.mix", "1", "all devices of a layout are of one size"),
    entry("search.count", "1 to 8", "from one to eight devices in an area, all groups together"),
    entry("search.round", "0.25 in, or 5 mm", "widths made to measure are rounded up to it"),
    entry("case", "as designed", "one case: the layout as drawn, the storm as given"),
    entry("area.wall", "0", "no wall sheds on the area"),
    entry("area.wall_share", "0.5", "half of a wall counts"),
    entry("area.edge", "unlimited", "openings may use any length of parapet"),
    entry("area.gap", "0", "openings may stand side by side"),
    entry("area.roof_at_wall", "0", "the roof at the parapet is as low as the low point"),
    entry("area.replace", "0", "closing or removing an opening costs nothing"),
    entry("channel.slope", "0", "the channel is level, which stands deepest"),
    entry("channel.roughness", "0.013", "Manning's n of membrane or sheet metal"),
    entry("structure.most", "20 psf or 1 kPa", "load limits are raised by so much at most"),
    entry("receives.share", "1", "all that leaves the other area arrives"),
    entry("receives.what", "all", "by its primary drains or its overflow, whichever way the other area's water leaves"),
];

const fn entry(key: &'static str, value: &'static str, meaning: &'static str) -> Default {
    Default { key, value, meaning }
}

/// The default of a key; the keys are those of [`DEFAULTS`].
pub(super) fn default(key: &str) -> &'static Default {
    DEFAULTS.iter().find(|default| default.key == key).unwrap_or(&DEFAULTS[0])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_says_what_the_code_takes() {
        let value = |key| default(key).value.to_string();
        assert_eq!(value("search.mix"), MIX.to_string());
        assert_eq!(value("search.keep"), KEEP.to_string());
        assert_eq!(value("search.count"), format!("{} to {}", COUNT.start(), COUNT.end()));
        let round = |system, factor: f64| (round(system).m() / factor * 1e6).round() / 1e6;
        let rounds = format!("{} in, or {} mm", round(System::Us, 0.0254), round(System::Si, 0.001));
        assert_eq!(value("search.round"), rounds);
        assert_eq!(value("area.wall_share"), WALL_SHARE.to_string());
        assert_eq!(value("channel.slope"), CHANNEL_SLOPE.to_string());
        assert_eq!(value("channel.roughness"), CHANNEL_ROUGHNESS.to_string());
        assert_eq!(value("receives.share"), SHARE.to_string());
        assert_eq!((MOST_RAISE_US.to_psf().round(), MOST_RAISE_SI.pa()), (20.0, 1000.0), "{}", value("structure.most"));
        assert_eq!(value("search.rank_by"), RANK_BY.map(Criterion::name).join(", "));
    }
}
