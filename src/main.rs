//! The program: arguments to a window or a command.

use std::process::ExitCode;

fn main() -> ExitCode {
    widefold::cli::run(|study| match widefold::app::open(study) {
        Ok(()) => ExitCode::SUCCESS,
        Err(problem) => {
            eprintln!("{problem}");
            ExitCode::FAILURE
        }
    })
}
