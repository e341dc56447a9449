//! The flags that set how a sheet looks, checked; and the sheet itself.

use super::Failure;
use super::args::{CutArg, GainArg, LookArgs, MainsArg, PaperArg, SpeedArg};
use crate::case::{CAUTION, Case, Cut, Settings};
use crate::pdf;
use crate::recording::{Lead, Recording};
use crate::sheet::{DEFAULT_LAYOUT, Layout, Paper, SheetOptions, compose};
use crate::units::{Gain, Hertz, PaperSpeed};
use std::path::Path;

/// What is the same for every sheet of a call.
pub(super) struct Look {
    layout: Layout,
    options: SheetOptions,
    settings: Settings,
}

/// What the PDF says about itself: nothing that the recording doesn't.
fn document_info(case: &Case) -> pdf::DocumentInfo {
    let recording = &case.recording;
    let title = match &recording.subject.name {
        Some(name) => format!("12-lead sheet, {name}, {}", recording.source.file),
        None => format!("12-lead sheet, {}", recording.source.file),
    };
    pdf::DocumentInfo {
        title,
        subject: CAUTION.to_owned(),
        language: "en",
        creator: concat!("leadsheet ", env!("CARGO_PKG_VERSION")).to_owned(),
        date: recording.occasion.start.map(|start| (start.local, start.zone)),
    }
}

impl Look {
    /// The look of a sheet printed with no flags.
    pub(super) fn standard() -> Result<Self, Failure> {
        let layout = Layout::load(DEFAULT_LAYOUT).map_err(|error| Failure::Usage(error.to_string()))?;
        let options = SheetOptions {
            paper: Paper::A4,
            speed: PaperSpeed::literal(25.0),
            gain: Gain::literal(10.0),
            rhythm: Vec::new(),
        };
        Ok(Self { layout, options, settings: Settings::default() })
    }

    /// Checks the flags.
    pub(super) fn checked(args: &LookArgs) -> Result<Self, Failure> {
        let layout = Layout::load(&args.layout).map_err(|error| Failure::Usage(error.to_string()))?;
        let options = SheetOptions {
            paper: match args.paper {
                PaperArg::A4 => Paper::A4,
                PaperArg::Letter => Paper::Letter,
            },
            speed: PaperSpeed::literal(match args.speed {
                SpeedArg::Mm25 => 25.0,
                SpeedArg::Mm50 => 50.0,
                SpeedArg::Mm12_5 => 12.5,
            }),
            gain: Gain::literal(match args.gain {
                GainArg::Mm5 => 5.0,
                GainArg::Mm10 => 10.0,
                GainArg::Mm20 => 20.0,
            }),
            rhythm: args.rhythm.iter().map(|name| lead(name)).collect::<Result<_, _>>()?,
        };
        let settings = Settings {
            low_cut: cut(args.low_cut),
            high_cut: cut(args.high_cut),
            mains: match args.mains {
                MainsArg::Hz50 => Some(Hertz::literal(50.0)),
                MainsArg::Hz60 => Some(Hertz::literal(60.0)),
                MainsArg::Off => None,
            },
        };
        Ok(Self { layout, options, settings })
    }

    /// The sheet of a recording, as PDF bytes.
    ///
    /// # Errors
    /// The message, with the file in it.
    pub(super) fn sheet(
        &self,
        path: &Path,
        recording: Recording,
        sinus: Option<Recording>,
    ) -> Result<Vec<u8>, String> {
        let failed = |error: &dyn std::fmt::Display| format!("{}: {error}", path.display());
        recording.printable().map_err(|refusal| failed(&refusal))?;
        let case = Case::analyse(recording, sinus, self.settings).map_err(|error| failed(&error))?;
        let pages = compose(&case, &self.layout, &self.options).map_err(|error| failed(&error))?;
        pdf::write(&pages, &document_info(&case)).map_err(|error| failed(&error))
    }
}

fn cut(typed: Option<CutArg>) -> Cut {
    match typed {
        None => Cut::Default,
        Some(CutArg::Off) => Cut::Off,
        Some(CutArg::At(hertz)) => Hertz::new(hertz).map_or(Cut::Off, Cut::At),
    }
}

fn lead(name: &str) -> Result<Lead, Failure> {
    let known = || Lead::ALL.map(Lead::name).join(" ");
    Lead::ALL
        .into_iter()
        .find(|lead| lead.name().eq_ignore_ascii_case(name.trim()))
        .ok_or_else(|| Failure::Usage(format!("--rhythm: expected leads out of {}, found {name}", known())))
}
