//! The four operations on points that the rest needs.

pub(crate) type Point = [f64; 3];

pub(crate) fn minus(a: Point, b: Point) -> Point {
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

pub(crate) fn cross(a: Point, b: Point) -> Point {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

pub(crate) fn dot(a: Point, b: Point) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

pub(crate) fn length(a: Point) -> f64 {
    dot(a, a).sqrt()
}

/// The box between the least and the greatest coordinates.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Bounds {
    pub low: Point,
    pub high: Point,
}

impl Bounds {
    pub fn of(points: impl IntoIterator<Item = Point>) -> Bounds {
        let empty = Bounds { low: [f64::INFINITY; 3], high: [f64::NEG_INFINITY; 3] };
        points.into_iter().fold(empty, |so_far, point| Bounds {
            low: std::array::from_fn(|at| so_far.low[at].min(point[at])),
            high: std::array::from_fn(|at| so_far.high[at].max(point[at])),
        })
    }

    pub fn meets(&self, other: &Bounds) -> bool {
        (0..3).all(|at| self.low[at] <= other.high[at] && other.low[at] <= self.high[at])
    }

    pub fn holds(&self, point: Point) -> bool {
        (0..3).all(|at| self.low[at] <= point[at] && point[at] <= self.high[at])
    }

    pub fn diagonal(&self) -> f64 {
        length(minus(self.high, self.low))
    }
}
