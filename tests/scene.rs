//! Is what is drawn readable, true to the sky, and the same every time?

#[path = "scene/camera.rs"]
mod camera;
#[path = "scene/contrast.rs"]
mod contrast;
#[path = "scene/gallery.rs"]
mod gallery;
#[path = "scene/labels.rs"]
mod labels;
#[path = "scene/night.rs"]
mod night;
#[path = "scene/painters.rs"]
mod painters;
#[path = "scene/place.rs"]
mod place;
#[path = "scene/pointer.rs"]
mod pointer;
#[path = "scene/ribbon.rs"]
mod ribbon;
#[path = "scene/skies.rs"]
mod skies;
#[path = "scene/small.rs"]
mod small;
#[path = "scene/tails.rs"]
mod tails;
#[path = "scene/tone.rs"]
mod tone;
