//! A search that is ended before everything was tried: by the clock, and by ctrl-c. What it prints is the best found, said to
//! be no more than that, and what is proven of the rest.

use std::path::PathBuf;
use std::process::{Command, Output, Stdio};
use std::time::Duration;

use serde_json::Value;

/// A roof whose search takes minutes: widths by quarter inches, and three groups in a layout.
fn slow_roof(name: &str) -> PathBuf {
    let folder = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::create_dir_all(&folder).expect("a folder");
    let catalog = r#"
        [[device]]
        tag = "RS"
        kind = "closed scupper"
        width = { from = "6 in", to = "48 in", step = "0.25 in" }
        height = ["4 in", "6 in", "8 in", "10 in"]
        price = { each = 400, per_width = "13.7 / in", per_height = "11.3 / in" }"#;
    let project = r#"
        title = "slow"
        units = "us"
        catalogs = ["fine.toml"]
        storm = { intensity = "6 in/h" }
        limit = { load = "26 psf" }
        search = { mix = 3, set_height = "2 in", count = { from = 1, to = 30 } }
        case = [{ name = "one blocked", blocked = 1 }]
        area = [{ name = "A", area = "40000 ft2" }, { name = "B", area = "60000 ft2" }]"#;
    std::fs::write(folder.join("fine.toml"), catalog).expect("writable");
    let path = folder.join("slow.toml");
    std::fs::write(&path, project).expect("writable");
    path
}

fn command(arguments: &[&str], roof: &PathBuf) -> Command {
    let mut command = Command::new(snapbox::cmd::cargo_bin!("brimline"));
    command.arg(arguments[0]).arg(roof).args(&arguments[1..]).stdout(Stdio::piped()).stderr(Stdio::piped());
    command
}

fn document(output: &Output) -> Value {
    serde_json::from_slice(&output.stdout).expect("JSON")
}

/// Every area's search was ended; what is proven of all layouts is true of those found.
fn check_ended(output: &Output) {
    let document = document(output);
    for area in document["areas"].as_array().expect("areas") {
        assert_eq!(area["outcome"], "stopped");
        assert_eq!(area["bound"]["of"], "cost");
        let bound = area["bound"]["at_least"].as_f64().expect("a bound");
        let layouts = area["layouts"].as_array().expect("layouts");
        assert!(bound > 0.0 && layouts.iter().all(|layout| layout["cost"].as_f64() >= Some(bound)));
    }
}

#[test]
fn the_clock_ends_a_search_with_the_best_found() {
    let roof = slow_roof("clock");
    let output = command(&["size", "--time-limit", "2 s", "--format", "json"], &roof).output().expect("starts");
    assert_eq!(output.status.code(), Some(0), "layouts were found in time");
    check_ended(&output);
    let output = command(&["size", "--time-limit", "2 s", "--area", "A"], &roof).output().expect("starts");
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("The search was ended before everything was tried"), "{text}");
    assert!(text.contains("at least"), "{text}");
}

#[test]
fn ended_before_anything_was_found_there_is_no_layout_and_exit_code_1() {
    let roof = slow_roof("at-once");
    for format in ["table", "csv", "md", "json"] {
        let arguments = ["size", "--time-limit", "0.000001 s", "--format", format];
        let output = command(&arguments, &roof).output().expect("starts");
        assert_eq!(output.status.code(), Some(1), "{format}");
        let text = String::from_utf8(output.stdout).expect("UTF-8");
        assert!(text.contains("ended before a layout was found") || text.contains("stopped"), "{format}: {text}");
    }
    let output = command(&["tradeoff", "--time-limit", "0.000001 s"], &roof).output().expect("starts");
    assert_eq!(output.status.code(), Some(1));
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("The search was ended before the least costs here were known."), "{text}");
}

#[test]
#[cfg(unix)]
fn ctrl_c_ends_a_search_with_the_best_found() {
    let roof = slow_roof("ctrl-c");
    let running = command(&["size", "--format", "json"], &roof).spawn().expect("starts");
    std::thread::sleep(Duration::from_secs(3));
    let sent = Command::new("kill").args(["-INT", &running.id().to_string()]).status().expect("kill");
    assert!(sent.success(), "it was still searching");
    let output = running.wait_with_output().expect("ends by itself");
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    check_ended(&output);
}

#[test]
fn a_time_limit_is_a_time_above_zero() {
    let roof = slow_roof("wrong");
    for (given, told) in [("2", "no unit"), ("0 s", "not above zero"), ("2 in", "a unit of length")] {
        let output = command(&["size", "--time-limit", given], &roof).output().expect("starts");
        assert_eq!(output.status.code(), Some(2));
        let message = String::from_utf8(output.stderr).expect("UTF-8");
        assert!(message.contains("--time-limit") && message.contains(told), "{message}");
    }
}

/// What is not beaten is listed whole or not at all.
#[test]
fn an_ended_search_lists_no_front() {
    let roof = slow_roof("front");
    let output =
        command(&["size", "--front", "--time-limit", "1 s", "--format", "json"], &roof).output().expect("starts");
    assert!(document(&output)["areas"].as_array().expect("areas").iter().all(|area| area.get("front").is_none()));
    let output = command(&["size", "--front", "--time-limit", "1 s"], &roof).output().expect("starts");
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("ended before it was known what is not beaten"), "{text}");
}

/// A plan that was ended is no infeasible one, and costs no less than what is told as bound.
#[test]
fn an_ended_plan_is_told_as_stopped() {
    let roof = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("examples/three-sizes.toml");
    let at_once = ["size", "--time-limit", "0.000001 s", "--format", "json"];
    let output = command(&at_once, &roof).output().expect("starts");
    let plan = &document(&output)["plan"];
    assert_eq!((&plan["outcome"], &plan["cost"]), (&Value::from("stopped"), &Value::Null));
    let output = command(&["size", "--time-limit", "0.000001 s"], &roof).output().expect("starts");
    let text = String::from_utf8(output.stdout).expect("UTF-8");
    assert!(text.contains("The search was ended before a plan was found"), "{text}");
    let output = command(&["size", "--format", "json"], &roof).output().expect("starts");
    let plan = &document(&output)["plan"];
    assert_eq!(plan["outcome"], "optimal");
    assert_eq!(plan["bound"], plan["cost"]);
    let stiffened = plan["stiffened"]["cost"].as_f64().expect("strength has a price there");
    assert!(stiffened <= plan["cost"].as_f64().expect("a cost"), "raising nothing is one of the choices");
}
