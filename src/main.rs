//! Runs one command of `brimline` and returns its exit code.

fn main() -> std::process::ExitCode {
    brimline::cli::run()
}
