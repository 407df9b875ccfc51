//! A chart as a picture of pixels, with the shipped font, without anything installed.

use super::font;
use resvg::tiny_skia::{Pixmap, Transform};
use resvg::usvg::{self, Options, Tree};
use std::sync::{Arc, LazyLock};

/// Why a picture could not be made.
#[derive(Debug, thiserror::Error)]
pub enum PngError {
    /// The drawing is not readable SVG.
    #[error("the drawing cannot be read: {0}")]
    Svg(#[from] usvg::Error),
    /// The size is zero or too large.
    #[error("a picture of {width_px} by {height_px} px cannot be made")]
    Size { width_px: f32, height_px: f32 },
    /// The picture could not be written as PNG.
    #[error("the picture cannot be written: {0}")]
    Encode(String),
}

/// Only the shipped family, so that a picture is the same on every machine.
static FONTS: LazyLock<Arc<usvg::fontdb::Database>> = LazyLock::new(|| {
    let mut fonts = usvg::fontdb::Database::new();
    for file in font::FILES {
        fonts.load_font_data(file.to_vec());
    }
    fonts.set_sans_serif_family(font::FAMILY);
    Arc::new(fonts)
});

/// Draws an SVG picture as PNG, `scale` pixels for each of its own (2 for print and fine screens).
///
/// # Errors
/// [`PngError`] when the drawing cannot be read or the size is impossible.
pub fn png(svg: &str, scale: f32) -> Result<Vec<u8>, PngError> {
    let options = Options {
        fontdb: FONTS.clone(),
        font_family: font::FAMILY.to_owned(),
        ..Options::default()
    };
    let tree = Tree::from_str(svg, &options)?;
    let (width_px, height_px) = (tree.size().width() * scale, tree.size().height() * scale);
    let mut picture = Pixmap::new(width_px.ceil() as u32, height_px.ceil() as u32)
        .ok_or(PngError::Size { width_px, height_px })?;
    resvg::render(&tree, Transform::from_scale(scale, scale), &mut picture.as_mut());
    picture.encode_png().map_err(|error| PngError::Encode(error.to_string()))
}
