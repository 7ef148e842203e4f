//! Which invented comets come with the page?
//!
//! None of them exists, nor does their hill. The first is what a newcomer sees: the observer close to the orbit plane, with
//! old dust on the sunward side by perspective. The second is strongly hyperbolic, the third has a short period.

use crate::body::observer::Observer;
use crate::plan::Plan;
use serde::Serialize;

const PLANS: [(&str, &str); 3] = [
    (include_str!("../../www/examples/alder.plan.json"), "anti-tail night"),
    (include_str!("../../www/examples/rowan.plan.json"), "hyperbolic"),
    (include_str!("../../www/examples/hazel.plan.json"), "short period"),
];

/// Where the invented comets are seen from.
const HILL: &str = "Invented hill";

/// An invented comet for the page's list.
#[derive(Serialize)]
pub struct Example {
    name: String,
    about: &'static str,
    plan: &'static str,
}

pub fn list() -> Vec<Example> {
    PLANS
        .into_iter()
        .filter_map(|(plan, about)| Plan::parse(plan).ok().map(|read| Example { name: read.comet.name, about, plan }))
        .collect()
}

/// Whether an observer stands on the hill of the invented comets.
pub fn is_invented(observer: &Observer) -> bool {
    matches!(observer, Observer::Site(site) if site.name == HILL)
}
