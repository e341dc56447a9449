//! Speed, as medians of whole processes: `cargo bench`.
//!
//! Prints each figure beside its budget, and the floor: reading, compressing and writing the same
//! bytes with nothing else done. It gates nothing; a busy machine must not fail a build.

use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

const PROGRAM: &str = env!("CARGO_BIN_EXE_leadsheet");

/// What one process took.
struct Cost {
    wall: Duration,
    cpu: Duration,
    peak_mb: f64,
}

fn cost_of(arguments: &[&str], folder: &Path) -> Cost {
    let start = Instant::now();
    // Waited for below, by wait4, which alone gives its usage.
    #[allow(clippy::zombie_processes)]
    let child = Command::new(PROGRAM)
        .args(arguments)
        .current_dir(folder)
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .spawn()
        .expect("the program starts");
    // SAFETY: wait4 fills the two values it is given; the child is ours and waited for once.
    let (usage, status) = unsafe {
        let mut status = 0;
        let mut usage: libc::rusage = std::mem::zeroed();
        libc::wait4(child.id() as libc::pid_t, &mut status, 0, &mut usage);
        (usage, status)
    };
    assert_eq!(status, 0, "leadsheet {arguments:?} failed");
    let time = |t: libc::timeval| Duration::new(t.tv_sec as u64, t.tv_usec as u32 * 1000);
    Cost {
        wall: start.elapsed(),
        cpu: time(usage.ru_utime) + time(usage.ru_stime),
        peak_mb: usage.ru_maxrss as f64 / 1024.0,
    }
}

fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[values.len() / 2]
}

fn line(what: &str, figure: f64, unit: &str, budget: &str) {
    println!("{what:<58} {figure:>9.2} {unit:<9} {budget}");
}

fn ms(duration: Duration) -> f64 {
    duration.as_secs_f64() * 1000.0
}

fn main() {
    let project = Path::new(env!("CARGO_MANIFEST_DIR"));
    let folder = std::env::temp_dir().join(format!("leadsheet-bench-{}", std::process::id()));
    fs::create_dir_all(&folder).expect("a temporary folder");
    let demo = project.join("demo-data/tachycardia.hea");
    let demo = demo.to_str().expect("a path in UTF-8");

    println!(
        "medians; sizes of this machine: {} threads\n",
        std::thread::available_parallelism().map_or(1, usize::from)
    );
    let runs: Vec<Cost> = (0..31).map(|_| cost_of(&["--version"], &folder)).collect();
    line("start-up (--version), wall", median(runs.iter().map(|c| ms(c.wall)).collect()), "ms", "budget 5");

    let print = ["print", demo, "-o", "sheet.pdf", "--overwrite"];
    let runs: Vec<Cost> = (0..31).map(|_| cost_of(&print, &folder)).collect();
    line(
        "print, 10 s × 12 leads at 500/s, CPU",
        median(runs.iter().map(|c| ms(c.cpu)).collect()),
        "ms",
        "budget 25",
    );
    line("print, wall", median(runs.iter().map(|c| ms(c.wall)).collect()), "ms", "");
    line("print, peak memory", median(runs.iter().map(|c| c.peak_mb).collect()), "MB", "budget 60");
    let sheet = fs::read(folder.join("sheet.pdf")).expect("the sheet");
    line("its PDF", sheet.len() as f64 / 1024.0, "KB", "budget 120");
    let runs: Vec<Cost> = (0..31).map(|_| cost_of(&["measure", demo], &folder)).collect();
    line("measure, CPU", median(runs.iter().map(|c| ms(c.cpu)).collect()), "ms", "");
    line("floor: read, compress, write the same bytes", floor(project, &folder, &sheet), "ms", "");

    let ludb = project.join("../shared/data/ludb");
    if ludb.exists() {
        batch(&ludb, &folder);
    } else {
        println!("SKIPPED: the batch of {} is not here", ludb.display());
    }
    let _ = fs::remove_dir_all(&folder);
}

fn floor(project: &Path, folder: &Path, sheet: &[u8]) -> f64 {
    let once = || {
        let start = Instant::now();
        let mut input = fs::read(project.join("demo-data/tachycardia.hea")).expect("the header");
        input.extend(fs::read(project.join("demo-data/tachycardia.dat")).expect("the samples"));
        let mut packer = flate2::write::ZlibEncoder::new(Vec::new(), flate2::Compression::default());
        packer.write_all(&input).expect("memory");
        let packed = packer.finish().expect("memory");
        fs::write(folder.join("floor.pdf"), sheet).expect("the folder takes a file");
        assert!(!packed.is_empty());
        ms(start.elapsed())
    };
    median((0..31).map(|_| once()).collect())
}

fn batch(ludb: &Path, folder: &Path) {
    let output: PathBuf = folder.join("all");
    let arguments =
        ["print", ludb.to_str().expect("UTF-8"), "-o", output.to_str().expect("UTF-8"), "--overwrite"];
    let runs: Vec<f64> = (0..5).map(|_| 100.0 / cost_of(&arguments, folder).wall.as_secs_f64()).collect();
    line("print, 100 recordings in one call", median(runs), "sheets/s", "budget 80 on two cores");
}
