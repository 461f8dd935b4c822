//! Plane geometry of the picture, in pixels.

/// A point, px.
pub type Px = [f64; 2];

/// An upright rectangle, px.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rect {
    /// Left edge.
    pub left: f64,
    /// Upper edge.
    pub top: f64,
    /// Right edge.
    pub right: f64,
    /// Lower edge.
    pub bottom: f64,
}

impl Rect {
    /// A rectangle about its middle.
    pub const fn about(middle: Px, width: f64, height: f64) -> Self {
        Self {
            left: middle[0] - 0.5 * width,
            top: middle[1] - 0.5 * height,
            right: middle[0] + 0.5 * width,
            bottom: middle[1] + 0.5 * height,
        }
    }

    /// The same with every edge moved outwards; inwards where negative.
    pub const fn grown(self, by: f64) -> Self {
        Self { left: self.left - by, top: self.top - by, right: self.right + by, bottom: self.bottom + by }
    }

    /// The same, elsewhere.
    pub const fn moved(self, by: Px) -> Self {
        Self {
            left: self.left + by[0],
            top: self.top + by[1],
            right: self.right + by[0],
            bottom: self.bottom + by[1],
        }
    }

    /// Width, px.
    pub const fn width(&self) -> f64 {
        self.right - self.left
    }

    /// Height, px.
    pub const fn height(&self) -> f64 {
        self.bottom - self.top
    }

    /// Its middle.
    pub const fn middle(&self) -> Px {
        [0.5 * (self.left + self.right), 0.5 * (self.top + self.bottom)]
    }

    /// Whether a point lies in it.
    pub fn holds(&self, p: Px) -> bool {
        p[0] >= self.left && p[0] <= self.right && p[1] >= self.top && p[1] <= self.bottom
    }

    /// Whether another lies wholly in it.
    pub fn encloses(&self, other: &Self) -> bool {
        other.left >= self.left
            && other.right <= self.right
            && other.top >= self.top
            && other.bottom <= self.bottom
    }

    /// How far two stand apart along the axis in which they do so most; negative: how deep they overlap.
    pub fn gap(&self, other: &Self) -> f64 {
        let across = (other.left - self.right).max(self.left - other.right);
        let down = (other.top - self.bottom).max(self.top - other.bottom);
        across.max(down)
    }

    /// How far a disc stands away; negative: how deep it reaches in.
    pub fn gap_to_disc(&self, at: Px, radius: f64) -> f64 {
        let dx = (self.left - at[0]).max(at[0] - self.right);
        let dy = (self.top - at[1]).max(at[1] - self.bottom);
        let outside = length([dx.max(0.0), dy.max(0.0)]);
        (if outside > 0.0 { outside } else { dx.max(dy) }) - radius
    }
}

/// Length of a vector, px. A plain root: pixels are nowhere near overflow.
pub fn length(v: Px) -> f64 {
    (v[0] * v[0] + v[1] * v[1]).sqrt()
}

/// From one point to another.
pub const fn between(from: Px, to: Px) -> Px {
    [to[0] - from[0], to[1] - from[1]]
}

/// A point and so much of a vector.
pub const fn along(from: Px, direction: Px, by: f64) -> Px {
    [from[0] + direction[0] * by, from[1] + direction[1] * by]
}

/// Unit vector; `None` where there is no direction.
pub fn unit(v: Px) -> Option<Px> {
    let l = length(v);
    (l.is_finite() && l > 1e-9).then(|| [v[0] / l, v[1] / l])
}

/// The part of a straight piece that lies in a rectangle (Liang and Barsky 1984).
pub fn clip_piece(a: Px, b: Px, frame: &Rect) -> Option<[Px; 2]> {
    let d = between(a, b);
    let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
    for (from, by, low, high) in
        [(a[0], d[0], frame.left, frame.right), (a[1], d[1], frame.top, frame.bottom)]
    {
        if by.abs() < 1e-12 {
            if from < low || from > high {
                return None;
            }
            continue;
        }
        let (first, second) = ((low - from) / by, (high - from) / by);
        enter = enter.max(first.min(second));
        leave = leave.min(first.max(second));
    }
    (enter <= leave).then(|| [along(a, d, enter), along(a, d, leave)])
}

/// The part of a polygon that lies in a rectangle (Sutherland and Hodgman 1974).
pub fn clip_area(points: &[Px], frame: &Rect) -> Vec<Px> {
    let mut kept = points.to_vec();
    for (axis, bound, sign) in
        [(0, frame.left, 1.0), (0, frame.right, -1.0), (1, frame.top, 1.0), (1, frame.bottom, -1.0)]
    {
        let inside = |p: Px| sign * (p[axis] - bound);
        let mut next = Vec::with_capacity(kept.len() + 4);
        for (i, &p) in kept.iter().enumerate() {
            let q = kept[(i + 1) % kept.len()];
            let (at_p, at_q) = (inside(p), inside(q));
            if at_p >= 0.0 {
                next.push(p);
            }
            if (at_p >= 0.0) != (at_q >= 0.0) {
                next.push(along(p, between(p, q), at_p / (at_p - at_q)));
            }
        }
        kept = next;
    }
    kept
}

/// Parallel lines across a polygon (even-odd), in a direction, through multiples of `step` from `origin`.
pub fn hatch(outline: &[Px], direction: Px, origin: Px, step: f64) -> Vec<[Px; 2]> {
    let normal = [-direction[1], direction[0]];
    let dot = |p: Px, n: Px| (p[0] - origin[0]) * n[0] + (p[1] - origin[1]) * n[1];
    let heights: Vec<f64> = outline.iter().map(|&p| dot(p, normal)).collect();
    let low = heights.iter().copied().fold(f64::INFINITY, f64::min);
    let high = heights.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let mut pieces = Vec::new();
    if !(step > 0.0 && (high - low) / step < 4000.0) {
        return pieces;
    }
    let mut row = (low / step).ceil();
    while row * step < high {
        let height = row * step;
        let mut crossings: Vec<f64> = Vec::new();
        for (i, &p) in outline.iter().enumerate() {
            let j = (i + 1) % outline.len();
            let (hp, hq) = (heights[i] - height, heights[j] - height);
            if (hp >= 0.0) != (hq >= 0.0) {
                let cut = along(p, between(p, outline[j]), hp / (hp - hq));
                crossings.push(dot(cut, direction));
            }
        }
        crossings.sort_by(f64::total_cmp);
        for pair in crossings.chunks_exact(2) {
            let end = |by: f64| along(along(origin, normal, height), direction, by);
            pieces.push([end(pair[0]), end(pair[1])]);
        }
        row += 1.0;
    }
    pieces
}

#[cfg(test)]
mod tests {
    use super::*;

    const FRAME: Rect = Rect { left: 0.0, top: 0.0, right: 100.0, bottom: 50.0 };

    #[test]
    fn a_piece_is_cut_where_it_leaves() {
        let cut = clip_piece([-50.0, 25.0], [150.0, 25.0], &FRAME).unwrap();
        assert_eq!(cut, [[0.0, 25.0], [100.0, 25.0]]);
        assert!(clip_piece([-5.0, -1.0], [5.0, -9.0], &FRAME).is_none());
    }

    #[test]
    fn a_square_over_a_corner_keeps_its_quarter() {
        let kept = clip_area(&[[-10.0, -10.0], [10.0, -10.0], [10.0, 10.0], [-10.0, 10.0]], &FRAME);
        let mut doubled = 0.0;
        for (i, p) in kept.iter().enumerate() {
            let q = kept[(i + 1) % kept.len()];
            doubled += p[0] * q[1] - q[0] * p[1];
        }
        assert!((doubled.abs() / 2.0 - 100.0).abs() < 1e-9, "{kept:?}");
    }

    #[test]
    fn gaps_are_signed() {
        let a = Rect::about([0.0, 0.0], 10.0, 10.0);
        assert!((a.gap(&Rect::about([12.0, 0.0], 10.0, 10.0)) - 2.0).abs() < 1e-12);
        assert!(a.gap(&Rect::about([8.0, 1.0], 10.0, 10.0)) < 0.0);
        assert!((a.gap_to_disc([8.0, 9.0], 2.0) - 3.0).abs() < 1e-12);
        assert!(a.gap_to_disc([0.0, 0.0], 2.0) < 0.0);
    }

    #[test]
    fn hatch_lines_lie_in_the_polygon_and_pass_through_the_origins_grid() {
        let square = [[0.0, 0.0], [40.0, 0.0], [40.0, 40.0], [0.0, 40.0]];
        let lines = hatch(&square, [1.0, 0.0], [3.0, 5.0], 10.0);
        assert_eq!(lines.len(), 4);
        for [a, b] in lines {
            assert!((b[0] - a[0] - 40.0).abs() < 1e-9 && (a[1] - b[1]).abs() < 1e-9);
            assert!(((a[1] - 5.0) % 10.0).abs() < 1e-9);
        }
    }
}
