//! Makes the demo data "Glasshouse sentinel": nights of invented bays. See `demo-data/README.md`.

#[expect(dead_code, reason = "the other generator uses the rest")]
#[path = "demo/chance.rs"]
mod chance;
#[path = "demo/glasshouse.rs"]
mod glasshouse;
#[path = "demo/glasshouse_files.rs"]
mod glasshouse_files;
#[expect(dead_code, reason = "the other generator uses the rest")]
#[path = "demo/page.rs"]
mod page;

fn main() -> Result<(), Box<dyn std::error::Error>> {
    page::run(glasshouse_files::pages)
}
