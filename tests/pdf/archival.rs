//! PDF/A-3b (ISO 19005-3), which the file claims to be.

use super::sample::document;
use crate::support::TempDir;
use crate::support::tools::judge_text;
use leadsheet::sheet::Paper;

/// Prints what pikepdf's validator finds.
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

/// Prints the largest difference, of 255, between colours and themselves turned from the file's output
/// profile into littlecms's own sRGB.
const COLOURS: &str = "\
import io, sys
try:
    import pikepdf
    from PIL import Image, ImageChops, ImageCms
except ImportError as error:
    print('MISSING', error)
    sys.exit()
with pikepdf.open(sys.argv[1]) as pdf:
    profile = pdf.Root.OutputIntents[0].DestOutputProfile.read_bytes()
colours = Image.new('RGB', (64, 64))
colours.putdata([(37 * n % 256, 91 * n % 256, n % 256) for n in range(4096)])
ours = ImageCms.ImageCmsProfile(io.BytesIO(profile))
turned = ImageCms.profileToProfile(colours, ours, ImageCms.createProfile('sRGB'), renderingIntent=1)
print(max(high for _, high in ImageChops.difference(colours, turned).getextrema()))
";

/// Runs a script on a page; `None` (said on stderr) where a module is missing. With `CI` set, that is a failure.
fn script(code: &str, paper: Paper) -> Option<String> {
    let folder = TempDir::new();
    let file = folder.path().join("page.pdf");
    std::fs::write(&file, document(paper)).expect("the file can be written");
    let said = judge_text("python3", &["-c", code, file.to_str().expect("UTF-8")])?;
    if !said.starts_with("MISSING") {
        return Some(said);
    }
    assert!(std::env::var_os("CI").is_none(), "in CI it must be here: {said}");
    eprintln!("SKIPPED: {said}");
    None
}

// Source: littlecms, as Pillow carries it.
#[test]
fn the_output_profile_is_srgb() {
    if let Some(difference) = script(COLOURS, Paper::A4) {
        assert!(["0", "1"].contains(&difference.trim()), "off by {difference} of 255");
    }
}

// Source: pikepdf's validator, which passes only what it knows to conform.
#[test]
fn a_validator_finds_the_file_archival_as_it_claims() {
    for paper in [Paper::A4, Paper::Letter] {
        let Some(found) = script(CHECK, paper) else { return };
        // A wish of PDF 2.0 that the validator doesn't know; ISO 19005-3 leaves such keys to the reader.
        let unknown = "unrecognized key(s) /Enforce are not checked";
        let rest: Vec<&str> = found.lines().filter(|line| !line.contains(unknown)).collect();
        assert!(rest.is_empty(), "{rest:#?}");
    }
}
