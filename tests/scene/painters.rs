//! Do the painters give the same picture, and the SVG the same clean bytes?

use crate::skies::bare as compose;
use crate::skies::{self, APART, tailed};
use tailvane::paint::record::{Call, Recorder};
use tailvane::paint::{paint, svg};
use tailvane::scene::Scene;
use tailvane::scene::theme::Theme;
use tailvane::scene::view::SkyView;

fn scene() -> Scene {
    tailed(&skies::plan(), &skies::with(APART), &SkyView::start(1024.0, 640.0))
}

fn calls(theme: Theme) -> Vec<Call> {
    let mut recorder = Recorder::default();
    paint(&scene(), theme, &mut recorder);
    recorder.calls
}

#[test]
fn the_svg_holds_the_recorded_calls_one_element_each_in_order() {
    for theme in Theme::ALL {
        let file = svg::write(&scene(), theme, "title", "description");
        let document = roxmltree::Document::parse(&file).expect("well-formed XML");
        let drawn: Vec<&str> = document
            .root_element()
            .children()
            .filter(|node| node.is_element() && !["title", "desc"].contains(&node.tag_name().name()))
            .map(|node| node.tag_name().name())
            .collect();
        let told: Vec<&str> = calls(theme)
            .iter()
            .map(|call| match call {
                Call::Surface { .. } => "rect",
                Call::Image { .. } => "image",
                Call::Lines { .. } => "path",
                Call::Circle { .. } => "circle",
                Call::Text { .. } => "text",
            })
            .collect();
        assert_eq!(drawn, told);
    }
}

#[test]
fn a_theme_moves_nothing() {
    let still = |calls: Vec<Call>| -> Vec<String> {
        calls
            .into_iter()
            .map(|call| match call {
                Call::Surface { width_px, height_px, .. } => format!("{width_px} {height_px}"),
                Call::Image { image } => format!("{image:?}"),
                Call::Lines { lines, closed, ink } => {
                    format!("{lines:?} {closed} {:?}", ink.stroke.map(|s| (s.width_px, s.dashes_px)))
                }
                Call::Circle { center, radius_px, ink } => {
                    format!("{center:?} {radius_px} {:?}", ink.stroke.map(|s| (s.width_px, s.dashes_px)))
                }
                Call::Text { text, .. } => format!("{text:?}"),
            })
            .collect()
    };
    let dark = still(calls(Theme::Dark));
    assert_eq!(dark, still(calls(Theme::Red)));
    assert_eq!(dark, still(calls(Theme::Paper)));
}

#[test]
fn the_same_sky_gives_the_same_bytes() {
    let one = svg::write(&scene(), Theme::Dark, "t", "d");
    assert_eq!(one, svg::write(&scene(), Theme::Dark, "t", "d"));
    assert_ne!(one, svg::write(&scene(), Theme::Paper, "t", "d"));
}

#[test]
fn an_svg_holds_shapes_texts_and_presentation_attributes_only() {
    let mut plan = skies::plan();
    plan.comet.name = "Invented <script>alert(1)</script> & \"quoted\" \u{1} ]]> comet".into();
    let scene = compose(&plan, &skies::with(APART), &SkyView::start(1024.0, 640.0));
    let file = svg::write(&scene, Theme::Dark, "a <b> & \"c\"", "d > e \u{0}");
    let document = roxmltree::Document::parse(&file).expect("well-formed XML");
    let allowed = [
        "width",
        "height",
        "viewBox",
        "role",
        "font-family",
        "stroke-linecap",
        "stroke-linejoin",
        "fill",
        "fill-opacity",
        "stroke",
        "stroke-width",
        "stroke-dasharray",
        "d",
        "cx",
        "cy",
        "r",
        "x",
        "y",
        "font-size",
        "font-weight",
        "text-anchor",
    ];
    for node in document.descendants().filter(roxmltree::Node::is_element) {
        let name = node.tag_name().name();
        assert!(["svg", "title", "desc", "rect", "path", "circle", "text"].contains(&name), "{name}");
        for attribute in node.attributes() {
            assert!(allowed.contains(&attribute.name()), "{}", attribute.name());
            assert!(!attribute.value().contains("url(") && !attribute.value().contains("//"));
        }
    }
    let title = document.descendants().find(|node| node.has_tag_name("title")).and_then(|node| node.text());
    assert_eq!(title.unwrap_or_default(), "a <b> & \"c\"");
    assert!(file.contains("Invented &lt;script&gt;"), "the name is written, not obeyed");
}

#[test]
fn no_number_of_an_svg_is_lost_at_extreme_scales() {
    for scale in [1e-12, 4.85e-9, 4.85e-6, 1e-3, 0.02, 10.0] {
        for size in [320.0, 2560.0] {
            let view = SkyView { pixel_scale_rad: scale, ..SkyView::start(size, size * 0.6) };
            let scene = compose(&skies::plan(), &skies::with(APART), &view);
            let file = svg::write(&scene, Theme::Dark, "t", "d");
            assert!(!file.contains("NaN") && !file.contains("inf"), "scale {scale}");
            assert!(crate::labels::faults(&scene).is_empty(), "{:?}", crate::labels::faults(&scene));
        }
    }
}
