//! Writes SVG.
//!
//! Format facts (SVG 1.1): coordinates grow to the right and downwards; text and attributes escape
//! &, <, > and quotes; images lie in the file as base64.

use std::fmt::Write as _;

use base64::Engine as _;
use base64::engine::general_purpose::STANDARD;

use super::{About, POINTS_PER_MM, TEXT_PT};

/// Colour of axes and text.
pub(super) const INK: &str = "#222222";
/// Colour of the lines of the grid.
pub(super) const GRID: &str = "#e4e4e4";

/// Where a text ends at its place.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Anchor {
    Start,
    Middle,
    End,
}

/// Which way a text runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Run {
    Across,
    Upwards,
}

/// A drawing of a size in points.
pub(super) struct Svg {
    body: String,
    size_pt: [f64; 2],
}

impl Svg {
    /// An empty drawing, white.
    pub(super) fn new(size_pt: [f64; 2]) -> Self {
        let mut svg = Self {
            body: String::new(),
            size_pt,
        };
        svg.put(&format!(
            r##"<rect width="{}" height="{}" fill="#ffffff"/>"##,
            short(size_pt[0]),
            short(size_pt[1])
        ));
        svg
    }

    fn put(&mut self, element: &str) {
        self.body.push_str(element);
        self.body.push('\n');
    }

    /// A straight line.
    pub(super) fn line(&mut self, from: [f64; 2], to: [f64; 2], colour: &str, width_pt: f64) {
        self.put(&format!(
            r#"<line x1="{}" y1="{}" x2="{}" y2="{}" stroke="{colour}" stroke-width="{}"/>"#,
            short(from[0]),
            short(from[1]),
            short(to[0]),
            short(to[1]),
            short(width_pt)
        ));
    }

    /// A line through points.
    pub(super) fn path(&mut self, points: &[[f64; 2]], colour: &str, width_pt: f64) {
        let mut d = String::new();
        for (n, [x, y]) in points.iter().enumerate() {
            let letter = if n == 0 { 'M' } else { 'L' };
            // Writing to a string cannot fail.
            let _ = write!(d, "{letter}{} {}", short(*x), short(*y));
        }
        self.put(&format!(
            r#"<path d="{d}" fill="none" stroke="{colour}" stroke-width="{}" stroke-linejoin="round" stroke-linecap="round"/>"#,
            short(width_pt)
        ));
    }

    /// Straight pieces of lines.
    pub(super) fn pieces(&mut self, pieces: &[[[f64; 2]; 2]], colour: &str, width_pt: f64) {
        let mut d = String::new();
        for [from, to] in pieces {
            // Writing to a string cannot fail.
            let _ = write!(
                d,
                "M{} {}L{} {}",
                short(from[0]),
                short(from[1]),
                short(to[0]),
                short(to[1])
            );
        }
        self.put(&format!(
            r#"<path d="{d}" fill="none" stroke="{colour}" stroke-width="{}" stroke-linecap="round"/>"#,
            short(width_pt)
        ));
    }

    /// A point.
    pub(super) fn dot(&mut self, at: [f64; 2], colour: &str, radius_pt: f64) {
        self.put(&format!(
            r#"<circle cx="{}" cy="{}" r="{}" fill="{colour}"/>"#,
            short(at[0]),
            short(at[1]),
            short(radius_pt)
        ));
    }

    /// The outline of a rectangle.
    pub(super) fn frame(&mut self, [x, y]: [f64; 2], [width, height]: [f64; 2]) {
        self.put(&format!(
            r#"<rect x="{}" y="{}" width="{}" height="{}" fill="none" stroke="{INK}" stroke-width="0.6"/>"#,
            short(x),
            short(y),
            short(width),
            short(height)
        ));
    }

    /// Text; the height of its place is that of its base line.
    pub(super) fn text(&mut self, at: [f64; 2], text: &str, anchor: Anchor, run: Run) {
        let anchor = match anchor {
            Anchor::Start => "",
            Anchor::Middle => r#" text-anchor="middle""#,
            Anchor::End => r#" text-anchor="end""#,
        };
        let (x, y) = (short(at[0]), short(at[1]));
        let turned = match run {
            Run::Across => String::new(),
            Run::Upwards => format!(r#" transform="rotate(-90 {x} {y})""#),
        };
        self.put(&format!(
            r#"<text x="{x}" y="{y}"{anchor}{turned}>{}</text>"#,
            escaped(text)
        ));
    }

    /// A picture of pixels (PNG).
    pub(super) fn image(&mut self, [x, y]: [f64; 2], [width, height]: [f64; 2], png: &[u8]) {
        self.put(&format!(
            r#"<image x="{}" y="{}" width="{}" height="{}" preserveAspectRatio="none" image-rendering="optimizeSpeed" xlink:href="data:image/png;base64,{}"/>"#,
            short(x),
            short(y),
            short(width),
            short(height),
            STANDARD.encode(png)
        ));
    }

    /// The whole file.
    pub(super) fn finish(self, about: &About) -> String {
        let [width, height] = self.size_pt;
        format!(
            concat!(
                r#"<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink" "#,
                r#"width="{}mm" height="{}mm" viewBox="0 0 {} {}" "#,
                r#"font-family="DejaVu Sans, Verdana, sans-serif" font-size="{}" fill="{}">"#,
                "\n<title>{}</title>\n<desc>{}</desc>\n{}</svg>\n"
            ),
            short(width / POINTS_PER_MM),
            short(height / POINTS_PER_MM),
            short(width),
            short(height),
            short(TEXT_PT),
            INK,
            escaped(&about.title),
            escaped(&about.description),
            self.body
        )
    }
}

/// A number with at most two decimals.
fn short(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" {
        "0".to_owned()
    } else {
        text.to_owned()
    }
}

fn escaped(text: &str) -> String {
    text.replace('&', "&amp;")
        .replace('<', "&lt;")
        .replace('>', "&gt;")
        .replace('"', "&quot;")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_is_escaped_and_numbers_are_short() {
        let mut svg = Svg::new([100.0, 50.0]);
        svg.text([1.0, 2.25], "a<b & \"c\"", Anchor::End, Run::Across);
        let text = svg.finish(&About::default());
        assert!(text.contains(r#"x="1" y="2.25" text-anchor="end">a&lt;b &amp; &quot;c&quot;<"#));
        assert!(text.contains(r#"width="35.28mm""#), "{text}");
        assert_eq!(short(-0.001), "0");
    }
}
