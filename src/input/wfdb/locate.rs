//! Which header belongs to the path that was named.

use super::record_line::RecordLine;
use crate::input::files::{Candidate, text_of};
use crate::input::table::Score;
use std::fs::File;
use std::io::Read;
use std::path::{Path, PathBuf};

/// Sure when the text opens with a record line and goes on with a signal line; less so for a file that
/// merely has a header beside it.
pub(super) fn score(candidate: &Candidate) -> Score {
    match own_score(candidate.head()) {
        0 if companion(candidate).is_some() => 60,
        score => score,
    }
}

/// Whether the file is a header itself.
pub(super) fn is_header(candidate: &Candidate) -> bool {
    own_score(candidate.head()) >= 50
}

/// The header: the file itself, or the `.hea` beside it.
pub(super) fn header_of(candidate: &Candidate) -> PathBuf {
    if own_score(candidate.head()) > 0 {
        return candidate.path().to_path_buf();
    }
    companion(candidate).unwrap_or_else(|| candidate.path().to_path_buf())
}

fn own_score(head: &[u8]) -> Score {
    if head.contains(&0) {
        return 0;
    }
    let text = text_of(head);
    let mut lines = text.lines().map(str::trim).filter(|line| !line.is_empty() && !line.starts_with('#'));
    let Some(first) = lines.next() else { return 0 };
    let mut tokens = first.split_ascii_whitespace();
    let name_and_count =
        tokens.next().is_some() && tokens.next().is_some_and(|count| count.parse::<u64>().is_ok());
    if !name_and_count || first.contains([',', ';', '=']) {
        return 0;
    }
    let sound_record = RecordLine::parse(first, 1).is_ok();
    let mut second = lines.next().unwrap_or_default().split_ascii_whitespace();
    // Rows of numbers are a table: a signal file has a letter in its name.
    let file = second.next().is_some_and(|file| file == "~" || file.contains(char::is_alphabetic));
    let format_follows =
        file && second.next().is_some_and(|token| token.starts_with(|c: char| c.is_ascii_digit()));
    match (sound_record, format_follows, first.starts_with(|c: char| c.is_ascii_alphabetic())) {
        (true, true, _) => 95,
        (_, true, true) | (true, false, true) => 50,
        (false, true, false) => 30,
        _ => 0,
    }
}

/// `NAME.hea` beside `NAME` or `NAME.dat`.
fn companion(candidate: &Candidate) -> Option<PathBuf> {
    let path = candidate.path();
    let mut appended = path.as_os_str().to_owned();
    appended.push(".hea");
    [PathBuf::from(appended), path.with_extension("hea")]
        .into_iter()
        .find(|header| header.as_path() != path && header.is_file() && names(header, candidate))
}

/// Whether the header belongs to the path: a path that does not exist is a bare record name; a file must
/// be named by the header.
fn names(header: &Path, candidate: &Candidate) -> bool {
    let mut head = Vec::new();
    let read = File::open(header).and_then(|file| file.take(64 * 1024).read_to_end(&mut head));
    if read.is_err() || own_score(&head) == 0 {
        return false;
    }
    let Some(file) = candidate.path().file_name().and_then(|name| name.to_str()) else { return false };
    candidate.problem().is_some()
        || text_of(&head).lines().any(|line| line.split_ascii_whitespace().next() == Some(file))
}
