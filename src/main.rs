//! The `ventrise` program.

fn main() -> std::process::ExitCode {
    ventrise::run::run(std::env::args_os())
}
