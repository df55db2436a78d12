//! What the machine gives: cores and memory.

use std::num::NonZeroUsize;
use std::{env, fs, thread};

/// Where batch schedulers say how many cores a task has: Slurm, PBS, Grid Engine (names from their manuals).
const PER_TASK: [&str; 3] = ["SLURM_CPUS_PER_TASK", "NCPUS", "NSLOTS"];

/// Share of the free memory that points may take (a choice of our own).
const SHARE: f64 = 0.8;

/// Points to compute at once: as asked, else what the scheduler gives a task, else the cores of the machine.
pub fn jobs(asked: Option<NonZeroUsize>) -> usize {
    let scheduled = PER_TASK.iter().find_map(|name| env::var(name).ok()?.parse().ok());
    choose_jobs(asked, scheduled, cores())
}

fn choose_jobs(asked: Option<NonZeroUsize>, scheduled: Option<NonZeroUsize>, machine: usize) -> usize {
    asked.or(scheduled).map_or(machine, NonZeroUsize::get)
}

/// Cores that this process may use.
pub fn cores() -> usize {
    thread::available_parallelism().map_or(1, NonZeroUsize::get)
}

/// As many at once, at most `jobs`, as fit into the free memory when each takes `bytes`; at least one.
pub fn fitting(jobs: usize, bytes: u64) -> usize {
    free_memory().map_or(jobs, |free| fit(jobs, bytes, free))
}

fn fit(jobs: usize, bytes: u64, free: u64) -> usize {
    let room = free as f64 * SHARE / bytes.max(1) as f64;
    (room as usize).clamp(1, jobs.max(1))
}

/// Free memory in bytes: of the machine, or of the control group where that is less; none where neither is known.
pub fn free_memory() -> Option<u64> {
    let machine = fs::read_to_string("/proc/meminfo").ok().and_then(|text| available(&text));
    let number = |name: &str| fs::read_to_string(format!("/sys/fs/cgroup/{name}")).ok()?.trim().parse().ok();
    let limit = number("memory.max");
    let group =
        limit.zip(number("memory.current")).map(|(limit, used): (u64, u64)| limit.saturating_sub(used));
    machine.into_iter().chain(group).min()
}

/// `MemAvailable` of proc(5), bytes.
fn available(meminfo: &str) -> Option<u64> {
    let line = meminfo.lines().find_map(|line| line.strip_prefix("MemAvailable:"))?;
    line.trim().strip_suffix("kB")?.trim().parse::<u64>().ok().map(|kilobytes| kilobytes * 1024)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_asked_comes_before_the_scheduler_and_that_before_the_machine() {
        let number = NonZeroUsize::new;
        assert_eq!(choose_jobs(number(3), number(2), 8), 3);
        assert_eq!(choose_jobs(None, number(2), 8), 2);
        assert_eq!(choose_jobs(None, None, 8), 8);
    }

    #[test]
    fn the_number_at_once_is_what_memory_holds_and_at_least_one() {
        assert_eq!(fit(8, 100, 1_000_000), 8);
        assert_eq!(fit(8, 200_000, 1_000_000), 4);
        assert_eq!(fit(8, 2_000_000, 1_000_000), 1);
    }

    #[test]
    fn available_memory_is_read_in_kilobytes() {
        let text = "MemTotal:       16 kB\nMemAvailable:     12 kB\n";
        assert_eq!(available(text), Some(12 * 1024));
        assert_eq!(available("MemFree: 3 kB"), None);
    }
}
