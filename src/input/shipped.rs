//! The files that come with the program, usable without any file of one's own: catalogs,
//! `catalogs = ["builtin:through-wall-scuppers"]`, and rule sets, `rules = ["builtin:rules/ipc"]`.

use std::path::{Path, PathBuf};

/// A rule set to copy and fill in. It is no file that a project may name: its numbers are invented.
pub(super) const RULES_TO_FILL_IN: &str = include_str!("../../catalogs/rules/template.toml");

/// What a path begins with that names a file of the program.
const MARK: &str = "builtin:";

/// Folder of the rule sets.
const RULES: &str = "rules/";

/// Files of the catalogs and the rule sets, by their path under `catalogs`.
pub(super) static FILES: [(&str, &str); 29] = [
    ("through-wall-scuppers.toml", include_str!("../../catalogs/through-wall-scuppers.toml")),
    ("made-to-measure.toml", include_str!("../../catalogs/made-to-measure.toml")),
    ("overflow-drains.toml", include_str!("../../catalogs/overflow-drains.toml")),
    ("sleeves-drains-and-edges.toml", include_str!("../../catalogs/sleeves-drains-and-edges.toml")),
    ("published-scupper-table.toml", include_str!("../../catalogs/published-scupper-table.toml")),
    ("through-wall-scuppers-metric.toml", include_str!("../../catalogs/through-wall-scuppers-metric.toml")),
    ("overflow-drains-metric.toml", include_str!("../../catalogs/overflow-drains-metric.toml")),
    ("ratings/overflow-drain-4in.csv", include_str!("../../catalogs/ratings/overflow-drain-4in.csv")),
    ("ratings/overflow-drain-6in.csv", include_str!("../../catalogs/ratings/overflow-drain-6in.csv")),
    ("ratings/overflow-drain-100mm.csv", include_str!("../../catalogs/ratings/overflow-drain-100mm.csv")),
    ("ratings/overflow-drain-150mm.csv", include_str!("../../catalogs/ratings/overflow-drain-150mm.csv")),
    ("ratings/published-channel-scupper.csv", include_str!("../../catalogs/ratings/published-channel-scupper.csv")),
    (
        "ratings/published-closed-scupper-4in.csv",
        include_str!("../../catalogs/ratings/published-closed-scupper-4in.csv"),
    ),
    (
        "ratings/published-closed-scupper-6in.csv",
        include_str!("../../catalogs/ratings/published-closed-scupper-6in.csv"),
    ),
    ("rules/asce-7-16.toml", include_str!("../../catalogs/rules/asce-7-16.toml")),
    ("rules/asce-7-22.toml", include_str!("../../catalogs/rules/asce-7-22.toml")),
    ("rules/ibc-2018.toml", include_str!("../../catalogs/rules/ibc-2018.toml")),
    ("rules/ibc-2021.toml", include_str!("../../catalogs/rules/ibc-2021.toml")),
    ("rules/ipc.toml", include_str!("../../catalogs/rules/ipc.toml")),
    ("rules/upc-family.toml", include_str!("../../catalogs/rules/upc-family.toml")),
    ("rules/irc-by-width.toml", include_str!("../../catalogs/rules/irc-by-width.toml")),
    ("rules/irc-by-area.toml", include_str!("../../catalogs/rules/irc-by-area.toml")),
    ("rules/high-wind-coast.toml", include_str!("../../catalogs/rules/high-wind-coast.toml")),
    ("rules/fm-1-54.toml", include_str!("../../catalogs/rules/fm-1-54.toml")),
    ("rules/en-12056-3-bs-8490.toml", include_str!("../../catalogs/rules/en-12056-3-bs-8490.toml")),
    ("rules/din-1986-100.toml", include_str!("../../catalogs/rules/din-1986-100.toml")),
    ("rules/as-nzs-3500-3.toml", include_str!("../../catalogs/rules/as-nzs-3500-3.toml")),
    ("rules/obc.toml", include_str!("../../catalogs/rules/obc.toml")),
    ("rules/obc-flow-control.toml", include_str!("../../catalogs/rules/obc-flow-control.toml")),
];

/// The path that stands for a file of the program, where a text names one; whether there is such a file is not asked.
pub(super) fn path_of(named: &str) -> Option<PathBuf> {
    named.strip_prefix(MARK).map(|name| Path::new(MARK).join(format!("{name}.toml")))
}

/// Whether a path stands for a file of the program.
pub(super) fn is_shipped(path: &Path) -> bool {
    path.starts_with(MARK)
}

/// Sorts of files of the program.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Sort {
    /// A catalog, or a table that one names.
    Catalog,
    /// A rule set.
    RuleSet,
}

impl Sort {
    /// What messages call one.
    pub(super) fn name(self) -> &'static str {
        match self {
            Self::Catalog => "catalog",
            Self::RuleSet => "rule set",
        }
    }

    /// What else there is for one who finds none that fits, behind the names.
    pub(super) fn otherwise(self) -> &'static str {
        match self {
            Self::Catalog => "",
            Self::RuleSet => "; `brimline start FILE --rules` writes one to fill in",
        }
    }

    /// How those of this sort are named in a project.
    pub(super) fn names(self) -> Vec<String> {
        let files = FILES.iter().filter_map(|(name, _)| name.strip_suffix(".toml"));
        files.filter(|name| self.has(name)).map(|name| format!("{MARK}{name}")).collect()
    }

    fn has(self, name: &str) -> bool {
        name.starts_with(RULES) == (self == Self::RuleSet)
    }
}

/// The text of a file of the program, where it is of the sort.
pub(super) fn text(path: &Path, sort: Sort) -> Option<&'static str> {
    let under = path.strip_prefix(MARK).ok()?.to_str()?.replace('\\', "/");
    FILES.iter().find(|(name, _)| *name == under && sort.has(name)).map(|&(_, text)| text)
}
