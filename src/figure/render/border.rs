//! Borders of criteria: black with a white edge, told apart by dashes, with ticks towards one side.

use super::RenderError;
use super::canvas::Canvas;
use crate::figure::colour::Rgb;
use crate::figure::model::Stroke;

type Point = (f64, f64);

const BLACK: Rgb = Rgb(0, 0, 0);
const WHITE: Rgb = Rgb(255, 255, 255);
/// Thickness of the line, and with its white edge, pt.
const LINE: f64 = 1.0;
const EDGED: f64 = 2.6;
/// Length of the ticks, their distance, and their thickness, pt.
const TICK: f64 = 3.2;
const APART: f64 = 26.0;
const TICK_LINE: f64 = 0.8;

/// Drawn and left out in turn, pt; nothing: drawn throughout.
fn dashes(stroke: Stroke) -> &'static [f64] {
    match stroke {
        Stroke::Full => &[],
        Stroke::Long => &[6.0, 2.4],
        Stroke::Dots => &[1.1, 1.7],
        Stroke::LongDot => &[6.0, 1.8, 1.1, 1.8],
        Stroke::Short => &[2.8, 2.2],
        Stroke::LongTwoDots => &[6.0, 1.6, 1.1, 1.6, 1.1, 1.6],
    }
}

/// A line through places on the page; `sided`: with ticks to its left, seen with the page upright.
pub(super) fn border(
    canvas: &mut Canvas,
    line: &[Point],
    stroke: Stroke,
    sided: bool,
) -> Result<(), RenderError> {
    let ticks = if sided { ticks(line) } else { Vec::new() };
    canvas.path(line, EDGED, WHITE)?;
    for tick in &ticks {
        canvas.path(tick, TICK_LINE + EDGED - LINE, WHITE)?;
    }
    for piece in pieces(line, dashes(stroke)) {
        canvas.path(&piece, LINE, BLACK)?;
    }
    for tick in &ticks {
        canvas.path(tick, TICK_LINE, BLACK)?;
    }
    Ok(())
}

fn gap(from: Point, to: Point) -> f64 {
    (to.0 - from.0).hypot(to.1 - from.1)
}

fn between(from: Point, to: Point, share: f64) -> Point {
    (from.0 + share * (to.0 - from.0), from.1 + share * (to.1 - from.1))
}

/// The pieces of a line that a pattern draws.
fn pieces(line: &[Point], pattern: &[f64]) -> Vec<Vec<Point>> {
    if pattern.is_empty() {
        return vec![line.to_vec()];
    }
    let mut found = Vec::new();
    let (mut index, mut left) = (0, pattern[0]);
    let mut piece: Vec<Point> = line.first().copied().into_iter().collect();
    for ends in line.windows(2) {
        let (mut from, to) = (ends[0], ends[1]);
        while gap(from, to) >= left {
            from = between(from, to, left / gap(from, to).max(f64::MIN_POSITIVE));
            piece.push(from);
            if index % 2 == 0 {
                found.push(std::mem::take(&mut piece));
            }
            piece = vec![from];
            index = (index + 1) % pattern.len();
            left = pattern[index];
        }
        left -= gap(from, to);
        piece.push(to);
    }
    if index % 2 == 0 && left < pattern[index] {
        found.push(piece);
    }
    found
}

/// Ticks to the left of a line at even distances, symmetric to its middle.
fn ticks(line: &[Point]) -> Vec<[Point; 2]> {
    let length: f64 = line.windows(2).map(|w| gap(w[0], w[1])).sum();
    let count = (length / APART).round().max(1.0);
    let apart = length / count;
    let (mut found, mut ahead) = (Vec::new(), 0.5 * apart);
    for ends in line.windows(2) {
        let (from, to) = (ends[0], ends[1]);
        let size = gap(from, to);
        while size > 0.0 && ahead <= size {
            let foot = between(from, to, ahead / size);
            let (along, down) = ((to.0 - from.0) / size, (to.1 - from.1) / size);
            // Down the page is positive, so left of the way is (down, −along).
            found.push([foot, (foot.0 + TICK * down, foot.1 - TICK * along)]);
            ahead += apart;
        }
        ahead -= size;
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dashes_cover_their_share_of_the_line_across_its_corners() {
        let line = [(0.0, 0.0), (10.0, 0.0), (10.0, 7.0), (10.0, 20.0)];
        let found = pieces(&line, &[2.0, 1.0]);
        let long = |piece: &Vec<Point>| piece.windows(2).map(|w| gap(w[0], w[1])).sum::<f64>();
        assert_eq!(found.len(), 10);
        assert!(found.iter().all(|piece| (long(piece) - 2.0).abs() < 1e-12), "{found:?}");
        assert_eq!(found[3][1], (10.0, 0.0), "a dash goes around the corner: {:?}", found[3]);
        assert_eq!(pieces(&line, &[]), [line.to_vec()]);
    }

    #[test]
    fn ticks_point_left_of_the_way() {
        // To the right along the page: left is up, which is less y.
        let found = ticks(&[(0.0, 5.0), (52.0, 5.0)]);
        assert_eq!(found, [[(13.0, 5.0), (13.0, 5.0 - TICK)], [(39.0, 5.0), (39.0, 5.0 - TICK)]]);
        // Up the page: left is less x.
        let found = ticks(&[(5.0, 9.0), (5.0, 0.0)]);
        assert_eq!(found, [[(5.0, 4.5), (5.0 - TICK, 4.5)]]);
    }
}
