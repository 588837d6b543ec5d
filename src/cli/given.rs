//! Which of the given layouts a command is about.

use crate::input::{self, Project};
use crate::roof::Given;

use super::Failure;

/// The flag that takes only some of the layouts.
#[derive(Debug, clap::Args)]
pub(super) struct Chosen {
    /// Only this layout; may be given several times.
    #[arg(long, value_name = "NAME")]
    layout: Vec<String>,
}

impl Chosen {
    /// The layouts of the areas that were asked for.
    pub(super) fn of(&self, project: &Project, areas: &[usize]) -> Result<Vec<Given>, Failure> {
        let mut given = project.layouts.clone();
        if given.is_empty() {
            let help = "give a [[layout]] with name, area and groups, or name a schedule: schedule = \"survey.csv\"";
            return Err(Failure::said("the project gives no layout to be checked", help));
        }
        for wanted in &self.layout {
            if !given.iter().any(|layout| layout.name == *wanted) {
                let names = given.iter().map(|layout| layout.name.as_str());
                let near = input::nearest(wanted, names.clone())
                    .map_or(String::new(), |near| format!("; did you mean `{near}`?"));
                let mut names: Vec<&str> = names.collect();
                names.dedup();
                names.truncate(12);
                return Err(Failure::said(
                    &format!("there is no layout `{wanted}`{near}"),
                    &format!("layouts are {}", names.join(", ")),
                ));
            }
        }
        given.retain(|layout| {
            areas.contains(&layout.area) && (self.layout.is_empty() || self.layout.contains(&layout.name))
        });
        Ok(given)
    }
}
