//! The tables of reference values: small files with one value a line and the reader's notes.

/// A value from a table.
#[derive(Debug, Clone, PartialEq)]
pub struct Reference {
    /// The value.
    pub value: f64,
    /// Key of its source.
    pub source: String,
}

const TABLES: [&str; 2] = [
    include_str!("../../tests/reference/square-cavity.csv"),
    include_str!("../../tests/reference/other-cavities.csv"),
];

/// Reference values of a quantity of a case, the target first.
pub fn references(case: &str, quantity: &str) -> Vec<Reference> {
    let lines = TABLES.iter().flat_map(|table| table.lines());
    lines
        .filter(|line| !line.starts_with('#'))
        .filter_map(|line| {
            let mut columns = line.split(',');
            let found = columns.next() == Some(case) && columns.next() == Some(quantity);
            let value = columns.next()?.parse().ok()?;
            let source = columns.next()?.to_string();
            found.then_some(Reference { value, source })
        })
        .collect()
}

/// A source's key in words.
pub fn source_text(key: &str) -> &'static str {
    match key {
        "spectral" => "recomputed, Chebyshev collocation",
        "le-quere-1991" => "Le Quéré 1991, recomputed by Chebyshev collocation",
        "de-vahl-davis-1983" => "de Vahl Davis 1983",
        "finite-volume" => "recomputed, finite volumes extrapolated from three meshes",
        "marchi-2009" => "Marchi, Suero & Araki 2009",
        "botella-1998" => "Botella & Peyret 1998",
        _ => "unknown",
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::benchmark::names;

    #[test]
    fn every_line_is_a_known_case_with_a_known_source() {
        let mut count = 0;
        for line in TABLES.iter().flat_map(|table| table.lines()).filter(|l| !l.starts_with('#')) {
            let columns: Vec<&str> = line.split(',').collect();
            assert_eq!(columns.len(), 4, "{line}");
            if columns[0] == "case" {
                continue;
            }
            assert!(names().contains(&columns[0]), "{line}");
            assert!(columns[2].parse::<f64>().is_ok_and(f64::is_finite), "{line}");
            assert_ne!(source_text(columns[3]), "unknown", "{line}");
            count += 1;
        }
        assert_eq!(count, 45 + 12 + 49);
    }

    #[test]
    fn every_case_has_a_target() {
        for name in names() {
            let key = if name.starts_with("lid") { "u_min" } else { "nu_mean" };
            assert!(!references(name, key).is_empty(), "{name}");
        }
        assert_eq!(references("square-cavity-1e6", "nu_mean").len(), 2);
    }
}
