//! Rain and what runs on: rainfall tables, factors for climate, further storms and cascades, through the whole program; every
//! fault of a table and of `[storm]`, its message whole.
//!
//! `SNAPSHOTS=overwrite` writes the messages anew; each is to be read before it is kept.
#![expect(clippy::needless_raw_string_hashes, reason = "expected messages stand as snapbox writes them")]

use std::fs;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU32, Ordering};

use approx::{assert_abs_diff_eq, assert_relative_eq};
use brimline::input;
use brimline::roof::{Recurrence, Roof};
use brimline::units::Intensity;
use proptest::prelude::*;
use serde_json::Value;
use snapbox::cmd::{Command, OutputAssert, cargo_bin};
use snapbox::{IntoData, str};

const TABLE: &str = "duration_min,10_yr_in_h,50_yr_in_h,100_yr_in_h\n\
                     10, 5.20, 6.90, 7.52\n\
                     15, 4.40, 5.82, 6.34\n\
                     60, 2.30, 3.05, 3.34\n";

const STORM: &str = "table = \"rain.csv\"\nduration = \"15 min\"\nreturn_period = \"100 yr\"";

/// A project with one area of 9,625 ft2, which is 100 gpm for each in/h, under two cases.
fn project(storm: &str) -> String {
    format!(
        "units = \"us\"\ncatalogs = [\"builtin:through-wall-scuppers\"]\n[storm]\n{storm}\n[limit]\nload = \"36 psf\"\n\
         [search]\nset_height = \"2 in\"\nkeep = 2\n[[case]]\nname = \"as designed\"\n[[case]]\nname = \"one blocked\"\nblocked = 1\n\
         [[area]]\nname = \"roof\"\narea = \"9625 ft2\"\nlimit_in = {{ \"one blocked\" = {{ load = \"42 psf\" }} }}\n"
    )
}

/// A folder of its own for each test, gone when the test ends.
struct Folder(PathBuf);

impl Folder {
    fn new(project: &str, table: &str) -> Self {
        static COUNT: AtomicU32 = AtomicU32::new(0);
        let name = format!("brimline-storms-{}-{}", std::process::id(), COUNT.fetch_add(1, Ordering::Relaxed));
        let folder = Self(std::env::temp_dir().join(name));
        fs::create_dir_all(&folder.0).expect("a folder can be made");
        fs::write(folder.0.join("roof.toml"), project).expect("a file can be written");
        fs::write(folder.0.join("rain.csv"), table).expect("a file can be written");
        folder
    }

    fn brimline(&self, arguments: &[&str]) -> OutputAssert {
        Command::new(cargo_bin!("brimline")).current_dir(&self.0).env("NO_COLOR", "1").args(arguments).assert()
    }

    fn text(&self) -> String {
        let output = self.brimline(&["size", "roof.toml"]).code(0).stderr_eq("");
        let text = String::from_utf8(output.get_output().stdout.clone()).expect("UTF-8");
        // As one line: where a line ends is the page's business.
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    fn json(&self) -> Value {
        let output = self.brimline(&["size", "roof.toml", "--format", "json"]).code(0).stderr_eq("");
        serde_json::from_slice(&output.get_output().stdout).expect("JSON")
    }

    fn roof(&self) -> Roof {
        input::read(&self.0.join("roof.toml")).unwrap_or_else(|faults| panic!("{faults}")).roof
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.0);
    }
}

/// A storm that is refused with this message and no result.
fn storm_refused(storm: &str, message: impl IntoData) {
    Folder::new(&project(storm), TABLE)
        .brimline(&["size", "roof.toml"])
        .code(2)
        .stdout_eq("")
        .stderr_eq(message.into_data().raw());
}

/// A table that is refused with this message and no result.
fn table_refused(table: &str, message: impl IntoData) {
    Folder::new(&project(STORM), table)
        .brimline(&["size", "roof.toml"])
        .code(2)
        .stdout_eq("")
        .stderr_eq(message.into_data().raw());
}

fn in_per_hour(value: f64) -> Intensity {
    Intensity::from_m_per_s(value * 0.0254 / 3600.0)
}

/// 15 min stands in the table, 75 yr lies between 50 and 100: 5.82 + 0.52 ln 1.5 / ln 2 = 6.1242 in/h by hand, times 1.1 =
/// 6.7366. A cloudburst of 12 min at 100 yr: 7.52 (6.34 / 7.52)^(ln 1.2 / ln 1.5) = 6.9644 by hand, times 1.1 = 7.661; over the
/// design rain 6.9644 / 6.1242 = 1.1372. The values at 100 yr are of a public point-rainfall table.
#[test]
fn the_design_rain_and_a_further_storm_are_read_as_by_hand() {
    let storm = format!(
        "{}\nclimate = 1.1\nstorms = [{{ name = \"cloudburst\", duration = \"12 min\", return_period = \"100 yr\" }}]",
        STORM.replace("100 yr", "75 yr")
    );
    let folder = Folder::new(&project(&storm), TABLE);
    let roof = folder.roof();
    assert_abs_diff_eq!(roof.storm.intensity.to_inches_per_hour(), 6.7366, epsilon = 1e-4);
    assert_abs_diff_eq!(roof.demands[0].to_gpm(), 673.66, epsilon = 0.01);
    let names: Vec<&str> = roof.cases.iter().map(|case| case.name.as_str()).collect();
    assert_eq!(names, ["as designed", "as designed (cloudburst)", "one blocked", "one blocked (cloudburst)"]);
    for (case, rain) in [(0, 1.0), (1, 1.1372), (2, 1.0), (3, 1.1372)] {
        assert_abs_diff_eq!(roof.cases[case].rain, rain, epsilon = 1e-4);
    }
    // The limits of a case hold under every storm.
    let loads: Vec<f64> = roof.areas[0].limits.iter().map(|limits| limits.load.unwrap().to_psf().round()).collect();
    assert_eq!(loads, [36.0, 36.0, 42.0, 42.0]);
    let text = folder.text();
    for told in [
        "Storm: 6.737 in/h (for 15 min, once in 75 years): 6.124 in/h, read in rain.csv between 50 and 100 yr, times 1.1 for \
         climate.",
        "- cloudburst: 7.661 in/h (for 12 min, once in 100 years): 6.964 in/h, read in rain.csv between 10 and 15 min, times \
         1.1 for climate; 1.137 times the rain above",
        "Limit: load 36 psf, water up to 6.92 in; in \"one blocked\": load 42 psf, water up to 8.08 in.",
    ] {
        assert!(text.contains(told), "{text}\nlacks: {told}");
    }
    let json = folder.json();
    let storm = &json["storm"];
    assert_relative_eq!(storm["intensity_m_s"].as_f64().unwrap(), 6.7366 * 0.0254 / 3600.0, max_relative = 1e-5);
    assert_eq!(storm["climate_factor"], 1.1);
    assert_eq!(storm["read"]["table"], "rain.csv");
    assert_eq!(storm["read"]["return_period_from_yr"], 50.0);
    assert_eq!(storm["storms"][0]["duration_s"], 720.0);
    assert_abs_diff_eq!(storm["storms"][0]["rain_over_design_rain"].as_f64().unwrap(), 1.1372, epsilon = 1e-4);
}

/// Under each law and each storm: a case for every three, the storm's before the law's.
#[test]
fn storms_and_laws_multiply_the_cases() {
    let storm = "intensity = \"4 in/h\"\nstorms = [{ name = \"5 in\", intensity = \"5 in/h\" }, { name = \"a fifth more\", factor = 1.2 }]";
    let project = project(storm).replace("[search]\n", "[search]\nlaws = [\"thin-plate\", \"contracted\"]\n");
    let roof = Folder::new(&project, TABLE).roof();
    assert_eq!(roof.cases.len(), 2 * 3 * 2);
    assert_eq!(roof.cases[3].name, "as designed (5 in) (contracted)");
    let rain: Vec<f64> = roof.cases.iter().map(|case| (case.rain * 1e9).round() / 1e9).collect();
    assert_eq!(rain[..6], [1.0, 1.0, 1.25, 1.25, 1.2, 1.2]);
    assert_eq!(roof.areas[0].limits.len(), 12);
}

/// A storm of its own and a factor on the main one, without any table; what is told of them.
#[test]
fn storms_without_a_table() {
    let storm = "intensity = \"4 in/h\"\nduration = \"15 min\"\nclimate = 1.1\n\
                 storms = [{ name = \"own\", intensity = \"5 in/h\", return_period = \"500 yr\" }, { name = \"more\", factor = 1.2 }]";
    let text = Folder::new(&project(storm), TABLE).text();
    for told in [
        "Storm: 4.4 in/h (for 15 min): 4 in/h times 1.1 for climate.",
        "- own: 5.5 in/h (once in 500 years): 5 in/h times 1.1 for climate; 1.25 times the rain above",
        "- more: 5.28 in/h (for 15 min): 4 in/h times 1.1 for climate and times 1.2; 1.2 times the rain above",
    ] {
        assert!(text.contains(told), "{text}\nlacks: {told}");
    }
}

/// Depths over a duration are the intensities times it: 1.585 in over 15 min is 6.34 in/h; in mm, and with hours down, 161.036
/// mm/h over a quarter of an hour is 40.259 mm.
#[test]
fn one_table_in_four_forms() {
    let forms = [
        "duration_min,100_yr_in_h\n15,6.34\n",
        "# in any unit\nduration_h, 100_yr_mm_h\n\n0.25, 161.036\n",
        "duration_min,100_yr_in\n15,1.585\n",
        "100_yr_mm,duration_h\n40.259,0.25\n",
    ];
    for table in forms {
        let roof = Folder::new(&project(STORM), table).roof();
        assert_relative_eq!(roof.storm.intensity, in_per_hour(6.34), max_relative = 1e-9);
    }
}

/// A case's rain is told as the table has it: 6.34 / 1.2 = 5.283 in/h lies between 4.40 at 10 yr and 5.82 at 50 yr, at
/// 10 exp(0.8833 / 1.42 ln 5) = 27.2 yr; with a factor above one at 100 yr it is rarer than the table's last.
#[test]
fn the_rain_of_a_case_is_told_as_a_return_period() {
    let project = |rain: &str| project(STORM).replace("blocked = 1", &format!("rain = {rain}"));
    let roof = Folder::new(&project("1.05"), TABLE).roof();
    let Some(Recurrence::Once(period)) = roof.storm.recurrence(in_per_hour(6.34 / 1.2)) else { panic!("inside") };
    assert_abs_diff_eq!(period.years(), 27.2, epsilon = 0.05);
    let text = Folder::new(&project("0.833333333333"), TABLE).text();
    assert!(text.contains("rain times 0.833, once in 27 years by the table"), "{text}");
    let text = Folder::new(&project("1.05"), TABLE).text();
    assert!(text.contains("rain times 1.05, more seldom than once in 100 years"), "{text}");
}

/// The example's cascade by hand, each flow as the ft2 of roof whose rain it is: a plant room of 2,000 (1,800 and half of 400),
/// a workshop of 4,200, a loading roof of 2,600. The workshop gets all of the plant room by its primary drains or half by its
/// overflow: all, 6,200. The loading roof gets three quarters of the workshop's overflow and half of the plant room's: by the
/// overflow 0.75 (4,200 + 1,000) + 1,000 = 4,900, by the primary drains 0.75 x 6,200 = 4,650; so 7,500.
#[test]
fn the_cascade_of_the_example_by_hand() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/quarry-halls.toml");
    let roof = input::read(&path).unwrap_or_else(|faults| panic!("{faults}")).roof;
    let catching: Vec<f64> =
        roof.demands.iter().map(|demand| demand.to_gpm() * 96.25 / roof.storm.intensity.to_inches_per_hour()).collect();
    for (got, by_hand) in catching.iter().zip([2000.0, 6200.0, 7500.0]) {
        assert_relative_eq!(*got, by_hand, max_relative = 1e-9);
    }
}

/// Two more areas, of which the second receives what is written behind them.
const CASCADE: &str = "\n[[area]]\nname = \"tower\"\narea = \"1000 ft2\"\n\
                       [[area]]\nname = \"court\"\narea = \"500 ft2\"\n";

/// 962.5 gpm leave the roof, 100 the tower; 50 gpm rain on the court itself, which gets a quarter of the roof's overflow.
#[test]
fn the_tree_of_flows_stands_in_both_reports() {
    let receives = "receives = [{ from = \"roof\", share = 0.25, what = \"overflow\" }, { from = \"tower\" }, \
                    { from = \"roof\", share = 0.1, what = \"primary\" }]\n";
    let layout = "[[layout]]\nname = \"drawn\"\narea = \"court\"\n\
                  groups = [{ device = \"RS\", width = \"24 in\", height = \"6 in\", count = 3, set_height = \"2 in\" }]\n";
    let folder = Folder::new(&format!("{}{CASCADE}{receives}{layout}", project("intensity = \"9.625 in/h\"")), TABLE);
    let text = |arguments: &[&str]| {
        let output = folder.brimline(arguments).code(0);
        let text = String::from_utf8_lossy(&output.get_output().stdout).into_owned();
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    };
    let tree = "What runs onto what: the most that can arrive at once, steady and at full flow. Shares belong to areas, so no \
                layout changes what another area receives. Water leaves an area by its primary drains while they work and by \
                its overflow when they are blocked: it is counted by the way that brings more here, never by both. - court 391 \
                gpm; its own rain 50.0 gpm - 241 gpm from roof by its overflow, 0.25 of 962 gpm - 100.0 gpm from tower, all of \
                it - nothing from roof by its primary drains, share 0.1: not at the same time";
    for command in ["size", "check"] {
        let text = text(&[command, "roof.toml"]);
        assert_eq!(text.matches(tree).count(), 1, "{command}: {text}");
    }
    let demand = "Demand 391 gpm: 9.625 in/h on 500 ft2 of roof, and 0.25 of the 962 gpm that overflow from roof, and the \
                  100.0 gpm of tower.";
    let text = text(&["size", "roof.toml", "--area", "court"]);
    assert!(text.contains(demand), "{text}");
    assert!(
        text.contains("- The primary drains of an area carry nothing for it; those of an area above may bring"),
        "{text}"
    );
    let output = folder.brimline(&["size", "roof.toml", "--format", "json", "--area", "court"]);
    let json: Value = serde_json::from_slice(&output.get_output().stdout).expect("JSON");
    let receives = &json["areas"][0]["receives"];
    assert_eq!((&receives[0]["what"], &receives[1]["what"]), (&"overflow".into(), &"all".into()));
    assert_eq!(receives[2]["arrives_m3_s"], 0.0);
    assert_relative_eq!(receives[0]["arrives_m3_s"].as_f64().unwrap(), 240.625 * 6.309_02e-5, max_relative = 1e-5);
}

/// Each of a ladder of areas receives from the two above it: the tree tells each once, not 2^20 times.
#[test]
fn what_runs_together_again_is_told_once() {
    let mut text = project("intensity = \"0.001 in/h\"");
    for rung in 0..20 {
        for side in ["a", "b"] {
            text += &format!("[[area]]\nname = \"{side}{rung}\"\narea = \"1 ft2\"\n");
            if rung > 0 {
                let above = rung - 1;
                text += &format!(
                    "receives = [{{ from = \"a{above}\", share = 0.5 }}, {{ from = \"b{above}\", share = 0.5 }}]\n"
                );
            }
        }
    }
    let text = Folder::new(&text, TABLE).text();
    // In each of two trees, under the second area of rungs 2 to 18: the two above it stand under the first already.
    assert_eq!(text.matches(", as above").count(), 2 * 17 * 2);
}

#[test]
fn what_a_storm_lacks_or_gives_twice() {
    storm_refused(
        "duration = \"15 min\"",
        str![[r#"
error: `intensity` is missing in [storm]
 --> roof.toml:3:1
  |
3 | [storm]
  | ^^^^^^^ this table
  |
  = help: write intensity = "6.3 in/h" or intensity = "160 mm/h", or name a table = "rainfall.csv"

"#]],
    );
    storm_refused(
        "intensity = \"6 in/h\"\ntable = \"rain.csv\"",
        str![[r#"
error: `table` stands beside `intensity` in [storm]
 --> roof.toml:5:9
  |
4 | intensity = "6 in/h"
  |             -------- and given here
5 | table = "rain.csv"
  |         ^^^^^^^^^^ the intensity is looked up here
  |
  = help: give one of the two

"#]],
    );
    storm_refused(
        "table = \"rain.csv\"",
        str![[r#"
error: `duration` is missing in [storm]
 --> roof.toml:3:1
  |
3 | [storm]
  | ^^^^^^^ this table
  |
  = help: a table is read at a duration: duration = "15 min"

error: `return_period` is missing in [storm]
 --> roof.toml:3:1
  |
3 | [storm]
  | ^^^^^^^ this table
  |
  = help: a table is read at a return period: return_period = "100 yr"

"#]],
    );
    storm_refused(
        "table = \"rian.csv\"\nduration = \"15 min\"\nreturn_period = \"100 yr\"",
        str![[r#"
error: there is no file `rian.csv`
 --> roof.toml:4:9
  |
4 | table = "rian.csv"
  |         ^^^^^^^^^^ named here
  |
  = help: the path counts from the file that names it

"#]],
    );
}

#[test]
fn outside_the_table_is_told_with_its_ends() {
    storm_refused(
        "table = \"rain.csv\"\nduration = \"5 min\"\nreturn_period = \"200 yr\"\n\
         storms = [{ name = \"long\", duration = \"2 h\" }, { name = \"often\", return_period = \"2 yr\" }]",
        str![[r#"
error: `duration` lies outside `rain.csv`
 --> roof.toml:5:12
  |
5 | duration = "5 min"
  |            ^^^^^^^ shorter than any in the table
  |
  = help: the table runs from 10 min to 60 min; nothing is extrapolated

error: `return_period` lies outside `rain.csv`
 --> roof.toml:6:17
  |
6 | return_period = "200 yr"
  |                 ^^^^^^^^ longer than any in the table
  |
  = help: the table runs from 10 yr to 100 yr; nothing is extrapolated

error: `duration` lies outside `rain.csv`
 --> roof.toml:7:39
  |
7 | storms = [{ name = "long", duration = "2 h" }, { name = "often", return_period = "2 yr" }]
  |                                       ^^^^^ longer than any in the table
  |
  = help: the table runs from 10 min to 60 min; nothing is extrapolated

error: `return_period` lies outside `rain.csv`
 --> roof.toml:7:82
  |
7 | storms = [{ name = "long", duration = "2 h" }, { name = "often", return_period = "2 yr" }]
  |                                                                                  ^^^^^^ shorter than any in the table
  |
  = help: the table runs from 10 yr to 100 yr; nothing is extrapolated

"#]],
    );
}

#[test]
fn further_storms_that_say_nothing_or_too_much() {
    storm_refused(
        "intensity = \"6 in/h\"\nstorms = [{ name = \"same\" }, { name = \"looked up\", duration = \"5 min\" }, \
         { name = \"same\", factor = 0 }, { nmae = \"x\", factor = 1.2 }]",
        str![[r#"
error: a further storm is the same as the main one
 --> roof.toml:5:11
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |           ^^^^^^^^^^^^^^^^^ this table
  |
  = help: give it a duration, a return_period, a factor or an intensity of its own

error: `duration` of a further storm is looked up in a table, and [storm] names none
 --> roof.toml:5:63
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |                                                               ^^^^^^^ nowhere to look it up
  |
  = help: give the storm its own intensity, or [storm] a table in place of `intensity`

error: two storms have the name `same`
 --> roof.toml:5:83
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |                    ------ first here                                              ^^^^^^ again here
  |
  = help: give every storm a name of its own

error: `factor` must be above zero
 --> roof.toml:5:100
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |                                                                                                    ^ not above zero
  |
  = help: write a value above zero

error: `name` is missing in an entry of `storms`
 --> roof.toml:5:105
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |                                                                                                         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
  |
  = help: name the storm: name = "cloudburst"

error: unknown key `nmae` in an entry of `storms`
 --> roof.toml:5:107
  |
5 | storms = [{ name = "same" }, { name = "looked up", duration = "5 min" }, { name = "same", factor = 0 }, { nmae = "x", factor = 1.2 }]
  |                                                                                                           ^^^^ not a key of this table
  |
  = help: did you mean `name`? an entry of `storms` takes name, intensity, duration, return_period or factor

"#]],
    );
    storm_refused(
        "intensity = \"6 in/h\"\nstorms = []",
        str![[r#"
error: `storms` is an empty list
 --> roof.toml:5:10
  |
5 | storms = []
  |          ^^ nothing stands here
  |
  = help: write a list, such as [{ name = "cloudburst", duration = "5 min" }]

"#]],
    );
}

#[test]
fn an_unlikely_factor_for_climate_is_a_warning() {
    Folder::new(&project("intensity = \"6 in/h\"\nclimate = 0.15"), TABLE)
        .brimline(&["size", "roof.toml", "--output", "result"])
        .code(0)
        .stdout_eq("")
        .stderr_eq(
            str![[r#"
warning: `climate` multiplies every intensity by 0.15
 --> roof.toml:5:11
  |
5 | climate = 0.15
  |           ^^^^ less rain than without it
  |
  = help: a tenth more rain is climate = 1.1


"#]]
            .raw(),
        );
}

#[test]
fn a_table_that_rises_where_it_must_fall() {
    table_refused(
        "duration_min,10_yr_in_h,100_yr_in_h\n10,5.2,7.52\n15,5.4,6.34\n60,2.3,2.2\n",
        str![[r#"
error: intensity rises with duration
 --> rain.csv:3:4
  |
3 | 15,5.4,6.34
  |    ^^^ 5.4 over 15 min after 5.2 over 10 min
  |
  = help: over a longer duration it never rains harder: check this cell, and whether the column's head says what stands in it

error: intensity falls with the return period
 --> rain.csv:4:8
  |
4 | 60,2.3,2.2
  |        ^^^ 2.2 after 2.3
  |
  = help: what is met more seldom is never less: check this cell

"#]],
    );
    // Depths rise with duration, but no faster than it.
    table_refused(
        "duration_min,100_yr_in\n10,1.2\n15,2.1\n",
        str![[r#"
error: intensity rises with duration
 --> rain.csv:3:4
  |
3 | 15,2.1
  |    ^^^ 8.400 in/h over 15 min after 7.200 in/h over 10 min
  |
  = help: over a longer duration it never rains harder: check this cell, and whether the column's head says what stands in it

"#]],
    );
}

#[test]
fn durations_and_return_periods_that_do_not_rise() {
    table_refused(
        "duration_min,100_yr_in_h,10_yr_in_h\n15,6.3,4.4\n15,6.3,4.4\n10,7.5,5.2\n",
        str![[r#"
error: return periods must rise across the table
 --> rain.csv:1:26
  |
1 | duration_min,100_yr_in_h,10_yr_in_h
  |                          ^^^^^^^^^^ 10_yr_in_h after 100_yr_in_h
  |
  = help: sort the columns by return period, each once

error: durations must rise down the table
 --> rain.csv:3:1
  |
3 | 15,6.3,4.4
  | ^^ 15 after 15
  |
  = help: sort the rows by duration, each duration once

error: durations must rise down the table
 --> rain.csv:4:1
  |
4 | 10,7.5,5.2
  | ^^ 10 after 15
  |
  = help: sort the rows by duration, each duration once

"#]],
    );
}

#[test]
fn cells_that_are_no_numbers() {
    table_refused(
        "duration_min,10_yr_in_h,100_yr_in_h\n10,,7.52\n15,4.4\n30,x,-4\n60,0,9e9\n0_yr,1,2\n",
        str![[r#"
error: a cell is empty
 --> rain.csv:2:4
  |
2 | 10,,7.52
  |    ^ a hole in the table
  |
  = help: give every intensity, or leave out the whole row or column: holes are not filled

error: this row has 2 cells; the head has 3
 --> rain.csv:3:1
  |
3 | 15,4.4
  | ^^^^^^ this row
  |
  = help: a comma parts cells: write decimals with a point, and leave no cell out

error: `x` is not a number
 --> rain.csv:4:4
  |
4 | 30,x,-4
  |    ^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: `-4` is not above zero
 --> rain.csv:4:6
  |
4 | 30,x,-4
  |      ^^ a number above zero belongs here
  |
  = help: durations and intensities are above zero

error: `0` is not above zero
 --> rain.csv:5:4
  |
5 | 60,0,9e9
  |    ^ a number above zero belongs here
  |
  = help: durations and intensities are above zero

error: `9e9` is too great
 --> rain.csv:5:6
  |
5 | 60,0,9e9
  |      ^^^ too great
  |
  = help: the unit stands in the column's head

error: `0_yr` is not a number
 --> rain.csv:6:1
  |
6 | 0_yr,1,2
  | ^^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

"#]],
    );
}

#[test]
fn heads_that_say_no_unit_or_nothing() {
    table_refused(
        "duration,10_yr,100_yr_in_h\n10,5.2,7.52\n",
        str![[r#"
error: unknown column `duration`
 --> rain.csv:1:1
  |
1 | duration,10_yr,100_yr_in_h
  | ^^^^^^^^ not a column of a rainfall table
  |
  = help: a column's head has the unit: duration_min or duration_h would pass

error: unknown column `10_yr`
 --> rain.csv:1:10
  |
1 | duration,10_yr,100_yr_in_h
  |          ^^^^^ not a column of a rainfall table
  |
  = help: a column's head has the unit: 10_yr_in_h, 10_yr_mm_h, 10_yr_in or 10_yr_mm would pass

"#]],
    );
    table_refused(
        "duration_min,,ten_yr_in_h,10_yr_cm\n10,5.2,7.52,1\n",
        str![[r#"
error: a column has no name
 --> rain.csv:1:14
  |
1 | duration_min,,ten_yr_in_h,10_yr_cm
  |              ^ not a column of a rainfall table
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

error: unknown column `ten_yr_in_h`
 --> rain.csv:1:15
  |
1 | duration_min,,ten_yr_in_h,10_yr_cm
  |               ^^^^^^^^^^^ not a column of a rainfall table
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

error: unknown column `10_yr_cm`
 --> rain.csv:1:27
  |
1 | duration_min,,ten_yr_in_h,10_yr_cm
  |                           ^^^^^^^^ not a column of a rainfall table
  |
  = help: a column's head has the unit: 10_yr_in_h, 10_yr_mm_h, 10_yr_in or 10_yr_mm would pass

"#]],
    );
}

#[test]
fn tables_that_lack_a_part() {
    table_refused(
        "10_yr_in_h,100_yr_in_h\n5.2,7.52\n",
        str![[r#"
error: the table has no column of durations
 --> rain.csv:1:1
  |
1 | 10_yr_in_h,100_yr_in_h
  | ^^^^^^^^^^^^^^^^^^^^^^ these columns are given
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

"#]],
    );
    table_refused(
        "duration_min,duration_h\n15,0.25\n",
        str![[r#"
error: the table has no column of intensities
 --> rain.csv:1:1
  |
1 | duration_min,duration_h
  | ^^^^^^^^^^^^^^^^^^^^^^^ these columns are given
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

error: `duration_h` is a second column of durations
 --> rain.csv:1:14
  |
1 | duration_min,duration_h
  |              ^^^^^^^^^^ one is wanted
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

"#]],
    );
    table_refused(
        "15,5.2,7.52\n",
        str![[r#"
error: the columns have no names
 --> rain.csv:1:1
  |
1 | 15,5.2,7.52
  | ^^^^^^^^^^^ the first row is one of numbers
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

"#]],
    );
    table_refused(
        "duration_min;100_yr_in_h\n15;6,34\n",
        str![[r#"
error: the columns are parted by semicolons
 --> rain.csv:1:1
  |
1 | duration_min;100_yr_in_h
  | ^^^^^^^^^^^^^^^^^^^^^^^^ one column only is seen here
  |
  = help: part columns by commas, and write decimals with a point

"#]],
    );
    table_refused(
        "duration_min,100_yr_in_h\n",
        str![[r#"
error: the table has no intensities
 --> rain.csv:1:1
  |
1 | duration_min,100_yr_in_h
  | ^^^^^^^^^^^^^^^^^^^^^^^^ nothing but this
  |
  = help: give a row for each duration, such as `15, 4.1, 6.3`

"#]],
    );
    table_refused(
        "duration_min,0_yr_in_h\n15,6.3\n",
        str![[r#"
error: a return period must be above zero
 --> rain.csv:1:14
  |
1 | duration_min,0_yr_in_h
  |              ^^^^^^^^^ not above zero
  |
  = help: write a number above zero

"#]],
    );
    table_refused(
        "# nothing\n",
        str![[r#"
error: `rain.csv` is empty
 --> rain.csv:1:1
  |
1 | # nothing
  | ^ no row stands here
  |
  = help: durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, depths in `10_yr_in` or `10_yr_mm`

"#]],
    );
}

#[test]
fn ways_that_pass_on_more_than_all() {
    let court = |receives: &str| {
        let text = format!("{}{CASCADE}receives = [{receives}]\n", project("intensity = \"1 in/h\""));
        let output = Folder::new(&text, TABLE).brimline(&["size", "roof.toml", "--output", "result"]);
        String::from_utf8_lossy(&output.get_output().stderr).into_owned()
    };
    // The one by the one way and the other by the other is no more than all.
    assert_eq!(court("{ from = \"roof\", what = \"overflow\" }, { from = \"roof\", what = \"primary\" }"), "");
    snapbox::assert_data_eq!(
        court("{ from = \"roof\", share = 0.5 }, { from = \"roof\", share = 0.75, what = \"overflow\" }"),
        str![[r#"
warning: areas receive 1.25 of the overflow of `roof`, more than all of it
  --> roof.toml:26:54
   |
26 | receives = [{ from = "roof", share = 0.5 }, { from = "roof", share = 0.75, what = "overflow" }]
   |                                                      ^^^^^^ with this one
   |
   = help: shares of one area that add up to 1 pass on all of it


"#]]
        .raw()
    );
    snapbox::assert_data_eq!(
        court("{ from = \"roof\", what = \"primary\" }, { from = \"roof\", share = 0.5, what = \"primary\" }"),
        str![[r#"
warning: areas receive 1.5 of what the primary drains pass of `roof`, more than all of it
  --> roof.toml:26:59
   |
26 | receives = [{ from = "roof", what = "primary" }, { from = "roof", share = 0.5, what = "primary" }]
   |                                                           ^^^^^^ with this one
   |
   = help: shares of one area that add up to 1 pass on all of it


"#]]
        .raw()
    );
    snapbox::assert_data_eq!(
        court("{ from = \"roof\", what = \"overfow\" }"),
        str![[r#"
error: `overfow` is not a value of `what`
  --> roof.toml:26:37
   |
26 | receives = [{ from = "roof", what = "overfow" }]
   |                                     ^^^^^^^^^ not one of its values
   |
   = help: did you mean "overflow"? all, overflow or primary would pass

"#]]
        .raw()
    );
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 500, ..ProptestConfig::default() })]

    /// Tables put together from pieces at random: read, or refused with a place, and nothing else.
    #[test]
    fn any_table_is_read_or_refused(pieces in prop::collection::vec(0_usize..PIECES.len(), 0..40)) {
        let text: String = pieces.iter().map(|&piece| PIECES[piece]).collect();
        let folder = Folder::new(&project(STORM), &format!("duration_min,100_yr_in_h{text}"));
        match input::read(&folder.0.join("roof.toml")) {
            Ok(project) => prop_assert!(project.roof.storm.intensity > Intensity::ZERO),
            Err(faults) => prop_assert!(faults.render(false).contains("error")),
        }
    }
}

const PIECES: [&str; 16] = [
    ",",
    ",",
    ",",
    "\n",
    "\n",
    "\n15",
    "\n10,7",
    "6.3",
    "5",
    "0",
    "-1",
    "10_yr_in_h",
    "200_yr_mm",
    "duration_h",
    "\"",
    "\u{e9}",
];
