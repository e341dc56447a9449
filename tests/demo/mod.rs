//! The invented recordings in `demo-data/`: regenerated and compared byte for byte.

mod files;
mod scenario;

use crate::support::project;

/// Source: the generator, which doesn't use the program. `BLESS=1` rewrites the files.
#[test]
fn the_demo_recordings_are_what_the_generator_makes() {
    let demos = scenario::all();
    let mut all: Vec<(String, Vec<u8>)> = demos.iter().flat_map(files::wfdb).collect();
    all.extend(demos.iter().filter(|demo| demo.name != "onset").flat_map(files::csv));
    all.push(("truth.toml".to_owned(), files::truth(&demos).into_bytes()));
    let folder = project().join("demo-data");
    let mut sum = 0;
    for (name, bytes) in &all {
        let path = folder.join(name);
        if std::env::var_os("BLESS").is_some() {
            std::fs::write(&path, bytes).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        }
        let stored = std::fs::read(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        assert!(stored == *bytes, "{name} differs from what the generator makes; run with BLESS=1 to accept");
        sum += bytes.len();
    }
    assert!(sum < 2_500_000, "{sum} bytes are too many to keep in a repository");
    for entry in std::fs::read_dir(&folder).expect("demo-data can be read") {
        let name = entry.expect("an entry").file_name().to_string_lossy().into_owned();
        let known =
            ["README.md", "pictures"].contains(&name.as_str()) || all.iter().any(|(made, _)| *made == name);
        assert!(known, "{name} in demo-data is made by nothing");
    }
}
