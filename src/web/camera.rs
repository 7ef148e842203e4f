//! What does the page show of the camera: fields, words, the night's hours, fitting, handles, the card?

use super::{Desk, from_js, named_theme, refusal, to_js};
use crate::camera::fit::{self, Fit, Task};
use crate::camera::subject::Subject;
use crate::camera::{Camera, Mount};
use crate::engine::sheet;
use crate::error::{Error, Kind, Place};
use crate::paint::svg;
use crate::scene::camera_field::{self, Grip};
use crate::scene::camera_words;
use crate::scene::view::Up;
use crate::time::Instant;
use crate::web::typed::{Pairs, number, text_of};
use serde::Serialize;
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;

/// Everything the bench shows.
#[derive(Serialize)]
struct Bench {
    /// The camera's fields as texts, null without a camera.
    fields: Option<Vec<(&'static str, String)>>,
    standing: Vec<camera_words::Line>,
    directions: Vec<camera_words::Line>,
    mount: &'static str,
    /// Names of the cameras that are kept.
    kept: Vec<String>,
}

#[wasm_bindgen]
impl Desk {
    pub fn has_camera(&self) -> bool {
        self.engine.plan().camera.is_some()
    }

    /// The camera's fields and how it stands.
    pub fn camera_bench(&mut self) -> JsValue {
        let tails = self.tails();
        let plan = self.engine.plan();
        let sky = &self.seen.sky;
        let kept = plan.cameras.iter().map(|camera| camera.name.clone()).collect();
        let mut bench = Bench { fields: None, standing: Vec::new(), directions: Vec::new(), mount: "", kept };
        if let Some(camera) = &plan.camera {
            bench.fields = Some(texts(camera));
            bench.mount = camera_words::mount(camera.mount);
            match crate::camera::field::Field::of(camera, &sky.axes.sight) {
                Some(field) => {
                    bench.standing = camera_words::standing(camera, &field);
                    bench.directions = camera_words::directions(&field, sky, &tails.ion);
                }
                None => bench.standing = vec![("Field", camera_words::NO_POINTING.to_owned())],
            }
        }
        to_js(&bench)
    }

    /// Takes a typed camera.
    pub fn set_camera(&mut self, fields: JsValue) -> Result<JsValue, JsValue> {
        let camera = camera_of(&from_js(fields)?).map_err(refusal)?;
        self.use_camera(Some(camera))
    }

    pub fn remove_camera(&mut self) -> Result<JsValue, JsValue> {
        self.use_camera(None)
    }

    /// Keeps the camera in use by its name, in place of one of the same name.
    pub fn keep_camera(&mut self) -> Result<JsValue, JsValue> {
        let plan = self.engine.plan();
        let Some(camera) = plan.camera.clone() else { return Ok(JsValue::NULL) };
        if camera.name.is_empty() {
            let allowed = "a name under which to keep the camera";
            return Err(refusal(Error::new(Kind::Range, Place::Field("camera.name".into()), "no name", allowed)));
        }
        let mut cameras = plan.cameras.clone();
        match cameras.iter_mut().find(|kept| kept.name == camera.name) {
            Some(kept) => *kept = camera.clone(),
            None => cameras.push(camera.clone()),
        }
        self.engine.set_cameras(Some(camera), cameras).map_err(refusal)?;
        Ok(JsValue::TRUE)
    }

    /// Uses a kept camera, by its number.
    pub fn pick_camera(&mut self, number: usize) -> Result<JsValue, JsValue> {
        let camera = self.engine.plan().cameras.get(number).cloned();
        self.use_camera(camera)
    }

    /// Forgets a kept camera, by its number.
    pub fn drop_camera(&mut self, number: usize) -> Result<JsValue, JsValue> {
        let plan = self.engine.plan();
        let (camera, mut cameras) = (plan.camera.clone(), plan.cameras.clone());
        if number < cameras.len() {
            cameras.remove(number);
        }
        self.engine.set_cameras(camera, cameras).map_err(refusal)?;
        Ok(JsValue::TRUE)
    }

    /// The field hour by hour, six hours each way, while the comet is up: time, altitude, turn, antisolar, ion axis.
    pub fn camera_hours(&mut self) -> JsValue {
        let middle = self.seen.sky.time;
        let times: Vec<Instant> = (-6..=6).map(|hour| middle.plus_days(f64::from(hour) / 24.0)).collect();
        let hours = self.engine.camera_hours(middle, &times).unwrap_or_default();
        let up = hours.iter().filter(|hour| hour.altitude_rad.is_none_or(|altitude| altitude > 0.0));
        to_js(&up.map(camera_words::hour).collect::<Vec<_>>())
    }

    /// Turns and moves the camera so that it holds what is chosen; says in words what came of it. `choice`: `subject` (ion,
    /// dust, picture, brightness), its numbers, `margin_percent` of the shorter side, `nucleus` ("yes" to hold it too).
    pub fn camera_fit(&mut self, choice: JsValue) -> Result<String, JsValue> {
        let choice: Pairs = from_js(choice)?;
        let Some(camera) = self.engine.plan().camera.clone() else { return Ok(String::new()) };
        let (subject, task_margin) = chosen(&choice).map_err(refusal)?;
        let sky = &self.seen.sky;
        let vista = self.engine.vista(sky);
        let points = subject.points(&vista, &self.engine.plan().tails, &camera).map_err(refusal)?;
        let with_nucleus = text_of(&choice, "nucleus") == "yes";
        let task = Task { points, margin_px: task_margin * camera.shorter_side_px(), with_nucleus };
        let found = fit::fit(&camera, &sky.axes, &task);
        let words = camera_words::fit(&found, &camera);
        if let Fit::Holds { camera, .. } = found {
            self.use_camera(Some(camera))?;
        }
        Ok(words)
    }

    /// What of the frame lies within `reach_px` of a point: "handle", "outline", or "".
    pub fn camera_grip(&self, x_px: f64, y_px: f64, reach_px: f64) -> String {
        let found = self.engine.plan().camera.as_ref().and_then(|camera| {
            camera_field::on_page(camera, &self.seen.sky, &self.facing_view())?.1.grip([x_px, y_px], reach_px)
        });
        match found {
            Some(Grip::Handle) => "handle",
            Some(Grip::Outline) => "outline",
            None => "",
        }
        .to_owned()
    }

    /// Moves the field with the pointer, from one point of the page to another.
    pub fn camera_move(&mut self, from_x: f64, from_y: f64, to_x: f64, to_y: f64) {
        let view = self.facing_view();
        self.hold(|camera, sky| camera_field::moved(camera, sky, &view, [from_x, from_y], [to_x, to_y]));
    }

    /// Turns the field so that its handle points toward a point of the page.
    pub fn camera_turn_toward(&mut self, x_px: f64, y_px: f64) {
        let view = self.facing_view();
        self.hold(|camera, sky| camera_field::turned_toward(camera, sky, &view, [x_px, y_px]));
    }

    /// Turns the field about its middle by some degrees of position angle.
    pub fn camera_turn(&mut self, by_deg: f64) {
        self.hold(|camera, sky| camera_field::turned_to(camera, sky, camera.image_up_position_angle_deg + by_deg));
    }

    pub fn camera_up(&self) -> bool {
        matches!(self.view.up, Up::Camera { .. })
    }

    pub fn set_camera_up(&mut self, camera: bool) {
        self.view.up = if camera { Up::Camera { position_angle_rad: 0.0, mirrored: false } } else { Up::North };
    }

    /// The field card as an SVG file.
    pub fn card_svg(&mut self, theme: &str) -> String {
        let theme = named_theme(theme);
        let scene = sheet::field_card(&mut self.engine, &self.seen, theme, &self.wishes);
        let tails = self.tails();
        let saying = self.engine.saying(&self.seen.sky, &tails);
        let title = format!("Field card: {}, {}", self.engine.plan().comet.name, self.seen.sky.time.utc_minute());
        svg::write(&scene, theme, &title, &saying.sentence)
    }
}

impl Desk {
    /// Puts a camera into the plan; another size of field gives another opening view.
    fn use_camera(&mut self, camera: Option<Camera>) -> Result<JsValue, JsValue> {
        let plan = self.engine.plan();
        let size = |camera: &Option<Camera>| camera.as_ref().map(|camera| (camera.half_px(), camera.scale_tan()));
        let resized = size(&plan.camera) != size(&camera);
        let cameras = plan.cameras.clone();
        self.engine.set_cameras(camera, cameras).map_err(refusal)?;
        if resized {
            self.reopen();
        }
        Ok(JsValue::TRUE)
    }

    /// Changes the camera where that can be; a placement that cannot be leaves it as it is.
    fn hold(&mut self, change: impl FnOnce(&Camera, &crate::sky::Sky) -> Option<Camera>) {
        let plan = self.engine.plan();
        let Some(camera) = plan.camera.as_ref().and_then(|camera| change(camera, &self.seen.sky)) else { return };
        let cameras = plan.cameras.clone();
        // A camera that `camera_field` gives is valid.
        let _ = self.engine.set_cameras(Some(camera), cameras);
    }
}

/// The numbers of a camera, and whether they may be left empty.
const NUMBERS: [(&str, bool); 7] = [
    ("pixel_size_um", true),
    ("focal_length_mm", true),
    ("scale_arcsec_per_pixel", true),
    ("image_up_position_angle_deg", false),
    ("nucleus_right_px", false),
    ("nucleus_up_px", false),
    ("rotator_offset_deg", false),
];

fn camera_of(typed: &Pairs) -> Result<Camera, Error> {
    let text = |key: &str| text_of(typed, key);
    let place = |key: &str| format!("camera.{key}");
    let pixels = |key: &str| {
        let value = number(text(key), &place(key))?;
        if value.fract() != 0.0 || !(0.0..=4e9).contains(&value) {
            let allowed = "a whole number from 1 to 100000";
            return Err(Error::new(Kind::Range, Place::Field(place(key)), value.to_string(), allowed));
        }
        Ok(value as u32)
    };
    let mut numbers = [None; NUMBERS.len()];
    for (found, (key, optional)) in numbers.iter_mut().zip(NUMBERS) {
        if !text(key).is_empty() {
            *found = Some(number(text(key), &place(key))?);
        } else if !optional {
            *found = Some(0.0);
        }
    }
    Ok(Camera {
        name: text("name").to_owned(),
        pixels_wide: pixels("pixels_wide")?,
        pixels_high: pixels("pixels_high")?,
        pixel_size_um: numbers[0],
        focal_length_mm: numbers[1],
        scale_arcsec_per_pixel: numbers[2],
        image_up_position_angle_deg: numbers[3].unwrap_or(0.0),
        mirrored: text("mirrored") == "yes",
        nucleus_right_px: numbers[4].unwrap_or(0.0),
        nucleus_up_px: numbers[5].unwrap_or(0.0),
        mount: match text("mount") {
            "altazimuth" => Mount::Altazimuth,
            "fixed_tripod" => Mount::FixedTripod,
            _ => Mount::Equatorial,
        },
        rotator_offset_deg: numbers[6].unwrap_or(0.0),
    })
}

fn texts(camera: &Camera) -> Vec<(&'static str, String)> {
    let optional = |value: Option<f64>| value.map_or_else(String::new, |value| value.to_string());
    let mount = match camera.mount {
        Mount::Equatorial => "equatorial",
        Mount::Altazimuth => "altazimuth",
        Mount::FixedTripod => "fixed_tripod",
    };
    vec![
        ("name", camera.name.clone()),
        ("pixels_wide", camera.pixels_wide.to_string()),
        ("pixels_high", camera.pixels_high.to_string()),
        ("pixel_size_um", optional(camera.pixel_size_um)),
        ("focal_length_mm", optional(camera.focal_length_mm)),
        ("scale_arcsec_per_pixel", optional(camera.scale_arcsec_per_pixel)),
        ("image_up_position_angle_deg", camera.image_up_position_angle_deg.to_string()),
        ("mirrored", if camera.mirrored { "yes" } else { "no" }.to_owned()),
        ("nucleus_right_px", camera.nucleus_right_px.to_string()),
        ("nucleus_up_px", camera.nucleus_up_px.to_string()),
        ("mount", mount.to_owned()),
        ("rotator_offset_deg", camera.rotator_offset_deg.to_string()),
    ]
}

/// The subject of a fit, and the margin as a share of the shorter side.
fn chosen(choice: &Pairs) -> Result<(Subject, f64), Error> {
    let value = |key: &str| number(text_of(choice, key), &format!("fit.{key}"));
    let margin = value("margin_percent")? / 100.0;
    if !(0.0..=0.45).contains(&margin) {
        let place = Place::Field("fit.margin_percent".to_owned());
        return Err(Error::new(Kind::Range, place, format!("{} percent", 100.0 * margin), "0 to 45 percent"));
    }
    let subject = match text_of(choice, "subject") {
        "dust" => Subject::Dust { length_rad: value("dust_length_deg")?.to_radians() },
        "picture" => Subject::Picture { share: value("share_percent")? / 100.0 },
        "brightness" => Subject::to_brightness(value("limit_mag")?, value("peak_mag")?),
        _ => Subject::Ion { length_rad: value("ion_length_deg")?.to_radians() },
    };
    Ok((subject, margin))
}
