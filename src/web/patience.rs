//! Takes connections, as many as there are places, and hangs up on those that neither read nor write for too long:
//! a slow or silent client must not keep a place for ever.

use axum::extract::connect_info::Connected;
use axum::serve::{IncomingStream, Listener};
use std::future::Future;
use std::io;
use std::net::SocketAddr;
use std::pin::Pin;
use std::sync::Arc;
use std::task::{Context, Poll, ready};
use std::time::Duration;
use tokio::io::{AsyncRead, AsyncWrite, ReadBuf};
use tokio::net::{TcpListener, TcpStream};
use tokio::sync::{OwnedSemaphorePermit, Semaphore};
use tokio::time::{Sleep, sleep};

/// A listener with a limited number of places and limited patience.
pub struct Patient {
    listener: TcpListener,
    places: Arc<Semaphore>,
    patience: Duration,
}

impl Patient {
    /// Wraps a listener. Connections beyond `places` wait in the queue of the system; one on which nothing moves for
    /// `patience` is closed. Patience must be longer than the slowest answer.
    pub fn new(listener: TcpListener, places: usize, patience: Duration) -> Patient {
        Patient {
            listener,
            places: Arc::new(Semaphore::new(places.max(1))),
            patience,
        }
    }
}

impl Listener for Patient {
    type Io = Connection;
    type Addr = SocketAddr;

    async fn accept(&mut self) -> (Connection, SocketAddr) {
        // Never closed, so this waits for a place and does not fail.
        let place = self.places.clone().acquire_owned().await.ok();
        let (stream, address) = Listener::accept(&mut self.listener).await;
        let _ = stream.set_nodelay(true);
        let alarm = Box::pin(sleep(self.patience));
        (
            Connection {
                stream,
                alarm,
                moved: false,
                patience: self.patience,
                _place: place,
            },
            address,
        )
    }

    fn local_addr(&self) -> io::Result<SocketAddr> {
        self.listener.local_addr()
    }
}

/// The other end of a connection: a client, or a proxy before us.
#[derive(Clone, Copy, Debug)]
pub struct Peer(pub SocketAddr);

impl Connected<IncomingStream<'_, Patient>> for Peer {
    fn connect_info(stream: IncomingStream<'_, Patient>) -> Peer {
        Peer(*stream.remote_addr())
    }
}

/// A connection that is watched.
pub struct Connection {
    stream: TcpStream,
    alarm: Pin<Box<Sleep>>,
    /// Something moved since the alarm was set.
    moved: bool,
    patience: Duration,
    _place: Option<OwnedSemaphorePermit>,
}

impl Connection {
    /// Passes on what happened; where nothing did, an error once patience is at its end.
    fn watch<T>(&mut self, context: &mut Context<'_>, happened: Poll<io::Result<T>>) -> Poll<io::Result<T>> {
        if happened.is_ready() {
            self.moved = true;
            return happened;
        }
        loop {
            ready!(self.alarm.as_mut().poll(context));
            if !self.moved {
                return Poll::Ready(Err(io::ErrorKind::TimedOut.into()));
            }
            // Set anew when it rings rather than at every byte: silence ends after one to two times the patience.
            self.moved = false;
            let next = self.alarm.deadline() + self.patience;
            self.alarm.as_mut().reset(next);
        }
    }
}

impl AsyncRead for Connection {
    fn poll_read(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
        buffer: &mut ReadBuf<'_>,
    ) -> Poll<io::Result<()>> {
        let happened = Pin::new(&mut self.stream).poll_read(context, buffer);
        self.watch(context, happened)
    }
}

impl AsyncWrite for Connection {
    fn poll_write(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
        bytes: &[u8],
    ) -> Poll<io::Result<usize>> {
        let happened = Pin::new(&mut self.stream).poll_write(context, bytes);
        self.watch(context, happened)
    }

    fn poll_flush(mut self: Pin<&mut Self>, context: &mut Context<'_>) -> Poll<io::Result<()>> {
        Pin::new(&mut self.stream).poll_flush(context)
    }

    fn poll_shutdown(mut self: Pin<&mut Self>, context: &mut Context<'_>) -> Poll<io::Result<()>> {
        Pin::new(&mut self.stream).poll_shutdown(context)
    }

    fn poll_write_vectored(
        mut self: Pin<&mut Self>,
        context: &mut Context<'_>,
        pieces: &[io::IoSlice<'_>],
    ) -> Poll<io::Result<usize>> {
        let happened = Pin::new(&mut self.stream).poll_write_vectored(context, pieces);
        self.watch(context, happened)
    }

    fn is_write_vectored(&self) -> bool {
        self.stream.is_write_vectored()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use tokio::io::{AsyncReadExt, AsyncWriteExt};

    async fn listening(places: usize, patience: Duration) -> (Patient, SocketAddr) {
        let listener = TcpListener::bind("127.0.0.1:0").await.expect("binds");
        let address = listener.local_addr().expect("has an address");
        (Patient::new(listener, places, patience), address)
    }

    #[tokio::test]
    async fn hangs_up_on_a_silent_client_but_not_on_a_slow_one() {
        let (mut patient, address) = listening(2, Duration::from_millis(120)).await;
        let mut client = TcpStream::connect(address).await.expect("connects");
        let (mut connection, _) = patient.accept().await;
        let mut byte = [0];
        for _ in 0..4 {
            sleep(Duration::from_millis(50)).await;
            client.write_all(b"x").await.expect("sends");
            connection
                .read_exact(&mut byte)
                .await
                .expect("a slow byte is a byte");
        }
        let error = connection.read(&mut byte).await.expect_err("silence ends it");
        assert_eq!(error.kind(), io::ErrorKind::TimedOut);
    }

    #[tokio::test]
    async fn takes_no_more_than_it_has_places() {
        let (mut patient, address) = listening(1, Duration::from_secs(5)).await;
        let _first = TcpStream::connect(address).await.expect("connects");
        let _second = TcpStream::connect(address)
            .await
            .expect("waits in the queue of the system");
        let (taken, _) = patient.accept().await;
        let early = tokio::time::timeout(Duration::from_millis(50), patient.accept()).await;
        assert!(early.is_err());
        drop(taken);
        tokio::time::timeout(Duration::from_secs(5), patient.accept())
            .await
            .expect("a place came free");
    }
}
