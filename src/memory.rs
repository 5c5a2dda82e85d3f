//! Memory: what a solve takes and what the machine has left.

use std::fs;

/// Memory before the first cell [bytes]: program and threads.
const START: f64 = 60e6;
/// Memory of fields and coefficients on all meshes [bytes per cell].
const PER_CELL: f64 = 750.0;
/// The direct solution works on the first coarser mesh of at most so many cells, the stability
/// analysis (with its time-accurate run) on the first of at most so many; [bytes] per cell of
/// theirs for factors and disturbances.
const DIRECT: [f64; 2] = [6_000.0, 36e3];
const ANALYSIS: [f64; 2] = [12_000.0, 14e3];

/// Memory that a solve on so many cells takes at the most [bytes]. Greatest resident size as
/// measured, and as estimated here: 111 and 216 MB on 3 072 cells, 288 and 340 MB on 11 776, 170
/// and 300 MB on 18 096, 351 and 365 MB on 23 040 (many factorisations), 171 and 253 MB on
/// 29 696, 435 and 633 MB on 374 000.
pub fn of_solve(cells: usize) -> f64 {
    let cells = cells as f64;
    // Every coarser mesh has a quarter of the cells.
    let coarsened = |most: f64| {
        let mut left = cells;
        while left > most {
            left *= 0.25;
        }
        left
    };
    let on_coarser = |[most, bytes]: [f64; 2]| bytes * coarsened(most);
    START + PER_CELL * cells + on_coarser(DIRECT) + on_coarser(ANALYSIS)
}

/// Memory that this process can still get [bytes]: what the machine has available, or what is
/// left of the limit on its addresses, whichever is less. `None` where neither can be read.
pub fn available() -> Option<f64> {
    let machine = kilobytes("/proc/meminfo", "MemAvailable:");
    let limit = fs::read_to_string("/proc/self/limits").ok().and_then(|text| {
        let line = text.lines().find(|l| l.starts_with("Max address space"))?;
        line.split_whitespace().nth(3)?.parse::<f64>().ok()
    });
    let used = kilobytes("/proc/self/status", "VmSize:").unwrap_or(0.0);
    let left = limit.map(|limit| (limit - used).max(0.0));
    machine.into_iter().chain(left).min_by(f64::total_cmp)
}

/// A value [bytes] that a file of the kernel gives in kB behind a label.
fn kilobytes(file: &str, label: &str) -> Option<f64> {
    let text = fs::read_to_string(file).ok()?;
    let line = text.lines().find_map(|l| l.strip_prefix(label))?;
    line.split_whitespace().next()?.parse::<f64>().ok().map(|kb| 1024.0 * kb)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_solve_takes_more_memory_on_more_cells() {
        let sizes = [100, 3_000, 12_000, 400_000, 20_000_000].map(of_solve);
        assert!(sizes.is_sorted() && sizes[4] > 14e9, "{sizes:?}");
    }

    #[cfg(target_os = "linux")]
    #[test]
    fn a_running_machine_has_some_memory_left() {
        assert!(available().is_some_and(|bytes| bytes > 1e6));
    }
}
