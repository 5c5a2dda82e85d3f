//! Mesh lines as samples of a smooth mapping, so that meshes of N, 2N, 4N cells belong together.

/// Where cells are small.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Grading {
    /// Equal cells.
    Uniform,
    /// Towards both ends; the number s is the strength: the middle cell is cosh² s times as wide
    /// as the end cells (s = 2: 14 times).
    Both(f64),
    /// Towards the lower end, with the same ratio.
    Start(f64),
    /// Towards the upper end.
    End(f64),
}

/// `count` cells between `from` and `to` [m]: count + 1 lines, the ends exact.
pub fn graded(from: f64, to: f64, count: usize, grading: Grading) -> Vec<f64> {
    let at = |n: usize| {
        let s = n as f64 / count as f64;
        match grading {
            Grading::Uniform => s,
            Grading::Both(strength) => {
                0.5 * (1.0 + (strength * (2.0 * s - 1.0)).tanh() / strength.tanh())
            }
            Grading::Start(strength) => 1.0 + (strength * (s - 1.0)).tanh() / strength.tanh(),
            Grading::End(strength) => (strength * s).tanh() / strength.tanh(),
        }
    };
    (0..=count)
        .map(|n| match n {
            0 => from,
            n if n == count => to,
            n => from + (to - from) * at(n),
        })
        .collect()
}

/// Equal cells between `from` and `to` [m].
pub fn uniform(from: f64, to: f64, count: usize) -> Vec<f64> {
    graded(from, to, count, Grading::Uniform)
}

/// Segments joined at their common ends.
pub fn joined(segments: &[Vec<f64>]) -> Vec<f64> {
    let mut lines = Vec::new();
    for segment in segments {
        let skip = usize::from(!lines.is_empty());
        lines.extend(segment.iter().skip(skip));
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finer_lines_contain_the_coarser_ones() {
        for grading in
            [Grading::Uniform, Grading::Both(1.7), Grading::Start(2.3), Grading::End(0.9)]
        {
            let [coarse, fine] = [12, 24].map(|n| graded(0.3, 0.8, n, grading));
            for (n, line) in coarse.iter().enumerate() {
                assert!((line - fine[2 * n]).abs() < 1e-14, "{grading:?}");
            }
            assert!(fine.windows(2).all(|w| w[0] < w[1]));
        }
    }

    #[test]
    fn both_ends_mirror_and_the_middle_is_wider() {
        let lines = graded(0.0, 1.0, 200, Grading::Both(2.0));
        let width = |n: usize| lines[n + 1] - lines[n];
        assert!((width(0) - width(199)).abs() < 1e-14);
        let ratio = width(100) / width(0);
        assert!((ratio / 2f64.cosh().powi(2) - 1.0).abs() < 0.03, "{ratio}");
    }

    #[test]
    fn joined_segments_share_their_ends() {
        let lines = joined(&[uniform(0.0, 1.0, 2), uniform(1.0, 4.0, 3)]);
        assert_eq!(lines, vec![0.0, 0.5, 1.0, 2.0, 3.0, 4.0]);
    }
}
