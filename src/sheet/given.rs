//! What every part of the composition is given.

use super::draw::Style;
use super::layout::{Geometry, Layout, Shown};
use super::timing::Timing;
use super::{ComposeError, SheetOptions};
use crate::case::Case;
use crate::recording::{Channel, Lead};

/// A sheet being composed.
pub(super) struct Sheet<'a> {
    pub case: &'a Case,
    pub layout: &'a Layout,
    pub options: &'a SheetOptions,
    pub geometry: &'a Geometry,
    pub timing: Timing,
}

impl<'a> Sheet<'a> {
    pub fn new(case: &'a Case, layout: &'a Layout, options: &'a SheetOptions) -> Result<Self, ComposeError> {
        options.check()?;
        let geometry = layout.geometry(options.paper);
        let rhythm: Vec<Shown> = if options.rhythm.is_empty() {
            layout.strips.rhythm.clone()
        } else {
            options.rhythm.iter().map(|&lead| Shown { lead, inverted: false }).collect()
        };
        let (asked, most) = (layout.strips.rows.len() + rhythm.len(), Layout::MOST_ROWS);
        if asked > most {
            return Err(ComposeError::TooManyRows { asked, most });
        }
        let timing = Timing::of(case, &layout.strips, &rhythm, options);
        Ok(Self { case, layout, options, geometry, timing })
    }

    fn style(&self, size: f64) -> Style {
        Style::new(size, self.layout.texts.ink)
    }

    pub fn lead_name(&self) -> Style {
        self.style(self.layout.texts.lead_name).bold()
    }

    pub fn name(&self) -> Style {
        self.style(self.layout.texts.name).bold()
    }

    pub fn alert(&self) -> Style {
        self.style(self.layout.texts.alert).bold()
    }

    pub fn heading(&self) -> Style {
        self.style(self.layout.texts.heading).bold()
    }

    pub fn value(&self) -> Style {
        self.style(self.layout.texts.value)
    }

    pub fn body(&self) -> Style {
        self.style(self.layout.texts.body)
    }

    /// For what explains rather than tells.
    pub fn label(&self) -> Style {
        self.style(self.layout.texts.label).inked(self.layout.texts.quiet_ink)
    }

    /// Left end of the traces.
    pub fn traces_left(&self) -> f64 {
        self.geometry.field.left + self.layout.strips.pulse_column
    }

    /// Whether a lead was computed from I and II.
    pub fn derived(&self, lead: Lead) -> bool {
        matches!(self.case.recording.leads[lead], Channel::Derived(_))
    }
}

/// A number without needless zeros: 25, 12.5, 0.05.
pub(super) fn plain(value: f64) -> String {
    let text = format!("{value:.3}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Lead names in one text, as in "II, III, aVF".
pub(super) fn listed(leads: &[Lead]) -> String {
    leads.iter().map(|lead| lead.name()).collect::<Vec<_>>().join(", ")
}
