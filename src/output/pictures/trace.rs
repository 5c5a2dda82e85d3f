//! Lines along a flow, spread evenly over a picture.
//!
//! Each line is followed from a seed both ways until it leaves, slows down or comes too near to
//! another; new seeds are taken one distance beside lines that are there already (B. Jobard,
//! W. Lefer, "Creating evenly-spaced streamlines of arbitrary density", Visualization in
//! Scientific Computing '97, 1997, 43-55).

/// A point on the page.
type Point = [f64; 2];

/// Step along a line, on the page.
const STEP: f64 = 1.2;
/// Lines end when another is nearer than this share of the distance between lines.
const NEAR: f64 = 0.55;
/// Most steps each way.
const STEPS: usize = 4000;

/// Points of lines that are there, sorted into squares one distance wide.
struct Taken {
    apart: f64,
    columns: usize,
    squares: Vec<Vec<Point>>,
}

impl Taken {
    fn new(size: Point, apart: f64) -> Taken {
        let [columns, rows] = size.map(|s| (s / apart) as usize + 1);
        Taken { apart, columns, squares: vec![Vec::new(); columns * rows] }
    }

    fn square(&self, p: Point) -> (usize, usize) {
        let rows = self.squares.len() / self.columns;
        let index = |v: f64, count: usize| ((v / self.apart) as usize).min(count - 1);
        (index(p[0], self.columns), index(p[1], rows))
    }

    fn add(&mut self, p: Point) {
        let (c, r) = self.square(p);
        self.squares[c + r * self.columns].push(p);
    }

    /// Whether a point is within a distance, at most the squares' width.
    fn near(&self, p: Point, distance: f64) -> bool {
        let (c, r) = self.square(p);
        let rows = self.squares.len() / self.columns;
        let reach = |n: usize, count: usize| n.saturating_sub(1)..=(n + 1).min(count - 1);
        reach(r, rows).any(|r| {
            reach(c, self.columns).any(|c| {
                let points = &self.squares[c + r * self.columns];
                points.iter().any(|q| (p[0] - q[0]).hypot(p[1] - q[1]) < distance)
            })
        })
    }
}

/// Lines over an area of a size, `apart` from each other. `direction` gives the unit direction of
/// the flow at a place, `None` where no line should go. `seeds` are tried in order after the
/// places beside each line.
pub fn lines(
    size: Point,
    apart: f64,
    seeds: &[Point],
    direction: impl Fn(Point) -> Option<Point>,
) -> Vec<Vec<Point>> {
    let mut taken = Taken::new(size, apart);
    let mut found: Vec<Vec<Point>> = Vec::new();
    for seed in seeds {
        let mut queue = vec![*seed];
        while let Some(seed) = queue.pop() {
            let inside = (0..2).all(|k| (0.0..=size[k]).contains(&seed[k]));
            if !inside || direction(seed).is_none() || taken.near(seed, 0.98 * apart) {
                continue;
            }
            let line = follow(size, seed, &taken, &direction);
            if length(&line) < 1.6 * apart {
                continue;
            }
            line.iter().for_each(|p| taken.add(*p));
            let beside = |n: usize| {
                let d = direction(line[n])?;
                Some(
                    [-1.0, 1.0]
                        .map(|s| [line[n][0] - s * d[1] * apart, line[n][1] + s * d[0] * apart]),
                )
            };
            let stride = (0.5 * apart / STEP) as usize + 1;
            queue.extend((0..line.len()).step_by(stride).filter_map(beside).flatten());
            found.push(line);
        }
    }
    found
}

/// The line through a seed.
fn follow(
    size: Point,
    seed: Point,
    taken: &Taken,
    direction: &impl Fn(Point) -> Option<Point>,
) -> Vec<Point> {
    let mut own = Taken::new(size, taken.apart);
    let mut halves = [-1.0, 1.0].map(|sign| {
        let mut run = Vec::new();
        let mut at = seed;
        // Points join `own` late and those at the seed never, so that a line does not end at its
        // own tail.
        let late = (1.5 * taken.apart / STEP) as usize;
        for n in 0..STEPS {
            let Some(next) = step(at, sign * STEP, direction) else { break };
            let inside = (0..2).all(|k| (0.0..=size[k]).contains(&next[k]));
            if !inside || taken.near(next, NEAR * taken.apart) || own.near(next, NEAR * taken.apart)
            {
                break;
            }
            run.push(next);
            at = next;
            if n >= 2 * late {
                own.add(run[n - late]);
            }
        }
        run
    });
    let [back, ahead] = &mut halves;
    back.reverse();
    let mut line = std::mem::take(back);
    line.push(seed);
    line.append(ahead);
    line
}

/// One step by the midpoint rule.
fn step(at: Point, length: f64, direction: &impl Fn(Point) -> Option<Point>) -> Option<Point> {
    let along = |at: Point, d: Point, s: f64| [at[0] + s * d[0], at[1] + s * d[1]];
    let middle = along(at, direction(at)?, 0.5 * length);
    Some(along(at, direction(middle)?, length))
}

/// Length of a line.
pub fn length(line: &[Point]) -> f64 {
    line.windows(2).map(|w| (w[1][0] - w[0][0]).hypot(w[1][1] - w[0][1])).sum()
}

/// Every so many points of a line, the last included.
pub fn thinned(line: &[Point], stride: usize) -> Vec<Point> {
    let mut thin: Vec<Point> = line.iter().copied().step_by(stride.max(1)).collect();
    if let (Some(last), Some(kept)) = (line.last(), thin.last())
        && last != kept
    {
        thin.push(*last);
    }
    thin
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_parallel_flow_gives_parallel_lines_one_distance_apart() {
        let found = lines([100.0, 60.0], 10.0, &[[50.0, 30.0]], |_| Some([1.0, 0.0]));
        let mut heights: Vec<f64> = found.iter().map(|l| l[0][1]).collect();
        heights.sort_by(f64::total_cmp);
        assert_eq!(heights.len(), 7, "{heights:?}");
        for pair in heights.windows(2) {
            assert!((pair[1] - pair[0] - 10.0).abs() < 1e-9, "{heights:?}");
        }
        for line in &found {
            assert!(length(line) > 95.0 && line.iter().all(|p| p[1] == line[0][1]));
        }
    }

    #[test]
    fn a_line_in_an_eddy_ends_after_one_turn_on_its_circle() {
        let eddy = |p: Point| {
            let (x, y) = (p[0] - 50.0, p[1] - 50.0);
            let r = x.hypot(y);
            (r > 1.0).then(|| [-y / r, x / r])
        };
        let found = lines([100.0, 100.0], 30.0, &[[50.0, 80.0]], eddy);
        let round = std::f64::consts::TAU * 30.0;
        assert!(length(&found[0]) < 1.3 * round);
        for p in &found[0] {
            assert!(((p[0] - 50.0).hypot(p[1] - 50.0) - 30.0).abs() < 0.05, "{p:?}");
        }
    }

    #[test]
    fn lines_keep_out_of_blocks() {
        let flow = |p: Point| (p[0] < 40.0 || p[0] > 60.0).then_some([1.0, 0.0]);
        for line in lines([100.0, 20.0], 5.0, &[[10.0, 10.0], [90.0, 10.0]], flow) {
            assert!(line.iter().all(|p| p[0] < 41.5 || p[0] > 58.5));
        }
    }
}
