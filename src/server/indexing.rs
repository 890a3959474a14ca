//! Says how far the reading of a library has come, where that takes long enough to be worth saying.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU32, Ordering};
use std::time::Duration;

use tokio::runtime::Handle;
use tower_lsp::Client;
use tower_lsp::lsp_types::notification::Progress as ProgressNotification;
use tower_lsp::lsp_types::request::WorkDoneProgressCreate;
use tower_lsp::lsp_types::{
    NumberOrString, ProgressParams, ProgressParamsValue, WorkDoneProgress, WorkDoneProgressBegin, WorkDoneProgressCreateParams,
    WorkDoneProgressEnd, WorkDoneProgressReport,
};

use crate::workspace::Progress;

/// Work that takes less is not mentioned.
const PATIENCE: Duration = Duration::from_millis(300);
/// How often the client is told.
const STEP: Duration = Duration::from_millis(200);

/// How often a client that refuses is asked.
const ATTEMPTS: u32 = 10;

/// Each piece of work has a name of its own.
static COUNT: AtomicU32 = AtomicU32::new(0);

/// A piece of work that is under way; over when it is dropped.
pub struct Indexing(Arc<AtomicBool>);

impl Indexing {
    /// Tells the client how far the work has come, until it is over.
    pub fn begin(client: Client, runtime: &Handle, progress: Arc<Progress>) -> Indexing {
        let is_over = Arc::new(AtomicBool::new(false));
        runtime.spawn(tell(client, progress, Arc::clone(&is_over)));
        Indexing(is_over)
    }
}

impl Drop for Indexing {
    fn drop(&mut self) {
        self.0.store(true, Ordering::SeqCst);
    }
}

async fn tell(client: Client, progress: Arc<Progress>, is_over: Arc<AtomicBool>) {
    tokio::time::sleep(PATIENCE).await;
    let token = NumberOrString::String(format!("scruple-{}", COUNT.fetch_add(1, Ordering::SeqCst)));
    // Nothing can be asked of a client that has not heard our answer to `initialize` yet.
    for attempt in 0.. {
        if is_over.load(Ordering::SeqCst) || attempt == ATTEMPTS {
            return;
        }
        let create = WorkDoneProgressCreateParams { token: token.clone() };
        match client.send_request::<WorkDoneProgressCreate>(create).await {
            Ok(()) => break,
            Err(_) => tokio::time::sleep(STEP).await,
        }
    }
    let say = |value: WorkDoneProgress| {
        let params = ProgressParams { token: token.clone(), value: ProgressParamsValue::WorkDone(value) };
        client.send_notification::<ProgressNotification>(params)
    };
    let begin = WorkDoneProgressBegin { title: "Reading recipes".to_owned(), percentage: Some(0), ..WorkDoneProgressBegin::default() };
    say(WorkDoneProgress::Begin(begin)).await;
    while !is_over.load(Ordering::SeqCst) {
        let (done, total) = (progress.done(), progress.total());
        if let Some(percentage) = (100 * done.min(total)).checked_div(total) {
            let percentage = u32::try_from(percentage).ok();
            say(WorkDoneProgress::Report(WorkDoneProgressReport { percentage, ..WorkDoneProgressReport::default() })).await;
        }
        tokio::time::sleep(STEP).await;
    }
    say(WorkDoneProgress::End(WorkDoneProgressEnd::default())).await;
}
