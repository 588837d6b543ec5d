//! Quantities and layouts in words: the digits that the sources support, in the units of the project.

use crate::device::{Device, Size};
use crate::roof::layout::Group;
use crate::roof::{LimitKind, Limits};
use crate::search::{Criterion, Outcome, Placed, Ranked};
use crate::units::{Area, Flow, Intensity, Length, Load, Money, System, Time};

use super::{fixed, without_zeros};

/// A number with its decimals, thousands parted by commas.
pub(super) fn grouped(value: f64, decimals: usize) -> String {
    let text = fixed(value, decimals);
    let (sign, digits) = text.strip_prefix('-').map_or(("", text.as_str()), |digits| ("-", digits));
    let (whole, part) = digits.split_once('.').map_or((digits, None), |(whole, part)| (whole, Some(part)));
    let mut out = String::with_capacity(text.len() + text.len() / 3);
    for (place, digit) in whole.chars().enumerate() {
        if place > 0 && (whole.len() - place).is_multiple_of(3) {
            out.push(',');
        }
        out.push(digit);
    }
    let sign = if digits.chars().all(|c| "0.".contains(c)) { "" } else { sign };
    match part {
        Some(part) => format!("{sign}{out}.{part}"),
        None => format!("{sign}{out}"),
    }
}

/// A number with at most so many decimals and no zeros behind them.
pub(super) fn trimmed(value: f64, decimals: usize) -> String {
    without_zeros(grouped(value, decimals))
}

/// How a search ended, in one word of every form of a report.
pub(super) fn outcome(outcome: &Outcome<'_>) -> &'static str {
    match outcome {
        Outcome::Optimal(_) => "optimal",
        Outcome::Stopped { .. } => "stopped",
        Outcome::Infeasible(_) => "infeasible",
    }
}

/// Shows quantities in one system of units.
#[derive(Clone, Copy, Debug)]
pub(super) struct Words(pub(super) System);

impl Words {
    /// Whether it speaks in inches and pounds.
    pub(super) fn us(self) -> bool {
        self.0 == System::Us
    }

    /// The unit of depths and dimensions.
    pub(super) fn small_unit(self) -> &'static str {
        if self.us() { "in" } else { "mm" }
    }

    /// The unit of loads.
    pub(super) fn load_unit(self) -> &'static str {
        if self.us() { "psf" } else { "kPa" }
    }

    /// A length in the unit of depths.
    pub(super) fn small(self, length: Length) -> f64 {
        if self.us() { length.to_inches() } else { length.m() * 1000.0 }
    }

    /// A load in its unit.
    pub(super) fn in_load_unit(self, load: Load) -> f64 {
        if self.us() { load.to_psf() } else { load.pa() / 1000.0 }
    }

    /// A computed depth without its unit: hundredths of an inch, or millimetres.
    pub(super) fn bare_depth(self, depth: Length) -> String {
        grouped(self.small(depth), if self.us() { 2 } else { 0 })
    }

    /// A computed depth.
    pub(super) fn depth(self, depth: Length) -> String {
        format!("{} {}", self.bare_depth(depth), self.small_unit())
    }

    /// A depth that is never said to be more than it is: the end of a window, which a contractor may build to.
    pub(super) fn depth_down(self, depth: Length) -> String {
        let scale = if self.us() { 100.0 } else { 1.0 };
        // A typed height a last bit under its own figure stays that figure.
        let value = (self.small(depth) * scale + 1e-6).floor() / scale;
        trimmed(value, if self.us() { 2 } else { 0 })
    }

    /// A depth to the nearest figure.
    pub(super) fn depth_near(self, depth: Length) -> String {
        trimmed(self.small(depth), if self.us() { 2 } else { 0 })
    }

    /// A depth that is never said to be less than it is.
    pub(super) fn depth_up(self, depth: Length) -> String {
        let scale = if self.us() { 100.0 } else { 1.0 };
        let value = (self.small(depth) * scale - 1e-6).ceil() / scale;
        trimmed(value, if self.us() { 2 } else { 0 })
    }

    /// A load that is never said to be less than it is.
    pub(super) fn load_up(self, load: Load) -> String {
        let scale = if self.us() { 10.0 } else { 100.0 };
        let value = (self.in_load_unit(load) * scale - 1e-6).ceil() / scale;
        format!("{} {}", trimmed(value, 2), self.load_unit())
    }

    /// An intensity that is never said to be more than it is.
    pub(super) fn intensity_down(self, intensity: Intensity) -> String {
        if self.us() {
            format!("{} in/h", trimmed((intensity.to_inches_per_hour() * 100.0 + 1e-6).floor() / 100.0, 2))
        } else {
            format!("{} mm/h", trimmed((intensity.m_per_s() * 3.6e6 + 1e-6).floor(), 0))
        }
    }

    /// A roof area that is never said to be more than it is.
    pub(super) fn area_down(self, area: Area) -> String {
        let (value, unit) = if self.us() { (area.to_ft2(), "ft2") } else { (area.m2(), "m2") };
        format!("{} {unit}", trimmed((value + 1e-6).floor(), 0))
    }

    /// A width that is never said to be less than it is, without its unit: narrower would not do.
    pub(super) fn width_up(self, width: Length) -> String {
        let scale = if self.us() { 100.0 } else { 1.0 };
        trimmed((self.small(width) * scale - 1e-6).ceil() / scale, if self.us() { 2 } else { 0 })
    }

    /// A dimension or a set height as it was given, without its unit.
    pub(super) fn bare_size(self, length: Length) -> String {
        trimmed(self.small(length), if self.us() { 3 } else { 1 })
    }

    /// A dimension or a set height as it was given.
    pub(super) fn size(self, length: Length) -> String {
        format!("{} {}", self.bare_size(length), self.small_unit())
    }

    /// A long length: edges and walls.
    pub(super) fn long(self, length: Length) -> String {
        if self.us() {
            format!("{} ft", trimmed(length.to_inches() / 12.0, 2))
        } else {
            format!("{} m", trimmed(length.m(), 2))
        }
    }

    /// An elevation above the project's datum.
    pub(super) fn elevation(self, elevation: Length) -> String {
        if self.us() {
            format!("{} ft", grouped(elevation.to_inches() / 12.0, 2))
        } else {
            format!("{} m", grouped(elevation.m(), 3))
        }
    }

    /// A roof area, without its unit.
    pub(super) fn bare_area(self, area: Area) -> String {
        trimmed(if self.us() { area.to_ft2() } else { area.m2() }, 1)
    }

    /// A roof area.
    pub(super) fn area(self, area: Area) -> String {
        format!("{} {}", self.bare_area(area), if self.us() { "ft2" } else { "m2" })
    }

    /// The area of an opening.
    pub(super) fn opening(self, area: Area) -> String {
        if self.us() {
            format!("{} in2", trimmed(area.to_ft2() * 144.0, 1))
        } else {
            format!("{} cm2", trimmed(area.m2() * 1e4, 1))
        }
    }

    /// A rain intensity.
    pub(super) fn intensity(self, intensity: Intensity) -> String {
        if self.us() {
            format!("{} in/h", trimmed(intensity.to_inches_per_hour(), 3))
        } else {
            format!("{} mm/h", trimmed(intensity.m_per_s() * 3.6e6, 1))
        }
    }

    /// A computed depth with a digit more than a table of layouts shows, for comparing laws; without its unit.
    pub(super) fn fine_depth(self, depth: Length) -> String {
        grouped(self.small(depth), if self.us() { 3 } else { 1 })
    }

    /// The unit of flows.
    pub(super) fn flow_unit(self) -> &'static str {
        if self.us() { "gpm" } else { "l/s" }
    }

    /// A flow in its unit.
    pub(super) fn in_flow_unit(self, flow: Flow) -> f64 {
        if self.us() { flow.to_gpm() } else { flow.m3_per_s() * 1000.0 }
    }

    /// A flow without its unit, to the digits that an equation supports.
    pub(super) fn bare_flow(self, flow: Flow) -> String {
        grouped(self.in_flow_unit(flow), if self.us() { 1 } else { 2 })
    }

    /// A flow.
    pub(super) fn flow(self, flow: Flow) -> String {
        if self.us() {
            let gpm = flow.to_gpm();
            format!("{} gpm", gpm_by_hand(gpm))
        } else {
            let litres = flow.m3_per_s() * 1000.0;
            format!("{} l/s", grouped(litres, if litres < 10.0 { 2 } else { 1 }))
        }
    }

    /// Decimals that a computed load is shown with.
    pub(super) fn load_decimals(self) -> usize {
        if self.us() { 1 } else { 2 }
    }

    /// A computed load without its unit.
    pub(super) fn bare_load(self, load: Load) -> String {
        // On a roof that is unstable under water no load is the last.
        if load.pa().is_infinite() {
            return "-".into();
        }
        grouped(self.in_load_unit(load), self.load_decimals())
    }

    /// A computed load.
    pub(super) fn load(self, load: Load) -> String {
        format!("{} {}", self.bare_load(load), self.load_unit())
    }

    /// A load as it was given, without its unit.
    pub(super) fn bare_given_load(self, load: Load) -> String {
        trimmed(self.in_load_unit(load), 3)
    }

    /// A load as it was given.
    pub(super) fn given_load(self, load: Load) -> String {
        format!("{} {}", trimmed(self.in_load_unit(load), 3), self.load_unit())
    }

    /// The limits of a case as they were given.
    pub(super) fn limits(self, limits: Limits) -> String {
        let load = limits.load.map(|load| format!("load {}", self.given_load(load)));
        let depth = limits.depth.map(|depth| format!("depth {}", self.size(depth)));
        load.into_iter().chain(depth).collect::<Vec<_>>().join(" and ")
    }

    /// A size: its tag and its dimensions.
    pub(super) fn name(self, size: &Size) -> String {
        let tag = &size.tag;
        match &size.device {
            Device::Rated { width: None, .. } => tag.to_string(),
            Device::Rated { width: Some(width), .. } | Device::Open { width } | Device::Edge { width } => {
                format!("{tag} {}", self.size(*width))
            }
            Device::Closed { width, height } => {
                format!("{tag} {} x {} {}", self.bare_size(*width), self.bare_size(*height), self.small_unit())
            }
            Device::Pipe { diameter } | Device::Standpipe { diameter } => {
                format!("{tag} {} dia.", self.size(*diameter))
            }
            Device::Drain(drain) => format!("{tag} {}, dam {}", self.size(drain.throat), self.size(drain.dam)),
        }
    }

    /// A group: `3 of RS 16 x 8 in at 2 in`.
    pub(super) fn group(self, group: &Group<'_>) -> String {
        format!("{} of {} at {}", group.count, self.name(group.size), self.size(group.set_height))
    }

    /// All groups of a layout; a set height that they share is said once.
    /// Of one that adds to what is there already, what it adds; where that may be closed, what it closes and keeps too.
    pub(super) fn layout(self, layout: &Ranked<'_>) -> String {
        let of = |placed: &[Placed<'_>]| self.groups(&placed.iter().map(|placed| placed.group).collect::<Vec<_>>());
        let (added, kept) = layout.groups.split_at(layout.added().len());
        let adds = of(added);
        match &layout.closed {
            None => adds,
            Some(closed) if closed.groups.is_empty() => format!("{adds}; all kept"),
            Some(closed) => {
                let kept = if kept.is_empty() { "none".into() } else { of(kept) };
                format!("{adds}; {} closed, {kept} kept", self.groups(&closed.groups))
            }
        }
    }

    /// Groups of one layout; none where what is there already is enough.
    pub(super) fn groups(self, groups: &[Group<'_>]) -> String {
        let shared = groups.iter().all(|group| group.set_height.nm() == groups[0].set_height.nm());
        match groups {
            [] => self.sizes(groups),
            [first, _, ..] if shared => format!("{}, all at {}", self.sizes(groups), self.size(first.set_height)),
            _ => groups.iter().map(|group| self.group(group)).collect::<Vec<_>>().join(" + "),
        }
    }

    /// Groups of one layout, their set heights left out.
    pub(super) fn sizes(self, groups: &[Group<'_>]) -> String {
        if groups.is_empty() {
            return "nothing added".into();
        }
        let one = |group: &Group<'_>| format!("{} of {}", group.count, self.name(group.size));
        groups.iter().map(one).collect::<Vec<_>>().join(" + ")
    }

    /// The windows of a layout's groups: one where all are alike, their common rise where only their starts are not, else each
    /// with its tag.
    pub(super) fn window(self, groups: &[Placed<'_>]) -> String {
        let one = |placed: &Placed<'_>| {
            let (from, to) = (self.bare_size(placed.from), self.depth_down(placed.to));
            // An end that rounds down to the start, or under it, leaves no room that a builder could use.
            let room = self.small(placed.to - placed.from) >= if self.us() { 0.01 } else { 1.0 };
            if room && from != to { format!("{from} to {to}") } else { format!("{from} only") }
        };
        let mut all: Vec<_> = groups.iter().map(one).collect();
        if all.iter().any(|window| *window != all[0]) {
            let rise = |placed: &Placed<'_>| placed.to.nm() - placed.from.nm();
            if groups.iter().all(|placed| (rise(placed) - rise(&groups[0])).abs() <= 1) {
                return match self.depth_down(groups[0].to - groups[0].from) {
                    none if none == "0" => "these only".into(),
                    rise => format!("up to {rise} higher"),
                };
            }
            all = groups.iter().map(|placed| format!("{} {}", placed.group.size.tag, one(placed))).collect();
        }
        all.dedup();
        all.join(", ")
    }

    /// The value of a limit of one kind.
    pub(super) fn limit(self, kind: LimitKind, limits: Limits, parapet: Option<Length>) -> String {
        match kind {
            LimitKind::Load => limits.load.map_or(String::new(), |load| self.given_load(load)),
            LimitKind::Depth => limits.depth.map_or(String::new(), |depth| self.size(depth)),
            LimitKind::Parapet => {
                parapet.map_or(String::new(), |top| format!("the parapet's top at {}", self.size(top)))
            }
        }
    }
}

/// A flow in gal/min as a hand calculation gives it: to the digits of the exact one beside it.
pub(super) fn gpm_by_hand(gpm: f64) -> String {
    grouped(gpm, usize::from(gpm < 100.0) + usize::from(gpm < 10.0))
}

/// A duration, in minutes up to two hours.
pub(super) fn duration(time: Time) -> String {
    let minutes = time.s() / 60.0;
    if minutes <= 120.0 { format!("{} min", trimmed(minutes, 2)) } else { format!("{} h", trimmed(minutes / 60.0, 2)) }
}

/// A cost: whole units where it is whole, else hundredths.
pub(super) fn money(cost: Money) -> String {
    let amount = cost.amount();
    grouped(amount, if (amount - amount.round()).abs() < 0.005 { 0 } else { 2 })
}

/// The criteria of a ranking, in words.
pub(super) fn ranked_by(criteria: &[Criterion]) -> String {
    criteria.iter().map(|criterion| criterion.name()).collect::<Vec<_>>().join(", then ")
}

/// `a, b and c`.
pub(super) fn list<S: AsRef<str>>(items: &[S]) -> String {
    match items {
        [] => String::new(),
        [one] => one.as_ref().to_string(),
        [rest @ .., last] => {
            format!("{} and {}", rest.iter().map(AsRef::as_ref).collect::<Vec<_>>().join(", "), last.as_ref())
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_parted_and_trimmed() {
        assert_eq!(grouped(1_234_567.891, 1), "1,234,567.9");
        assert_eq!(grouped(-999.5, 0), "-1,000");
        assert_eq!(grouped(-0.001, 2), "0.00");
        assert_eq!(trimmed(2.50, 3), "2.5");
        assert_eq!(trimmed(1200.0, 2), "1,200");
    }

    #[test]
    fn the_end_of_a_window_is_never_rounded_up() {
        let us = Words(System::Us);
        assert_eq!(us.depth_down(Length::inches(2.839)), "2.83");
        assert_eq!(us.depth_down(Length::inches(4.0)), "4");
        assert_eq!(Words(System::Si).depth_down(Length::mm(71.99)), "71");
    }
}
