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
}

impl Log {
    pub(super) fn put(&self, fault: Fault) {
        let mut faults = self.faults.borrow_mut();
        // One slip may be met on two ways; it is told once.
        if !faults.contains(&fault) {
            faults.push(fault);
        }
    }

    /// All faults, those of one file by their place in it.
    pub(super) fn into_faults(self) -> Faults {
        let mut faults = self.faults.into_inner();
        let mut files: Vec<Arc<Source>> = Vec::new();
        for fault in &faults {
            if let Some(place) = fault.places.first()
                && !files.iter().any(|known| Arc::ptr_eq(known, &place.source))
            {
                files.push(Arc::clone(&place.source));
            }
        }
        let order = |fault: &Fault| {
            fault.places.first().map(|place| {
                let file = files.iter().position(|known| Arc::ptr_eq(known, &place.source));
                (file, place.span.start)
            })
        };
        faults.sort_by_key(order);
        Faults(faults)
    }
}
