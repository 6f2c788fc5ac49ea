//! Guard round the protocol crate: a panic in a handler becomes an error
//! answer, and `exit` ends the process with the code that the protocol asks for.

use std::future::Future;
use std::panic::AssertUnwindSafe;
use std::pin::Pin;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::task::{Context, Poll};
use tower::Service;
use tower_lsp::jsonrpc::{Error, ErrorCode, Request, Response};

/// A service that survives its inner one.
pub struct Guard<S> {
    inner: S,
    shut_down: Arc<AtomicBool>,
}

impl<S> Guard<S> {
    /// Guards `inner`.
    pub fn new(inner: S) -> Guard<S> {
        Guard { inner, shut_down: Arc::new(AtomicBool::new(false)) }
    }
}

impl<S> Service<Request> for Guard<S>
where
    S: Service<Request, Response = Option<Response>>,
    S::Future: Send + 'static,
    S::Error: Send + 'static,
{
    type Response = Option<Response>;
    type Error = S::Error;
    type Future = Pin<Box<dyn Future<Output = Result<Self::Response, Self::Error>> + Send>>;

    fn poll_ready(&mut self, context: &mut Context<'_>) -> Poll<Result<(), Self::Error>> {
        self.inner.poll_ready(context)
    }

    fn call(&mut self, request: Request) -> Self::Future {
        match request.method() {
            "exit" => std::process::exit(i32::from(!self.shut_down.load(Ordering::SeqCst))),
            "shutdown" => self.shut_down.store(true, Ordering::SeqCst),
            _ => {}
        }
        let id = request.id().cloned();
        let future = self.inner.call(request);
        Box::pin(async move {
            let mut future = std::pin::pin!(future);
            std::future::poll_fn(move |context| {
                let polled = std::panic::catch_unwind(AssertUnwindSafe(|| future.as_mut().poll(context)));
                match polled {
                    Ok(poll) => poll,
                    Err(_) => {
                        let error = Error {
                            code: ErrorCode::InternalError,
                            message: "internal fault; please report the sheet".into(),
                            data: None,
                        };
                        Poll::Ready(Ok(id.clone().map(|id| Response::from_error(id, error))))
                    }
                }
            })
            .await
        })
    }
}
