//! Laws, followers, channels and the commands about devices, through the whole program.

use std::fs;
use std::path::PathBuf;
use std::process::{Command, Output};

use serde_json::Value;

/// A folder of its own for a test, with a catalog and a project.
struct Folder(PathBuf);

impl Folder {
    fn new(name: &str) -> Self {
        let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("target").join("flow-choice").join(name);
        fs::create_dir_all(&folder).expect("a folder can be made");
        Self(folder)
    }

    fn with(self, name: &str, text: &str) -> Self {
        fs::write(self.0.join(name), text).expect("a file can be written");
        self
    }

    fn run(&self, arguments: &[&str]) -> Output {
        let mut command = Command::new(snapbox::cmd::cargo_bin!("brimline"));
        command.args(arguments).current_dir(&self.0).env("NO_COLOR", "1").output().expect("the program starts")
    }

    fn json(&self, arguments: &[&str]) -> Value {
        let output = self.run(arguments);
        serde_json::from_slice(&output.stdout).unwrap_or_else(|_| panic!("{}", String::from_utf8_lossy(&output.stderr)))
    }

    fn refused(&self, arguments: &[&str]) -> String {
        let output = self.run(arguments);
        assert_eq!(output.status.code(), Some(2), "{}", String::from_utf8_lossy(&output.stdout));
        assert!(output.stdout.is_empty());
        String::from_utf8(output.stderr).expect("UTF-8")
    }
}

/// One area of 3000 ft2 at 4 in/h: 124.7 gpm, under 30 psf.
fn project(catalog: &str, more: &str, area: &str) -> String {
    format!(
        "title = \"Flow\"\nunits = \"us\"\ncatalogs = [\"{catalog}\"]\n[storm]\nintensity = \"4 in/h\"\n[limit]\nload = \"30 psf\"\n\
         {more}\n[search]\nrank_by = [\"count\", \"load\"]\nset_height = \"2 in\"\ncount = {{ from = 1, to = 4 }}\n\
         [[area]]\nname = \"roof\"\narea = \"3000 ft2\"\n{area}\n"
    )
}

const ONE_SCUPPER: &str = "[[device]]\ntag = \"S\"\nkind = \"closed scupper\"\nwidth = \"12 in\"\nheight = \"6 in\"\n";

fn first(document: &Value) -> &Value {
    &document["areas"][0]["layouts"][0]
}

fn depth_inches(layout: &Value) -> f64 {
    layout["cases"][0]["water_depth_m"].as_f64().expect("a depth") / 0.0254
}

/// 124.675 gpm through 12 in: (124.675 / 34.8)^(2/3) = 2.3414 in over a sill at 2 in by the thin plate; more by every law of a
/// thick wall. By hand, and by the coefficients of the laws: 1.318 m^0.5/s of EN 12056-3 against 1.7794: 2.3414 * 1.2217.
#[test]
fn the_project_the_device_and_the_default_choose_the_law() {
    let wall = "parapet = { thickness = \"10 in\" }";
    let depth = |name: &str, flow: &str, device: &str| {
        let folder = Folder::new(name)
            .with("c.toml", &format!("{ONE_SCUPPER}{device}"))
            .with("p.toml", &project("c.toml", flow, wall));
        let document = folder.json(&["size", "p.toml", "--format", "json"]);
        (depth_inches(first(&document)), first(&document)["groups"][0]["law"].as_str().expect("a law").to_string())
    };
    let (thin, law) = depth("default", "", "");
    assert_eq!(law, "thin-plate");
    assert!((thin - 4.3414).abs() < 2e-3, "{thin}");
    let (en, law) = depth("project", "[flow]\nscupper = \"en-12056\"", "");
    assert_eq!(law, "en-12056");
    assert!((en - 2.0 - 2.3414 * 1.2217).abs() < 5e-3, "{en}");
    let (own, law) = depth("device", "[flow]\nscupper = \"en-12056\"", "law = \"short-crest\"\n");
    assert_eq!(law, "short-crest");
    assert!(own > thin && own < en, "{own}");
}

#[test]
fn a_known_thickness_brings_the_thick_wall_beside_and_a_warning() {
    let folder = Folder::new("thick")
        .with("c.toml", ONE_SCUPPER)
        .with("p.toml", &project("c.toml", "", "limit = { depth = \"4.5 in\" }\nparapet = { thickness = \"10 in\" }"));
    let text = String::from_utf8(folder.run(&["size", "p.toml", "--keep", "1"]).stdout).expect("UTF-8");
    let line = "- 1: under `throat` (10 in parapet) the level is 4.76 in, over the 4.50 in limit; under `short-crest` ";
    assert!(text.contains(line), "{text}");
    let document = folder.json(&["size", "p.toml", "--laws", "--format", "json"]);
    let others = first(&document)["under_other_laws"].as_array().expect("laws");
    let laws: Vec<_> = others.iter().map(|other| other["law"].as_str().expect("a law")).collect();
    assert_eq!(
        laws,
        ["thin-plate", "contracted", "kindsvater-carter", "throat", "short-crest", "inlet-control", "en-12056"]
    );
    assert_eq!(others[0]["breaks_in"], Value::Null);
    assert_eq!(others[3]["breaks_in"], "as designed");
}

#[test]
fn several_laws_at_once_are_cases_that_hold() {
    let folder = Folder::new("laws").with("c.toml", ONE_SCUPPER).with(
        "p.toml",
        &project("c.toml", "", "parapet = { thickness = \"10 in\" }")
            .replace("[search]", "[search]\nlaws = [\"thin-plate\", \"throat\"]"),
    );
    let document = folder.json(&["size", "p.toml", "--format", "json"]);
    let cases = first(&document)["cases"].as_array().expect("cases");
    let names: Vec<_> = cases.iter().map(|case| case["name"].as_str().expect("a name")).collect();
    assert_eq!(names, ["as designed (thin-plate)", "as designed (throat)"]);
    let depth = |case: usize| cases[case]["water_depth_m"].as_f64().expect("a depth");
    assert!(depth(1) > depth(0) * 1.05);
    assert_eq!(first(&document)["governing"]["case"], "as designed (throat)");
}

#[test]
fn a_law_that_needs_the_wall_says_so_where_the_wall_is_missing() {
    let folder = Folder::new("no-wall")
        .with("c.toml", ONE_SCUPPER)
        .with("p.toml", &project("c.toml", "[flow]\nscupper = \"throat\"", ""));
    let message = folder.refused(&["size", "p.toml"]);
    assert!(message.contains("the law `throat` needs the thickness of the parapet of `roof`"), "{message}");
    assert!(message.contains("p.toml:14:1"), "{message}");
}

#[test]
fn inlet_control_is_refused_to_an_opening_without_a_top() {
    let catalog = "[[device]]\ntag = \"N\"\nkind = \"open scupper\"\nwidth = \"12 in\"\n";
    let folder = Folder::new("no-top")
        .with("c.toml", catalog)
        .with("p.toml", &project("c.toml", "[flow]\nscupper = \"inlet-control\"", ""));
    let message = folder.refused(&["size", "p.toml"]);
    assert!(message.contains("`N` is an open scupper: it has no law `inlet-control`"), "{message}");
}

/// A 3 in leader filled 7/24 carries 66.8 gpm: two devices are needed for 124.7 gpm, and the leader governs a 12 in scupper
/// from (66.76 / 34.8)^(2/3) = 1.544 in on. By hand; 67 gpm in the plumbing code's table.
#[test]
fn a_leader_caps_what_it_follows_and_says_from_where() {
    let folder = Folder::new("leader")
        .with("c.toml", &format!("{ONE_SCUPPER}leader = {{ diameter = \"3 in\", fill = \"7/24\" }}\n"))
        .with("p.toml", &project("c.toml", "", ""));
    let output = folder.run(&["size", "p.toml"]);
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("2 of S 12 x 6 in at 2 in"), "{text}");
    assert!(text.contains("S 12 x 6 in: the leader governs above 1.54 in of head."), "{text}");
    let shared = folder
        .with("c.toml", &format!("{ONE_SCUPPER}leader = {{ diameter = \"3 in\", fill = \"1/3\", serves = 2 }}\n"));
    assert!(shared.refused(&["size", "p.toml"]).contains("a leader shared by several devices is not computed"));
}

/// Outlet 3 in, 6 in under a lip 0.5 in under the sill, overflow 4 in wide: with water at the sill 0.6 * 7.069 in2 *
/// sqrt(2 * 386.09 * 6.5) = 300.5 in3/s = 78.05 gpm, and 2.9 * 4 * 0.5^1.5 = 4.10 gpm; 82.15 in all: two of them, each credited
/// with half of 124.7. One by itself could not: its scupper would pass more and back up. By hand.
#[test]
fn a_conductor_head_is_credited_with_water_at_the_sill_only() {
    let head =
        "conductor_head = { outlet = \"3 in\", depth = \"6 in\", lip = \"0.5 in\", overflow_width = \"4 in\" }\n";
    let folder = Folder::new("conductor-head")
        .with("c.toml", &format!("{ONE_SCUPPER}{head}"))
        .with("p.toml", &project("c.toml", "[[case]]\nname = \"more\"\nrain = 1.31", ""));
    let document = folder.json(&["size", "p.toml", "--format", "json"]);
    let group = &first(&document)["cases"][0]["groups"][0];
    // 1.31 * 124.675 / 2 = 81.66 gpm each, just under what the head carries.
    assert_eq!(first(&document)["groups"][0]["count"], 2);
    assert_eq!(group["regime"], "weir");
    assert_eq!(group["backs_up_above_sill_m"], Value::Null);
    let folder = folder.with("p.toml", &project("c.toml", "[[case]]\nname = \"more\"\nrain = 1.32", ""));
    let document = folder.json(&["size", "p.toml", "--format", "json"]);
    assert_eq!(
        first(&document)["groups"][0]["count"],
        3,
        "1.32 * 124.675 / 2 = 82.29 gpm is more than the head carries"
    );
}

#[test]
fn a_screen_takes_its_part() {
    let folder = Folder::new("screen")
        .with("c.toml", &format!("{ONE_SCUPPER}screen = 0.7\n"))
        .with("p.toml", &project("c.toml", "", ""));
    let document = folder.json(&["size", "p.toml", "--format", "json"]);
    // (124.675 / (34.8 * 0.7))^(2/3) = 2.9699 in over the sill. By hand.
    assert!((depth_inches(first(&document)) - 4.9699).abs() < 2e-3, "{}", depth_inches(first(&document)));
}

/// A level channel 1 ft wide and 40 ft long: critical depth of 124.7 gpm is ((0.27778 / 1)^2 / 32.174)^(1/3) = 0.1338 ft =
/// 1.606 in, the far end with a free outlet at least sqrt(3) of it, 2.78 in; above a pond of 4.34 in
/// sqrt(4.34^2 + 2 * 1.606^3 / 4.34) = 4.56 in without friction. By hand.
#[test]
fn a_channel_stands_deeper_at_its_far_end_and_the_limit_holds_there() {
    let channel = "channel = { width = \"1 ft\", length = \"40 ft\", slope = \"0 in/ft\", roughness = 0.011 }";
    let folder = Folder::new("channel").with("c.toml", ONE_SCUPPER).with("p.toml", &project("c.toml", "", channel));
    let document = folder.json(&["size", "p.toml", "--format", "json"]);
    let case = &first(&document)["cases"][0];
    let inches = |key: &str| case[key].as_f64().expect("a length") / 0.0254;
    assert!((inches("water_depth_m") - 4.3414).abs() < 2e-3);
    assert!(inches("far_end_level_m") > 4.55 && inches("far_end_level_m") < 4.75, "{}", inches("far_end_level_m"));
    assert_eq!(case["far_end_level_m"], case["deepest_m"], "a level channel is deepest at its far end");
    let load = case["load_pa"].as_f64().expect("a load");
    assert!((load / 9802.3 / 0.0254 - inches("deepest_m")).abs() < 1e-3);
}

#[test]
fn a_channel_in_which_water_runs_too_fast_is_refused_with_its_numbers() {
    let channel = "channel = { width = \"1 ft\", length = \"40 ft\", slope = \"1 in/ft\" }";
    let folder = Folder::new("steep").with("c.toml", ONE_SCUPPER).with("p.toml", &project("c.toml", "", channel));
    let message = folder.refused(&["size", "p.toml"]);
    assert!(message.contains("the channel of `roof` turns supercritical under 0.0079 m3/s"), "{message}");
}

/// The published table as a catalog: its rows are met, and between its widths it is read on a straight line.
/// Source: ASCE 7-16 commentary, Table C8.3-3, from memory: 12 in, 3 in of head, 180 gpm; 24 in 360; so 18 in 270.
#[test]
fn the_published_table_can_be_chosen_instead_of_a_law() {
    let folder = Folder::new("table");
    let catalog = format!("{}/catalogs/published-scupper-table.toml", env!("CARGO_MANIFEST_DIR"));
    let flow = |width: &str, head: &str| {
        let arguments =
            ["rate", "--device", "TC", "--catalog", &catalog, "--width", width, "--head", head, "--format", "json"];
        let document = folder.json(&arguments);
        document["laws"][0]["rows"][0]["flow_m3_s"].as_f64().expect("a flow") / 6.309_02e-5
    };
    assert!((flow("12 in", "3 in") - 180.0).abs() < 1e-3);
    assert!((flow("24 in", "8 in") - 1572.0).abs() < 1e-2);
    assert!((flow("16 in", "3 in") - 240.0).abs() < 1e-3, "a third of the way from 180 to 360");
    let wide = Folder::new("too-wide").with("r.csv", "width_in,head_in,flow_gpm\n6,1,18\n6,2,50\n12,1,36\n12,2,100\n").with(
        "c.toml",
        "[[device]]\ntag = \"T\"\nkind = \"rated\"\nplace = \"edge\"\nrating = \"r.csv\"\nwidth = [\"9 in\", \"14 in\"]\n",
    );
    let message = wide.refused(&["catalog", "c.toml"]);
    assert!(message.contains("a width lies outside its rating table"), "{message}");
}

/// The table of heads for 180 gpm that the README shows, from one law to the next: thin plates first, thick walls behind.
#[test]
fn rate_orders_the_laws_by_the_head_they_ask() {
    let folder = Folder::new("rate");
    let arguments = ["rate", "closed-scupper", "--width", "12 in", "--height", "6 in", "--thickness", "12 in"];
    let document = folder.json(&[&arguments[..], &["--law", "all", "--flow", "180 gpm", "--format", "json"]].concat());
    assert_eq!(document["format"], "brimline rate 1");
    let head = |law: &str| {
        let laws = document["laws"].as_array().expect("laws");
        let found = laws.iter().find(|found| found["law"] == law).expect("the law");
        found["rows"][0]["head_m"].as_f64().expect("a head") / 0.0254
    };
    // Heads in inches of each law, solved by a separate program.
    for (law, wanted) in [
        ("thin-plate", 2.991),
        ("contracted", 3.029),
        ("short-crest", 3.434),
        ("inlet-control", 3.480),
        ("throat", 3.523),
        ("en-12056", 3.654),
    ] {
        assert!((head(law) - wanted).abs() < 0.011, "{law}: {}", head(law));
    }
}

#[test]
fn rate_refuses_what_it_cannot_use() {
    let folder = Folder::new("rate-refused");
    for (arguments, wanted) in [
        (&["rate", "closed-scuper", "--width", "6 in"][..], "did you mean closed-scupper?"),
        (&["rate", "closed-scupper", "--width", "6 in"], "needs --height"),
        (&["rate", "open-scupper", "--width", "6"], "`6` has no unit"),
        (&["rate", "open-scupper", "--width", "6 in", "--law", "throat"], "needs the thickness of the wall"),
        (&["rate", "open-scupper", "--width", "6 in", "--law", "throaty"], "did you mean `throat`?"),
        (&["rate", "open-scupper", "--width", "6 in", "--head", "3 in..1 in..1 in"], "neither a head above zero"),
        (&["rate"], "a KIND or --device with --catalog is needed"),
    ] {
        let message = folder.refused(arguments);
        assert!(message.contains(wanted), "{arguments:?}: {message}");
    }
}

#[test]
fn catalog_lists_every_device_and_every_fault() {
    let folder = Folder::new("catalog").with(
        "c.toml",
        "[[device]]\ntag = \"A\"\nkind = \"pipe scupper\"\nwidth = \"6 in\"\n[[device]]\ntag = \"B\"\nkind = \"standpipe\"\n\
         diameter = \"4 in\"\nplace = \"edge\"\nscreen = 1.5\n",
    );
    let message = folder.refused(&["catalog", "c.toml"]);
    for wanted in [
        "`width` does not belong to a device of kind \"pipe scupper\"",
        "`diameter` is missing in a device of kind \"pipe scupper\"",
        "a standpipe stands inside the roof",
        "`screen` must be a part of one",
    ] {
        assert!(message.contains(wanted), "{wanted}: {message}");
    }
    let shipped = format!("{}/catalogs/sleeves-drains-and-edges.toml", env!("CARGO_MANIFEST_DIR"));
    let document = folder.json(&["catalog", &shipped, "--format", "json"]);
    assert_eq!(document["sizes"].as_array().map(Vec::len), Some(5 + 2 + 3 + 3 + 3 + 2));
}

/// What is before and behind a device is in its listing. The leader by hand: 27.8 (7/24)^(5/3) 6^(8/3) = 424 gal/min.
#[test]
fn a_catalog_tells_what_is_before_and_behind_its_devices() {
    let shipped = format!("{}/catalogs/sleeves-drains-and-edges.toml", env!("CARGO_MANIFEST_DIR"));
    let folder = Folder::new("fittings");
    let listing = String::from_utf8(folder.run(&["catalog", &shipped]).stdout).expect("UTF-8");
    for line in [
        "- RD: a ring dam of 10 in, 2 in above the throat, under a dome of 60 in2 free.",
        "- RD: a leader of 6 in, 7/24 full, carries 424 gpm.",
        "- CH: a conductor head, its outlet of 5 in 10 in below its lip, the lip 1 in below the sill, its overflow 16 in wide.",
        "- GS: behind a guard that lets 0.7 of the flow pass.",
    ] {
        assert!(listing.contains(line), "{line}\n{listing}");
    }
    let document = folder.json(&["catalog", &shipped, "--format", "json"]);
    let sizes = document["sizes"].as_array().expect("sizes");
    let drain = sizes.iter().find(|size| size["device"] == "RD").expect("a drain");
    approx::assert_relative_eq!(drain["leader_m3_s"].as_f64().expect("a flow"), 424.0 * 6.309e-5, max_relative = 1e-3);
    assert_eq!(drain["leader_fill"], "7/24");
}
