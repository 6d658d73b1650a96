//! Peak memory of the running process. Convention: bytes; only where the system tells (Linux, `/proc`), else `None`.

use std::fs;

/// Resident memory now, in bytes, after which [`peak_bytes`] counts afresh.
pub fn start() -> Option<u64> {
    // 5: reset the peak, see proc(5), `clear_refs`.
    fs::write("/proc/self/clear_refs", "5").ok()?;
    status("VmRSS:")
}

/// Largest resident memory since [`start`], in bytes.
pub fn peak_bytes() -> Option<u64> {
    status("VmHWM:")
}

fn status(key: &str) -> Option<u64> {
    let text = fs::read_to_string("/proc/self/status").ok()?;
    let line = text.lines().find_map(|line| line.strip_prefix(key))?;
    let kibibytes: u64 = line.split_whitespace().next()?.parse().ok()?;
    Some(1024 * kibibytes)
}

#[cfg(all(test, target_os = "linux"))]
mod tests {
    #![allow(clippy::unwrap_used, reason = "tests")]

    #[test]
    fn the_peak_holds_what_was_written_to_in_the_meantime() {
        let before = super::start().unwrap();
        let written = std::hint::black_box(vec![1_u8; 50_000_000]);
        drop(written);
        let grown = super::peak_bytes().unwrap() - before;
        assert!((45_000_000..80_000_000).contains(&grown), "{grown} bytes more");
    }
}
