//! What the survey looks at when it compares cells: the verdict, the way of loss, and how far from another verdict.

use crate::assess::{Assessment, Plan};
use crate::verdict::{LostHow, Verdict};

/// A cell as its neighbours see it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct View {
    what: What,
    /// Smallest and largest ⟨Y⟩ of the cells it stands for; NaN where there is none.
    megno: [f32; 2],
    /// Closest approach of two planets, mutual Hill radii; NaN where there is none.
    approach_hill: f32,
    end_day: f32,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum What {
    Found(Verdict, Option<LostHow>),
    /// The computation broke off.
    Broken,
}

/// How far a cell must be from another verdict to vouch for the ground beside it.
///
/// The numbers come from whole maps of two invented systems and a real one (reports/speed/progressive.md): where
/// all corners of a block are calm in this sense, the cell in its middle has another verdict in a few cases
/// of a hundred at most, elsewhere in ten of a hundred and more.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Calm {
    /// Largest |⟨Y⟩ − 2| of a regular cell.
    pub megno_from_two: f32,
    /// Largest difference of ⟨Y⟩ between regular cells.
    pub megno_range: f32,
    /// Smallest ⟨Y⟩ of a chaotic cell.
    pub megno_chaotic: f32,
    /// Smallest approach of a chaotic cell, mutual Hill radii.
    pub approach_hill: f32,
    /// Latest end of a lost cell, day.
    pub end_day: f32,
}

impl Calm {
    /// Under a plan: within most of what counts as regular and flat (after a short span the transient of ⟨Y⟩ is
    /// still there, but the same for neighbours), twice the threshold of chaos, 1.6 times the distance that ends a cell, 0.15 of the span.
    pub fn under(plan: &Plan) -> Calm {
        Calm {
            megno_from_two: 0.08,
            megno_range: 0.02,
            megno_chaotic: 6.0,
            approach_hill: 1.6 * plan.encounter_hill.unwrap_or(1.0) as f32,
            end_day: (0.15 * plan.span_day) as f32,
        }
    }
}

impl View {
    pub fn of(assessment: &Assessment) -> View {
        let number = |value: Option<f64>| value.map_or(f32::NAN, |v| v as f32);
        View {
            what: What::Found(assessment.verdict, assessment.loss.map(|loss| loss.how)),
            megno: [number(assessment.megno); 2],
            approach_hill: number(assessment.smallest_approach.map(|approach| approach.hill)),
            end_day: assessment.end_time_day as f32,
        }
    }

    /// Of a cell that gave no answer.
    pub fn broken() -> View {
        View { what: What::Broken, megno: [f32::NAN; 2], approach_hill: f32::NAN, end_day: f32::NAN }
    }

    /// Same verdict and, for what is lost, the same way.
    pub fn same(self, other: View) -> bool {
        self.what == other.what
    }

    /// What stands between two cells that vouch for it: the same, with the wilder numbers of both.
    pub fn with(self, other: View, calm: &Calm) -> Option<View> {
        let megno = [self.megno[0].min(other.megno[0]), self.megno[1].max(other.megno[1])];
        let regular = matches!(self.what, What::Found(Verdict::Regular, _));
        let flat = !regular || megno[1] - megno[0] <= calm.megno_range;
        let both = self.same(other) && self.is_calm(calm) && other.is_calm(calm);
        (both && flat).then(|| View {
            megno,
            approach_hill: self.approach_hill.min(other.approach_hill),
            end_day: self.end_day.max(other.end_day),
            ..self
        })
    }

    /// Far from any other verdict; never where a number that would say so was not measured.
    pub fn is_calm(self, calm: &Calm) -> bool {
        match self.what {
            What::Found(Verdict::Regular, _) => {
                self.megno.iter().all(|y| (y - 2.0).abs() <= calm.megno_from_two)
            }
            // A single planet meets nobody: no approach speaks against.
            What::Found(Verdict::Chaotic, _) => {
                let near = self.approach_hill < calm.approach_hill;
                self.megno[0] >= calm.megno_chaotic && !near
            }
            What::Found(Verdict::Lost, _) => self.end_day <= calm.end_day,
            What::Found(Verdict::Undecided | Verdict::Untrusted, _) | What::Broken => false,
        }
    }

    /// Verdict and way of loss.
    pub fn found(self) -> Option<(Verdict, Option<LostHow>)> {
        match self.what {
            What::Found(verdict, how) => Some((verdict, how)),
            What::Broken => None,
        }
    }
}
