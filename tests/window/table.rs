//! Two invented tables: scans of dishes, and how sweet the dishes are.
#![expect(
    clippy::disallowed_methods,
    reason = "the tables are written for a journey"
)]

use std::path::Path;

/// 20 dishes with two scans of 24 readings each in `scans.csv`, of which the third and the eighth
/// follow the sweetness that `lab.csv` holds.
pub fn write(folder: &Path) {
    // A fixed sequence of pseudo-random numbers: Park and Miller (1988), minimal standard.
    let mut state = 20_260_301_u64;
    let mut noise = || {
        state = state * 16_807 % 2_147_483_647;
        state as f64 / 2_147_483_647.0 - 0.5
    };
    let mut scans = String::from("scan,dish");
    for reading in 1..=24 {
        scans.push_str(&format!(",r{reading}"));
    }
    let mut lab = String::from("dish,oven,sweetness\n");
    for dish in 1..=20 {
        let readings: Vec<f64> = (0..24).map(|_| noise()).collect();
        let sweetness = 5.0 + 2.0 * readings[2] - 1.5 * readings[7] + 0.3 * noise();
        lab.push_str(&format!("dish {dish:02},{},{sweetness:.3}\n", dish % 3 + 1));
        for scan in ["a", "b"] {
            scans.push_str(&format!("\n{dish:02}{scan},dish {dish:02}"));
            for reading in &readings {
                scans.push_str(&format!(",{:.4}", reading + 0.05 * noise()));
            }
        }
    }
    scans.push('\n');
    std::fs::write(folder.join("scans.csv"), scans).expect("the table can be written");
    std::fs::write(folder.join("lab.csv"), lab).expect("the table can be written");
}
