//! One area in one case: what must leave, and how high the water may stand.

use crate::units::{Flow, Length, Load};

use super::channel::{Channel, Reach};
use super::{Case, PASCALS_PER_METRE, Ponding, depth_of, load_of};
use crate::device::Site;

/// The most that is allowed: a load, a depth, or both.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Limits {
    /// Greatest rain load, ponding head included.
    pub load: Option<Load>,
    /// Greatest water depth above the low point, ponding head left out.
    pub depth: Option<Length>,
}

/// Which limit a level is held against.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LimitKind {
    /// The rain load.
    Load,
    /// The water depth.
    Depth,
    /// The top of the parapet.
    Parapet,
}

impl LimitKind {
    /// The name in reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Load => "load",
            Self::Depth => "depth",
            Self::Parapet => "parapet",
        }
    }
}

/// The limit that a level comes nearest to, or passes by most.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Governing {
    /// Which limit.
    pub limit: LimitKind,
    /// Demand over limit: 1 at the limit.
    pub utilisation: f64,
}

/// Everything that decides about one area in one case.
#[derive(Clone, Copy, Debug)]
pub struct Situation<'r> {
    /// The case.
    pub case: &'r Case,
    /// Flow that must leave.
    pub demand: Flow,
    /// What holds here.
    pub limits: Limits,
    /// What a rule set asks for from the water up to the top of every closed opening, beside what the project asks.
    pub freeboard: Option<Length>,
    /// What deflection adds to the water, counted in the load alone.
    pub ponding: Ponding,
    /// Height of the parapet's top above the low point, where given.
    pub parapet: Option<Length>,
    /// What the flow of its devices depends on besides their dimensions.
    pub site: Site,
    /// The way to its devices, where that is a channel.
    pub channel: Option<Channel>,
}

impl Situation<'_> {
    /// The water along the channel to the devices, at their level; none where water is taken as level.
    ///
    /// A reach that turns supercritical, which input refuses, would stand infinitely deep: no limit would hold it.
    pub fn reach(&self, level: Length) -> Option<Reach> {
        let none = Length::from_m(f64::INFINITY);
        let refused = Reach { far_level: none, deepest: none };
        self.channel.map(|channel| channel.reach(self.demand, level).unwrap_or(refused))
    }

    /// Depth that the limits on load and depth are held against, at a level of the devices: the greatest along a channel.
    pub fn depth(&self, level: Length) -> Length {
        self.reach(level).map_or(level, |reach| reach.deepest)
    }

    /// Rain load at a level: unit weight times depth and ponding head.
    pub fn load(&self, level: Length) -> Load {
        load_of(self.ponding.weighed(self.depth(level)))
    }

    /// The ponding head at a level; infinite where the roof is unstable.
    pub fn ponding_head(&self, level: Length) -> Length {
        self.ponding.head(self.depth(level))
    }

    /// The highest level at which no limit is used beyond `utilisation`; at 1, the highest level allowed.
    ///
    /// It may stand below the low point, where the ponding head alone uses up the load, where the roof is unstable under
    /// water, or where a channel stands too deep whatever its devices do.
    pub fn level_at(&self, utilisation: f64) -> Length {
        if self.ponding.is_unstable() {
            return -NONE;
        }
        let load = self.limits.load.map(|limit| self.ponding.depth_under(depth_of(limit * utilisation)));
        let depth = self.limits.depth.map(|limit| limit * utilisation);
        let depth = load.into_iter().chain(depth).fold(NONE, Length::min);
        self.level_for(depth, self.parapet.map_or(NONE, |top| top * utilisation))
    }

    /// The highest level of the devices at which the water nowhere stands deeper than `depth`, nor above `top`.
    pub fn level_for(&self, depth: Length, top: Length) -> Length {
        match self.channel {
            Some(channel) => channel.level_for(self.demand, depth, top).unwrap_or(-NONE),
            None => depth.min(top),
        }
    }

    /// The highest level allowed.
    pub fn allowable_level(&self) -> Length {
        self.level_at(1.0)
    }

    /// The limit that a level uses most; ties go to load, then depth.
    pub fn governing(&self, level: Length) -> Governing {
        let reach = self.reach(level);
        let (depth, top) = reach.map_or((level, level), |reach| (reach.deepest, reach.far_level.max(level)));
        let weighed = PASCALS_PER_METRE * self.ponding.weighed(depth).m();
        // An unstable roof passes any load, whether or not one was given as its limit.
        let unstable = self.ponding.is_unstable().then_some(f64::INFINITY);
        let uses = [
            (LimitKind::Load, unstable.or(self.limits.load.map(|limit| weighed / limit.pa()))),
            (LimitKind::Depth, self.limits.depth.map(|limit| depth / limit)),
            (LimitKind::Parapet, self.parapet.map(|parapet| top / parapet)),
        ];
        let none = Governing { limit: LimitKind::Load, utilisation: f64::NEG_INFINITY };
        uses.into_iter().fold(none, |most, (limit, used)| match used {
            // A last bit does not make one limit govern over another.
            Some(utilisation) if utilisation > most.utilisation + 1e-9 => Governing { limit, utilisation },
            _ => most,
        })
    }
}

/// No height at all.
const NONE: Length = Length::from_m(f64::INFINITY);

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn situation(case: &Case) -> Situation<'_> {
        Situation {
            case,
            demand: Flow::gpm(100.0),
            limits: Limits { load: Some(Load::psf(26.0)), depth: Some(Length::inches(4.8)) },
            ponding: Ponding::Head(Length::inches(0.4)),
            parapet: Some(Length::inches(4.0)),
            site: Site::default(),
            freeboard: None,
            channel: None,
        }
    }

    /// Along a channel the limits hold where it stands deepest: at its far end, sqrt(3) critical depths and more.
    #[test]
    fn a_channel_is_held_at_its_far_end() {
        let case = Case::as_designed();
        let channel =
            Channel { width: Length::from_m(0.3), length: Length::from_m(10.0), slope: 0.0, roughness: 0.011 };
        let limits = Limits { load: None, depth: Some(Length::from_m(0.16)) };
        let here = Situation {
            demand: Flow::from_m3_per_s(0.02),
            limits,
            parapet: None,
            channel: Some(channel),
            ..situation(&case)
        };
        let allowed = here.allowable_level();
        assert!(allowed < Length::from_m(0.14), "{allowed:?}");
        assert_relative_eq!(here.governing(allowed).utilisation, 1.0, max_relative = 1e-9);
        assert_relative_eq!(here.depth(allowed).m(), 0.16, max_relative = 1e-9);
        assert_relative_eq!(here.load(allowed).to_psf(), load_of(Length::from_m(0.16) + Length::inches(0.4)).to_psf());
    }

    /// 26 / 5.2 - 0.4 = 4.6 in by load, 4.8 in by depth, 4 in to the parapet's top. Worked by hand.
    #[test]
    fn the_least_of_load_depth_and_parapet_holds() {
        let case = Case::as_designed();
        let mut here = situation(&case);
        assert_relative_eq!(here.allowable_level().to_inches(), 4.0, max_relative = 1e-12);
        assert_eq!(here.governing(Length::inches(4.0)).limit, LimitKind::Parapet);
        here.parapet = None;
        assert_relative_eq!(here.allowable_level().to_inches(), 4.6, max_relative = 1e-12);
        let governing = here.governing(Length::inches(4.6));
        assert_eq!(governing.limit, LimitKind::Load);
        assert_relative_eq!(governing.utilisation, 1.0, max_relative = 1e-12);
        here.limits.load = None;
        assert_relative_eq!(here.level_at(0.5).to_inches(), 2.4, max_relative = 1e-12);
    }

    /// 26 psf on a roof that sags 0.02 in/psf: 26 / 5.2 x (1 - 0.104) = 4.48 in of water, and 0.52 in of ponding head. By hand.
    #[test]
    fn a_flexible_roof_allows_less_water() {
        let case = Case::as_designed();
        let mut here = situation(&case);
        here.parapet = None;
        here.ponding = Ponding::Flexible("0.02 in/psf".parse().unwrap());
        let allowed = here.allowable_level();
        assert_relative_eq!(allowed.to_inches(), 4.48, max_relative = 1e-9);
        assert_relative_eq!(here.ponding_head(allowed).to_inches(), 0.52, max_relative = 1e-9);
        assert_relative_eq!(here.load(allowed).to_psf(), 26.0, max_relative = 1e-9);
        here.ponding = Ponding::Flexible("0.2 in/psf".parse().unwrap());
        here.limits.load = None;
        assert!(here.allowable_level() < Length::ZERO);
        assert_eq!(here.governing(Length::inches(1.0)).utilisation, f64::INFINITY);
    }
}
