//! A bare client of the language server: the real program as a child, and JSON-RPC by hand.

use std::io::{BufRead, BufReader, Read, Write};
use std::process::{Child, ChildStderr, ChildStdin, Command, ExitStatus, Stdio};
use std::sync::mpsc::{Receiver, RecvTimeoutError, channel};
use std::thread;
use std::time::{Duration, Instant};

use serde_json::{Value, json};

/// Longer than any answer may take, on any machine.
const PATIENCE: Duration = Duration::from_secs(180);

/// A running server and the client's side of the conversation.
pub struct Client {
    process: Child,
    input: Option<ChildStdin>,
    errors: ChildStderr,
    messages: Receiver<Value>,
    /// What came while something else was waited for.
    put_by: Vec<Value>,
    next_id: i64,
}

#[allow(dead_code, reason = "each test file uses its own part")]
impl Client {
    /// Starts the server; nothing is said yet.
    pub fn start() -> Client {
        Client::start_with(&[])
    }

    /// Starts the server with environment variables.
    pub fn start_with(environment: &[(&str, &str)]) -> Client {
        let mut process = Command::new(env!("CARGO_BIN_EXE_scruple"))
            .arg("serve")
            .envs(environment.iter().copied())
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        let mut output = BufReader::new(process.stdout.take().unwrap());
        let (sender, messages) = channel();
        thread::spawn(move || {
            while let Some(message) = read(&mut output) {
                if sender.send(message).is_err() {
                    return;
                }
            }
        });
        let input = process.stdin.take();
        let errors = process.stderr.take().unwrap();
        Client { process, input, errors, messages, put_by: Vec::new(), next_id: 0 }
    }

    /// Starts the server and agrees on these capabilities of the client.
    pub fn initialized(capabilities: Value) -> Client {
        let mut client = Client::start();
        client.initialize(json!({ "processId": null, "rootUri": null, "capabilities": capabilities }));
        client
    }

    /// Says `initialize` and `initialized`; returns what the server offers.
    pub fn initialize(&mut self, params: Value) -> Value {
        let answer = self.ask("initialize", params);
        self.tell("initialized", json!({}));
        answer["result"].clone()
    }

    /// Writes bytes as they are.
    pub fn raw(&mut self, bytes: &[u8]) {
        let input = self.input.as_mut().unwrap();
        input.write_all(bytes).unwrap();
        input.flush().unwrap();
    }

    /// Sends a message.
    pub fn send(&mut self, message: &Value) {
        let body = message.to_string();
        self.raw(format!("Content-Length: {}\r\n\r\n{body}", body.len()).as_bytes());
    }

    /// Sends a notification.
    pub fn tell(&mut self, method: &str, params: Value) {
        self.send(&json!({ "jsonrpc": "2.0", "method": method, "params": params }));
    }

    /// Sends a request without waiting, and returns its number.
    pub fn begin(&mut self, method: &str, params: Value) -> i64 {
        self.next_id += 1;
        self.send(&json!({ "jsonrpc": "2.0", "id": self.next_id, "method": method, "params": params }));
        self.next_id
    }

    /// Sends a request and waits for the whole answer.
    pub fn ask(&mut self, method: &str, params: Value) -> Value {
        let id = self.begin(method, params);
        self.answer(id)
    }

    /// Waits for the answer to a request.
    pub fn answer(&mut self, id: i64) -> Value {
        self.wait(|message| message["id"] == id && message.get("method").is_none())
    }

    /// Waits for the next notification or request of this method.
    pub fn told(&mut self, method: &str) -> Value {
        self.wait(|message| message["method"] == method)
    }

    /// Waits for the first message that fits, old ones included; keeps the others.
    pub fn wait(&mut self, fits: impl Fn(&Value) -> bool) -> Value {
        if let Some(index) = self.put_by.iter().position(&fits) {
            return self.put_by.remove(index);
        }
        let deadline = Instant::now() + PATIENCE;
        loop {
            let left = deadline.saturating_duration_since(Instant::now());
            match self.messages.recv_timeout(left) {
                Ok(message) if fits(&message) => return message,
                Ok(message) => self.put_by.push(message),
                Err(error) => panic!("waited in vain ({error:?}); meanwhile came {:?}", self.put_by),
            }
        }
    }

    /// All messages that come before the answer to a request of ours, so that nothing older is still on its way.
    pub fn settle(&mut self) -> Vec<Value> {
        let id = self.begin("scruple/unknown", Value::Null);
        self.answer(id);
        std::mem::take(&mut self.put_by)
    }

    /// Opens a text, version 1.
    pub fn open(&mut self, uri: &str, text: &str) {
        let document = json!({ "uri": uri, "languageId": "scruple", "version": 1, "text": text });
        self.tell("textDocument/didOpen", json!({ "textDocument": document }));
    }

    /// Replaces a range (start line, start column, end line, end column).
    pub fn edit(&mut self, uri: &str, version: i32, range: [u32; 4], text: &str) {
        let [from_line, from, to_line, to] = range;
        let range = json!({ "start": { "line": from_line, "character": from }, "end": { "line": to_line, "character": to } });
        let document = json!({ "uri": uri, "version": version });
        let changes = json!([{ "range": range, "text": text }]);
        self.tell("textDocument/didChange", json!({ "textDocument": document, "contentChanges": changes }));
    }

    /// Closes a text.
    pub fn close(&mut self, uri: &str) {
        self.tell("textDocument/didClose", json!({ "textDocument": { "uri": uri } }));
    }

    /// Waits for findings of a text at a version.
    pub fn findings(&mut self, uri: &str, version: i32) -> Vec<Value> {
        let published = self.wait(|message| {
            let params = &message["params"];
            message["method"] == "textDocument/publishDiagnostics" && params["uri"] == uri && params["version"] == version
        });
        published["params"]["diagnostics"].as_array().unwrap().clone()
    }

    /// Ends the input, as a client that crashed.
    pub fn hang_up(&mut self) {
        self.input = None;
    }

    /// The process, for its number.
    pub fn process(&self) -> &Child {
        &self.process
    }

    /// Says `shutdown` and `exit`, and checks that the server leaves as it should, with nothing on standard error.
    pub fn leave(mut self) {
        let answer = self.ask("shutdown", Value::Null);
        assert_eq!(answer["result"], Value::Null, "{answer}");
        assert!(answer.get("error").is_none(), "{answer}");
        self.tell("exit", Value::Null);
        let (status, errors) = self.ended();
        assert_eq!((status.code(), errors.as_str()), (Some(0), ""));
    }

    /// Waits for the end of the process; returns its status and what it wrote to standard error.
    pub fn ended(mut self) -> (ExitStatus, String) {
        let deadline = Instant::now() + PATIENCE;
        let status = loop {
            if let Some(status) = self.process.try_wait().unwrap() {
                break status;
            }
            assert!(Instant::now() < deadline, "the server still runs");
            thread::sleep(Duration::from_millis(5));
        };
        let mut errors = String::new();
        self.errors.read_to_string(&mut errors).unwrap();
        // What the server wrote last must have been whole messages.
        while !matches!(self.messages.recv_timeout(PATIENCE), Err(RecvTimeoutError::Disconnected)) {}
        (status, errors)
    }
}

impl Drop for Client {
    fn drop(&mut self) {
        // A test that failed leaves no server behind; one that ended already cannot be killed, which is fine.
        let _ = self.process.kill();
        let _ = self.process.wait();
    }
}

fn read(output: &mut impl BufRead) -> Option<Value> {
    let mut length = 0;
    loop {
        let mut line = String::new();
        if output.read_line(&mut line).ok()? == 0 {
            return None;
        }
        match line.trim_end() {
            "" => break,
            header => length = header.strip_prefix("Content-Length: ").unwrap().parse().unwrap(),
        }
    }
    let mut body = vec![0; length];
    output.read_exact(&mut body).ok()?;
    Some(serde_json::from_slice(&body).unwrap())
}
