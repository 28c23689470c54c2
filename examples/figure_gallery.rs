//! Draws one figure of each kind as SVG and PNG, in all palettes: to look at them.
//!
//! `cargo run --example figure_gallery -- FOLDER [WIDTH]`

#![expect(
    clippy::disallowed_methods,
    reason = "an example writes its pictures itself"
)]

#[path = "../tests/figures/sample.rs"]
mod sample;

use widefold::export::picture;
use widefold::figure::ink::Palette;
use widefold::figure::layout::{layout, natural_size};
use widefold::figure::svg::svg;

fn main() -> std::io::Result<()> {
    let folder = std::env::args()
        .nth(1)
        .unwrap_or_else(|| "target/gallery".to_owned());
    std::fs::create_dir_all(&folder)?;
    let palettes = [
        ("light", Palette::light()),
        ("dark", Palette::dark()),
        ("paper", Palette::paper()),
    ];
    let width = std::env::args()
        .nth(2)
        .and_then(|text| text.parse().ok())
        .unwrap_or(660.0);
    for (name, figure) in sample::all() {
        let picture = layout(&figure, natural_size(&figure, width)).with_margin(16.0);
        for (look, palette) in &palettes {
            let text = svg(&picture, palette);
            std::fs::write(format!("{folder}/{name}-{look}.svg"), &text)?;
            for scale in [1.0, 2.0] {
                let bytes = picture::png(&text, scale).expect("our own SVG can be painted");
                std::fs::write(format!("{folder}/{name}-{look}-{scale}x.png"), bytes)?;
            }
        }
    }
    Ok(())
}
