//! Guard round the protocol crate: a panic in a handler becomes an error
//! answer, and the next message finds the server as before.

use std::any::Any;
use std::future::Future;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::Pin;
use std::task::{Context, Poll};
use tower::Service;
use tower_lsp::jsonrpc::{Error, ErrorCode, Id, Request, Response};

/// A service that survives its inner one.
pub struct Guard<S> {
    inner: S,
}

impl<S> Guard<S> {
    /// Guards `inner`.
    pub fn new(inner: S) -> Guard<S> {
        Guard { inner }
    }
}

type Answer<E> = Pin<Box<dyn Future<Output = Result<Option<Response>, E>> + Send>>;

impl<S> Service<Request> for Guard<S>
where
    S: Service<Request, Response = Option<Response>>,
    S::Future: Send + 'static,
    S::Error: Send + 'static,
{
    type Response = Option<Response>;
    type Error = S::Error;
    type Future = Answer<S::Error>;

    fn poll_ready(&mut self, context: &mut Context<'_>) -> Poll<Result<(), Self::Error>> {
        self.inner.poll_ready(context)
    }

    fn call(&mut self, request: Request) -> Self::Future {
        let id = request.id().cloned();
        let Ok(future) = catch_unwind(AssertUnwindSafe(|| self.inner.call(request))) else {
            return Box::pin(std::future::ready(Ok(fault(id))));
        };
        let mut future = Box::pin(future);
        Box::pin(std::future::poll_fn(move |context| {
            catch_unwind(AssertUnwindSafe(|| future.as_mut().poll(context)))
                .unwrap_or_else(|_| Poll::Ready(Ok(fault(id.clone()))))
        }))
    }
}

/// A notification has no answer, not even this one.
fn fault(id: Option<Id>) -> Option<Response> {
    let message = "internal fault in the server; please report what you did".into();
    let error = Error { code: ErrorCode::InternalError, message, data: None };
    id.map(|id| Response::from_error(id, error))
}

/// What a panic said.
pub(crate) fn panic_words(panic: &(dyn Any + Send)) -> &str {
    let owned = panic.downcast_ref::<String>().map(String::as_str);
    owned.or_else(|| panic.downcast_ref::<&str>().copied()).unwrap_or("no words")
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::future::Ready;

    /// Panics at once or at the first poll, as the method says.
    struct Faulty;

    impl Service<Request> for Faulty {
        type Response = Option<Response>;
        type Error = ();
        type Future = futures::future::Either<
            Ready<Result<Option<Response>, ()>>,
            futures::future::Lazy<fn(&mut Context<'_>) -> Result<Option<Response>, ()>>,
        >;

        fn poll_ready(&mut self, _: &mut Context<'_>) -> Poll<Result<(), ()>> {
            Poll::Ready(Ok(()))
        }

        fn call(&mut self, request: Request) -> Self::Future {
            match request.method() {
                "call" => panic!("at the call"),
                "poll" => futures::future::Either::Right(futures::future::lazy(|_| panic!("at the poll"))),
                _ => futures::future::Either::Left(std::future::ready(Ok(None))),
            }
        }
    }

    #[track_caller]
    fn check(method: &'static str, id: Option<i64>, code: Option<i64>) {
        let mut guard = Guard::new(Faulty);
        let request = match id {
            Some(id) => Request::build(method).id(id).finish(),
            None => Request::build(method).finish(),
        };
        let runtime = tokio::runtime::Builder::new_current_thread().build().expect("a runtime");
        let response = runtime.block_on(guard.call(request)).expect("an answer");
        assert_eq!(response.and_then(|it| it.error().map(|error| error.code.code())), code);
    }

    #[test]
    fn a_panic_becomes_an_error_answer() {
        check("call", Some(1), Some(-32603));
        check("poll", Some(2), Some(-32603));
        check("fine", Some(3), None);
    }

    #[test]
    fn a_notification_that_panics_has_no_answer() {
        check("call", None, None);
        check("poll", None, None);
    }
}
