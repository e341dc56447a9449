//! The direction of imports, read from the source text.

use crate::support::project;
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

/// Each room with the rooms it may import from.
const ROOMS: &[(&str, &[&str])] = &[
    ("units", &[]),
    ("recording", &["units"]),
    ("lettering", &["units"]),
    ("input", &["units", "recording"]),
    ("condition", &["units", "recording"]),
    ("beats", &["units", "recording", "condition"]),
    ("average", &["units", "recording", "condition", "beats"]),
    ("measure", &["units", "recording", "condition", "beats", "average"]),
    ("findings", &["units", "recording", "condition", "beats", "average", "measure"]),
    ("case", &["units", "recording", "condition", "beats", "average", "measure", "findings"]),
    ("report", &["units", "recording", "beats", "measure", "findings", "case"]),
    (
        "sheet",
        &["units", "recording", "lettering", "condition", "beats", "average", "measure", "findings", "case"],
    ),
    ("pdf", &["units", "lettering", "sheet"]),
    ("batch", &["units"]),
    (
        "cli",
        &[
            "units",
            "recording",
            "lettering",
            "input",
            "condition",
            "beats",
            "average",
            "measure",
            "findings",
            "case",
            "report",
            "sheet",
            "pdf",
            "batch",
        ],
    ),
];

fn imports_of(folder: &Path, found: &mut BTreeMap<String, String>) {
    for entry in fs::read_dir(folder).expect("the room's folder can be read") {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            imports_of(&path, found);
            continue;
        }
        if path.extension().is_none_or(|extension| extension != "rs") {
            continue;
        }
        let text = fs::read_to_string(&path).expect("source is text");
        for (number, line) in text.lines().enumerate() {
            let code = line.split("//").next().unwrap_or("");
            for part in code.split("crate::").skip(1) {
                let names: Vec<&str> = match part.strip_prefix('{') {
                    Some(list) => list.split([',', '}']).collect(),
                    None => vec![part],
                };
                for name in names {
                    let room: String =
                        name.trim().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
                    if !room.is_empty() {
                        found.insert(room, format!("{}:{}", path.display(), number + 1));
                    }
                }
            }
        }
    }
}

#[test]
fn every_room_imports_only_from_the_floors_below() {
    let source = project().join("src");
    let mut wrong = Vec::new();
    for (room, allowed) in ROOMS {
        let mut found = BTreeMap::new();
        imports_of(&source.join(room), &mut found);
        for (import, place) in found {
            if import != *room && !allowed.contains(&import.as_str()) {
                wrong.push(format!("{room} imports {import} at {place}"));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_folder_of_the_source_is_a_room_of_the_list() {
    for entry in fs::read_dir(project().join("src")).expect("src can be read") {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            let name = path.file_name().expect("a name").to_string_lossy().into_owned();
            assert!(ROOMS.iter().any(|(room, _)| *room == name), "{name} is not in the list of rooms");
        }
    }
}
