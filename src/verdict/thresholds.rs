//! The thresholds.

use super::{Chaos, Verdict};

/// Largest ⟨Y⟩ that counts as regular.
///
/// ⟨Y⟩ tends to 2 on a quasi-periodic orbit, to below 2 close to a stable periodic one (Cincotta & Simó 2000;
/// Cincotta, Giordano & Simó 2003). After 1e3 periods what is left of the transient is a few percent, so maps take
/// 2 plus a small margin (Goździewski, Breiter & Borczyk 2008 for planetary systems).
pub const REGULAR_UP_TO: f64 = 2.1;

/// Smallest ⟨Y⟩ that counts as chaotic.
///
/// On a chaotic orbit ⟨Y⟩ = λt/2 (Cincotta & Simó 2000): 3 means that e⁶ times the initial displacement has been
/// reached beyond the linear growth. Between the two thresholds the span was too short to tell.
pub const CHAOTIC_FROM: f64 = 3.0;

/// Fewest orbits of the outermost planet after which a small ⟨Y⟩ says anything.
///
/// Common practice: maps follow 1e3 to 1e5 orbits of the outer planet; after fewer than a hundred the transient
/// of ⟨Y⟩ hides all but violent chaos (Goździewski, Breiter & Borczyk 2008 show how it dies away).
pub const LEAST_OUTER_ORBITS: f64 = 100.0;

/// What a verdict rests on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Evidence {
    pub lost: bool,
    /// Largest relative energy error; none when nothing was integrated.
    pub energy_error: Option<f64>,
    pub energy_error_asked: f64,
    pub mean_megno: Option<f64>,
    /// How many periods of the outermost planet were followed.
    pub outer_orbits: f64,
}

/// The verdict that the evidence allows. An energy error above what was asked makes everything else untrusted.
pub fn judge(evidence: &Evidence) -> Verdict {
    if evidence.energy_error.is_some_and(|error| error.is_nan() || error > evidence.energy_error_asked) {
        return Verdict::Untrusted;
    }
    if evidence.lost {
        return Verdict::Lost;
    }
    match evidence.mean_megno {
        Some(y) if y >= CHAOTIC_FROM => Verdict::Chaotic,
        Some(y) if y <= REGULAR_UP_TO && evidence.outer_orbits >= LEAST_OUTER_ORBITS => Verdict::Regular,
        _ => Verdict::Undecided,
    }
}

/// What ⟨Y⟩ says beside the verdict; none where it was not measured or nothing can be trusted.
///
/// Of a lost cell too: chaotic if ⟨Y⟩ had passed the threshold before the end, else undecided, since a short life shows no
/// regularity.
pub fn chaos(verdict: Verdict, mean_megno: Option<f64>) -> Option<Chaos> {
    let y = mean_megno?;
    match verdict {
        Verdict::Untrusted => None,
        Verdict::Regular => Some(Chaos::Regular),
        _ if y >= CHAOTIC_FROM => Some(Chaos::Chaotic),
        _ => Some(Chaos::Undecided),
    }
}

/// Whether ⟨Y⟩ is and would end at twice the threshold of chaos even if the motion were regular from now to the end of
/// the span. `share` of the span is done, with `mean` = ⟨Y⟩ and `y` = Y there.
///
/// From Y(t)·t = 2∫ (δ̇/δ) s ds: linear growth of |δ| after t gives Y(s) = 2 + (t/s)(Y(t) − 2), and so
/// ⟨Y⟩(T) = (t/T)⟨Y⟩(t) + 2(1 − t/T) + (t/T) ln(T/t) (Y(t) − 2). The factor of two leaves room for growth slower than
/// linear. On steady chaos Y = 2⟨Y⟩ = λt, and this is met when |δ| has grown by e^(λt) with λt of 12 at and after half
/// of the span, of 17 at a tenth of it, of 81 at a hundredth. Definitions: Cincotta & Simó (2000).
pub fn is_surely_chaotic(share: f64, mean: f64, y: f64) -> bool {
    let certain = 2.0 * CHAOTIC_FROM;
    let at_end = share * mean + 2.0 * (1.0 - share) - share * share.ln() * (y - 2.0);
    // The mean as it stands decides the verdict, so it must be there too: Y alone may be at a crest.
    mean >= certain && at_end >= certain
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn chaos_is_certain_only_if_calm_to_the_end_could_not_undo_it() {
        // The slow twin: Y and its mean followed by the trapezium rule through chaos to `share`, then linear growth.
        for (rate, share) in
            [(40.0, 0.2), (40.0, 0.5), (300.0, 0.02), (100.0, 0.2), (900.0, 0.1), (24.5, 0.5)]
        {
            let steps = 400_000;
            let (mut weighted, mut sum, mut at_share, mut before) = (0.0, 0.0, (0.0, 0.0), 0.0);
            for k in 1..=steps {
                let middle = (k as f64 - 0.5) / f64::from(steps);
                let slope = if middle < share { rate } else { 1.0 / middle };
                weighted += slope * middle / f64::from(steps);
                let y = 2.0 * weighted / (k as f64 / f64::from(steps));
                sum += 0.5 * (y + before) / f64::from(steps);
                before = y;
                if middle < share {
                    at_share = (sum / (k as f64 / f64::from(steps)), y);
                }
            }
            let (mean, y) = at_share;
            let certain = mean >= 2.0 * CHAOTIC_FROM && sum >= 2.0 * CHAOTIC_FROM;
            assert_eq!(is_surely_chaotic(share, mean, y), certain, "{rate} {share}: {mean} {y}, then {sum}");
        }
        assert!(!is_surely_chaotic(0.5, 2.0, 2.0) && !is_surely_chaotic(0.001, 6.5, 13.0));
        assert!(!is_surely_chaotic(0.5, f64::NAN, 20.0));
    }

    #[test]
    fn chaos_is_said_beside_the_verdict() {
        for (verdict, y, said) in [
            (Verdict::Regular, 2.0, Some(Chaos::Regular)),
            (Verdict::Chaotic, 9.0, Some(Chaos::Chaotic)),
            (Verdict::Lost, 9.0, Some(Chaos::Chaotic)),
            (Verdict::Lost, 2.0, Some(Chaos::Undecided)),
            (Verdict::Undecided, 2.5, Some(Chaos::Undecided)),
            (Verdict::Untrusted, 9.0, None),
        ] {
            assert_eq!(chaos(verdict, Some(y)), said, "{verdict:?} {y}");
            assert_eq!(chaos(verdict, None), None);
        }
    }

    #[test]
    fn each_rule_decides_in_its_turn() {
        let quiet = Evidence {
            lost: false,
            energy_error: Some(1e-9),
            energy_error_asked: 1e-7,
            mean_megno: Some(2.0),
            outer_orbits: 1e3,
        };
        let cases = [
            (quiet, Verdict::Regular),
            (Evidence { mean_megno: Some(2.5), ..quiet }, Verdict::Undecided),
            (Evidence { mean_megno: Some(3.0), ..quiet }, Verdict::Chaotic),
            (Evidence { mean_megno: Some(f64::NAN), ..quiet }, Verdict::Undecided),
            (Evidence { mean_megno: None, ..quiet }, Verdict::Undecided),
            (Evidence { outer_orbits: 99.0, ..quiet }, Verdict::Undecided),
            (Evidence { outer_orbits: 99.0, mean_megno: Some(5.0), ..quiet }, Verdict::Chaotic),
            (Evidence { lost: true, mean_megno: Some(5.0), ..quiet }, Verdict::Lost),
            (Evidence { lost: true, energy_error: None, ..quiet }, Verdict::Lost),
            (Evidence { lost: true, energy_error: Some(1e-6), ..quiet }, Verdict::Untrusted),
            (Evidence { energy_error: Some(f64::INFINITY), ..quiet }, Verdict::Untrusted),
            (Evidence { energy_error: Some(f64::NAN), ..quiet }, Verdict::Untrusted),
        ];
        for (evidence, verdict) in cases {
            assert_eq!(judge(&evidence), verdict, "{evidence:?}");
        }
    }
}
