//! Faults and warnings as the reader is told of them.

use std::fmt;
use std::ops::Range;

use annotate_snippets::{AnnotationKind, Group, Level, Origin, Renderer, Snippet};

use super::PatchSet;
use super::fault::SetFault;
use super::warning::Warning;
use crate::surface::Place;

/// Where in a text something stands.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Position {
    /// The line, from 1.
    pub line: usize,
    /// The character in the line, from 1.
    pub column: usize,
    /// The line, or the part of a long line that is of interest.
    excerpt: String,
    /// Whether the excerpt begins later than the line.
    cut: bool,
    /// What is meant, as bytes of the excerpt.
    marked: Range<usize>,
}

/// What a diagnostic says.
#[derive(Debug, Clone, PartialEq)]
pub enum Finding {
    /// The set cannot be used.
    Fault(SetFault),
    /// The set can be used, but see this.
    Warning(Warning),
}

/// A fault or a warning with its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Diagnostic {
    /// What it is.
    pub finding: Finding,
    /// Whose it is and where, like ``patch `wing/2`, net[2][3]``.
    pub place: String,
    /// What to try.
    pub hint: Option<String>,
    /// Where in the text, if there is one.
    pub position: Option<Position>,
    /// The way to it from the whole file.
    pub(super) path: Place,
}

impl Diagnostic {
    /// The fault and the rule in one line, without the place.
    #[must_use]
    pub fn message(&self) -> String {
        match &self.finding {
            Finding::Fault(fault) => fault.to_string(),
            Finding::Warning(warning) => warning.to_string(),
        }
    }

    /// The message with the place before it.
    #[must_use]
    pub fn sentence(&self) -> String {
        if self.place.is_empty() {
            self.message()
        } else {
            format!("{}: {}", self.place, self.message())
        }
    }

    /// The diagnostic with the line it speaks of and a caret below it.
    #[must_use]
    pub fn render(&self, source_name: &str, colour: bool) -> String {
        let renderer = if colour {
            Renderer::styled()
        } else {
            Renderer::plain()
        };
        let sentence = self.sentence();
        let level = match self.finding {
            Finding::Fault(_) => Level::ERROR,
            Finding::Warning(_) => Level::WARNING,
        };
        let mut group = match &self.position {
            Some(position) => {
                let snippet = Snippet::source(&*position.excerpt)
                    .line_start(position.line)
                    .annotation(AnnotationKind::Primary.span(position.marked.clone()));
                let group = Group::with_title(level.primary_title(&*sentence));
                if position.cut {
                    // The snippet cannot know its column: say it before.
                    let origin = Origin::path(source_name)
                        .line(position.line)
                        .char_column(position.column);
                    group.element(origin).element(snippet)
                } else {
                    group.element(snippet.path(source_name))
                }
            }
            None => Group::with_title(level.primary_title(&*sentence))
                .element(Origin::path(source_name)),
        };
        if let Some(hint) = &self.hint {
            group = group.element(Level::HELP.message(&**hint));
        }
        renderer.render(&[group])
    }
}

/// The longest part of a line that is shown, in bytes.
const EXCERPT: usize = 120;

impl Position {
    /// The position of a byte range, which is cut to its first line.
    pub(super) fn new(text: &str, range: Range<usize>, lines: &Lines) -> Self {
        let start = range.start.min(text.len());
        let (line, line_start) = lines.of(start);
        let rest = &text[line_start..];
        let line_end = line_start + rest.find(['\n', '\r']).unwrap_or(rest.len());
        let start = start.min(line_end);
        let end = range.end.clamp(start, line_end);
        let column = text[line_start..start].chars().count() + 1;
        // Show a window around the start if the line is long.
        let from = boundary(
            text,
            if end - line_start <= EXCERPT {
                line_start
            } else {
                start.saturating_sub(EXCERPT / 3).max(line_start)
            },
        );
        let to = boundary(text, line_end.min(from + EXCERPT)).max(start);
        let cut = from > line_start;
        let lead = if cut { "..." } else { "" };
        let excerpt = format!("{lead}{}", text[from..to].replace('\t', " "));
        let from = from - lead.len();
        let marked = (start - from)..(end.min(to) - from);
        Self {
            line,
            column,
            excerpt,
            cut,
            marked,
        }
    }
}

/// The nearest character boundary at or below `at`.
fn boundary(text: &str, at: usize) -> usize {
    (0..=at.min(text.len()))
        .rev()
        .find(|&at| text.is_char_boundary(at))
        .unwrap_or(0)
}

/// Starts of the lines of a text.
#[derive(Debug)]
pub(super) struct Lines(Vec<usize>);

impl Lines {
    pub(super) fn new(text: &str) -> Self {
        let after = text.match_indices('\n').map(|(at, _)| at + 1);
        Self(std::iter::once(0).chain(after).collect())
    }

    /// Line number from 1 and start of the line in which a byte stands.
    fn of(&self, at: usize) -> (usize, usize) {
        let line = self.0.partition_point(|&start| start <= at);
        (line, self.0[line - 1])
    }

    /// The byte of a line and a column, both from 1, the column in characters.
    pub(super) fn byte(&self, text: &str, line: usize, column: usize) -> usize {
        let Some(&start) = self.0.get(line.saturating_sub(1)) else {
            return text.len();
        };
        text[start..]
            .char_indices()
            .nth(column.saturating_sub(1))
            .map_or(text.len(), |(at, _)| start + at)
    }
}

/// A valid set, and what its author should still look at.
#[derive(Debug, Clone)]
pub struct Reading {
    /// The set.
    pub set: PatchSet,
    /// Warnings, in the order of the file.
    pub warnings: Vec<Diagnostic>,
    /// The name of the source, as given.
    pub source_name: String,
}

/// All faults of a set.
#[derive(Debug, Clone, PartialEq)]
pub struct Faults {
    /// The faults, at least one, in the order of the file.
    pub list: Vec<Diagnostic>,
    /// The name of the source, as given; empty for a set built in code.
    pub source_name: String,
}

impl Faults {
    /// All faults with their lines and carets.
    #[must_use]
    pub fn render(&self, colour: bool) -> String {
        render(&self.list, &self.source_name, colour)
    }
}

/// Diagnostics one below the other, an empty line between.
pub fn render(list: &[Diagnostic], source_name: &str, colour: bool) -> String {
    let texts: Vec<String> = list
        .iter()
        .map(|diagnostic| diagnostic.render(source_name, colour))
        .collect();
    texts.join("\n\n")
}

impl fmt::Display for Faults {
    /// One line a fault, `file:line:column: place: fault; rule`.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (at, fault) in self.list.iter().enumerate() {
            if at > 0 {
                writeln!(f)?;
            }
            if !self.source_name.is_empty() {
                write!(f, "{}:", self.source_name)?;
                if let Some(position) = &fault.position {
                    write!(f, "{}:{}:", position.line, position.column)?;
                }
                write!(f, " ")?;
            }
            write!(f, "{}", fault.sentence())?;
            if let Some(hint) = &fault.hint {
                write!(f, " (hint: {hint})")?;
            }
        }
        Ok(())
    }
}

impl std::error::Error for Faults {}
