//! Methods beside each other on one opening, and what one law becomes where another takes over.

mod hydraulics_support;

use approx::assert_relative_eq;
use brimline::hydraulics::gutter::{self, Gutter, Outlet};
use brimline::hydraulics::inlet::{self, Inlet};
use brimline::hydraulics::practice::{self, Transition};
use brimline::hydraulics::throat::{self, Throat};
use brimline::hydraulics::weir::{self, EndContractions};
use brimline::hydraulics::{crest, critical, thin_plate};
use brimline::units::{Flow, Length};

use hydraulics_support::{head_for, inches, m, m3_s};

fn square_box(transition: inlet::Transition) -> Inlet {
    Inlet::of_box(inches(12.0), inches(6.0), &inlet::BOX_SQUARE, transition).unwrap()
}

/// Head for 180 gal/min through 12 in, from the lowest to the highest, in; computed outside this program. A thin plate and a
/// thick wall differ by an eighth to a quarter in head.
#[test]
fn eleven_methods_rank_as_they_should() {
    let (flow, b) = (Flow::gpm(180.0), inches(12.0));
    let wall = |thickness: f64| head_for(flow, |head| crest::short_crest(b, head, inches(thickness)));
    let long_crest = wall_by_long_crest(flow, b);
    let ranked: [(&str, f64, Length); 11] = [
        ("Francis, no contraction", 2.926, head_for(flow, |head| weir::francis_beyond(b, head, EndContractions::None))),
        ("practice form", 2.991, head_for(flow, |head| practice::weir(b, head))),
        (
            "Kindsvater-Carter, sill at 2 in",
            3.001,
            head_for(flow, |head| thin_plate::kindsvater_carter_beyond(b, 0.0, head, inches(2.0))),
        ),
        (
            "Francis, two contractions",
            3.029,
            head_for(flow, |head| weir::francis_beyond(b, head, EndContractions::Two)),
        ),
        ("critical depth", 3.078, head_for(flow, |head| crest::without_loss(b, head))),
        ("short crest, 6 in wall", 3.379, wall(6.0)),
        ("short crest, 12 in wall", 3.434, wall(12.0)),
        ("long square-edged crest", 3.435, long_crest),
        ("inlet control", 3.480, square_box(inlet::Transition::Curve).headwater(flow).unwrap()),
        (
            "throat through 12 in",
            3.523,
            Throat::new(b, inches(12.0), 0.012, throat::SQUARE_EDGE_LOSS).unwrap().head(flow).unwrap(),
        ),
        ("EN 12056-3", 3.654, head_for(flow, |head| weir::en_12056(b, head))),
    ];
    for (method, expected, head) in &ranked {
        assert!(
            (head.to_inches() - expected).abs() < 0.002,
            "{method}: {:.4} in, expected {expected}",
            head.to_inches()
        );
    }
    assert!(ranked.windows(2).all(|pair| pair[0].2 < pair[1].2));
}

/// Halved from the bottom of its range, which a search from zero would be refused.
fn wall_by_long_crest(flow: Flow, b: Length) -> Length {
    let least = inches(1.2);
    head_for(flow, |head| crest::long_square_edged(b, head.max(least).min(inches(3.95)), inches(12.0)))
}

/// A throat without length or loss is critical depth, and nearly so when it is very short.
#[test]
fn a_throat_without_length_is_critical_depth() {
    for head in [0.01, 0.1, 0.5] {
        let critical = critical::rectangle_flow(m(0.3), m(head)).unwrap();
        let none = Throat::new(m(0.3), Length::ZERO, 0.012, 0.0).unwrap().flow(m(head)).unwrap();
        assert_relative_eq!(none, critical, max_relative = 1e-12);
        let short = Throat::new(m(0.3), m(1e-9), 0.012, 0.0).unwrap().flow(m(head)).unwrap();
        assert_relative_eq!(short, critical, max_relative = 1e-4);
    }
}

/// C of a short crest: 1.444 when long, 1.856 when thin. Source: Hager and Schwalt (1994), from memory.
#[test]
fn a_short_crest_has_both_ends() {
    assert_relative_eq!(crest::short_coefficient(0.01).unwrap(), 1.444, max_relative = 2e-4);
    assert_relative_eq!(crest::short_coefficient(20.0).unwrap(), 1.856, max_relative = 2e-4);
    let long = crest::long_square_edged(m(1.0), m(0.2), m(1.0)).unwrap();
    assert_relative_eq!(crest::short_crest(m(1.0), m(0.2), m(1.0)).unwrap(), long, max_relative = 0.003);
}

/// sqrt(3) critical depths at the dead end; friction adds 3 to 7 %, and a fall takes it off.
#[test]
fn a_gutter_without_friction_stands_at_root_three_critical_depths() {
    let (flow, b) = (m3_s(0.02), m(0.3));
    let critical = critical::rectangle(flow, b).unwrap();
    let depth = |length: f64, slope: f64, n: f64| {
        Gutter::new(b, m(length), slope, n).unwrap().dead_end_depth(flow, Outlet::Free).unwrap()
    };
    assert_relative_eq!(depth(10.0, 0.0, 0.0), critical * 3.0_f64.sqrt(), max_relative = 1e-6);
    assert_relative_eq!(depth(1e-6, 0.0, 0.011), critical * 3.0_f64.sqrt(), max_relative = 1e-4);
    let added = |length: f64| depth(length, 0.0, 0.011) / depth(length, 0.0, 0.0) - 1.0;
    assert!((0.03..0.07).contains(&added(10.0)) && (0.03..0.07).contains(&added(20.0)));
    assert!(depth(10.0, 0.005, 0.011) < depth(10.0, 0.002, 0.011));
    let capacity = gutter::level_capacity(b, critical * 3.0_f64.sqrt()).unwrap();
    assert_relative_eq!(capacity, flow, max_relative = 1e-12);
}

/// Through 12 x 6 in inlet control passes 0.79 to 0.81 of the practice weir at 2 to 5 in, and 0.88 to 0.94 of its orifice at 9
/// to 12 in. Computed outside this program.
#[test]
fn inlet_control_passes_less_than_the_practice_form() {
    let share = |head: f64, transition| {
        let practice = practice::closed(inches(12.0), inches(6.0), inches(head)).unwrap().0;
        square_box(transition).flow(inches(head)).unwrap() / practice
    };
    for transition in [inlet::Transition::Curve, inlet::Transition::Line] {
        for head in [2.0, 3.0, 4.0, 5.0] {
            assert!((0.785..0.815).contains(&share(head, transition)), "{head} in: {:.3}", share(head, transition));
        }
        for head in [9.0, 10.0, 12.0] {
            assert!((0.875..0.945).contains(&share(head, transition)), "{head} in: {:.3}", share(head, transition));
        }
    }
}

/// Three views of a thick wall agree within 4 % in flow.
#[test]
fn three_views_of_a_thick_wall_agree() {
    let (b, wall, head) = (inches(12.0), inches(12.0), inches(3.45));
    let crest = crest::long_square_edged(b, head, wall).unwrap();
    let throat = Throat::new(b, wall, 0.012, throat::SQUARE_EDGE_LOSS).unwrap().flow(head).unwrap();
    let inlet = square_box(inlet::Transition::Curve).flow(head).unwrap();
    assert_relative_eq!(throat, crest, max_relative = 0.04);
    assert_relative_eq!(inlet, crest, max_relative = 0.04);
}

/// Thin plates beside each other across a whole channel: within 1.5 %.
#[test]
fn thin_plates_agree() {
    let (b, head, sill) = (m(1.0), m(0.2), m(0.5));
    let rehbock = thin_plate::rehbock(b, head, sill).unwrap();
    assert_relative_eq!(thin_plate::kindsvater_carter(b, 1.0, head, sill).unwrap(), rehbock, max_relative = 0.015);
    assert_relative_eq!(weir::sharp_crested(b, head, sill).unwrap(), rehbock, max_relative = 0.015);
}

/// Lesser-of above the fitted line above the line to 1.4 h, at every head.
#[test]
fn transitions_keep_their_order() {
    for step in 0..400 {
        let head = inches(f64::from(step) / 50.0);
        let flow = |transition| practice::closed_by(inches(12.0), inches(4.0), head, transition).unwrap().0;
        let tiny = Flow::gpm(1e-9);
        assert!(flow(Transition::Linear) <= flow(Transition::Table) + tiny, "{head:?}");
        assert!(flow(Transition::Table) <= flow(Transition::LesserOf) + tiny, "{head:?}");
        assert!(flow(Transition::Linear) >= flow(Transition::LesserOf) * 0.958, "{head:?}");
    }
}
