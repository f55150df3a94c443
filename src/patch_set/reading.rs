//! Reading: text to file, file to model, and positions for what is wrong.

use std::path::Path;

use ron::extensions::Extensions;

use super::PatchSet;
use super::diagnostic::{Diagnostic, Faults, Finding, Lines, Position, Reading};
use super::fault::SetFault;
use super::file::SetFile;
use super::locate::Locator;
use super::resolve;
use super::syntax::syntax;
use crate::pace;
use crate::surface::Place;

/// How the text may be written: `Some(...)` is never needed, nor a second pair
/// of brackets around the fields of a kind.
fn options() -> ron::Options {
    ron::Options::default()
        .with_default_extension(Extensions::IMPLICIT_SOME)
        .with_default_extension(Extensions::UNWRAP_VARIANT_NEWTYPES)
}

impl SetFile {
    /// The file as written, by the schema only: nothing in it is checked yet.
    ///
    /// # Errors
    /// The parser's fault, with its place.
    pub fn from_ron(text: &str, source_name: &str) -> Result<Self, Faults> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        // About right; it is for whoever waits.
        pace::expect(text.matches("surface").count() as u64, "patches");
        options().from_str(text).map_err(|error| Faults {
            list: vec![syntax(&error, text)],
            source_name: source_name.to_owned(),
        })
    }
}

impl PatchSet {
    /// Reads a set from RON text; `source_name` is what diagnostics call it.
    ///
    /// ```
    /// use chordwise::patch_set::PatchSet;
    /// let text = r#"(
    ///     units: mm,
    ///     patches: [(name: "ball", surface: Sphere(radius: 20))],
    /// )"#;
    /// let reading = PatchSet::from_ron(text, "ball.ron")?;
    /// assert_eq!(reading.set.pieces().len(), 8);
    /// # Ok::<(), chordwise::patch_set::Faults>(())
    /// ```
    ///
    /// # Errors
    /// The parser's fault, or else all faults of meaning at once.
    pub fn from_ron(text: &str, source_name: &str) -> Result<Reading, Faults> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let file = SetFile::from_ron(text, source_name)?;
        let source_name = source_name.to_owned();
        match resolve::resolve(file) {
            Ok((set, mut warnings)) => {
                place(&mut warnings, text);
                Ok(Reading {
                    set,
                    warnings,
                    source_name,
                })
            }
            Err(mut list) => {
                place(&mut list, text);
                Err(Faults { list, source_name })
            }
        }
    }

    /// Reads a set from a file.
    ///
    /// # Errors
    /// As [`PatchSet::from_ron`], or that the file cannot be read.
    pub fn read(path: impl AsRef<Path>) -> Result<Reading, Faults> {
        let path = path.as_ref();
        let source_name = path.display().to_string();
        match std::fs::read(path) {
            Ok(bytes) => Self::from_bytes(bytes, &source_name),
            Err(error) => Err(Faults::unreadable(&source_name, &error)),
        }
    }

    /// Reads a set from the bytes of a file.
    ///
    /// # Errors
    /// As [`PatchSet::from_ron`], or that the bytes are not UTF-8.
    pub fn from_bytes(bytes: Vec<u8>, source_name: &str) -> Result<Reading, Faults> {
        match String::from_utf8(bytes) {
            Ok(text) => Self::from_ron(&text, source_name),
            Err(_) => Err(Faults::of_file(source_name, SetFault::NotText)),
        }
    }

    /// Builds a set in code, by the same checks as a set from text.
    ///
    /// # Errors
    /// All faults at once; they have no position.
    pub fn build(file: SetFile) -> Result<Reading, Faults> {
        match resolve::resolve(file) {
            Ok((set, warnings)) => Ok(Reading {
                set,
                warnings,
                source_name: String::new(),
            }),
            Err(list) => Err(Faults {
                list,
                source_name: String::new(),
            }),
        }
    }
}

impl Faults {
    /// That a source cannot be read.
    #[must_use]
    pub fn unreadable(source_name: &str, error: &std::io::Error) -> Self {
        Self::of_file(source_name, SetFault::Unreadable(error.to_string()))
    }

    fn of_file(source_name: &str, fault: SetFault) -> Self {
        Self {
            list: vec![Diagnostic {
                finding: Finding::Fault(fault),
                place: String::new(),
                hint: None,
                position: None,
                path: Place::default(),
            }],
            source_name: source_name.to_owned(),
        }
    }
}

/// Gives every diagnostic its position, in the order of the text.
fn place(list: &mut [Diagnostic], text: &str) {
    if list.is_empty() {
        return;
    }
    let lines = Lines::new(text);
    let locator = Locator::new(text);
    for diagnostic in list.iter_mut() {
        let range = locator.locate(&diagnostic.path);
        diagnostic.position = Some(Position::new(text, range, &lines));
    }
    list.sort_by_key(|diagnostic| diagnostic.position.as_ref().map(|p| (p.line, p.column)));
}
