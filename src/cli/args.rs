//! The command line as typed.

use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// Print, measure and file digital 12-lead recordings of regular narrow-complex tachycardias.
///
/// Everything is measured automatically and is not confirmed: for a qualified reader. Not a diagnosis.
/// Local protocols and licensed practice come first.
#[derive(Debug, Parser)]
#[command(name = "leadsheet", version, max_term_width = 100)]
pub struct Typed {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// The commands.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Print recordings as chart-ready PDF sheets at true scale
    Print(PrintArgs),
    /// Measure a recording and look for a retrograde P
    Measure(MeasureArgs),
    /// Write the decoded leads in mV, as CSV with its sidecar or as WFDB
    Export(ExportArgs),
    /// List the layouts
    Layouts,
    /// List the recording formats that are read
    Formats,
    /// Write the invented demo recordings and print their sheets
    Demo(DemoArgs),
}

/// `leadsheet print`.
#[derive(Debug, Args)]
pub struct PrintArgs {
    /// Recordings, or folders of recordings
    #[arg(required = true, value_name = "RECORDING")]
    pub recordings: Vec<PathBuf>,
    /// The sheet, or for several recordings the folder of the sheets [default: the recording's name with .pdf, here]
    #[arg(short, long, value_name = "FILE.pdf|DIR")]
    pub output: Option<PathBuf>,
    /// The same patient's sinus recording, to compare with
    #[arg(long, value_name = "RECORDING")]
    pub sinus: Option<PathBuf>,
    #[command(flatten)]
    pub look: LookArgs,
    /// Electrode placement other than standard, printed large
    #[arg(long, value_name = "TEXT")]
    pub placement: Option<String>,
    /// Manoeuvre during the recording, printed large
    #[arg(long, value_name = "TEXT")]
    pub manoeuvre: Option<String>,
    /// Drug given before or during the recording, printed large
    #[arg(long, value_name = "TEXT")]
    pub drug: Option<String>,
    /// Replace sheets that are already there
    #[arg(long)]
    pub overwrite: bool,
}

/// How a sheet looks.
#[derive(Debug, Args)]
pub struct LookArgs {
    /// A layout's name (see `leadsheet layouts`) or file
    #[arg(long, value_name = "NAME|FILE.toml", default_value = crate::sheet::DEFAULT_LAYOUT)]
    pub layout: String,
    /// Paper
    #[arg(long, value_enum, default_value = "a4")]
    pub paper: PaperArg,
    /// Paper speed in mm/s
    #[arg(long, value_enum, default_value = "25", value_name = "MM/S")]
    pub speed: SpeedArg,
    /// Gain in mm/mV
    #[arg(long, value_enum, default_value = "10", value_name = "MM/MV")]
    pub gain: GainArg,
    /// Rhythm leads, comma-separated [default: the layout's]
    #[arg(long, value_name = "LEADS", value_delimiter = ',')]
    pub rhythm: Vec<String>,
    /// Low cut of the printed traces [default: 0.5]
    #[arg(long, value_name = "HZ|off")]
    pub low_cut: Option<CutArg>,
    /// High cut of the printed traces [default: 150, or off where the sampling rate is too low for it]
    #[arg(long, value_name = "HZ|off")]
    pub high_cut: Option<CutArg>,
    /// Mains rejection of the printed traces
    #[arg(long, value_enum, default_value = "off", value_name = "50|60|off")]
    pub mains: MainsArg,
}

/// `leadsheet measure`.
#[derive(Debug, Args)]
pub struct MeasureArgs {
    /// The recording
    #[arg(value_name = "RECORDING")]
    pub recording: PathBuf,
    /// The same patient's sinus recording, to compare with
    #[arg(long, value_name = "RECORDING")]
    pub sinus: Option<PathBuf>,
    /// What to print
    #[arg(long, value_enum, default_value = "text")]
    pub format: FormatArg,
}

/// `leadsheet export`.
#[derive(Debug, Args)]
pub struct ExportArgs {
    /// The recording
    #[arg(value_name = "RECORDING")]
    pub recording: PathBuf,
    /// The file: the name's ending chooses CSV (with its sidecar beside it) or WFDB
    #[arg(short, long, value_name = "FILE.csv|FILE.hea")]
    pub output: PathBuf,
    /// Replace files that are already there
    #[arg(long)]
    pub overwrite: bool,
}

/// `leadsheet demo`.
#[derive(Debug, Args)]
pub struct DemoArgs {
    /// Where to write
    #[arg(value_name = "DIR", default_value = "leadsheet-demo")]
    pub folder: PathBuf,
    /// Replace files that are already there
    #[arg(long)]
    pub overwrite: bool,
}

/// Paper sizes.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[allow(missing_docs)]
pub enum PaperArg {
    A4,
    Letter,
}

/// Paper speeds.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[allow(missing_docs)]
pub enum SpeedArg {
    #[value(name = "25")]
    Mm25,
    #[value(name = "50")]
    Mm50,
    #[value(name = "12.5")]
    Mm12_5,
}

/// Gains.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[allow(missing_docs)]
pub enum GainArg {
    #[value(name = "5")]
    Mm5,
    #[value(name = "10")]
    Mm10,
    #[value(name = "20")]
    Mm20,
}

/// Mains frequencies.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[allow(missing_docs)]
pub enum MainsArg {
    #[value(name = "50")]
    Hz50,
    #[value(name = "60")]
    Hz60,
    Off,
}

/// Output formats of `measure`.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[allow(missing_docs)]
pub enum FormatArg {
    Text,
    Json,
    Csv,
}

/// A corner frequency or "off".
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum CutArg {
    /// No filter.
    Off,
    /// The corner, in Hz.
    At(f64),
}

impl std::str::FromStr for CutArg {
    type Err = String;
    fn from_str(text: &str) -> Result<Self, String> {
        if text.eq_ignore_ascii_case("off") {
            return Ok(CutArg::Off);
        }
        match text.parse::<f64>() {
            Ok(hertz) if hertz.is_finite() && hertz > 0.0 => Ok(CutArg::At(hertz)),
            _ => Err(format!("expected a frequency in Hz above 0, or off, found {text}")),
        }
    }
}
