//! The question of a report and its answer in one sentence.

use serde::Serialize;

use crate::output::results::Results;
use crate::output::told::{ToldPart, ToldRunaway};
use crate::output::words::fixed;

use crate::case::units::rounded;

/// An answer.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Answer {
    /// Class of its frame: `kept`, `over` or `open`.
    pub tone: &'static str,
    /// In a word.
    pub word: &'static str,
    /// In a sentence.
    pub sentence: String,
}

/// What was asked.
pub fn question(results: &Results) -> String {
    let (ambient, heat) = (fixed(results.ambient(), 1), rounded(results.heat(), 4));
    if results.told.parts.iter().any(|p| p.limit_c.is_some()) {
        format!(
            "Does every part stay below its limit at an ambient of {ambient} °C with {heat} W \
             released?"
        )
    } else {
        format!("How warm do the parts get at an ambient of {ambient} °C with {heat} W released?")
    }
}

/// The answer.
pub fn answer(results: &Results) -> Answer {
    let told = &results.told;
    if let Some(runaway) = &told.runaway {
        return runs_away(runaway);
    }
    if !told.solved {
        return unsolved(results);
    }
    let is_final = matches!(told.verdict.as_str(), "settled" | "swaying");
    let judged = told.parts.iter().filter_map(|p| Some((p, p.margin_k?, p.limit_c?)));
    let Some((part, margin, limit)) = judged.clone().min_by(|a, b| a.1.total_cmp(&b.1)) else {
        return unjudged(results, is_final);
    };
    let over = judged.filter(|(_, margin, _)| *margin < 0.0).count();
    let hottest = limit - margin;
    let at = if part.limit_at.is_some() { " at the junction" } else { "" };
    let place = format!("“{}” reaches {} °C{at}", part.name, fixed(hottest, 1));
    let of = format!("its limit of {} °C", fixed(limit, 1));
    let sentence = if margin < 0.0 {
        let others = match over {
            1 => String::new(),
            2 => "; one other part is over its limit too".into(),
            n => format!("; {} other parts are over their limits too", n - 1),
        };
        format!("{place}, {} K over {of}{others}", fixed(-margin, 1))
    } else {
        format!("{place} and has the least margin, {} K to {of}", fixed(margin, 1))
    };
    if !is_final {
        let why = unfinished(results);
        let sentence = format!("{why}, so the numbers are not final; so far {sentence}.");
        return Answer { tone: "open", word: "Undecided", sentence };
    }
    let sways = if told.verdict == "swaying" {
        "; the flow sways, and the upper end of the band is what counts"
    } else {
        ""
    };
    let (tone, word) = if margin < 0.0 { ("over", "No") } else { ("kept", "Yes") };
    Answer { tone, word, sentence: format!("{sentence}{sways}.") }
}

/// The answer when heat grows without end.
fn runs_away(runaway: &ToldRunaway) -> Answer {
    let block = runaway.block.as_ref().map_or(String::new(), |name| format!(" in “{name}”"));
    let sentence = format!(
        "There is no steady temperature: at {} °C{block} one watt more of heat makes {} W more, \
         faster than the housing carries it away.",
        fixed(runaway.given_up_at_c, 0),
        fixed(runaway.growth, 2)
    );
    Answer { tone: "over", word: "Runs away", sentence }
}

/// The answer when the equations are not met.
fn unsolved(results: &Results) -> Answer {
    let worst = results.told.residuals.values().flatten().fold(0.0_f64, |a, b| a.max(*b));
    let sentence = format!(
        "{} and no solution was found: the equations are off by {worst:.0e} of their scale. \
         Everything below is the last attempt, no basis for a decision.",
        unfinished(results)
    );
    Answer { tone: "open", word: "Undecided", sentence }
}

/// The answer when no part has a limit.
fn unjudged(results: &Results, is_final: bool) -> Answer {
    let told = &results.told;
    let warmest = |a: &&ToldPart, b: &&ToldPart| {
        let key = |p: &ToldPart| p.max_c.unwrap_or(f64::NEG_INFINITY);
        key(a).total_cmp(&key(b))
    };
    let found = told.parts.iter().max_by(warmest).and_then(|p| Some((p, p.max_c?)));
    let said = match found {
        Some((part, max)) => {
            format!(
                "no part has a limit; the warmest, “{}”, reaches {} °C",
                part.name,
                fixed(max, 1)
            )
        }
        None => "the case names no part".into(),
    };
    let sentence = if is_final {
        let mut letters = said.chars();
        let first = letters.next().map(|c| c.to_uppercase().to_string()).unwrap_or_default();
        format!("{first}{}.", letters.as_str())
    } else {
        format!("{}, so the numbers are not final; {said}.", unfinished(results))
    };
    Answer { tone: "open", word: if is_final { "No limits" } else { "Undecided" }, sentence }
}

/// Why a run is not final.
fn unfinished(results: &Results) -> String {
    let told = &results.told;
    match (told.verdict.as_str(), told.stopped_by.as_deref()) {
        ("drifting", _) => "Temperatures still creep".into(),
        (_, Some("stalled")) => "The residuals no longer fell".into(),
        (_, Some(by)) => format!("The {by} ended the run early"),
        _ => "The run ended early".into(),
    }
}
