//! PNG with its physical size.

use super::RenderError;
use super::canvas::Picture;

/// Encodes RGB pixels; the `pHYs` chunk gives the resolution, from which readers know the size in millimetres.
pub(super) fn png(picture: &Picture, pixels_per_inch: u32, title: &str) -> Result<Vec<u8>, RenderError> {
    let mut bytes = Vec::new();
    let mut encoder = ::png::Encoder::new(&mut bytes, picture.width as u32, picture.height as u32);
    encoder.set_color(::png::ColorType::Rgb);
    encoder.set_depth(::png::BitDepth::Eight);
    encoder.set_compression(::png::Compression::High);
    let per_metre = (f64::from(pixels_per_inch) / 0.0254).round() as u32;
    encoder.set_pixel_dims(Some(::png::PixelDimensions {
        xppu: per_metre,
        yppu: per_metre,
        unit: ::png::Unit::Meter,
    }));
    encoder.add_itxt_chunk("Title".to_owned(), title.to_owned())?;
    encoder.add_text_chunk("Software".to_owned(), concat!("abide ", env!("CARGO_PKG_VERSION")).to_owned())?;
    let mut writer = encoder.write_header()?;
    writer.write_image_data(&picture.rgb)?;
    writer.finish()?;
    Ok(bytes)
}
