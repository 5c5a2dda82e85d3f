//! The keys of a block about its heat by temperature and its junction: `heat-slope`, `heat-at`,
//! `heat-points`, `theta-jc`, `psi-jt`, `limit` with its place.

use std::ops::RangeInclusive;

use toml::de::DeValue;

use super::error::{CaseError, Cause};
use super::model::{HeatCurve, Junction, JunctionBy, LimitAt};
use super::parse::{Located, Reader, Scope};
use super::units::Dimension;
use super::vocabulary::{LIMIT, LIMIT_PLACES};

/// What a resistance to a junction may be.
const JUNCTION_BOUND: (RangeInclusive<f64>, &str) = (1e-4..=1e4, "from 0.0001 K/W to 10000 K/W");
/// Most points of one curve.
const POINTS: usize = 1000;

/// How a block's heat follows its temperature; `None` where it does not, or was not well written.
pub(super) fn read_curve(
    reader: &mut Reader,
    scope: &Scope,
    heat: Option<&Located<f64>>,
) -> Option<HeatCurve> {
    if scope.has("heat-points") {
        for key in ["heat", "heat-slope", "heat-at"].iter().filter(|key| scope.has(key)) {
            let message = format!("{key} and heat-points cannot be given together");
            let error = CaseError::new(Cause::Conflict, &scope.place, message);
            reader.report(error.at(scope.span_of(key)).hint("keep one of them"));
        }
        return read_points(reader, scope).map(HeatCurve::Points);
    }
    if !scope.has("heat-slope") && !scope.has("heat-at") {
        return None;
    }
    for (key, example) in
        [("heat", "\"2 W\""), ("heat-slope", "\"0.39 %/K\""), ("heat-at", "\"20 degC\"")]
    {
        if !scope.has(key) {
            reader.missing(scope, key, example);
        }
    }
    if let Some(heat) = heat {
        reader.within(scope, "heat", heat, heat.value >= 0.0, "0 W or more beside heat-slope");
    }
    let bound = (-0.1..=0.1, "from -10 %/K to 10 %/K");
    let slope = reader.bounded(scope, "heat-slope", Dimension::Slope, bound);
    let at = reader.temperature(scope, "heat-at");
    Some(HeatCurve::Slope { slope: slope?.value, at: at?.value })
}

/// Points of temperature [K] and heat [W].
fn read_points(reader: &mut Reader, scope: &Scope) -> Option<Vec<[f64; 2]>> {
    let key = "heat-points";
    let value = scope.get(key)?;
    let wanted = "pairs of a temperature and a heat belong here, such as \
                  [[\"20 degC\", \"2 W\"], [\"80 degC\", \"2.6 W\"]]";
    let DeValue::Array(items) = value.get_ref() else {
        reader.wrong_kind(scope, key, value, wanted);
        return None;
    };
    let mut points: Vec<[f64; 2]> = Vec::new();
    let mut whole = true;
    for item in items.iter() {
        let pair = match item.get_ref() {
            DeValue::Array(pair) => pair.iter().collect::<Vec<_>>(),
            _ => Vec::new(),
        };
        let [temperature, heat] = pair.as_slice() else {
            reader.wrong_kind(scope, key, item, wanted);
            return None;
        };
        let temperature = reader.quantity_of(scope, key, temperature, Dimension::Temperature);
        let heat = reader.quantity_of(scope, key, heat, Dimension::Power);
        let (Some(temperature), Some(heat)) = (temperature, heat) else {
            whole = false;
            continue;
        };
        let last = points.last().map_or(0.0, |p| p[0]);
        let bound = "above absolute zero and above the point before";
        whole &= reader.within(scope, key, &temperature, temperature.value > last, bound);
        let good = heat.value == 0.0 || (1e-9..=1e6).contains(&heat.value);
        whole &= reader.within(scope, key, &heat, good, "0 W, or from 1e-9 W to 1000 kW");
        points.push([temperature.value, heat.value]);
    }
    let count = Located { value: points.len(), span: value.span() };
    let good = (2..=POINTS).contains(&points.len()) || !whole;
    whole &= reader.within(scope, key, &count, good, "a list of 2 to 1000 points");
    whole.then_some(points)
}

/// The way from the block's temperature to that of the junction in it.
pub(super) fn read_junction(reader: &mut Reader, scope: &Scope) -> Option<Junction> {
    if scope.has("theta-jc") && scope.has("psi-jt") {
        let message = "theta-jc and psi-jt cannot be given together";
        let error = CaseError::new(Cause::Conflict, &scope.place, message);
        reader.report(error.at(scope.span_of("psi-jt")).hint(
            "psi-jt where most heat leaves through the board, theta-jc where the case is cooled",
        ));
        let _ = reader.bounded(scope, "psi-jt", Dimension::Resistance, JUNCTION_BOUND);
    }
    let (key, by) = if scope.has("theta-jc") {
        ("theta-jc", JunctionBy::ThetaJc)
    } else {
        ("psi-jt", JunctionBy::PsiJt)
    };
    let resistance = reader.bounded(scope, key, Dimension::Resistance, JUNCTION_BOUND)?.value;
    if !scope.has("heat") && !scope.has("heat-points") {
        let message = format!("{key} needs the block's own heat");
        let error = CaseError::new(Cause::Missing, &scope.place, message);
        reader.report(error.at(scope.span_of(key)).hint("write heat = \"1 W\" or so in the block"));
    }
    Some(Junction { by, resistance })
}

/// The limit and where it holds: a temperature, or a table with both.
pub(super) fn read_limit(reader: &mut Reader, scope: &Scope) -> (Option<Located<f64>>, LimitAt) {
    let is_table = scope.get("limit").is_some_and(|v| matches!(v.get_ref(), DeValue::Table(_)));
    if !is_table {
        return (reader.temperature(scope, "limit"), LimitAt::Part);
    }
    let place = format!("{}, limit", scope.place);
    let Some(inner) = reader.table(scope, "limit", &place) else { return (None, LimitAt::Part) };
    reader.check_keys(&inner, &LIMIT);
    if !inner.has("temperature") {
        reader.missing(&inner, "temperature", "\"125 degC\"");
    }
    let at = match reader.word(&inner, "at", &LIMIT_PLACES, &[]) {
        Some(word) if word.value == LIMIT_PLACES[1] => LimitAt::Junction,
        _ => LimitAt::Part,
    };
    (reader.temperature(&inner, "temperature"), at)
}
