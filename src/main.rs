//! The program: arguments to a window or a command.

use std::process::ExitCode;

fn main() -> ExitCode {
    widefold::cli::run(|_study| {
        eprintln!("The window is not built yet. “widefold --help” lists the commands.");
        ExitCode::FAILURE
    })
}
