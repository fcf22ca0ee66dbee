//! Canonical bytes (RFC 8785) and their SHA-256: what is stored, hashed and compared. Written here because each saved
//! pathway and each assessment goes through it: the ready library takes six to ten times as long. A property test holds the
//! two against each other.

use serde::Serialize;
use serde::ser::Error as _;
use serde_json::{Error, Value};
use sha2::{Digest, Sha256};

/// The canonical JSON bytes of a document (RFC 8785): keys in the order of their UTF-16 units, numbers as ECMAScript
/// prints doubles, no white space.
///
/// # Errors
/// When a figure is not finite: that is a defect upstream, never user input.
pub fn bytes<T: Serialize>(document: &T) -> Result<Vec<u8>, Error> {
    let mut out = Vec::with_capacity(4096);
    write(&serde_json::to_value(document)?, &mut out)?;
    Ok(out)
}

fn write(value: &Value, out: &mut Vec<u8>) -> Result<(), Error> {
    match value {
        Value::Null => out.extend_from_slice(b"null"),
        Value::Bool(flag) => out.extend_from_slice(if *flag { b"true" } else { b"false" }),
        Value::Number(number) => {
            let double = number.as_f64().filter(|double| double.is_finite());
            let double = double.ok_or_else(|| Error::custom("a figure is not a finite double"))?;
            out.extend_from_slice(ryu_js::Buffer::new().format_finite(double).as_bytes());
        }
        // serde_json escapes what RFC 8785 escapes, and in the same way.
        Value::String(text) => serde_json::to_writer(out, text)?,
        Value::Array(items) => {
            out.push(b'[');
            for (index, item) in items.iter().enumerate() {
                if index > 0 {
                    out.push(b',');
                }
                write(item, out)?;
            }
            out.push(b']');
        }
        Value::Object(map) => {
            let mut entries: Vec<(&String, &Value)> = map.iter().collect();
            entries.sort_by(|(a, _), (b, _)| match a.is_ascii() && b.is_ascii() {
                true => a.cmp(b),
                false => a.encode_utf16().cmp(b.encode_utf16()),
            });
            out.push(b'{');
            for (index, (key, item)) in entries.into_iter().enumerate() {
                if index > 0 {
                    out.push(b',');
                }
                serde_json::to_writer(&mut *out, key)?;
                out.push(b':');
                write(item, out)?;
            }
            out.push(b'}');
        }
    }
    Ok(())
}

/// `sha256:` and the hash of the bytes in hexadecimal.
pub fn hash(bytes: &[u8]) -> String {
    hash_of(Sha256::new_with_prefix(bytes))
}

/// The same of bytes that were added piece by piece.
pub fn hash_of(sum: Sha256) -> String {
    let mut text = String::with_capacity(71);
    text.push_str("sha256:");
    write_hex(&mut text, &sum.finalize());
    text
}

/// Bytes in hexadecimal, small letters.
pub fn hex(bytes: &[u8]) -> String {
    let mut text = String::with_capacity(2 * bytes.len());
    write_hex(&mut text, bytes);
    text
}

fn write_hex(text: &mut String, bytes: &[u8]) {
    const DIGITS: [char; 16] = [
        '0', '1', '2', '3', '4', '5', '6', '7', '8', '9', 'a', 'b', 'c', 'd', 'e', 'f',
    ];
    for byte in bytes {
        text.push(DIGITS[usize::from(byte >> 4)]);
        text.push(DIGITS[usize::from(byte & 15)]);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use serde_json::json;

    #[test]
    fn agrees_with_the_examples_of_rfc_8785() {
        // RFC 8785 section 3.2.2 (numbers, strings, literals) and 3.2.3 (order of keys).
        let numbers = json!({ "numbers": [333_333_333.333_333_29, 1e30, 4.50, 2e-3, 1e-27], "string": "\u{20ac}$\u{f}\nA'B\"\\\\\"/", "literals": [null, true, false] });
        let expected = r#"{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\u000f\nA'B\"\\\\\"/"}"#;
        assert_eq!(
            String::from_utf8(bytes(&numbers).expect("bytes")).expect("text"),
            expected
        );
        let keys = json!({ "\u{20ac}": "Euro Sign", "\r": "Carriage Return", "\u{fb33}": "Hebrew Letter Dalet With Dagesh", "1": "One", "\u{1f600}": "Emoji: Grinning Face", "\u{80}": "Control", "\u{f6}": "Latin Small Letter O With Diaeresis" });
        let text = String::from_utf8(bytes(&keys).expect("bytes")).expect("text");
        let order = [
            "Carriage Return",
            "One",
            "Control",
            "Latin Small",
            "Euro Sign",
            "Emoji",
            "Hebrew",
        ];
        let places: Vec<usize> = order.iter().map(|word| text.find(word).expect("there")).collect();
        assert!(places.is_sorted(), "{text}");
    }

    fn any_json() -> impl Strategy<Value = Value> {
        let leaf = prop_oneof![
            Just(Value::Null),
            any::<bool>().prop_map(Value::Bool),
            any::<f64>()
                .prop_filter("finite", |x| x.is_finite())
                .prop_map(|x| json!(x)),
            any::<i32>().prop_map(|x| json!(x)),
            ".{0,12}".prop_map(Value::String),
        ];
        leaf.prop_recursive(4, 48, 6, |inner| {
            prop_oneof![
                prop::collection::vec(inner.clone(), 0..6).prop_map(Value::Array),
                prop::collection::btree_map(".{0,6}", inner, 0..6)
                    .prop_map(|map| Value::Object(map.into_iter().collect())),
            ]
        })
    }

    proptest! {
        #[test]
        fn agrees_with_the_ready_library(value in any_json()) {
            prop_assert_eq!(bytes(&value).unwrap(), serde_json_canonicalizer::to_vec(&value).unwrap());
        }
    }
}
