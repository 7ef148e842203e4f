//! Are pictures and isophotes what they are made from?

use crate::skies::{self, APART};
use std::sync::Arc;
use tailvane::paint::record::{Call, Recorder};
use tailvane::paint::{paint, png, svg};
use tailvane::scene::image::Image;
use tailvane::scene::isophote::Isophotes;
use tailvane::scene::layer::TailLayers;
use tailvane::scene::lettering::Rect;
use tailvane::scene::sky_plane::compose;
use tailvane::scene::theme::Theme;
use tailvane::scene::view::SkyView;
use tailvane::scene::{Role, Scene};

/// What another reader of PNG makes of a file: width, height, and three bytes a pixel.
fn decoded(file: &[u8]) -> (u32, u32, Vec<u8>) {
    let mut decoder = ::png::Decoder::new(std::io::Cursor::new(file));
    decoder.set_transformations(::png::Transformations::EXPAND);
    let mut reader = decoder.read_info().expect("a readable head");
    let mut pixels = vec![0; reader.output_buffer_size().expect("a size")];
    let info = reader.next_frame(&mut pixels).expect("readable pixels");
    assert_eq!(info.color_type, ::png::ColorType::Rgb);
    pixels.truncate(info.buffer_size());
    (info.width, info.height, pixels)
}

fn plain(rgba: &[u8]) -> Vec<u8> {
    rgba.chunks(4).flat_map(|pixel| pixel[..3].to_vec()).collect()
}

/// Smooth and rough parts, with so many colours.
fn pixels(width: usize, height: usize, colors: u32) -> Vec<u8> {
    let mut state = 7_u32;
    (0..width * height)
        .flat_map(|i| {
            state = state.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            let smooth = (i % width + i / width) as u32;
            let value = if i % 3 == 0 { state >> 8 } else { smooth } % colors;
            [(value >> 4) as u8, (value * 7) as u8, (value & 255) as u8, 255]
        })
        .collect()
}

#[test]
fn another_reader_finds_the_pixels_in_the_png() {
    for (width, height) in [(1, 1), (1, 40), (33, 1), (37, 29), (300, 200)] {
        for colors in [1, 2, 256, 257, 60_000] {
            let rgba = pixels(width, height, colors);
            let file = png::write(width, height, &rgba);
            assert_eq!(decoded(&file), (width as u32, height as u32, plain(&rgba)), "{width} x {height}, {colors}");
            assert_eq!(file, png::write(width, height, &rgba));
        }
    }
}

fn with_picture(picture: Option<Image>) -> Scene {
    let tails = TailLayers { picture, ..TailLayers::default() };
    compose(&skies::plan(), &skies::with(APART), &tails, &SkyView::start(400.0, 300.0))
}

#[test]
fn a_picture_takes_the_place_of_the_ground_and_goes_into_the_svg_as_it_is() {
    let rgba = pixels(40, 30, 200);
    let image = Image::filling(Arc::new(rgba.clone()), 40, 30, [400.0, 300.0]).expect("bytes for the pixels");
    let scene = with_picture(Some(image.clone()));
    assert_eq!(scene.nodes[0].role, Role::DustPicture);
    assert!(!scene.nodes.iter().any(|node| node.role == Role::Ground));
    assert_eq!(with_picture(None).nodes[0].role, Role::Ground);
    let mut recorder = Recorder::default();
    paint(&scene, Theme::Dark, &mut recorder);
    assert_eq!(recorder.calls[0], Call::Image { image });

    let file = svg::write(&scene, Theme::Dark, "t", "d");
    assert_eq!(file, svg::write(&scene, Theme::Dark, "t", "d"));
    let document = roxmltree::Document::parse(&file).expect("well-formed XML");
    let node = document.descendants().find(|node| node.has_tag_name("image")).expect("an image");
    assert_eq!((node.attribute("width"), node.attribute("height")), (Some("400"), Some("300")));
    let coded = node.attribute("href").and_then(|href| href.strip_prefix("data:image/png;base64,")).expect("inside");
    let (width, height, found) = decoded(&from_base64(coded));
    assert_eq!((width, height, found), (40, 30, plain(&rgba)));
}

fn from_base64(text: &str) -> Vec<u8> {
    let digit = |c: u8| match c {
        b'A'..=b'Z' => c - b'A',
        b'a'..=b'z' => c - b'a' + 26,
        b'0'..=b'9' => c - b'0' + 52,
        b'+' => 62,
        _ => 63,
    };
    let digits: Vec<u8> = text.bytes().filter(|&c| c != b'=').map(digit).collect();
    let bits = digits.iter().flat_map(|digit| (0..6).rev().map(move |i| digit >> i & 1));
    let bits: Vec<u8> = bits.collect();
    bits.chunks_exact(8).map(|byte| byte.iter().fold(0, |value, bit| value << 1 | bit)).collect()
}

#[test]
fn a_picture_with_bytes_missing_is_none() {
    assert_eq!(Image::filling(Arc::new(vec![0; 15]), 2, 2, [10.0, 10.0]), None);
    assert_eq!(Image::filling(Arc::new(Vec::new()), 0, 0, [10.0, 10.0]), None);
    assert_eq!(Image::filling(Arc::new(vec![0; 16]), usize::MAX, 4, [10.0, 10.0]), None);
}

#[test]
fn isophotes_of_a_round_glow_are_circles_at_the_radius_of_their_brightness() {
    // exp(-r^2 / (2 s^2)) falls by 10^(-0.4 m) at r = s sqrt(0.8 m ln 10).
    let (width, height, s) = (200_usize, 160_usize, 30.0_f64);
    let value = |x: usize, y: usize| {
        let (dx, dy) = (x as f64 + 0.5 - 100.0, y as f64 + 0.5 - 80.0);
        (-(dx * dx + dy * dy) / (2.0 * s * s)).exp() as f32
    };
    let grid: Vec<f32> = (0..width * height).map(|i| value(i % width, i / width)).collect();
    let area = Rect { left: 0.0, top: 0.0, right: 400.0, bottom: 320.0 };
    let found = Isophotes::of([width, height], |y| &grid[y * width..(y + 1) * width], &area, [3.0, 1.0]);
    assert_eq!(found.lines.len(), 3);
    for (line, magnitude) in found.lines.iter().zip([1.0_f64, 2.0, 3.0]) {
        assert_eq!(line.first(), line.last(), "a ring is closed");
        // Twice as large on the page.
        let radius = 2.0 * s * (0.8 * magnitude * std::f64::consts::LN_10).sqrt();
        for point in line {
            let away = (point[0] - 200.0).hypot(point[1] - 160.0);
            // Smoothing widens the glow by half a cell squared: less than a page pixel.
            assert!((away - radius).abs() < 1.0, "{away} for {radius}");
        }
    }
}

#[test]
fn isophotes_that_leave_the_picture_are_open_and_an_empty_picture_has_none() {
    let (width, height) = (60_usize, 40_usize);
    let grid: Vec<f32> = (0..width * height).map(|i| 1.0 + (i % width) as f32).collect();
    let area = Rect { left: 0.0, top: 0.0, right: 60.0, bottom: 40.0 };
    let line = |grid: &'static [f32], y: usize| &grid[y * 60..(y + 1) * 60];
    let grid: &'static [f32] = Vec::leak(grid);
    let found = Isophotes::of([width, height], |y| line(grid, y), &area, [1.0, 1.0]);
    assert_eq!(found.lines.len(), 1);
    // 60 * 10^-0.4 = 23.886 stands at 22.886 cells, 23.386 on the page.
    assert!(found.lines[0].iter().all(|point| (point[0] - 23.386).abs() < 0.1), "{:?}", found.lines[0]);
    assert_eq!(found.lines[0].len(), height);
    let empty: &'static [f32] = Vec::leak(vec![0.0; width * height]);
    assert!(Isophotes::of([width, height], |y| line(empty, y), &area, [5.0, 1.0]).lines.is_empty());
}
