//! Level lines of a function that is known on the nodes of a grid, and at any place on demand.

use std::collections::{BTreeMap, BTreeSet};

/// Evaluations that move a point of a line onto it.
const REFINEMENTS: usize = 4;

/// A function on the nodes of a grid; NaN where it says nothing.
pub(crate) struct Nodes {
    /// Places of the columns, from left to right in the picture.
    pub across: Vec<f64>,
    /// Places of the rows, from below.
    pub up: Vec<f64>,
    /// First row first.
    pub values: Vec<f64>,
}

/// The side between two neighbouring nodes: the index of the first and whether it leads upwards.
type Side = (usize, bool);
type Point = (f64, f64);

/// The lines on which the function is 0, as chains of points; positive values lie to their left (with `up` upwards).
///
/// Squares with a corner where nothing is said have no line. Marching squares (Lorensen & Cline 1987 in two dimensions,
/// from memory); a saddle is settled by the mean of its corners. `at` gives the function anywhere; its zeros on the sides are
/// found by regula falsi with the Illinois halving (Dowell & Jarratt 1971, from memory).
pub(crate) fn zero_lines(nodes: &Nodes, at: impl Fn(f64, f64) -> f64) -> Vec<Vec<Point>> {
    let columns = nodes.across.len();
    let mut next: BTreeMap<Side, Side> = BTreeMap::new();
    for row in 1..nodes.up.len() {
        for column in 1..columns {
            let corner = (row - 1) * columns + column - 1;
            for (from, to) in nodes.segments(corner) {
                next.insert(from, to);
            }
        }
    }
    let place = |side: &Side| nodes.crossing(*side, &at);
    let ends: BTreeSet<Side> = next.values().copied().collect();
    let starts: Vec<Side> = next.keys().filter(|side| !ends.contains(side)).copied().collect();
    let mut lines = Vec::new();
    for start in starts {
        lines.push(chain(&mut next, start, place));
    }
    // What is left are closed lines.
    while let Some(start) = next.keys().next().copied() {
        lines.push(chain(&mut next, start, place));
    }
    lines
}

fn chain(next: &mut BTreeMap<Side, Side>, start: Side, place: impl Fn(&Side) -> Point) -> Vec<Point> {
    let mut line = vec![place(&start)];
    let mut side = start;
    while let Some(following) = next.remove(&side) {
        line.push(place(&following));
        side = following;
    }
    line
}

impl Nodes {
    /// Directed pieces of lines through the square above and right of a node, from side to side.
    fn segments(&self, corner: usize) -> Vec<(Side, Side)> {
        let columns = self.across.len();
        let above = corner + columns;
        let corners = [corner, corner + 1, above + 1, above].map(|node| self.values[node]);
        if corners.iter().any(|value| !value.is_finite()) {
            return Vec::new();
        }
        // Counterclockwise, as the corners: below, right, above, left.
        let sides: [Side; 4] = [(corner, false), (corner + 1, true), (above, false), (corner, true)];
        let quiet = |k: usize| corners[k % 4] > 0.0;
        let falls = |k: usize| quiet(k) && !quiet(k + 1);
        let rises = |k: usize| !quiet(k) && quiet(k + 1);
        let joined = corners.iter().sum::<f64>() > 0.0;
        let partner = |k: usize| {
            // Of a saddle whose middle is positive a line cuts off the next corner, else the one before.
            let steps: [usize; 3] = if joined { [1, 2, 3] } else { [3, 2, 1] };
            steps.into_iter().map(|step| (k + step) % 4).find(|other| rises(*other))
        };
        (0..4).filter(|k| falls(*k)).filter_map(|k| Some((sides[k], sides[partner(k)?]))).collect()
    }

    /// Where the function is 0 on a side whose ends differ in sign.
    fn crossing(&self, (node, upwards): Side, at: impl Fn(f64, f64) -> f64) -> Point {
        let columns = self.across.len();
        let (column, row) = (node % columns, node / columns);
        let (x, y) = (self.across[column], self.up[row]);
        if upwards {
            let ends = [(y, self.values[node]), (self.up[row + 1], self.values[node + columns])];
            (x, root(ends, |y| at(x, y)))
        } else {
            let ends = [(x, self.values[node]), (self.across[column + 1], self.values[node + 1])];
            (root(ends, |x| at(x, y)), y)
        }
    }
}

/// A root between two places with values of unlike sign; stops where nothing is said.
pub(crate) fn root(ends: [Point; 2], at: impl Fn(f64) -> f64) -> f64 {
    let [mut low, mut high] = ends;
    let between = |low: Point, high: Point| {
        let share = low.1 / (low.1 - high.1);
        low.0 + (high.0 - low.0) * if share.is_finite() { share.clamp(0.0, 1.0) } else { 0.5 }
    };
    let mut kept = 0;
    for _ in 0..REFINEMENTS {
        let place = between(low, high);
        let value = at(place);
        if !value.is_finite() || value == 0.0 {
            return place;
        }
        if (value > 0.0) == (low.1 > 0.0) {
            low = (place, value);
            high.1 *= if kept == 1 { 0.5 } else { 1.0 };
            kept = 1;
        } else {
            high = (place, value);
            low.1 *= if kept == 2 { 0.5 } else { 1.0 };
            kept = 2;
        }
    }
    between(low, high)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn nodes(count: usize, at: impl Fn(f64, f64) -> f64) -> Nodes {
        let places: Vec<f64> = (0..count).map(|k| -1.0 + 2.0 * k as f64 / (count - 1) as f64).collect();
        let values = places.iter().flat_map(|y| places.iter().map(|x| at(*x, *y)).collect::<Vec<_>>());
        Nodes { across: places.clone(), up: places.clone(), values: values.collect() }
    }

    /// Twice the signed area inside a chain; positive when counterclockwise.
    fn area(line: &[Point]) -> f64 {
        line.windows(2).map(|w| w[0].0 * w[1].1 - w[1].0 * w[0].1).sum()
    }

    #[test]
    fn a_circle_is_one_closed_line_with_its_inside_to_the_left() {
        let at = |x: f64, y: f64| 0.5 - x * x - y * y;
        let lines = zero_lines(&nodes(20, at), at);
        assert_eq!(lines.len(), 1);
        let line = &lines[0];
        assert_eq!(line.first(), line.last());
        assert!(line.iter().all(|p| at(p.0, p.1).abs() < 1e-9), "every point is refined onto the line");
        // Inscribed polygon: a little below 2 π r² = π.
        assert!((area(line) / std::f64::consts::PI - 1.0).abs() < 0.02 && area(line) > 0.0);
        let outside = |x: f64, y: f64| -at(x, y);
        assert!(area(&zero_lines(&nodes(20, outside), outside)[0]) < 0.0);
    }

    #[test]
    fn where_nothing_is_said_there_is_a_gap() {
        let at = |x: f64, y: f64| if x.abs() < 0.2 { f64::NAN } else { y - 0.3 * x };
        let lines = zero_lines(&nodes(41, at), at);
        assert_eq!(lines.len(), 2, "left and right of the gap");
        for (x, y) in lines.concat() {
            assert!(x.abs() >= 0.199 && (y - 0.3 * x).abs() < 1e-12);
        }
        let silent = |_: f64, _: f64| f64::NAN;
        assert!(zero_lines(&nodes(5, silent), silent).is_empty());
    }

    #[test]
    fn both_lines_of_a_saddle_are_kept_apart_as_its_middle_says() {
        for (shift, tops) in [(0.05, 2), (-0.05, 2)] {
            let at = |x: f64, y: f64| x * y + shift;
            // An even number of nodes puts the saddle into the middle of a square.
            let lines = zero_lines(&nodes(4, at), at);
            assert_eq!(lines.len(), tops);
            for line in lines {
                // A branch of a hyperbola stays on its side of the diagonal through the saddle.
                let side = |p: &Point| p.0 + shift.signum() * -p.1 > 0.0;
                assert!(line.iter().all(|p| side(p) == side(&line[0])), "{line:?}");
            }
        }
    }

    #[test]
    fn a_root_is_found_also_where_the_function_jumps() {
        assert!((root([(0.0, -1.0), (2.0, 3.0)], |x| x * x - 1.0) - 1.0).abs() < 1e-3);
        let jump = root([(0.0, -1.0), (1.0, 1.0)], |x| if x < 0.3 { -1.0 } else { 1.0 });
        assert!((0.2..0.4).contains(&jump), "{jump}");
    }
}
