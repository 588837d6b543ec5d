//! The number of threads changes nothing: the same bytes with one and with two.

use std::fmt::Write;
use std::path::Path;
use std::process::Command;

fn sized(roof: &Path, threads: u32) -> Vec<u8> {
    let mut command = Command::new(snapbox::cmd::cargo_bin!("brimline"));
    command.args(["size", "--format", "json"]).arg(roof).env("RAYON_NUM_THREADS", threads.to_string());
    let output = command.output().expect("the program starts");
    assert!(output.stderr.is_empty(), "{}", String::from_utf8_lossy(&output.stderr));
    output.stdout
}

/// A roof of many areas, unlike in limit and edge, with a plan of four sizes.
fn larger_roof() -> String {
    let mut text = String::from(
        r#"title = "Many bays"
units = "us"
catalogs = ["builtin:through-wall-scuppers"]
[storm]
intensity = "6.3 in/h"
[limit]
load = "30 psf"
[search]
set_height = "2 in"
count = { from = 1, to = 12 }
mix = 2
sizes = 4
size_price = 250
[[case]]
name = "as designed"
[[case]]
name = "one blocked"
blocked = 1
"#,
    );
    for bay in 0..40 {
        let (area, load) = (1800 + bay * 733 % 6100, 27 + bay % 7);
        let edge = if bay % 3 == 0 { format!("edge = \"{} ft\"\n", 24 + bay % 11) } else { String::new() };
        let limits = format!("limit = {{ load = \"{load} psf\" }}");
        write!(text, "[[area]]\nname = \"bay {bay}\"\narea = \"{area} ft2\"\n{edge}{limits}\n").expect("a string");
    }
    text
}

#[test]
fn one_thread_and_two_write_the_same_bytes() {
    let larger = Path::new(env!("CARGO_TARGET_TMPDIR")).join("many-bays.toml");
    std::fs::write(&larger, larger_roof()).expect("writable");
    let example = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/three-sizes.toml");
    for roof in [example, larger] {
        let one = sized(&roof, 1);
        let document: serde_json::Value = serde_json::from_slice(&one).expect("JSON");
        assert_eq!(document["plan"]["outcome"], "optimal", "{}", roof.display());
        assert!(one == sized(&roof, 2), "{}: other bytes with two threads", roof.display());
    }
}
