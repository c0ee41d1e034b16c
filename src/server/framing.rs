//! The framing filter: bytes in, messages out. Where something is no message, that is
//! told in its place, and the next good message is found.

use std::ops::Range;

use super::envelope::{self, Incoming, Refusal};

/// No message is longer; a longer one is taken for a broken header.
const LONGEST_BODY: usize = 1 << 28;
const LONGEST_HEADER: usize = 1 << 14;
const LENGTH: &[u8] = b"content-length:";

/// Bytes in, whole messages out.
#[derive(Debug, Default)]
pub struct Filter {
    bytes: Vec<u8>,
    /// What lies before is done with.
    start: usize,
    state: State,
    /// Whether what follows still belongs to a message that was complained of.
    quiet: bool,
}

#[derive(Debug, Default)]
enum State {
    #[default]
    Header,
    Body {
        length: usize,
        /// Why it will not be passed on, when the header already says so.
        refused: Option<&'static str>,
        scanned: usize,
    },
    /// Looking for the next header.
    Lost,
}

impl Filter {
    /// Takes bytes and appends the messages they complete.
    pub fn push(&mut self, bytes: &[u8], out: &mut Vec<Incoming>) {
        self.bytes.extend_from_slice(bytes);
        while self.step(out) {}
        self.bytes.drain(..self.start);
        self.start = 0;
        if self.bytes.is_empty() && self.bytes.capacity() > 1 << 20 {
            self.bytes = Vec::new();
        }
    }

    /// One step; false where more bytes are needed.
    fn step(&mut self, out: &mut Vec<Incoming>) -> bool {
        match &mut self.state {
            State::Header => self.header(out),
            State::Lost => match find_header(&self.bytes[self.start..]) {
                Some(at) => {
                    self.start += at;
                    self.state = State::Header;
                    true
                }
                None => {
                    let kept = LENGTH.len() - 1;
                    self.start = self.start.max(self.bytes.len().saturating_sub(kept));
                    false
                }
            },
            State::Body { length, refused, scanned } => {
                let body = self.start..self.start + *length;
                if self.bytes.len() >= body.end {
                    let refused = *refused;
                    self.body(body, refused, out);
                    return true;
                }
                let from = self.start + *scanned;
                *scanned = (self.bytes.len() - self.start).saturating_sub(64);
                match find_whole_header(&self.bytes[from..]) {
                    Some(at) => {
                        self.start = from + at;
                        self.state = State::Header;
                        self.complain("the message is shorter than its Content-Length", out);
                        true
                    }
                    None => false,
                }
            }
        }
    }

    fn header(&mut self, out: &mut Vec<Incoming>) -> bool {
        let mut at = self.start;
        let mut length = None;
        let mut refused = None;
        loop {
            let rest = &self.bytes[at..];
            let Some(end) = rest.iter().position(|&byte| byte == b'\n') else {
                let plausible =
                    rest.iter().take_while(|&&b| b != b':').all(|&b| is_token(b) || b == b'\r');
                if plausible && self.bytes.len() - self.start < LONGEST_HEADER {
                    return false;
                }
                return self.lose(at + 1, "a message starts with its Content-Length", out);
            };
            let line = rest[..end].strip_suffix(b"\r").unwrap_or(&rest[..end]);
            let next = at + end + 1;
            if line.is_empty() {
                if at == self.start {
                    self.start = next;
                    return true;
                }
                let Some(length) = length else {
                    return self.lose(self.start, "the message has no Content-Length", out);
                };
                self.start = next;
                self.quiet = false;
                self.state = State::Body { length, refused, scanned: 0 };
                return true;
            }
            let header = split_header(line).filter(|_| next - self.start < LONGEST_HEADER);
            let Some((name, value)) = header else {
                return self.lose(at + 1, "a message starts with its Content-Length", out);
            };
            if name.eq_ignore_ascii_case("content-length") {
                match value.parse() {
                    Ok(count) if count <= LONGEST_BODY => length = Some(count),
                    Ok(_) => return self.lose(next, "the Content-Length is too large", out),
                    Err(_) => return self.lose(next, "the Content-Length is not a number", out),
                }
            } else if name.eq_ignore_ascii_case("content-type") && !is_utf8(value) {
                refused = Some("only UTF-8 is understood");
            }
            at = next;
        }
    }

    /// Gives up on a header; the search for the next one starts at `from`.
    fn lose(&mut self, from: usize, why: &str, out: &mut Vec<Incoming>) -> bool {
        self.start = from;
        self.state = State::Lost;
        if !self.quiet {
            self.complain(why, out);
        }
        true
    }

    fn body(&mut self, range: Range<usize>, refused: Option<&str>, out: &mut Vec<Incoming>) {
        self.state = State::Header;
        self.start = range.end;
        if let Some(why) = refused {
            return self.complain(why, out);
        }
        let body = &self.bytes[range.clone()];
        match envelope::read(body) {
            Ok(incoming) => out.push(incoming),
            Err(refusal) => {
                // A length that is too large has swallowed what follows: no JSON text
                // holds a header, since a string holds no line end.
                if let Some(at) = find_whole_header(body).or_else(|| find_begun_header(body)) {
                    self.start = range.start + at;
                    self.state = State::Lost;
                }
                self.refuse(refusal, out);
            }
        }
    }

    fn complain(&mut self, why: &str, out: &mut Vec<Incoming>) {
        self.refuse(Refusal::parse(why), out);
    }

    fn refuse(&mut self, refusal: Refusal, out: &mut Vec<Incoming>) {
        self.quiet = true;
        out.push(Incoming::Refused(refusal));
    }
}

fn is_token(byte: u8) -> bool {
    byte.is_ascii_alphanumeric() || byte == b'-'
}

fn split_header(line: &[u8]) -> Option<(&str, &str)> {
    let (name, value) = std::str::from_utf8(line).ok()?.split_once(':')?;
    (!name.is_empty() && name.bytes().all(is_token)).then_some((name, value.trim()))
}

fn is_utf8(content_type: &str) -> bool {
    content_type
        .split(';')
        .filter_map(|part| part.trim().strip_prefix("charset="))
        .all(|set| matches!(set.trim_matches('"').to_ascii_lowercase().as_str(), "utf-8" | "utf8"))
}

fn find_header(bytes: &[u8]) -> Option<usize> {
    let mut from = 0;
    while let Some(at) = bytes[from..].iter().position(|byte| byte.eq_ignore_ascii_case(&b'c')) {
        from += at;
        if bytes[from..].len() < LENGTH.len() {
            return None;
        }
        if bytes[from..from + LENGTH.len()].eq_ignore_ascii_case(LENGTH) {
            return Some(from);
        }
        from += 1;
    }
    None
}

/// A header with its number and its line's end.
fn find_whole_header(bytes: &[u8]) -> Option<usize> {
    let mut from = 0;
    while let Some(at) = find_header(&bytes[from..]) {
        let value = bytes[from + at + LENGTH.len()..].trim_ascii_start();
        let digits = value.iter().take_while(|byte| byte.is_ascii_digit()).count();
        if digits > 0 && matches!(&value[digits..], [b'\r', b'\n', ..] | [b'\n', ..]) {
            return Some(from + at);
        }
        from += at + LENGTH.len();
    }
    None
}

/// A header that begins in these bytes and may go on after them.
fn find_begun_header(bytes: &[u8]) -> Option<usize> {
    (bytes.len().saturating_sub(2 * LENGTH.len())..bytes.len()).find(|&at| {
        let begun = &bytes[at..];
        let common = begun.len().min(LENGTH.len());
        begun[..common].eq_ignore_ascii_case(&LENGTH[..common])
            && begun[common..].iter().all(|byte| matches!(byte, b' ' | b'\r' | b'0'..=b'9'))
    })
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn message(method: &str) -> String {
        format!(r#"{{"jsonrpc":"2.0","method":"{method}"}}"#)
    }

    fn framed(body: &str) -> String {
        format!("Content-Length: {}\r\n\r\n{body}", body.len())
    }

    /// The methods of what comes out, `!` for a complaint.
    fn filtered(input: &[u8], chunk: usize) -> Vec<String> {
        let mut filter = Filter::default();
        let mut out = Vec::new();
        for part in input.chunks(chunk) {
            filter.push(part, &mut out);
        }
        let methods = out.into_iter().map(|incoming| match incoming {
            Incoming::Request(request) => request.method().to_owned(),
            Incoming::Response(_) => "?".into(),
            Incoming::Refused(_) => "!".into(),
        });
        methods.collect()
    }

    /// Between two good messages: each chunk size gives the same, and the second lives.
    fn between(bad: &[u8]) -> Vec<String> {
        let input =
            [framed(&message("first")).as_bytes(), bad, framed(&message("last")).as_bytes()]
                .concat();
        let whole = filtered(&input, input.len());
        for chunk in [1, 7, 30] {
            assert_eq!(filtered(&input, chunk), whole, "in chunks of {chunk}");
        }
        whole
    }

    #[test]
    fn good_messages_pass_whatever_their_header_looks_like() {
        let body = message("x");
        let length = body.len();
        for header in [
            format!("Content-Length: {length}\r\n\r\n"),
            format!("content-length:{length}\r\nX-Other: 1\r\n\r\n"),
            format!(
                "Content-Type: application/vscode-jsonrpc; charset=utf8\r\nContent-Length: {length}\r\n\r\n"
            ),
            format!("Content-Type: application/vscode-jsonrpc\nContent-Length: {length}\n\n"),
            format!("\r\nContent-Length: {length}\r\n\r\n"),
        ] {
            assert_eq!(
                between(format!("{header}{body}").as_bytes()),
                ["first", "x", "last"],
                "{header}"
            );
        }
    }

    #[test]
    fn a_malformed_message_costs_only_itself() {
        let body = message("x");
        let shorter = format!("Content-Length: {}\r\n\r\n{body}", body.len() - 9);
        let by_one = format!("Content-Length: {}\r\n\r\n{body}", body.len() + 1);
        let longer = format!("Content-Length: {}\r\n\r\n{body}", body.len() + 5000);
        for bad in [
            framed("{\"jsonrpc\":").as_bytes(),
            framed("").as_bytes(),
            framed("[]").as_bytes(),
            &[b"Content-Length: 3\r\n\r\n".as_slice(), &[b'"', 0xff, b'"']].concat(),
            b"Content-Length: many\r\n\r\n",
            b"Content-Length: -5\r\n\r\n",
            b"Content-Length: 99999999999999999999999999\r\n\r\n",
            b"Content-Length: 9999999999\r\n\r\n{}",
            b"Content-Length: \xff\r\n\r\n",
            b"Content-Length: 7\r\n{broken}\r\n\r\n",
            b"Other: 1\r\n\r\n{}",
            b"\x00\x01\x02 nothing of the kind",
            b"{\"jsonrpc\":\"2.0\",\"method\":\"bare\"}\n",
            b"Content-Type: text; charset=latin-1\r\nContent-Length: 2\r\n\r\n{}",
            shorter.as_bytes(),
            by_one.as_bytes(),
            longer.as_bytes(),
        ] {
            assert_eq!(between(bad), ["first", "!", "last"], "{}", String::from_utf8_lossy(bad));
        }
    }

    #[test]
    fn a_bare_text_is_complained_of_before_the_next_message() {
        assert_eq!(filtered(b"{\"jsonrpc\"", 100), ["!"]);
    }

    proptest! {
        // No file of failures beside the sources.
        #![proptest_config(ProptestConfig { failure_persistence: None, ..Default::default() })]

        #[test]
        fn any_bytes_are_survived(noise in prop::collection::vec(any::<u8>(), 0..200), chunk in 1usize..50) {
            let good = framed(&message("good"));
            // After noise that swallows one message, the one after it must come through.
            let input = [noise.as_slice(), good.as_bytes(), good.as_bytes()].concat();
            let found = filtered(&input, chunk);
            prop_assert!(found.iter().any(|method| method == "good"), "{found:?}");
        }

        #[test]
        fn broken_headers_are_survived(noise in "(Content-Length: ?[0-9]{0,4}|\r|\n|\r\n|[{}a:]){0,12}", chunk in 1usize..50) {
            let good = framed(&message("good"));
            let input = [noise.as_bytes(), good.as_bytes(), good.as_bytes()].concat();
            let found = filtered(&input, chunk);
            prop_assert_eq!(found.last().map(String::as_str), Some("good"), "{:?}", found);
        }
    }
}
