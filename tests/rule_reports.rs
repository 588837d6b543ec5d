//! What is said of rule sets over a roof: what stands in for what is not given, what a layout is held to, what breaks a rule
//! whatever is added, and rules against each other; in words and in JSON.

use std::fs;
use std::path::PathBuf;
use std::process::Output;
use std::sync::atomic::{AtomicU32, Ordering};

use serde_json::Value;
use snapbox::cmd::cargo_bin;

/// A folder of its own, gone when the test ends.
struct Folder(PathBuf);

impl Folder {
    /// A project of one area with some rule sets over it.
    fn new(storm: &str, rules: &str, area: &str, rest: &str) -> Self {
        static COUNT: AtomicU32 = AtomicU32::new(0);
        let name = format!("brimline-said-{}-{}", std::process::id(), COUNT.fetch_add(1, Ordering::Relaxed));
        let folder = Self(std::env::temp_dir().join(name));
        fs::create_dir_all(&folder.0).expect("a folder can be made");
        let project = format!(
            "title = \"Roof\"\nunits = \"us\"\ncatalogs = [\"builtin:through-wall-scuppers\"]\nrules = {rules}\n\
             [storm]\n{storm}\n[limit]\nload = \"35 psf\"\n[search]\nrank_by = [\"cost\", \"load\"]\nkeep = 3\n\
             set_height = {{ from = \"2 in\", to = \"5 in\", step = \"0.5 in\" }}\n\
             [[area]]\nname = \"main\"\narea = \"6200 ft2\"\nedge = \"80 ft\"\n{area}\n{rest}\n"
        );
        folder.with("roof.toml", &project)
    }

    fn with(self, name: &str, text: &str) -> Self {
        fs::write(self.0.join(name), text).expect("a file can be written");
        self
    }

    /// A rule set with one rule, or several, each by its kind and what follows.
    fn set(self, title: &str, rules: &[(&str, &str)]) -> Self {
        let one = |(index, (asks, rest)): (usize, &(&str, &str))| {
            format!(
                "[[rule]]\nasks = \"{asks}\"\n{rest}\nclause = \"{}\"\nsource = \"this test\"\nknown = \"read\"\n",
                index + 1
            )
        };
        let rules: String = rules.iter().enumerate().map(one).collect();
        self.with(&format!("{title}.toml"), &format!("title = \"{title}\"\n{rules}"))
    }

    fn brimline(&self, arguments: &[&str]) -> Output {
        let mut command = std::process::Command::new(cargo_bin!("brimline"));
        command.args(arguments).current_dir(&self.0).env("NO_COLOR", "1").output().expect("the program starts")
    }

    /// What it prints, in one line.
    fn says(&self, command: &str) -> String {
        let output = self.brimline(&[command, "roof.toml"]);
        assert!(output.stderr.is_empty(), "{}", String::from_utf8_lossy(&output.stderr));
        String::from_utf8(output.stdout).expect("UTF-8").split_whitespace().collect::<Vec<_>>().join(" ")
    }

    fn json(&self, command: &str) -> Value {
        let output = self.brimline(&[command, "roof.toml", "--format", "json"]);
        serde_json::from_slice(&output.stdout).expect("JSON")
    }

    /// The verdict on the first layout by the clause of a set, with what was found and what is required.
    fn verdict(&self, command: &str, set: &str, clause: &str) -> (String, Value, Value) {
        let document = self.json(command);
        let rules = document["areas"][0]["layouts"][0]["rules"].as_array().expect("rules").clone();
        let rule = rules.into_iter().find(|rule| rule["set"] == set && rule["clause"] == clause).expect("the rule");
        let verdict = rule["verdict"].as_str().expect("a verdict").to_string();
        (verdict, rule["found"]["value"].clone(), rule["required"]["value"].clone())
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = fs::remove_dir_all(&self.0);
    }
}

const STORM: &str = "intensity = \"5.8 in/h\"\nduration = \"15 min\"\nreturn_period = \"100 yr\"";
const HOURLY: &str = "intensity = \"3 in/h\"\nduration = \"60 min\"\nreturn_period = \"100 yr\"";
const DRAWN: &str = "[[layout]]\nname = \"drawn\"\narea = \"main\"\n\
                     groups = [{ device = \"RS\", width = \"12 in\", height = \"4 in\", count = 2, set_height = \"2 in\" }]";

/// Under 3 in/h in place of a storm that nobody gave the water says nothing about the set that asks for it.
#[test]
fn what_goes_by_a_storm_that_is_not_known_cannot_be_told() {
    let asks = [
        ("storm", "duration = \"15 min\"\nreturn_period = \"100 yr\""),
        ("limits", ""),
        ("depth", "at_most = \"6 in\""),
    ];
    let folder = Folder::new(HOURLY, "[\"Town.toml\"]", "", DRAWN).set("Town", &asks);
    for clause in ["1", "2", "3"] {
        assert_eq!(folder.verdict("check", "Town", clause).0, "cannot tell", "{clause}");
    }
    let document = folder.json("check");
    let set = &document["areas"][0]["layouts"][0]["rule_sets"][0];
    assert!(set["stands_in_for"].as_str().is_some_and(|what| what.contains("rainfall table")), "{set}");
    assert_eq!(set["governs"], false);
    let said = folder.says("check");
    assert!(said.contains("Until it is given no layout is shown to keep every binding rule."), "{said}");
    assert!(said.contains("The demand by Town is not known everywhere"), "{said}");
    assert!(!said.contains("Town governs"), "{said}");
    // With the storm given the same clauses are told.
    let folder = Folder::new(STORM, "[\"Town.toml\"]", "", DRAWN).set("Town", &asks);
    for clause in ["1", "2", "3"] {
        assert_eq!(folder.verdict("check", "Town", clause).0, "pass", "{clause}");
    }
}

/// An overflow for at least what the primary drains carry: what nobody says they carry could only raise the demand, so what
/// fails without it fails.
#[test]
fn what_can_only_be_worse_fails_all_the_same() {
    let asks = [("primary-flow", "at_least = 1"), ("depth", "at_most = \"2.5 in\""), ("depth", "at_most = \"30 in\"")];
    let folder = Folder::new(STORM, "[\"Town.toml\"]", "", DRAWN).set("Town", &asks);
    assert_eq!(folder.verdict("check", "Town", "1").0, "cannot tell");
    assert_eq!(folder.verdict("check", "Town", "2").0, "fail");
    assert_eq!(folder.verdict("check", "Town", "3").0, "cannot tell");
}

/// A rule that refuses a credit is broken where every case takes one, and kept where one case does not.
#[test]
fn a_credit_that_is_refused_is_found_where_every_case_takes_it() {
    let sets = "[\"Gives.toml\", { file = \"Refuses.toml\", apply = \"advice\" }]";
    let primary = "primary = { flow = \"100 gpm\" }";
    let folder = |cases: &str| {
        Folder::new(STORM, sets, primary, &format!("{cases}\n{DRAWN}"))
            .set("Gives", &[("primary-credit", "credited = true")])
            .set("Refuses", &[("primary-credit", "credited = false")])
    };
    let only = folder("[[case]]\nname = \"as designed\"\nrules = \"Gives\"");
    let (verdict, found, required) = only.verdict("check", "Refuses", "1");
    assert_eq!((verdict.as_str(), required), ("fail", Value::Bool(false)));
    // 100 US gpm: a gallon is 3.785411784e-3 m3.
    let flow = found.as_f64().expect("a flow");
    assert!((flow - 100.0 * 3.785_411_784e-3 / 60.0).abs() < 1e-9, "{flow}");
    let both = folder("[[case]]\nname = \"as designed\"");
    assert_eq!(both.verdict("check", "Refuses", "1").0, "pass");
}

/// Where the primary drains are counted to carry all, nothing is left that the overflow could be overwhelmed by.
#[test]
fn a_credit_of_all_the_demand_leaves_no_water() {
    let asks = [("primary-credit", "credited = true"), ("depth", "at_most = \"6 in\""), ("limits", "")];
    let folder = Folder::new(STORM, "[\"Town.toml\"]", "primary = { flow = \"900 gpm\" }", DRAWN).set("Town", &asks);
    let (verdict, found, _) = folder.verdict("check", "Town", "2");
    assert_eq!((verdict.as_str(), found.as_f64()), ("pass", Some(0.0)));
    assert_eq!(folder.verdict("check", "Town", "3").0, "pass");
    assert!(!folder.says("check").contains("overwhelmed"));
    assert!(!folder.says("size").contains("overwhelmed"));
}

/// A cap on the depth by a rule set is no limit of the area's: it is not moved, and holds while others are.
#[test]
fn a_cap_of_a_rule_set_is_not_solved_for() {
    let folder = Folder::new(STORM, "[\"Town.toml\"]", "", DRAWN).set("Town", &[("depth", "at_most = \"8 in\"")]);
    let said = folder.says("backsolve");
    assert!(said.contains("load limit") && !said.contains("depth limit"), "{said}");
    let tight = Folder::new(STORM, "[\"Town.toml\"]", "", DRAWN).set("Town", &[("depth", "at_most = \"3 in\"")]);
    assert!(
        tight.says("backsolve").contains("load limit \u{2506} 35 psf \u{2506} no value holds"),
        "{}",
        tight.says("backsolve")
    );
}

/// Advice on the rain goes by the hardest that any case holds the layout to, not by the design storm alone.
#[test]
fn advice_is_found_in_what_every_case_holds_to() {
    let sets =
        "[\"Hard.toml\", { file = \"Less.toml\", apply = \"advice\" }, { file = \"More.toml\", apply = \"advice\" }]";
    let folder = Folder::new(STORM, sets, "wall = \"1000 ft2\"\nwall_share = 0", DRAWN)
        .set("Hard", &[("storm", "intensity = \"7.6 in/h\""), ("walls", "count = \"half of each\"")])
        .set("Less", &[("storm", "intensity = \"7 in/h\""), ("walls", "count = \"by corner\"")])
        .set("More", &[("storm", "intensity = \"8 in/h\"")]);
    assert_eq!(folder.verdict("check", "Less", "1").0, "pass");
    assert_eq!(folder.verdict("check", "Less", "2").0, "pass");
    let (verdict, found, required) = folder.verdict("check", "More", "1");
    assert_eq!(verdict, "fail");
    let of = |value: &Value| value.as_f64().expect("an intensity") / 0.0254 * 3600.0;
    assert!((of(&found) - 7.6).abs() < 1e-9 && (of(&required) - 8.0).abs() < 1e-9, "{found} {required}");
}

/// A height above a roof at the wall that nobody gave can be too low, never too high.
#[test]
fn a_datum_that_is_not_given_leaves_open_what_hangs_on_it() {
    // Each in a set of its own: together they would stand against each other.
    let asked = [
        ("A", "roof at wall", "at_least = \"1 in\""),
        ("B", "roof at wall", "at_least = \"3 in\""),
        ("C", "roof at wall", "at_most = \"3 in\""),
        ("D", "roof at wall", "at_most = \"1 in\""),
        ("E", "low point", "at_least = \"2 in\""),
    ];
    let applied = asked.map(|(set, _, _)| format!("{{ file = \"{set}.toml\", apply = \"advice\" }}")).join(", ");
    let verdicts = |area: &str| {
        let folder = Folder::new(STORM, &format!("[{applied}]"), area, DRAWN);
        let with = |folder: Folder, (set, above, bound): (&str, &str, &str)| {
            folder.set(set, &[("set-height", &format!("above = \"{above}\"\n{bound}"))])
        };
        let folder = asked.into_iter().fold(folder, with);
        asked.map(|(set, _, _)| folder.verdict("check", set, "1").0)
    };
    assert_eq!(verdicts(""), ["cannot tell", "fail", "pass", "cannot tell", "pass"]);
    assert_eq!(verdicts("roof_at_wall = \"0 in\""), ["pass", "fail", "pass", "fail", "pass"]);
}

/// What is there already and breaks a binding rule leaves no layout, and the report says so.
#[test]
fn what_is_there_already_is_held_to_binding_rules() {
    let there = "existing = [{ device = \"NS\", width = \"6 in\", count = 3, set_height = \"3.5 in\" }]";
    let asks = [("opening-width", "at_least = \"8 in\"")];
    let folder = Folder::new(STORM, "[\"Town.toml\"]", there, "").set("Town", &asks);
    let said = folder.says("size");
    assert!(
        said.contains(
            "What is there already in main, 3 of NS 6 in at 3.5 in, breaks \"opening-width\" at least 8 in (Town, 1)"
        ),
        "{said}"
    );
    assert!(said.contains("without \"opening-width\" at least 8 in (Town, 1)"), "{said}");
    assert!(said.contains("with `replace` in the area some of it may be closed"), "{said}");
    // What breaks the rule may be closed, and is.
    let closed = format!("{there}\nreplace = 100");
    let closed = Folder::new(STORM, "[\"Town.toml\"]", &closed, "").set("Town", &asks);
    let layout = &closed.json("size")["areas"][0]["layouts"][0];
    assert_eq!(
        (&layout["closed"]["cost"], layout["closed"]["groups"][0]["count"].as_u64()),
        (&Value::from(300.0), Some(3))
    );
    let advice = Folder::new(STORM, "[{ file = \"Town.toml\", apply = \"advice\" }]", there, "").set("Town", &asks);
    assert_eq!(advice.verdict("size", "Town", "1").0, "fail");
}

/// More devices by a rule than the area's count allows: the count is the reason, not the edge.
#[test]
fn a_count_beyond_the_areas_is_told_as_that() {
    let area = "count = { from = 1, to = 3 }";
    let by_count = Folder::new(STORM, "[\"Town.toml\"]", area, "").set("Town", &[("count", "at_least = 4")]);
    let said = by_count.says("size");
    assert!(
        said.contains("main asks for at least 4 devices by \"count\" at least 4 (Town, 1), and its count goes to 3."),
        "{said}"
    );
    // 80 ft at 10 ft each.
    let by_spacing = Folder::new(STORM, "[\"Town.toml\"]", area, "").set("Town", &[("spacing", "at_most = \"10 ft\"")]);
    let said = by_spacing.says("size");
    assert!(
        said.contains(
            "at least 8 openings at the edge by \"spacing\" at most 10 ft (Town, 1), and its count goes to 3."
        ),
        "{said}"
    );
    let both = Folder::new(STORM, "[\"Town.toml\"]", area, "")
        .set("Town", &[("count", "at_least = 4"), ("spacing", "at_most = \"10 ft\"")]);
    let said = both.says("size");
    assert!(said.contains("without \"count\" at least 4 (Town, 1) and \"spacing\" at most 10 ft (Town, 2)"), "{said}");
}

/// Sills of at least 3 and 3.5 in by two sets, of at most 2.5 and 2 in by two others: no waiver of one is enough.
#[test]
fn rules_against_each_other_are_named_and_waived_together() {
    let sets = "[\"A.toml\", \"B.toml\", \"C.toml\", \"D.toml\"]";
    let sill = |bound: &str| format!("above = \"low point\"\n{bound}");
    let folder = Folder::new(STORM, sets, "", "")
        .set("A", &[("set-height", &sill("at_least = \"3 in\""))])
        .set("B", &[("set-height", &sill("at_least = \"3.5 in\""))])
        .set("C", &[("set-height", &sill("at_most = \"2.5 in\""))])
        .set("D", &[("set-height", &sill("at_most = \"2 in\""))]);
    let said = folder.says("size");
    let named =
        "No layout here keeps \"set-height\" at least 3.5 in (B, 1) and \"set-height\" at most 2 in (D, 1) together.";
    assert!(said.contains(named), "{said}");
    assert!(
        said.contains("without \"set-height\" at most 2.5 in (C, 1) and \"set-height\" at most 2 in (D, 1)"),
        "{said}"
    );
    let area = &folder.json("size")["areas"][0];
    let sets: Vec<&str> =
        area["contradiction"].as_array().expect("rules").iter().filter_map(|rule| rule["set"].as_str()).collect();
    assert_eq!(sets, ["B", "D"]);
    let cure =
        area["cures"].as_array().expect("cures").iter().find(|cure| cure["change"] == "rules_waived").expect("a cure");
    assert_eq!(cure["amount"], 2.0);
    assert_eq!(cure["rules"][0]["predicate"], "set-height");
    assert_eq!(cure["rules"][0]["required"]["unit"], "m");
}

/// Where each rule is from, what it says besides, and the set itself stand once in every report.
#[test]
fn sources_and_notes_are_on_the_page() {
    let folder = Folder::new(STORM, "[\"builtin:rules/ibc-2021\"]", "", DRAWN);
    for command in ["size", "check"] {
        let said = folder.says(command);
        assert!(said.contains("one state's edition, quoted"), "{said}");
        assert!(said.contains("One metric adoption writes 100 mm for 4 in."), "{said}");
        let document = folder.json(command);
        assert_eq!(document["rule_sets"][0]["title"], "IBC 2021");
        assert_eq!(document["rule_sets"][0]["storm"]["duration_s"], 900.0);
    }
}
