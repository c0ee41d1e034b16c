//! Standard input and output for the runtime, with as few hops as can be: a thread
//! reads, and the writer writes at once. The reader never waits for the writer, so a
//! client that writes before it reads is always served.

use std::fs::File;
use std::io::{self, ErrorKind, Read, Write};
use std::pin::Pin;
use std::task::{Context, Poll, ready};
use std::time::Duration;

use tokio::io::{AsyncRead, AsyncWrite, ReadBuf};
use tokio::sync::mpsc::{UnboundedReceiver, unbounded_channel};

/// How long the process may last after the end of its input.
const LONGEST_GOODBYE: Duration = Duration::from_secs(10);

/// Standard input, read by a thread of its own.
pub struct Input {
    chunks: UnboundedReceiver<Vec<u8>>,
    chunk: Vec<u8>,
    given: usize,
}

impl Input {
    pub fn start() -> io::Result<Self> {
        let (sender, chunks) = unbounded_channel();
        std::thread::Builder::new().name("input".into()).spawn(move || {
            let mut input = io::stdin().lock();
            let mut buffer = vec![0; 1 << 16];
            loop {
                match input.read(&mut buffer) {
                    Ok(0) => break,
                    Ok(count) if sender.send(buffer[..count].to_vec()).is_err() => break,
                    Ok(_) => {}
                    Err(error) if error.kind() == ErrorKind::Interrupted => {}
                    Err(error) if error.kind() == ErrorKind::WouldBlock => pause(),
                    Err(_) => break,
                }
            }
            drop(sender);
            // The client has left. One that keeps our output open and reads none of it
            // would hold the writer, and the process with it, for ever.
            std::thread::sleep(LONGEST_GOODBYE);
            std::process::exit(1);
        })?;
        Ok(Self { chunks, chunk: Vec::new(), given: 0 })
    }
}

impl AsyncRead for Input {
    fn poll_read(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
        buffer: &mut ReadBuf<'_>,
    ) -> Poll<io::Result<()>> {
        if self.given == self.chunk.len() {
            match ready!(self.chunks.poll_recv(context)) {
                Some(chunk) => (self.chunk, self.given) = (chunk, 0),
                None => return Poll::Ready(Ok(())),
            }
        }
        let rest = &self.chunk[self.given..];
        let count = rest.len().min(buffer.remaining());
        buffer.put_slice(&rest[..count]);
        self.given += count;
        Poll::Ready(Ok(()))
    }
}

/// Standard output, written to at once and without a buffer of its own.
pub struct Output(File);

impl Output {
    pub fn new() -> io::Result<Self> {
        #[cfg(unix)]
        let owned = std::os::fd::AsFd::as_fd(&io::stdout()).try_clone_to_owned()?;
        #[cfg(windows)]
        let owned =
            std::os::windows::io::AsHandle::as_handle(&io::stdout()).try_clone_to_owned()?;
        Ok(Self(File::from(owned)))
    }
}

impl AsyncWrite for Output {
    fn poll_write(
        mut self: Pin<&mut Self>,
        _: &mut Context<'_>,
        bytes: &[u8],
    ) -> Poll<io::Result<usize>> {
        loop {
            match self.0.write(bytes) {
                Err(error) if error.kind() == ErrorKind::Interrupted => {}
                Err(error) if error.kind() == ErrorKind::WouldBlock => pause(),
                result => return Poll::Ready(result),
            }
        }
    }

    fn poll_flush(self: Pin<&mut Self>, _: &mut Context<'_>) -> Poll<io::Result<()>> {
        Poll::Ready(Ok(()))
    }

    fn poll_shutdown(self: Pin<&mut Self>, _: &mut Context<'_>) -> Poll<io::Result<()>> {
        Poll::Ready(Ok(()))
    }
}

/// For the rare pipe that its other end has made non-blocking.
fn pause() {
    std::thread::sleep(Duration::from_millis(1));
}
