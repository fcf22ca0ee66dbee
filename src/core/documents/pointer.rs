//! Steps of JSON pointers (RFC 6901, sections 3 and 4).

/// The name of a field as a step of a pointer: `~` and `/` escaped.
pub fn step(name: &str) -> String {
    name.replace('~', "~0").replace('/', "~1")
}

/// The name of the field that a step stands for.
pub fn name(step: &str) -> String {
    step.replace("~1", "/").replace("~0", "~")
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use serde_json::json;

    proptest! {
        #[test]
        fn a_step_leads_to_its_field_and_back(field in "[a-z~/01]{0,8}") {
            let mut document = json!({});
            document[&field] = json!(1);
            prop_assert_eq!(document.pointer(&format!("/{}", step(&field))), Some(&json!(1)));
            prop_assert_eq!(name(&step(&field)), field);
        }
    }
}
