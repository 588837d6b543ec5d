//! Time of one flow and of one level for each kind of device under each law; the head is checked to lead back to its flow.

use brimline::device::{Device, Head, Kind, Law, Rating, RingDrain, Site, Size};
use brimline::roof::layout::{self, Group};
use brimline::roof::{Case, Limits, Ponding, Situation};
use brimline::units::{Flow, Length, Load};
use std::sync::Arc;

fn main() {
    divan::main();
}

fn inches(value: f64) -> Length {
    Length::inches(value)
}

fn pairs() -> Vec<(Kind, Law)> {
    Kind::ALL.iter().flat_map(|&kind| kind.laws().iter().map(move |&law| (kind, law))).collect()
}

fn names() -> Vec<String> {
    pairs().iter().map(|(kind, law)| format!("{kind}, {}", law.name())).collect()
}

fn size(name: &str) -> Size {
    let place = names().iter().position(|known| known == name).expect("a name of the list");
    let (kind, law) = pairs()[place];
    let device = match kind {
        Kind::OpenScupper => Device::Open { width: inches(12.0) },
        Kind::ClosedScupper => Device::Closed { width: inches(12.0), height: inches(6.0) },
        Kind::PipeScupper => Device::Pipe { diameter: inches(8.0) },
        Kind::OverflowDrain => Device::Drain(RingDrain {
            dam: inches(10.0),
            dam_height: inches(2.0),
            throat: inches(6.0),
            free_area: None,
        }),
        Kind::Standpipe => Device::Standpipe { diameter: inches(6.0) },
        Kind::RoofEdge => Device::Edge { width: inches(600.0) },
        Kind::Rated => {
            let rows = [(1.0, 80.0), (2.0, 190.0), (3.0, 380.0)].map(|(head, flow)| (inches(head), Flow::gpm(flow)));
            Device::Rated { width: None, rating: Arc::new(Rating::new(&rows).expect("rises")) }
        }
    };
    Size { law: Some(law), ..Size::of(device) }
}

fn site() -> Site {
    Site { thickness: Some(inches(10.0)), ..Site::default() }
}

#[divan::bench(args = names())]
fn flow(bencher: divan::Bencher, name: &str) {
    let curve = size(name).curve(&site(), inches(2.0), Length::ZERO).0;
    let less = curve.discharge(Head::of(inches(1.5))).flow;
    bencher.bench(|| {
        let found = curve.discharge(Head::of(divan::black_box(inches(2.5))));
        assert!(found.flow >= less);
        found
    });
}

#[divan::bench(args = names())]
fn level(bencher: divan::Bencher, name: &str) {
    let size = size(name);
    let case = Case::as_designed();
    let curve = size.curve(&site(), inches(2.0), Length::ZERO).0;
    let demand = curve.discharge(Head::of(inches(2.5))).flow;
    let situation = Situation {
        case: &case,
        demand: demand * 2.0,
        limits: Limits { load: Some(Load::psf(30.0)), depth: None },
        ponding: Ponding::default(),
        parapet: None,
        site: site(),
        freeboard: None,
        channel: None,
    };
    let group = Group { size: &size, count: 2, set_height: inches(2.0) };
    bencher.bench(|| {
        let state = layout::state(&[group], &situation);
        assert!(state.water.is_some_and(|water| water.level.m() <= 4.5 * 0.0254 + 1e-9));
        state
    });
}
