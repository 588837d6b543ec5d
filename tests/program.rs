//! The whole program: examples and README as they stand, formats, exit codes, and the same bytes each time.

use approx::assert_relative_eq;
use std::path::Path;
use std::process::{Command, Output};

fn brimline(arguments: &[&str]) -> Output {
    let binary = snapbox::cmd::cargo_bin!("brimline");
    let mut command = Command::new(binary);
    command.args(arguments).current_dir(env!("CARGO_MANIFEST_DIR")).env("NO_COLOR", "1");
    command.output().expect("the program starts")
}

fn stdout(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).expect("UTF-8")
}

fn json(example: &str, more: &[&str]) -> serde_json::Value {
    let path = format!("examples/{example}.toml");
    let output = brimline(&[&["size", &path, "--format", "json"], more].concat());
    serde_json::from_slice(&output.stdout).expect("JSON")
}

fn examples() -> Vec<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples");
    let entries = std::fs::read_dir(folder).expect("examples");
    let mut names: Vec<String> = entries
        .map(|entry| entry.expect("an entry").path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "toml"))
        .map(|path| path.file_stem().expect("a name").to_string_lossy().into_owned())
        .collect();
    // Rule sets that stand beside the examples are no projects.
    names.retain(|name| !name.ends_with("-rules"));
    names.sort();
    names
}

#[test]
fn every_example_says_what_it_shows_and_runs() {
    let names = examples();
    assert!(names.len() >= 4, "{names:?}");
    for name in names {
        let path = format!("examples/{name}.toml");
        let text = std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join(&path)).expect("readable");
        assert!(text.starts_with("# ") && text.lines().next().is_some_and(|line| line.len() > 40), "{name}");
        for format in ["table", "json", "csv", "md"] {
            let output = brimline(&["size", &path, "--format", format]);
            let wanted = i32::from(name.contains("infeasible"));
            assert_eq!(output.status.code(), Some(wanted), "{name} as {format}");
            assert!(output.stderr.is_empty(), "{name} as {format}: {}", String::from_utf8_lossy(&output.stderr));
            assert!(!output.stdout.is_empty(), "{name} as {format}");
        }
    }
}

/// A line of dots stands for any number of lines.
fn matches(wanted: &[&str], found: &[&str]) -> bool {
    match wanted {
        [] => found.is_empty(),
        ["...", rest @ ..] => (0..=found.len()).any(|skipped| matches(rest, &found[skipped..])),
        [line, rest @ ..] => found.first().is_some_and(|first| first.trim_end() == *line) && matches(rest, &found[1..]),
    }
}

/// Arguments of a command line, with words in double quotes kept whole.
fn words(line: &str) -> Vec<String> {
    let mut words = Vec::new();
    for (index, part) in line.split('"').enumerate() {
        if index % 2 == 1 {
            words.push(part.to_string());
        } else {
            words.extend(part.split_whitespace().map(str::to_string));
        }
    }
    words
}

#[test]
fn every_command_of_the_readme_prints_what_stands_there() {
    let readme = std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md")).expect("readable");
    let blocks: Vec<&str> =
        readme.split("```console\n").skip(1).map(|rest| rest.split("```").next().expect("a block")).collect();
    assert!(blocks.len() >= 2, "the README shows commands");
    for block in blocks {
        let mut lines = block.lines();
        let command = lines.next().and_then(|line| line.strip_prefix("$ ")).expect("a command line");
        let arguments = command.strip_prefix("cargo run --release -- ").or(command.strip_prefix("brimline "));
        let arguments = words(arguments.unwrap_or_else(|| panic!("not a command of ours: {command}")));
        let mut wanted: Vec<&str> = lines.collect();
        let code = wanted.first().and_then(|line| line.strip_prefix("? ")).map(|code| code.parse().expect("a code"));
        if code.is_some() {
            wanted.remove(0);
        }
        let output = brimline(&arguments.iter().map(String::as_str).collect::<Vec<_>>());
        assert_eq!(output.status.code(), Some(code.unwrap_or(0)), "{command}");
        let text = stdout(&output);
        let found: Vec<&str> = text.lines().collect();
        assert!(matches(&wanted, &found), "{command} prints:\n{text}\nThe README says:\n{}", wanted.join("\n"));
    }
}

#[test]
fn the_project_of_the_readme_reads_and_has_layouts() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let readme = std::fs::read_to_string(root.join("README.md")).expect("readable");
    let project = readme.split("```toml\n").nth(1).and_then(|rest| rest.split("```").next()).expect("a project");
    // Beside the catalogs, as the README says.
    let path = root.join("target").join("readme-project.toml");
    std::fs::write(&path, project.replace("catalogs/", "../catalogs/")).expect("writable");
    let output = brimline(&["size", path.to_str().expect("UTF-8")]);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    assert!(stdout(&output).contains("main roof"));
}

#[test]
fn the_readme_lists_every_default_as_the_code_takes_it() {
    let readme = std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md")).expect("readable");
    for default in &brimline::input::DEFAULTS {
        let row = format!("| `{}` | {} | {} |", default.key, default.value, default.meaning);
        assert!(readme.contains(&row), "the README lacks: {row}");
    }
}

#[test]
fn json_has_the_promised_keys_and_adds_up() {
    let document = json("harbour-depot", &[]);
    assert_eq!(document["format"], "brimline size 1");
    assert_eq!(document["title"], "Harbour depot");
    assert!(document["assumptions"].as_array().is_some_and(|lines| !lines.is_empty()));
    assert!(document["cautions"].as_array().is_some_and(|lines| !lines.is_empty()));
    let areas = document["areas"].as_array().expect("areas");
    assert_eq!(areas.len(), 3);
    for area in areas {
        assert_eq!(area["outcome"], "optimal");
        assert!(area.get("why").is_none());
        for (index, layout) in area["layouts"].as_array().expect("layouts").iter().enumerate() {
            assert_eq!(layout["rank"], index + 1);
            assert!(layout["cost"].is_f64() && layout["beyond_range"].is_boolean());
            let mut most = 0.0_f64;
            for case in layout["cases"].as_array().expect("cases") {
                let demand = case["demand_m3_s"].as_f64().expect("a demand");
                let groups = case["groups"].as_array().expect("groups");
                let sum: f64 = groups.iter().map(|group| group["flow_m3_s"].as_f64().expect("a flow")).sum();
                assert!((sum - demand).abs() < 1e-9 * demand, "{sum} of {demand}");
                for group in groups {
                    for key in ["head_m", "flow_m3_s", "working", "regime", "freeboard_m"] {
                        assert!(group.get(key).is_some(), "{key}");
                    }
                }
                // 62.4 lb/ft3 is 9802.3 N/m3; the north bay has 0.4 in of ponding head.
                let ponding = if area["name"] == "north bay" { 0.4 * 0.0254 } else { 0.0 };
                let depth = case["water_depth_m"].as_f64().expect("a depth");
                let load = case["load_pa"].as_f64().expect("a load");
                assert!((load - 9802.3 * (depth + ponding)).abs() < 0.5, "{load} at {depth}");
                most = most.max(case["utilisation"].as_f64().expect("a utilisation"));
            }
            assert!(most <= 1.0 + 1e-12);
            assert_eq!(layout["governing"]["utilisation"].as_f64(), Some(most));
            for group in layout["groups"].as_array().expect("groups") {
                for key in ["device", "kind", "width_m", "height_m", "count", "set_height_m", "law"] {
                    assert!(group.get(key).is_some(), "{key}");
                }
                let height = |key: &str| group[key].as_f64().expect("a height");
                assert!(height("set_height_from_m") <= height("set_height_m"));
                assert!(height("set_height_m") <= height("set_height_to_m") + 1e-12);
            }
        }
    }
}

/// What is drawn to measure is told in every form, and each figure adds up; nothing of it where nothing is made to measure.
#[test]
fn openings_made_to_measure_are_told_in_every_form() {
    let document = json("made-to-measure", &[]);
    let mut better = 0;
    for layout in
        document["areas"].as_array().expect("areas").iter().flat_map(|area| area["layouts"].as_array().expect("a list"))
    {
        let made = &layout["made_to_measure"];
        assert_relative_eq!(made["rounded_up_to_m"].as_f64().expect("a step"), 0.25 * 0.0254, max_relative = 1e-12);
        if made["better_than_grid"] == false {
            assert!(made.get("groups").is_none() && made.get("cost").is_none());
            continue;
        }
        better += 1;
        let amount = |value: &serde_json::Value| value.as_f64().expect("an amount");
        assert_relative_eq!(
            amount(&made["cost"]) + amount(&made["saved"]),
            amount(&layout["cost"]),
            max_relative = 1e-12
        );
        assert!(amount(&made["unrounded_cost"]) <= amount(&made["cost"]) && amount(&made["saved"]) > 0.0);
        for group in made["groups"].as_array().expect("groups") {
            let quarters = amount(&group["width_m"]) / 0.0254 * 4.0;
            assert_relative_eq!(quarters, quarters.round(), max_relative = 1e-9);
        }
        for case in made["cases"].as_array().expect("cases") {
            assert!(amount(&case["utilisation"]) <= 1.0 + 1e-12);
            assert!(amount(&case["load_pa"]) <= amount(&case["load_limit_pa"]) * (1.0 + 1e-12));
            let groups = case["groups"].as_array().expect("groups");
            let sum: f64 = groups.iter().map(|group| amount(&group["flow_m3_s"])).sum();
            assert_relative_eq!(sum, amount(&case["demand_m3_s"]), max_relative = 1e-9);
        }
    }
    assert!(better >= 5, "{better} layouts are better made to measure");
    let text =
        |arguments: &[&str]| stdout(&brimline(&[&["size", "examples/made-to-measure.toml"], arguments].concat()));
    assert!(text(&["--work"]).contains("The same made to measure, "));
    let rows = text(&["--format", "csv"]).lines().filter(|line| line.contains(",made to measure,")).count();
    assert!(rows >= better, "{rows} rows");
    assert!(text(&["--format", "md"]).contains("Made to measure, rounded up to 0.25 in:"));
    assert!(json("harbour-depot", &[])["areas"][0]["layouts"][0].get("made_to_measure").is_none());
}

#[test]
fn an_area_without_a_layout_says_why_and_the_others_are_answered() {
    let output = brimline(&["size", "examples/light-roof-infeasible.toml", "--format", "json"]);
    assert_eq!(output.status.code(), Some(1));
    let document: serde_json::Value = serde_json::from_slice(&output.stdout).expect("JSON");
    assert_eq!(document["areas"][0]["outcome"], "infeasible");
    assert!(document["areas"][0]["layouts"].as_array().is_some_and(Vec::is_empty));
    let why = document["areas"][0]["why"].as_str().expect("a reason");
    assert!(
        why.starts_with("Nothing here holds long span under 20 psf in \"one blocked\": the best reaches "),
        "{why}"
    );
    assert_eq!(document["areas"][1]["outcome"], "optimal");
}

/// The limit that is named as a cure, written into the file, makes the layout that it promised; a tenth of a psf less makes
/// none.
#[test]
fn a_cure_written_into_the_file_cures() {
    let example = "examples/light-roof-infeasible.toml";
    let run = |text: &str| {
        let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("target").join("cured");
        std::fs::create_dir_all(&folder).expect("a folder can be made");
        let text = text.replace("../catalogs", &format!("{}/catalogs", env!("CARGO_MANIFEST_DIR")));
        let file = folder.join("roof.toml");
        std::fs::write(&file, text).expect("a file can be written");
        let output = brimline(&["size", file.to_str().expect("UTF-8"), "--area", "long span", "--format", "json"]);
        let document: serde_json::Value = serde_json::from_slice(&output.stdout).expect("JSON");
        document["areas"][0].clone()
    };
    let text = std::fs::read_to_string(example).expect("an example");
    let area = run(&text);
    let cure = area["cures"].as_array().expect("cures").iter().find(|cure| cure["change"] == "load_limit_more_pa");
    let cure = cure.expect("a greater limit cures");
    let limit = 20.0 + cure["amount"].as_f64().expect("a load") / 47.880_26;
    assert_relative_eq!(limit, 24.1, max_relative = 1e-6);
    let cured = run(&text.replace("load = \"20 psf\"", "load = \"24.1 psf\""));
    assert_eq!(cured["outcome"], "optimal");
    assert_eq!(cured["layouts"][0]["cost"], cure["cost"]);
    assert_eq!(cured["layouts"][0]["groups"], cure["groups"]);
    assert_eq!(run(&text.replace("load = \"20 psf\"", "load = \"24 psf\""))["outcome"], "infeasible");
    let nothing = area["cures_nothing"].as_array().expect("a list");
    assert!(nothing.iter().any(|change| change == "height_more_m"), "{nothing:?}");
}

fn tradeoff(arguments: &[&str]) -> serde_json::Value {
    let output = brimline(&[&["tradeoff"], arguments, &["--format", "json"]].concat());
    serde_json::from_slice(&output.stdout).unwrap_or_else(|_| panic!("{}", String::from_utf8_lossy(&output.stderr)))
}

/// The trade-off begins with what `size` says of the roof as given, for an area and for the plan.
#[test]
fn the_tradeoff_begins_at_the_roof_as_given() {
    let traded = tradeoff(&["examples/three-sizes.toml", "--up", "5 psf"]);
    let sized = json("three-sizes", &[]);
    assert_eq!(traded["format"], "brimline tradeoff 1");
    assert_eq!(traded["plan"].as_array().map(Vec::len), Some(6), "0, 1, 2, 3, 4 and 5 psf");
    assert_eq!(traded["plan"][0]["cost"], sized["plan"]["cost"]);
    let areas = traded["areas"].as_array().expect("areas");
    for (area, known) in areas.iter().zip(sized["areas"].as_array().expect("areas")) {
        assert_eq!(area["name"], known["name"]);
        assert_eq!(area["treads"][0]["load_limit_more_pa"], 0.0);
        assert_eq!(area["treads"][0]["cost"], known["layouts"][0]["cost"]);
    }
}

/// A roof without a layout has its first at the raise that the cure rounds up to a tenth of a psf: 24.1 psf less 20.
#[test]
fn the_tradeoff_of_a_roof_without_a_layout_begins_where_it_has_one() {
    let traded = tradeoff(&["examples/light-roof-infeasible.toml", "--area", "long span"]);
    let first = traded["areas"][0]["treads"][0]["load_limit_more_pa"].as_f64().expect("a load") / 47.880_26;
    assert!(first > 4.0 && first < 4.1 + 1e-6, "{first}");
    let none = brimline(&["tradeoff", "examples/light-roof-infeasible.toml", "--area", "long span", "--up", "4 psf"]);
    assert_eq!(none.status.code(), Some(1));
    assert!(String::from_utf8_lossy(&none.stdout).contains("No layout, even with + 4 psf."));
    let wrong = brimline(&["tradeoff", "examples/harbour-depot.toml", "--up", "4 in"]);
    assert_eq!(wrong.status.code(), Some(2));
    let low = brimline(&["tradeoff", "examples/harbour-depot.toml", "--down", "25 psf"]);
    assert!(String::from_utf8_lossy(&low.stderr).contains("--down leaves no load limit"));
    let many = brimline(&["tradeoff", "examples/harbour-depot.toml", "--step", "0.001 psf"]);
    assert!(String::from_utf8_lossy(&many.stderr).contains("more than 1,000 steps"));
}

#[test]
fn one_thread_and_two_give_the_same_bytes() {
    let binary = snapbox::cmd::cargo_bin!("brimline");
    let run = |example: &str, threads: &str| {
        let mut command = Command::new(binary);
        command.args(["size", example, "--format", "json", "--all", "--keep", "50", "--front"]);
        command.current_dir(env!("CARGO_MANIFEST_DIR")).env("RAYON_NUM_THREADS", threads);
        command.output().expect("the program starts").stdout
    };
    for example in ["examples/harbour-depot.toml", "examples/three-sizes.toml"] {
        let one = run(example, "1");
        assert!(one.len() > 10_000);
        assert_eq!(one, run(example, "2"));
        assert_eq!(one, run(example, "2"));
    }
}

#[test]
fn an_area_and_a_number_can_be_asked_for() {
    let document = json("harbour-depot", &["--area", "south bay", "--keep", "2"]);
    let areas = document["areas"].as_array().expect("areas");
    assert_eq!(areas.len(), 1);
    assert_eq!(areas[0]["name"], "south bay");
    assert_eq!(areas[0]["layouts"].as_array().map(Vec::len), Some(2));
}

/// In each area and for the plan: the first row costs what the cheapest does, no row beats another, and without the flag
/// nothing of it is there.
#[test]
fn what_is_not_beaten_stands_beside_the_ranking() {
    let document = json("three-sizes", &["--front"]);
    let compared = |row: &serde_json::Value| {
        ["cost", "worst_load_pa", "count", "width_m"].map(|key| row[key].as_f64().expect("a number"))
    };
    let beats =
        |one: &[f64; 4], other: &[f64; 4]| one != other && one.iter().zip(other).all(|(one, other)| one <= other);
    let check = |front: &serde_json::Value, cheapest: &serde_json::Value| {
        let rows: Vec<[f64; 4]> = front.as_array().expect("a list").iter().map(compared).collect();
        assert!(rows.len() > 100 && rows.is_sorted_by(|one, other| one[0] <= other[0]));
        assert_eq!(Some(rows[0][0]), cheapest.as_f64());
        assert!(!rows.iter().any(|row| rows.iter().any(|other| beats(other, row))));
    };
    for area in document["areas"].as_array().expect("areas") {
        check(&area["front"], &area["layouts"][0]["cost"]);
        for row in area["front"].as_array().expect("a list") {
            let groups = row["groups"].as_array().expect("groups");
            let count: u64 = groups.iter().map(|group| group["count"].as_u64().expect("a count")).sum();
            assert_eq!(row["count"].as_u64(), Some(count));
        }
    }
    check(&document["plan"]["front"], &document["plan"]["cost"]);
    assert_eq!(document["plan"]["front_outcome"], "complete");
    let names: Vec<_> =
        document["plan"]["sizes"].as_array().expect("sizes").iter().map(|size| &size["width_m"]).collect();
    for row in document["plan"]["front"].as_array().expect("a list") {
        let layouts = row["layouts"].as_array().expect("layouts").iter();
        let mut groups = layouts.flat_map(|layout| layout["groups"].as_array().expect("groups"));
        assert!(groups.all(|group| names.contains(&&group["width_m"])), "{row}");
    }
    let without = json("three-sizes", &[]);
    assert!(without["plan"].get("front").is_none() && without["areas"][0].get("front").is_none());
    assert_eq!(without["areas"][0]["layouts"], document["areas"][0]["layouts"], "the ranking stays as it is");
}

/// The schedule has all rows of both lists, the table the first twenty of the second.
#[test]
fn the_schedule_says_in_which_list_a_layout_stands() {
    let text = stdout(&brimline(&["size", "examples/mixed-pool.toml", "--front", "--format", "csv"]));
    let front = json("mixed-pool", &["--front"])["areas"][0]["front"].as_array().map_or(0, Vec::len);
    let mut rows = csv::Reader::from_reader(text.as_bytes());
    let head = rows.headers().expect("a head").clone();
    let place = |name: &str| head.iter().position(|known| known == name).expect(name);
    let (list, rank, load) = (place("list"), place("rank"), place("worst_load_psf"));
    let records: Vec<_> = rows.records().map(|record| record.expect("a record")).collect();
    let of_front = || records.iter().filter(|record| &record[list] == "front");
    let last = of_front().filter_map(|record| record[rank].parse::<usize>().ok()).max();
    assert_eq!(last, Some(front));
    assert!(front > 20 && of_front().all(|record| record[load].parse::<f64>().is_ok_and(|load| load > 0.0)));
    assert!(records.iter().any(|record| &record[list] == "ranked"));
    let table = stdout(&brimline(&["size", "examples/mixed-pool.toml", "--front"]));
    assert!(table.contains(&format!("\n{} more, in the same order, stand in CSV and JSON.", front - 20)), "{table}");
}

#[test]
fn the_schedule_has_a_row_for_each_group() {
    let text = stdout(&brimline(&["size", "examples/mixed-pool.toml", "--format", "csv"]));
    let document = json("mixed-pool", &[]);
    let layouts = document["areas"][0]["layouts"].as_array().expect("layouts");
    let groups: usize = layouts.iter().map(|layout| layout["groups"].as_array().map_or(0, Vec::len)).sum();
    assert_eq!(text.lines().count(), groups + 1);
    assert!(
        text.starts_with("area,outcome,rank,cost,device,kind,width_in,height_in,diameter_in,count,set_height_in,"),
        "{text}"
    );
}

#[test]
fn the_work_repeats_the_numbers_of_the_table() {
    let text = stdout(&brimline(&["size", "examples/harbour-depot.toml", "--area", "south bay", "--work"]));
    // 0.0103896 * 7400 * 6.3 = 484.4; 30 / 5.2 = 5.769. Worked by hand.
    assert!(text.contains("Q = 0.0103896 x 7,400 x 6.3 = 484.4 gpm (with 0.0104: 484.8 gpm)"), "{text}");
    assert!(text.contains("30 / 5.2 = 5.769 in by load"), "{text}");
}

#[test]
fn a_result_goes_to_a_file_when_one_is_named() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("target").join("program-output.md");
    let _ = std::fs::remove_file(&path);
    let output =
        brimline(&["size", "examples/mixed-pool.toml", "--format", "md", "--output", path.to_str().expect("UTF-8")]);
    assert_eq!(output.status.code(), Some(0));
    assert!(output.stdout.is_empty());
    let text = std::fs::read_to_string(&path).expect("written");
    assert!(text.starts_with("# Mixed pool: overflow drainage, primary drains blocked\n\n"));
    let rows: Vec<&str> = text.lines().filter(|line| line.starts_with('|')).collect();
    let columns = |row: &str| row.matches('|').count();
    assert!(rows.len() > 3 && rows.iter().all(|row| columns(row) == columns(rows[0])), "{text}");
}

#[test]
fn start_writes_a_project_that_runs_and_overwrites_nothing() {
    for units in ["us", "si"] {
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("target").join(format!("start-{units}"));
        let _ = std::fs::remove_dir_all(&folder);
        let project = folder.join("roof.toml");
        let path = project.to_str().expect("UTF-8");
        let output = brimline(&["start", path, "--units", units]);
        assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
        assert!(stdout(&output).lines().count() > 4, "{}", stdout(&output));
        let output = brimline(&["size", path]);
        assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
        assert!(output.stderr.is_empty());
        // A second start beside it leaves the catalogs as they are; one over it changes nothing.
        assert_eq!(
            brimline(&["start", folder.join("other.toml").to_str().expect("UTF-8"), "--units", units]).status.code(),
            Some(0)
        );
        std::fs::write(&project, "mine").expect("writable");
        let output = brimline(&["start", path, "--units", units]);
        assert_eq!(output.status.code(), Some(2));
        assert!(String::from_utf8_lossy(&output.stderr).contains("is there already"));
        assert_eq!(std::fs::read_to_string(&project).expect("readable"), "mine");
    }
}

#[test]
fn the_catalogs_of_the_program_need_no_file() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("target").join("builtin");
    std::fs::create_dir_all(&folder).expect("a folder can be made");
    let project = |catalog: &str| {
        let text = format!(
            "units = \"us\"\ncatalogs = [\"{catalog}\"]\n[storm]\nintensity = \"4 in/h\"\n[limit]\nload = \"30 psf\"\n\
             [search]\nrank_by = [\"count\"]\nset_height = [\"1 in\", \"4 in\"]\n[[area]]\nname = \"roof\"\narea = \"3000 ft2\"\n"
        );
        let path = folder.join("roof.toml");
        std::fs::write(&path, text).expect("writable");
        brimline(&["size", path.to_str().expect("UTF-8")])
    };
    for entry in std::fs::read_dir(Path::new(env!("CARGO_MANIFEST_DIR")).join("catalogs")).expect("catalogs") {
        let path = entry.expect("an entry").path();
        if path.extension().is_some_and(|extension| extension == "toml") {
            let name = path.file_stem().expect("a name").to_string_lossy().into_owned();
            let output = project(&format!("builtin:{name}"));
            assert_eq!(output.status.code(), Some(0), "{name}: {}", String::from_utf8_lossy(&output.stderr));
        }
    }
    let output = project("builtin:through-wall-scupers");
    assert_eq!(output.status.code(), Some(2));
    let message = String::from_utf8_lossy(&output.stderr).into_owned();
    assert!(message.contains("did you mean `builtin:through-wall-scuppers`?"), "{message}");
}

#[test]
fn a_front_counts_what_is_added_and_shows_what_is_there() {
    let document = json("old-roof-survey", &["--front", "--area", "covered yard"]);
    let rows = document["areas"][0]["front"].as_array().expect("a front");
    assert!(rows.len() > 1, "{rows:?}");
    for row in rows {
        let (there, added): (Vec<_>, Vec<_>) =
            row["groups"].as_array().expect("groups").iter().partition(|group| group["existing"] == true);
        assert_eq!(there.len(), 1, "what the survey found is shown once");
        let count: u64 = added.iter().map(|group| group["count"].as_u64().expect("a count")).sum();
        assert_eq!(row["count"], count);
    }
}

/// The plan stands in the rows, at its own cost, which no row of the areas' own lists need have.
#[test]
fn the_plan_stands_in_csv_and_what_has_no_rows_is_refused() {
    let text = stdout(&brimline(&["size", "examples/three-sizes.toml", "--format", "csv"]));
    let plan = json("three-sizes", &[])["plan"].clone();
    let mut rows = csv::Reader::from_reader(text.as_bytes());
    let mut costs: Vec<(String, String)> = rows
        .records()
        .map(|row| row.expect("a row"))
        .filter(|row| &row[1] == "plan")
        .map(|row| (row[0].to_string(), row[3].to_string()))
        .collect();
    costs.dedup();
    let wanted: Vec<(String, f64)> = plan["layouts"]
        .as_array()
        .expect("layouts")
        .iter()
        .map(|layout| (layout["area"].as_str().expect("a name").into(), layout["cost"].as_f64().expect("a cost")))
        .collect();
    let costs: Vec<(String, f64)> =
        costs.into_iter().map(|(area, cost)| (area, cost.parse().expect("a number"))).collect();
    assert_eq!(costs, wanted);
    for (command, flag) in [("size", "--work"), ("size", "--binds"), ("check", "--sensitivity"), ("check", "--storage")]
    {
        let output = brimline(&[command, "examples/drawing-review.toml", flag, "--format", "csv"]);
        assert_eq!(output.status.code(), Some(2), "{command} {flag}");
        assert!(String::from_utf8_lossy(&output.stderr).contains(flag), "{command} {flag}");
    }
}
