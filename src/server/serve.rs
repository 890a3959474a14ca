//! The conversation with one client: reads messages, hands them to the service, writes what comes back, and knows when to
//! leave.
//!
//! tower-lsp gives the service, the client handle and the trait; its own `Server::serve` is not used, because an editor
//! could hang it or end it (each case has a test below). What this loop promises instead:
//!
//! - Input and output stand on threads of their own, and answers of the client are always read, so nothing can wait in a ring.
//! - The first step of every handler runs in order of arrival; what remains of it runs beside the others, without limit.
//! - A panic costs one answer (-32603), a broken message costs itself (-32700); neither ends the conversation.
//! - `exit`, the end of input, a closed output and the end of the editor's process end it, with the exit code of the protocol.

use std::io::{BufReader, BufWriter, Read, Write};
use std::pin::Pin;
use std::sync::mpsc::{self, Receiver, RecvTimeoutError, Sender};
use std::task::Poll;
use std::thread;
use std::time::Duration;

use futures::{Future, Sink, StreamExt, future, poll};
use serde::Serialize;
use serde_json::json;
use tokio::sync::mpsc::{UnboundedSender, unbounded_channel};
use tokio::task::JoinSet;
use tokio::time::timeout;
use tower::Service;
use tower_lsp::jsonrpc::{Error, ErrorCode, Id, Request, Response};
use tower_lsp::{ClientSocket, LanguageServer, LspService};

use super::framing::{Message, read_message, write_message};
use super::guard::{Fault, guarded, guarded_future};
use super::{log, watchdog};

/// How long answers under way may take once the input has ended.
const LAST_ANSWERS: Duration = Duration::from_secs(2);

/// How long the client may take to read what we still have to say when leaving.
const LAST_OUTPUT: Duration = Duration::from_secs(1);

/// Why the conversation ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ending {
    /// The client said `exit`.
    Exit {
        /// Whether it had asked for `shutdown` before, as it should.
        after_shutdown: bool,
    },
    /// The input ended without `exit`.
    InputEnded {
        /// Whether it had asked for `shutdown` before.
        after_shutdown: bool,
    },
    /// The client no longer reads.
    OutputClosed,
    /// The client's process ended.
    ClientGone,
}

impl Ending {
    /// The exit code of the process, as the protocol has it: 0 after `shutdown`, otherwise 1.
    pub fn code(self) -> i32 {
        match self {
            Ending::Exit { after_shutdown: true } | Ending::InputEnded { after_shutdown: true } => 0,
            _ => 1,
        }
    }
}

/// What the loop waits for.
enum Event {
    Message(Message),
    OutputClosed,
    ClientGone,
}

/// Serves one client until the conversation ends.
pub async fn serve<S: LanguageServer>(
    mut service: LspService<S>,
    socket: ClientSocket,
    input: impl Read + Send + 'static,
    output: impl Write + Send + 'static,
) -> Ending {
    let (sender, mut events) = unbounded_channel();
    let (outbox, written) = start_writer(output, sender.clone());
    start_reader(input, sender.clone());
    let (requests, mut answers) = socket.split();
    tokio::spawn(requests.for_each({
        let outbox = outbox.clone();
        move |request| {
            let _: () = outbox.send(&request);
            future::ready(())
        }
    }));

    let mut under_way = JoinSet::new();
    let mut after_shutdown = false;
    let ending = loop {
        let Some(event) = events.recv().await else { break Ending::ClientGone };
        while under_way.try_join_next().is_some() {}
        match event {
            Event::OutputClosed => break Ending::OutputClosed,
            Event::ClientGone => break Ending::ClientGone,
            Event::Message(Message::End) => {
                let _ = timeout(LAST_ANSWERS, async { while under_way.join_next().await.is_some() {} }).await;
                break Ending::InputEnded { after_shutdown };
            }
            Event::Message(Message::Unreadable(answer)) => outbox.send(&answer),
            // tower-lsp panics when nobody waits for the answer any more.
            Event::Message(Message::Response(answer)) => {
                if let Err(fault) = guarded(|| Pin::new(&mut answers).start_send(answer)) {
                    log::write(format_args!("an answer that nobody waits for: {fault}"));
                }
            }
            Event::Message(Message::Request(request)) => {
                let method = request.method().to_owned();
                if method == "initialize" {
                    watch_client(&request, sender.clone());
                }
                let answered = start(&mut service, request, &outbox, &mut under_way).await;
                match method.as_str() {
                    "exit" => break Ending::Exit { after_shutdown },
                    "shutdown" => after_shutdown |= answered,
                    _ => (),
                }
            }
        }
    };
    log::write(format_args!("leaving: {ending:?}"));
    outbox.close();
    if let Err(RecvTimeoutError::Timeout) = written.recv_timeout(LAST_OUTPUT) {
        log::write(format_args!("the client did not read our last messages"));
    }
    ending
}

/// Hands a request to the service and runs its first step now; what remains runs on. Says whether a good answer was
/// given at once.
async fn start<S: LanguageServer>(
    service: &mut LspService<S>,
    request: Request,
    outbox: &Outbox,
    under_way: &mut JoinSet<()>,
) -> bool {
    let (method, id) = (request.method().to_owned(), request.id().cloned());
    let handler = match guarded(|| service.call(request)) {
        Ok(handler) => handler,
        Err(fault) => {
            outbox.send_fault(&method, id, &fault);
            return false;
        }
    };
    let outbox = outbox.clone();
    let mut whole = Box::pin(async move {
        match guarded_future(handler).await {
            Ok(Ok(Some(answer))) => {
                outbox.send(&answer);
                answer.is_ok()
            }
            // A notification, or a message after `exit`.
            Ok(Ok(None) | Err(_)) => false,
            Err(fault) => {
                outbox.send_fault(&method, id, &fault);
                false
            }
        }
    });
    match poll!(&mut whole) {
        Poll::Ready(good) => good,
        Poll::Pending => {
            under_way.spawn(discard(whole));
            false
        }
    }
}

async fn discard(work: impl Future<Output = bool>) {
    work.await;
}

/// Starts the watch over the client's process, where the client says which it is.
fn watch_client(request: &Request, events: UnboundedSender<Event>) {
    let id = request.params().and_then(|params| params.get("processId")).and_then(serde_json::Value::as_u64);
    if let Some(id) = id.and_then(|id| u32::try_from(id).ok()) {
        watchdog::watch(id, move || drop(events.send(Event::ClientGone)));
    }
}

fn start_reader(input: impl Read + Send + 'static, events: UnboundedSender<Event>) {
    let failed = events.clone();
    let read = move || {
        let mut input = BufReader::new(input);
        loop {
            let message = read_message(&mut input).unwrap_or(Message::End);
            let ended = matches!(message, Message::End);
            if events.send(Event::Message(message)).is_err() || ended {
                return;
            }
        }
    };
    if thread::Builder::new().name("input".into()).spawn(read).is_err() {
        let _ = failed.send(Event::Message(Message::End));
    }
}

/// Starts the thread that writes. The receiver is told when the last message is out.
fn start_writer(output: impl Write + Send + 'static, events: UnboundedSender<Event>) -> (Outbox, Receiver<()>) {
    let (outbox, messages) = mpsc::channel::<Option<Vec<u8>>>();
    let (written, done) = mpsc::channel();
    let failed = events.clone();
    let write = move || {
        let mut output = BufWriter::new(output);
        while let Ok(Some(body)) = messages.recv() {
            if write_message(&mut output, &body).and_then(|()| output.flush()).is_err() {
                let _ = events.send(Event::OutputClosed);
                break;
            }
        }
        let _ = written.send(());
    };
    if thread::Builder::new().name("output".into()).spawn(write).is_err() {
        let _ = failed.send(Event::OutputClosed);
    }
    (Outbox(outbox), done)
}

/// Where messages to the client go; never waits.
#[derive(Clone)]
struct Outbox(Sender<Option<Vec<u8>>>);

impl Outbox {
    /// Queues a message. A message after the end of the conversation is dropped.
    fn send(&self, message: &impl Serialize) {
        match serde_json::to_vec(message) {
            Ok(body) => drop(self.0.send(Some(body))),
            Err(error) => log::write(format_args!("a message that cannot be written: {error}")),
        }
    }

    /// Answers a request whose handler failed, and tells the client's log what happened and where, for a report.
    fn send_fault(&self, method: &str, id: Option<Id>, fault: &Fault) {
        let message = format!("scruple failed at {method}. This is a fault of scruple, not of the recipe: {fault}");
        let params = json!({ "type": 1, "message": message });
        self.send(&Request::build("window/logMessage").params(params).finish());
        if let Some(id) = id {
            let error = Error { code: ErrorCode::InternalError, message: message.into(), data: None };
            self.send(&Response::from_error(id, error));
        }
    }

    /// Nothing is written after what was queued so far.
    fn close(&self) {
        let _ = self.0.send(None);
    }
}

#[cfg(test)]
mod tests;
