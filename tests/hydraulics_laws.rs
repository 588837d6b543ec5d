//! What holds for every law: nothing at no head, more flow under more head and without a jump, an answer or an error whatever
//! the input.

mod hydraulics_support;

use brimline::hydraulics::crest_table::{self, Edition};
use brimline::hydraulics::gutter::{self, Gutter, Outlet};
use brimline::hydraulics::inlet::{self, BOX_EDGES, Inlet, PIPE_EDGES};
use brimline::hydraulics::leader::{self, Fill};
use brimline::hydraulics::practice::{self, Transition};
use brimline::hydraulics::throat::Throat;
use brimline::hydraulics::weir::{self, Approach, EndContractions};
use brimline::hydraulics::{
    FlowError, circular, crest, critical, gutter_rules, manning, orifice, outlet, sag, submergence, thin_plate,
};
use brimline::units::{Area, Flow, Intensity, Length};
use proptest::prelude::*;

use hydraulics_support::{inches, m, m2, m3_s};

/// Flow from head, one law with its dimensions.
type Law = Box<dyn Fn(Length) -> Result<Flow, FlowError>>;

/// Every law that starts at no head, for an opening of width and height `b` and `h` in a wall of thickness `wall`.
fn laws_from_zero(b: Length, h: Length, wall: Length) -> Vec<(&'static str, Law)> {
    let mut laws: Vec<(&'static str, Law)> = vec![
        ("practice weir", Box::new(move |head| practice::weir(b, head))),
        ("practice, lesser of", Box::new(move |head| Ok(practice::closed(b, h, head)?.0))),
        ("practice, line", Box::new(move |head| Ok(practice::closed_by(b, h, head, Transition::Linear)?.0))),
        ("practice, table", Box::new(move |head| Ok(practice::closed_by(b, h, head, Transition::Table)?.0))),
        ("Francis", Box::new(move |head| weir::francis_beyond(b, head, EndContractions::Two))),
        ("sharp crest", Box::new(move |head| weir::sharp_crested(b, head, h))),
        ("EN weir", Box::new(move |head| weir::en_12056(b, head))),
        ("Kindsvater-Carter", Box::new(move |head| thin_plate::kindsvater_carter_beyond(b, 0.1, head, h))),
        ("critical depth", Box::new(move |head| crest::without_loss(b, head))),
        ("short crest", Box::new(move |head| crest::short_crest(b, head, wall))),
        ("round plate", Box::new(move |head| circular::thin_plate_beyond(h, head))),
        ("pipe", Box::new(move |head| Ok(circular::pipe(h, head)?.0))),
        ("rectangular orifice", Box::new(move |head| orifice::rectangular(b, h, head, 0.6))),
        ("EN round outlet", Box::new(move |head| Ok(outlet::en_12056_circular(h, head, outlet::STRAINED)?.0))),
        ("EN outlet", Box::new(move |head| Ok(outlet::en_12056_other(b, m2(b.m() * h.m()), head, outlet::CLEAR)?.0))),
        ("riser", Box::new(move |head| Ok(outlet::riser(h, head)?.0))),
        ("ring dam", Box::new(move |head| Ok(outlet::ring_dam_drain(b, outlet::THIN_RIM_US, h, wall, head)?.0))),
        ("grate", Box::new(move |head| Ok(sag::grate(b, m2(b.m() * h.m()), head)?.0))),
        ("curb opening", Box::new(move |head| Ok(sag::curb_opening(b, h, head)?.0))),
        ("level gutter", Box::new(move |head| gutter::level_capacity(b, head))),
    ];
    for loss in [0.0, 0.5, 0.9] {
        let throat = Throat::new(b, wall, 0.012, loss).unwrap();
        laws.push(("throat", Box::new(move |head| throat.flow(head))));
    }
    for transition in [inlet::Transition::Curve, inlet::Transition::Line] {
        for edge in &BOX_EDGES {
            let inlet = Inlet::of_box(b, h, edge, transition).unwrap();
            laws.push((edge.constants().name, Box::new(move |head| inlet.flow(head))));
        }
        for edge in &PIPE_EDGES {
            let inlet = Inlet::of_pipe(h, edge, transition).unwrap();
            laws.push((edge.constants().name, Box::new(move |head| inlet.flow(head))));
        }
    }
    laws
}

/// Heads a thousandth apart: the flow rises, by a hundredth at most, so it nowhere jumps. Most laws rise by 0.05 to 0.25 %; a
/// thin projecting wall, whose two parts nearly meet, by 0.4 %; a hard switch from weir to orifice would show 4.8 %.
#[test]
fn flow_rises_without_a_jump_from_a_hair_to_a_metre() {
    for (name, law) in laws_from_zero(inches(12.0), inches(4.0), inches(10.0)) {
        assert_eq!(law(Length::ZERO), Ok(Flow::ZERO), "{name}");
        let (mut head, mut below) = (1e-4, law(m(1e-4)).unwrap());
        while head < 1.0 {
            head *= 1.001;
            let flow = law(m(head)).unwrap();
            assert!(flow > below && flow < below * 1.01, "{name} at {head}: {below:?}, {flow:?}");
            below = flow;
        }
    }
}

/// A law with a narrower range, inside it.
#[test]
fn laws_with_a_range_rise_in_it() {
    let laws: [(&str, f64, f64, Law); 7] = [
        ("Francis", 0.0, 0.1, Box::new(|head| weir::francis(m(0.3), head, EndContractions::One))),
        ("Kindsvater-Carter", 0.03, 0.2, Box::new(|head| thin_plate::kindsvater_carter(m(0.3), 0.5, head, m(0.1)))),
        ("Rehbock", 0.03, 0.3, Box::new(|head| thin_plate::rehbock(m(1.0), head, m(0.3)))),
        ("long crest", 0.03, 0.099, Box::new(|head| crest::long_square_edged(m(0.3), head, m(0.3)))),
        ("crest table, metres", 0.1, 1.6, Box::new(|head| crest_table::flow(m(1.0), head, m(0.9), Edition::Si))),
        ("crest table, feet", 0.061, 1.67, Box::new(|head| crest_table::flow(m(1.0), head, m(0.3), Edition::Us))),
        ("round plate", 0.03, 0.18, Box::new(|head| circular::thin_plate(m(0.2), head))),
    ];
    for (name, low, high, law) in laws {
        let at = |step: i32| law(m(low + (high - low) * f64::from(step) / 500.0)).unwrap();
        assert!((1..=500).all(|step| at(step) > at(step - 1)), "{name}");
    }
}

proptest! {
    #[test]
    fn more_head_is_never_less_flow(
        b in 0.02..4.0_f64, h in 0.02..1.0_f64, wall in 0.0005..2.0_f64, low in 1e-4..2.0_f64, more in 1e-6..1.0_f64,
    ) {
        for (name, law) in laws_from_zero(m(b), m(h), m(wall)) {
            let (below, above) = (law(m(low)).unwrap(), law(m(low + more)).unwrap());
            prop_assert!(below >= Flow::ZERO && below <= above, "{}: {:?} then {:?}", name, below, above);
            prop_assert!(above.m3_per_s().is_finite(), "{}", name);
        }
    }

    #[test]
    fn head_and_flow_lead_back(b in 0.05..3.0_f64, h in 0.05..1.0_f64, wall in 0.0..2.0_f64, head in 0.001..1.5_f64) {
        let throat = Throat::new(m(b), m(wall), 0.012, 0.5).unwrap();
        let inlet = Inlet::of_box(m(b), m(h), &inlet::BOX_SQUARE, inlet::Transition::Curve).unwrap();
        let pipe = Inlet::of_pipe(m(h), &inlet::PIPE_SQUARE, inlet::Transition::Curve).unwrap();
        for there_and_back in [
            throat.head(throat.flow(m(head)).unwrap()).unwrap(),
            inlet.headwater(inlet.flow(m(head)).unwrap()).unwrap(),
            pipe.headwater(pipe.flow(m(head)).unwrap()).unwrap(),
            critical::circle_energy(critical::circle_flow(m(h), m(head.min(h))).unwrap(), m(h)).unwrap() * (head / head.min(h)),
        ] {
            prop_assert!((there_and_back.m() / head - 1.0).abs() < 1e-8, "{:?} of {}", there_and_back, head);
        }
    }

    /// A gutter deepens towards its dead end when level, and answers or refuses when it falls.
    #[test]
    fn a_gutter_answers_or_refuses(
        b in 0.05..1.0_f64, length in 0.5..60.0_f64, slope in 0.0..0.05_f64, flow in 1e-5..0.2_f64, pond in 0.0..0.5_f64,
    ) {
        let level = Gutter::new(m(b), m(length), 0.0, 0.012).unwrap();
        let dead_end = level.dead_end_depth(m3_s(flow), Outlet::Free).unwrap();
        let frictionless = gutter::level_dead_end_depth(m3_s(flow), m(b), Outlet::Free).unwrap();
        prop_assert!(dead_end >= frictionless * (1.0 - 1e-5), "{:?} under {:?}", dead_end, frictionless);
        let falling = Gutter::new(m(b), m(length), slope, 0.012).unwrap();
        for outlet in [Outlet::Free, Outlet::Pond(m(pond))] {
            match falling.dead_end_depth(m3_s(flow), outlet) {
                Ok(depth) => prop_assert!(depth.m() > 0.0 && depth.m().is_finite(), "{:?}", depth),
                Err(FlowError::OutsideRange { found, .. }) => prop_assert!(found >= 1.0, "{}", found),
                Err(other) => prop_assert!(false, "{other}"),
            }
        }
    }

    /// Numbers of any kind: an answer that is a number, or an error, and never a panic or an endless loop.
    #[test]
    fn nonsense_gives_an_error(a in anything(), b in anything(), c in anything(), d in anything()) {
        for (index, answer) in everything(a, b, c, d).into_iter().enumerate() {
            if let Ok(value) = answer {
                prop_assert!(!value.is_nan() && value >= 0.0, "call {}: {} from {:?}", index, value, (a, b, c, d));
            }
        }
    }
}

/// Ordinary sizes, tiny and huge ones, zero, negatives, and what is not a number.
fn anything() -> impl Strategy<Value = f64> {
    prop_oneof![
        4 => 1e-3..3.0_f64,
        2 => (-12..12_i32).prop_map(|power| 10.0_f64.powi(power)),
        1 => -2.0..0.0_f64,
        1 => prop_oneof![Just(0.0), Just(f64::NAN), Just(f64::INFINITY), Just(f64::NEG_INFINITY)],
    ]
}

fn everything(a: f64, b: f64, c: f64, d: f64) -> Vec<Result<f64, FlowError>> {
    let flow = |answer: Result<Flow, FlowError>| answer.map(Flow::m3_per_s);
    let length = |answer: Result<Length, FlowError>| answer.map(Length::m);
    let first =
        |answer: Result<(Flow, _), FlowError>| answer.map(|(flow, _): (Flow, practice::Branch)| flow.m3_per_s());
    let approach = Approach { width: m(c), sill_height: m(d) };
    let curve = inlet::Transition::Curve;
    let rain = Intensity::from_m_per_s(c);
    let mut answers = vec![
        flow(practice::weir(m(a), m(b))),
        flow(practice::orifice(m(a), m(b), m(c))),
        first(practice::closed_by(m(a), m(b), m(c), Transition::Table)),
        flow(weir::francis(m(a), m(b), EndContractions::Two)),
        flow(weir::francis_beyond(m(a), m(b), EndContractions::Two)),
        flow(weir::francis_with_approach(m(a), m(b), EndContractions::One, approach)),
        weir::fully_contracted(m(a), m(b)).map(|()| 0.0),
        flow(weir::sharp_crested(m(a), m(b), m(c))),
        flow(weir::en_12056(m(a), m(b))),
        flow(thin_plate::kindsvater_carter(m(a), b, m(c), m(d))),
        flow(thin_plate::kindsvater_carter_beyond(m(a), b, m(c), m(d))),
        flow(thin_plate::rehbock(m(a), m(b), m(c))),
        submergence::villemonte(m(a), m(b)),
        flow(crest::without_loss(m(a), m(b))),
        flow(crest::long_square_edged(m(a), m(b), m(c))),
        flow(crest::short_crest(m(a), m(b), m(c))),
        flow(crest_table::flow(m(a), m(b), m(c), Edition::Us)),
        circular::thin_plate_phi(a),
        flow(circular::thin_plate(m(a), m(b))),
        flow(circular::thin_plate_beyond(m(a), m(b))),
        flow(circular::greve(m(a), m(b))),
        flow(circular::through_wall(m(a), m(b), c)),
        first(circular::pipe(m(a), m(b))),
        length(critical::rectangle_energy(m3_s(a), m(b))),
        length(critical::trapezoid_energy(m3_s(a), m(b), c)),
        length(critical::circle(m3_s(a), m(b))),
        length(critical::circle_energy(m3_s(a), m(b))),
        length(critical::brink_depth(m(a))),
        flow(orifice::free(m2(a), m(b), c)),
        flow(orifice::drowned(m2(a), m(b), m(c), d)),
        flow(orifice::circular(m(a), m(b))),
        flow(orifice::rectangular(m(a), m(b), m(c), d)),
        first(outlet::en_12056_circular(m(a), m(b), c)),
        first(outlet::en_12056_other(m(a), m2(b), m(c), d)),
        first(outlet::riser(m(a), m(b))),
        first(outlet::ring_dam_drain(m(a), b, m(c), m(d), m(b))),
        length(outlet::scaled_head(m(a), m(b), m(c))),
        length(sag::grate_weir_depth(m(a), m3_s(b))),
        length(sag::grate_weir_perimeter(m3_s(a), m(b))),
        first(sag::grate(m(a), m2(b), m(c))),
        flow(sag::curb_weir(m(a), m(b), m(c))),
        flow(sag::depressed_curb_weir(m(a), m(b), m(c), m(d), m(b))),
        flow(sag::curb_orifice(m(a), m(b), m(c))),
        length(sag::curb_orifice_depth(m(a), m(b), m3_s(c))),
        first(sag::curb_opening(m(a), m(b), m(c))),
        flow(sag::slot_weir(m(a), m(b))),
        flow(sag::slot_orifice(m(a), m(b), m(c))),
        flow(manning::flow(Area::from_m2(a), m(b), c, d)),
        manning::chezy_velocity(m(a), b, c),
        manning::chezy_from_roughness(m(a), b),
        length(manning::normal_depth_rectangle(m3_s(a), m(b), c, d)),
        length(manning::normal_depth_circle(m3_s(a), m(b), c, d)),
        flow(manning::storm_drain(m(a), b, c)),
        flow(leader::wyly_eaton(m(a), Fill::OneThird)),
        flow(leader::en_12056(m(a), b)),
        length(leader::terminal_length(m3_s(a), m(b))),
        length(gutter::level_depth_at(m3_s(a), m(b), Outlet::Pond(m(c)), d)),
        flow(gutter::level_capacity(m(a), m(b))),
        flow(gutter_rules::en_12056_nominal(m2(a), gutter_rules::Shape::ValleyOrParapet)),
        gutter_rules::en_12056_length_factor(m(a), m(b)),
        length(gutter_rules::beij_width(a, m(b), rain, m2(d))),
    ];
    if let Ok(throat) = Throat::new(m(a), m(b), c, d) {
        answers.extend([length(throat.head(m3_s(a))), flow(throat.flow(m(d))), length(throat.inlet_depth(m3_s(b)))]);
    }
    if let Ok(inlet) = Inlet::of_box(m(a), m(b), &inlet::BOX_SQUARE, curve) {
        answers.extend([length(inlet.headwater(m3_s(c))), flow(inlet.flow(m(d)))]);
    }
    if let Ok(inlet) = Inlet::of_pipe(m(a), &inlet::PIPE_PROJECTING, curve) {
        answers.extend([length(inlet.headwater(m3_s(c))), flow(inlet.flow(m(d)))]);
    }
    if let Ok(gutter) = Gutter::new(m(a), m(b), c, d) {
        answers.push(length(gutter.dead_end_depth(m3_s(a), Outlet::Free)));
        answers.push(length(gutter.dead_end_depth(m3_s(c), Outlet::Pond(m(d)))));
    }
    answers
}
