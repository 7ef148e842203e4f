//! `tailvane draw`: the picture of the page as an SVG file.

use super::{Call, Limits, Stop, in_words, text};
use tailvane::engine::easel::{Easel, Wishes};
use tailvane::engine::outlook::{self, Outlook};
use tailvane::engine::sheet;
use tailvane::engine::{Engine, View};
use tailvane::error::{Error, Kind, Place};
use tailvane::paint::svg;
use tailvane::plan::Plan;
use tailvane::plan::season::Season;
use tailvane::scene::theme::Theme;
use tailvane::scene::{Scene, orbit_view};
use tailvane::tail::cloud::Quality;
use tailvane::time::Stamp;

/// What is drawn, by its name.
type Drawing = (&'static str, Draw);

/// Makes the scene of a view, in the theme that will paint it, of a size in pixels.
type Draw = fn(&mut Engine, &View, Theme, [f64; 2]) -> Scene;

const VIEWS: &[Drawing] = &[("sky", sky), ("orbit", orbit), ("card", card)];

/// The view that covers a stretch of time, not one moment.
const SEASON: &str = "season";

const SIZE_PX: [f64; 2] = [1200.0, 800.0];

const PIXELS: Limits = Limits { least: 64.0, greatest: 16_384.0 };

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let (mut drawing, mut out, mut theme) = (None, None, Theme::Dark);
    let mut size_px = [None; 2];
    let mut curves = String::new();
    let call = Call::read("draw", arguments, |name, arguments| {
        match name {
            "view" => drawing = Some(named(text(arguments)?)?),
            "out" => out = Some(text(arguments)?),
            "theme" => theme = theme_named(&text(arguments)?)?,
            "width" => size_px[0] = Some(pixels(&text(arguments)?, "--width")?),
            "height" => size_px[1] = Some(pixels(&text(arguments)?, "--height")?),
            "curves" => curves = text(arguments)?,
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
    let file = match drawing {
        Some(drawing) => moment(&call, plan, drawing, theme, size_px)?,
        None => season(&call, plan, &curves, theme, size_px)?,
    };
    std::fs::write(&out, file).map_err(|error| {
        Error::new(Kind::File, Place::Field(out.clone()), error.to_string(), "a file that can be written").into()
    })
}

/// The file of a view of one moment.
fn moment(call: &Call, plan: Plan, drawing: Draw, theme: Theme, size_px: [Option<f64>; 2]) -> Result<String, Stop> {
    let times = call.times(&plan)?;
    let [time] = times[..] else { return Err(Stop::Usage("draw makes one picture: give one time".to_owned())) };
    let mut engine = Engine::new(plan)?;
    let view = engine.view_at(time)?;
    let title = format!("{}, {}", engine.plan().comet.name, time.utc_minute());
    let saying = engine.saying(&view.sky, &engine.tails_at(&view.sky));
    let size_px = [0, 1].map(|side| size_px[side].unwrap_or(SIZE_PX[side]));
    let scene = drawing(&mut engine, &view, theme, size_px);
    Ok(svg::write(&scene, theme, &title, &saying.sentence))
}

/// The file of the season ribbon, of the plan's season unless a range is given.
fn season(call: &Call, mut plan: Plan, curves: &str, theme: Theme, size_px: [Option<f64>; 2]) -> Result<String, Stop> {
    match (&call.from, &call.to, call.step_days) {
        (Some(from), Some(to), None) => plan.season = Some(Season { from: from.clone(), to: to.clone() }),
        (None, None, None) => {}
        _ => return Err(Stop::Usage("the season takes both --from and --to, and no --step".to_owned())),
    }
    let time = match &call.at[..] {
        [] => plan.time.as_ref().map(Stamp::instant),
        [at] => Some(at.instant()),
        _ => return Err(Stop::Usage("draw makes one picture: give one time".to_owned())),
    };
    let mut engine = Engine::new(plan)?;
    let chosen = engine.plan().season.as_ref().map(Season::stretch).transpose()?;
    // A chosen season stays as it is, wherever the present time lies.
    let about = chosen.map(|stretch| stretch.from()).or(time).unwrap_or_else(|| engine.orbit().perihelion_time());
    engine.check_span(about)?;
    let mut outlook = Outlook::new(&engine, about);
    while outlook.advance(&mut engine, f64::MAX) < 1.0 {}
    let ribbon = outlook.ribbon(
        &mut engine,
        &outlook::curves(curves)?,
        size_px[0].unwrap_or(SIZE_PX[0]),
        size_px[1],
        f64::MAX,
    )?;
    let scene = time.map_or_else(|| ribbon.scene.clone(), |time| ribbon.with_handle(time));
    let title = format!("Season of {}", engine.plan().comet.name);
    Ok(svg::write(&scene, theme, &title, &outlook.sentence()))
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
    let names: Vec<&str> = VIEWS.iter().map(|(name, _)| *name).chain([SEASON]).collect();
    in_words(&names, "or")
}

/// What draws the view of a name; None for the season, which has no moment.
fn named(typed: String) -> Result<Option<Draw>, Stop> {
    let found = VIEWS.iter().find(|(name, _)| *name == typed).map(|(_, drawing)| *drawing);
    if found.is_none() && typed != SEASON {
        return Err(Stop::Usage(format!("--view: found '{typed}'; expected {}", view_names())));
    }
    Ok(found)
}

fn theme_named(typed: &str) -> Result<Theme, Stop> {
    let names: Vec<&str> = Theme::ALL.iter().map(|theme| theme.name()).collect();
    Theme::named(typed)
        .ok_or_else(|| Stop::Usage(format!("--theme: found '{typed}'; expected {}", in_words(&names, "or"))))
}

fn pixels(typed: &str, option: &str) -> Result<f64, Stop> {
    Ok(PIXELS.read(typed).map_err(|error| error.at(Place::Field(option.to_owned())))?)
}
