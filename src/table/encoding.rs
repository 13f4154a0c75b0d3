//! Bytes of a file to text. The page has the browser's decoder; this serves the headless program.

use encoding_rs::{UTF_8, UTF_16BE, UTF_16LE, WINDOWS_1252};

/// The text in `bytes`: UTF-8 or UTF-16 by their byte order mark, else UTF-8 where the bytes are valid UTF-8, else
/// Windows-1252. The mark is not part of the text.
pub fn to_text(bytes: &[u8]) -> String {
    for (mark, encoding) in
        [(b"\xef\xbb\xbf".as_slice(), UTF_8), (b"\xff\xfe", UTF_16LE), (b"\xfe\xff", UTF_16BE)]
    {
        if let Some(rest) = bytes.strip_prefix(mark) {
            return encoding.decode_without_bom_handling(rest).0.into_owned();
        }
    }
    match std::str::from_utf8(bytes) {
        Ok(text) => text.to_owned(),
        Err(_) => WINDOWS_1252.decode_without_bom_handling(bytes).0.into_owned(),
    }
}
