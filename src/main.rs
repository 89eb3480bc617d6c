//! The program: hands the command line to `cli` and ends with its exit code.

fn main() -> std::process::ExitCode {
    radsieve::cli::main()
}
