//! Input that cannot be used: files in, exit code, stdout and every message whole.
//!
//! Each test changes a few cells of one small sound project and states all that is told of it. Several slips stand in one
//! file where they belong together: that every one of them is told in one run is part of what is tested.
//! `SNAPSHOTS=overwrite` writes the messages anew; each is to be read before it is kept.
#![expect(clippy::needless_raw_string_hashes, reason = "expected messages stand as snapbox writes them")]
#![expect(clippy::too_many_lines, reason = "most lines of a test are the messages that it expects")]

use std::fs;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU32, Ordering};

use brimline::input::{self, Severity};
use snapbox::cmd::{Command, cargo_bin};
use snapbox::{IntoData, str};

const PROJECT: &str = r#"title = "Depot"
units = "us"
catalogs = ["devices.toml"]

[storm]
intensity = "6.3 in/h"
duration = "15 min"
return_period = "100 yr"

[limit]
load = "30 psf"

[search]
rank_by = ["cost", "load"]
keep = 5
set_height = { from = "2 in", to = "4 in", step = "0.5 in" }
count = { from = 2, to = 8 }

[[case]]
name = "as designed"

[[case]]
name = "one blocked"
blocked = 1

[[area]]
name = "north bay"
area = "9600 ft2"
wall = "1800 ft2"
edge = "120 ft"
parapet = { height = "24 in", thickness = "10 in" }

[[area]]
name = "south bay"
area = "7400 ft2"
receives = [{ from = "north bay", share = 0.25 }]
limit_in = { "one blocked" = { load = "36 psf" } }
"#;

const CATALOG: &str = r#"[[device]]
tag = "RS"
kind = "closed scupper"
width = { from = "6 in", to = "24 in", step = "6 in" }
height = ["4 in", "6 in"]
price = { each = 420, per_width = "15 / in" }

[[device]]
tag = "OD"
kind = "rated"
place = "interior"
rating = "drain.csv"
set_height = ["2 in", "3 in"]
price = { each = 1650 }
"#;

const RATING: &str = "head_in,flow_gpm\n0.5,22\n1,63\n1.5,112\n";

/// A folder of its own for each test, gone when the test ends.
struct Folder(PathBuf);

impl Folder {
    /// With the sound files in it.
    fn new() -> Self {
        static COUNT: AtomicU32 = AtomicU32::new(0);
        let name = format!("brimline-{}-{}", std::process::id(), COUNT.fetch_add(1, Ordering::Relaxed));
        let folder = Self(std::env::temp_dir().join(name));
        fs::create_dir_all(&folder.0).expect("a folder can be made");
        folder.with("roof.toml", PROJECT).with("devices.toml", CATALOG).with("drain.csv", RATING)
    }

    fn with(self, name: &str, content: impl AsRef<[u8]>) -> Self {
        fs::write(self.0.join(name), content).expect("a file can be written");
        self
    }

    fn brimline(&self, arguments: &[&str]) -> snapbox::cmd::OutputAssert {
        Command::new(cargo_bin!("brimline")).current_dir(&self.0).env("NO_COLOR", "1").args(arguments).assert()
    }

    /// The project is refused with this message and no result, neither on stdout nor in a file that is asked for.
    fn refuses(&self, message: impl IntoData) {
        self.refuses_as(&["roof.toml"], message);
    }

    fn refuses_as(&self, arguments: &[&str], message: impl IntoData) {
        // To the letter: lines of dots are part of a message, and stand for no others.
        let message = message.into_data().raw();
        let told = self.brimline(&[&["size"], arguments].concat()).code(2).stdout_eq("").stderr_eq(message);
        let told_again = self.brimline(&[&["size", "--output", "result"], arguments].concat()).code(2).stdout_eq("");
        assert_eq!(told.get_output().stderr, told_again.get_output().stderr);
        assert!(!self.0.join("result").exists(), "no result is written");
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.0);
    }
}

/// A text with some of its parts exchanged, each of which must stand in it.
fn exchange(text: &str, parts: &[(&str, &str)]) -> String {
    parts.iter().fold(text.to_string(), |text, (from, to)| {
        assert!(text.contains(from), "`{from}` does not stand there");
        text.replacen(from, to, 1)
    })
}

/// The sound files with some parts of the project exchanged.
fn project(parts: &[(&str, &str)]) -> Folder {
    Folder::new().with("roof.toml", exchange(PROJECT, parts))
}

/// The sound files with some parts of the catalog exchanged.
fn catalog(parts: &[(&str, &str)]) -> Folder {
    Folder::new().with("devices.toml", exchange(CATALOG, parts))
}

/// The sound files with one rated device for each table.
fn ratings(tables: &[&str]) -> Folder {
    let mut folder = Folder::new();
    let mut devices = String::new();
    for (index, table) in tables.iter().enumerate() {
        let name = format!("{}.csv", index + 1);
        devices += &format!(
            "[[device]]\ntag = \"OD{index}\"\nkind = \"rated\"\nplace = \"interior\"\nrating = \"{name}\"\nprice = {{ each = 1 }}\n"
        );
        folder = folder.with(&name, table);
    }
    folder.with("devices.toml", devices)
}

/// What an editor of another system adds: a mark of UTF-8 before the first character, and two characters at each line's end.
fn foreign(text: &str) -> String {
    format!("\u{feff}{}", text.replace('\n', "\r\n"))
}

#[test]
fn the_sound_files_are_sound_whatever_editor_saved_them() {
    let plain = Folder::new().brimline(&["size", "roof.toml"]).code(0).stderr_eq("").get_output().stdout.clone();
    let marked = Folder::new()
        .with("roof.toml", foreign(PROJECT))
        .with("devices.toml", foreign(CATALOG))
        .with("drain.csv", foreign(&format!("# invented\n\n{RATING}  # the end\n \n")));
    let stdout = marked.brimline(&["size", "roof.toml"]).code(0).stderr_eq("").get_output().stdout.clone();
    assert!(!plain.is_empty());
    assert_eq!(String::from_utf8_lossy(&plain), String::from_utf8_lossy(&stdout));
}

#[test]
fn places_are_right_whatever_editor_saved_the_file() {
    Folder::new()
        .with(
            "roof.toml",
            foreign(&exchange(PROJECT, &[("title = \"Depot\"", "titel = \"Depot\""), ("6.3 in/h", "6.3")])),
        )
        .with("drain.csv", foreign("head_in,flow_gmp\n0.5,x\n"))
        .refuses(str![[r#"
error: unknown key `titel` in the project
 --> roof.toml:1:1
  |
1 | titel = "Depot"
  | ^^^^^ not a key of this table
  |
  = help: did you mean `title`? the project takes title, note, units, catalogs, storm, limit, flow, search, structure, tolerance, case, area, layout, schedule, replace, rules or risk_category

error: `intensity`: `6.3` has no unit; this is a rain intensity
 --> roof.toml:6:13
  |
6 | intensity = "6.3"
  |             ^^^^^ a rain intensity belongs here
  |
  = help: write "6.3 in/h"; in/h, mm/h, mm/min, l/(s m2) or l/(s ha) would pass

error: unknown column `flow_gmp`
 --> drain.csv:1:9
  |
1 | head_in,flow_gmp
  |         ^^^^^^^^ not a column of a rating
  |
  = help: did you mean `flow_gpm`? head_in, head_mm, head_m, flow_gpm, flow_l_s, flow_m3_s, width_in, width_mm or width_m would pass

"#]]);
}

#[test]
fn ten_slips_in_three_files_are_ten_messages() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("units = \"us\"", "units = \"imperial\""),
                    ("intensity = \"6.3 in/h\"", "intensity = \"6.3 in\""),
                    ("[search]\n", "[search]\nmxi = 2\n"),
                    ("blocked = 1", "blocked = 1.5"),
                    ("\"9600 ft2\"", "9600"),
                    ("from = \"north bay\"", "from = \"nroth bay\""),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("closed scupper", "closed scuper"), ("\"interior\"", "\"inside\"")]))
        .with("drain.csv", "head_in,flow_gpm\n0.5,22\n1.5,63\n1,112\n2,x\n")
        .refuses(str![[r#"
error: `imperial` is not a value of `units`
 --> roof.toml:2:9
  |
2 | units = "imperial"
  |         ^^^^^^^^^^ not one of its values
  |
  = help: us or si would pass

error: `intensity`: `in` is a unit of length; this is a rain intensity
 --> roof.toml:6:13
  |
6 | intensity = "6.3 in"
  |             ^^^^^^^^ a rain intensity belongs here
  |
  = help: in/h, mm/h, mm/min, l/(s m2) or l/(s ha) would pass

error: unknown key `mxi` in [search]
  --> roof.toml:14:1
   |
14 | mxi = 2
   | ^^^ not a key of this table
   |
   = help: did you mean `mix`? [search] takes rank_by, keep, mix, set_height, count, freeboard, laws, sizes, size_price, made_to_measure or round

error: `blocked` must be a whole number from 0 to 10000
  --> roof.toml:25:11
   |
25 | blocked = 1.5
   |           ^^^ not a whole number
   |
   = help: 0 to 10000 would pass

error: `area`: `9600` has no unit; this is an area
  --> roof.toml:29:8
   |
29 | area = 9600
   |        ^^^^ an area belongs here
   |
   = help: write "9600 ft2"; ft2, m2, in2, mm2, cm2 or ha would pass

error: there is no area `nroth bay`
  --> roof.toml:37:22
   |
37 | receives = [{ from = "nroth bay", share = 0.25 }]
   |                      ^^^^^^^^^^^ not an area of this project
   |
   = help: did you mean "north bay"? areas are north bay or south bay

error: `closed scuper` is not a value of `kind`
 --> devices.toml:3:8
  |
3 | kind = "closed scuper"
  |        ^^^^^^^^^^^^^^^ not one of its values
  |
  = help: did you mean "closed scupper"? open scupper, closed scupper, pipe scupper, overflow drain, standpipe, roof edge or rated would pass

error: `inside` is not a value of `place`
  --> devices.toml:11:9
   |
11 | place = "inside"
   |         ^^^^^^^^ not one of its values
   |
   = help: edge or interior would pass

error: head does not rise
 --> drain.csv:4:1
  |
4 | 1,112
  | ^ 1 after 1.5
  |
  = help: sort the rows by head, each head once

error: `x` is not a number
 --> drain.csv:5:3
  |
5 | 2,x
  |   ^ a bare number belongs here
  |
  = help: the unit stands in the column's head

"#]]);
}

#[test]
fn a_quantity_without_its_unit_or_with_another() {
    project(&[
        ("\"6.3 in/h\"", "6.3"),
        ("\"15 min\"", "\"15\""),
        ("\"100 yr\"", "\"100 years ago\""),
        ("\"30 psf\"", "\"30 psi\""),
        ("\"9600 ft2\"", "\"9600 ft\""),
        ("\"1800 ft2\"", "\"1800 sq fet\""),
        ("\"120 ft\"", "\"120 furlongs\""),
        ("\"24 in\"", "\"24 gpm\""),
    ])
    .refuses(str![[r#"
error: `intensity`: `6.3` has no unit; this is a rain intensity
 --> roof.toml:6:13
  |
6 | intensity = 6.3
  |             ^^^ a rain intensity belongs here
  |
  = help: write "6.3 in/h"; in/h, mm/h, mm/min, l/(s m2) or l/(s ha) would pass

error: `duration`: `15` has no unit; this is a duration
 --> roof.toml:7:12
  |
7 | duration = "15"
  |            ^^^^ a duration belongs here
  |
  = help: write "15 min"; min, h or s would pass

error: `return_period`: `years ago` is not a unit of return period known here
 --> roof.toml:8:17
  |
8 | return_period = "100 years ago"
  |                 ^^^^^^^^^^^^^^^ a return period belongs here
  |
  = help: yr would pass

error: `load`: `psi` is not a unit of load known here
  --> roof.toml:11:8
   |
11 | load = "30 psi"
   |        ^^^^^^^^ a load belongs here
   |
   = help: did you mean `psf`? psf, kPa or Pa would pass

error: `area`: `ft` is a unit of length; this is an area
  --> roof.toml:28:8
   |
28 | area = "9600 ft"
   |        ^^^^^^^^^ an area belongs here
   |
   = help: ft2, m2, in2, mm2, cm2 or ha would pass

error: `wall`: `sq fet` is not a unit of area known here
  --> roof.toml:29:8
   |
29 | wall = "1800 sq fet"
   |        ^^^^^^^^^^^^^ an area belongs here
   |
   = help: did you mean `sq ft`? ft2, m2, in2, mm2, cm2 or ha would pass

error: `edge`: `furlongs` is not a unit of length known here
  --> roof.toml:30:8
   |
30 | edge = "120 furlongs"
   |        ^^^^^^^^^^^^^^ a length belongs here
   |
   = help: in, ft, mm, cm, m or yd would pass

error: `height`: `gpm` is a unit of flow; this is a length
  --> roof.toml:31:22
   |
31 | parapet = { height = "24 gpm", thickness = "10 in" }
   |                      ^^^^^^^^ a length belongs here
   |
   = help: in, ft, mm, cm, m or yd would pass

"#]]);
}

#[test]
fn a_number_that_is_none_or_several() {
    project(&[
        ("\"6.3 in/h\"", "\"inf in/h\""),
        ("\"15 min\"", "nan"),
        ("\"100 yr\"", "\"1e400 yr\""),
        ("\"30 psf\"", "\"1,4 kPa\""),
        ("\"9600 ft2\"", "\"9_600 ft2\""),
        ("\"1800 ft2\"", "\"about 1800 ft2\""),
        ("\"120 ft\"", "\"120 ft 6 in\""),
        ("\"24 in\"", "\"23 1/2 in\""),
        ("\"10 in\"", "\"\""),
        ("{ from = 2, to = 8 }", "3\nfreeboard = \"1e300 in\""),
        ("blocked = 1", "blocked = 1\nrain = 1e13"),
        ("0.25", "inf"),
    ])
    .refuses(str![[r#"
error: `intensity`: `inf in/h` is not a finite number
 --> roof.toml:6:13
  |
6 | intensity = "inf in/h"
  |             ^^^^^^^^^^ a rain intensity belongs here
  |
  = help: write a number and a unit, such as "6.3 in/h"

error: `duration`: `nan` is not a finite number
 --> roof.toml:7:12
  |
7 | duration = nan
  |            ^^^ a duration belongs here
  |
  = help: write a number and a unit, such as "15 min"

error: `return_period`: `1e400 yr` is not a finite number
 --> roof.toml:8:17
  |
8 | return_period = "1e400 yr"
  |                 ^^^^^^^^^^ a return period belongs here
  |
  = help: write a number and a unit, such as "100 yr"

error: `load`: the comma in `1,4` can be read in two ways
  --> roof.toml:11:8
   |
11 | load = "1,4 kPa"
   |        ^^^^^^^^^ a load belongs here
   |
   = help: write 1.4 if the comma is a decimal point, 14 if it parts thousands; a comma passes only before whole groups of three digits in a whole number

error: `freeboard`: `1e300 in` is too great
  --> roof.toml:18:13
   |
18 | freeboard = "1e300 in"
   |             ^^^^^^^^^^ a length belongs here
   |
   = help: no roof needs so much: check the number and its unit

error: `rain` is too great
  --> roof.toml:26:8
   |
26 | rain = 1e13
   |        ^^^^ too great
   |
   = help: up to 1e12 would pass

error: `area`: `9_600` is not a number
  --> roof.toml:30:8
   |
30 | area = "9_600 ft2"
   |        ^^^^^^^^^^^ an area belongs here
   |
   = help: write digits and at most one decimal point, such as "9600 ft2"

error: `wall`: `about 1800 ft2` does not begin with a number
  --> roof.toml:31:8
   |
31 | wall = "about 1800 ft2"
   |        ^^^^^^^^^^^^^^^^ an area belongs here
   |
   = help: write a number and a unit, such as "9600 ft2"

error: `edge`: `120 ft 6 in` is not one decimal number with one unit
  --> roof.toml:32:8
   |
32 | edge = "120 ft 6 in"
   |        ^^^^^^^^^^^^^ a length belongs here
   |
   = help: write 0.25 for 1/4, 2.5 in for 2 1/2 in, and 30 in for 2 ft 6 in

error: `height`: `23 1/2 in` is not one decimal number with one unit
  --> roof.toml:33:22
   |
33 | parapet = { height = "23 1/2 in", thickness = "" }
   |                      ^^^^^^^^^^^ a length belongs here
   |
   = help: write 0.25 for 1/4, 2.5 in for 2 1/2 in, and 30 in for 2 ft 6 in

error: `thickness`: this is empty
  --> roof.toml:33:47
   |
33 | parapet = { height = "23 1/2 in", thickness = "" }
   |                                               ^^ a length belongs here
   |
   = help: write a number and a unit, such as "6 in"

error: `share` must be a finite number
  --> roof.toml:38:43
   |
38 | receives = [{ from = "north bay", share = inf }]
   |                                           ^^^ not a finite number
   |
   = help: write a finite number

"#]]);
}

#[test]
fn below_zero_and_zero_where_it_cannot_be() {
    project(&[
        ("\"6.3 in/h\"", "\"0 in/h\""),
        ("\"15 min\"", "\"-15 min\""),
        ("\"30 psf\"", "\"0 psf\""),
        ("from = \"2 in\"", "from = \"-2 in\""),
        ("step = \"0.5 in\"", "step = \"0 in\""),
        ("blocked = 1", "blocked = -1\nrain = 0\ndischarge = -0.5\nsill_error = \"-1 in\""),
        ("\"9600 ft2\"", "\"0 ft2\""),
        ("\"1800 ft2\"", "\"-1 ft2\"\nwall_share = 1.5"),
        ("\"24 in\"", "\"0 in\""),
        ("share = 0.25", "share = 0"),
    ])
    .refuses(str![[r#"
error: `intensity` must be above zero
 --> roof.toml:6:13
  |
6 | intensity = "0 in/h"
  |             ^^^^^^^^ not above zero
  |
  = help: write a value above zero

error: `duration` must be above zero
 --> roof.toml:7:12
  |
7 | duration = "-15 min"
  |            ^^^^^^^^^ not above zero
  |
  = help: write a value above zero

error: `load` must be above zero
  --> roof.toml:11:8
   |
11 | load = "0 psf"
   |        ^^^^^^^ not above zero
   |
   = help: write a value above zero

error: `from` must not be negative
  --> roof.toml:16:23
   |
16 | set_height = { from = "-2 in", to = "4 in", step = "0 in" }
   |                       ^^^^^^^ below zero
   |
   = help: write zero or more

error: `step` must be above zero
  --> roof.toml:16:52
   |
16 | set_height = { from = "-2 in", to = "4 in", step = "0 in" }
   |                                                    ^^^^^^ not above zero
   |
   = help: write a value above zero

error: `blocked` must be a whole number from 0 to 10000
  --> roof.toml:24:11
   |
24 | blocked = -1
   |           ^^ outside that range
   |
   = help: 0 to 10000 would pass

error: `rain` must be above zero
  --> roof.toml:25:8
   |
25 | rain = 0
   |        ^ not above zero
   |
   = help: write a value above zero

error: `discharge` must be above zero
  --> roof.toml:26:13
   |
26 | discharge = -0.5
   |             ^^^^ not above zero
   |
   = help: write a value above zero

error: `sill_error` must not be negative
  --> roof.toml:27:14
   |
27 | sill_error = "-1 in"
   |              ^^^^^^^ below zero
   |
   = help: write zero or more

error: `area` must be above zero
  --> roof.toml:31:8
   |
31 | area = "0 ft2"
   |        ^^^^^^^ not above zero
   |
   = help: write a value above zero

error: `wall` must not be negative
  --> roof.toml:32:8
   |
32 | wall = "-1 ft2"
   |        ^^^^^^^^ below zero
   |
   = help: write zero or more

error: `wall_share` must be a part of one
  --> roof.toml:33:14
   |
33 | wall_share = 1.5
   |              ^^^ above 1
   |
   = help: 0.5 counts half of the wall

error: `height` must be above zero
  --> roof.toml:35:22
   |
35 | parapet = { height = "0 in", thickness = "10 in" }
   |                      ^^^^^^ not above zero
   |
   = help: write a value above zero

error: `share` must be above zero
  --> roof.toml:40:43
   |
40 | receives = [{ from = "north bay", share = 0 }]
   |                                           ^ not above zero
   |
   = help: write a value above zero

"#]]);
}

#[test]
fn unknown_keys_with_the_near_one_where_there_is_one() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("title =", "titel ="),
                    ("duration =", "durration ="),
                    ("keep = 5", "keep = 5\nset_hight = \"2 in\""),
                    ("blocked = 1", "blokced = 1"),
                    ("[search]", "colour = \"red\"\n[search]"),
                    ("thickness =", "thicknes ="),
                    ("share =", "shares ="),
                    ("step =", "by ="),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("height =", "hight ="), ("per_width", "per_widht")]))
        .refuses(str![[r#"
error: unknown key `titel` in the project
 --> roof.toml:1:1
  |
1 | titel = "Depot"
  | ^^^^^ not a key of this table
  |
  = help: did you mean `title`? the project takes title, note, units, catalogs, storm, limit, flow, search, structure, tolerance, case, area, layout, schedule, replace, rules or risk_category

error: unknown key `durration` in [storm]
 --> roof.toml:7:1
  |
7 | durration = "15 min"
  | ^^^^^^^^^ not a key of this table
  |
  = help: did you mean `duration`? [storm] takes intensity, table, duration, return_period, climate, storms or source

error: unknown key `colour` in a limit
  --> roof.toml:13:1
   |
13 | colour = "red"
   | ^^^^^^ not a key of this table
   |
   = help: a limit takes load or depth

error: unknown key `set_hight` in [search]
  --> roof.toml:17:1
   |
17 | set_hight = "2 in"
   | ^^^^^^^^^ not a key of this table
   |
   = help: did you mean `set_height`? [search] takes rank_by, keep, mix, set_height, count, freeboard, laws, sizes, size_price, made_to_measure or round

error: `step` is missing in a range
  --> roof.toml:18:14
   |
18 | set_height = { from = "2 in", to = "4 in", by = "0.5 in" }
   |              ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: { from = "6 in", to = "12 in", step = "1 in" }

error: unknown key `by` in a range
  --> roof.toml:18:44
   |
18 | set_height = { from = "2 in", to = "4 in", by = "0.5 in" }
   |                                            ^^ not a key of this table
   |
   = help: a range takes from, to or step

error: unknown key `blokced` in a [[case]]
  --> roof.toml:26:1
   |
26 | blokced = 1
   | ^^^^^^^ not a key of this table
   |
   = help: did you mean `blocked`? a [[case]] takes name, blocked, sill_error, opening_loss, rain, discharge, limit or rules

error: unknown key `thicknes` in `parapet`
  --> roof.toml:33:31
   |
33 | parapet = { height = "24 in", thicknes = "10 in" }
   |                               ^^^^^^^^ not a key of this table
   |
   = help: did you mean `thickness`? `parapet` takes height or thickness

error: unknown key `shares` in an entry of `receives`
  --> roof.toml:38:35
   |
38 | receives = [{ from = "north bay", shares = 0.25 }]
   |                                   ^^^^^^ not a key of this table
   |
   = help: did you mean `share`? an entry of `receives` takes from, share or what

error: `height` is missing in a device of kind "closed scupper"
 --> devices.toml:1:1
  |
1 | [[device]]
  | ^^^^^^^^^^ this table
  |
  = help: give a value, a list or a range: height = ["4 in", "6 in"]

error: unknown key `hight` in a [[device]]
 --> devices.toml:5:1
  |
5 | hight = ["4 in", "6 in"]
  | ^^^^^ not a key of this table
  |
  = help: did you mean `height`? a [[device]] takes tag, kind, width, height, diameter, dam, dam_height, free_area, place, rating, interpolation, law, screen, leader, conductor_head, set_height, price, source or note

error: unknown key `per_widht` in `price`
 --> devices.toml:6:23
  |
6 | price = { each = 420, per_widht = "15 / in" }
  |                       ^^^^^^^^^ not a key of this table
  |
  = help: did you mean `per_width`? `price` takes each, per_width, per_height or per_area

"#]]);
}

#[test]
fn an_empty_list_of_rules_and_half_a_slope() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[("units =", "layout = []\nrules = []\nunits ="), ("edge = \"120 ft\"", "slope = \"1/4 in/ft\"")],
            ),
        )
        .refuses(str![[r#"
error: `layout` is an empty list
 --> roof.toml:2:10
  |
2 | layout = []
  |          ^^ nothing stands here
  |
  = help: write a list of layouts, each under [[layout]]

error: `rules` is an empty list
 --> roof.toml:3:9
  |
3 | rules = []
  |         ^^ no rule set stands here
  |
  = help: name at least one, or take the key out

error: `slope` stands without `distance`
  --> roof.toml:32:9
   |
32 | slope = "1/4 in/ft"
   |         ^^^^^^^^^^^ how high the roof stands at the wall is not known
   |
   = help: give distance = "20 ft" too, from the low point to the wall

"#]]);
}

/// The sound project with what is there already in its first area, and other parts exchanged.
fn existing(there: &str, parts: &[(&str, &str)]) -> Folder {
    let with = format!("edge = \"120 ft\"\nexisting = {there}");
    project(&[&[("edge = \"120 ft\"", with.as_str())], parts].concat())
}

const THERE: &str = "[{ device = \"RS\", width = \"12 in\", height = \"4 in\", count = 2, set_height = \"2 in\" }]";

#[test]
fn what_is_said_to_be_there_already_and_cannot_be() {
    existing("\"as found\"", &[]).refuses(str![[r#"
error: `north bay` has no layout `as found`
  --> roof.toml:31:12
   |
31 | existing = "as found"
   |            ^^^^^^^^^^ not a layout of this area
   |
   = help: give a [[layout]] of this name and area, or the groups themselves

"#]]);
    let elsewhere = format!(
        "[[layout]]\nname = \"as fuond\"\narea = \"north bay\"\ngroups = {THERE}\n\n[[area]]\nname = \"south bay\""
    );
    existing("\"as found\"", &[("[[area]]\nname = \"south bay\"", &elsewhere)]).refuses(str![[r#"
error: `north bay` has no layout `as found`
  --> roof.toml:31:12
   |
31 | existing = "as found"
   |            ^^^^^^^^^^ not a layout of this area
   |
   = help: did you mean "as fuond"? layouts of the area are as fuond

"#]]);
    existing("[]", &[]).refuses(str![[r#"
error: `existing` is an empty list
  --> roof.toml:31:12
   |
31 | existing = []
   |            ^^ nothing stands here
   |
   = help: write the name of a layout, or a list, such as [{ device = "RS", width = "12 in", height = "4 in", count = 2, set_height = "2 in" }]

"#]]);
    existing("3", &[]).refuses(str![[r#"
error: `existing` must be the name of a layout, or a list, such as [{ device = "RS", width = "12 in", height = "4 in", count = 2, set_height = "2 in" }]
  --> roof.toml:31:12
   |
31 | existing = 3
   |            ^ a bare number stands here
   |
   = help: write the name of a layout, or a list, such as [{ device = "RS", width = "12 in", height = "4 in", count = 2, set_height = "2 in" }]

"#]]);
    existing("[{ device = \"RX\", count = 0 }]", &[]).refuses(str![[r#"
error: `set_height` is missing in a group
  --> roof.toml:31:13
   |
31 | existing = [{ device = "RX", count = 0 }]
   |             ^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: say how high its sill stands: set_height = "2 in"

error: no catalog has a device `RX`
  --> roof.toml:31:24
   |
31 | existing = [{ device = "RX", count = 0 }]
   |                        ^^^^ here
   |
   = help: did you mean "RS"? the catalogs have OD or RS

error: `count` must be a whole number from 1 to 10000
  --> roof.toml:31:38
   |
31 | existing = [{ device = "RX", count = 0 }]
   |                                      ^ outside that range
   |
   = help: 1 to 10000 would pass

"#]]);
    existing(&THERE.replace("count = 2", "count = 200"), &[]).refuses(str![[r#"
error: what is there in `north bay` takes more edge than it has
  --> roof.toml:31:12
   |
31 | existing = [{ device = "RS", width = "12 in", height = "4 in", count = 200, set_height = "2 in" }]
   |            ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ with the gaps between openings
   |
   = help: give the length of parapet that these openings stand in as well, or a lesser gap

"#]]);
    existing(&format!("[{}]", vec![&THERE[1..THERE.len() - 1]; 14].join(", ")), &[]).refuses(str![[r#"
error: at most 13 groups are there already
  --> roof.toml:31:12
   |
31 | ... = [{ device = "RS", width = "12 in", height = "...t = "4 in", count = 2, set_height = "2 in" }]
   |       ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^...^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ 14 stand here
   |
   = help: put openings of one size and one height into one group

"#]]);
}

/// What is wrong with layouts is told beside an area at fault, whose name is known all the same and whose datum is not.
#[test]
fn layouts_beside_an_area_at_fault() {
    let group = |height: &str| {
        format!(
            "groups = [{{ device = \"RS\", width = \"12 in\", height = \"4 in\", count = 2, set_height = \"{height}\" }}]\n"
        )
    };
    let layouts = format!(
        "[[layout]]\nname = \"drawn\"\narea = \"north bay\"\n{}[[layout]]\nname = \"drawn\"\narea = \"north bay\"\n{}\
         [[layout]]\nname = \"other\"\narea = \"nort bay\"\n{}",
        group("elevation 100 ft"),
        group("2 in").replace("RS", "RX"),
        group("2 in")
    );
    project(&[
        ("area = \"9600 ft2\"", "area = \"-9600 ft2\"\nlow_point = \"high\""),
        ("[[case]]\nname = \"as designed\"", &format!("{layouts}[[case]]\nname = \"as designed\"")),
    ])
    .refuses(str![[r#"
error: `north bay` has two layouts named `drawn`
  --> roof.toml:24:8
   |
20 | name = "drawn"
   |        ------- first here
...
24 | name = "drawn"
   |        ^^^^^^^ again here
   |
   = help: give each layout of an area a name of its own

error: no catalog has a device `RX`
  --> roof.toml:26:22
   |
26 | groups = [{ device = "RX", width = "12 in", height = "4 in", count = 2, set_height = "2 in" }]
   |                      ^^^^ here
   |
   = help: did you mean "RS"? the catalogs have OD or RS

error: there is no area `nort bay`
  --> roof.toml:29:8
   |
29 | area = "nort bay"
   |        ^^^^^^^^^^ here
   |
   = help: did you mean "north bay"? areas are north bay or south bay

error: `area` must be above zero
  --> roof.toml:40:8
   |
40 | area = "-9600 ft2"
   |        ^^^^^^^^^^^ not above zero
   |
   = help: write a value above zero

error: `low_point`: `high` does not begin with a number
  --> roof.toml:41:13
   |
41 | low_point = "high"
   |             ^^^^^^ a length belongs here
   |
   = help: write a number and a unit, such as "6 in"

"#]]);
}

#[test]
fn a_quantity_below_zero_on_the_command_line() {
    let said = |arguments: &[&str], message: snapbox::data::Inline| {
        Folder::new().brimline(arguments).code(2).stdout_eq("").stderr_eq(message);
    };
    said(
        &["rate", "open-scupper", "--width", "-1in"],
        str![[r#"
error: --width: `-1in` is not above zero
  = help: give a value above zero

"#]],
    );
    said(
        &["rate", "open-scupper", "--width", "6 in", "--head", "-2 in"],
        str![[r#"
error: --head: `-2 in` is neither a head above zero nor a range of heads
  = help: write "3 in", or FROM..TO..STEP such as "1 in..8 in..1 in"

"#]],
    );
    said(
        &["tradeoff", "roof.toml", "--up", "-2 psf"],
        str![[r#"
error: --up: `-2 psf` is not above zero
  = help: give a value above zero

"#]],
    );
    said(
        &["size", "roof.toml", "--time-limit", "-3 s"],
        str![[r#"
error: --time-limit: `-3 s` is not above zero
  = help: give a value above zero

"#]],
    );
    said(
        &["size", "roof.toml", "--keep", "-3"],
        str![[r#"
error: invalid value '-3' for '--keep <N>': -3 is not in 1..=10000

For more information, try '--help'.

"#]],
    );
}

#[test]
fn a_leave_to_close_that_is_none() {
    let with = |line: &str| project(&[("edge = \"120 ft\"", &format!("edge = \"120 ft\"\n{line}"))]);
    with("replace = true").refuses(str![[r#"
error: `replace = true` lets a search close what is there, and the area has no `existing`
  --> roof.toml:31:11
   |
31 | replace = true
   |           ^^^^ nothing to be closed
   |
   = help: say what is there: existing = "as found", or give a price, which `check --mend` reckons with

"#]]);
    with("replace = false").refuses(str![[r#"
error: `replace` is a price, or true
  --> roof.toml:31:11
   |
31 | replace = false
   |           ^^^^^ what is there stays where the key is absent
   |
   = help: take it out, or give what closing one opening costs: replace = 250

"#]]);
    with("replace = \"250\"").refuses(str![[r#"
error: `replace` must be a bare number, or true
  --> roof.toml:31:11
   |
31 | replace = "250"
   |           ^^^^^ a text stands here
   |
   = help: write a bare number, or true

"#]]);
    // 7 x 7 x 7 x 7 x 7 ways of closing none to six of each.
    let groups: Vec<String> = (0..5)
        .map(|place| {
            THERE[1..THERE.len() - 1]
                .replace("count = 2", "count = 6")
                .replace("2 in\" }", &format!("2.{place} in\" }}"))
        })
        .collect();
    existing(
        &format!("[{}]", groups.join(", ")),
        &[("[[area]]\nname = \"south", "replace = 10\n[[area]]\nname = \"south")],
    )
    .refuses(str![[r#"
error: what is there may be closed in more than 10000 ways
  --> roof.toml:34:11
   |
34 | replace = 10
   |           ^^ each is tried
   |
   = help: put openings of one size and one height into one group, or take `replace` out of the area

"#]]);
}

#[test]
fn a_price_of_closing_an_opening_that_is_none() {
    project(&[("units =", "replace = \"250\"\nunits ="), ("edge = \"120 ft\"", "edge = \"120 ft\"\nreplace = -5")])
        .refuses(str![[r#"
error: `replace` must be a bare number
 --> roof.toml:2:11
  |
2 | replace = "250"
  |           ^^^^^ a text stands here
  |
  = help: write a bare number

error: `replace` must not be negative
  --> roof.toml:32:11
   |
32 | replace = -5
   |           ^^ below zero
   |
   = help: write zero or more

"#]]);
}

#[test]
fn nothing_is_added_where_no_set_height_is_given() {
    let layout = "[[layout]]\nname = \"x\"\narea = \"north bay\"\n\
                  groups = [{ device = \"RS\", width = \"6 in\", height = \"4 in\", count = 1, set_height = \"2 in\" }]\n\n[[area]]";
    let folder =
        project(&[("set_height = { from = \"2 in\", to = \"4 in\", step = \"0.5 in\" }\n", ""), ("[[area]]", layout)]);
    folder.brimline(&["check", "roof.toml", "--mend"]).code(2).stdout_eq("").stderr_eq(str![[r#"
error: no set height is given for `north bay`
  = help: a search needs one: [search] set_height = { from = "2 in", to = "4 in", step = "0.25 in" }

"#]]);
    folder.brimline(&["check", "roof.toml"]).code(1);
}

#[test]
fn a_price_of_strength_that_is_none() {
    let with = |structure: &str| {
        Folder::new()
            .with("roof.toml", exchange(PROJECT, &[("[limit]", &format!("[structure]\n{structure}\n\n[limit]"))]))
    };
    with("stiffen = \"0.07 / ft2\"\nmost = \"0 psf\"").refuses(str![[r#"
error: `stiffen`: `0.07 / ft2` is not a price per unit
  --> roof.toml:11:11
   |
11 | stiffen = "0.07 / ft2"
   |           ^^^^^^^^^^^^ a price for each unit belongs here
   |
   = help: write an amount, a slash and a unit, and again: "14 / ft2 / psf"; ft2, m2, in2, mm2, cm2 or ha; then psf, kPa or Pa would pass

error: `most` must be above zero
  --> roof.toml:12:8
   |
12 | most = "0 psf"
   |        ^^^^^^^ not above zero
   |
   = help: write a value above zero

"#]]);
    with("stiffen = \"0.07 / psf / ft2\"\nstep = \"5 in\"").refuses(str![[r#"
error: `stiffen`: `psf` is a unit of load; this is an area
  --> roof.toml:11:11
   |
11 | stiffen = "0.07 / psf / ft2"
   |           ^^^^^^^^^^^^^^^^^^ a price for each unit belongs here
   |
   = help: ft2, m2, in2, mm2, cm2 or ha would pass

error: `step`: `in` is a unit of length; this is a load
  --> roof.toml:12:8
   |
12 | step = "5 in"
   |        ^^^^^^ a load belongs here
   |
   = help: psf, kPa or Pa would pass

"#]]);
    with("stiffen = \"-1 / ft2 / psf\"").refuses(str![[r#"
error: `stiffen` must not be negative
  --> roof.toml:11:11
   |
11 | stiffen = "-1 / ft2 / psf"
   |           ^^^^^^^^^^^^^^^^ below zero
   |
   = help: write zero or more

"#]]);
    with("step = \"5 psf\"\nprice = 3").refuses(str![[r#"
error: `stiffen` is missing in [structure]
  --> roof.toml:10:1
   |
10 | [structure]
   | ^^^^^^^^^^^ this table
   |
   = help: give the price of a square foot that carries a psf more: stiffen = "0.07 / ft2 / psf"

error: unknown key `price` in [structure]
  --> roof.toml:12:1
   |
12 | price = 3
   | ^^^^^ not a key of this table
   |
   = help: [structure] takes stiffen, step or most

"#]]);
    with("stiffen = \"0.07 / ft2 / psf\"\nstep = \"5 psf\"\nmost = \"4 psf\"").refuses(str![[r#"
error: `step` and `most` do not go together
  --> roof.toml:12:8
   |
12 | step = "5 psf"
   |        ^^^^^^^ not one step up to the greatest raise
   |
   = help: give a lesser step or a greater `most`

"#]]);
    with("stiffen = \"0.07 / ft2 / psf\"\nstep = \"0.001 psf\"").refuses(str![[r#"
error: `step` and `most` do not go together
  --> roof.toml:12:8
   |
12 | step = "0.001 psf"
   |        ^^^^^^^^^^^ more than 1,000 steps up to the greatest raise
   |
   = help: give a greater step or a lesser `most`

"#]]);
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("[limit]", "[structure]\nstiffen = \"0.07 / ft2 / psf\"\n\n[limit]"),
                    ("rank_by = [\"cost\", \"load\"]", "rank_by = [\"load\"]"),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("price = { each = 1650 }", "")]))
        .refuses(str![[r#"
error: `OD` has no price, and strength is weighed against it
  --> devices.toml:9:7
   |
 9 | tag = "OD"
   |       ^^^^ nothing is free by omission
   |
  ::: roof.toml:10:1
   |
10 | [structure]
   | ----------- asked for here
   |
   = help: give the device a price, or take what asks for it out

"#]]);
}

#[test]
fn a_value_of_another_type() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("\"Depot\"", "5"),
                    ("\"us\"", "1"),
                    ("[\"devices.toml\"]", "[\"devices.toml\", 7]"),
                    ("\"6.3 in/h\"", "true"),
                    ("[\"cost\", \"load\"]", "{ cost = 1 }"),
                    ("keep = 5", "keep = \"5\"\nmix = 2.0"),
                    ("{ from = \"2 in\", to = \"4 in\", step = \"0.5 in\" }", "1979-05-27"),
                    ("{ from = 2, to = 8 }", "{ from = \"2\", to = 8 }"),
                    ("blocked = 1", "limit = 36"),
                    ("{ height = \"24 in\", thickness = \"10 in\" }", "\"24 in\"\nponding = 0.4"),
                    ("[{ from = \"north bay\", share = 0.25 }]", "\"north bay\""),
                    ("{ \"one blocked\" = { load = \"36 psf\" } }", "\"36 psf\""),
                ],
            ),
        )
        .with(
            "devices.toml",
            exchange(
                CATALOG,
                &[
                    ("tag = \"RS\"", "tag = 12"),
                    ("{ each = 420, per_width = \"15 / in\" }", "420"),
                    ("\"drain.csv\"", "[\"drain.csv\"]"),
                    ("each = 1650", "each = \"1650\""),
                ],
            ),
        )
        .refuses(str![[r#"
error: `title` must be a text in quotes
 --> roof.toml:1:9
  |
1 | title = 5
  |         ^ a bare number stands here
  |
  = help: write a text in quotes

error: `units` must be "us" or "si"
 --> roof.toml:2:9
  |
2 | units = 1
  |         ^ a bare number stands here
  |
  = help: write "us" or "si"

error: `catalogs` must be a text in quotes
 --> roof.toml:3:29
  |
3 | catalogs = ["devices.toml", 7]
  |                             ^ a bare number stands here
  |
  = help: write a text in quotes

error: `intensity` must be a number with a unit in quotes, such as "6.3 in/h"
 --> roof.toml:6:13
  |
6 | intensity = true
  |             ^^^^ true or false stands here
  |
  = help: write a number with a unit in quotes, such as "6.3 in/h"

error: `rank_by` must be "cost", "load", "count", "width", "sizes" or "set-height"
  --> roof.toml:14:11
   |
14 | rank_by = { cost = 1 }
   |           ^^^^^^^^^^^^ a table stands here
   |
   = help: write "cost", "load", "count", "width", "sizes" or "set-height"

error: `keep` must be a whole number from 1 to 10000
  --> roof.toml:15:8
   |
15 | keep = "5"
   |        ^^^ a text stands here
   |
   = help: write a whole number from 1 to 10000

error: `mix` must be a whole number from 1 to 3
  --> roof.toml:16:7
   |
16 | mix = 2.0
   |       ^^^ not a whole number
   |
   = help: 1 to 3 would pass

error: `set_height` must be a number with a unit in quotes, such as "6 in"
  --> roof.toml:17:14
   |
17 | set_height = 1979-05-27
   |              ^^^^^^^^^^ a date stands here
   |
   = help: write a number with a unit in quotes, such as "6 in"

error: `from` must be a whole number from 1 to 10000
  --> roof.toml:18:18
   |
18 | count = { from = "2", to = 8 }
   |                  ^^^ a text stands here
   |
   = help: write a whole number from 1 to 10000

error: `limit` must be a table with load or depth
  --> roof.toml:25:9
   |
25 | limit = 36
   |         ^^ a bare number stands here
   |
   = help: write a table with load or depth

error: `parapet` must be a table with height or thickness
  --> roof.toml:32:11
   |
32 | parapet = "24 in"
   |           ^^^^^^^ a text stands here
   |
   = help: write a table with height or thickness

error: `ponding` must be a table with head, flexibility, primary, secondary or deck_inertia
  --> roof.toml:33:11
   |
33 | ponding = 0.4
   |           ^^^ a bare number stands here
   |
   = help: write a table with head, flexibility, primary, secondary or deck_inertia

error: `receives` must be a list, such as [{ from = "north bay", share = 0.5 }]
  --> roof.toml:38:12
   |
38 | receives = "north bay"
   |            ^^^^^^^^^^^ a text stands here
   |
   = help: write a list, such as [{ from = "north bay", share = 0.5 }]

error: `limit_in` must be a table of cases, such as { "one blocked" = { load = "36 psf" } }
  --> roof.toml:39:12
   |
39 | limit_in = "36 psf"
   |            ^^^^^^^^ a text stands here
   |
   = help: write a table of cases, such as { "one blocked" = { load = "36 psf" } }

error: `tag` must be a text in quotes
 --> devices.toml:2:7
  |
2 | tag = 12
  |       ^^ a bare number stands here
  |
  = help: write a text in quotes

error: `price` must be a table with each, per_width, per_height or per_area
 --> devices.toml:6:9
  |
6 | price = 420
  |         ^^^ a bare number stands here
  |
  = help: write a table with each, per_width, per_height or per_area

error: `rating` must be a text in quotes
  --> devices.toml:12:10
   |
12 | rating = ["drain.csv"]
   |          ^^^^^^^^^^^^^ a list stands here
   |
   = help: write a text in quotes

error: `each` must be a bare number
  --> devices.toml:14:18
   |
14 | price = { each = "1650" }
   |                  ^^^^^^ a text stands here
   |
   = help: write a bare number

"#]]);
}

#[test]
fn a_word_that_is_none_of_those_that_pass() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("\"us\"", "\"US\""),
                    ("[\"cost\", \"load\"]", "[\"cost\", \"laod\", \"cost\"]"),
                    ("edge = \"120 ft\"", "kinds = [\"open scuper\", \"rated\"]"),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("closed scupper", "closed skupper"), ("interior", "edges")]))
        .refuses(str![[r#"
error: `US` is not a value of `units`
 --> roof.toml:2:9
  |
2 | units = "US"
  |         ^^^^ not one of its values
  |
  = help: did you mean "us"? us or si would pass

error: `laod` is not a value of `rank_by`
  --> roof.toml:14:20
   |
14 | rank_by = ["cost", "laod", "cost"]
   |                    ^^^^^^ not one of its values
   |
   = help: did you mean "load"? cost, load, count, width, sizes or set-height would pass

error: "cost" stands twice in `rank_by`
  --> roof.toml:14:28
   |
14 | rank_by = ["cost", "laod", "cost"]
   |                            ^^^^^^ again
   |
   = help: name each criterion once

error: `open scuper` is not a value of `kinds`
  --> roof.toml:30:10
   |
30 | kinds = ["open scuper", "rated"]
   |          ^^^^^^^^^^^^^ not one of its values
   |
   = help: did you mean "open scupper"? open scupper, closed scupper, pipe scupper, overflow drain, standpipe, roof edge or rated would pass

error: `closed skupper` is not a value of `kind`
 --> devices.toml:3:8
  |
3 | kind = "closed skupper"
  |        ^^^^^^^^^^^^^^^^ not one of its values
  |
  = help: did you mean "closed scupper"? open scupper, closed scupper, pipe scupper, overflow drain, standpipe, roof edge or rated would pass

error: `edges` is not a value of `place`
  --> devices.toml:11:9
   |
11 | place = "edges"
   |         ^^^^^^^ not one of its values
   |
   = help: did you mean "edge"? edge or interior would pass

"#]]);
}

#[test]
fn a_table_where_a_list_of_tables_belongs_and_the_reverse() {
    project(&[("[storm]", "[[storm]]"), ("[[case]]\nname = \"as designed\"\n\n[[case]]", "[case]")]).refuses(str![[
        r#"
error: `storm` must be a table with intensity, table, duration, return_period, climate, storms or source
 --> roof.toml:5:1
  |
5 | [[storm]]
  | ^^^^^^^^^ a list stands here
  |
  = help: write a table with intensity, table, duration, return_period, climate, storms or source

error: `case` must be a list of cases, each under [[case]]
  --> roof.toml:19:1
   |
19 | [case]
   | ^^^^^^ a table stands here
   |
   = help: write a list of cases, each under [[case]]

"#
    ]]);
}

#[test]
fn names_that_stand_twice() {
    let second = "[[device]]\ntag = \"RS\"\nkind = \"open scupper\"\nwidth = \"12 in\"\nprice = { each = 1 }\n";
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("[\"devices.toml\"]", "[\"devices.toml\", \"more.toml\", \"./devices.toml\"]"),
                    ("\"as designed\"", "\"one blocked\""),
                    ("name = \"south bay\"", "name = \"north bay\""),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("\"OD\"", "\"RS\"")]))
        .with("more.toml", second)
        .refuses(str![[r#"
error: the catalog `./devices.toml` is named twice
 --> roof.toml:3:42
  |
3 | catalogs = ["devices.toml", "more.toml", "./devices.toml"]
  |             -------------- first here    ^^^^^^^^^^^^^^^^ again here
  |
  = help: name each catalog once

error: two cases have the name `one blocked`
  --> roof.toml:23:8
   |
20 | name = "one blocked"
   |        ------------- first here
...
23 | name = "one blocked"
   |        ^^^^^^^^^^^^^ again here
   |
   = help: give every case a name of its own

error: two areas have the name `north bay`
  --> roof.toml:34:8
   |
27 | name = "north bay"
   |        ----------- first here
...
34 | name = "north bay"
   |        ^^^^^^^^^^^ again here
   |
   = help: give every area a name of its own

error: two devices have the tag `RS`
 --> devices.toml:9:7
  |
2 | tag = "RS"
  |       ---- first here
...
9 | tag = "RS"
  |       ^^^^ again here
  |
  = help: every device of all catalogs has a tag of its own

error: two devices have the tag `RS`
 --> more.toml:2:7
  |
2 | tag = "RS"
  |       ^^^^ again here
  |
 ::: devices.toml:2:7
  |
2 | tag = "RS"
  |       ---- first here
  |
  = help: every device of all catalogs has a tag of its own

"#]]);
}

#[test]
fn nothing_where_something_belongs() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("\"Depot\"", "\"\""),
                    ("[\"devices.toml\"]", "[\"devices.toml\", \"empty.toml\", \"none.toml\"]"),
                    ("load = \"30 psf\"", ""),
                    ("[\"cost\", \"load\"]", "[]"),
                    ("{ from = \"2 in\", to = \"4 in\", step = \"0.5 in\" }", "{ from = \"2 in\" }"),
                    ("name = \"one blocked\"", "name = \" \""),
                    ("edge = \"120 ft\"", "kinds = []\nset_height = []\nponding = {}"),
                    ("[{ from = \"north bay\", share = 0.25 }]", "[{ share = 0.25 }]"),
                ],
            ),
        )
        .with("devices.toml", exchange(CATALOG, &[("{ each = 1650 }", "{}"), ("tag = \"RS\"\n", "")]))
        .with("empty.toml", "")
        .with("none.toml", "device = []\n")
        .refuses(str![[r#"
error: `title` is empty
 --> roof.toml:1:9
  |
1 | title = ""
  |         ^^ nothing stands here
  |
  = help: write a text

error: a limit is empty
  --> roof.toml:10:1
   |
10 | [limit]
   | ^^^^^^^ this table
   |
   = help: give load = "30 psf", depth = "5.5 in", or both

error: `rank_by` is an empty list
  --> roof.toml:14:11
   |
14 | rank_by = []
   |           ^^ no criterion stands here
   |
   = help: write rank_by = ["cost", "load"]

error: `to` is missing in a range
  --> roof.toml:16:14
   |
16 | set_height = { from = "2 in" }
   |              ^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: { from = "6 in", to = "12 in", step = "1 in" }

error: `step` is missing in a range
  --> roof.toml:16:14
   |
16 | set_height = { from = "2 in" }
   |              ^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: { from = "6 in", to = "12 in", step = "1 in" }

error: `name` is empty
  --> roof.toml:23:8
   |
23 | name = " "
   |        ^^^ nothing stands here
   |
   = help: write a text

error: `kinds` is an empty list
  --> roof.toml:30:9
   |
30 | kinds = []
   |         ^^ no kind stands here
   |
   = help: name at least one kind, or take the key out

error: `set_height` is an empty list
  --> roof.toml:31:14
   |
31 | set_height = []
   |              ^^ no value stands here
   |
   = help: give at least one value

error: `ponding` is empty
  --> roof.toml:32:11
   |
32 | ponding = {}
   |           ^^ this table
   |
   = help: give head = "0.4 in", flexibility = "0.02 in/psf", or the stiffness of its members under secondary

error: `from` is missing in an entry of `receives`
  --> roof.toml:38:13
   |
38 | receives = [{ share = 0.25 }]
   |             ^^^^^^^^^^^^^^^^ this table
   |
   = help: name the area it comes from: from = "north bay"

error: `tag` is missing in a [[device]]
 --> devices.toml:1:1
  |
1 | [[device]]
  | ^^^^^^^^^^ this table
  |
  = help: a tag is a short name, such as tag = "RS"

error: `price` is empty
  --> devices.toml:13:9
   |
13 | price = {}
   |         ^^ this table
   |
   = help: give each, per_width, per_height or per_area

error: `empty.toml` has no [[device]]
 --> empty.toml:1:1
  |
1 |
  | ^ this file
  |
  = help: a catalog is a list of [[device]] tables, each with a tag and a kind

error: `device` is an empty list
 --> none.toml:1:10
  |
1 | device = []
  |          ^^ nothing stands here
  |
  = help: write a list of devices, each under [[device]]

"#]]);
    Folder::new().with("roof.toml", "").refuses(str![[r#"
error: `units` is missing in the project
 --> roof.toml:1:1
  |
1 |
  | ^ this file
  |
  = help: write units = "us" for inches and psf, units = "si" for mm and kPa

error: `catalogs` is missing in the project
 --> roof.toml:1:1
  |
1 |
  | ^ this file
  |
  = help: name at least one file: catalogs = ["scuppers.toml"]

error: [storm] is missing in the project
 --> roof.toml:1:1
  |
1 |
  | ^ this file
  |
  = help: give [storm] with intensity = "6.3 in/h"

error: the project has no [[area]]
 --> roof.toml:1:1
  |
1 |
  | ^ this file
  |
  = help: give one [[area]] for each low point, with name and area

"#]]);
    Folder::new().with("roof.toml", "units = \"us\"\ncatalogs = []\ncase = []\narea = []\n").refuses(str![[r#"
error: [storm] is missing in the project
 --> roof.toml:1:1
  |
1 | units = "us"
  | ^ this file
  |
  = help: give [storm] with intensity = "6.3 in/h"

error: `catalogs` is an empty list
 --> roof.toml:2:12
  |
2 | catalogs = []
  |            ^^ no catalog stands here
  |
  = help: name at least one file

error: `case` is an empty list
 --> roof.toml:3:8
  |
3 | case = []
  |        ^^ nothing stands here
  |
  = help: write a list of cases, each under [[case]]

error: `area` is an empty list
 --> roof.toml:4:8
  |
4 | area = []
  |        ^^ nothing stands here
  |
  = help: write a list of areas, each under [[area]]

"#]]);
}

#[test]
fn grids_that_run_backwards_or_are_too_fine() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("from = \"2 in\", to = \"4 in\"", "from = \"4 in\", to = \"2 in\""),
                    ("edge = \"120 ft\"", "set_height = { from = \"0 in\", to = \"1 m\", step = \"0.001 mm\" }"),
                ],
            ),
        )
        .with(
            "devices.toml",
            exchange(
                CATALOG,
                &[
                    ("step = \"6 in\"", "step = \"0.01 in\""),
                    ("[\"4 in\", \"6 in\"]", "{ from = \"1 in\", to = \"12 in\", step = \"0.01 in\" }"),
                    ("set_height = [\"2 in\", \"3 in\"]", "set_height = [\"2 in\", \"3 inn\", \"-1 in\"]"),
                ],
            ),
        )
        .refuses(str![[r#"
error: `from` stands above `to` in `set_height`
  --> roof.toml:16:23
   |
16 | set_height = { from = "4 in", to = "2 in", step = "0.5 in" }
   |                       ^^^^^^ this is the greater
   |
   = help: give the lesser value as `from`

error: `set_height` makes 1000001 values; up to 1000000 would pass
  --> roof.toml:30:14
   |
30 | set_height = { from = "0 in", to = "1 m", step = "0.001 mm" }
   |              ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ too fine, or too wide
   |
   = help: give a coarser step or a narrower range

error: 1801 widths and 1101 heights make 1982901 sizes; up to 1000000 would pass
 --> devices.toml:4:9
  |
4 | width = { from = "6 in", to = "24 in", step = "0.01 in" }
  |         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ too fine, or too wide
  |
  = help: give a coarser step or a narrower range

error: `set_height`: `inn` is not a unit of length known here
  --> devices.toml:13:23
   |
13 | set_height = ["2 in", "3 inn", "-1 in"]
   |                       ^^^^^^^ a length belongs here
   |
   = help: did you mean `in`? in, ft, mm, cm, m or yd would pass

error: `set_height` must not be negative
  --> devices.toml:13:32
   |
13 | set_height = ["2 in", "3 inn", "-1 in"]
   |                                ^^^^^^^ below zero
   |
   = help: write zero or more

"#]]);
}

#[test]
fn the_catalogs_together_make_too_many_sizes() {
    let fine = "width = { from = \"0.001 mm\", to = \"600 mm\", step = \"0.001 mm\" }\nprice = { each = 1 }\n";
    let device = |tag: &str| format!("[[device]]\ntag = \"{tag}\"\nkind = \"open scupper\"\n{fine}");
    Folder::new().with("devices.toml", device("A") + &device("B")).refuses(str![[r#"
error: the catalogs make more than 1000000 sizes
 --> devices.toml:6:1
  |
6 | [[device]]
  | ^^^^^^^^^^ too many with this device
  |
  = help: give coarser steps or narrower ranges

"#]]);
}

#[test]
fn counts_that_leave_nothing() {
    project(&[("{ from = 2, to = 8 }", "{ from = 9 }"), ("edge = \"120 ft\"", "count = { from = 4, to = 3 }")])
        .refuses(str![[r#"
error: `to` is missing in `count`
  --> roof.toml:17:9
   |
17 | count = { from = 9 }
   |         ^^^^^^^^^^^^ this table
   |
   = help: write both ends: count = { from = 2, to = 8 }

error: `count` runs from 4 to 3
  --> roof.toml:30:18
   |
30 | count = { from = 4, to = 3 }
   |                  ^ the least is above the greatest
   |
   = help: give the lesser number as `from`

"#]]);
    project(&[("count = { from = 2, to = 8 }", "count = 0"), ("edge = \"120 ft\"", "count = 10001")]).refuses(str![[
        r#"
error: `count` must be a whole number from 1 to 10000
  --> roof.toml:17:9
   |
17 | count = 0
   |         ^ outside that range
   |
   = help: 1 to 10000 would pass

error: `count` must be a whole number from 1 to 10000
  --> roof.toml:30:9
   |
30 | count = 10001
   |         ^^^^^ outside that range
   |
   = help: 1 to 10000 would pass

"#
    ]]);
    project(&[("blocked = 1", "blocked = 8"), ("edge = \"120 ft\"", "count = 3")]).refuses(str![[r#"
error: the case `one blocked` blocks 8 of at most 3 devices in `north bay`: none would be left
  --> roof.toml:24:11
   |
24 | blocked = 8
   |           ^ not less than the greatest count
...
30 | count = 3
   |         - the greatest count
   |
   = help: block fewer devices, or raise the greatest count

error: the case `one blocked` blocks 8 of at most 8 devices: none would be left
  --> roof.toml:24:11
   |
17 | count = { from = 2, to = 8 }
   |         -------------------- the greatest count
...
24 | blocked = 8
   |           ^ not less than the greatest count
   |
   = help: block fewer devices, or raise the greatest count

"#]]);
    project(&[("blocked = 1", "blocked = 9"), ("count = { from = 2, to = 8 }\n", "")]).refuses(str![[r#"
error: the case `one blocked` blocks 9 of at most 8 devices: none would be left
  --> roof.toml:23:11
   |
23 | blocked = 9
   |           ^ not less than the greatest count
   |
   = help: block fewer devices, or raise the greatest count

"#]]);
}

#[test]
fn water_that_runs_in_circles() {
    let area = |name: &str, from: &[&str]| {
        let from: Vec<_> = from.iter().map(|from| format!("{{ from = \"{from}\" }}")).collect();
        format!("[[area]]\nname = \"{name}\"\narea = \"1000 ft2\"\nreceives = [{}]\n", from.join(", "))
    };
    let (before, _) = PROJECT.split_once("[[area]]").expect("areas");
    let areas = [area("a", &["b"]), area("b", &["c", "d"]), area("c", &["a"]), area("d", &["d"])].concat();
    let areas = areas.replace("from = \"d\" }", "from = \"d\", share = 0.5 }");
    // A fault elsewhere does not hide them.
    let text = format!("{before}{areas}").replace("6.3 in/h", "6.3");
    Folder::new().with("roof.toml", text).refuses(str![[r#"
error: `intensity`: `6.3` has no unit; this is a rain intensity
 --> roof.toml:6:13
  |
6 | intensity = "6.3"
  |             ^^^^^ a rain intensity belongs here
  |
  = help: write "6.3 in/h"; in/h, mm/h, mm/min, l/(s m2) or l/(s ha) would pass

error: areas receive from one another in a circle: `a` from `b` from `c` from `a`
  --> roof.toml:29:22
   |
29 | receives = [{ from = "b" }]
   |                      ^^^ runs to `a`
...
33 | receives = [{ from = "c" }, { from = "d", share = 0.5 }]
   |                      --- runs to `b`
...
37 | receives = [{ from = "a" }]
   |                      --- runs to `c`
   |
   = help: water runs one way: take one of these out

error: `d` receives from itself
  --> roof.toml:41:22
   |
41 | receives = [{ from = "d", share = 0.5 }]
   |                      ^^^ runs to `d`
   |
   = help: water runs one way: take one of these out

"#]]);
}

#[test]
fn names_that_are_nowhere_given() {
    project(&[
        ("wall = \"1800 ft2\"", "receives = [{ from = \"elsewhere\" }]"),
        ("from = \"north bay\", share = 0.25", "from = \"noth bay\", share = 1.25"),
        ("\"one blocked\" = { load = \"36 psf\" }", "\"one bloked\" = { load = \"36\" }, \"x\" = {}"),
    ])
    .refuses(str![[r#"
error: there is no area `elsewhere`
  --> roof.toml:29:22
   |
29 | receives = [{ from = "elsewhere" }]
   |                      ^^^^^^^^^^^ not an area of this project
   |
   = help: areas are north bay or south bay

error: there is no area `noth bay`
  --> roof.toml:36:22
   |
36 | receives = [{ from = "noth bay", share = 1.25 }]
   |                      ^^^^^^^^^^ not an area of this project
   |
   = help: did you mean "north bay"? areas are north bay or south bay

error: `share` must be a part of one
  --> roof.toml:36:42
   |
36 | receives = [{ from = "noth bay", share = 1.25 }]
   |                                          ^^^^ above 1
   |
   = help: 1.0 passes on all of it

error: there is no case `one bloked`
  --> roof.toml:37:14
   |
37 | limit_in = { "one bloked" = { load = "36" }, "x" = {} }
   |              ^^^^^^^^^^^^ not a case of this project
   |
   = help: did you mean "one blocked"? the cases are as designed or one blocked

error: `load`: `36` has no unit; this is a load
  --> roof.toml:37:38
   |
37 | limit_in = { "one bloked" = { load = "36" }, "x" = {} }
   |                                      ^^^^ a load belongs here
   |
   = help: write "36 psf"; psf, kPa or Pa would pass

error: there is no case `x`
  --> roof.toml:37:46
   |
37 | limit_in = { "one bloked" = { load = "36" }, "x" = {} }
   |                                              ^^^ not a case of this project
   |
   = help: the cases are as designed or one blocked

error: a limit is empty
  --> roof.toml:37:52
   |
37 | limit_in = { "one bloked" = { load = "36" }, "x" = {} }
   |                                                    ^^ this table
   |
   = help: give load = "30 psf", depth = "5.5 in", or both

"#]]);
    // Where a name cannot be read, others are not said to be nowhere.
    project(&[("name = \"north bay\"\n", ""), ("name = \"one blocked\"\n", "")]).refuses(str![[r#"
error: `name` is missing in a [[case]]
  --> roof.toml:22:1
   |
22 | [[case]]
   | ^^^^^^^^ this table
   |
   = help: name the case: name = "one blocked"

error: `name` is missing in an [[area]]
  --> roof.toml:25:1
   |
25 | [[area]]
   | ^^^^^^^^ this table
   |
   = help: name the area: name = "north bay"

"#]]);
}

#[test]
fn an_area_that_is_asked_for_and_is_not_there() {
    Folder::new().refuses_as(
        &["roof.toml", "--area", "noth bay"],
        str![[r#"
error: there is no area `noth bay` in roof.toml; did you mean `north bay`?
  = help: areas are north bay, south bay

"#]],
    );
    Folder::new().refuses_as(
        &["roof.toml", "--area", "elsewhere", "--area", "south bay"],
        str![[r#"
error: there is no area `elsewhere` in roof.toml
  = help: areas are north bay, south bay

"#]],
    );
}

#[test]
fn an_area_without_a_limit_a_set_height_or_a_device() {
    project(&[
        ("[limit]\nload = \"30 psf\"\n", ""),
        ("set_height = { from = \"2 in\", to = \"4 in\", step = \"0.5 in\" }\n", ""),
        ("edge = \"120 ft\"", "kinds = [\"open scupper\"]\nlimit = { depth = \"5 in\" }"),
    ])
    .refuses(str![[r#"
error: no catalog has a device of these kinds
  --> roof.toml:27:9
   |
27 | kinds = ["open scupper"]
   |         ^^^^^^^^^^^^^^^^ nothing could stand here
   |
   = help: the catalogs have closed scupper or rated

error: `south bay` has no limit in the case `as designed`
  --> roof.toml:31:1
   |
31 | [[area]]
   | ^^^^^^^^ this table
   |
   = help: give [limit] load or depth for the roof, or a limit for the area or the case

error: no set height is given for `south bay`
  --> roof.toml:31:1
   |
31 | [[area]]
   | ^^^^^^^^ this table
   |
   = help: give [search] set_height = { from = "2 in", to = "4 in", step = "0.25 in" }, or set_height in the area

"#]]);
    // No kind is said to be offered nowhere while a catalog cannot be read.
    project(&[
        ("\"devices.toml\"", "\"devices.toml\", \"notches.toml\""),
        ("edge = \"120 ft\"", "kinds = [\"open scupper\"]"),
    ])
    .refuses(str![[r#"
error: there is no file `notches.toml`
 --> roof.toml:3:29
  |
3 | catalogs = ["devices.toml", "notches.toml"]
  |                             ^^^^^^^^^^^^^^ named here
  |
  = help: the path counts from the file that names it

"#]]);
}

#[test]
fn more_received_than_there_is_is_a_warning() {
    let third = "\n[[area]]\nname = \"annex\"\narea = \"500 ft2\"\nreceives = [{ from = \"north bay\" }]\n";
    let folder = Folder::new().with("roof.toml", format!("{PROJECT}{third}"));
    folder.brimline(&["size", "roof.toml", "--output", "result"]).code(0).stdout_eq("").stderr_eq(
        str![[r#"
warning: areas receive 1.25 of what leaves `north bay`, more than all of it
  --> roof.toml:42:22
   |
42 | receives = [{ from = "north bay" }]
   |                      ^^^^^^^^^^^ with this one
   |
   = help: shares of one area that add up to 1 pass on all of it


"#]]
        .raw(),
    );
    assert!(folder.0.join("result").exists(), "a warning keeps no result back");
}

/// Both a head and a flexibility, a negative one, one in the unit of a load.
#[test]
fn what_a_roof_sags_is_given_once() {
    project(&[
        ("edge = \"120 ft\"", "ponding = { head = \"0.4 in\", flexibility = \"0.02 in/psf\" }"),
        ("area = \"7400 ft2\"", "area = \"7400 ft2\"\nponding = { flexibility = \"-0.02 in/psf\" }"),
    ])
    .refuses(str![[r#"
error: `ponding` gives both `head` and `flexibility`
  --> roof.toml:30:44
   |
30 | ponding = { head = "0.4 in", flexibility = "0.02 in/psf" }
   |                                            ^^^^^^^^^^^^^ one of them is enough
   |
   = help: give a fixed head, or a flexibility from which it follows, or the members whose stiffness makes it

error: `flexibility` must not be negative
  --> roof.toml:36:27
   |
36 | ponding = { flexibility = "-0.02 in/psf" }
   |                           ^^^^^^^^^^^^^^ below zero
   |
   = help: write zero or more

"#]]);
    project(&[
        ("edge = \"120 ft\"", "ponding = { flexibility = \"0.02 psf\" }"),
        ("area = \"7400 ft2\"", "area = \"7400 ft2\"\nponding = { flexibility = 0.02, secondary = {} }"),
    ])
    .refuses(str![[r#"
error: `flexibility`: `psf` is a unit of load; this is a flexibility
  --> roof.toml:30:27
   |
30 | ponding = { flexibility = "0.02 psf" }
   |                           ^^^^^^^^^^ a flexibility belongs here
   |
   = help: in/psf, mm/kPa or m/Pa would pass

error: `ponding` gives both `flexibility` and `secondary`
  --> roof.toml:36:45
   |
36 | ponding = { flexibility = 0.02, secondary = {} }
   |                                             ^^ one of them is enough
   |
   = help: give a fixed head, or a flexibility from which it follows, or the members whose stiffness makes it

"#]]);
}

#[test]
fn members_that_sag_are_given_whole() {
    project(&[
        (
            "edge = \"120 ft\"",
            "ponding = { primary = { span = \"30 ft\", inertia = \"1500 in\" }, deck_inertia = \"0 in4/ft\" }",
        ),
        (
            "area = \"7400 ft2\"",
            "area = \"7400 ft2\"\nponding = { secondary = { span = \"40\", inertia = \"-300 in4\", web = \"joist\" } }",
        ),
    ])
    .refuses(str![[r#"
error: `secondary` is missing in `ponding`
  --> roof.toml:30:11
   |
30 | ponding = { primary = { span = "30 ft", inertia = "1500 in" }, deck_inertia = "0 in4/ft" }
   |           ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: give the members under the deck: secondary = { span = "40 ft", spacing = "5 ft", inertia = "300 in4" }

error: `inertia`: `in` is a unit of length; this is a moment of inertia
  --> roof.toml:30:51
   |
30 | ponding = { primary = { span = "30 ft", inertia = "1500 in" }, deck_inertia = "0 in4/ft" }
   |                                                   ^^^^^^^^^ a moment of inertia belongs here
   |
   = help: in4, mm4, cm4 or m4 would pass

error: `deck_inertia` must be above zero
  --> roof.toml:30:79
   |
30 | ponding = { primary = { span = "30 ft", inertia = "1500 in" }, deck_inertia = "0 in4/ft" }
   |                                                                               ^^^^^^^^^^ not above zero
   |
   = help: write a value above zero

error: `spacing` is missing in `secondary`
  --> roof.toml:36:25
   |
36 | ponding = { secondary = { span = "40", inertia = "-300 in4", web = "joist" } }
   |                         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: give the distance between two of them: spacing = "5 ft"

error: `span`: `40` has no unit; this is a length
  --> roof.toml:36:34
   |
36 | ponding = { secondary = { span = "40", inertia = "-300 in4", web = "joist" } }
   |                                  ^^^^ a length belongs here
   |
   = help: write "40 in"; in, ft, mm, cm, m or yd would pass

error: `inertia` must be above zero
  --> roof.toml:36:50
   |
36 | ponding = { secondary = { span = "40", inertia = "-300 in4", web = "joist" } }
   |                                                  ^^^^^^^^^^ not above zero
   |
   = help: write a value above zero

error: `joist` is not a value of `web`
  --> roof.toml:36:68
   |
36 | ponding = { secondary = { span = "40", inertia = "-300 in4", web = "joist" } }
   |                                                                    ^^^^^^^ not one of its values
   |
   = help: solid or open would pass

"#]]);
}

/// 0.2 in/psf x 5.2 psf/in = 1.04: the area is answered, with no level that it allows, and the others too.
#[test]
fn an_unstable_roof_is_a_warning_and_has_no_layout() {
    let folder = project(&[("edge = \"120 ft\"", "ponding = { flexibility = \"0.2 in/psf\" }")]);
    let told = folder.brimline(&["size", "roof.toml"]).code(1).stderr_eq(
        str![[r#"
warning: the roof is unstable under water: 0.2 in/psf x 5.2 psf/in = 1.040, not under 1
  --> roof.toml:30:11
   |
30 | ponding = { flexibility = "0.2 in/psf" }
   |           ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ water of any depth sinks it by as much or more
   |
   = help: no level is allowed here: stiffen the framing, or check the figure


"#]]
        .raw(),
    );
    let text = String::from_utf8(told.get_output().stdout.clone()).expect("UTF-8");
    let text = text.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(
        text.contains("No layout. north bay is unstable under water: its sag ratio of 1.04 is not under 1"),
        "{text}"
    );
    assert!(text.contains("The same in every row") || text.contains("RS 24 x"), "the other area has layouts: {text}");
}

#[test]
fn files_that_are_not_there_or_no_text() {
    let folder =
        project(&[("[\"devices.toml\"]", "[\"devices.tml\", \"sub\", \"../other/latin.toml\", \"latin.toml\"]")])
            .with("latin.toml", b"# Kessel\n# Gr\xfc\xdfe\n");
    fs::create_dir(folder.0.join("sub")).expect("a folder can be made");
    folder.refuses(str![[r#"
error: there is no file `devices.tml`
 --> roof.toml:3:13
  |
3 | catalogs = ["devices.tml", "sub", "../other/latin.toml", "latin.toml"]
  |             ^^^^^^^^^^^^^ named here
  |
  = help: the path counts from the file that names it

error: `sub` is a directory, not a file
 --> roof.toml:3:28
  |
3 | catalogs = ["devices.tml", "sub", "../other/latin.toml", "latin.toml"]
  |                            ^^^^^ named here
  |
  = help: name a file

error: there is no file `../other/latin.toml`
 --> roof.toml:3:35
  |
3 | catalogs = ["devices.tml", "sub", "../other/latin.toml", "latin.toml"]
  |                                   ^^^^^^^^^^^^^^^^^^^^^ named here
  |
  = help: the path counts from the file that names it

error: `latin.toml` is not UTF-8 text: line 2, column 5
 --> roof.toml:3:58
  |
3 | catalogs = ["devices.tml", "sub", "../other/latin.toml", "latin.toml"]
  |                                                          ^^^^^^^^^^^^ named here
  |
  = help: save it as UTF-8

"#]]);
    folder.refuses_as(
        &["./sub/../rof.toml"],
        str![[r#"
error: there is no file `./sub/../rof.toml`
  = help: check the path

"#]],
    );
    folder.refuses_as(
        &["sub"],
        str![[r#"
error: `sub` is a directory, not a file
  = help: name a file

"#]],
    );
    folder.refuses_as(
        &["latin.toml"],
        str![[r#"
error: `latin.toml` is not UTF-8 text: line 2, column 5
  = help: save it as UTF-8

"#]],
    );
    catalog(&[("drain.csv", "sub/drain.csv")]).refuses(str![[r#"
error: there is no file `sub/drain.csv`
  --> devices.toml:12:10
   |
12 | rating = "sub/drain.csv"
   |          ^^^^^^^^^^^^^^^ named here
   |
   = help: the path counts from the file that names it

"#]]);
    // As a spreadsheet saves "Unicode text".
    Folder::new().with("drain.csv", b"\xff\xfeh\0e\0a\0d\0").refuses(str![[r#"
error: `drain.csv` is not UTF-8 text: line 1, column 1
  --> devices.toml:12:10
   |
12 | rating = "drain.csv"
   |          ^^^^^^^^^^^ named here
   |
   = help: save it as UTF-8

"#]]);
}

#[test]
fn devices_with_too_little_or_too_much() {
    Folder::new()
        .with(
            "devices.toml",
            r#"[[device]]
tag = "A"
kind = "closed scupper"
rating = "drain.csv"
place = "interior"
price = { each = -1, per_width = "15", per_height = "-2 / in", per_area = "1 / ft" }

[[device]]
tag = "B"
kind = "open scupper"
width = "12 in"
height = "4 in"
price = { each = nan, per_width = "1,5 / in" }

[[device]]
tag = "C"
kind = "open scupper"
width = ["12 in", "0 in"]

[[device]]
tag = "D"
kind = "rated"
height = "4 in"
width = ["4 in", "6 in"]
price = { each = 1 }

[[device]]
tag = "E"
kind = "rated"
rating = "drain.csv"
place = "edge"
price = { per_width = "1 / in", per_area = "x" }

[[device]]
tag = "F"
kind = "open scupper"
width = "12 in"
price = { per_height = "1 / in" }

[[device]]
tag = "G"
kind = "open scupper"
width = ["1 in", "2 in"]
price = { per_width = "5e8 / in" }

[[device]]
tag = "H"
kind = "open scupper"
width = "1 in"
price = { per_width = "1e14 / in" }

[[device]]
width = "12 in"
"#,
        )
        .refuses(str![[r#"
error: `width` is missing in a device of kind "closed scupper"
 --> devices.toml:1:1
  |
1 | [[device]]
  | ^^^^^^^^^^ this table
  |
  = help: give a value, a list or a range: width = { from = "6 in", to = "24 in", step = "1 in" }

error: `height` is missing in a device of kind "closed scupper"
 --> devices.toml:1:1
  |
1 | [[device]]
  | ^^^^^^^^^^ this table
  |
  = help: give a value, a list or a range: height = ["4 in", "6 in"]

error: `rating` does not belong to a device of kind "closed scupper"
 --> devices.toml:4:10
  |
4 | rating = "drain.csv"
  |          ^^^^^^^^^^^ its flow comes from a law
  |
  = help: take it out, or make the device "rated"

error: a scupper stands in the parapet
 --> devices.toml:5:9
  |
5 | place = "interior"
  |         ^^^^^^^^^^ not inside the roof
  |
  = help: write "edge", or take the key out

error: `each` must not be negative
 --> devices.toml:6:18
  |
6 | price = { each = -1, per_width = "15", per_height = "-2 / in", per_area = "1 / ft" }
  |                  ^^ below zero
  |
  = help: write zero or more

error: `per_width`: `15` is not a price per unit
 --> devices.toml:6:34
  |
6 | price = { each = -1, per_width = "15", per_height = "-2 / in", per_area = "1 / ft" }
  |                                  ^^^^ a price for each unit belongs here
  |
  = help: write an amount, a slash and a unit: "14 / in"; in, ft, mm, cm, m or yd would pass

error: `per_height` must not be negative
 --> devices.toml:6:53
  |
6 | price = { each = -1, per_width = "15", per_height = "-2 / in", per_area = "1 / ft" }
  |                                                     ^^^^^^^^^ below zero
  |
  = help: write zero or more

error: `per_area`: `ft` is a unit of length; this is an area
 --> devices.toml:6:75
  |
6 | price = { each = -1, per_width = "15", per_height = "-2 / in", per_area = "1 / ft" }
  |                                                                           ^^^^^^^^ a price for each unit belongs here
  |
  = help: ft2, m2, in2, mm2, cm2 or ha would pass

error: `height` does not belong to a device of kind "open scupper"
  --> devices.toml:12:10
   |
12 | height = "4 in"
   |          ^^^^^^ it is open at the top
   |
   = help: take it out, or make it a "closed scupper"

error: `each` must be a finite number
  --> devices.toml:13:18
   |
13 | price = { each = nan, per_width = "1,5 / in" }
   |                  ^^^ not a finite number
   |
   = help: write a finite number

error: `per_width`: the comma in `1,5` can be read in two ways
  --> devices.toml:13:35
   |
13 | price = { each = nan, per_width = "1,5 / in" }
   |                                   ^^^^^^^^^^ a price for each unit belongs here
   |
   = help: write 1.5 if the comma is a decimal point, 15 if it parts thousands; a comma passes only before whole groups of three digits in a whole number

error: `C` has no price, and layouts are ranked by cost
  --> devices.toml:16:7
   |
16 | tag = "C"
   |       ^^^ nothing is free by omission
   |
  ::: roof.toml:14:11
   |
14 | rank_by = ["cost", "load"]
   |           ---------------- ranked by cost here
   |
   = help: give the device a price, or leave "cost" out of `rank_by`: ["count", "load"] would pass

error: `width` must be above zero
  --> devices.toml:18:19
   |
18 | width = ["12 in", "0 in"]
   |                   ^^^^^^ not above zero
   |
   = help: write a value above zero

error: `rating` is missing in a device of kind "rated"
  --> devices.toml:20:1
   |
20 | [[device]]
   | ^^^^^^^^^^ this table
   |
   = help: name a CSV file of heads and flows: rating = "drain-4in.csv"

error: `place` is missing in a device of kind "rated"
  --> devices.toml:20:1
   |
20 | [[device]]
   | ^^^^^^^^^^ this table
   |
   = help: say where it stands: place = "edge" or place = "interior"

error: `height` does not belong to a device of kind "rated"
  --> devices.toml:23:10
   |
23 | height = "4 in"
   |          ^^^^^^ its table says what it carries
   |
   = help: take it out

error: `per_width` needs a device with width
  --> devices.toml:32:23
   |
32 | price = { per_width = "1 / in", per_area = "x" }
   |                       ^^^^^^^^ this device has none
   |
   = help: price it with `each`

error: `per_area`: `x` is not a price per unit
  --> devices.toml:32:44
   |
32 | price = { per_width = "1 / in", per_area = "x" }
   |                                            ^^^ a price for each unit belongs here
   |
   = help: write an amount, a slash and a unit: "14 / ft2"; ft2, m2, in2, mm2, cm2 or ha would pass

error: `per_area` needs a device with width and height
  --> devices.toml:32:44
   |
32 | price = { per_width = "1 / in", per_area = "x" }
   |                                            ^^^ this device has none
   |
   = help: price it with `each`

error: `per_height` needs a device with height
  --> devices.toml:38:24
   |
38 | price = { per_height = "1 / in" }
   |                        ^^^^^^^^ this device has none
   |
   = help: price it with `each`

error: the price of `G` is too great
  --> devices.toml:44:9
   |
44 | price = { per_width = "5e8 / in" }
   |         ^^^^^^^^^^^^^^^^^^^^^^^^^^ makes an amount of more than 900 million
   |
   = help: give all prices in thousands, or check this one

error: `per_width`: `1e14 / in` is too great
  --> devices.toml:50:23
   |
50 | price = { per_width = "1e14 / in" }
   |                       ^^^^^^^^^^^ a price for each unit belongs here
   |
   = help: no roof needs so much: check the number and its unit

error: `tag` is missing in a [[device]]
  --> devices.toml:52:1
   |
52 | [[device]]
   | ^^^^^^^^^^ this table
   |
   = help: a tag is a short name, such as tag = "RS"

error: `kind` is missing in a [[device]]
  --> devices.toml:52:1
   |
52 | [[device]]
   | ^^^^^^^^^^ this table
   |
   = help: a kind is what the device is, such as kind = "closed scupper"

"#]]);
}

#[test]
fn laws_leaders_and_channels() {
    Folder::new()
        .with(
            "roof.toml",
            exchange(
                PROJECT,
                &[
                    ("[search]", "[flow]\nscupper = \"thin plate\"\nroughness = -0.01\nedges = \"weir\"\n\n[search]"),
                    ("edge = \"120 ft\"", "channel = { width = \"3 ft\", length = \"40\", slope = \"1/4 in/ft\" }"),
                ],
            ),
        )
        .with(
            "devices.toml",
            r#"[[device]]
tag = "P"
kind = "pipe scupper"
diameter = ["4 in", "0 in"]
width = "4 in"
place = "interior"
screen = 1.5
leader = { fill = "1/2", serves = 2 }
price = { each = 1 }

[[device]]
tag = "D"
kind = "overflow drain"
diameter = "4 in"
law = "thin-plate"
conductor_head = { outlet = "4 in", depth = "8 in" }
price = { each = 1, per_width = "1 / in" }

[[device]]
tag = "W"
kind = "rated"
place = "edge"
width = ["4 in", "12 in"]
interpolation = "log"
rating = "widths.csv"
price = { each = 1, per_width = "1 / in" }
"#,
        )
        .with("widths.csv", "width_in,head_in,flow_gpm\n6,1,18\n6,2,17\n0,1,5\n8,1,24\n")
        .refuses(str![[r#"
error: `thin plate` is not a value of `scupper`
  --> roof.toml:14:11
   |
14 | scupper = "thin plate"
   |           ^^^^^^^^^^^^ not one of its values
   |
   = help: did you mean "thin-plate"? thin-plate, contracted, kindsvater-carter, throat, short-crest, inlet-control or en-12056 would pass

error: `roughness` must not be negative
  --> roof.toml:15:13
   |
15 | roughness = -0.01
   |             ^^^^^ below zero
   |
   = help: write zero or more

error: unknown key `edges` in [flow]
  --> roof.toml:16:1
   |
16 | edges = "weir"
   | ^^^^^ not a key of this table
   |
   = help: did you mean `edge`? [flow] takes scupper, pipe, drain, edge, transition, roughness or entrance_loss

error: `length`: `40` has no unit; this is a length
  --> roof.toml:35:38
   |
35 | channel = { width = "3 ft", length = "40", slope = "1/4 in/ft" }
   |                                      ^^^^ a length belongs here
   |
   = help: write "40 in"; in, ft, mm, cm, m or yd would pass

error: `slope`: `1/4 in/ft` is not one decimal number with one unit
  --> roof.toml:35:52
   |
35 | channel = { width = "3 ft", length = "40", slope = "1/4 in/ft" }
   |                                                    ^^^^^^^^^^^ a slope belongs here
   |
   = help: write 0.25 for 1/4, 2.5 in for 2 1/2 in, and 30 in for 2 ft 6 in

error: `diameter` must be above zero
 --> devices.toml:4:21
  |
4 | diameter = ["4 in", "0 in"]
  |                     ^^^^^^ not above zero
  |
  = help: write a value above zero

error: `width` does not belong to a device of kind "pipe scupper"
 --> devices.toml:5:9
  |
5 | width = "4 in"
  |         ^^^^^^ it has no such dimension
  |
  = help: take it out

error: a scupper stands in the parapet
 --> devices.toml:6:9
  |
6 | place = "interior"
  |         ^^^^^^^^^^ not inside the roof
  |
  = help: write "edge", or take the key out

error: `screen` must be a part of one
 --> devices.toml:7:10
  |
7 | screen = 1.5
  |          ^^^ above 1
  |
  = help: 0.7 lets seven tenths of the flow pass

error: `diameter` is missing in `leader`
 --> devices.toml:8:10
  |
8 | leader = { fill = "1/2", serves = 2 }
  |          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
  |
  = help: give its inside diameter: leader = { diameter = "4 in" }

error: `1/2` is not a value of `fill`
 --> devices.toml:8:19
  |
8 | leader = { fill = "1/2", serves = 2 }
  |                   ^^^^^ not one of its values
  |
  = help: did you mean "1/3"? 7/24 or 1/3 would pass

error: a leader shared by several devices is not computed
 --> devices.toml:8:35
  |
8 | leader = { fill = "1/2", serves = 2 }
  |                                   ^ shared
  |
  = help: give each device a leader of its own, or rate them together with a table

error: `dam` is missing in a device of kind "overflow drain"
  --> devices.toml:11:1
   |
11 | [[device]]
   | ^^^^^^^^^^ this table
   |
   = help: give the diameter of the ring dam: dam = "10 in"

error: `thin-plate` is not a value of `law`
  --> devices.toml:15:7
   |
15 | law = "thin-plate"
   |       ^^^^^^^^^^^^ not one of its values
   |
   = help: rim-and-throat or en-12056 would pass

error: `overflow_width` is missing in `conductor_head`
  --> devices.toml:16:18
   |
16 | conductor_head = { outlet = "4 in", depth = "8 in" }
   |                  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: conductor_head = { outlet = "4 in", depth = "8 in", lip = "1 in", overflow_width = "12 in" }

error: `lip` is missing in `conductor_head`
  --> devices.toml:16:18
   |
16 | conductor_head = { outlet = "4 in", depth = "8 in" }
   |                  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: conductor_head = { outlet = "4 in", depth = "8 in", lip = "1 in", overflow_width = "12 in" }

error: a device of kind "overflow drain" has no conductor head
  --> devices.toml:16:18
   |
16 | conductor_head = { outlet = "4 in", depth = "8 in" }
   |                  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ it stands inside the roof
   |
   = help: give it a leader, or take the key out

error: `per_width` needs a device with width
  --> devices.toml:17:33
   |
17 | price = { each = 1, per_width = "1 / in" }
   |                                 ^^^^^^^^ this device has none
   |
   = help: price it with `each`

error: `log` is not a value of `interpolation`
  --> devices.toml:24:17
   |
24 | interpolation = "log"
   |                 ^^^^^ not one of its values
   |
   = help: linear or log-log would pass

error: flow falls
 --> widths.csv:3:5
  |
3 | 6,2,17
  |     ^^ 17 after 18
  |
  = help: more head never gives less flow: check this row

error: a width must be above zero
 --> widths.csv:4:1
  |
4 | 0,1,5
  | ^ not above zero
  |
  = help: write a width above zero

"#]]);
    // A width is looked for in a table by width once that is sound.
    let table = "width_in,head_in,flow_gpm\n6,1,18\n8,1,24\n";
    catalog(&[("place = \"interior\"", "place = \"edge\"\nwidth = [\"7 in\", \"12 in\"]")])
        .with("drain.csv", table)
        .refuses(str![[r#"
error: a width lies outside its rating table
  --> devices.toml:12:9
   |
12 | width = ["7 in", "12 in"]
   |         ^^^^^^^^^^^^^^^^^ nothing was measured there
   |
   = help: the table runs from 6 in to 8 in

"#]]);
    ratings(&["width_in,width_mm,head_in,flow_gpm\n6,150,1,18\n"]).refuses(str![[r#"
error: `width_mm` is a second column of widths
 --> 1.csv:1:10
  |
1 | width_in,width_mm,head_in,flow_gpm
  |          ^^^^^^^^ one is wanted
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

"#]]);
}

#[test]
fn a_device_without_a_price() {
    catalog(&[("price = { each = 1650 }\n", "")]).refuses(str![[r#"
error: `OD` has no price, and layouts are ranked by cost
  --> devices.toml:9:7
   |
 9 | tag = "OD"
   |       ^^^^ nothing is free by omission
   |
  ::: roof.toml:14:11
   |
14 | rank_by = ["cost", "load"]
   |           ---------------- ranked by cost here
   |
   = help: give the device a price, or leave "cost" out of `rank_by`: ["count", "load"] would pass

"#]]);
    // A fault of another of its values does not hide it; nor does one of an area.
    Folder::new()
        .with("roof.toml", exchange(PROJECT, &[("rank_by = [\"cost\", \"load\"]\n", ""), ("\"7400 ft2\"", "\"7400\"")]))
        .with("devices.toml", exchange(CATALOG, &[("price = { each = 1650 }\n", ""), ("\"3 in\"", "\"3\"")]))
        .refuses(str![[r#"
error: `area`: `7400` has no unit; this is an area
  --> roof.toml:34:8
   |
34 | area = "7400"
   |        ^^^^^^ an area belongs here
   |
   = help: write "7400 ft2"; ft2, m2, in2, mm2, cm2 or ha would pass

error: `OD` has no price, and layouts are ranked by cost
 --> devices.toml:9:7
  |
9 | tag = "OD"
  |       ^^^^ nothing is free by omission
  |
  = help: give the device a price, or leave "cost" out of `rank_by`: ["count", "load"] would pass

error: `set_height`: `3` has no unit; this is a length
  --> devices.toml:13:23
   |
13 | set_height = ["2 in", "3"]
   |                       ^^^ a length belongs here
   |
   = help: write "3 in"; in, ft, mm, cm, m or yd would pass

"#]]);
    // It needs none where it stands nowhere, or where cost does not count.
    let unpriced = exchange(CATALOG, &[("price = { each = 1650 }\n", "")]);
    let nowhere = PROJECT.replace("[[area]]\n", "[[area]]\nkinds = [\"closed scupper\"]\n");
    let no_cost = exchange(PROJECT, &[("[\"cost\", \"load\"]", "[\"load\"]")]);
    for text in [nowhere, no_cost] {
        let folder = Folder::new().with("roof.toml", text).with("devices.toml", &unpriced);
        folder.brimline(&["size", "roof.toml", "--output", "result"]).code(0).stderr_eq("");
    }
}

#[test]
fn rating_tables_with_rows_at_fault() {
    ratings(&[
        "head_in,flow_gpm\n0,5\n0.5,22\n0.5,30\n0.25,31\n1,20\n",
        "head_mm,flow_l_s\n0,0\n10,1.2\n20,0\n-30,2\n15,-3\n5,9\n0,0\n",
        "# heads above the rim\nhead_m,flow_m3_s\n\n0.01, nan\n0.02 ,inf\n\"0.03\",\"1e-3\"\n0.04,2 l/s\n0.05,\n0.06,1e300\n",
        "flow_gpm,head_in\n22,0.5,\n63\n1,234,2\n",
        "head_in,flow_gpm\n0.5,\"22\n1,63\n0.9,70\n",
    ])
    .refuses(str![[r#"
error: there is flow at zero head
 --> 1.csv:2:3
  |
2 | 0,5
  |   ^ flow without head
  |
  = help: head is above the rim: a row 0, 0 or none at all

error: head does not rise
 --> 1.csv:4:1
  |
4 | 0.5,30
  | ^^^ 0.5 after 0.5
  |
  = help: sort the rows by head, each head once

error: head does not rise
 --> 1.csv:5:1
  |
5 | 0.25,31
  | ^^^^ 0.25 after 0.5
  |
  = help: sort the rows by head, each head once

error: flow falls
 --> 1.csv:6:3
  |
6 | 1,20
  |   ^^ 20 after 31
  |
  = help: more head never gives less flow: check this row

error: there is no flow at a head above zero
 --> 2.csv:4:4
  |
4 | 20,0
  |    ^ nothing flows at 20
  |
  = help: begin the table with the first head that gives a flow

error: a head or a flow is below zero
 --> 2.csv:5:1
  |
5 | -30,2
  | ^^^ below zero
  |
  = help: heads and flows are zero or more

error: a head or a flow is below zero
 --> 2.csv:6:4
  |
6 | 15,-3
  |    ^^ below zero
  |
  = help: heads and flows are zero or more

error: head does not rise
 --> 2.csv:7:1
  |
7 | 5,9
  | ^ 5 after 10
  |
  = help: sort the rows by head, each head once

error: head does not rise
 --> 2.csv:8:1
  |
8 | 0,0
  | ^ 0 after 5
  |
  = help: sort the rows by head, each head once

error: `nan` is not a number
 --> 3.csv:4:7
  |
4 | 0.01, nan
  |       ^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: `inf` is not a number
 --> 3.csv:5:7
  |
5 | 0.02 ,inf
  |       ^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: `2 l/s` is not a number
 --> 3.csv:7:6
  |
7 | 0.04,2 l/s
  |      ^^^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: a cell is empty
 --> 3.csv:8:6
  |
8 | 0.05,
  |      ^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: `1e300` is too great
 --> 3.csv:9:6
  |
9 | 0.06,1e300
  |      ^^^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: this row has 3 cells; the head has 2
 --> 4.csv:2:1
  |
2 | 22,0.5,
  | ^^^^^^^ this row
  |
  = help: a comma parts cells: write decimals with a point, thousands without a comma

error: this row has 1 cell; the head has 2
 --> 4.csv:3:1
  |
3 | 63
  | ^^ this row
  |
  = help: a comma parts cells: write decimals with a point, thousands without a comma

error: this row has 3 cells; the head has 2
 --> 4.csv:4:1
  |
4 | 1,234,2
  | ^^^^^^^ this row
  |
  = help: a comma parts cells: write decimals with a point, thousands without a comma

error: `"22` is not a number
 --> 5.csv:2:5
  |
2 | 0.5,"22
  |     ^^^ a bare number belongs here
  |
  = help: the unit stands in the column's head

error: head does not rise
 --> 5.csv:4:1
  |
4 | 0.9,70
  | ^^^ 0.9 after 1
  |
  = help: sort the rows by head, each head once

"#]]);
}

#[test]
fn rating_tables_that_are_no_tables() {
    ratings(&[
        "",
        "# nothing but a remark\n\n",
        "head_in,flow_gpm\n",
        "head_in,flow_gpm\n0,0\n",
        "head_in;flow_gpm\n0,5;22\n",
        "head_in\tflow_gpm\n0.5\t22\n",
        "0.5,22\n1,63\n",
        "head,flow_gal,\n0.5,22,\n",
        "head_in,note\n0.5,22\n",
        "head_in,flow_gpm,flow_l_s\n0.5,22,x\n-1,22,x\n",
        "flow_gpm\n22\n",
    ])
    .refuses(str![[r#"
error: `1.csv` is empty
 --> 1.csv:1:1
  |
1 |
  | ^ no row stands here
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

error: `2.csv` is empty
 --> 2.csv:1:1
  |
1 | # nothing but a remark
  | ^ no row stands here
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

error: the table has no row with a head above zero
 --> 3.csv:1:1
  |
1 | head_in,flow_gpm
  | ^^^^^^^^^^^^^^^^ nothing but this
  |
  = help: give at least one row with a head and a flow

error: the table has no row with a head above zero
 --> 4.csv:2:1
  |
2 | 0,0
  | ^^^ nothing but this
  |
  = help: give at least one row with a head and a flow

error: the columns are parted by semicolons
 --> 5.csv:1:1
  |
1 | head_in;flow_gpm
  | ^^^^^^^^^^^^^^^^ one column only is seen here
  |
  = help: part columns by commas, and write decimals with a point

error: the columns are parted by tabs
 --> 6.csv:1:1
  |
1 | head_in    flow_gpm
  | ^^^^^^^^^^^^^^^^^^^ one column only is seen here
  |
  = help: part columns by commas, and write decimals with a point

error: the columns have no names
 --> 7.csv:1:1
  |
1 | 0.5,22
  | ^^^^^^ the first row is one of numbers
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

error: unknown column `head`
 --> 8.csv:1:1
  |
1 | head,flow_gal,
  | ^^^^ not a column of a rating
  |
  = help: a column's head has the unit: head_in, head_mm, head_m, flow_gpm, flow_l_s, flow_m3_s, width_in, width_mm or width_m would pass

error: unknown column `flow_gal`
 --> 8.csv:1:6
  |
1 | head,flow_gal,
  |      ^^^^^^^^ not a column of a rating
  |
  = help: did you mean `flow_gpm`? head_in, head_mm, head_m, flow_gpm, flow_l_s, flow_m3_s, width_in, width_mm or width_m would pass

error: a column has no name
 --> 8.csv:1:15
  |
1 | head,flow_gal,
  |               ^ not a column of a rating
  |
  = help: head_in, head_mm, head_m, flow_gpm, flow_l_s, flow_m3_s, width_in, width_mm or width_m would pass

error: unknown column `note`
 --> 9.csv:1:9
  |
1 | head_in,note
  |         ^^^^ not a column of a rating
  |
  = help: head_in, head_mm, head_m, flow_gpm, flow_l_s, flow_m3_s, width_in, width_mm or width_m would pass

error: `flow_l_s` is a second column of flows
 --> 10.csv:1:18
  |
1 | head_in,flow_gpm,flow_l_s
  |                  ^^^^^^^^ one is wanted
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

error: a head or a flow is below zero
 --> 10.csv:3:1
  |
3 | -1,22,x
  | ^^ below zero
  |
  = help: heads and flows are zero or more

error: the table has no column of heads
 --> 11.csv:1:1
  |
1 | flow_gpm
  | ^^^^^^^^ these columns are given
  |
  = help: a table has one column of heads and one of flows, such as `head_in,flow_gpm`

"#]]);
}

#[test]
fn a_slip_of_form_is_one_message_and_hides_no_other() {
    project(&[
        ("units = \"us\"", "units = us"),
        ("duration = \"15 min\"", "duration \"15 min\""),
        ("keep = 5", "keep = \"many"),
        ("blocked = 1", "blocked 1"),
        ("\"9600 ft2\"", "9600 ft2"),
        ("\"1800 ft2\"", "\"1800\""),
    ])
    .refuses(str![[r#"
error: `us` stands without quotes
 --> roof.toml:2:9
  |
2 | units = us
  |         ^^
  |
  = help: only numbers, true and false stand without: write "6 in", not 6 in

error: this is not TOML: key with no value, expected `=`
 --> roof.toml:7:10
  |
7 | duration "15 min"
  |          ^
  |
  = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

error: this is not TOML: invalid basic string, expected `"`
  --> roof.toml:15:13
   |
15 | keep = "many
   |             ^
   |
   = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

error: this is not TOML: key with no value, expected `=`
  --> roof.toml:24:9
   |
24 | blocked 1
   |         ^
   |
   = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

error: `9600 ft2` stands without quotes
  --> roof.toml:28:8
   |
28 | area = 9600 ft2
   |        ^^^^^^^^
   |
   = help: only numbers, true and false stand without: write "6 in", not 6 in

error: `wall`: `1800` has no unit; this is an area
  --> roof.toml:29:8
   |
29 | wall = "1800"
   |        ^^^^^^ an area belongs here
   |
   = help: write "1800 ft2"; ft2, m2, in2, mm2, cm2 or ha would pass

"#]]);
}

#[test]
fn a_head_that_is_not_closed_brings_no_messages_about_what_follows() {
    project(&[("[storm]", "[storm")]).refuses(str![[r#"
error: this is not TOML: unclosed table, expected `]`
 --> roof.toml:5:7
  |
5 | [storm
  |       ^
  |
  = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

"#]]);
    project(&[("[[area]]\nname = \"south bay\"", "[[area]\nname = \"south bay\"")]).refuses(str![[r#"
error: this is not TOML: unclosed array table, expected `]`
  --> roof.toml:33:8
   |
33 | [[area]
   |        ^
   |
   = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

"#]]);
    Folder::new()
        .with("roof.toml", exchange(PROJECT, &[("edge = \"120 ft\"", "kinds = [\"closed scupper\"]")]))
        .with("devices.toml", exchange(CATALOG, &[("[[device]]", "[[device]")]))
        .refuses(str![[r#"
error: this is not TOML: unclosed array table, expected `]`
 --> devices.toml:1:10
  |
1 | [[device]
  |          ^
  |
  = help: a line is `key = value`; a quantity stands in quotes, such as "6 in"

"#]]);
}

#[test]
fn keys_and_tables_that_stand_twice() {
    project(&[
        ("units = \"us\"", "units = \"us\"\nunits = \"si\""),
        ("[search]", "[limit]\nload = \"20 psf\"\n\n[search]"),
        ("share = 0.25", "share = 0.25, share = 0.5"),
        ("\"9600 ft2\"", "\"9600\""),
    ])
    .refuses(str![[r#"
error: `units` stands twice in one table
 --> roof.toml:3:1
  |
3 | units = "si"
  | ^^^^^
  |
  = help: give each key and each table once

error: `limit` stands twice in one table
  --> roof.toml:14:2
   |
14 | [limit]
   |  ^^^^^
   |
   = help: give each key and each table once

error: `area`: `9600` has no unit; this is an area
  --> roof.toml:32:8
   |
32 | area = "9600"
   |        ^^^^^^ an area belongs here
   |
   = help: write "9600 ft2"; ft2, m2, in2, mm2, cm2 or ha would pass

error: `share` stands twice in one table
  --> roof.toml:40:49
   |
40 | receives = [{ from = "north bay", share = 0.25, share = 0.5 }]
   |                                                 ^^^^^
   |
   = help: give each key and each table once

"#]]);
}

/// A small generator of its own, so that a failing seed can be run again anywhere.
struct Dice(u64);

impl Dice {
    fn below(&mut self, end: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0.wrapping_mul(0x2545_f491_4f6c_dd1d) >> 33) as usize % end.max(1)
    }

    /// A text with one to three slips in it: a byte or a line lost, exchanged, doubled or moved.
    fn spoil(&mut self, text: &str) -> Vec<u8> {
        const PUT: &[u8] = b"\"'[]{}=,.;#-+_0123456789aeinf \t\r\n\\\x00\x7f\xc3\xbc\xff";
        let mut bytes = text.as_bytes().to_vec();
        for _ in 0..=self.below(3) {
            let at = self.below(bytes.len());
            let lines: Vec<Vec<u8>> = bytes.split_inclusive(|&byte| byte == b'\n').map(<[u8]>::to_vec).collect();
            let (here, there) = (self.below(lines.len()), self.below(lines.len()));
            let byte = PUT[self.below(PUT.len())];
            let end = (at + self.below(12)).min(bytes.len());
            let mut moved = lines;
            match self.below(8) {
                0 => drop(bytes.drain(at..end)),
                1 => bytes[at] = byte,
                2 => bytes.insert(at, byte),
                3 => bytes.splice(at..at, bytes[at..end].to_vec()).for_each(drop),
                4 => bytes.truncate(at.max(1)),
                5 => {
                    moved.remove(here);
                    bytes = moved.concat();
                }
                6 => {
                    moved.insert(there, moved[here].clone());
                    bytes = moved.concat();
                }
                _ => {
                    moved.swap(here, there);
                    bytes = moved.concat();
                }
            }
            if bytes.is_empty() {
                bytes.push(b'\n');
            }
        }
        bytes
    }
}

/// What the example leaves out: other kinds, laws, what follows a device, a channel, a table by width.
const MORE: &str = r#"
[[device]]
tag = "PS"
kind = "pipe scupper"
diameter = ["4 in", "6 in"]
screen = 0.8
leader = { diameter = "4 in", fill = "1/3" }
price = { each = 200 }

[[device]]
tag = "RD"
kind = "overflow drain"
diameter = "4 in"
dam = "10 in"
dam_height = "2 in"
free_area = "60 in2"
price = { each = 900 }

[[device]]
tag = "W"
kind = "rated"
place = "edge"
width = ["6 in", "9 in"]
interpolation = "log-log"
rating = "more.csv"
price = { each = 90, per_width = "1 / in" }
"#;

const USING_MORE: &str = r#"
[[area]]
name = "valley"
area = "900 ft2"
kinds = ["pipe scupper", "overflow drain"]
channel = { width = "3 ft", length = "40 ft", slope = "0 in/ft" }

[flow]
scupper = "thin-plate"
roughness = 0.012
"#;

/// 2,000 spoilt files, each read with the sound ones beside it: reading never panics, and what is refused says why.
#[test]
fn spoilt_files_are_read_or_refused_and_nothing_else() {
    let example = |name: &str| {
        fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join(name)).expect("an example can be read")
    };
    let sound = [
        (
            "roof.toml",
            format!(
                "{}{USING_MORE}",
                example("examples/harbour-depot.toml")
                    .replace("../catalogs/", "")
                    .replace("catalogs = [", "catalogs = [\"more.toml\", ")
            ),
        ),
        ("through-wall-scuppers.toml", example("catalogs/through-wall-scuppers.toml")),
        ("overflow-drains.toml", example("catalogs/overflow-drains.toml").replace("ratings/", "")),
        ("overflow-drain-4in.csv", example("catalogs/ratings/overflow-drain-4in.csv")),
        ("overflow-drain-6in.csv", example("catalogs/ratings/overflow-drain-6in.csv")),
        ("more.toml", MORE.to_string()),
        ("more.csv", "width_in,head_in,flow_gpm\n6,1,18\n6,2,50\n12,1,36\n12,2,100\n".to_string()),
    ];
    let folder = sound.iter().fold(Folder::new(), |folder, (name, text)| folder.with(name, text));
    let roof = folder.0.join("roof.toml");
    assert!(input::read(&roof).is_ok(), "the files are sound before they are spoilt");
    let (mut refused, mut used) = (0, 0);
    for seed in 1..=2000_u64 {
        // Most slips are made in the project: it says most.
        let (name, text) = &sound[[0, 0, 0, 1, 2, 3, 5, 6][seed as usize % 8]];
        let path = folder.0.join(name);
        fs::write(&path, Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15)).spoil(text)).expect("a file can be written");
        match input::read(&roof) {
            Ok(project) => {
                used += 1;
                assert!(project.warnings.0.iter().all(|fault| fault.severity == Severity::Warning), "seed {seed}");
            }
            Err(faults) => {
                refused += 1;
                assert!(faults.0.iter().any(|fault| fault.severity == Severity::Error), "seed {seed}: nothing is told");
                for styled in [false, true] {
                    assert!(faults.render(styled).contains("error"), "seed {seed}");
                }
            }
        }
        fs::write(&path, text).expect("a file can be written");
    }
    assert!(refused > 1000 && used > 100, "{refused} refused, {used} used: the slips are too coarse or too fine");
}

const MADE: (&str, &str) =
    ("{ from = \"6 in\", to = \"24 in\", step = \"6 in\" }", "{ from = \"6 in\", to = \"24 in\" }");

#[test]
fn a_range_without_a_step_is_for_widths_that_are_made() {
    let devices = "[[device]]\ntag = \"A\"\nkind = \"open scupper\"\nwidth = { to = \"24 in\" }\nprice = { each = 1 }\n\
                   [[device]]\ntag = \"B\"\nkind = \"roof edge\"\nwidth = { from = \"24 in\", to = \"6 in\" }\nprice = { each = 1 }\n\
                   [[device]]\ntag = \"C\"\nkind = \"closed scupper\"\nwidth = { from = \"6 in\", to = \"24 in\", step = \"0 in\" }\n\
                   height = { from = \"4 in\", to = \"6 in\" }\nprice = { each = 1 }\n\
                   [[device]]\ntag = \"D\"\nkind = \"rated\"\nplace = \"edge\"\nrating = \"drain.csv\"\nwidth = { from = \"6 in\", to = \"24 in\" }\n\
                   price = { each = 1 }\n\
                   [[device]]\ntag = \"E\"\nkind = \"overflow drain\"\ndam = \"10 in\"\ndiameter = { from = \"4 in\", to = \"6 in\" }\nprice = { each = 1 }\n\
                   [[device]]\ntag = \"F\"\nkind = \"open scupper\"\nwidth = { from = \"1 in\", to = \"1100000 in\" }\nprice = { each = 1 }\n";
    Folder::new().with("devices.toml", devices).refuses(str![[r#"
error: `from` is missing in a range
 --> devices.toml:4:9
  |
4 | width = { to = "24 in" }
  |         ^^^^^^^^^^^^^^^^ this table
  |
  = help: write both ends: { from = "6 in", to = "48 in" }, with a step or without

error: `from` stands above `to` in `width`
 --> devices.toml:9:18
  |
9 | width = { from = "24 in", to = "6 in" }
  |                  ^^^^^^^ this is the greater
  |
  = help: give the lesser value as `from`

error: `step` must be above zero
  --> devices.toml:14:47
   |
14 | width = { from = "6 in", to = "24 in", step = "0 in" }
   |                                               ^^^^^^ not above zero
   |
   = help: write a value above zero

error: `step` is missing in a range
  --> devices.toml:15:10
   |
15 | height = { from = "4 in", to = "6 in" }
   |          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: only widths of open scuppers, closed scuppers and roof edges are made to measure

error: `step` is missing in a range
  --> devices.toml:22:9
   |
22 | width = { from = "6 in", to = "24 in" }
   |         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: only widths of open scuppers, closed scuppers and roof edges are made to measure

error: `step` is missing in a range
  --> devices.toml:28:12
   |
28 | diameter = { from = "4 in", to = "6 in" }
   |            ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ this table
   |
   = help: write from, to and step: only widths of open scuppers, closed scuppers and roof edges are made to measure

error: `width` makes 1100000 values; up to 1000000 would pass
  --> devices.toml:33:9
   |
33 | width = { from = "1 in", to = "1100000 in" }
   |         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ too fine, or too wide
   |
   = help: give a coarser step or a narrower range

"#]]);
}

#[test]
fn what_rounds_made_widths_is_a_length_above_zero() {
    Folder::new()
        .with("roof.toml", exchange(PROJECT, &[("keep = 5", "made_to_measure = 1\nround = \"0 in\"")]))
        .refuses(str![[r#"
error: `made_to_measure` must be true or false
  --> roof.toml:15:19
   |
15 | made_to_measure = 1
   |                   ^ a bare number stands here
   |
   = help: write true or false

error: `round` must be above zero
  --> roof.toml:16:9
   |
16 | round = "0 in"
   |         ^^^^^^ not above zero
   |
   = help: write a value above zero

"#]]);
    Folder::new()
        .with("roof.toml", exchange(PROJECT, &[("keep = 5", "made_to_measure = \"yes\"\nround = 0.25")]))
        .refuses(str![[r#"
error: `made_to_measure` must be true or false
  --> roof.toml:15:19
   |
15 | made_to_measure = "yes"
   |                   ^^^^^ a text stands here
   |
   = help: write true or false

error: `round`: `0.25` has no unit; this is a length
  --> roof.toml:16:9
   |
16 | round = 0.25
   |         ^^^^ a length belongs here
   |
   = help: write "0.25 in"; in, ft, mm, cm, m or yd would pass

"#]]);
}

#[test]
fn made_to_measure_needs_a_range_of_widths() {
    project(&[("keep = 5", "made_to_measure = true")])
        .with("devices.toml", exchange(CATALOG, &[(MADE.0, "[\"6 in\", \"12 in\"]")]))
        .refuses(str![[r#"
error: nothing in the catalogs can be made to measure
  --> roof.toml:15:19
   |
15 | made_to_measure = true
   |                   ^^^^ no device has a range of widths
   |
   = help: give an open scupper, a closed scupper or a roof edge a range: width = { from = "6 in", to = "48 in" }

"#]]);
    // A catalog at fault may have one.
    project(&[("keep = 5", "made_to_measure = true")])
        .with("devices.toml", exchange(CATALOG, &[(MADE.0, "[\"6 in\", \"12 in\"]"), ("closed scupper", "closed")]))
        .refuses(str![[r#"
error: `closed` is not a value of `kind`
 --> devices.toml:3:8
  |
3 | kind = "closed"
  |        ^^^^^^^^ not one of its values
  |
  = help: open scupper, closed scupper, pipe scupper, overflow drain, standpipe, roof edge or rated would pass

"#]]);
}

#[test]
fn a_rounding_of_nothing_is_warned_of() {
    let warned = project(&[("keep = 5", "round = \"1 in\"")]);
    warned.brimline(&["size", "roof.toml"]).code(0).stderr_eq(str![[r#"
warning: nothing is made to measure: `round` rounds no width
  --> roof.toml:15:9
   |
15 | round = "1 in"
   |         ^^^^^^ not heeded
   |
   = help: write made_to_measure = true, or leave the step out of a range of widths


"#]]);
    project(&[("keep = 5", "round = \"1 in\"\nmade_to_measure = true")])
        .brimline(&["size", "roof.toml"])
        .code(0)
        .stderr_eq("");
    project(&[("keep = 5", "round = \"1 in\"")])
        .with("devices.toml", exchange(CATALOG, &[MADE]))
        .brimline(&["size", "roof.toml"])
        .code(0)
        .stderr_eq("");
}
