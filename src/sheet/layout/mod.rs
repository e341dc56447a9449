//! What stands where on a sheet, with which lines, texts and inks: read from TOML, checked whole.

mod check;
mod reader;

pub(super) use check::{BAR, BAR_GAP};

use super::Ink;
use super::Paper;
use crate::recording::Lead;
use std::fmt;
use std::path::{Path, PathBuf};

/// The layout that is used when none is named.
pub const DEFAULT_LAYOUT: &str = "standard";

/// The layouts that the program carries.
const CARRIED: [(&str, &str); 4] = [
    ("standard", include_str!("../../../layouts/standard.toml")),
    ("one-a-row", include_str!("../../../layouts/one-a-row.toml")),
    ("orderly", include_str!("../../../layouts/orderly.toml")),
    ("three-rhythm", include_str!("../../../layouts/three-rhythm.toml")),
];

/// A layout that the program carries.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LayoutInfo {
    /// As `--layout` takes it.
    pub name: &'static str,
    /// What it shows, in one line.
    pub about: String,
}

/// The layouts that the program carries, the default first.
pub fn layouts() -> impl Iterator<Item = LayoutInfo> {
    CARRIED.iter().filter_map(|(name, text)| {
        let layout = Layout::parse(name, text).ok()?;
        Some(LayoutInfo { name, about: layout.about })
    })
}

/// A checked layout. All lengths in mm.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// Name of a carried layout, or the file's path.
    pub name: String,
    /// What it shows, in one line.
    pub about: String,
    pub(super) strips: Strips,
    pub(super) lines: Lines,
    pub(super) texts: Texts,
    pub(super) a4: Geometry,
    pub(super) letter: Geometry,
}

/// A lead as a strip shows it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Shown {
    pub lead: Lead,
    /// Turned round, as −aVR.
    pub inverted: bool,
}

/// The rows of the grid field.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Strips {
    pub rows: Vec<Vec<Shown>>,
    pub rhythm: Vec<Shown>,
    pub pulse_column: f64,
    pub trace_width: f64,
}

/// Width and colour of a line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Line {
    pub width: f64,
    pub ink: Ink,
}

/// Every kind of line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Lines {
    pub trace: Line,
    pub pulse: Line,
    pub fine_ruling: Line,
    pub coarse_ruling: Line,
    pub separator: Line,
    pub rule: Line,
    pub bar: Line,
    pub mark: Line,
}

/// Em sizes and inks of the texts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Texts {
    pub lead_name: f64,
    pub name: f64,
    pub alert: f64,
    pub heading: f64,
    pub value: f64,
    pub body: f64,
    pub label: f64,
    pub ink: Ink,
    pub quiet_ink: Ink,
}

/// An upright rectangle, in mm from the paper's top left corner.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Area {
    pub left: f64,
    pub top: f64,
    pub width: f64,
    pub height: f64,
}

/// Where everything stands on one kind of paper.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Geometry {
    pub identification: Area,
    pub alerts: Area,
    pub field: Area,
    pub legend: Area,
    pub panels_on_own_page: bool,
    pub measurements: Area,
    pub findings: Area,
    pub notes: Area,
    pub caution: Area,
}

impl Area {
    pub fn right(&self) -> f64 {
        self.left + self.width
    }

    pub fn bottom(&self) -> f64 {
        self.top + self.height
    }

    /// Whether they share more than an edge.
    pub fn overlaps(&self, other: &Area) -> bool {
        self.left < other.right()
            && other.left < self.right()
            && self.top < other.bottom()
            && other.top < self.bottom()
    }
}

impl Layout {
    /// Rows that a field holds at most, rhythm rows included.
    pub const MOST_ROWS: usize = 15;

    /// A carried layout by its name, or one from a TOML file.
    ///
    /// # Errors
    /// When there is no such layout or file, or what it holds breaks the rules: all violations at once,
    /// each with its line.
    pub fn load(name_or_file: &str) -> Result<Self, LayoutError> {
        if let Some((name, text)) = CARRIED.iter().find(|(name, _)| *name == name_or_file) {
            return Self::parse(name, text);
        }
        let path = Path::new(name_or_file);
        if path.extension().is_none() && !path.exists() {
            return Err(LayoutError::Unknown(name_or_file.to_owned()));
        }
        let text = std::fs::read_to_string(path)
            .map_err(|error| LayoutError::Unreadable { path: path.to_owned(), why: error.to_string() })?;
        Self::parse(name_or_file, &text)
    }

    /// From the text of a TOML file; `name` stands in messages.
    ///
    /// # Errors
    /// All violations at once, each with its line.
    pub fn parse(name: &str, text: &str) -> Result<Self, LayoutError> {
        check::layout(name, text)
            .map_err(|violations| LayoutError::Violations { name: name.to_owned(), violations })
    }

    pub(super) fn geometry(&self, paper: Paper) -> &Geometry {
        match paper {
            Paper::A4 => &self.a4,
            Paper::Letter => &self.letter,
        }
    }
}

/// One rule that a layout file breaks.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Violation {
    /// 1-based.
    pub line: usize,
    /// Expected and found.
    pub what: String,
}

/// Why a layout can't be used.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum LayoutError {
    /// No carried layout has this name.
    Unknown(String),
    /// The file can't be read.
    Unreadable {
        /// Which file.
        path: PathBuf,
        /// Why.
        why: String,
    },
    /// The file breaks rules.
    Violations {
        /// The file, or the name of the layout.
        name: String,
        /// In order of line.
        violations: Vec<Violation>,
    },
}

impl fmt::Display for LayoutError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            LayoutError::Unknown(name) => {
                let known: Vec<&str> = CARRIED.iter().map(|(name, _)| *name).collect();
                write!(f, "no layout is named {name:?}; there are {}, or name a .toml file", known.join(", "))
            }
            LayoutError::Unreadable { path, why } => {
                write!(f, "{}: can't be read: {why}", path.display())
            }
            LayoutError::Violations { name, violations } => {
                for (index, Violation { line, what }) in violations.iter().enumerate() {
                    let separator = if index > 0 { "\n" } else { "" };
                    write!(f, "{separator}{name}:{line}: {what}")?;
                }
                Ok(())
            }
        }
    }
}

impl std::error::Error for LayoutError {}
