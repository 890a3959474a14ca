//! Whether the editor that started us is still there. An editor that crashes may leave our input open.

use std::thread;
use std::time::Duration;

/// How often to look.
const INTERVAL: Duration = Duration::from_secs(1);

/// Calls `gone` once the process `id` has ended. A process that cannot be seen to begin with is not watched: the editor may
/// run in another container, where its number means nothing here.
pub fn watch(id: u32, gone: impl FnOnce() + Send + 'static) {
    if !is_running(id) {
        return;
    }
    let watch = move || {
        while is_running(id) {
            thread::sleep(INTERVAL);
        }
        gone();
    };
    // Without a thread to spare there is no watch; the end of input still ends the server.
    let _ = thread::Builder::new().name("watchdog".into()).spawn(watch);
}

/// Linux: the process table as files. A zombie has ended, only nobody has asked for its result.
#[cfg(target_os = "linux")]
fn is_running(id: u32) -> bool {
    let Ok(stat) = std::fs::read_to_string(format!("/proc/{id}/stat")) else { return false };
    // "id (name) state …"; the name may hold anything, parentheses too.
    let state = stat.rsplit_once(')').and_then(|(_, rest)| rest.trim_start().chars().next());
    !matches!(state, Some('Z' | 'X'))
}

/// Other Unix systems: the null signal, through the standard tool, since a system call would need unsafe code.
#[cfg(all(unix, not(target_os = "linux")))]
fn is_running(id: u32) -> bool {
    use std::process::{Command, Stdio};
    let ask = Command::new("kill").args(["-0", &id.to_string()]).stdout(Stdio::null()).stderr(Stdio::null()).status();
    ask.is_ok_and(|status| status.success())
}

/// Elsewhere the input of a child ends with its parent, so there is nothing to watch.
#[cfg(not(unix))]
fn is_running(_: u32) -> bool {
    false
}

#[cfg(all(test, unix))]
mod tests {
    use std::process::{Command, Stdio};
    use std::sync::mpsc;

    use super::*;

    #[test]
    fn the_end_of_a_process_is_noticed_even_as_a_zombie() {
        let mut child = Command::new("sleep").arg("60").stdin(Stdio::null()).spawn().unwrap();
        let (sender, receiver) = mpsc::channel();
        watch(child.id(), move || sender.send(()).unwrap());
        assert!(receiver.recv_timeout(Duration::from_millis(50)).is_err());
        child.kill().unwrap();
        receiver.recv_timeout(Duration::from_secs(10)).unwrap();
        child.wait().unwrap();
    }

    #[test]
    fn a_process_out_of_sight_is_not_watched() {
        let (sender, receiver) = mpsc::channel::<()>();
        watch(u32::MAX, move || sender.send(()).unwrap());
        assert!(receiver.recv().is_err(), "the watch was dropped, not run");
    }
}
