//! From a figure to pixels: the only place that knows a drawing library, fonts and resolutions.
//!
//! [`page()`] decides where everything goes, in points, as data; [`png()`] draws the page twice as fine as asked, averages
//! and encodes it with its physical size.

mod border;
mod canvas;
mod draw;
mod encode;
mod fit;
mod page;
mod spread;
mod text;

pub use page::{Frame, Page, Placed, page};

use super::Figure;

/// Physical width of a picture.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Width {
    pub mm: f64,
}

impl Width {
    /// The width of a page of two columns.
    pub const PAGE: Width = Width { mm: 180.0 };
    /// One column.
    pub const COLUMN: Width = Width { mm: 88.0 };
    /// Narrower or wider pictures cannot be laid out.
    pub const ALLOWED_MM: std::ops::RangeInclusive<f64> = 60.0..=400.0;

    /// Pixels per inch: narrow pictures are drawn finer, so that cells and hatching stay sharp.
    pub fn pixels_per_inch(self) -> u32 {
        if self.mm < 120.0 { 600 } else { 300 }
    }

    pub(crate) fn points(self) -> f64 {
        self.mm / 25.4 * 72.0
    }
}

/// What can go wrong while drawing.
#[derive(Debug, thiserror::Error)]
pub enum RenderError {
    #[error("a picture is 60 to 400 mm wide, not {mm} mm")]
    Width { mm: f64 },
    #[error("the drawing failed: {0}")]
    Drawing(String),
    #[error("the picture could not be encoded as PNG")]
    Encoding(#[from] ::png::EncodingError),
}

/// The figure as a PNG file of this physical width.
///
/// Errors: a width that is not allowed; a failure of the drawing or the encoding library.
pub fn png(figure: &Figure, width: Width) -> Result<Vec<u8>, RenderError> {
    let page = page(figure, width)?;
    let picture = draw::picture(figure, &page)?;
    encode::png(&picture, page.pixels_per_inch, &figure.title.text())
}
