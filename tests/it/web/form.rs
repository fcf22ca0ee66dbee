//! Reads a form of a page as a browser without script would, so that tests can fill it in and send it.

/// A form: where it goes and its fields in order.
#[derive(Clone, Debug)]
pub struct Form {
    pub action: String,
    pub fields: Vec<(String, String)>,
}

impl Form {
    /// The first posted form of a page whose action ends in `end`.
    pub fn find(html: &str, end: &str) -> Form {
        html.split("<form")
            .skip(1)
            .filter(|rest| tag(rest).contains("method=\"post\""))
            .map(|rest| Form {
                action: attribute(&tag(rest), "action").expect("an action"),
                fields: fields(rest.split("</form>").next().unwrap_or_default()),
            })
            .find(|form| form.action.ends_with(end))
            .unwrap_or_else(|| panic!("no form to {end} in {html}"))
    }

    /// Types into a field, or presses a button (which is no field of the form yet).
    pub fn set(&mut self, name: &str, text: &str) -> &mut Form {
        match self.fields.iter_mut().find(|(known, _)| known == name) {
            Some((_, value)) => *value = text.to_owned(),
            None => self.fields.insert(0, (name.to_owned(), text.to_owned())),
        }
        self
    }

    pub fn get(&self, name: &str) -> &str {
        self.fields
            .iter()
            .find(|(known, _)| known == name)
            .map_or("(no such field)", |(_, value)| value)
    }

    /// As `application/x-www-form-urlencoded`.
    pub fn body(&self) -> String {
        let pairs = self
            .fields
            .iter()
            .map(|(name, value)| format!("{}={}", encoded(name), encoded(value)));
        pairs.collect::<Vec<_>>().join("&")
    }
}

/// Percent-encoded for a form.
pub fn encoded(text: &str) -> String {
    text.bytes()
        .map(|byte| match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'.' | b'_' => char::from(byte).to_string(),
            _ => format!("%{byte:02X}"),
        })
        .collect()
}

fn tag(rest: &str) -> String {
    rest.split('>').next().unwrap_or_default().to_owned()
}

fn attribute(tag: &str, name: &str) -> Option<String> {
    let rest = tag.split(&format!(" {name}=\"")).nth(1)?;
    Some(unescaped(rest.split('"').next()?))
}

/// Text of a page as a person reads it.
pub fn unescaped(text: &str) -> String {
    let named = [
        ("&lt;", "<"),
        ("&gt;", ">"),
        ("&quot;", "\""),
        ("&#34;", "\""),
        ("&#39;", "'"),
        ("&#60;", "<"),
        ("&#62;", ">"),
        ("&#38;", "&"),
        ("&amp;", "&"),
    ];
    named.iter().fold(text.to_owned(), |text, (escaped, plain)| {
        text.replace(escaped, plain)
    })
}

fn fields(html: &str) -> Vec<(String, String)> {
    let mut out = Vec::new();
    for rest in html.split('<').skip(1) {
        let this = tag(rest);
        let (Some(name), kind) = (attribute(&this, "name"), attribute(&this, "type")) else {
            continue;
        };
        let after = rest.split_once('>').map_or("", |(_, after)| after);
        if this.starts_with("input") && !matches!(kind.as_deref(), Some("checkbox" | "radio")) {
            out.push((name, attribute(&this, "value").unwrap_or_default()));
        } else if this.starts_with("textarea") {
            out.push((name, unescaped(after)));
        } else if this.starts_with("select") {
            let from = html.split(&format!("<{this}>")).nth(1).unwrap_or_default();
            let options = from.split("</select>").next().unwrap_or_default();
            let chosen = options.split("<option").skip(1).map(tag);
            let chosen: Vec<String> = chosen.collect();
            let one = chosen
                .iter()
                .find(|option| option.ends_with(" selected"))
                .or_else(|| chosen.first());
            out.push((
                name,
                one.and_then(|option| attribute(option, "value"))
                    .unwrap_or_default(),
            ));
        }
    }
    out
}
