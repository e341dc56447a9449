//! The program: see `leadsheet --help`.

fn main() -> std::process::ExitCode {
    leadsheet::cli::run(std::env::args_os())
}
