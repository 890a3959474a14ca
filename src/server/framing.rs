//! Messages on the wire: the `Content-Length` frames of the base protocol, and what stands in them.

use std::io::{self, BufRead, Read, Write};

use serde_json::Value;
use tower_lsp::jsonrpc::{Error, Id, Request, Response};

use super::capabilities::readable_initialize;

/// Longest line of a header that is looked at; what is longer is no header.
const LONGEST_HEADER_LINE: u64 = 8 * 1024;

/// Longest message that is read, in bytes. Recipes are some kilobytes; this bounds what a broken client can make us hold.
const LONGEST_BODY: u64 = 128 * 1024 * 1024;

/// One message from the client, or the reason why there is none.
#[derive(Debug)]
pub enum Message {
    /// A request, or a notification where it has no id.
    Request(Request),
    /// The client's answer to a request of ours.
    Response(Response),
    /// Not a message; what to answer.
    Unreadable(Response),
    /// The input has ended.
    End,
}

/// Reads the next message. Anything between two frames is skipped, so that one broken frame costs one message and not
/// the conversation.
///
/// # Errors
/// Only what reading itself reports.
pub fn read_message(input: &mut impl BufRead) -> io::Result<Message> {
    let Some(length) = read_header(input)? else { return Ok(Message::End) };
    let Some(length) = length else { return Ok(unreadable(Error::parse_error())) };
    if length > LONGEST_BODY {
        io::copy(&mut input.by_ref().take(length), &mut io::sink())?;
        return Ok(unreadable(Error::invalid_request()));
    }
    let mut body = Vec::new();
    input.by_ref().take(length).read_to_end(&mut body)?;
    if (body.len() as u64) < length { Ok(Message::End) } else { Ok(decode(&body)) }
}

/// Reads header lines up to the blank line. `None` at the end of input, `Some(None)` where no usable length was given.
fn read_header(input: &mut impl BufRead) -> io::Result<Option<Option<u64>>> {
    let mut length = None;
    let mut any_line = false;
    loop {
        let mut line = Vec::new();
        if input.by_ref().take(LONGEST_HEADER_LINE).read_until(b'\n', &mut line)? == 0 {
            return Ok(None);
        }
        let line = line.trim_ascii();
        if !line.is_empty() {
            any_line = true;
            length = content_length(line).or(length);
        } else if any_line {
            return Ok(Some(length));
        }
    }
}

/// The length in a header line. It is looked for anywhere in the line, since the rest of a broken frame may stand before it.
fn content_length(line: &[u8]) -> Option<u64> {
    const NAME: &str = "content-length:";
    let line = String::from_utf8_lossy(line).to_ascii_lowercase();
    let (_, value) = line.rsplit_once(NAME)?;
    value.trim().parse().ok()
}

/// What a body says. Requests are put together leniently (a missing `jsonrpc` is no reason to refuse an editor).
fn decode(body: &[u8]) -> Message {
    let Ok(value) = serde_json::from_slice::<Value>(body) else { return unreadable(Error::parse_error()) };
    let Value::Object(mut fields) = value else { return unreadable(Error::invalid_request()) };
    let id = match fields.remove("id").map(serde_json::from_value::<Id>) {
        None => None,
        Some(Ok(id)) => Some(id),
        Some(Err(_)) => return unreadable(Error::invalid_request()),
    };
    match (fields.remove("method"), id) {
        (Some(Value::String(method)), id) => {
            let params = tolerated_params(&method, fields.remove("params"));
            let request = Request::build(method);
            let request = if let Some(id) = id { request.id(id) } else { request };
            Message::Request(if let Some(params) = params { request.params(params) } else { request }.finish())
        }
        (None, Some(id)) => match (fields.remove("error"), fields.remove("result")) {
            (Some(error), _) if !error.is_null() => {
                let error = serde_json::from_value(error).unwrap_or_else(|_| Error::internal_error());
                Message::Response(Response::from_error(id, error))
            }
            (_, Some(result)) => Message::Response(Response::from_ok(id, result)),
            _ => Message::Unreadable(Response::from_error(id, Error::invalid_request())),
        },
        (_, id) => Message::Unreadable(Response::from_error(id.unwrap_or(Id::Null), Error::invalid_request())),
    }
}

/// The parameters as tower-lsp wants them. Editors send `null`, `{}` or `[]` to methods that take none, and leave out the
/// empty object of `initialized`; neither is a mistake worth an error in the editor.
fn tolerated_params(method: &str, params: Option<Value>) -> Option<Value> {
    match (method, params) {
        ("shutdown" | "exit", _) => None,
        ("initialize", Some(params)) => Some(readable_initialize(params)),
        ("initialized", None | Some(Value::Null | Value::Array(_))) => Some(Value::Object(Default::default())),
        (_, Some(Value::Null)) => None,
        (_, params) => params,
    }
}

fn unreadable(error: Error) -> Message {
    Message::Unreadable(Response::from_error(Id::Null, error))
}

/// Writes one message with its header.
///
/// # Errors
/// What writing reports; the client is then gone.
pub fn write_message(output: &mut impl Write, body: &[u8]) -> io::Result<()> {
    write!(output, "Content-Length: {}\r\n\r\n", body.len())?;
    output.write_all(body)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read_all(text: &str) -> Vec<String> {
        let mut input = io::Cursor::new(text.as_bytes().to_vec());
        let mut seen = Vec::new();
        loop {
            match read_message(&mut input).unwrap() {
                Message::Request(request) => seen.push(format!("request {request}")),
                Message::Response(response) => seen.push(format!("response {}", response.id())),
                Message::Unreadable(response) => {
                    seen.push(format!("error {} to {}", response.error().unwrap().code.code(), response.id()));
                }
                Message::End => return seen,
            }
        }
    }

    fn frame(body: &str) -> String {
        format!("Content-Length: {}\r\n\r\n{body}", body.len())
    }

    #[test]
    fn a_broken_body_costs_one_message() {
        let text = frame("{\"jsonrpc\":\"2.0\",") + &frame(r#"{"jsonrpc":"2.0","id":1,"method":"shutdown"}"#);
        assert_eq!(read_all(&text), ["error -32700 to null", r#"request {"jsonrpc":"2.0","method":"shutdown","id":1}"#]);
    }

    #[test]
    fn junk_between_frames_is_skipped() {
        let good = frame(r#"{"method":"initialized","params":{}}"#);
        let request = r#"request {"jsonrpc":"2.0","method":"initialized","params":{}}"#;
        assert_eq!(read_all(&format!("{good}rubbish{good}")), [request, request]);
        assert_eq!(read_all(&format!("Content-Length: many\r\n\r\nrubbish{good}")), ["error -32700 to null", request]);
        assert_eq!(read_all(&format!("\r\n\r\n{good}")), [request]);
    }

    #[test]
    fn header_names_in_any_case_and_order() {
        let body = r#"{"method":"exit"}"#;
        let text = format!("content-type: application/vscode-jsonrpc; charset=utf-8\r\nCONTENT-LENGTH: {}\r\n\r\n{body}", body.len());
        assert_eq!(read_all(&text), [r#"request {"jsonrpc":"2.0","method":"exit"}"#]);
    }

    #[test]
    fn empty_parameters_are_dropped_where_none_are_taken() {
        for params in ["null", "{}", "[]"] {
            let text = frame(&format!(r#"{{"id":1,"method":"shutdown","params":{params}}}"#));
            assert_eq!(read_all(&text), [r#"request {"jsonrpc":"2.0","method":"shutdown","id":1}"#]);
        }
        for params in ["", r#","params":null"#, r#","params":[]"#] {
            let text = frame(&format!(r#"{{"method":"initialized"{params}}}"#));
            assert_eq!(read_all(&text), [r#"request {"jsonrpc":"2.0","method":"initialized","params":{}}"#]);
        }
    }

    #[test]
    fn what_is_no_message_is_answered() {
        for body in ["[]", "3", r#"{"id":1.5,"method":"x"}"#, r#"{"method":7}"#, "{}"] {
            assert_eq!(read_all(&frame(body)), ["error -32600 to null"], "{body}");
        }
        assert_eq!(read_all(&frame(r#"{"id":4}"#)), ["error -32600 to 4"]);
        let deep = "[".repeat(100_000);
        assert_eq!(read_all(&frame(&deep)), ["error -32700 to null"]);
    }

    #[test]
    fn answers_of_the_client_are_told_apart() {
        let texts = [r#"{"id":1,"result":null}"#, r#"{"id":"a","error":{"code":-1,"message":"no","more":1}}"#];
        assert_eq!(read_all(&(frame(texts[0]) + &frame(texts[1]))), ["response 1", "response \"a\""]);
    }

    #[test]
    fn a_frame_cut_short_ends_the_input() {
        assert!(read_all("Content-Length: 100\r\n\r\n{}").is_empty());
        assert!(read_all("Content-Le").is_empty());
    }

    #[test]
    fn bytes_are_counted_not_characters() {
        let mut out = Vec::new();
        write_message(&mut out, "µ".as_bytes()).unwrap();
        assert_eq!(out, b"Content-Length: 2\r\n\r\n\xc2\xb5");
    }
}
