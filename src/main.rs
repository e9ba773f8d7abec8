//! The `couplet` command.

use std::process::ExitCode;

fn main() -> ExitCode {
    couplet::cli::main()
}
