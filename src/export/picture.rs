//! Pictures as files: SVG text to PNG bytes, with the bundled fonts only.

use std::sync::{Arc, LazyLock};

use crate::figure::font::Face;
use resvg::tiny_skia::{Pixmap, Transform};
use resvg::usvg::{FontResolver, Options, Tree, fontdb};

/// The most pixels that are made: about a page of A3 at 600 dots per inch.
const MOST_PIXELS: f64 = 70e6;

/// Why a picture could not be made.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum PictureError {
    /// The text is not SVG, as the reader says.
    NotSvg(String),
    /// The picture would have no pixels, or more than are sensible.
    Size {
        /// Pixels across.
        width: u64,
        /// Pixels down.
        height: u64,
    },
    /// The pixels could not be packed, as the packer says.
    NotPacked(String),
}

/// The bundled fonts, read once.
static FONTS: LazyLock<Arc<fontdb::Database>> = LazyLock::new(|| {
    let mut fonts = fontdb::Database::new();
    for face in Face::ALL {
        fonts.load_font_data(face.bytes().to_vec());
    }
    fonts.set_sans_serif_family(Face::Sans.family());
    fonts.set_serif_family(Face::Serif.family());
    Arc::new(fonts)
});

/// How our SVG is read: with the bundled fonts, and each text in the fonts that it names. Left to
/// itself the reader sets a whole text in another font if one sign of it is missing; our painter
/// has named the font of each sign.
#[must_use]
pub fn options() -> Options<'static> {
    Options {
        font_family: Face::Sans.family().to_owned(),
        fontdb: Arc::clone(&FONTS),
        font_resolver: FontResolver {
            select_font: FontResolver::default_font_selector(),
            select_fallback: Box::new(|_, _, _| None),
        },
        ..Options::default()
    }
}

/// Paints SVG text and packs it as PNG, `scale` pixels for each unit of length. Uses the bundled
/// fonts only: the same text gives the same bytes on every machine.
///
/// # Errors
/// When the text is not SVG, or the picture would be empty or huge.
pub fn png(svg: &str, scale: f64) -> Result<Vec<u8>, PictureError> {
    let tree =
        Tree::from_str(svg, &options()).map_err(|error| PictureError::NotSvg(error.to_string()))?;
    let side = |length: f32| (f64::from(length) * scale).round().max(0.0);
    let (width, height) = (side(tree.size().width()), side(tree.size().height()));
    let too_large = PictureError::Size {
        width: width as u64,
        height: height as u64,
    };
    if width * height > MOST_PIXELS {
        return Err(too_large);
    }
    let mut pixels = Pixmap::new(width as u32, height as u32).ok_or(too_large)?;
    let scale = scale as f32;
    resvg::render(
        &tree,
        Transform::from_scale(scale, scale),
        &mut pixels.as_mut(),
    );
    pixels
        .encode_png()
        .map_err(|error| PictureError::NotPacked(error.to_string()))
}
