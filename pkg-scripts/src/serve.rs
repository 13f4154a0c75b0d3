//! A server for one file, for this machine only: `cargo pack serve`.
//!
//! It answers GET and HEAD for the page and nothing else. The page carries its own policy; the headers add what a
//! page cannot say about itself.

use crate::page::{self, Finish};
use crate::project::Project;
use anyhow::{Context, Result};
use std::fs;
use std::io::{BufRead, BufReader, Read, Write};
use std::net::{Ipv4Addr, TcpListener, TcpStream};
use std::path::Path;
use std::thread;
use std::time::Duration;

const USUAL_PORT: u16 = 8765;
/// A request's first line and headers are far shorter than this.
const LONGEST_REQUEST: u64 = 16_384;

/// Builds what is missing, prints the address and serves until it is stopped.
pub fn serve(project: &Project, port: Option<u16>) -> Result<bool> {
    let built = page::build(project, Finish::Release)?;
    let listener = listen(port)?;
    let example = built.examples.first().map(|name| format!("#example={name}")).unwrap_or_default();
    println!("\nLevelwise is at  http://{}/{example}\nStop it with Ctrl+C.", listener.local_addr()?);
    for stream in listener.incoming().flatten() {
        let path = project.html();
        // A browser that goes away in the middle of an answer is no news.
        thread::spawn(move || answer(stream, &path).ok());
    }
    Ok(true)
}

/// The port asked for, or else the usual one, or else any that is free.
fn listen(port: Option<u16>) -> Result<TcpListener> {
    let open = |port: u16| TcpListener::bind((Ipv4Addr::LOCALHOST, port));
    match port {
        Some(port) => {
            open(port).with_context(|| format!("port {port} cannot be used; try another with --port"))
        }
        None => open(USUAL_PORT).or_else(|_| open(0)).context("no port can be used"),
    }
}

fn answer(mut stream: TcpStream, html: &Path) -> Result<()> {
    stream.set_read_timeout(Some(Duration::from_secs(10)))?;
    let mut lines = BufReader::new(stream.try_clone()?.take(LONGEST_REQUEST)).lines();
    let request = lines.next().context("an empty request")??;
    for line in lines {
        if line?.is_empty() {
            break;
        }
    }
    let mut words = request.split(' ');
    let (method, target) = (words.next().unwrap_or(""), words.next().unwrap_or(""));
    let path = target.split('?').next().unwrap_or("");
    let (status, kind, body) = match (method, path) {
        ("GET" | "HEAD", "/" | "/levelwise.html") => ("200 OK", "text/html; charset=utf-8", fs::read(html)?),
        ("GET" | "HEAD", _) => {
            ("404 Not Found", "text/plain; charset=utf-8", b"Only the page is here.\n".to_vec())
        }
        _ => ("405 Method Not Allowed", "text/plain; charset=utf-8", b"Only GET and HEAD.\n".to_vec()),
    };
    stream.write_all(headers(status, kind, body.len()).as_bytes())?;
    if method != "HEAD" {
        stream.write_all(&body)?;
    }
    stream.flush()?;
    Ok(())
}

fn headers(status: &str, kind: &str, length: usize) -> String {
    format!(
        "HTTP/1.1 {status}\r\n\
         Content-Type: {kind}\r\n\
         Content-Length: {length}\r\n\
         Content-Security-Policy: frame-ancestors 'none'\r\n\
         Cross-Origin-Opener-Policy: same-origin\r\n\
         Referrer-Policy: no-referrer\r\n\
         X-Content-Type-Options: nosniff\r\n\
         Cache-Control: no-store\r\n\
         Connection: close\r\n\r\n"
    )
}

/// The page over loopback, for the tests of this file.
#[cfg(test)]
fn ask(request: &str, html: std::path::PathBuf) -> String {
    let listener = listen(Some(0)).unwrap();
    let address = listener.local_addr().unwrap();
    let server = thread::spawn(move || answer(listener.accept().unwrap().0, &html).unwrap());
    let mut stream = TcpStream::connect(address).unwrap();
    stream.write_all(request.as_bytes()).unwrap();
    let mut reply = String::new();
    stream.read_to_string(&mut reply).unwrap();
    server.join().unwrap();
    reply
}

#[cfg(test)]
mod tests {
    use super::ask;
    use std::path::PathBuf;

    fn this_file() -> PathBuf {
        PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("src/serve.rs")
    }

    #[test]
    fn the_page_is_served_with_the_header_that_forbids_frames() {
        let reply = ask("GET /levelwise.html?x=1 HTTP/1.1\r\nHost: here\r\n\r\n", this_file());
        assert!(reply.starts_with("HTTP/1.1 200 OK\r\n"));
        assert!(reply.contains("Content-Security-Policy: frame-ancestors 'none'\r\n"));
        assert!(reply.contains("A server for one file"));
    }

    #[test]
    fn nothing_but_the_page_is_served() {
        assert!(ask("GET /../Cargo.toml HTTP/1.1\r\n\r\n", this_file()).starts_with("HTTP/1.1 404"));
        assert!(ask("POST / HTTP/1.1\r\n\r\n", this_file()).starts_with("HTTP/1.1 405"));
        let reply = ask("HEAD / HTTP/1.1\r\n\r\n", this_file());
        assert!(reply.starts_with("HTTP/1.1 200") && !reply.contains("A server for one file"));
    }
}
