//! The `equable` program.

fn main() -> std::process::ExitCode {
    equable::shell::main()
}
