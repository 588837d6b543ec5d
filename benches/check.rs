//! Timings of `check`: given layouts read from a schedule, held against the model, and written; each level is checked against
//! the flow that leaves at it, and each verdict against the level.

use std::fmt::Write as _;
use std::io::{self, Write};
use std::path::{Path, PathBuf};

use brimline::input::{self, Project};
use brimline::report::{self, Checks, Format};
use brimline::review::{self, Checked};
use brimline::roof::layout;

fn main() {
    divan::main();
}

const AREAS: usize = 100;
const LAYOUTS: usize = 10_000;

/// A survey of closed scuppers, every fourth layout with two groups, in three cases.
fn project() -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("bench-check");
    std::fs::create_dir_all(&folder).expect("a folder");
    let write = |name: &str, text: &str| std::fs::write(folder.join(name), text).expect("a file");
    write(
        "scuppers.toml",
        r#"
        [[device]]
        tag    = "RS"
        kind   = "closed scupper"
        width  = { from = "6 in", to = "36 in", step = "1 in" }
        height = ["4 in", "6 in", "8 in", "10 in"]
        price  = { each = 250, per_width = "14 / in", per_height = "9 / in" }
        "#,
    );
    let mut survey = String::from(
        r#"
        units    = "us"
        catalogs = ["scuppers.toml"]
        schedule = "survey.csv"
        limit    = { load = "28 psf" }
        [storm]
        intensity = "6.3 in/h"
        [[case]]
        name = "as designed"
        [[case]]
        name    = "one blocked"
        blocked = 1
        limit   = { load = "34 psf" }
        [[case]]
        name         = "as built"
        sill_error   = "0.5 in"
        opening_loss = "0.25 in"
        limit        = { load = "30 psf" }
        "#,
    );
    for area in 0..AREAS {
        let size = 200 + area * 37 % 401;
        let _ = writeln!(survey, "[[area]]\nname = \"area {area}\"\narea = \"{size} m2\"\nedge = \"30 m\"");
    }
    write("survey.toml", &survey);
    let mut rows = String::from("area,layout,device,count,width_in,height_in,set_height_in\n");
    for layout in 0..LAYOUTS {
        for group in 0..=usize::from(layout % 4 == 0) {
            let (count, width) = (1 + (layout + group) % 6, 6 + (layout * 7 + group * 5) % 31);
            let (height, quarters) = ([4, 6, 8, 10][layout / 3 % 4], 8 + (layout + group * 3) % 7);
            let set_height = quarters as f64 / 4.0;
            let area = layout % AREAS;
            let _ = writeln!(rows, "area {area},L{layout},RS,{count},{width},{height},{set_height}");
        }
    }
    write("survey.csv", &rows);
    folder.join("survey.toml")
}

fn read() -> Project {
    input::read(&project()).expect("the survey reads")
}

fn checked(project: &Project) -> Vec<Checked<'_>> {
    review::check(&project.roof, &project.options, &project.layouts)
}

/// Each level carries the demand, and the number below it does not; a layout whose levels are all allowed breaks no limit.
fn assert_right(project: &Project, checked: &[Checked<'_>]) {
    for one in checked.iter().step_by(97) {
        let mut allowed = true;
        for (state, situation) in one.standing.states.iter().zip(project.roof.situations(one.given.area)) {
            let pool = layout::pool(&one.given.groups(), &situation);
            let Some(water) = state.water else {
                allowed = false;
                continue;
            };
            let under = brimline::units::Length::from_m(water.level.m().next_down());
            assert!(pool.capacity(water.level) >= situation.demand && pool.capacity(under) < situation.demand);
            allowed &= water.load <= situation.limits.load.expect("a limit");
        }
        let fails = one.failings.iter().any(|failing| matches!(failing, review::Failing::Limit { .. }));
        assert_eq!(fails, !allowed, "{}", one.given.name);
    }
}

/// Reading the schedule.
#[divan::bench(sample_count = 10)]
fn reading(bencher: divan::Bencher) {
    let path = project();
    bencher.bench(|| {
        let project = input::read(&path).expect("the survey reads");
        assert_eq!(project.layouts.len(), LAYOUTS);
        project
    });
}

/// Holding the layouts against the model.
#[divan::bench(sample_count = 10)]
fn checking(bencher: divan::Bencher) {
    let project = read();
    bencher.bench(|| {
        let checked = checked(&project);
        assert_right(&project, &checked);
        checked.len()
    });
}

/// Writing the report; it is as long as the first one, which names every layout.
#[divan::bench(args = ["table", "csv", "json"], sample_count = 5)]
fn writing(bencher: divan::Bencher, format: &str) {
    let project = read();
    let checked = checked(&project);
    let areas: Vec<usize> = (0..AREAS).collect();
    let checks = Checks {
        roof: &project.roof,
        options: &project.options,
        assumed: &project.assumed,
        areas: &areas,
        checked: &checked,
        sensitivities: None,
        best: None,
        storage: None,
        mends: None,
        mended: &[],
    };
    let format = match format {
        "table" => Format::Table,
        "csv" => Format::Csv,
        _ => Format::Json,
    };
    let mut whole = Vec::new();
    report::check(&checks, format, 120, &mut whole).expect("memory takes it");
    let text = std::str::from_utf8(&whole).expect("UTF-8");
    assert!((0..LAYOUTS).step_by(97).all(|layout| text.contains(&format!("L{layout}"))));
    bencher.bench(|| {
        let mut length = Length(0);
        report::check(&checks, format, 120, &mut length).expect("it takes everything");
        assert_eq!(length.0, text.len());
        length.0
    });
}

/// Where a report is written to and only its bytes are counted.
struct Length(usize);

impl Write for Length {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.0 += bytes.len();
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}
