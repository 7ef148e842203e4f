//! What of the tails is laid on the sky, and which of it is switched on?
//!
//! [`TailLayers`] is all that a drawing of the sky takes from [`crate::tail`]: points, angles, words to be made of them.
//! Nothing here is on the page yet. Made anew for each moment seen; what is switched off is not computed.

use super::image::Image;
use super::isophote::Isophotes;
use super::sheet::Sheet;
use super::view::SkyView;
use crate::frame::norm;
use crate::tail::curve::{self, Curve, Fineness};
use crate::tail::grain::Vista;
use crate::tail::ion::Wedge;
use crate::tail::law::Tails;
use crate::tail::neck_line::{Knot, neck_line};
use crate::tail::size::Material;

/// Lines keep within this of their curves, pixels.
const TOLERANCE_PX: f64 = 0.3;
/// Betas along the neck-line.
const KNOTS: usize = 25;

/// Which layers are drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Layers {
    pub ion: bool,
    pub syndynes: bool,
    pub synchrones: bool,
    pub neck_line: bool,
    /// Dust in the anti-tail sector, shaded.
    pub toward_sun: bool,
    /// The picture of the dust.
    pub dust: bool,
    pub isophotes: bool,
}

impl Layers {
    pub const NONE: Layers = Layers {
        ion: false,
        syndynes: false,
        synchrones: false,
        neck_line: false,
        toward_sun: false,
        dust: false,
        isophotes: false,
    };
}

impl Default for Layers {
    /// Everything but the isophotes.
    fn default() -> Self {
        Layers {
            isophotes: false,
            ..Layers {
                ion: true,
                syndynes: true,
                synchrones: true,
                neck_line: true,
                toward_sun: true,
                dust: true,
                isophotes: true,
            }
        }
    }
}

/// What the tails hand to a drawing of the sky; [`TailLayers::default`] is a sky without tails.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TailLayers {
    pub wedge: Option<Wedge>,
    pub curves: Vec<Curve>,
    /// Turns beta into a grain radius for the labels; without it they give beta alone.
    pub material: Option<Material>,
    /// In the order of beta, with gaps where no grain has turned half round.
    pub neck_line: Vec<Option<Knot>>,
    pub sheet: Option<Sheet>,
    /// Half width of the anti-tail sector.
    pub anti_tail_half_width_rad: f64,
    /// The dust, in the colours of the theme that will paint it.
    pub picture: Option<Image>,
    pub isophotes: Option<Isophotes>,
}

impl TailLayers {
    /// Everything but picture and isophotes, which come from a cloud rendered for the same view.
    pub fn of(vista: &Vista, laws: &Tails, view: &SkyView, layers: &Layers) -> Self {
        let fineness = fineness(view);
        let betas = [laws.beta_least, laws.beta_greatest];
        let ages = [laws.age_least_days, laws.age_greatest_days];
        let mut curves = Vec::new();
        if layers.syndynes {
            curves
                .extend(curve::round_betas(betas).into_iter().map(|beta| curve::syndyne(vista, beta, ages, &fineness)));
        }
        if layers.synchrones {
            curves
                .extend(curve::round_ages(ages).into_iter().map(|age| curve::synchrone(vista, age, betas, &fineness)));
        }
        let neck_line =
            if layers.neck_line { neck_line(vista, &steps(betas), laws.age_greatest_days) } else { Vec::new() };
        TailLayers {
            wedge: layers.ion.then(|| Wedge::of(vista, laws)),
            curves,
            material: Some(Material::of(laws)),
            neck_line,
            sheet: layers.toward_sun.then(|| Sheet::of(vista, laws)),
            anti_tail_half_width_rad: laws.anti_tail_half_width_deg.to_radians(),
            picture: None,
            isophotes: None,
        }
    }
}

/// How fine and how far the curves of a view are traced: to the farthest corner from the nucleus.
pub fn fineness(view: &SkyView) -> Fineness {
    let [x, y] = view.nucleus();
    let across = x.abs().max((view.width_px - x).abs());
    let down = y.abs().max((view.height_px - y).abs());
    Fineness {
        tolerance_rad: TOLERANCE_PX * view.pixel_scale_rad,
        field_tan: norm([across, down]) * view.pixel_scale_rad,
    }
}

/// Betas in even steps of their logarithm.
fn steps([least, greatest]: [f64; 2]) -> Vec<f64> {
    let span = libm::log(greatest / least);
    (0..KNOTS).map(|i| least * libm::exp(span * i as f64 / (KNOTS - 1) as f64)).collect()
}
