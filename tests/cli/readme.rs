//! Every command of the README works as it stands there.

use crate::support::program::leadsheet;
use crate::support::{TempDir, project};
use std::fs;

/// The commands of all `sh` blocks, in order.
fn commands(readme: &str) -> Vec<String> {
    let mut commands = Vec::new();
    let mut inside = false;
    for line in readme.lines() {
        match line.trim() {
            "```sh" => inside = true,
            "```" => inside = false,
            command if inside && !command.is_empty() => commands.push(command.to_owned()),
            _ => {}
        }
    }
    commands
}

/// Splits at spaces, but not inside double quotes.
fn words(command: &str) -> Vec<String> {
    let mut words = vec![String::new()];
    let mut quoted = false;
    for character in command.chars() {
        match character {
            '"' => quoted = !quoted,
            ' ' if !quoted => words.push(String::new()),
            other => words.last_mut().expect("never empty").push(other),
        }
    }
    words.retain(|word| !word.is_empty());
    words
}

#[test]
fn every_command_of_the_readme_works() {
    let readme = fs::read_to_string(project().join("README.md")).expect("the README");
    let commands = commands(&readme);
    assert!(commands.len() >= 10, "only {} commands found", commands.len());
    let folder = TempDir::new();
    for command in &commands {
        let words = words(command);
        let words: Vec<&str> = words.iter().map(String::as_str).collect();
        let arguments = match words.as_slice() {
            // This very run is `cargo test`; the check is that CI calls the same.
            ["cargo", "test"] => {
                let ci = fs::read_to_string(project().join(".ci/run")).expect(".ci/run");
                assert!(
                    ci.lines().any(|line| line.starts_with("cargo test")),
                    "CI runs the README's test command"
                );
                continue;
            }
            ["cargo", "bench"] => continue,
            // Minutes long; it is the test `accuracy::figures`, which writes this command into the README.
            ["cargo", "test", "--release", "--", "--ignored", "--nocapture", "accuracy"] => continue,
            ["cargo", "install", "--path", "."] => continue,
            ["cargo", "run", "--release", "--", arguments @ ..] => arguments,
            ["leadsheet", arguments @ ..] => arguments,
            _ => panic!("the README has a command that no test runs: {command}"),
        };
        let ran = leadsheet(folder.path(), arguments);
        assert_eq!(ran.status, Some(0), "{command}\n{}", ran.stderr);
    }
}

#[test]
fn every_picture_and_file_that_the_readme_names_is_there() {
    for name in ["README.md", "DEVELOPERS.md"] {
        let text = fs::read_to_string(project().join(name)).expect("the text");
        for target in text.split("](").skip(1).filter_map(|rest| rest.split(')').next()) {
            if target.starts_with("http") || target.starts_with('#') {
                continue;
            }
            assert!(project().join(target).exists(), "{name} names {target}");
        }
    }
}
