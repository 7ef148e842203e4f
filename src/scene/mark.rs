//! How is each direction told apart at its end, whatever the colour?
//!
//! | direction | end mark |
//! | --- | --- |
//! | antisolar | open ring |
//! | ion axis | split tail, at the end of a wedge |
//! | negative velocity | cross bar |
//! | sky motion | chevron |
//! | zenith | small triangle, pointing outward |
//! | sunward | Sun sign, on the ring, without a hand |

use super::lettering::Rect;
use super::{Direction, Point, Role, Scene, Shape};

/// Half the size of a mark, in drawing units.
const HALF: f64 = 6.5;

/// How far along the radius of the ring a hand reaches. Each has its own length, so that marks of
/// directions that fall together lie one behind the other and never on each other.
pub const fn reach(direction: Direction) -> f64 {
    match direction {
        Direction::Sunward => 1.0,
        Direction::Antisolar => 0.88,
        Direction::IonAxis => 0.76,
        Direction::NegativeVelocity => 0.64,
        Direction::SkyMotion => 0.52,
        Direction::Zenith => 0.40,
    }
}

/// What a direction is called on the drawing.
pub const fn words(direction: Direction) -> &'static str {
    match direction {
        Direction::Sunward => "toward the Sun",
        Direction::Antisolar => "antisolar",
        Direction::IonAxis => "ion axis",
        Direction::NegativeVelocity => "negative velocity",
        Direction::SkyMotion => "sky motion",
        Direction::Zenith => "zenith",
    }
}

/// The square that a mark at `center` stays inside.
pub fn area(center: Point, unit_px: f64) -> Rect {
    Rect::around(center, HALF * unit_px + 1.0, HALF * unit_px + 1.0)
}

/// Draws the mark of a direction at `center`, `outward` being the unit step along the hand.
pub fn draw(scene: &mut Scene, direction: Direction, center: Point, outward: Point) {
    let half = HALF * scene.unit_px;
    let across = [-outward[1], outward[0]];
    let point = |along: f64, aside: f64| {
        [
            center[0] + half * (along * outward[0] + aside * across[0]),
            center[1] + half * (along * outward[1] + aside * across[1]),
        ]
    };
    let outline = Role::Mark(direction);
    match direction {
        Direction::Antisolar => {
            scene.add(outline, Shape::Circle { center, radius_px: half * 0.8 });
        }
        Direction::IonAxis => {
            let fork = vec![point(0.9, -0.75), point(-0.2, 0.0), point(0.9, 0.75)];
            scene.add(outline, Shape::Polyline(fork));
            scene.add(outline, Shape::Polyline(vec![point(-0.9, 0.0), point(-0.2, 0.0)]));
        }
        Direction::NegativeVelocity => {
            scene.add(outline, Shape::Polyline(vec![point(0.0, -1.0), point(0.0, 1.0)]));
        }
        Direction::SkyMotion => {
            scene.add(outline, Shape::Polyline(vec![point(-0.5, -0.8), point(0.5, 0.0), point(-0.5, 0.8)]));
        }
        Direction::Zenith => {
            let triangle = vec![point(0.8, 0.0), point(-0.6, 0.75), point(-0.6, -0.75)];
            scene.add(Role::MarkFill(direction), Shape::Polygon(triangle));
        }
        Direction::Sunward => {
            scene.add(outline, Shape::Circle { center, radius_px: half * 0.9 });
            scene.add(Role::MarkFill(direction), Shape::Circle { center, radius_px: half * 0.25 });
        }
    }
}
