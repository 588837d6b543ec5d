//! The catalogs that come with the program, usable without any file: `catalogs = ["builtin:through-wall-scuppers"]`.

use std::path::{Path, PathBuf};

/// What a path begins with that names a catalog of the program.
const MARK: &str = "builtin:";

/// Files of the catalogs, by their path under `catalogs`.
pub(super) static FILES: [(&str, &str); 14] = [
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
];

/// The path that stands for a catalog of the program, where a text names one; whether there is such a catalog is not asked.
pub(super) fn path_of(named: &str) -> Option<PathBuf> {
    named.strip_prefix(MARK).map(|name| Path::new(MARK).join(format!("{name}.toml")))
}

/// Whether a path stands for a file of the program.
pub(super) fn is_shipped(path: &Path) -> bool {
    path.starts_with(MARK)
}

/// The text of a file of the program.
pub(super) fn text(path: &Path) -> Option<&'static str> {
    let under = path.strip_prefix(MARK).ok()?.to_str()?.replace('\\', "/");
    FILES.iter().find(|(name, _)| *name == under).map(|&(_, text)| text)
}

/// How the catalogs of the program are named in a project.
pub(super) fn names() -> Vec<String> {
    let catalogs = FILES.iter().filter_map(|(name, _)| name.strip_suffix(".toml"));
    catalogs.map(|name| format!("{MARK}{name}")).collect()
}
