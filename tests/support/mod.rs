//! What the tests share: temporary folders, the annotated recordings, the program itself.

pub mod annotations;
pub mod dipole;
pub mod edf;
pub mod golden;
pub mod ishne;
pub mod npz;
pub mod program;
pub mod sheets;
pub mod tools;

use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicUsize, Ordering};

/// The project's folder.
pub fn project() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// The folder of outside material beside the project; `None` (said on stderr) in a clone without it.
/// With `CI` set, its absence is a failure.
pub fn shared(inside: &str) -> Option<PathBuf> {
    let folder = project().join("../shared").join(inside);
    if folder.exists() {
        return Some(folder);
    }
    assert!(std::env::var_os("CI").is_none(), "{} is missing, and in CI it must be there", folder.display());
    eprintln!("SKIPPED: {} is not here", folder.display());
    None
}

/// The WFDB headers in a folder, sorted.
pub fn headers(folder: &Path) -> Vec<PathBuf> {
    let mut headers: Vec<PathBuf> = std::fs::read_dir(folder)
        .expect("the folder can be read")
        .map(|entry| entry.expect("an entry").path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "hea"))
        .collect();
    headers.sort();
    headers
}

/// A fresh empty folder that goes away with the value.
pub struct TempDir(PathBuf);

impl TempDir {
    /// Creates it.
    pub fn new() -> Self {
        static NEXT: AtomicUsize = AtomicUsize::new(0);
        let name = format!("leadsheet-{}-{}", std::process::id(), NEXT.fetch_add(1, Ordering::Relaxed));
        let path = std::env::temp_dir().join(name);
        std::fs::create_dir_all(&path).expect("a temporary folder can be made");
        Self(path)
    }

    /// Where it is.
    pub fn path(&self) -> &Path {
        &self.0
    }
}

impl Drop for TempDir {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}
