//! What is the smallest convex figure around some points of a plane?
//!
//! A gnomonic picture of a convex figure is convex, so whatever rectangle holds the corners of the hull holds all points.
//! Andrew's monotone chain (1979).

/// Corners of the convex hull, in turn; fewer than three where the points lie on a line. Points that are not numbers are
/// left out.
pub fn hull(points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let mut sorted: Vec<[f64; 2]> = points.iter().copied().filter(|p| p[0].is_finite() && p[1].is_finite()).collect();
    sorted.sort_by(|a, b| a[0].total_cmp(&b[0]).then(a[1].total_cmp(&b[1])));
    sorted.dedup();
    if sorted.len() < 3 {
        return sorted;
    }
    let mut corners = half(sorted.iter());
    let mut upper = half(sorted.iter().rev());
    corners.pop();
    upper.pop();
    corners.append(&mut upper);
    corners
}

/// One side of the hull, from the first point to the last.
fn half<'a>(points: impl Iterator<Item = &'a [f64; 2]>) -> Vec<[f64; 2]> {
    let mut kept: Vec<[f64; 2]> = Vec::new();
    for &p in points {
        while let [.., a, b] = kept[..]
            && (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]) <= 0.0
        {
            kept.pop();
        }
        kept.push(p);
    }
    kept
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
