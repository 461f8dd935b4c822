//! The local server: this computer alone, nothing from outside, and a policy that keeps pages from asking for it.

use std::net::{Ipv4Addr, SocketAddr};
use std::process::ExitCode;

use anyhow::{Context as _, Result};
use axum::Router;
use axum::body::Body;
use axum::extract::{Request, State};
use axum::http::{HeaderName, HeaderValue, StatusCode, header};
use axum::middleware::{self, Next};
use axum::response::{IntoResponse as _, Response};
use tokio::net::TcpListener;
use tower_http::services::ServeDir;

use crate::browser_open;
use crate::cli;
use crate::root;
use crate::site::{self, Site};

/// The port unless another is asked for. What the browser keeps (autosaves, the offline copy) belongs to a port.
const PORT: u16 = 7040;
/// How many ports are tried.
const TRIES: u16 = 20;

/// Nothing but our own files; wasm may be compiled, nothing else may be made from text.
const POLICY: &str = "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self'; style-src 'self'; \
                      img-src 'self' blob: data:; font-src 'self'; connect-src 'self'; manifest-src 'self'; \
                      base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

/// Sent with every answer.
const HEADERS: [(HeaderName, &str); 8] = [
    (header::CONTENT_SECURITY_POLICY, POLICY),
    (header::X_CONTENT_TYPE_OPTIONS, "nosniff"),
    (header::X_FRAME_OPTIONS, "DENY"),
    (header::REFERRER_POLICY, "no-referrer"),
    (HeaderName::from_static("cross-origin-opener-policy"), "same-origin"),
    (HeaderName::from_static("cross-origin-resource-policy"), "same-origin"),
    (
        HeaderName::from_static("permissions-policy"),
        "camera=(), microphone=(), geolocation=(), payment=(), usb=(), fullscreen=(self)",
    ),
    // Always asked, answered by 304 when nothing changed: a new build is seen at once.
    (header::CACHE_CONTROL, "no-cache"),
];

/// Builds, serves and opens the browser, until Ctrl-C.
///
/// # Errors
/// When the app can't be built or the port can't be had.
pub(crate) fn command(options: &cli::Serve) -> Result<ExitCode> {
    let site = site::build(&root::find()?)?;
    let runtime = tokio::runtime::Builder::new_multi_thread()
        .worker_threads(2)
        .enable_io()
        .build()
        .context("the server's threads can't be started")?;
    runtime.block_on(async {
        let listener = listen(options.port).await?;
        let address = format!("http://{}/", listener.local_addr().context("no address")?);
        println!("Fallaround is at {address}");
        eprintln!("Ctrl-C ends it.");
        if !options.no_open {
            browser_open::open(&address);
        }
        axum::serve(listener, router(site)).await.context("the server failed")
    })?;
    Ok(ExitCode::SUCCESS)
}

/// Listens at the stated port, or at the first free one from the usual one on.
async fn listen(port: Option<u16>) -> Result<TcpListener> {
    let at = |port| TcpListener::bind(SocketAddr::from((Ipv4Addr::LOCALHOST, port)));
    if let Some(port) = port {
        return at(port).await.with_context(|| {
            format!("port {port} can't be had; leave out --port to take the next free one")
        });
    }
    for port in PORT..PORT + TRIES {
        if let Ok(listener) = at(port).await {
            if port != PORT {
                eprintln!(
                    "note: port {PORT} is taken, perhaps by another window of this program; what the browser kept there isn't seen here"
                );
            }
            return Ok(listener);
        }
    }
    at(0).await.context("no port can be had on this computer")
}

/// The site with its headers.
fn router(site: Site) -> Router {
    let files = ServeDir::new(&site.folder).precompressed_br().precompressed_gzip();
    Router::new().fallback_service(files).layer(middleware::from_fn_with_state(site, answer))
}

async fn answer(State(site): State<Site>, request: Request, next: Next) -> Response {
    // A page elsewhere whose name was made to point here must not read what is served here.
    let host = request.headers().get(header::HOST).and_then(|host| host.to_str().ok());
    if !host.is_some_and(is_loopback) {
        return with_headers(StatusCode::MISDIRECTED_REQUEST.into_response());
    }
    // The hash of the whole site stands for each of its files. Weak: the same for each encoding.
    let tag = format!("W/\"{}\"", site.version);
    let known = request.headers().get(header::IF_NONE_MATCH).and_then(|known| known.to_str().ok());
    let unchanged = known.is_some_and(|known| known.split(',').any(|one| one.trim() == tag));
    let mut response = next.run(request).await;
    if response.status() == StatusCode::OK {
        if unchanged {
            response = StatusCode::NOT_MODIFIED.into_response();
        }
        if let Ok(tag) = HeaderValue::from_str(&tag) {
            response.headers_mut().insert(header::ETAG, tag);
        }
        // One way to tell versions apart is enough, and a date can't.
        response.headers_mut().remove(header::LAST_MODIFIED);
    }
    with_headers(response)
}

fn with_headers(mut response: Response<Body>) -> Response<Body> {
    for (name, value) in HEADERS {
        response.headers_mut().insert(name, HeaderValue::from_static(value));
    }
    response
}

/// Whether a `Host` header names this computer.
fn is_loopback(host: &str) -> bool {
    let name = host.rsplit_once(':').map_or(host, |(name, port)| {
        if port.bytes().all(|byte| byte.is_ascii_digit()) { name } else { host }
    });
    matches!(name, "127.0.0.1" | "localhost" | "[::1]")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_this_computers_own_names_are_answered() {
        for host in ["127.0.0.1:7040", "localhost:7040", "localhost", "[::1]:7040", "[::1]"] {
            assert!(is_loopback(host), "{host} is refused");
        }
        for host in ["example.org", "127.0.0.1.example.org:7040", "localhost.example:80", ""] {
            assert!(!is_loopback(host), "{host} is answered");
        }
    }
}
