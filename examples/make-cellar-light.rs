//! Makes the demo data "Cellar light": spectra of invented cheeses. See `demo-data/README.md`.

#[path = "demo/cellar.rs"]
mod cellar;
#[path = "demo/cellar_files.rs"]
mod cellar_files;
#[path = "demo/chance.rs"]
mod chance;
#[path = "demo/page.rs"]
mod page;

fn main() -> Result<(), Box<dyn std::error::Error>> {
    page::run(cellar_files::pages)
}
