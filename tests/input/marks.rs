//! Annotation files against what another program read.

use crate::support::shared;
use leadsheet::input;
use serde_json::Value;

#[test]
fn annotation_files_give_the_marks_that_another_program_read() {
    // Source: the wfdb package 4.3.1 for Python (see SOURCES.md beside the files); the first three are equal to
    // what WFDB's own C software prints of them.
    let Some(folder) = shared("formats/wfdb") else { return };
    for name in ["100.atr", "1003.atr", "12726.anI", "huge.qrs"] {
        let expected = std::fs::read_to_string(folder.join(format!("{name}.expected.json"))).expect("a text");
        let expected: Value = serde_json::from_str(&expected).expect("JSON");
        let column = |key: &str| expected[key].as_array().unwrap_or_else(|| panic!("{name}: {key}"));
        let found = input::marks(&folder.join(name)).unwrap_or_else(|error| panic!("{error}"));
        // Read off the bytes of the file.
        let definitions = if name == "1003.atr" { 6 } else { 0 };
        assert_eq!(found.definitions.len(), definitions, "{name}");
        let marks = found.marks;
        assert_eq!(marks.len(), column("sample").len(), "{name}");
        for (index, mark) in marks.iter().enumerate() {
            let what = format!("{name}, mark {index}");
            let number = |key: &str| column(key)[index].as_i64().expect("a number");
            assert_eq!(mark.tick, number("sample"), "{what}");
            let symbol = mark.symbol().map(String::from);
            assert_eq!(symbol.as_deref(), column("symbol")[index].as_str(), "{what}");
            assert_eq!(i64::from(mark.subtype), number("subtype"), "{what}");
            assert_eq!(i64::from(mark.channel), number("chan"), "{what}");
            assert_eq!(i64::from(mark.number), number("num"), "{what}");
            let text = column("aux")[index].as_str().expect("a text").trim_end_matches('\0').to_owned();
            assert_eq!(mark.text, text, "{what}");
        }
    }
}
