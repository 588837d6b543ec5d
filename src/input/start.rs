//! A first project with its catalogs beside it, or a first rule set, for someone to change line by line. Nothing that exists is
//! overwritten.

use std::fs::{self, OpenOptions};
use std::io::{self, Write};
use std::path::{Path, PathBuf};

use crate::units::System;

use super::shipped;

const US: &str = include_str!("start-us.toml");
const SI: &str = include_str!("start-si.toml");

/// Writes a commented project that runs as it is, and the catalogs that it names in a folder `catalogs` beside it.
///
/// Returns the files written, the project first. A catalog that is there already with the same text is left as it is.
///
/// # Errors
/// [`io::ErrorKind::AlreadyExists`] with the path where a file is there already and differs; then nothing is written. Any other
/// error of writing, with the path.
pub fn start(project: &Path, system: System) -> Result<Vec<PathBuf>, (PathBuf, io::Error)> {
    let folder = project.parent().unwrap_or(Path::new("")).join("catalogs");
    let text = if system == System::Us { US } else { SI };
    // The catalogs that the project names, and the ratings that those name.
    let named = |name: &str| text.contains(&format!("catalogs/{name}\""));
    let catalogs = || shipped::FILES.iter().filter(|(name, _)| named(name));
    let rated = |name: &str| catalogs().any(|(_, catalog)| catalog.contains(&format!("\"{name}\"")));
    let beside = shipped::FILES.iter().filter(|(name, _)| named(name) || rated(name));
    let mut files = vec![(project.to_path_buf(), text)];
    files.extend(beside.map(|(name, text)| (folder.join(name), *text)));
    let mut missing = Vec::new();
    for (index, (path, text)) in files.into_iter().enumerate() {
        match fs::read(&path) {
            Ok(found) if index > 0 && found == text.as_bytes() => {}
            Ok(_) => return Err((path, io::ErrorKind::AlreadyExists.into())),
            Err(error) if error.kind() == io::ErrorKind::NotFound => missing.push((path, text)),
            Err(error) => return Err((path, error)),
        }
    }
    for (path, text) in &missing {
        write_new(path, text).map_err(|error| (path.clone(), error))?;
    }
    Ok(missing.into_iter().map(|(path, _)| path).collect())
}

/// Writes a commented rule set that reads as it is, with every kind of rule and every key once.
///
/// # Errors
/// [`io::ErrorKind::AlreadyExists`] where a file is there already, which is left as it is; any other error of writing.
pub fn start_rules(set: &Path) -> io::Result<()> {
    write_new(set, shipped::RULES_TO_FILL_IN)
}

fn write_new(path: &Path, text: &str) -> io::Result<()> {
    if let Some(folder) = path.parent().filter(|folder| !folder.as_os_str().is_empty()) {
        fs::create_dir_all(folder)?;
    }
    OpenOptions::new().write(true).create_new(true).open(path)?.write_all(text.as_bytes())
}
