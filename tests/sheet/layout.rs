//! Layout files: those carried are sound, and everything wrong with a bad one is said at once.

use crate::support::golden::assert_golden;
use crate::support::project;
use leadsheet::sheet::{DEFAULT_LAYOUT, Layout, layouts};

#[test]
fn the_carried_layouts_are_sound_and_the_default_is_one_of_them() {
    if let Err(error) = Layout::load(DEFAULT_LAYOUT) {
        panic!("{error}");
    }
    let names: Vec<&str> = layouts().map(|layout| layout.name).collect();
    assert_eq!(names.first(), Some(&DEFAULT_LAYOUT));
    for entry in std::fs::read_dir(project().join("layouts")).expect("the layouts' folder") {
        let path = entry.expect("an entry").path();
        let stem = path.file_stem().expect("a name").to_string_lossy().into_owned();
        assert!(names.contains(&stem.as_str()), "{stem} is not carried");
        let from_file = Layout::load(&path.to_string_lossy()).unwrap_or_else(|error| panic!("{error}"));
        let carried = Layout::load(&stem).unwrap_or_else(|error| panic!("{error}"));
        assert_eq!(from_file.about, carried.about);
    }
}

#[test]
fn every_violation_of_a_layout_is_reported_with_its_line() {
    let folder = project().join("tests/sheet");
    let text = std::fs::read_to_string(folder.join("bad-layout.toml")).expect("the bad layout");
    let error = Layout::parse("bad-layout.toml", &text).expect_err("it breaks rules");
    assert_golden(&folder.join("bad-layout.txt"), &format!("{error}\n"));
}

#[test]
fn what_is_no_layout_is_refused_by_name_by_path_and_by_syntax() {
    let unknown = Layout::load("standart").expect_err("no such layout").to_string();
    assert!(unknown.contains("standart") && unknown.contains(DEFAULT_LAYOUT), "{unknown}");
    let missing = Layout::load("no/such/file.toml").expect_err("no such file").to_string();
    assert!(missing.contains("no/such/file.toml"), "{missing}");
    let syntax = Layout::parse("x.toml", "about = \"a\"\nstrips = [").expect_err("not TOML").to_string();
    assert!(syntax.starts_with("x.toml:2: not TOML"), "{syntax}");
    assert!(Layout::parse("x.toml", "").is_err());
}
