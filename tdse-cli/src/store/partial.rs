//! Files that are not finished: their names, and whether anybody still writes them.

use std::ffi::OsString;
use std::fs;
use std::path::{Path, PathBuf};
use std::process;
use std::time::Duration;

use sha2::{Digest, Sha256};

use super::atomic::host_name;

/// A file of an unknown process that nobody has written to for so long is abandoned.
const SILENCE: Duration = Duration::from_hours(24);

/// `NAME.HOST-KERNEL-PID.partial` in the same folder, so that no two processes share it and renaming stays on one disk.
pub(super) fn beside(path: &Path) -> PathBuf {
    let mut name = path.file_name().map_or_else(OsString::new, OsString::from);
    name.push(format!(".{}.partial", process_mark()));
    path.with_file_name(name)
}

/// What tells this process from all others: `HOST-KERNEL-PID`.
pub fn process_mark() -> String {
    let kernel = kernel().unwrap_or_else(|| "unknown".into());
    format!("{}-{kernel}-{}", host_name(), process::id())
}

/// Whether this is the name of a file that is not finished.
pub(super) fn is_partial(name: &str) -> bool {
    Path::new(name).extension().is_some_and(|extension| extension == "partial")
}

/// Where process numbers count: a mark of this boot of this machine, and of this container on it; none where the system
/// does not tell. Names of hosts do not do: clusters of containers often share one.
fn kernel() -> Option<String> {
    let boot = fs::read_to_string("/proc/sys/kernel/random/boot_id").ok()?;
    let numbers = fs::read_link("/proc/self/ns/pid").ok()?;
    let mark = format!("{} {}", boot.trim(), numbers.display());
    Some(format!("{:x}", Sha256::digest(mark))[..8].to_owned())
}

/// Removes the unfinished files below a folder that nobody writes any more, but for those this process writes; how many.
/// One that cannot be removed does no harm.
pub(super) fn sweep(folder: &Path) -> usize {
    let entries: Vec<PathBuf> =
        fs::read_dir(folder).into_iter().flatten().flatten().map(|entry| entry.path()).collect();
    let swept = |path: &PathBuf| {
        if path.is_dir() {
            return sweep(path);
        }
        usize::from(is_abandoned(path) && fs::remove_file(path).is_ok())
    };
    entries.iter().map(swept).sum()
}

fn is_abandoned(path: &Path) -> bool {
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    if !is_partial(&name) {
        return false;
    }
    !may_run(name.trim_end_matches(".partial"), path, SILENCE)
}

/// Whether the process with this mark runs; of one that is out of sight, whether `path`, which it writes, has changed
/// within `silence`.
pub fn may_run(mark: &str, path: &Path, silence: Duration) -> bool {
    let mut marks = mark.rsplit('-');
    let (process, mark) = (marks.next().and_then(|text| text.parse::<u32>().ok()), marks.next());
    match process {
        Some(process) if mark.is_some() && mark == kernel().as_deref() => {
            Path::new("/proc").join(process.to_string()).exists()
        }
        _ => !is_silent(path, silence),
    }
}

fn is_silent(path: &Path, limit: Duration) -> bool {
    let written = fs::metadata(path).and_then(|data| data.modified());
    written.ok().and_then(|time| time.elapsed().ok()).is_some_and(|silence| silence > limit)
}

#[cfg(test)]
mod tests {
    use std::fs::{File, FileTimes};
    use std::process::Command;
    use std::time::SystemTime;

    use super::*;

    #[test]
    fn only_files_that_nobody_writes_are_removed() {
        let place = tempfile::tempdir().expect("a folder");
        let root = place.path().join("points/ab");
        fs::create_dir_all(&root).expect("a folder");
        let mut gone = Command::new("true").spawn().expect("started");
        gone.wait().expect("ended");
        let own = beside(&root.join("a.h5"));
        let name = |host: &str, kernel: &str, process: u32| {
            root.join(format!("b.h5.{host}-{kernel}-{process}.partial"))
        };
        let here = kernel().expect("a Linux machine");
        let dead = name("some-host.example", &here, gone.id());
        let alive = name("some-host.example", &here, 1);
        let elsewhere = name("some-host.example", "0badcafe", gone.id());
        let silent = name("other", "0badcafe", gone.id());
        let plain = root.join("half.partial");
        let result = root.join("b.h5");
        for path in [&own, &dead, &alive, &elsewhere, &silent, &plain, &result] {
            fs::write(path, "half").expect("a file");
        }
        let old = FileTimes::new().set_modified(SystemTime::now() - SILENCE - Duration::from_mins(1));
        for path in [&silent, &result] {
            File::options().write(true).open(path).and_then(|file| file.set_times(old)).expect("made old");
        }
        assert_eq!(sweep(place.path()), 2);
        for (path, stays) in [
            (own, true),
            (dead, false),
            (alive, true),
            (elsewhere, true),
            (silent, false),
            (plain, true),
            (result, true),
        ] {
            assert_eq!(path.exists(), stays, "{}", path.display());
        }
    }
}
