//! `tailvane draw`: the picture of the page as an SVG file.

use super::{Call, Limits, Stop, in_words, text};
use tailvane::engine::easel::{Easel, Wishes};
use tailvane::engine::sheet;
use tailvane::engine::{Engine, View};
use tailvane::error::{Error, Kind, Place};
use tailvane::paint::svg;
use tailvane::scene::theme::Theme;
use tailvane::scene::{Scene, orbit_view};
use tailvane::tail::cloud::Quality;

/// What is drawn, by its name.
type Drawing = (&'static str, Draw);

/// Makes the scene of a view, in the theme that will paint it, of a size in pixels.
type Draw = fn(&mut Engine, &View, Theme, [f64; 2]) -> Scene;

const VIEWS: &[Drawing] = &[("sky", sky), ("orbit", orbit), ("card", card)];

const PIXELS: Limits = Limits { least: 64.0, greatest: 16_384.0 };

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let (mut drawing, mut out, mut theme) = (None, None, Theme::Dark);
    let mut size_px = [1200.0, 800.0];
    let call = Call::read("draw", arguments, |name, arguments| {
        match name {
            "view" => drawing = Some(named(VIEWS, &text(arguments)?)?),
            "out" => out = Some(text(arguments)?),
            "theme" => theme = theme_named(&text(arguments)?)?,
            "width" => size_px[0] = pixels(&text(arguments)?, "--width")?,
            "height" => size_px[1] = pixels(&text(arguments)?, "--height")?,
            _ => return Ok(false),
        }
        Ok(true)
    })?;
    let Some(drawing) = drawing else { return Err(Stop::Usage(format!("draw needs --view {}", view_names()))) };
    let Some(out) = out else { return Err(Stop::Usage("draw needs --out FILE.svg".to_owned())) };
    if call.json {
        return Err(Stop::Usage("draw writes a picture; --json has no meaning there".to_owned()));
    }
    let plan = call.read_plan()?;
    let times = call.times(&plan)?;
    let [time] = times[..] else { return Err(Stop::Usage("draw makes one picture: give one time".to_owned())) };
    let mut engine = Engine::new(plan)?;
    let view = engine.view_at(time)?;
    let title = format!("{}, {}", engine.plan().comet.name, time.utc_minute());
    let saying = engine.saying(&view.sky, &engine.tails_at(&view.sky));
    let scene = drawing(&mut engine, &view, theme, size_px);
    let file = svg::write(&scene, theme, &title, &saying.sentence);
    std::fs::write(&out, file).map_err(|error| {
        Error::new(Kind::File, Place::Field(out.clone()), error.to_string(), "a file that can be written").into()
    })
}

fn sky(engine: &mut Engine, view: &View, theme: Theme, [width_px, height_px]: [f64; 2]) -> Scene {
    let wishes = Wishes { theme, quality: Quality::STILL, ..Wishes::default() };
    Easel::default().sky(engine, &view.sky, &sheet::opening(engine, width_px, height_px), &wishes)
}

/// The field card has the size of its sheet.
fn card(engine: &mut Engine, view: &View, theme: Theme, _size_px: [f64; 2]) -> Scene {
    sheet::field_card(engine, view, theme, &Wishes::default())
}

fn orbit(engine: &mut Engine, view: &View, _theme: Theme, [width_px, height_px]: [f64; 2]) -> Scene {
    orbit_view::compose(engine.plan(), &view.sky, &engine.vista(&view.sky), width_px, height_px)
}

fn view_names() -> String {
    let names: Vec<&str> = VIEWS.iter().map(|(name, _)| *name).collect();
    in_words(&names, "or")
}

fn named(drawings: &[Drawing], typed: &str) -> Result<Draw, Stop> {
    let found = drawings.iter().find(|(name, _)| *name == typed).map(|(_, drawing)| *drawing);
    found.ok_or_else(|| Stop::Usage(format!("--view: found '{typed}'; expected {}", view_names())))
}

fn theme_named(typed: &str) -> Result<Theme, Stop> {
    let names: Vec<&str> = Theme::ALL.iter().map(|theme| theme.name()).collect();
    Theme::named(typed)
        .ok_or_else(|| Stop::Usage(format!("--theme: found '{typed}'; expected {}", in_words(&names, "or"))))
}

fn pixels(typed: &str, option: &str) -> Result<f64, Stop> {
    Ok(PIXELS.read(typed).map_err(|error| error.at(Place::Field(option.to_owned())))?)
}
