//! Signing in and out.

use super::{House, PASSWORD};
use std::time::Duration;
use wheelwort::people::{self, Role};

#[tokio::test]
async fn a_stranger_is_sent_to_the_door_and_on_from_there() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.browser();
    let answer = browser.get("/compare?ids=a,b").await;
    assert_eq!(answer.status, 303);
    assert_eq!(
        answer.header("location"),
        "/sign-in?next=%2Fcompare%3Fids%3Da%2Cb"
    );
    let page = browser.get(answer.header("location")).await.text();
    assert!(
        page.contains("name=\"next\" value=\"/compare?ids=a,b\""),
        "{page}"
    );
    let fields = [
        ("name", "Marsh "),
        ("password", PASSWORD),
        ("next", "/compare?ids=a,b"),
    ];
    let answer = browser.fills("/sign-in", "/sign-in", &fields).await;
    assert_eq!(
        (answer.status.as_u16(), answer.header("location")),
        (303, "/compare?ids=a,b")
    );
    let home = browser.get("/").await;
    assert_eq!(home.status, 200);
    assert!(home.text().contains("Name of marsh") && home.text().contains("Sign out"));
    assert_eq!(
        browser.get("/api/v1/me").await.json()["rights"],
        serde_json::json!(["read", "write"])
    );
    // Over the API nobody is sent anywhere.
    let refused = house.browser().get("/api/v1/pathways").await;
    refused.refused(401);
    assert!(refused.header("www-authenticate").starts_with("Bearer"));
}

#[tokio::test]
async fn nobody_is_sent_to_another_site() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    for elsewhere in [
        "//example.org",
        "https://example.org",
        "/\\example.org",
        "/sign-out",
    ] {
        let browser = house.browser();
        let fields = [("name", "marsh"), ("password", PASSWORD), ("next", elsewhere)];
        let answer = browser.fills("/sign-in", "/sign-in", &fields).await;
        assert_eq!(
            (answer.status.as_u16(), answer.header("location")),
            (303, "/"),
            "{elsewhere}"
        );
    }
}

#[tokio::test]
async fn a_wrong_password_and_an_unknown_name_get_the_same_answer() {
    let house = House::new().await;
    let marsh = house.adds("marsh", &[Role::Preparer]).await;
    house.adds("boss", &[Role::Administrator]).await;
    let plain = |text: String| {
        let (head, rest) = text.split_once("form_token\" value=\"").expect("a form");
        format!("{head}{}", &rest[64..])
            .replace("marsh", "N")
            .replace("nobody", "N")
    };
    let wrong = house.browser().signs_in("marsh", "not the password").await;
    let unknown = house.browser().signs_in("nobody", "not the password").await;
    assert_eq!((wrong.status.as_u16(), unknown.status.as_u16()), (422, 422));
    assert!(wrong.text().contains("Name and password do not fit."));
    let (wrong, unknown) = (plain(wrong.text()), plain(unknown.text()));
    assert_eq!(wrong, unknown);
    assert!(!wrong.contains("not the password"), "a password is never shown");
    people::disable(&house.app, marsh, true).await.expect("disabled");
    let disabled = house.browser().signs_in("marsh", PASSWORD).await;
    assert_eq!(plain(disabled.text()), wrong);
}

#[tokio::test]
async fn refusals_are_counted_without_what_was_typed() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    for _ in 0..3 {
        house.browser().signs_in("marsh", "typed secret one").await;
        house.browser().signs_in("typed secret two", "x").await;
    }
    for _ in 0..100 {
        if house
            .deeds()
            .await
            .iter()
            .filter(|(did, _)| did == "refused sign-in")
            .count()
            == 2
        {
            break;
        }
        tokio::time::sleep(Duration::from_millis(20)).await;
    }
    let deeds = house.deeds().await;
    let refused: Vec<_> = deeds.iter().filter(|(did, _)| did == "refused sign-in").collect();
    assert_eq!(refused.len(), 2, "a line a minute for each: {deeds:?}");
    assert!(!format!("{deeds:?}").contains("secret"), "{deeds:?}");
}

#[tokio::test]
async fn too_many_tries_wait() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.browser();
    for turn in 0..8 {
        assert_eq!(
            browser.signs_in("marsh", "wrong wrong wrong").await.status,
            422,
            "{turn}"
        );
    }
    let answer = browser.signs_in("MARSH", PASSWORD).await;
    assert_eq!(answer.status, 429);
    assert!(
        answer.text().contains("tried too often. Wait "),
        "the page says so in words"
    );
    let wait: u64 = answer.header("retry-after").parse().expect("seconds");
    assert!((1..=30).contains(&wait));
    house.app.clock.advance(Duration::from_secs(wait));
    assert_eq!(browser.signs_in("marsh", PASSWORD).await.status, 303);
}

#[tokio::test]
async fn a_sign_in_makes_a_new_session_and_ends_the_old() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let first = browser.cookie("wheelwort").expect("a session");
    assert_eq!(
        browser.cookie("wheelwort_visit"),
        None,
        "the cookie of strangers goes"
    );
    assert_eq!(browser.signs_in("marsh", PASSWORD).await.status, 303);
    assert_ne!(browser.cookie("wheelwort").expect("a session"), first);
    let thief = house.browser();
    thief.keeps("wheelwort", &first);
    assert_eq!(thief.get("/api/v1/me").await.status, 401);
    // A session that somebody planted is not taken over.
    let planted = house.browser();
    let chosen = "A".repeat(43);
    planted.keeps("wheelwort", &chosen);
    assert_eq!(planted.signs_in("marsh", PASSWORD).await.status, 303);
    assert_ne!(planted.cookie("wheelwort").expect("a session"), chosen);
    planted.keeps("wheelwort", &chosen);
    assert_eq!(planted.get("/api/v1/me").await.status, 401);
}

#[tokio::test]
async fn a_session_ends_when_it_is_not_used_and_at_the_latest_after_a_week() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let (idle, busy) = (house.signed_in("marsh").await, house.signed_in("marsh").await);
    let mut hours = 0;
    while busy.get("/api/v1/me").await.status == 200 {
        // That it was used is written in its own time.
        tokio::time::sleep(Duration::from_millis(30)).await;
        house.app.clock.advance(Duration::from_secs(6 * 3_600));
        hours += 6;
        assert!(hours <= 7 * 24, "longer than a week");
        if hours == 12 {
            assert_eq!(idle.get("/api/v1/me").await.status, 401);
        }
    }
    assert_eq!(hours, 7 * 24);
}

#[tokio::test]
async fn signing_out_is_at_once_here_or_everywhere() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    house.adds("other", &[Role::Preparer]).await;
    let one = house.signed_in("marsh").await;
    let two = house.signed_in("marsh").await;
    let three = house.signed_in("marsh").await;
    let other = house.signed_in("other").await;
    for browser in [&one, &two, &three, &other] {
        assert_eq!(browser.get("/me").await.status, 200);
    }
    let secret = one.cookie("wheelwort").expect("a session");
    let answer = one.fills("/me", "/sign-out", &[]).await;
    assert_eq!(
        (answer.status.as_u16(), answer.header("location")),
        (303, "/sign-in")
    );
    assert_eq!(one.cookie("wheelwort"), None);
    one.keeps("wheelwort", &secret);
    assert_eq!(one.get("/api/v1/me").await.status, 401);
    assert_eq!(two.get("/api/v1/me").await.status, 200);
    assert_eq!(two.fills("/me", "/me/sign-out-everywhere", &[]).await.status, 303);
    assert_eq!(three.get("/api/v1/me").await.status, 401);
    assert_eq!(other.get("/api/v1/me").await.status, 200, "other people stay");
}

#[tokio::test]
async fn a_changed_password_ends_the_other_sessions() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let (here, there) = (house.signed_in("marsh").await, house.signed_in("marsh").await);
    let new = "another barley tram";
    let send = async |old: &str, new: &str, again: &str| {
        let fields = [("old", old), ("new", new), ("again", again)];
        here.fills("/me/password", "/me/password", &fields).await
    };
    for (old, new, again, words) in [
        ("wrong wrong wrong", new, new, "not your present password"),
        (PASSWORD, new, "another", "differ"),
        (PASSWORD, "short", "short", "12 are the least"),
        (PASSWORD, PASSWORD, PASSWORD, "the password you have"),
    ] {
        let answer = send(old, new, again).await;
        assert_eq!(answer.status, 422, "{words}");
        assert!(answer.text().contains(words), "{words}");
    }
    assert_eq!(there.get("/api/v1/me").await.status, 200);
    assert_eq!(send(PASSWORD, new, new).await.status, 303);
    assert_eq!(here.get("/api/v1/me").await.status, 200);
    assert_eq!(there.get("/api/v1/me").await.status, 401);
    assert_eq!(house.browser().signs_in("marsh", PASSWORD).await.status, 422);
    assert_eq!(house.browser().signs_in("marsh", new).await.status, 303);
}

#[tokio::test]
async fn what_lies_in_the_file_lets_nobody_in() {
    let house = House::new().await;
    house.adds("marsh", &[Role::Preparer]).await;
    let browser = house.signed_in("marsh").await;
    let made = browser
        .fills(
            "/me",
            "/me/tokens",
            &[("label", "x"), ("days", "1"), ("read", "on")],
        )
        .await
        .text();
    let token = made
        .split("<code>wwt_")
        .nth(1)
        .expect("shown")
        .split('<')
        .next()
        .expect("a token");
    let session = browser.cookie("wheelwort").expect("a session");
    house.app.close().await;
    let folder = house._folder.path();
    for entry in std::fs::read_dir(folder)
        .expect("a folder")
        .map(|entry| entry.expect("a file"))
    {
        let bytes = std::fs::read(entry.path()).expect("reads");
        for secret in [PASSWORD, token, session.as_str()] {
            let found = bytes
                .windows(secret.len())
                .any(|window| window == secret.as_bytes());
            assert!(!found, "{:?} holds a secret", entry.path());
        }
    }
}

#[tokio::test]
async fn the_door_says_how_the_first_account_is_made() {
    let house = House::new().await;
    let page = house.browser().get("/sign-in").await.text();
    assert!(page.contains("wheelwort people add --data"), "{page}");
    assert!(
        people::first_administrator(&house.app, "marsh", PASSWORD.into())
            .await
            .expect("made")
    );
    assert!(
        !people::first_administrator(&house.app, "second", PASSWORD.into())
            .await
            .expect("asks")
    );
    let page = house.browser().get("/sign-in").await.text();
    assert!(!page.contains("people add"));
    house.signed_in("marsh").await;
}
