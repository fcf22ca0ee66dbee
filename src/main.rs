//! Hands the command line to `cli`.

fn main() -> std::process::ExitCode {
    wheelwort::cli::main()
}
