//! Energy error against cost: every scheme in both coordinate sets, as a table and a figure.

use abide::integrate::{
    Advance, Block, Coordinates, Scheme, State, Tangent, advance, energy, from_map, to_map,
};

use super::cost_figure::{self, Curve};
use super::giants;
use super::report::{Report, folder, short};
use super::round_off::slope;
use super::shelf::{placed, state};

/// Kicks per turn of the innermost planet.
const KICKS: [f64; 15] =
    [16.0, 24.0, 32.0, 44.0, 60.0, 80.0, 110.0, 150.0, 200.0, 280.0, 400.0, 560.0, 800.0, 1100.0, 1600.0];
const TURNS: f64 = 300.0;
/// Those in the figure.
const DRAWN: [&str; 7] = ["(2,2)", "(4,2)", "(8,2)", "(8,4)", "(10,4)", "(8,6,4)", "(10,6,4)"];
/// Looks at the energy.
const LOOKS: usize = 3000;
/// What is asked of (10,6,4) on the giant planets.
const ROUND_OFF: f64 = 1e-13;

const WORDS: &str = "
Largest relative energy error over 300 turns of the innermost planet (3000 looks, after the corrector for leapfrog), against kicks per turn. `giants`: Jupiter to
Neptune from JPL DE406, inner masses in the Sun, Newton alone (as in `giants`); `compact`: three invented planets of mass ratios 2e-5, 4e-5 and 3e-5 at
axes 1, 1.39 and 1.97, e = 0.03, 0.05, 0.02, up to 0.04 rad inclined. `slope_last` and `slope_steepest` are of the logarithm of the error against that of
the step: through the last three points above 20 times the smallest error of the curve, and the steepest of any three neighbours there. `smallest` is the smallest error of the curve,
`kicks_to_1e-10` the fewest kicks per turn tried with an error below 1e-10. A scheme of generalised order (n1, ..., nk) is expected to end with slope nk (leapfrog
and (2n,2): 2) once the step is short, if rounding does not hide it, and to be steeper before. In heliocentric coordinates the jump of the star is in the kick. Limit: (10,6,4) on the giant planets
reaches 1e-13. All points: [schemes-cost-points.csv](schemes-cost-points.csv). The figure shows seven of the schemes, as more lines could not be told
apart: (6,2), (10,2), (12,2) and those whose steps begin with a kick stand in the table and among the points only.

![Energy error against cost](schemes-cost.png)
";

pub fn write() {
    let systems = [("giants", giants::start().0, 4332.59), ("compact", compact(), std::f64::consts::TAU)];
    let mut curves = Vec::new();
    for (system, start, turn) in &systems {
        for coordinates in [Coordinates::Heliocentric, Coordinates::Jacobi] {
            for scheme in Scheme::all() {
                let points = KICKS
                    .iter()
                    .map(|kicks| (*kicks, worst(start, coordinates, scheme, *turn, *kicks)))
                    .filter(|(kicks, _)| kicks / scheme.stages() as f64 >= 4.0)
                    .collect();
                curves.push(Curve { system, coordinates, scheme: scheme.name, points });
            }
        }
    }
    points(&curves);
    let drawn: Vec<&Curve> = curves.iter().filter(|curve| DRAWN.contains(&curve.scheme)).collect();
    assert_eq!(drawn.len(), 4 * DRAWN.len(), "every scheme of the figure is there, in each panel");
    cost_figure::draw(&drawn, &folder().join("schemes-cost.png"));
    let columns = vec![
        "system",
        "coordinates",
        "scheme",
        "slope_last",
        "slope_steepest",
        "smallest",
        "kicks_to_1e-10",
        "limit",
        "met",
    ];
    let rows = curves.iter().map(row).collect();
    Report {
        name: "schemes-cost",
        title: "Energy error against cost",
        words: WORDS.to_string(),
        columns,
        rows,
    }
    .write();
}

/// Three planets near no strong resonance.
pub fn compact() -> State {
    let mut bodies =
        [placed(1.0, 0.03, 0.4, 0.0), placed(1.39, 0.05, 2.3, 1.1), placed(1.97, 0.02, 4.0, 2.5)];
    for ((pos, vel), tilt) in bodies.iter_mut().zip([0.0f64, 0.04, 0.02]) {
        for v in [pos, vel] {
            *v = [v[0], v[1] * tilt.cos(), v[1] * tilt.sin()];
        }
    }
    state(1.0, &[2e-5, 4e-5, 3e-5], &bodies)
}

fn worst(start: &State, coordinates: Coordinates, scheme: &Scheme, turn: f64, kicks: f64) -> f64 {
    let per_turn = kicks / scheme.stages() as f64;
    let mut block = Block::in_coordinates(coordinates, 1, start.gm.len());
    let still = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    block.start(0, start, &still, turn / per_turn, 1.0);
    to_map(&mut block, scheme);
    let first = energy(start);
    let steps = ((TURNS * per_turn) as usize / LOOKS).max(1);
    let mut worst = 0.0f64;
    for _ in 0..((TURNS * per_turn) as usize / steps).max(1) {
        advance(Advance { block: &mut block, scheme, steps, tangent: false });
        let mut seen = block.clone();
        from_map(&mut seen, scheme);
        worst = worst.max(((energy(&seen.state(0)) - first) / first).abs());
    }
    worst
}

fn points(curves: &[Curve]) {
    let mut csv = csv::Writer::from_path(folder().join("schemes-cost-points.csv")).unwrap();
    csv.write_record(["system", "coordinates", "scheme", "kicks_per_turn", "energy_error"]).unwrap();
    for curve in curves {
        for (kicks, error) in &curve.points {
            let cells =
                [curve.system, curve.coordinates.word(), curve.scheme, &kicks.to_string(), &short(*error)];
            csv.write_record(cells).unwrap();
        }
    }
    csv.flush().unwrap();
}

fn row(curve: &Curve) -> Vec<String> {
    let smallest = curve.points.iter().map(|p| p.1).fold(f64::MAX, f64::min);
    // The points of a curve on its way down, before rounding.
    let falling: Vec<(f64, f64)> = curve
        .points
        .iter()
        .take_while(|p| p.1 > 20.0 * smallest.max(5e-16) || smallest > 1e-12)
        .map(|p| (-p.0.ln(), p.1.ln()))
        .collect();
    let slopes: Vec<f64> = falling.windows(3).map(slope).collect();
    let last = slopes.last().map_or("-".to_string(), |s| format!("{s:.1}"));
    let steepest = slopes.iter().copied().reduce(f64::max).map_or("-".to_string(), |s| format!("{s:.1}"));
    let cheap = curve.points.iter().find(|p| p.1 < 1e-10).map_or("-".to_string(), |p| format!("{:.0}", p.0));
    let held = curve.system == "giants" && curve.scheme == "(10,6,4)";
    let met = if smallest <= ROUND_OFF { "yes" } else { "NO" };
    vec![
        curve.system.to_string(),
        curve.coordinates.word().to_string(),
        curve.scheme.to_string(),
        last,
        steepest,
        short(smallest),
        cheap,
        if held { short(ROUND_OFF) } else { String::new() },
        if held { met } else { "" }.to_string(),
    ]
}
