//! A figure as pixels.
//!
//! What: SVG text drawn at a resolution, with the font that comes with the program and no other, so that
//! the picture is the same on every machine.
//! Source: crates `resvg`, `usvg`; font DejaVu Sans (`fonts/LICENSE`).

use std::sync::Arc;

use resvg::tiny_skia::{Pixmap, Transform};
use resvg::usvg::{Options, Tree, fontdb};

/// The font.
const FONT: &[u8] = include_bytes!("fonts/DejaVuSans-subset.ttf");
/// Pixels in an inch: what printers of line drawings ask for at least.
pub const PIXELS_PER_INCH: f64 = 400.0;
/// Pixels in an inch of SVG's own unit.
const SVG_PIXELS_PER_INCH: f64 = 96.0;

/// A figure that cannot be drawn.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("the figure cannot be drawn as pixels: {problem}; write it as .svg")]
pub struct RasterError {
    /// What is wrong.
    pub problem: String,
}

/// The PNG file of an SVG text.
///
/// # Errors
/// When the text is no SVG, or the picture would be too large.
pub fn png(svg: &str) -> Result<Vec<u8>, RasterError> {
    let wrong = |problem: String| RasterError { problem };
    let mut fonts = fontdb::Database::new();
    fonts.load_font_data(FONT.to_vec());
    fonts.set_sans_serif_family("DejaVu Sans");
    let options = Options {
        fontdb: Arc::new(fonts),
        ..Options::default()
    };
    let tree = Tree::from_str(svg, &options).map_err(|e| wrong(e.to_string()))?;
    #[expect(
        clippy::cast_possible_truncation,
        reason = "a scale of about 4 in the precision of the drawing"
    )]
    let scale = (PIXELS_PER_INCH / SVG_PIXELS_PER_INCH) as f32;
    let size = tree.size().to_int_size().scale_by(scale);
    let size = size.ok_or_else(|| wrong("it has no size".to_owned()))?;
    let pixmap = Pixmap::new(size.width(), size.height());
    let mut pixmap = pixmap.ok_or_else(|| {
        wrong(format!(
            "{} x {} pixels are too many",
            size.width(),
            size.height()
        ))
    })?;
    resvg::render(
        &tree,
        Transform::from_scale(scale, scale),
        &mut pixmap.as_mut(),
    );
    pixmap.encode_png().map_err(|e| wrong(e.to_string()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_is_drawn_and_nonsense_is_refused() {
        let picture = |text: &str| {
            png(&format!(
                r#"<svg xmlns="http://www.w3.org/2000/svg" width="10mm" height="5mm" font-family="DejaVu Sans"><text y="9" font-size="9">{text}</text></svg>"#
            ))
            .unwrap()
        };
        assert!(picture("°N\u{2212}\u{207b}²").len() > picture("").len() + 200);
        assert!(
            png("no svg")
                .unwrap_err()
                .to_string()
                .contains("write it as .svg")
        );
    }
}
