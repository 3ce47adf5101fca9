//! The onset of chaos on maps of (period ratio, eccentricity) beside the borders of analytic criteria.

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use std::process::Command;

use super::report::{Report, folder};

const WORDS: &str = "
Two maps of the invented pair Duetto (systems/duetto.toml: 10.2 and 9.1 Earth masses, total mass ratio 6.3e-5), 121 × 61 cells, 1e4 inner orbits each,
over the period ratio and the eccentricity of the outer planet (`abide survey systems/duetto-map.toml`; the inner orbit is circular) and of the inner planet (the same
with `b.eccentricity`; the outer orbit is circular). Curves are drawn by the program on the configurations of the map; margins come from its criteria.ecsv.

![outer](overlap.png)

![inner](overlap-inner.png)

Per criterion: `inside` is where it says trouble (negative margin), `outside` the rest of its domain; cells are decided ones (`undecided` is left out, as is what lies outside the
criterion's domain). `onset`: per column of period ratio the eccentricity that splits regular cells below from chaotic or lost ones above with the fewest
exceptions. Onset minus curve, in e, over the columns in which both lie on the map: median, quartiles, and the range of the middle 80 %; then the median of their ratio.
There is no limit: the criteria are approximations, and the table says how good ones. Sources: Hadden & Lithwick (2018), Deck et al. (2013),
Petit et al. (2017), Marchal & Bozis (1982); constants of the first two from memory. `lost` outside is the share of lost cells on
the quiet side; rows of `overlap` are repeated for the columns on either side of a period ratio of 1.4.

";

/// One cell: place, whether chaotic or lost (none: undecided), margins by criterion.
struct Cell {
    ratio: f64,
    eccentricity: f64,
    trouble: Option<bool>,
    lost: bool,
    margins: BTreeMap<String, f64>,
}

pub fn write() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("systems");
    let outer = fs::read_to_string(root.join("duetto-map.toml")).unwrap();
    let inner = outer
        .replace("vary = \"c.eccentricity\"", "vary = \"b.eccentricity\"")
        .replace("onset of chaos\"", "onset of chaos, inner planet eccentric\"");
    let round = |text: &str| text.replace("eccentricity = \"0.04 ± 0.02\"", "eccentricity = \"0.0\"");
    let mut rows = Vec::new();
    let mut told = String::new();
    for (name, picture, study) in [("outer e", "overlap.png", outer), ("inner e", "overlap-inner.png", inner)]
    {
        let desk = tempfile::tempdir().unwrap();
        let system = fs::read_to_string(root.join("duetto.toml")).unwrap();
        let system = if name == "inner e" { round(&system) } else { system };
        fs::write(desk.path().join("duetto.toml"), system).unwrap();
        fs::write(desk.path().join("map.toml"), study).unwrap();
        let run = desk.path().join("run");
        let mut survey = Command::new(env!("CARGO_BIN_EXE_abide"));
        survey.arg("survey").arg(desk.path().join("map.toml")).args(["--threads", "1", "--into"]).arg(&run);
        assert!(survey.status().unwrap().success());
        fs::copy(run.join("map.png"), folder().join(picture)).unwrap();
        let cells = cells(&run);
        told += &counts(name, &cells);
        rows.extend(criteria(&cells).iter().map(|criterion| row(name, criterion, criterion, &cells)));
        let (near, wide): (Vec<Cell>, Vec<Cell>) = cells.into_iter().partition(|cell| cell.ratio < 1.4);
        rows.push(row(name, "overlap", "overlap, ratio < 1.4", &near));
        rows.push(row(name, "overlap", "overlap, ratio ≥ 1.4", &wide));
    }
    Report {
        name: "overlap",
        title: "Onset of chaos and the borders of analytic criteria",
        words: format!("{}\n\n{told}\n{}", WORDS.trim(), SEEN.trim()),
        columns: vec![
            "map",
            "criterion",
            "inside: cells",
            "chaotic or lost",
            "outside: cells",
            "regular",
            "lost",
            "columns",
            "onset − curve: median",
            "quartiles",
            "middle 80 %",
            "onset/curve: median",
        ],
        rows,
    }
    .write();
}

/// What the maps show, looked at by eye.
const SEEN: &str = "
What the maps show, looked at by eye: for period ratios up to about 1.35 the curve of Hadden & Lithwick (2018) runs along the lower edge of the chaotic sea. Farther out chaos
begins below it: their crossing eccentricity is (a₂ − a₁)/a₁, while an eccentric outer planet crosses a circular inner one at (a₂ − a₁)/a₂ already, so with an eccentric inner planet the
agreement is better; what remains at ratios above 1.4 is the sea around 3:2, 8:5 and 5:3, which begins at two thirds of the curve's eccentricity. Regular cells above the
curve lie in the islands of 5:4, 4:3, 7:5, 3:2 and their neighbours, where the resonance protects the pair; 1e4 orbits may be too few for weak chaos there. The width of Deck et al. (2013) bounds the
strip in which even circular orbits are chaotic or lost. The Hill border is the one that lost cells respect: what is chaotic below it stays.
";

/// The criteria of the table.
fn criteria(cells: &[Cell]) -> Vec<String> {
    let mut names: Vec<String> = cells.iter().flat_map(|cell| cell.margins.keys().cloned()).collect();
    names.sort_unstable();
    names.dedup();
    names
}

fn table(path: &Path) -> (Vec<String>, Vec<Vec<String>>) {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).unwrap();
    let names = reader.headers().unwrap().iter().map(str::to_string).collect();
    (names, reader.records().map(|r| r.unwrap().iter().map(str::to_string).collect()).collect())
}

fn cells(run: &Path) -> Vec<Cell> {
    let (names, found) = table(&run.join("cells.ecsv"));
    let verdict = names.iter().position(|name| name == "verdict").unwrap();
    let (criteria, margins) = table(&run.join("criteria.ecsv"));
    assert_eq!(found.len(), margins.len());
    let cell = |(found, margins): (&Vec<String>, &Vec<String>)| {
        assert_eq!(found[..3], margins[..3], "the tables have the same cells");
        Cell {
            ratio: found[1].parse().unwrap(),
            eccentricity: found[2].parse().unwrap(),
            trouble: match found[verdict].as_str() {
                "regular" => Some(false),
                "chaotic" | "lost" => Some(true),
                _ => None,
            },
            lost: found[verdict] == "lost",
            margins: (3..criteria.len())
                .filter_map(|k| Some((criteria[k].clone(), margins[k].parse().ok()?)))
                .collect(),
        }
    };
    found.iter().zip(&margins).map(cell).collect()
}

fn counts(name: &str, cells: &[Cell]) -> String {
    let share = |of: Option<bool>| {
        100.0 * cells.iter().filter(|cell| cell.trouble == of).count() as f64 / cells.len() as f64
    };
    format!(
        "* {name}: {} cells, {:.1} % regular, {:.1} % chaotic or lost, {:.1} % undecided or untrusted.\n",
        cells.len(),
        share(Some(false)),
        share(Some(true)),
        share(None)
    )
}

fn row(map: &str, criterion: &str, label: &str, cells: &[Cell]) -> Vec<String> {
    let side = |inside: bool| -> (usize, usize) {
        let of = cells.iter().filter(|c| c.margins.get(criterion).is_some_and(|m| (*m <= 0.0) == inside));
        let decided: Vec<bool> = of.filter_map(|cell| cell.trouble).collect();
        (decided.iter().filter(|trouble| **trouble == inside).count(), decided.len())
    };
    let share = |(hits, of): (usize, usize)| format!("{:.1} %", 100.0 * hits as f64 / of.max(1) as f64);
    let (inside, outside) = (side(true), side(false));
    let quiet = |cell: &&Cell| cell.margins.get(criterion).is_some_and(|margin| *margin > 0.0);
    let lost = cells.iter().filter(quiet).filter(|cell| cell.lost).count();
    let mut columns: BTreeMap<u64, Vec<&Cell>> = BTreeMap::new();
    cells.iter().for_each(|cell| columns.entry(cell.ratio.to_bits()).or_default().push(cell));
    let pairs: Vec<(f64, f64)> =
        columns.values().filter_map(|column| Some((onset(column)?, curve(column, criterion)?))).collect();
    let mut gaps: Vec<f64> = pairs.iter().map(|(onset, curve)| onset - curve).collect();
    let mut ratios: Vec<f64> = pairs.iter().map(|(onset, curve)| onset / curve).collect();
    gaps.sort_by(f64::total_cmp);
    ratios.sort_by(f64::total_cmp);
    let at = |values: &[f64], share: f64| match values.len() {
        0 => "-".to_string(),
        count => format!("{:.3}", values[((count - 1) as f64 * share).round() as usize]),
    };
    vec![
        map.to_string(),
        label.to_string(),
        inside.1.to_string(),
        share(inside),
        outside.1.to_string(),
        share(outside),
        share((lost, outside.1)),
        pairs.len().to_string(),
        at(&gaps, 0.5),
        format!("{} … {}", at(&gaps, 0.25), at(&gaps, 0.75)),
        format!("{} … {}", at(&gaps, 0.1), at(&gaps, 0.9)),
        at(&ratios, 0.5),
    ]
}

/// The eccentricity that splits a column best; none where that is its lower or upper end.
fn onset(column: &[&Cell]) -> Option<f64> {
    let decided: Vec<(f64, bool)> =
        column.iter().filter_map(|cell| Some((cell.eccentricity, cell.trouble?))).collect();
    // Exceptions of a split after the first k cells: trouble below, none above.
    let mut exceptions = decided.iter().filter(|(_, trouble)| !trouble).count();
    let mut best = (exceptions, 0);
    for (k, (_, trouble)) in decided.iter().enumerate() {
        exceptions = if *trouble { exceptions + 1 } else { exceptions - 1 };
        if exceptions < best.0 {
            best = (exceptions, k + 1);
        }
    }
    let split = best.1;
    (split > 0 && split < decided.len()).then(|| 0.5 * (decided[split - 1].0 + decided[split].0))
}

/// The lowest eccentricity of a column at which the margin is 0; none where there is none.
fn curve(column: &[&Cell], criterion: &str) -> Option<f64> {
    let known: Vec<(f64, f64)> =
        column.iter().filter_map(|c| Some((c.eccentricity, *c.margins.get(criterion)?))).collect();
    let step = known.windows(2).find(|w| w[0].1 > 0.0 && w[1].1 <= 0.0)?;
    Some(step[0].0 + (step[1].0 - step[0].0) * step[0].1 / (step[0].1 - step[1].1))
}
