//! Faults of files: where, what was found, what would pass; all of them in one run.

use std::cell::RefCell;
use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};

/// A file as it was read, under the path that the user wrote.
#[derive(Debug, PartialEq, Eq)]
pub struct Source {
    /// The path as the user wrote it.
    pub path: String,
    /// Its text.
    pub text: String,
}

/// Bytes of a source.
pub type Span = Range<usize>;

/// How a message is meant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Severity {
    /// The input cannot be used.
    Error,
    /// The input can be used, but something in it is probably not meant.
    Warning,
}

/// A place in a file and what is to be said there.
#[derive(Clone, Debug, PartialEq)]
pub struct Place {
    /// The file.
    pub source: Arc<Source>,
    /// The bytes in it.
    pub span: Span,
    /// What stands there, in a few words.
    pub label: String,
}

/// One fault of a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// How it is meant.
    pub severity: Severity,
    /// What is wrong.
    pub title: String,
    /// Where it stands, and what it clashes with; empty for a fault of a whole file.
    pub places: Vec<Place>,
    /// What would pass.
    pub help: Option<String>,
    /// Whether something is absent: not to be believed of a file that could not be read whole.
    pub(super) absence: bool,
}

impl Fault {
    /// An error without a place.
    pub fn error(title: impl Into<String>) -> Self {
        Self { severity: Severity::Error, title: title.into(), places: Vec::new(), help: None, absence: false }
    }

    /// A warning without a place.
    pub fn warning(title: impl Into<String>) -> Self {
        Self { severity: Severity::Warning, ..Self::error(title) }
    }

    /// With a place; the first is the fault's own.
    #[must_use]
    pub fn at(mut self, source: &Arc<Source>, span: Span, label: impl Into<String>) -> Self {
        self.places.push(Place { source: Arc::clone(source), span, label: label.into() });
        self
    }

    /// With what would pass.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// As the absence of something.
    #[must_use]
    pub(super) fn absent(mut self) -> Self {
        self.absence = true;
        self
    }

    /// A message about no place in a file: its words alone.
    fn without_place(&self) -> String {
        let level = match self.severity {
            Severity::Error => "error",
            Severity::Warning => "warning",
        };
        let help = self.help.as_ref().map_or(String::new(), |help| format!("\n  = help: {help}"));
        format!("{level}: {}{help}", self.title)
    }

    /// The message as text, with colour where `styled`.
    pub fn render(&self, styled: bool) -> String {
        if self.places.is_empty() {
            return self.without_place();
        }
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Warning => Level::WARNING,
        };
        let title = level.primary_title(self.title.as_str());
        let mut group = annotate_snippets::Group::with_title(title);
        for (index, place) in self.places.iter().enumerate() {
            let kind = if index == 0 { AnnotationKind::Primary } else { AnnotationKind::Context };
            // Places in one file are drawn in one snippet: the first of a file takes the others in.
            if self.places[..index].iter().any(|before| Arc::ptr_eq(&before.source, &place.source)) {
                continue;
            }
            let snippet = Snippet::source(place.source.text.as_str()).path(place.source.path.as_str());
            let own = kind.span(within(place)).label(place.label.as_str());
            let others = self.places[index + 1..]
                .iter()
                .filter(|other| Arc::ptr_eq(&other.source, &place.source))
                .map(|other| AnnotationKind::Context.span(within(other)).label(other.label.as_str()));
            group = group.element(snippet.annotation(own).annotations(others));
        }
        if let Some(help) = &self.help {
            group = group.element(Level::HELP.message(help.as_str()));
        }
        let renderer = if styled { Renderer::styled() } else { Renderer::plain() };
        renderer.render(&[group])
    }
}

/// A span that lies in its text and covers something, on one line.
fn within(place: &Place) -> Span {
    let text = &place.source.text;
    let start = place.span.start.min(text.len());
    let end = place.span.end.clamp(start, text.len());
    let line_end = text[start..end].find('\n').map_or(end, |length| start + length);
    start..line_end
}

/// All faults of one run, errors and warnings, in the order of the files and of the places in them.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Faults(pub Vec<Fault>);

impl Faults {
    /// Whether one of them is an error.
    pub fn any_error(&self) -> bool {
        self.0.iter().any(|fault| fault.severity == Severity::Error)
    }

    /// All messages, parted by empty lines.
    pub fn render(&self, styled: bool) -> String {
        self.0.iter().map(|fault| fault.render(styled)).collect::<Vec<_>>().join("\n\n")
    }
}

impl fmt::Display for Faults {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.render(false))
    }
}

impl std::error::Error for Faults {}

/// Where readers of files put what they find.
#[derive(Debug, Default)]
pub(super) struct Log {
    faults: RefCell<Vec<Fault>>,
    /// The files in the order in which they were opened.
    opened: RefCell<Vec<Arc<Source>>>,
    broken: RefCell<Vec<Broken>>,
}

/// A file with faults of form.
#[derive(Debug)]
struct Broken {
    source: Arc<Source>,
    /// Faults of its form.
    faults: Vec<Fault>,
    /// Where the reader of its form stumbled: what stands there says nothing more.
    stumbled: Vec<Span>,
    /// Whether all of it was read in spite of them.
    complete: bool,
}

impl Log {
    pub(super) fn put(&self, fault: Fault) {
        let mut faults = self.faults.borrow_mut();
        // One slip may be met on two ways; it is told once.
        if !faults.contains(&fault) {
            faults.push(fault);
        }
    }

    /// Notes that a file was opened: faults are told in this order of files.
    pub(super) fn open(&self, source: &Arc<Source>) {
        self.opened.borrow_mut().push(Arc::clone(source));
    }

    /// Notes the faults of a file's form, where its reader stumbled, and whether it read all of it in spite of them.
    pub(super) fn broken(&self, source: &Arc<Source>, faults: Vec<Fault>, stumbled: Vec<Span>, complete: bool) {
        self.broken.borrow_mut().push(Broken { source: Arc::clone(source), faults, stumbled, complete });
    }

    /// Whether a file could be read whole, so far as its form goes.
    pub(super) fn is_whole(&self, source: &Arc<Source>) -> bool {
        !self.broken.borrow().iter().any(|broken| !broken.complete && Arc::ptr_eq(&broken.source, source))
    }

    /// All faults, those of one file by their place in it.
    ///
    /// Of a file that could not be read whole, nothing is told as absent, nor what stands where its reader stumbled.
    pub(super) fn into_faults(self) -> Faults {
        let (files, broken) = (self.opened.into_inner(), self.broken.into_inner());
        let is_doubtful = |fault: &Fault| {
            broken.iter().any(|broken| {
                let mut here = fault.places.iter().filter(|place| Arc::ptr_eq(&place.source, &broken.source));
                let in_doubt =
                    |place: &Place| broken.stumbled.iter().any(|stumbled| stumbled.contains(&place.span.start));
                here.any(|place| (fault.absence && !broken.complete) || in_doubt(place))
            })
        };
        let mut faults: Vec<Fault> = self.faults.into_inner().into_iter().filter(|fault| !is_doubtful(fault)).collect();
        faults.extend(broken.iter().flat_map(|broken| broken.faults.iter().cloned()));
        faults.sort_by_key(|fault| {
            fault.places.first().map(|place| {
                let file = files.iter().position(|known| Arc::ptr_eq(known, &place.source));
                (file, place.span.start)
            })
        });
        Faults(faults)
    }
}
