//! Tools from outside the project that judge what it makes.

use std::process::Command;

/// Runs a tool and gives its standard output; `None` (said on stderr) where the machine lacks it.
/// With `CI` set, a missing tool is a failure. A tool that ends with an error always is.
pub fn judge(tool: &str, arguments: &[&str]) -> Option<Vec<u8>> {
    let output = match Command::new(tool).args(arguments).output() {
        Ok(output) => output,
        Err(error) => {
            assert!(
                std::env::var_os("CI").is_none(),
                "{tool} can't be run, and in CI it must be there: {error}"
            );
            eprintln!("SKIPPED: {tool} is not here ({error})");
            return None;
        }
    };
    let (out, err) = (String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr));
    assert!(output.status.success(), "{tool} {arguments:?} failed\n{out}\n{err}");
    // How this copy of the tool was built says nothing about the file.
    let complaints = err.lines().filter(|line| !line.contains("ICC support is not available"));
    assert_eq!(complaints.count(), 0, "{tool} {arguments:?} complained\n{err}\n{out}");
    Some(output.stdout)
}

/// As `judge`, for a tool that prints text.
pub fn judge_text(tool: &str, arguments: &[&str]) -> Option<String> {
    judge(tool, arguments).map(|bytes| String::from_utf8(bytes).expect("the tool prints UTF-8"))
}
