//! The one guard between a fault of our own and the end of the conversation: a panic becomes a value.

use std::any::Any;
use std::cell::RefCell;
use std::future::Future;
use std::panic::{AssertUnwindSafe, catch_unwind, set_hook};

use futures::FutureExt;

use super::log;

thread_local! {
    /// Where the latest panic of this thread happened, noted by the hook because the payload does not say.
    static PLACE: RefCell<Option<String>> = const { RefCell::new(None) };
}

/// A panic that was caught: its words and its place in the source.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault(pub String);

impl std::fmt::Display for Fault {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str(&self.0)
    }
}

/// Sends panics to the log instead of standard error, which some editors show to the user as an alarm.
pub fn install_hook() {
    set_hook(Box::new(|panic| {
        let place = panic.location().map(ToString::to_string);
        log::write(format_args!("panic at {}: {}", place.as_deref().unwrap_or("?"), words(panic.payload())));
        PLACE.with(|slot| *slot.borrow_mut() = place);
    }));
}

/// Runs `work`; a panic inside becomes a [`Fault`].
///
/// # Errors
/// The panic.
pub fn guarded<T>(work: impl FnOnce() -> T) -> Result<T, Fault> {
    catch_unwind(AssertUnwindSafe(work)).map_err(|payload| fault(payload.as_ref()))
}

/// The same for a future.
///
/// # Errors
/// The panic.
pub async fn guarded_future<T>(work: impl Future<Output = T>) -> Result<T, Fault> {
    AssertUnwindSafe(work).catch_unwind().await.map_err(|payload| fault(payload.as_ref()))
}

fn fault(payload: &(dyn Any + Send)) -> Fault {
    match PLACE.with(|slot| slot.borrow_mut().take()) {
        Some(place) => Fault(format!("{} ({place})", words(payload))),
        None => Fault(words(payload).to_owned()),
    }
}

fn words(payload: &dyn Any) -> &str {
    match (payload.downcast_ref::<&str>(), payload.downcast_ref::<String>()) {
        (Some(words), _) => words,
        (_, Some(words)) => words,
        _ => "no words",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_becomes_a_value() {
        assert_eq!(guarded(|| 3), Ok(3));
        assert!(guarded(|| -> i32 { panic!("the {} broke", "flask") }).unwrap_err().0.contains("the flask broke"));
        let future = guarded_future(async { panic!("later") });
        let fault: Result<(), Fault> = futures::executor::block_on(future);
        assert!(fault.unwrap_err().0.contains("later"));
    }
}
