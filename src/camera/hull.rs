//! What is the smallest convex figure around some points of a plane?
//!
//! A gnomonic picture of a convex figure is convex, so whatever rectangle holds the corners of the hull holds all points.
//! Gift wrapping (Jarvis 1973): no sorting, and the hulls here have few corners.

/// Corners of the convex hull, in turn; two at most where the points lie on a line. Points that are not numbers are left
/// out.
pub fn hull(points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let finite = || points.iter().copied().filter(|p| p[0].is_finite() && p[1].is_finite());
    let lower = |a: [f64; 2], b: [f64; 2]| if (b[0], b[1]) < (a[0], a[1]) { b } else { a };
    let Some(first) = finite().reduce(lower) else { return Vec::new() };
    let mut corners = vec![first];
    loop {
        let here = corners[corners.len() - 1];
        // The point with all others to its left; of several in line, the farthest.
        let next = finite().filter(|&p| p != here).reduce(|best, p| {
            let (to_best, to_p) = ([best[0] - here[0], best[1] - here[1]], [p[0] - here[0], p[1] - here[1]]);
            let left = to_best[0] * to_p[1] - to_best[1] * to_p[0];
            let farther = to_p[0] * to_p[0] + to_p[1] * to_p[1] > to_best[0] * to_best[0] + to_best[1] * to_best[1];
            if left < 0.0 || left == 0.0 && farther { p } else { best }
        });
        match next {
            // Rounding may step past the first corner; no corner comes twice.
            Some(next) if !corners.contains(&next) => corners.push(next),
            _ => return corners,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::hull;

    #[test]
    fn a_hull_holds_the_corners_and_nothing_inside() {
        let points = [[0.0, 0.0], [1.0, 0.0], [0.5, 0.5], [1.0, 1.0], [0.0, 1.0], [0.5, 0.0], [f64::NAN, 3.0]];
        assert_eq!(hull(&points), [[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]]);
        assert_eq!(hull(&[[2.0, 2.0], [1.0, 1.0], [3.0, 3.0]]), [[1.0, 1.0], [3.0, 3.0]]);
        assert_eq!(hull(&[[2.0, 2.0], [2.0, 2.0]]), [[2.0, 2.0]]);
    }
}
