//! The one-dimensional law: from the edges along one axis to its mesh lines.
//!
//! Edges s_0 < s_1 < ... cut the axis into segments. A size function h(s) [m], the local cell
//! size wanted, is the largest function that satisfies all of
//!
//! ```text
//!   h(s) <= c_k                      within segment k (at most `cell`)
//!   h(s_i) <= h0                     at graded edges (surfaces in air, ends of slots)
//!   |h(s) - h(t)| <= a·|s - t|       everywhere
//! ```
//!
//! with a = 0.97·ln(growth) and h0 = wall·a / (exp(a) - 1), see `first_size`. Within a segment it rises from the
//! left edge with slope a, stays at c_k and falls to the right edge with slope -a; any of the
//! three pieces may be missing. The mesh coordinate is ξ(s) = ∫ ds / h, the cells are its unit
//! steps. Since |d ln(ds/dξ) / dξ| = |dh/ds| <= a, neighbouring cells differ by a factor of at
//! most exp(a), over edges too, and a cell that starts at a graded edge measures exactly `wall`
//! while h rises.
//!
//! Counts must be whole: segment k has N_k cells, a multiple of what is asked and at least
//! I_k = ∫ ds / h over the segment. The ceilings c_k are lowered until I_k = N_k, so that h stays
//! continuous over edges. A segment whose neighbours' small cells force I_k above N_k gets more
//! cells. What is left of the difference (1 % of ln(growth) is tolerated, hence the 0.97) is
//! spread over the segment by the lines ξ = j·I_k / N_k.
//!
//! A segment so short that one cell in it would be less than an eighth of h around it is a
//! sliver: it is one cell, and its neighbours start from that eighth instead of from its size.

use crate::MeshError;

/// Share of ln(growth) used as the slope of the size function; the rest is for whole counts.
const SLOPE_SHARE: f64 = 0.97;
/// Tolerated excess of I_k over N_k, as a share of ln(growth): two neighbours use up 0.02.
const EXCESS_SHARE: f64 = 0.01;
/// A segment's cells are not made smaller than this share of the size function around it for the
/// sake of a multiple. Our choice: growth 1.2 bridges a factor of 8 in twelve cells. A little less
/// than an eighth, so that round-off decides nothing where a segment is just as long as a cell.
const SLIVER_SHARE: f64 = 0.1249;
/// Excess of I_k over a whole number that is round-off.
const ROUND_OFF: f64 = 1e-9;
/// Rounds of raising counts; the rise ends after a few in practice.
const ROUNDS: usize = 60;

/// What one axis asks for.
pub(crate) struct AxisRequest<'a> {
    /// Edges, rising [m].
    pub edges: &'a [f64],
    /// Whether the mesh is graded towards each edge.
    pub graded: &'a [bool],
    /// Spans that need a least number of cells: [from edge, to edge], cells.
    pub spans: &'a [([usize; 2], usize)],
    /// Largest cell [m].
    pub cell: f64,
    /// Cell at graded edges [m].
    pub wall: f64,
    /// Largest ratio of neighbouring cells.
    pub growth: f64,
    /// Counts are multiples of this power of two.
    pub multiple: usize,
}

/// Lines of one axis and how each segment came out.
pub(crate) struct Lines {
    /// Mesh lines [m].
    pub lines: Vec<f64>,
    /// Segments of a single cell that is far smaller than its neighbours.
    pub slivers: Vec<usize>,
    /// Other segments whose count is not a multiple of what was asked.
    pub unaligned: Vec<usize>,
}

/// Lines of an axis, with at most `limit` cells.
///
/// # Errors
/// [`MeshError::TooMany`] beyond the limit.
pub(crate) fn graded_lines(axis: &AxisRequest, limit: usize) -> Result<Lines, MeshError> {
    let mut size = SizeFunction::new(axis);
    size.refine_spans(axis.spans);
    let shares = size.whole_counts(axis.multiple, axis.growth, limit)?;
    let mut lines = Vec::with_capacity(shares.counts.iter().sum::<usize>() + 1);
    for (k, (edge, count)) in axis.edges.windows(2).zip(&shares.counts).enumerate() {
        lines.push(edge[0]);
        let piece = size.piece(k);
        lines.extend((1..*count).map(|j| piece.line(edge, j, *count)));
    }
    lines.extend(axis.edges.last());
    let is_sliver = |k: &usize| shares.sliver[*k];
    let segments = 0..shares.counts.len();
    Ok(Lines {
        lines,
        slivers: segments.clone().filter(is_sliver).collect(),
        unaligned: segments
            .filter(|k| !is_sliver(k) && !shares.counts[*k].is_multiple_of(axis.multiple))
            .collect(),
    })
}

/// Cell counts of the segments.
struct Shares {
    counts: Vec<usize>,
    sliver: Vec<bool>,
}

/// The size function h of one axis, see the module's text.
struct SizeFunction {
    slope: f64,
    cell: f64,
    lengths: Vec<f64>,
    /// Bound at each edge (h0 or infinity).
    at_edge: Vec<f64>,
    /// c_k of each segment.
    ceiling: Vec<f64>,
    /// h at each edge as bounded from the left, and from the right, the edge itself included.
    from_left: Vec<f64>,
    from_right: Vec<f64>,
}

impl SizeFunction {
    fn new(axis: &AxisRequest) -> Self {
        let slope = SLOPE_SHARE * axis.growth.ln();
        let start = first_size(axis.wall, slope, axis.cell);
        let lengths: Vec<f64> = axis.edges.windows(2).map(|e| e[1] - e[0]).collect();
        let at_edge =
            axis.graded.iter().map(|g| if *g { start } else { f64::INFINITY }).collect::<Vec<_>>();
        let mut size = SizeFunction {
            slope,
            cell: axis.cell,
            ceiling: vec![axis.cell; lengths.len()],
            from_left: at_edge.clone(),
            from_right: at_edge.clone(),
            lengths,
            at_edge,
        };
        size.sweep();
        size
    }

    /// Renews the values at the edges after the ceilings have changed.
    fn sweep(&mut self) {
        let n = self.lengths.len();
        self.from_left.copy_from_slice(&self.at_edge);
        self.from_right.copy_from_slice(&self.at_edge);
        for k in 0..n {
            let reach = (self.from_left[k] + self.slope * self.lengths[k]).min(self.ceiling[k]);
            self.from_left[k + 1] = self.from_left[k + 1].min(reach);
        }
        for k in (0..n).rev() {
            let reach =
                (self.from_right[k + 1] + self.slope * self.lengths[k]).min(self.ceiling[k]);
            self.from_right[k] = self.from_right[k].min(reach);
        }
    }

    /// The size function within segment k.
    fn piece(&self, k: usize) -> Piece {
        self.piece_below(k, self.ceiling[k])
    }

    /// The size function within segment k, were its ceiling another one.
    fn piece_below(&self, k: usize, ceiling: f64) -> Piece {
        let (length, slope) = (self.lengths[k], self.slope);
        let (left, right) = (self.from_left[k], self.from_right[k + 1]);
        Piece {
            length,
            slope,
            ceiling,
            left: left.min(ceiling).min(right + slope * length),
            right: right.min(ceiling).min(left + slope * length),
        }
    }

    /// Lowers the ceilings within each span until it has its least number of cells.
    fn refine_spans(&mut self, spans: &[([usize; 2], usize)]) {
        let mut lowered = self.ceiling.clone();
        for ([from, to], least) in spans {
            let least = *least as f64;
            let length: f64 = self.lengths[*from..*to].iter().sum();
            let cells = |size: &SizeFunction, c: f64| -> f64 {
                (*from..*to).map(|k| size.piece_below(k, c).cells()).sum()
            };
            if cells(self, self.cell) >= least {
                continue;
            }
            // At length/least there are enough cells. Edges inside the span keep their present
            // bounds, which is on the safe side once the ceilings are lowered.
            let (mut low, mut high) = (length / least, self.cell.max(length / least));
            for _ in 0..60 {
                let middle = (low * high).sqrt();
                if cells(self, middle) >= least { low = middle } else { high = middle }
            }
            lowered[*from..*to].iter_mut().for_each(|c| *c = c.min(low));
        }
        self.ceiling = lowered;
        self.sweep();
    }

    /// Chooses the counts and lowers or lifts the ceilings until they fit.
    fn whole_counts(
        &mut self,
        multiple: usize,
        growth: f64,
        limit: usize,
    ) -> Result<Shares, MeshError> {
        let excess = EXCESS_SHARE * growth.ln();
        let most = self.ceiling.clone();
        let n = self.lengths.len();
        let mut counts = vec![0; n];
        let mut sliver = vec![false; n];
        for round in 0..ROUNDS {
            let mut raised = false;
            let excess = if round == 0 { ROUND_OFF } else { excess };
            for k in 0..n {
                let cells = self.piece(k).cells();
                if sliver[k] || cells <= counts[k] as f64 * (1.0 + excess) {
                    continue;
                }
                counts[k] = whole(cells / (1.0 + excess), multiple);
                raised = true;
                if round == 0 && SLIVER_SHARE * counts[k] as f64 > cells && counts[k] == 1 {
                    sliver[k] = true;
                }
            }
            let needed = counts.iter().fold(0_usize, |sum, c| sum.saturating_add(*c));
            if needed > limit {
                return Err(MeshError::TooMany { needed, limit });
            }
            if !raised {
                break;
            }
            if round == 0 {
                for k in (0..n).filter(|k| sliver[*k]) {
                    let piece = self.piece(k);
                    self.ceiling[k] = SLIVER_SHARE * piece.length / piece.cells();
                }
            }
            self.fit_ceilings(&counts, &sliver, &most);
        }
        Ok(Shares { counts, sliver })
    }

    /// Finds ceilings with I_k = N_k. A segment with smaller cells bounds its neighbours and not
    /// the other way round, so renewing all at once ends after about as many passes as there are
    /// segments in a rising chain. All at once, not in turn: mirrored axes stay mirrored.
    fn fit_ceilings(&mut self, counts: &[usize], sliver: &[bool], most: &[f64]) {
        let n = self.lengths.len();
        for _ in 0..2 * n + 10 {
            let mut fitted = self.ceiling.clone();
            for k in (0..n).filter(|k| !sliver[*k]) {
                fitted[k] = self.fitted_ceiling(k, counts[k] as f64, most[k]);
            }
            let change = (fitted.iter().zip(&self.ceiling))
                .fold(0.0_f64, |change, (new, old)| change.max((new / old - 1.0).abs()));
            self.ceiling = fitted;
            self.sweep();
            if change < 1e-13 {
                break;
            }
        }
    }

    /// Ceiling of segment k that gives it `cells` cells, at most `most`. Newton's method for
    /// I(1/c): dI/d(1/c) is the length of the level piece, I is convex in 1/c, and the start
    /// c = length / cells lies on the side from which the steps never overshoot.
    fn fitted_ceiling(&self, k: usize, cells: f64, most: f64) -> f64 {
        if self.piece_below(k, most).cells() >= cells {
            return most;
        }
        let mut inverse = cells / self.lengths[k];
        for _ in 0..50 {
            let piece = self.piece_below(k, 1.0 / inverse);
            let over = piece.cells() - cells;
            let level = piece.level();
            if over <= 1e-14 * cells || level <= 0.0 {
                break;
            }
            inverse -= over / level;
        }
        (1.0 / inverse).min(most)
    }
}

/// h0, the size function at a graded edge that makes the first cell `wall`: wall·a / (exp(a) - 1)
/// while it rises over the whole cell, more where it reaches `cell` before, `wall` itself when
/// that is `cell`. By halving between the first and the last.
fn first_size(wall: f64, slope: f64, cell: f64) -> f64 {
    let (mut low, mut high) = (wall * slope / slope.exp_m1(), wall);
    let cells = |start: f64| {
        let right = (start + slope * wall).min(cell);
        Piece { length: wall, slope, ceiling: cell, left: start.min(cell), right }.cells()
    };
    if low + slope * wall <= cell || wall >= cell {
        return if wall >= cell { cell } else { low };
    }
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if cells(middle) > 1.0 { low = middle } else { high = middle }
    }
    low
}

/// The smallest multiple of `multiple` that is at least `cells`; for few cells, a smaller power
/// of two instead of `multiple`, so that cells are not made needlessly small.
fn whole(cells: f64, multiple: usize) -> usize {
    let at_least = (cells.ceil() as usize).max(1);
    let mut unit = multiple;
    while unit > 1 && SLIVER_SHARE * (unit as f64) > cells {
        unit /= 2;
    }
    at_least.div_ceil(unit).saturating_mul(unit)
}

/// h within one segment: up from `left`, level at `ceiling`, down to `right`.
#[derive(Debug, Clone, Copy)]
struct Piece {
    length: f64,
    slope: f64,
    ceiling: f64,
    left: f64,
    right: f64,
}

impl Piece {
    /// Largest value of h: the ceiling, or where the two slopes meet.
    fn peak(&self) -> f64 {
        self.ceiling.min(0.5 * (self.left + self.right + self.slope * self.length))
    }

    /// Length at the ceiling [m]; 0 when the slopes meet below it.
    fn level(&self) -> f64 {
        let peak = self.peak();
        (self.length - (2.0 * peak - self.left - self.right) / self.slope).max(0.0)
    }

    /// ∫ ds / h over the segment.
    fn cells(&self) -> f64 {
        let peak = self.peak();
        ((peak / self.left).ln() + (peak / self.right).ln()) / self.slope + self.level() / peak
    }

    /// Distance from the left end [m] at which ∫ ds / h is `cells`.
    fn distance(&self, cells: f64) -> f64 {
        let peak = self.peak();
        let rise = (peak / self.left).ln() / self.slope;
        let level = self.level();
        if cells <= rise {
            return self.left * (self.slope * cells).exp_m1() / self.slope;
        }
        let risen = (peak - self.left) / self.slope;
        if cells <= rise + level / peak {
            return risen + (cells - rise) * peak;
        }
        let fall = cells - rise - level / peak;
        risen + level - peak * (-self.slope * fall).exp_m1() / self.slope
    }

    fn mirrored(self) -> Self {
        Piece { left: self.right, right: self.left, ..self }
    }

    /// Line j of `count` cells between two edges. Each half is measured from its own end.
    fn line(&self, edge: &[f64], j: usize, count: usize) -> f64 {
        let step = self.cells() / count as f64;
        let up = || edge[0] + self.distance(j as f64 * step);
        let down = || edge[1] - self.mirrored().distance((count - j) as f64 * step);
        match (2 * j).cmp(&count) {
            std::cmp::Ordering::Less => up(),
            std::cmp::Ordering::Equal => 0.5 * (up() + down()),
            std::cmp::Ordering::Greater => down(),
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn request<'a>(edges: &'a [f64], graded: &'a [bool]) -> AxisRequest<'a> {
        AxisRequest { edges, graded, spans: &[], cell: 1.0, wall: 0.1, growth: 1.2, multiple: 1 }
    }

    fn sizes(request: &AxisRequest) -> Vec<f64> {
        let lines = graded_lines(request, 1_000_000).unwrap().lines;
        lines.windows(2).map(|l| l[1] - l[0]).collect()
    }

    #[test]
    fn without_surfaces_cells_are_equal() {
        let sizes = sizes(&request(&[0.0, 7.5], &[false, false]));
        assert_eq!(sizes.len(), 8);
        assert!(sizes.iter().all(|s| (s - 0.9375).abs() < 1e-14), "{sizes:?}");
    }

    #[test]
    fn from_a_surface_cells_grow_geometrically_from_exactly_wall() {
        let sizes = sizes(&request(&[0.0, 30.0], &[true, false]));
        let ratio = 1.2_f64.powf(SLOPE_SHARE);
        assert!((sizes[0] - 0.1).abs() < 1e-12, "{}", sizes[0]);
        // The cell grows from 0.1 to nearly 1, ln(10) / ln(ratio) = 13.02 steps.
        for pair in sizes[..13].windows(2) {
            assert!((pair[1] / pair[0] - ratio).abs() < 1e-10, "{pair:?}");
        }
        assert!(sizes[14..].iter().all(|s| (s / sizes[20] - 1.0).abs() < 1e-9 && *s <= 1.0));
    }

    #[test]
    fn the_first_cell_is_wall_up_to_the_largest_cell() {
        for wall in [0.05, 0.5, 0.9, 0.97, 1.0] {
            let request = AxisRequest { wall, ..request(&[0.0, 40.0], &[true, false]) };
            let first = sizes(&request)[0];
            // The ramp stays as it is; rounding up takes from the level piece, where wall is it.
            assert!((0.97 * wall..=wall * (1.0 + 1e-9)).contains(&first), "{first} for {wall}");
        }
        assert!((first_size(1.0, 0.18, 1.0) - 1.0).abs() < 1e-15);
    }

    #[test]
    fn both_sides_of_a_gap_are_graded_alike() {
        let sizes = sizes(&request(&[0.0, 12.0], &[true, true]));
        let reversed: Vec<f64> = sizes.iter().rev().copied().collect();
        assert!(sizes.iter().zip(&reversed).all(|(a, b)| (a - b).abs() < 1e-14));
        assert!((sizes[0] - 0.1).abs() < 1e-12 && sizes[sizes.len() / 2] > 0.8);
    }

    #[test]
    fn pieces_invert_their_own_integral() {
        for piece in [
            Piece { length: 9.0, slope: 0.2, ceiling: 1.0, left: 0.1, right: 0.3 },
            Piece { length: 2.0, slope: 0.2, ceiling: 1.0, left: 0.1, right: 0.3 },
            Piece { length: 2.0, slope: 0.2, ceiling: 0.1, left: 0.1, right: 0.1 },
            Piece { length: 1.0, slope: 0.2, ceiling: 1.0, left: 0.1, right: 0.3 },
        ] {
            // Midpoint rule over h itself, against the closed form.
            let h = |s: f64| {
                let up = piece.left + piece.slope * s;
                up.min(piece.right + piece.slope * (piece.length - s)).min(piece.ceiling)
            };
            let n = 200_000;
            let step = piece.length / n as f64;
            let sum: f64 = (0..n).map(|k| step / h((k as f64 + 0.5) * step)).sum();
            assert!((sum - piece.cells()).abs() < 1e-6 * sum, "{piece:?}: {sum}");
            assert!((piece.distance(piece.cells()) - piece.length).abs() < 1e-12);
            let half: f64 = (0..n / 2).map(|k| step / h((k as f64 + 0.5) * step)).sum();
            assert!((piece.distance(half) - 0.5 * piece.length).abs() < 1e-5, "{piece:?}");
        }
    }

    #[test]
    fn a_span_of_two_segments_gets_its_cells_as_a_whole() {
        let edges = [0.0, 10.0, 11.0, 12.5, 30.0];
        let spans = [([1, 3], 10)];
        let graded = [false; 5];
        let request = AxisRequest { spans: &spans, ..request(&edges, &graded) };
        let lines = graded_lines(&request, 1000).unwrap().lines;
        let across = lines.iter().filter(|l| **l > 10.0 && **l <= 12.5).count();
        assert_eq!(across, 10);
    }

    #[test]
    fn a_sliver_is_one_cell_and_costs_about_a_dozen_more() {
        let plain = sizes(&request(&[0.0, 20.0, 40.0], &[false, true, false])).len();
        for width in [1e-2, 1e-4, 1e-8] {
            let edges = [0.0, 20.0, 20.0 + width, 40.0];
            let graded = [false, true, true, false];
            for multiple in [1, 8] {
                let request = AxisRequest { multiple, ..request(&edges, &graded) };
                let found = graded_lines(&request, 10_000).unwrap();
                assert_eq!(found.slivers, [1]);
                assert!(found.lines.len() <= plain + 28 + multiple, "{}", found.lines.len());
            }
        }
    }

    #[test]
    fn too_many_cells_are_refused_before_they_are_made() {
        let request = AxisRequest { cell: 1e-12, ..request(&[0.0, 1.0], &[false; 2]) };
        let refused = graded_lines(&request, 1000).err();
        assert!(matches!(
            refused,
            Some(MeshError::TooMany { limit: 1000, needed: 900_000_000_000.. })
        ));
    }

    #[test]
    fn few_cells_get_a_smaller_power_of_two() {
        assert_eq!(whole(9.5, 8), 16);
        assert_eq!(whole(1.0, 8), 8);
        assert_eq!(whole(0.6, 8), 4);
        assert_eq!(whole(0.01, 8), 1);
        assert_eq!(whole(2.0, 1), 2);
    }
}
