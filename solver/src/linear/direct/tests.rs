use faer::Mat;
use faer::linalg::solvers::Solve;
use sprs::TriMat;

use super::*;

/// A system on a grid like that of the flow: in every cell a "pressure" without a diagonal entry,
/// a "velocity" and a "temperature", coupled with the neighbours, of fixed irregular values.
fn system(nx: u32, ny: u32, scale: f64) -> (Vec<(u32, u32)>, TriMat<f64>) {
    let count = (3 * nx * ny) as usize;
    let mut matrix = TriMat::new((count, count));
    let mut seed = 0.3;
    let mut value = || {
        seed = f64::fract(seed * 997.0 + 0.123);
        seed - 0.5
    };
    let mut cells = Vec::new();
    for j in 0..ny {
        for i in 0..nx {
            cells.extend([(i, j); 3]);
            let at = |i: u32, j: u32| 3 * (i + j * nx) as usize;
            let [p, v, t] = [0, 1, 2].map(|k| at(i, j) + k);
            if i == 0 {
                matrix.add_triplet(p, p, 1.0); // else the level of the pressure would hang in the air
            }
            matrix.add_triplet(v, v, 6.0 + value());
            matrix.add_triplet(t, t, scale * (5.0 + value()));
            matrix.add_triplet(v, t, 3.0 * value());
            matrix.add_triplet(t, v, scale * value());
            matrix.add_triplet(v, p, 1.0 + 0.1 * value());
            matrix.add_triplet(p, v, -1.0 + 0.1 * value());
            for (i2, j2) in [(i + 1, j), (i, j + 1), (i.wrapping_sub(1), j), (i, j.wrapping_sub(1))]
            {
                if i2 < nx && j2 < ny {
                    let n = at(i2, j2);
                    matrix.add_triplet(v, n + 1, -1.0 + value());
                    matrix.add_triplet(t, n + 2, scale * (-1.0 + 0.5 * value()));
                    if (i2, j2) > (i, j) {
                        matrix.add_triplet(v, n, -1.0);
                        matrix.add_triplet(n, v, 1.0);
                    }
                }
            }
        }
    }
    (cells, matrix)
}

/// Against dense elimination with partial pivoting by the library faer, and by what is left of the
/// right side where rows differ so much in size that two sound eliminations differ too.
#[test]
fn factors_solve_what_a_dense_elimination_solves() {
    let grids = [(1, 1, 1.0), (2, 7, 1.0), (9, 9, 1e-6), (17, 12, 1.0), (8, 30, 1e5)];
    for ((nx, ny, scale), with_fan) in grids.into_iter().flat_map(|g| [(g, false), (g, true)]) {
        let (cells, mut matrix) = system(nx, ny, scale);
        if with_fan {
            // The velocities of the first row all depend on each other, like those of a fan's slot.
            for (a, b) in (0..nx).flat_map(|a| (0..nx).map(move |b| (a as usize, b as usize))) {
                matrix.add_triplet(3 * a + 1, 3 * b + 1, 0.4);
            }
        }
        let n = cells.len();
        let mut dense = Mat::<f64>::zeros(n, n);
        matrix.triplet_iter().for_each(|(v, (r, c))| dense[(r, c)] += v);
        let right: Vec<f64> = (0..n).map(|k| (0.7 * k as f64).sin()).collect();
        let exact = dense.partial_piv_lu().solve(Mat::from_fn(n, 1, |i, _| right[i]));
        let mut found = right.clone();
        Order::new(&cells, &matrix).factorise(&matrix).unwrap().solve(&mut found);
        // Largest rest of a row over the sum of its terms' sizes.
        let rest = |x: &dyn Fn(usize) -> f64| {
            (0..n).fold(0.0_f64, |worst, i| {
                let terms = || (0..n).map(|k| dense[(i, k)] * x(k));
                let size = right[i].abs() + terms().map(f64::abs).sum::<f64>();
                let left = (right[i] - terms().sum::<f64>()).abs();
                if left > 0.0 { worst.max(left / size) } else { worst }
            })
        };
        let [ours, theirs] = [rest(&|k| found[k]), rest(&|k| exact[(k, 0)])];
        assert!(ours < 10.0 * theirs.max(1e-15), "{nx} x {ny}: {ours} against {theirs}");
        let size = (0..n).fold(0.0_f64, |m, i| m.max(exact[(i, 0)].abs()));
        let error = (0..n).fold(0.0_f64, |m, i| m.max((exact[(i, 0)] - found[i]).abs()));
        assert!(scale != 1.0 || error < 1e-11 * size, "{nx} x {ny}: {error} of {size}");
    }
}

#[test]
fn a_singular_matrix_is_refused() {
    let (cells, matrix) = system(6, 6, 1.0);
    let mut same = TriMat::new(matrix.shape());
    // The last temperature stands nowhere.
    let last = cells.len() - 1;
    matrix.triplet_iter().filter(|(_, (_, c))| *c != last).for_each(|(v, (r, c))| {
        same.add_triplet(r, c, *v);
    });
    assert_eq!(Order::new(&cells, &same).factorise(&same).unwrap_err(), Singular);
}

#[test]
fn every_unknown_is_eliminated_once_and_after_all_that_lead_to_it() {
    let (cells, matrix) = system(20, 11, 1.0);
    let Dissection { position, pieces, .. } =
        Dissection::new(&cells, matrix.row_inds(), matrix.col_inds());
    let mut seen = position.clone();
    seen.sort_unstable();
    assert!(seen.iter().enumerate().all(|(n, p)| n as u32 == *p));
    for (k, piece) in pieces.iter().enumerate() {
        assert!(piece.later.iter().all(|p| *p >= piece.own.end));
        let Some(parent) = piece.parent else { continue };
        assert!(parent as usize > k);
        let parent = &pieces[parent as usize];
        for (p, place) in piece.later.iter().zip(&piece.in_parent) {
            let own = parent.own.len() as u32;
            let there = if *place < own {
                parent.own.start + place
            } else {
                parent.later[(place - own) as usize]
            };
            assert_eq!(there, *p);
        }
    }
    // The last cut is one line of the grid.
    assert!(pieces.last().unwrap().own.len() <= 3 * 11);
}
