//! Published tables against the laws that should give them, each within what its file states.

mod hydraulics_support;

use approx::assert_relative_eq;
use brimline::hydraulics::crest_table::{self, Edition};
use brimline::hydraulics::leader::{self, Fill};
use brimline::hydraulics::practice::{self, Transition};
use brimline::hydraulics::weir::{self, EndContractions};
use brimline::hydraulics::{Branch, circular, crest, inlet, manning, orifice, outlet, thin_plate};
use brimline::units::{Flow, Length, METRES_PER_FOOT};

use hydraulics_support::{Row, Table, feet, inches, m, to_cfs};

/// How far a published scupper entry may stand off the practice form, below and above, as a share of the law.
fn scupper_band(branch: Branch, head: f64) -> (f64, f64) {
    match branch {
        Branch::Weir if head < 1.5 => (0.0, 0.035),
        Branch::Weir if head < 2.5 => (0.0, 0.017),
        Branch::Weir => (-0.0065, 0.0065),
        _ => (-0.0215, 0.002),
    }
}

/// The practice form for a row of dimensions in inches, the closed opening by its height; none for a drain.
fn practice_flow(row: Row, width: f64, height: Option<f64>, head: f64) -> Option<(Flow, Branch)> {
    match row.text("device") {
        "channel scupper" => Some((practice::weir(inches(width), inches(head)).unwrap(), Branch::Weir)),
        "closed scupper" => Some(practice::closed(inches(width), inches(height.unwrap()), inches(head)).unwrap()),
        other => {
            assert_eq!(other, "drain", "a device this test does not know");
            None
        }
    }
}

/// ASCE 7-16 Table C8.3-3 and ASCE 7-05 Table C8-1, from memory, in gal/min.
#[test]
fn rectangular_scuppers_follow_the_practice_form() {
    let mut met = 0;
    for file in ["scuppers_rectangular_us.csv", "drains_and_scuppers_us.csv"] {
        for row in Table::read(file).rows() {
            let head = row.value("head_in");
            let width = row.number("width_in").unwrap_or_default();
            let Some((law, branch)) = practice_flow(row, width, row.number("height_in"), head) else { continue };
            let off = row.value("flow_gpm") / law.to_gpm() - 1.0;
            let (least, most) = scupper_band(branch, head);
            assert!((least - 1e-9..=most).contains(&off), "{file}: {:?}: {off:+.4} off {law:?}", row.cells());
            met += 1;
        }
    }
    assert_eq!(met, 72 + 42);
}

/// ASCE 7-05 Table C8-2, from memory, in m3/s. Its millimetres are rounded inches.
#[test]
fn rectangular_scuppers_in_metres_are_those_in_inches() {
    let whole_inches = |mm: f64| (mm / 25.4).round();
    for row in Table::read("drains_and_scuppers_si.csv").rows() {
        let head = whole_inches(row.value("head_mm"));
        let width = whole_inches(row.number("width_mm").unwrap_or_default());
        let height = row.number("height_mm").map(whole_inches);
        let Some((law, branch)) = practice_flow(row, width, height, head) else { continue };
        let (least, most) = scupper_band(branch, head);
        let (off, law) = (row.value("flow_m3_s") - law.m3_per_s(), law.m3_per_s());
        assert!((law * least - 1e-4..=law * most + 1e-4).contains(&off), "{:?}: {off:+.5}", row.cells());
    }
}

/// The entries next above the top of the opening, where the transitions differ. Source: as above.
#[test]
fn the_table_lies_between_the_line_and_the_lesser_of_the_two() {
    let mut met = 0;
    for row in Table::read("scuppers_rectangular_us.csv").rows() {
        let (width, head, printed) = (row.value("width_in"), row.value("head_in"), row.value("flow_gpm"));
        let Some(height) = row.number("height_in").filter(|&height| height < head && head < 1.3 * height) else {
            continue;
        };
        let flow = |transition| {
            practice::closed_by(inches(width), inches(height), inches(head), transition).unwrap().0.to_gpm()
        };
        assert!(flow(Transition::Linear) < printed && printed < flow(Transition::LesserOf), "{:?}", row.cells());
        assert_relative_eq!(flow(Transition::Table), printed, max_relative = 0.005);
        met += 1;
    }
    assert_eq!(met, 6);
}

/// ASCE 7-16 Table C8.3-5, from memory. Its two entries of 25 and 40 gal/min at 2 in stand further off than 6 %: they are
/// rounded to 5.
#[test]
fn round_scuppers_follow_critical_depth() {
    let mut met = 0;
    for row in Table::read("scuppers_circular_us.csv").rows() {
        let (diameter, head, printed) = (row.value("diameter_in"), row.value("head_in"), row.value("flow_gpm"));
        if !(2.0..=diameter).contains(&head) {
            continue;
        }
        let got = circular::through_wall(inches(diameter), inches(head), circular::THROUGH_WALL).unwrap().to_gpm();
        let rounded = head < 2.5 && [5.0, 12.0].contains(&diameter);
        let tolerance = if rounded { 0.11 } else { 0.06 };
        assert_relative_eq!(got, printed, max_relative = tolerance);
        let (any_head, branch) = circular::pipe(inches(diameter), inches(head)).unwrap();
        assert_eq!(branch, Branch::Weir);
        assert_relative_eq!(any_head.to_gpm(), got);
        met += 1;
    }
    assert_eq!(met, 44);
}

/// Above a full pipe the lesser of the two branches stays on the safe side of the same table.
#[test]
fn round_scuppers_under_water_are_not_above_the_table() {
    for row in Table::read("scuppers_circular_us.csv").rows() {
        let (diameter, head, printed) = (row.value("diameter_in"), row.value("head_in"), row.value("flow_gpm"));
        if head > diameter {
            let got = circular::pipe(inches(diameter), inches(head)).unwrap().0.to_gpm();
            assert!(
                (0.90 * printed..=printed).contains(&got),
                "{diameter} in under {head} in: {got}, printed {printed}"
            );
        }
    }
}

/// National Standard Plumbing Code, appendix, from memory.
#[test]
fn contracted_scuppers_are_francis_with_two_contractions() {
    for row in Table::read("scuppers_contracted_us.csv").rows() {
        let (width, head) = (inches(row.value("width_in")), inches(row.value("head_in")));
        let got = weir::francis(width, head, EndContractions::Two).unwrap().to_gpm();
        assert!((got - row.value("flow_gpm")).abs() <= 1.0, "{:?}: {got}", row.cells());
    }
}

/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Table 8-1: every printed figure at its own head and length.
#[test]
fn broad_crests_are_read_as_printed() {
    for (file, column, edition, unit) in [
        ("broad_crest_si.csv", "head_m", Edition::Si, 1.0),
        ("broad_crest_us.csv", "head_ft", Edition::Us, METRES_PER_FOOT),
    ] {
        let table = Table::read(file);
        for row in table.rows() {
            for length in &table.heads()[1..] {
                let crest_length: f64 = length.strip_prefix("breadth_").unwrap().parse().unwrap();
                let got =
                    crest_table::coefficient(m(row.value(column) * unit), m(crest_length * unit), edition).unwrap();
                assert_relative_eq!(got, row.value(length) * unit.sqrt(), max_relative = 1e-9);
            }
        }
    }
}

/// The tabulated crest beside the short-crest form, where both hold: within 2 %, in the corner of low heads within 6 %.
#[test]
fn the_tabulated_crest_agrees_with_the_short_crest() {
    for (head, length, tolerance) in [(0.2, 0.4, 0.02), (0.3, 0.3, 0.02), (0.4, 0.4, 0.02), (0.1, 0.2, 0.06)] {
        let tabulated = crest_table::coefficient(m(head), m(length), Edition::Si).unwrap();
        assert_relative_eq!(crest::short_coefficient(head / length).unwrap(), tabulated, max_relative = tolerance);
    }
}

/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Example 8-6.
#[test]
fn a_riser_is_the_lesser_of_rim_and_mouth() {
    let diameter = m(0.53);
    for row in Table::read("riser.csv").rows() {
        let head = m(row.value("head_m"));
        let mouth = orifice::circular(diameter, head).unwrap();
        let rim = outlet::ring_dam(diameter, head, outlet::RISER_RIM / METRES_PER_FOOT.sqrt()).unwrap();
        assert_relative_eq!(mouth.m3_per_s(), row.value("orifice_m3_s"), max_relative = 0.03);
        // The rim at 0.1 m prints 0.1: half a digit is 5 % there.
        assert_relative_eq!(rim.m3_per_s(), row.value("weir_m3_s"), max_relative = 0.03, epsilon = 0.005);
        let (flow, branch) = outlet::riser(diameter, head).unwrap();
        assert_relative_eq!(flow, rim.min(mouth), max_relative = 1e-12);
        assert_eq!(branch == Branch::Weir, row.text("controls") == "weir");
    }
}

/// National Standard Plumbing Code 2006, Table 13.6.
#[test]
fn leaders_run_seven_24ths_full() {
    for row in Table::read("leaders_us.csv").rows() {
        let got = leader::wyly_eaton(inches(row.value("size_in")), Fill::SevenTwentyFourths).unwrap().to_gpm();
        assert!((got - row.value("flow_gpm")).abs() <= 1.0, "{:?}: {got}", row.cells());
    }
}

/// International Plumbing Code 2018, Table 1106.2, with the n its rows imply. 2, 5 and 15 in follow neither law.
#[test]
fn storm_drains_imply_a_smooth_pipe_but_for_three_sizes() {
    const SLOPES: [(&str, f64); 4] = [
        ("slope_1_16_gpm", 1.0 / 16.0),
        ("slope_1_8_gpm", 1.0 / 8.0),
        ("slope_1_4_gpm", 1.0 / 4.0),
        ("slope_1_2_gpm", 1.0 / 2.0),
    ];
    for row in Table::read("storm_drains_us.csv").rows() {
        let size = row.value("size_in");
        let (least, most) = match size {
            2.0 => (0.0078, 0.0085),
            5.0 => (0.0122, 0.0126),
            15.0 => (0.0107, 0.0111),
            _ => (0.0094, 0.0102),
        };
        for (column, per_foot) in SLOPES {
            let smooth = manning::storm_drain(inches(size), per_foot / 12.0, 0.010).unwrap().to_gpm();
            let implied = 0.010 * smooth / row.value(column);
            assert!((least..=most).contains(&implied), "{size} in, {column}: n {implied:.5}");
        }
        if ![2.0, 15.0].contains(&size) {
            let third = leader::wyly_eaton(inches(size), Fill::OneThird).unwrap().to_gpm();
            assert_relative_eq!(third, row.value("vertical_gpm"), max_relative = 0.05);
        }
    }
}

/// The integral over the hole and Staus's coefficient, ILRI publication 20, from memory; printed to four decimals.
#[test]
fn the_round_plate_follows_its_table() {
    for row in Table::read("circular_weir.csv").rows() {
        let fill = row.value("eta");
        let phi = circular::thin_plate_phi(fill).unwrap();
        assert_relative_eq!(phi, row.value("phi"), epsilon = 0.5e-4);
        let coefficient = circular::thin_plate_beyond(m(1.0), m(fill)).unwrap().m3_per_s() / phi;
        assert_relative_eq!(coefficient, row.value("Ce"), epsilon = 0.51e-4);
        // Greve's power law: within 3 % for a hole of 0.2 m a quarter to three quarters full.
        if (0.25..=0.75).contains(&fill) {
            let (diameter, head) = (m(0.2), m(0.2 * fill));
            let plate = circular::thin_plate(diameter, head).unwrap();
            assert_relative_eq!(circular::greve(diameter, head).unwrap(), plate, max_relative = 0.03);
        }
    }
}

/// EPA stormwater reference manual, vol. II, Table 6-2 (c1, c2 in feet) and ISO 1438, from memory (a, beta, kb).
#[test]
fn thin_plate_coefficients_follow_both_tables() {
    const IDEAL_US: f64 = 5.348;
    for row in Table::read("kindsvater_carter.csv").rows() {
        let ratio = row.value("b_over_B");
        // Head less its correction, so that (h + kh)^1.5 is 1; two widths tell kb from the coefficient.
        let head = m(1.0 - thin_plate::KINDSVATER_HEAD_CORRECTION);
        let flow = |width: f64, head_over_sill: f64| {
            thin_plate::kindsvater_carter(m(width), ratio, head, head * (1.0 / head_over_sill)).unwrap().m3_per_s()
        };
        let ideal = 2.0 / 3.0 * (2.0_f64 * 9.806_65).sqrt();
        let per_width = |head_over_sill: f64| (flow(3.0, head_over_sill) - flow(1.0, head_over_sill)) / 2.0 / ideal;
        let beta = per_width(2.0) - per_width(1.0);
        let a = per_width(1.0) - beta;
        assert_relative_eq!(a, row.value("a"), epsilon = 1e-9);
        assert_relative_eq!(beta, row.value("beta"), epsilon = 1e-9);
        if let Some(added) = row.number("kb_m") {
            assert_relative_eq!(flow(1.0, 1.0) / (per_width(1.0) * ideal) - 1.0, added, epsilon = 1e-9);
        }
        if let (Some(c1), Some(c2)) = (row.number("c1_us"), row.number("c2_us")) {
            assert_relative_eq!(a, c2 / IDEAL_US, epsilon = 0.0014);
            assert_relative_eq!(beta, c1 / IDEAL_US, epsilon = 0.0007);
        }
    }
}

/// FHWA-NHI-01-020 (HDS-5, 2nd ed., 2001), Table 9.
#[test]
fn inlet_constants_are_those_of_the_table() {
    let table = Table::read("inlet_control.csv");
    let of = |pipe: bool| table.rows().filter(move |row| row.text("shape").starts_with("circular") == pipe);
    let same = |row: Row, edge: &inlet::Edge| {
        let form = if row.text("form") == "1" { inlet::Form::One } else { inlet::Form::Two };
        assert_eq!(edge.form, form, "{}", edge.name);
        for (got, column) in [(edge.k, "K"), (edge.m, "M"), (edge.c, "c"), (edge.y, "Y")] {
            assert_relative_eq!(got, row.value(column));
        }
    };
    assert_eq!((of(true).count(), of(false).count()), (inlet::PIPE_EDGES.len(), inlet::BOX_EDGES.len()));
    of(true).zip(&inlet::PIPE_EDGES).for_each(|(row, edge)| same(row, edge.constants()));
    of(false).zip(&inlet::BOX_EDGES).for_each(|(row, edge)| same(row, edge.constants()));
}

/// The general-purpose library fluids 1.3.1. Left out: its contracted Kindsvater-Carter adds 0.1 mm to the head where the
/// method says 1 mm; its SIA weirs raise the wrong sum; Ackers and the V-notch have no counterpart here.
#[test]
fn library_values_are_met() {
    let argument = |row: Row, name: &str| -> f64 {
        let pairs = row.text("arguments").split("; ").map(|pair| pair.split_once('=').unwrap());
        pairs.filter(|(key, _)| *key == name).map(|(_, value)| value.parse().unwrap()).next().unwrap()
    };
    let mut met = 0;
    for row in Table::read("library_values.csv").rows() {
        let length = |name: &str| -> Length { m(argument(row, name)) };
        let (got, tolerance) = match row.text("function") {
            "V_Manning" => (manning::velocity(length("Rh"), argument(row, "S"), argument(row, "n")).unwrap(), 1e-9),
            "V_Chezy" => {
                (manning::chezy_velocity(length("Rh"), argument(row, "S"), argument(row, "C")).unwrap(), 1e-12)
            }
            "n_Manning_to_C_Chezy" => (manning::chezy_from_roughness(length("Rh"), argument(row, "n")).unwrap(), 1e-12),
            "C_Chezy_to_n_Manning" => (manning::chezy_from_roughness(length("Rh"), argument(row, "C")).unwrap(), 1e-12),
            // Its constants are rounded: 5e-5 apart.
            "Q_weir_rectangular_full_Kindsvater_Carter" => {
                let flow = thin_plate::kindsvater_carter(length("b"), 1.0, length("h1"), length("h2")).unwrap();
                (flow.m3_per_s(), 1e-4)
            }
            // It carries 0.0832 and 0.00125 m where the method as recalled has 0.083 and 0.0012 m.
            "Q_weir_rectangular_full_Rehbock" => {
                (thin_plate::rehbock(length("b"), length("h1"), length("h2")).unwrap().m3_per_s(), 1e-3)
            }
            _ => continue,
        };
        assert_relative_eq!(got, row.value("value"), max_relative = tolerance);
        met += 1;
    }
    assert_eq!(met, 9);
}

/// The US form 3.33 of Francis beside its metric rounding 1.84. Source: EPA stormwater reference manual, vol. II, eq. 6-18.
#[test]
fn the_metric_francis_is_the_us_one() {
    let one_foot = weir::francis(feet(10.0), feet(1.0), EndContractions::None).unwrap();
    assert_relative_eq!(to_cfs(one_foot), 33.3, max_relative = 1e-12);
    let one_metre = weir::francis(m(10.0), m(1.0), EndContractions::None).unwrap();
    assert_relative_eq!(one_metre.m3_per_s(), 18.4, max_relative = 1e-3);
}
