//! How does a picture of dust lie on the page?
//!
//! Pixels, already in the colours of a theme (made with [`super::theme::Theme::dust_stops`]), in rows from the upper
//! left, four bytes each: red, green, blue, and 255. The pixels are shared, not copied, so that a scene costs nothing
//! to make on every frame.

use super::lettering::Rect;
use std::sync::Arc;

/// A raster and the rectangle of the page that it fills.
#[derive(Clone, Debug, PartialEq)]
pub struct Image {
    pub width: usize,
    pub height: usize,
    pub rgba: Arc<Vec<u8>>,
    /// Page pixels; usually the whole page.
    pub area: Rect,
}

impl Image {
    /// An image that fills a page of that size. None where the bytes do not make `width` times `height` pixels, or
    /// there are none.
    pub fn filling(rgba: Arc<Vec<u8>>, width: usize, height: usize, page_px: [f64; 2]) -> Option<Self> {
        let bytes = width.checked_mul(height)?.checked_mul(4)?;
        let area = Rect { left: 0.0, top: 0.0, right: page_px[0], bottom: page_px[1] };
        (bytes > 0 && rgba.len() == bytes).then_some(Image { width, height, rgba, area })
    }

    /// Whether it leaves nothing of a page uncovered.
    pub fn covers(&self, width_px: f64, height_px: f64) -> bool {
        let page = Rect { left: 0.0, top: 0.0, right: width_px, bottom: height_px };
        self.area.contains(&page)
    }
}
