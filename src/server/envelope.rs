//! The body of one message: read, or refused with the error that the client is told.

use serde_json::Value;
use tower_lsp::jsonrpc::{ErrorCode, Id, Request, Response};

/// What came in.
#[derive(Debug)]
pub enum Incoming {
    /// A request or a notification.
    Request(Request),
    /// The client's answer to a request of ours.
    Response(Response),
    Refused(Refusal),
}

/// Why something is no message.
#[derive(Clone, Debug, PartialEq)]
pub struct Refusal {
    pub code: ErrorCode,
    pub message: String,
    /// The request's own id, where it could be read.
    pub id: Id,
}

impl Refusal {
    pub fn parse(message: impl Into<String>) -> Self {
        Self { code: ErrorCode::ParseError, message: message.into(), id: Id::Null }
    }
}

/// Reads the body of a message.
pub fn read(body: &[u8]) -> Result<Incoming, Refusal> {
    let text = std::str::from_utf8(body)
        .map_err(|error| Refusal::parse(format!("the message is not UTF-8: {error}")))?;
    read_text(text).or_else(|error| match mend_surrogates(body) {
        Some(mended) => {
            read_text(&String::from_utf8_lossy(&mended)).map_err(|error| refuse(text, &error))
        }
        None => Err(refuse(text, &error)),
    })
}

fn read_text(text: &str) -> serde_json::Result<Incoming> {
    let request: Request = serde_json::from_str(text)?;
    if request.method().is_empty() {
        return serde_json::from_str(text).map(Incoming::Response);
    }
    Ok(Incoming::Request(request))
}

/// Says what is wrong, to the request that it was if that can be told.
fn refuse(text: &str, error: &serde_json::Error) -> Refusal {
    let code = if error.is_data() { ErrorCode::InvalidRequest } else { ErrorCode::ParseError };
    let id = serde_json::from_str(text)
        .ok()
        .and_then(|mut message: Value| serde_json::from_value(message.get_mut("id")?.take()).ok());
    let message = format!("the message cannot be read: {error}");
    Refusal { code, message, id: id.unwrap_or(Id::Null) }
}

/// The body with each half of a surrogate pair that stands alone replaced by U+FFFD, or
/// none where there is no such half. An editor that works in UTF-16 can send one, and
/// the edit it came with must not be lost; the replacement counts one column, as it did.
pub fn mend_surrogates(body: &[u8]) -> Option<Vec<u8>> {
    let escape = |at: usize| -> Option<u16> {
        let digits = body.get(at..at + 6)?.strip_prefix(b"\\u")?;
        u16::from_str_radix(std::str::from_utf8(digits).ok()?, 16).ok()
    };
    let mut mended: Option<Vec<u8>> = None;
    let mut at = 0;
    while at < body.len() {
        if body[at] != b'\\' {
            at += 1;
            continue;
        }
        let first = escape(at);
        let paired = matches!(escape(at + 6), Some(0xDC00..=0xDFFF));
        match first {
            Some(0xD800..=0xDBFF) if paired => at += 12,
            Some(0xD800..=0xDFFF) => {
                let mended = mended.get_or_insert_with(|| body.to_vec());
                mended[at + 2..at + 6].copy_from_slice(b"fffd");
                at += 6;
            }
            Some(_) => at += 6,
            None => at += 2,
        }
    }
    mended
}

#[cfg(test)]
mod tests {
    use super::*;

    fn code(body: &str) -> Option<i64> {
        read(body.as_bytes()).err().map(|refusal| refusal.code.code())
    }

    #[test]
    fn requests_notifications_and_answers_are_told_apart() {
        let request = read(br#"{"jsonrpc":"2.0","id":"a","method":"x","params":[1,{"b":null}]}"#);
        assert!(
            matches!(request, Ok(Incoming::Request(request)) if request.id() == Some(&"a".into()))
        );
        let note = read(br#"{"method":"exit","jsonrpc":"2.0"}"#);
        assert!(matches!(note, Ok(Incoming::Request(note)) if note.id().is_none()));
        for answer in [
            r#"{"jsonrpc":"2.0","id":3,"result":null}"#,
            r#"{"jsonrpc":"2.0","id":3,"error":{"code":1,"message":"no"}}"#,
        ] {
            assert!(matches!(read(answer.as_bytes()), Ok(Incoming::Response(_))), "{answer}");
        }
    }

    #[test]
    fn what_is_not_json_is_a_parse_error() {
        let deep = format!(
            r#"{{"jsonrpc":"2.0","method":"x","params":{}1{}}}"#,
            "[".repeat(100_000),
            "]".repeat(100_000)
        );
        let huge = r#"{"jsonrpc":"2.0","method":"x","params":[1e999]}"#;
        let more = r#"{"jsonrpc":"2.0","id":1,"method":"x"} x"#;
        for body in ["", "{", "nonsense", more, &deep, huge] {
            assert_eq!(code(body), Some(-32700), "{body:.60}");
        }
        assert!(read(b"\"\xff\"").is_err_and(|refusal| refusal.code == ErrorCode::ParseError));
    }

    #[test]
    fn what_is_not_a_message_is_an_invalid_request() {
        for body in [
            "1",
            "{}",
            r#"{"jsonrpc":"1.0","method":"x"}"#,
            r#"{"jsonrpc":"2.0","method":7}"#,
            r#"{"jsonrpc":"2.0","id":1.5,"method":"x"}"#,
            r#"{"jsonrpc":"2.0","method":"x","method":"y"}"#,
            r#"{"jsonrpc":"2.0","id":4}"#,
            r#"{"jsonrpc":"2.0","id":4,"method":""}"#,
        ] {
            assert_eq!(code(body), Some(-32600), "{body}");
        }
        let refusal = read(br#"{"id":4,"method":"x"}"#);
        assert!(
            refusal.is_err_and(|refusal| refusal.id == Id::Number(4)),
            "nobody is left waiting"
        );
    }

    #[test]
    fn half_a_surrogate_pair_is_mended_and_a_whole_one_kept() {
        let body =
            br#"{"jsonrpc":"2.0","method":"x","params":["\ud834","\ud834\udd1e","\\ud834"]}"#;
        let Ok(Incoming::Request(request)) = read(body) else { panic!("it is read") };
        let expected = serde_json::json!(["\u{fffd}", "\u{1d11e}", "\\ud834"]);
        assert_eq!(request.params(), Some(&expected));
        assert_eq!(mend_surrogates(br#"["\ud834\udd1e"]"#), None);
    }
}
