//! Reads a file and prints how long that took and how much memory it needed.
//!
//! `run` beside this file calls it together with other readers; see there.

use std::time::Instant;
use widefold::base::thread::Threads;
use widefold::base::work::Work;
use widefold::table::column::Values;
use widefold::table::read::{Options, read};

#[expect(
    clippy::disallowed_methods,
    clippy::print_stdout,
    reason = "a benchmark reads files, takes time and prints"
)]
fn main() {
    let mut arguments = std::env::args()
        .skip(1)
        .filter(|argument| argument != "--bench");
    let Some(path) = arguments.next() else {
        println!("usage: read FILE [THREADS] [TIMES]");
        return;
    };
    let mut number = |otherwise: usize| {
        arguments
            .next()
            .map_or(otherwise, |text| text.parse().expect("a number was given"))
    };
    let threads = Threads::new(number(2));
    let times = number(1);
    let mut best = f64::INFINITY;
    let (mut sum, mut values, mut size) = (0.0, 0, 0);
    for _ in 0..times {
        let start = Instant::now();
        let bytes = std::fs::read(&path).expect("the file can be read");
        size = bytes.len();
        let reading = read(
            &bytes,
            "table",
            &Options::default(),
            threads,
            &Work::unattended(),
        )
        .expect("nobody calls off")
        .expect("the file holds a table");
        best = best.min(start.elapsed().as_secs_f64());
        (sum, values) = (0.0, 0);
        for column in reading.table.columns() {
            if let Values::Numbers(numbers) = &column.values {
                values += numbers.values().len();
                sum += numbers
                    .values()
                    .iter()
                    .filter(|value| !value.is_nan())
                    .sum::<f64>();
            }
        }
    }
    // The most memory the process has ever had, in kilobytes (Linux).
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let peak: f64 = status
        .lines()
        .find_map(|line| line.strip_prefix("VmHWM:"))
        .and_then(|rest| rest.split_whitespace().next())
        .and_then(|kilobytes| kilobytes.parse().ok())
        .unwrap_or(f64::NAN);
    println!("{best} {} {values} {sum} {size}", peak * 1024.0);
}
