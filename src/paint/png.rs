//! How do pixels become a PNG file?
//!
//! Eight bits a channel: a palette where there are at most 256 colours, which a tone map nearly always gives, else red,
//! green and blue; alpha is left out, since every pixel is opaque. Each row is filtered by the method with the least sum of
//! differences. Same pixels, same bytes. Source: PNG specification, third edition (W3C 2025).

use miniz_oxide::deflate::compress_to_vec_zlib;

/// Deflate level: 6 of 10; higher ones take twice the time for some percent.
const LEVEL: u8 = 6;
const SIGNATURE: [u8; 8] = [0x89, b'P', b'N', b'G', b'\r', b'\n', 0x1a, b'\n'];

/// The PNG file of `width` x `height` pixels of four bytes each: red, green, blue, and one that is ignored. Pixels that
/// are missing are black.
pub fn write(width: usize, height: usize, rgba: &[u8]) -> Vec<u8> {
    let pixel = |i: usize| rgba.get(4 * i..4 * i + 3).map_or([0; 3], |p| [p[0], p[1], p[2]]);
    let count = width * height;
    let (palette, rows) = match palette((0..count).map(pixel)) {
        Some(colors) => {
            // In rising order of colour, so that a smooth picture has smooth numbers.
            let bytes: Vec<u8> = (0..count).map(|i| colors.binary_search(&pixel(i)).unwrap_or(0) as u8).collect();
            (Some(colors), filtered(&bytes, width, 1))
        }
        None => (None, filtered(&(0..count).flat_map(pixel).collect::<Vec<u8>>(), 3 * width, 3)),
    };
    let kind = if palette.is_some() { 3 } else { 2 };
    let mut head = Vec::new();
    head.extend((width as u32).to_be_bytes());
    head.extend((height as u32).to_be_bytes());
    head.extend([8, kind, 0, 0, 0]);
    let mut file = SIGNATURE.to_vec();
    chunk(&mut file, b"IHDR", &head);
    if let Some(colors) = palette {
        chunk(&mut file, b"PLTE", colors.as_flattened());
    }
    chunk(&mut file, b"IDAT", &compress_to_vec_zlib(&rows, LEVEL));
    chunk(&mut file, b"IEND", &[]);
    file
}

/// The colours in order; None where there are more than 256.
fn palette(pixels: impl Iterator<Item = [u8; 3]>) -> Option<Vec<[u8; 3]>> {
    let mut colors = Vec::new();
    let mut last = None;
    for pixel in pixels {
        if last != Some(pixel)
            && let Err(place) = colors.binary_search(&pixel)
        {
            if colors.len() == 256 {
                return None;
            }
            colors.insert(place, pixel);
        }
        last = Some(pixel);
    }
    Some(colors)
}

/// Rows of bytes, each behind the number of its filter. `step` is the bytes of a pixel.
fn filtered(bytes: &[u8], row: usize, step: usize) -> Vec<u8> {
    let nothing = vec![0; row];
    let mut above: &[u8] = &nothing;
    let mut out = Vec::with_capacity(bytes.len() + bytes.len() / row.max(1) + 1);
    for here in bytes.chunks_exact(row.max(1)) {
        let best = (0..5u8).map(|filter| (filter, filter_row(filter, here, above, step))).min_by_key(|(_, row)| {
            row.iter().map(|&difference| u32::from((difference as i8).unsigned_abs())).sum::<u32>()
        });
        if let Some((filter, row)) = best {
            out.push(filter);
            out.extend(row);
        }
        above = here;
    }
    out
}

/// A row less what its neighbours foretell: nothing, left, above, their mean, or Paeth's choice.
fn filter_row(filter: u8, here: &[u8], above: &[u8], step: usize) -> Vec<u8> {
    let before = |row: &[u8], i: usize| if i >= step { row[i - step] } else { 0 };
    let foretold = |i: usize| match filter {
        0 => 0,
        1 => before(here, i),
        2 => above[i],
        3 => ((u16::from(before(here, i)) + u16::from(above[i])) / 2) as u8,
        _ => paeth(before(here, i), above[i], before(above, i)),
    };
    (0..here.len()).map(|i| here[i].wrapping_sub(foretold(i))).collect()
}

/// Of left, above and upper left the one nearest to left + above - upper left; ties in that order.
fn paeth(left: u8, above: u8, corner: u8) -> u8 {
    let guess = i16::from(left) + i16::from(above) - i16::from(corner);
    let away = |value: u8| (guess - i16::from(value)).abs();
    if away(left) <= away(above) && away(left) <= away(corner) {
        left
    } else if away(above) <= away(corner) {
        above
    } else {
        corner
    }
}

/// Length, kind, content and check sum.
fn chunk(file: &mut Vec<u8>, kind: &[u8; 4], content: &[u8]) {
    file.extend((content.len() as u32).to_be_bytes());
    let from = file.len();
    file.extend(kind);
    file.extend(content);
    let sum = check_sum(&file[from..]);
    file.extend(sum.to_be_bytes());
}

/// CRC-32 of ISO 3309, bit by bit over a table of 16 nibbles.
fn check_sum(bytes: &[u8]) -> u32 {
    let table: [u32; 16] = std::array::from_fn(|nibble| {
        (0..4).fold(nibble as u32, |rest, _| if rest & 1 == 1 { (rest >> 1) ^ 0xedb8_8320 } else { rest >> 1 })
    });
    let mut rest = u32::MAX;
    for &byte in bytes {
        for nibble in [byte & 15, byte >> 4] {
            rest = (rest >> 4) ^ table[((rest ^ u32::from(nibble)) & 15) as usize];
        }
    }
    !rest
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_check_sum_gives_its_published_value() {
        assert_eq!(check_sum(b"123456789"), 0xcbf4_3926);
    }
}
