//! HD 45364: the map of the outer planet, by the program itself, and the fundamental frequencies.

use std::fs;
use std::process::Command;

use abide::system::Frame;

use super::report::{Report, folder, met};
use super::truth_support::{hd_45364, hd_45364::frequencies, truth_path};

const WORDS: &str = "
Source: Correia et al. (2009), Table 4; seen. Their orbital solution is tests/truth/hd-45364.toml (Jacobi elements; partly from memory, see the
file). `follow`: `abide follow` over 1e4 yr, frequencies from its frequencies.ecsv, lines of 3λc − 2λb − ϖb from its lines.ecsv under the names it
gives them. `phase`: an independent evaluation over 1e5 years, libration from the strongest Fourier line alone, n_b - n_c the mean rate of λb − λc. Found numbers change by less than 0.0003 deg/yr and 0.01 deg when the step is a quarter of this one or the scheme is (10,6,4). The
solution is said to be in Jacobi elements; read as astrocentric ones the same numbers meet the published lines 5 to 200 times closer,
so what is left in the Jacobi rows is most likely the convention. Earlier independent integrations of these elements gave 19.83 deg/yr,
67.8 deg, 192.51 deg/yr (Jacobi) and 19.89, 68.9, 192.43 (astrocentric), with methods not stated.

![map](hd-45364-map.png)

The map (`cargo bench --bench validation -- hd-45364-map`): `abide survey tests/truth/hd-45364-map.toml`, 145 × 101 cells, 1e4 inner orbits each; its numbers are in
[hd-45364-map.txt](hd-45364-map.txt).
";

/// What the map shows, looked at by eye.
const SEEN: &str = "
What it shows: around the exact 3:2 commensurability (340.4 d) stands one closed regular island, 334 to 347 d wide at small
eccentricity and narrowing to a rounded top near e = 0.16. The published solution with its error bars lies well inside it, 2.5 d to the right of
the commensurability; its cell is regular (⟨Y⟩ = 1.985). The island is framed by a chaotic separatrix 1 to 2 d wide on either side, then by thin regular
flanks (330 to 332 d and 348 to 350 d, up to e = 0.15), and beyond 329 and 352 d nearly every cell ends in a close encounter. From e of about 0.12 on the
orbits cross, and the resonance alone keeps the planets apart; above the island a second, ragged regular column at 337 to 343 d does so up to e = 0.3.
Below e = 0.03 right of 353 d a strip of cells is chaotic and not yet lost.
";

pub fn write() {
    let row = |reading: &str, what: &str, found: f64, stated: f64, limit: f64| {
        let departure = found / stated - 1.0;
        vec![
            what.to_string(),
            reading.to_string(),
            "phase".to_string(),
            format!("{found:.4}"),
            format!("{stated}"),
            format!("{:.2} %", 100.0 * departure),
            format!("{} %", 100.0 * limit),
            met(departure, limit),
        ]
    };
    let through_follow = ["jacobi", "astrocentric"].map(|reading| {
        let each = hd_45364::table(reading).into_iter().map(|row| {
            let (found, published) = (format!("{:.4}", row.found), format!("{:.4}", row.published));
            let (departure, limit) = match row.published {
                0.0 => (format!("{:.1e}", row.departure()), format!("{:.0e}", row.limit)),
                _ => (format!("{:.2} %", 100.0 * row.departure()), format!("{} %", 100.0 * row.limit)),
            };
            let met = met(row.departure(), row.limit);
            let reading = if reading == "jacobi" { "Jacobi" } else { reading };
            vec![
                row.quantity.into(),
                reading.into(),
                "follow".into(),
                found,
                published,
                departure,
                limit,
                met,
            ]
        });
        each.collect::<Vec<_>>()
    });
    let rows = [("Jacobi", Frame::Jacobi), ("astrocentric", Frame::Astrocentric)].map(|(reading, frame)| {
        let found = frequencies(1e5, frame);
        vec![
            row(reading, "libration, deg/yr", found.libration_deg_per_yr, 19.8207, 0.02),
            row(reading, "its amplitude, deg", found.amplitude_deg, 68.444, 0.03),
            row(reading, "n_b - n_c, deg/yr", found.difference_deg_per_yr, 192.3963, 0.02),
        ]
    });
    let report = Report {
        name: "hd-45364",
        title: "HD 45364: the 3:2 island and the fundamental frequencies",
        words: format!("{}{SEEN}", WORDS.trim_start()),
        columns: vec![
            "quantity",
            "elements_read_as",
            "by",
            "found",
            "published",
            "departure",
            "limit",
            "met",
        ],
        rows: [through_follow.concat(), rows.concat()].concat(),
    };
    report.write();
}

/// The map with its numbers.
pub fn write_map() {
    let into = tempfile::tempdir().unwrap();
    let run = into.path().join("run");
    let status = Command::new(env!("CARGO_BIN_EXE_abide"))
        .arg("survey")
        .arg(truth_path("hd-45364-map.toml"))
        .arg("--into")
        .arg(&run)
        .status()
        .unwrap();
    assert!(status.success());
    fs::copy(run.join("map.png"), folder().join("hd-45364-map.png")).unwrap();
    let summary = fs::read_to_string(run.join("summary.txt")).unwrap();
    let command = "command      abide survey tests/truth/hd-45364-map.toml\n";
    fs::write(folder().join("hd-45364-map.txt"), summary + command).unwrap();
}
