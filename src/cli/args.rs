//! What may be typed. Parsing never acts.

use std::path::PathBuf;

use clap::{Parser, Subcommand};

/// Which of the planetary systems that the data allow would abide?
#[derive(Debug, Parser)]
#[command(version, propagate_version = true)]
pub struct Args {
    #[command(subcommand)]
    pub command: Command,
}

#[derive(Debug, Subcommand)]
pub enum Command {
    /// Look at a system without integrating it; with --readings, integrate its possible readings
    Inspect(InspectArgs),
    /// Follow one configuration: series, frequencies, resonances, verdict, figure
    Follow(FollowArgs),
    /// Survey many configurations: a study → a run with its stability map
    Survey(SurveyArgs),
    /// Draw figures again from a stored run
    Draw(DrawArgs),
    /// Print the completion of command lines for a shell
    Completions(CompletionsArgs),
}

#[derive(Debug, clap::Args)]
pub struct InspectArgs {
    /// System file (TOML)
    pub system: PathBuf,
    /// Integrate every reading that the file leaves open or that is commonly confused (frame of the elements, whose
    /// pericentre, transit rule, whose mean longitude) and show verdict and resonant angles of each
    #[arg(long)]
    pub readings: bool,
    /// With --readings: how long each is followed (default: 1e5 orbits of the innermost planet, fewer where that would
    /// take more than a minute or so)
    #[arg(long, requires = "readings", allow_hyphen_values = true)]
    pub span: Option<String>,
    /// Print JSON to standard output instead of text
    #[arg(long)]
    pub json: bool,
}

#[derive(Debug, clap::Args)]
pub struct FollowArgs {
    /// System file (TOML)
    pub system: PathBuf,
    /// How long: "1e5 orbits" of the innermost planet, or a time such as "2 Myr"
    #[arg(long, default_value = "1e4 orbits", allow_hyphen_values = true)]
    pub span: String,
    /// Folder for the tables series, frequencies, lines and resonances (.ecsv), verdict.json and series.png (default:
    /// reports/runs/NAME)
    #[arg(long, value_name = "DIR")]
    pub into: Option<PathBuf>,
    /// How many rows the series has at most
    #[arg(long, default_value_t = 2000)]
    pub rows: usize,
    /// Step: "auto", a time such as "0.5 d", or "30 per orbit" of the innermost planet
    #[arg(long, default_value = "auto", allow_hyphen_values = true)]
    pub step: String,
    /// Splitting: "auto", or a generalised order: "(2,2)" (with corrector), "(4,2)" to "(12,2)", "(8,4)", "(10,4)",
    /// "(8,6,4)", "(10,6,4)"; "(2,2) kick-first" to "(12,2) kick-first" begin each step with a kick
    #[arg(long, default_value = "auto")]
    pub scheme: String,
    /// Coordinates of the splitting
    #[arg(long, value_enum, default_value_t = CoordinateWord::Auto)]
    pub coordinates: CoordinateWord,
    /// Compensated sums, which keep what rounding cuts off positions and velocities: for very long runs, a quarter slower
    #[arg(long, value_enum, value_name = "WORD", default_value_t = CompensationWord::Auto)]
    pub compensated: CompensationWord,
    /// Which integrator: the symplectic splitting, or the adaptive one alone (slower, to rounding, for checks)
    #[arg(long, value_enum, default_value_t = EngineWord::Symplectic)]
    pub engine: EngineWord,
    /// Largest relative energy error; what misses it is done again with a smaller step, then with the adaptive engine
    #[arg(long, value_name = "NUMBER", default_value = "1e-6", allow_hyphen_values = true)]
    pub energy_error: String,
    /// A planet this far from the star has escaped, e.g. "100 au" (default: 20 times the largest apocentre)
    #[arg(long, value_name = "DISTANCE", allow_hyphen_values = true)]
    pub escape: Option<String>,
    /// Planets this close to each other end the run: mutual Hill radii; "resolve" goes through encounters with the
    /// adaptive engine; "off" goes straight through (with both only collisions end the run)
    #[arg(long, value_name = "DISTANCE", default_value = "1 hill", allow_hyphen_values = true)]
    pub encounter: String,
    /// Time between two checkpoints; writing them never takes more than a twentieth of the time
    #[arg(long, value_name = "TIME", default_value = "10 s", allow_hyphen_values = true)]
    pub checkpoint: String,
    /// Drop what the folder holds of a former command and begin again
    #[arg(long)]
    pub anew: bool,
    /// Print nothing but errors
    #[arg(long)]
    pub quiet: bool,
    /// Print the verdict as JSON to standard output
    #[arg(long)]
    pub json: bool,
}

#[derive(Debug, clap::Args)]
pub struct SurveyArgs {
    /// Study file, or a system file together with --vary
    pub study: PathBuf,
    /// With a system file: the key to vary over ±3σ of its stated uncertainty (once or twice)
    #[arg(long, value_name = "KEY")]
    pub vary: Vec<String>,
    /// With --vary: how long each cell is followed
    #[arg(long)]
    pub span: Option<String>,
    /// With --vary: cells along each axis
    #[arg(long)]
    pub cells: Option<usize>,
    /// Folder of the run (default: reports/runs/NAME)
    #[arg(long, value_name = "DIR")]
    pub into: Option<PathBuf>,
    /// Worker threads (default: all cores)
    #[arg(long)]
    pub threads: Option<usize>,
    /// Integrate every cell; without it, on a grid of 40 000 cells or more, cells far from any other verdict take that
    /// of all cells around them and are marked as filled
    #[arg(long)]
    pub every_cell: bool,
    /// Fill such cells on a smaller grid too
    #[arg(long, conflicts_with = "every_cell")]
    pub fill: bool,
    /// Confirm a survey of more than 10 million cells
    #[arg(long)]
    pub really: bool,
    /// Then follow a sample of the surviving cells longer, and tell which frequency drift predicts loss (needs the
    /// measure "frequency_drift"; for reporting only)
    #[arg(long)]
    pub calibrate: bool,
    /// With --calibrate: how many cells are followed longer
    #[arg(long, value_name = "COUNT", default_value_t = 100, requires = "calibrate")]
    pub calibrate_cells: usize,
    /// With --calibrate: how many times the span of the study they are followed
    #[arg(long, value_name = "FACTOR", default_value_t = 10.0, requires = "calibrate")]
    pub calibrate_longer: f64,
    /// Print nothing but errors
    #[arg(long)]
    pub quiet: bool,
    /// Print the summary as JSON to standard output
    #[arg(long)]
    pub json: bool,
}

#[derive(Debug, clap::Args)]
pub struct DrawArgs {
    /// Folder of a run
    pub run: PathBuf,
    /// Column to show as colour
    #[arg(long, value_name = "COLUMN")]
    pub column: Option<String>,
    /// Draw the border of an analytic criterion over the map, up to six times, in place of those the study names: hill,
    /// crossing, intersection, amd-collision, amd-hill, amd-overlap, circular-overlap, overlap, binary, hierarchy;
    /// "none" draws no border
    #[arg(long, value_name = "CRITERION")]
    pub criterion: Vec<String>,
    /// Write the margins of those criteria in every cell to criteria.ecsv in the run, too
    #[arg(long)]
    pub margins: bool,
    /// Picture file (default: map.png in the run, or map-COLUMN.png)
    #[arg(long, value_name = "FILE")]
    pub into: Option<PathBuf>,
    /// Width on paper, e.g. "88 mm" for one column; text keeps its size
    #[arg(long, value_name = "WIDTH", default_value = "180 mm")]
    pub width: String,
}

#[derive(Debug, clap::Args)]
pub struct CompletionsArgs {
    /// The shell
    #[arg(value_enum)]
    pub shell: clap_complete::Shell,
}

/// Which integrator does the work.
#[derive(Clone, Copy, Debug, PartialEq, Eq, clap::ValueEnum)]
pub enum EngineWord {
    Symplectic,
    Adaptive,
}

/// Whether sums are compensated.
#[derive(Clone, Copy, Debug, PartialEq, Eq, clap::ValueEnum)]
pub enum CompensationWord {
    /// On for more than 1e8 steps
    Auto,
    On,
    Off,
}

/// The coordinates in which the symplectic scheme splits.
#[derive(Clone, Copy, Debug, PartialEq, Eq, clap::ValueEnum)]
pub enum CoordinateWord {
    /// Jacobi with a second star or a heavy planet, else heliocentric
    Auto,
    Heliocentric,
    Jacobi,
}
