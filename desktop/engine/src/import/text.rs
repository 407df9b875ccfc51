//! Bytes of a file to text, and how the encoding was found out.

use crate::site::FileEncoding;
use encoding_rs::{Encoding, UTF_8, UTF_16BE, UTF_16LE, WINDOWS_1252};
use std::borrow::Cow;

/// How the encoding of a file is known.
#[derive(Debug, Clone, Copy, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "snake_case")]
pub enum EncodingFrom {
    /// The layout of the site file says so.
    Layout,
    /// The file begins with a byte order mark.
    ByteOrderMark,
    /// Found out from the bytes.
    Bytes,
}

/// The text of a file.
#[derive(Debug)]
pub(super) struct Decoded<'b> {
    pub text: Cow<'b, str>,
    pub encoding: FileEncoding,
    pub from: EncodingFrom,
    /// Bytes that the encoding cannot have were replaced by a mark.
    pub damaged: bool,
}

/// How many bytes are looked at to tell UTF-16 by its zero bytes.
const LOOKED_AT: usize = 4096;

/// Decodes a file. A byte order mark is believed before the layout, since it is part of the file.
pub(super) fn decode(bytes: &[u8], declared: Option<FileEncoding>) -> Decoded<'_> {
    let (encoding, from, body) = match (byte_order_mark(bytes), declared) {
        (Some((encoding, length)), _) => (encoding, EncodingFrom::ByteOrderMark, &bytes[length..]),
        (None, Some(declared)) => (declared, EncodingFrom::Layout, bytes),
        (None, None) => (detected(bytes), EncodingFrom::Bytes, bytes),
    };
    let (text, damaged) = decoder(encoding).decode_without_bom_handling(body);
    Decoded { text, encoding, from, damaged }
}

fn byte_order_mark(bytes: &[u8]) -> Option<(FileEncoding, usize)> {
    let (encoding, length) = Encoding::for_bom(bytes)?;
    let encoding = if encoding == UTF_8 {
        FileEncoding::Utf8
    } else if encoding == UTF_16LE {
        FileEncoding::Utf16Le
    } else {
        FileEncoding::Utf16Be
    };
    Some((encoding, length))
}

/// Text of readings is mostly ASCII: in UTF-16 every second byte is then zero, which no single-byte
/// text has. What is not UTF-8 is taken as windows-1252, of which Latin-1 text is a part.
fn detected(bytes: &[u8]) -> FileEncoding {
    let head = &bytes[..bytes.len().min(LOOKED_AT)];
    let zeros =
        |parity: usize| head.iter().skip(parity).step_by(2).filter(|&&byte| byte == 0).count();
    let (even, odd) = (zeros(0), zeros(1));
    let many = head.len() / 8;
    if odd > many && odd > 4 * even {
        FileEncoding::Utf16Le
    } else if even > many && even > 4 * odd {
        FileEncoding::Utf16Be
    } else if std::str::from_utf8(bytes).is_ok() {
        FileEncoding::Utf8
    } else {
        FileEncoding::Windows1252
    }
}

fn decoder(encoding: FileEncoding) -> &'static Encoding {
    match encoding {
        FileEncoding::Utf8 => UTF_8,
        FileEncoding::Utf16Le => UTF_16LE,
        FileEncoding::Utf16Be => UTF_16BE,
        FileEncoding::Windows1252 => WINDOWS_1252,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn utf16(text: &str, little: bool) -> Vec<u8> {
        text.encode_utf16()
            .flat_map(|unit| if little { unit.to_le_bytes() } else { unit.to_be_bytes() })
            .collect()
    }

    #[test]
    fn each_encoding_is_told_from_its_bytes() {
        let text = "Time;Air [°C]\n02.03.2026 08:00;2,2\n";
        let latin: Vec<u8> = text.chars().map(|c| c as u32 as u8).collect();
        let cases: [(Vec<u8>, FileEncoding); 4] = [
            (text.as_bytes().to_vec(), FileEncoding::Utf8),
            (utf16(text, true), FileEncoding::Utf16Le),
            (utf16(text, false), FileEncoding::Utf16Be),
            (latin, FileEncoding::Windows1252),
        ];
        for (bytes, expected) in cases {
            let decoded = decode(&bytes, None);
            assert_eq!((decoded.encoding, decoded.text.as_ref()), (expected, text));
            assert_eq!((decoded.from, decoded.damaged), (EncodingFrom::Bytes, false));
        }
    }

    #[test]
    fn a_byte_order_mark_is_believed_before_the_layout() {
        let mut bytes = vec![0xff, 0xfe];
        bytes.extend(utf16("a,b", true));
        let decoded = decode(&bytes, Some(FileEncoding::Utf8));
        assert_eq!((decoded.text.as_ref(), decoded.from), ("a,b", EncodingFrom::ByteOrderMark));
    }

    #[test]
    fn bytes_that_the_declared_encoding_cannot_have_are_said() {
        let decoded = decode(b"a,\xb0\n", Some(FileEncoding::Utf8));
        assert!(decoded.damaged);
        assert_eq!(decoded.text, "a,\u{fffd}\n");
    }
}
