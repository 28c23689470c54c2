//! The program: arguments to a window or a command.

fn main() {}
