//! `rate`: what one device passes under a law, head by head.

use std::path::PathBuf;
use std::process::ExitCode;

use crate::device::{Choice, Device, Kind, Law, RingDrain, Site, Size};
use crate::input;
use crate::report::{self, Format, Rated};
use crate::units::{Area, Flow, Length};

use super::{Failure, Form, Units, deliver, faults, quantity, width};

/// Show what a device of any size passes under any flow law: a table of heads and flows, or the head for a flow.
///
/// Give a KIND with its dimensions, or --device TAG --catalog FILE. Quantities carry their units.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// Kind of device: open-scupper, closed-scupper, pipe-scupper, overflow-drain, standpipe or roof-edge.
    kind: Option<String>,
    /// Clear width; of a roof edge its length.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    width: Option<String>,
    /// Clear height of a closed scupper.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    height: Option<String>,
    /// Inside diameter of a pipe or standpipe, or of a drain's throat.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    diameter: Option<String>,
    /// Thickness of the parapet, for the laws of a thick wall.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    thickness: Option<String>,
    /// Diameter of a drain's ring dam.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    dam: Option<String>,
    /// Height of the ring dam above the throat.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    dam_height: Option<String>,
    /// Free area of a drain's dome.
    #[arg(long, value_name = "AREA", allow_hyphen_values = true)]
    free_area: Option<String>,
    /// Height of the sill above the roof before it, for the law kindsvater-carter.
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true, default_value = "2 in")]
    sill: String,
    /// Manning roughness of a throat.
    #[arg(long, value_name = "N", allow_hyphen_values = true, default_value_t = Choice::default().roughness)]
    roughness: f64,
    /// Entrance loss of a throat in velocity heads.
    #[arg(long, value_name = "KE", allow_hyphen_values = true, default_value_t = Choice::default().entrance_loss)]
    entrance_loss: f64,
    /// The flow law, or `all`.
    #[arg(long, value_name = "LAW")]
    law: Option<String>,
    /// One head, or FROM..TO..STEP with units on each.
    #[arg(long, value_name = "HEAD", allow_hyphen_values = true, default_value = "1 in..8 in..1 in")]
    head: String,
    /// Show the head that this flow needs, in place of flows.
    #[arg(long, value_name = "FLOW", allow_hyphen_values = true)]
    flow: Option<String>,
    /// A device of a catalog, by its tag; its sizes are told apart by --width, --height and --diameter.
    #[arg(long, value_name = "TAG", requires = "catalog", conflicts_with = "kind")]
    device: Option<String>,
    /// The catalog that has it.
    #[arg(long, value_name = "FILE", requires = "device")]
    catalog: Option<PathBuf>,
    /// Units of the result.
    #[arg(long, value_enum, default_value_t = Units::Us)]
    units: Units,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Form::Table)]
    format: Form,
    /// Write the result to a file instead of stdout.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let size = match (&args.device, &args.catalog, &args.kind) {
        (Some(tag), Some(catalog), _) => of_catalog(args, tag, catalog)?,
        (_, _, Some(kind)) => of_kind(args, kind)?,
        _ => return Err(Failure::said("a KIND or --device with --catalog is needed", &kinds_would_pass())),
    };
    let kind = size.device.kind();
    let thickness = length("--thickness", args.thickness.as_ref())?;
    for (flag, value) in [("--roughness", args.roughness), ("--entrance-loss", args.entrance_loss)] {
        if !(value.is_finite() && value >= 0.0) {
            return Err(Failure::said(
                &format!("{flag}: {value} is not a number of zero or more"),
                "give zero or more",
            ));
        }
    }
    let choice = Choice { roughness: args.roughness, entrance_loss: args.entrance_loss, ..Choice::default() };
    let site = Site { choice, thickness, floor: Length::ZERO, forced: None };
    let all = args.law.as_deref() == Some("all");
    let laws = match args.law.as_deref() {
        Some("all") => {
            let computed = |law: &Law| thickness.is_some() || !law.needs_thickness();
            kind.laws().iter().copied().filter(computed).collect()
        }
        Some(name) => vec![law(name, kind, thickness)?],
        None => vec![size.law_at(&site)],
    };
    let rated = Rated {
        sill: length("--sill", Some(&args.sill))?.unwrap_or(Length::ZERO),
        heads: heads(&args.head)?,
        flow: quantity("--flow", args.flow.as_ref(), Flow::m3_per_s)?,
        size: &size,
        site,
        laws,
        all,
        system: args.units.into(),
    };
    let format = Format::from(args.format);
    deliver(&report::rate(&rated, format, width(args.output.as_ref())), args.output.as_ref())?;
    Ok(ExitCode::SUCCESS)
}

fn kinds_would_pass() -> String {
    let names: Vec<_> =
        Kind::ALL.iter().filter(|&&kind| kind != Kind::Rated).map(|kind| kind.name().replace(' ', "-")).collect();
    format!("{} would pass", names.join(", "))
}

fn length(flag: &str, text: Option<&String>) -> Result<Option<Length>, Failure> {
    quantity(flag, text, Length::m)
}

fn need<T>(flag: &str, found: Option<T>, kind: Kind) -> Result<T, Failure> {
    found.ok_or_else(|| {
        Failure::said(&format!("a device of kind \"{kind}\" needs {flag}"), &format!("give {flag} with its unit"))
    })
}

/// Refuses a dimension that a kind does not have: left unsaid, the result would seem to heed it.
fn foreign(args: &Args, kind: Kind) -> Result<(), Failure> {
    let own: &[&str] = match kind {
        Kind::OpenScupper | Kind::RoofEdge => &["--width"],
        Kind::ClosedScupper => &["--width", "--height"],
        Kind::PipeScupper | Kind::Standpipe => &["--diameter"],
        Kind::OverflowDrain | Kind::Rated => &["--diameter", "--dam", "--dam-height", "--free-area"],
    };
    let given = [
        ("--width", &args.width),
        ("--height", &args.height),
        ("--diameter", &args.diameter),
        ("--dam", &args.dam),
        ("--dam-height", &args.dam_height),
        ("--free-area", &args.free_area),
    ];
    match given.iter().find(|(flag, value)| value.is_some() && !own.contains(flag)) {
        Some((flag, _)) => Err(Failure::said(
            &format!("a device of kind \"{kind}\" has no {flag}"),
            &format!("its dimensions are {}", own.join(", ")),
        )),
        None => Ok(()),
    }
}

fn of_kind(args: &Args, name: &str) -> Result<Size, Failure> {
    let plain = name.replace('-', " ");
    let found = Kind::ALL.into_iter().find(|kind| kind.name() == plain && *kind != Kind::Rated);
    let Some(kind) = found else {
        let computed = Kind::ALL.iter().filter(|&&kind| kind != Kind::Rated);
        let near = input::nearest(&plain, computed.map(|kind| kind.name()));
        let did_you = near.map_or(String::new(), |near| format!("did you mean {}? ", near.replace(' ', "-")));
        return Err(Failure::said(&format!("`{name}` is not a kind of device"), &(did_you + &kinds_would_pass())));
    };
    foreign(args, kind)?;
    let width = || length("--width", args.width.as_ref()).and_then(|found| need("--width", found, kind));
    let diameter = || length("--diameter", args.diameter.as_ref()).and_then(|found| need("--diameter", found, kind));
    let device = match kind {
        Kind::OpenScupper => Device::Open { width: width()? },
        Kind::ClosedScupper => {
            let height = length("--height", args.height.as_ref())?;
            Device::Closed { width: width()?, height: need("--height", height, kind)? }
        }
        Kind::PipeScupper => Device::Pipe { diameter: diameter()? },
        Kind::Standpipe => Device::Standpipe { diameter: diameter()? },
        Kind::RoofEdge => Device::Edge { width: width()? },
        Kind::OverflowDrain | Kind::Rated => Device::Drain(RingDrain {
            dam: need("--dam", length("--dam", args.dam.as_ref())?, kind)?,
            dam_height: length("--dam-height", args.dam_height.as_ref())?.unwrap_or(Length::ZERO),
            throat: diameter()?,
            free_area: quantity("--free-area", args.free_area.as_ref(), Area::m2)?,
        }),
    };
    Ok(Size::of(device))
}

/// The one size of a catalog's device that the given dimensions leave.
fn of_catalog(args: &Args, tag: &str, catalog: &std::path::Path) -> Result<Size, Failure> {
    let catalog = input::read_catalog(catalog).map_err(|found| faults(&found))?;
    let (width, height) = (length("--width", args.width.as_ref())?, length("--height", args.height.as_ref())?);
    let diameter = length("--diameter", args.diameter.as_ref())?;
    let same =
        |asked: Option<Length>, has: Option<Length>| asked.is_none_or(|asked| has.map(Length::nm) == Some(asked.nm()));
    let tagged: Vec<&Size> = catalog.sizes.iter().filter(|size| &*size.tag == tag).collect();
    if tagged.is_empty() {
        let mut tags: Vec<&str> = catalog.sizes.iter().map(|size| &*size.tag).collect();
        tags.dedup();
        let near = input::nearest(tag, tags.iter().copied());
        let did_you = near.map_or(String::new(), |near| format!("did you mean `{near}`? "));
        return Err(Failure::said(
            &format!("the catalog has no device `{tag}`"),
            &format!("{did_you}it has {}", tags.join(", ")),
        ));
    }
    let mut left = tagged.iter().filter(|size| {
        same(width, size.device.width()) && same(height, size.device.height()) && same(diameter, size.device.diameter())
    });
    match (left.next(), left.next()) {
        (Some(one), None) => Ok((*one).clone()),
        (Some(_), Some(_)) => Err(Failure::said(
            &format!("`{tag}` comes in {} sizes", tagged.len()),
            "tell which by --width, --height or --diameter",
        )),
        (None, _) => {
            Err(Failure::said(&format!("`{tag}` does not come in that size"), "see its ranges with `brimline catalog`"))
        }
    }
}

fn law(name: &str, kind: Kind, thickness: Option<Length>) -> Result<Law, Failure> {
    let names: Vec<&str> = kind.laws().iter().map(|law| law.name()).collect();
    let Some(&law) = kind.laws().iter().find(|law| law.name() == name) else {
        let near = input::nearest(name, names.iter().copied());
        let did_you = near.map_or(String::new(), |near| format!("did you mean `{near}`? "));
        return Err(Failure::said(
            &format!("`{name}` is not a law that a device of kind \"{kind}\" can follow"),
            &format!("{did_you}{} or all would pass", names.join(", ")),
        ));
    };
    if law.needs_thickness() && thickness.is_none() {
        return Err(Failure::said(
            &format!("the law `{name}` needs the thickness of the wall"),
            "give --thickness with its unit",
        ));
    }
    Ok(law)
}

/// One head, or a range of heads in whole steps.
fn heads(text: &str) -> Result<Vec<Length>, Failure> {
    const MOST: i64 = 10_000;
    let parts: Vec<&str> = text.split("..").map(str::trim).collect();
    let read =
        |part: &&str| part.parse::<Length>().map_err(|fault| Failure::said(&format!("--head: {fault}"), &fault.help()));
    let parts: Vec<Length> = parts.iter().map(read).collect::<Result<_, _>>()?;
    match parts[..] {
        [one] if one > Length::ZERO => Ok(vec![one]),
        [from, to, step] if step > Length::ZERO && from <= to && from >= Length::ZERO => {
            let steps = (to.nm() - from.nm()) / step.nm().max(1);
            if steps >= MOST {
                return Err(Failure::said(
                    &format!("--head: `{text}` makes more than {MOST} heads"),
                    "give a wider step",
                ));
            }
            Ok((0..=steps).map(|index| Length::from_nm(from.nm() + index * step.nm())).collect())
        }
        _ => Err(Failure::said(
            &format!("--head: `{text}` is neither a head above zero nor a range of heads"),
            "write \"3 in\", or FROM..TO..STEP such as \"1 in..8 in..1 in\"",
        )),
    }
}
