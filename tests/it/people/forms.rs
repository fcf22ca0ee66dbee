//! Forms carry a token of the session they were made for, and every template has it.

use super::House;
use std::path::Path;
use wheelwort::people::Role;

#[tokio::test]
async fn a_form_without_its_token_changes_nothing() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    house.adds("other", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let right = browser.form_token("/me").await;
    let foreign = house.signed_in("other").await.form_token("/me").await;
    let again = house.signed_in("marsh").await.form_token("/me").await;
    for wrong in ["", "0", foreign.as_str(), again.as_str(), &right[1..]] {
        let answer = browser.sends("/example/load", &[("form_token", wrong)]).await;
        assert_eq!(answer.status, 403, "{wrong}");
        assert!(answer.text().contains("does not belong to your present session"));
    }
    // Also without any field, as a form with files, and as something else.
    let empty = browser.ask("POST", "/example/load", &[], "").await;
    assert_eq!(empty.status, 403);
    let files = [("content-type", "multipart/form-data; boundary=x")];
    let body = "--x\r\nContent-Disposition: form-data; name=\"a\"\r\n\r\n1\r\n--x--\r\n";
    assert_eq!(
        browser.ask("POST", "/example/load", &files, body).await.status,
        403
    );
    let text = [("content-type", "text/plain")];
    let body = format!("form_token={right}");
    assert_eq!(
        browser.ask("POST", "/example/load", &text, body).await.status,
        403
    );
    let list = browser.get("/api/v1/pathways").await.json();
    assert_eq!(list["items"], serde_json::json!([]));
    let answer = browser.sends("/example/load", &[("form_token", &right)]).await;
    assert_eq!(answer.status, 303);
}

#[tokio::test]
async fn the_form_of_the_door_belongs_to_the_browser_that_asked() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let (mine, theirs) = (house.browser(), house.browser());
    let foreign = theirs.form_token("/sign-in").await;
    let fields = [
        ("form_token", foreign.as_str()),
        ("name", "marsh"),
        ("password", super::PASSWORD),
    ];
    assert_eq!(mine.sends("/sign-in", &fields).await.status, 403);
    assert_eq!(theirs.sends("/sign-in", &fields).await.status, 303);
    // A stranger without any right is told so first.
    assert_eq!(house.browser().sends("/example/load", &[]).await.status, 401);
}

#[tokio::test]
async fn a_write_with_a_cookie_shows_that_it_comes_from_here() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let token = browser.form_token("/me").await;
    let body = crate::support::documents::chain().to_string();
    let send = async |more: &[(&str, &str)]| {
        let mut headers = vec![
            ("content-type", "application/json"),
            ("host", "wheelwort.example"),
        ];
        headers.extend_from_slice(more);
        browser
            .ask("POST", "/api/v1/pathways", &headers, body.clone())
            .await
            .status
            .as_u16()
    };
    assert_eq!(send(&[]).await, 403);
    assert_eq!(send(&[("x-form-token", "0")]).await, 403);
    assert_eq!(send(&[("sec-fetch-site", "cross-site")]).await, 403);
    assert_eq!(send(&[("origin", "https://example.org")]).await, 403);
    assert_eq!(send(&[("sec-fetch-site", "none")]).await, 403);
    assert_eq!(send(&[("x-form-token", &token)]).await, 201);
    assert_eq!(send(&[("sec-fetch-site", "same-origin")]).await, 201);
    assert_eq!(send(&[("origin", "https://wheelwort.example")]).await, 201);
}

#[tokio::test]
async fn pages_show_no_slots_and_no_token_of_anybody_else() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer, Role::Administrator]).await;
    let browser = house.signed_in("marsh").await;
    for path in [
        "/",
        "/me",
        "/me/password",
        "/people",
        "/pathways/new",
        "/nowhere",
        "/factors",
    ] {
        let html = browser.get(path).await.text();
        assert!(!html.contains("slot-"), "{path}");
        assert!(
            html.contains("Name of marsh") && html.contains("href=\"/people\""),
            "{path}"
        );
        assert!(
            !html.contains("value=\"\" name=\"form_token\"")
                && !html.contains("name=\"form_token\" value=\"\"")
        );
    }
    let html = house.browser().get("/sign-in").await.text();
    assert!(!html.contains("slot-") && !html.contains("Sign out"));
}

/// Every form that posts begins with the token: a form with files must have it in its first part.
#[test]
fn every_posted_form_carries_the_token() {
    let mut forms = 0;
    let mut folders = vec![Path::new(env!("CARGO_MANIFEST_DIR")).join("templates")];
    while let Some(folder) = folders.pop() {
        for entry in std::fs::read_dir(folder)
            .expect("a folder")
            .map(|entry| entry.expect("an entry"))
        {
            let path = entry.path();
            if path.is_dir() {
                folders.push(path);
                continue;
            }
            if path.extension().is_none_or(|ending| ending != "html") {
                continue;
            }
            let text = std::fs::read_to_string(&path).expect("reads");
            for (at, _) in text.match_indices("<form") {
                let rest = &text[at..];
                // Where the tag ends, outside of what the template computes.
                let mut braces = 0_i32;
                let end = rest
                    .char_indices()
                    .find(|(_, c)| {
                        braces += i32::from(*c == '{') - i32::from(*c == '}');
                        *c == '>' && braces == 0
                    })
                    .map(|(end, _)| end)
                    .expect("a tag ends");
                if !rest[..end].to_ascii_lowercase().contains("method=\"post\"") {
                    continue;
                }
                forms += 1;
                let begins = rest[end + 1..].trim_start();
                assert!(
                    begins.starts_with("{% include \"parts/form_token.html\" %}"),
                    "{}: {}",
                    path.display(),
                    &rest[..=end]
                );
            }
        }
    }
    assert!(forms >= 20, "{forms}");
}
