//! PDF/A-3b (ISO 19005-3), which the file claims to be.

use super::sample::document;
use crate::support::TempDir;
use crate::support::tools::judge_text;
use leadsheet::sheet::Paper;

/// Prints what pikepdf's validator finds; it passes only what it knows to conform.
const CHECK: &str = "\
import sys
try:
    import pikepdf.pdfa as pdfa
except ImportError as error:
    print('MISSING', error)
    sys.exit()
for finding in pdfa.validate_written(sys.argv[1], '3b').findings:
    print(finding)
";

#[test]
fn a_validator_finds_the_file_archival_as_it_claims() {
    let folder = TempDir::new();
    let file = folder.path().join("page.pdf");
    for paper in [Paper::A4, Paper::Letter] {
        std::fs::write(&file, document(paper)).expect("the file can be written");
        let Some(found) = judge_text("python3", &["-c", CHECK, file.to_str().expect("UTF-8")]) else {
            return;
        };
        if found.starts_with("MISSING") {
            assert!(std::env::var_os("CI").is_none(), "pikepdf[pdfa] must be here in CI: {found}");
            eprintln!("SKIPPED: {found}");
            return;
        }
        // A wish of PDF 2.0 that the validator doesn't know; ISO 19005-3 leaves such keys to the reader.
        let unknown = "unrecognized key(s) /Enforce are not checked";
        let rest: Vec<&str> = found.lines().filter(|line| !line.contains(unknown)).collect();
        assert!(rest.is_empty(), "{rest:#?}");
    }
}
