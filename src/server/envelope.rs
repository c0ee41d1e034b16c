//! Whether the body of a message can be understood, looked at before it goes on: the
//! protocol library ends its whole service at the first one that it cannot read.

use std::fmt;

use serde::Deserialize;
use serde::de::{Deserializer, Error as _, MapAccess, SeqAccess, Visitor};
use serde_json::Value;
use tower_lsp::jsonrpc::{ErrorCode, Id};

/// Why a message is not passed on.
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

/// What is known of a message that may be passed on.
#[derive(Clone, Debug, PartialEq)]
pub struct Envelope {
    pub method: Option<String>,
    pub is_request: bool,
}

/// Reads just enough of a body to know that it is one JSON-RPC message.
pub fn check(body: &[u8]) -> Result<Envelope, Refusal> {
    let text = std::str::from_utf8(body)
        .map_err(|error| Refusal::parse(format!("the message is not UTF-8: {error}")))?;
    let fields: Fields = serde_json::from_str(text).map_err(|error| Refusal {
        code: if error.is_data() { ErrorCode::InvalidRequest } else { ErrorCode::ParseError },
        message: format!("the message cannot be read: {error}"),
        id: Id::Null,
    })?;
    fields.envelope()
}

#[derive(Default)]
struct Fields {
    version: Option<Value>,
    method: Option<Value>,
    id: Option<Value>,
    params: bool,
    answer: bool,
}

impl Fields {
    fn envelope(self) -> Result<Envelope, Refusal> {
        let id = match self.id {
            None => None,
            Some(Value::Null) => Some(Id::Null),
            Some(Value::String(text)) => Some(Id::String(text)),
            Some(Value::Number(number)) if number.as_i64().is_some() => {
                number.as_i64().map(Id::Number)
            }
            Some(_) => return Err(refuse("an id is a whole number or a string", None)),
        };
        if self.version.as_ref().and_then(Value::as_str) != Some("2.0") {
            return Err(refuse("the message does not say \"jsonrpc\": \"2.0\"", id));
        }
        let method = match self.method {
            Some(Value::String(method)) => Some(method),
            Some(_) => return Err(refuse("a method is a string", id)),
            None if self.answer => None,
            None => return Err(refuse("the message has neither a method nor a result", id)),
        };
        Ok(Envelope { is_request: method.is_some() && id.is_some(), method })
    }
}

fn refuse(message: &str, id: Option<Id>) -> Refusal {
    Refusal { code: ErrorCode::InvalidRequest, message: message.into(), id: id.unwrap_or(Id::Null) }
}

impl<'de> Deserialize<'de> for Fields {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_map(FieldsVisitor)
    }
}

struct FieldsVisitor;

impl<'de> Visitor<'de> for FieldsVisitor {
    type Value = Fields;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("one message, an object")
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Fields, A::Error> {
        let mut fields = Fields::default();
        while let Some(key) = map.next_key::<String>()? {
            let again = match key.as_str() {
                "jsonrpc" => fields.version.replace(map.next_value()?).is_some(),
                "method" => fields.method.replace(map.next_value()?).is_some(),
                "id" => fields.id.replace(map.next_value()?).is_some(),
                "params" => {
                    map.next_value::<Readable>()?;
                    std::mem::replace(&mut fields.params, true)
                }
                other => {
                    fields.answer |= other == "result" || other == "error";
                    map.next_value::<Readable>()?;
                    false
                }
            };
            if again {
                return Err(A::Error::custom(format!("\"{key}\" is given twice")));
            }
        }
        Ok(fields)
    }
}

/// A value that can be read but is not kept. Unlike one that is skipped, it keeps to the
/// limits of a real reading: depth, the size of numbers, whole surrogate pairs.
struct Readable;

impl<'de> Deserialize<'de> for Readable {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(ReadableVisitor)
    }
}

struct ReadableVisitor;

impl<'de> Visitor<'de> for ReadableVisitor {
    type Value = Readable;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("any value")
    }

    fn visit_bool<E>(self, _: bool) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_i64<E>(self, _: i64) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_u64<E>(self, _: u64) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_f64<E>(self, _: f64) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_str<E>(self, _: &str) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_unit<E>(self) -> Result<Readable, E> {
        Ok(Readable)
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut seq: A) -> Result<Readable, A::Error> {
        while seq.next_element::<Readable>()?.is_some() {}
        Ok(Readable)
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Readable, A::Error> {
        while map.next_entry::<Readable, Readable>()?.is_some() {}
        Ok(Readable)
    }
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
        check(body.as_bytes()).err().map(|refusal| refusal.code.code())
    }

    #[test]
    fn requests_notifications_and_answers_pass() {
        let request = check(br#"{"jsonrpc":"2.0","id":"a","method":"x","params":[1,{"b":null}]}"#);
        assert_eq!(request, Ok(Envelope { method: Some("x".into()), is_request: true }));
        let note = check(br#"{"method":"exit","jsonrpc":"2.0"}"#);
        assert_eq!(note, Ok(Envelope { method: Some("exit".into()), is_request: false }));
        assert!(check(br#"{"jsonrpc":"2.0","id":3,"result":null}"#).is_ok());
    }

    #[test]
    fn what_is_not_json_is_a_parse_error() {
        for body in ["", "{", "nonsense", r#"{"jsonrpc":"2.0","id":1,"method":"x"} x"#] {
            assert_eq!(code(body), Some(-32700), "{body}");
        }
        let deep = format!(
            r#"{{"jsonrpc":"2.0","method":"x","params":{}1{}}}"#,
            "[".repeat(100_000),
            "]".repeat(100_000)
        );
        assert_eq!(code(&deep), Some(-32700));
        assert_eq!(code(r#"{"jsonrpc":"2.0","method":"x","params":[1e999]}"#), Some(-32700));
        assert_eq!(check(b"\"\xff\"").map_err(|refusal| refusal.code), Err(ErrorCode::ParseError));
    }

    #[test]
    fn what_is_not_a_message_is_an_invalid_request() {
        for body in [
            "[]",
            "1",
            "{}",
            r#"{"jsonrpc":"1.0","method":"x"}"#,
            r#"{"jsonrpc":"2.0","method":7}"#,
            r#"{"jsonrpc":"2.0","id":1.5,"method":"x"}"#,
            r#"{"jsonrpc":"2.0","method":"x","method":"y"}"#,
            r#"{"jsonrpc":"2.0","id":4}"#,
        ] {
            assert_eq!(code(body), Some(-32600), "{body}");
        }
        let refusal = check(br#"{"id":4,"method":"x"}"#).map_err(|refusal| refusal.id);
        assert_eq!(refusal, Err(Id::Number(4)), "the client is not left waiting");
    }

    #[test]
    fn half_a_surrogate_pair_is_mended_and_a_whole_one_kept() {
        let body =
            br#"{"jsonrpc":"2.0","method":"x","params":["\ud834","\ud834\udd1e","\\ud834"]}"#;
        assert!(check(body).is_err());
        let mended = mend_surrogates(body).unwrap_or_default();
        assert!(check(&mended).is_ok());
        let text = String::from_utf8_lossy(&mended);
        assert!(text.contains(r#"["\ufffd","\ud834\udd1e","\\ud834"]"#), "{text}");
        assert_eq!(mend_surrogates(br#"["\ud834\udd1e"]"#), None);
    }
}
