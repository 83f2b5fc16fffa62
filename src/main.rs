//! The `wane` program: everything is in the library.

fn main() -> std::process::ExitCode {
    wane::cli::run()
}
