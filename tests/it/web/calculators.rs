//! The calculators, by their addresses alone.

use super::{of_pages, page};
use crate::support::test_app::TestApp;

#[tokio::test]
async fn a_result_has_an_address_and_a_file() {
    let app = TestApp::new().await;
    for (path, words) in [
        (
            "/calculators/alcoholometry?strength=96&strength_is=percent_vol&quantity=1000&quantity_is=litres&temperature_c=20",
            "960.00</b> L of pure ethanol",
        ),
        (
            "/calculators/distillation?wash_strength_percent_vol=12&product_strength_percent_mass=94&coupling_factor=0.5&activity=nrtl",
            "Enthalpies, beside it",
        ),
        (
            "/calculators/dehydration?feed_strength_percent_mass=94&product_strength_percent_mass=99.8&feed=vapour",
            "kg of steam per litre",
        ),
    ] {
        let html = page(&app, path).await;
        assert!(html.contains(words), "{path}: {html}");
        assert!(html.contains("no basis for the design"), "{path} cautions");
        let file = app.get(&path.replacen('?', ".csv?", 1)).await;
        assert_eq!(file.status, 200, "{path}");
        let text = file.text();
        assert!(text.starts_with("part,name,unit,source,figure"), "{text}");
        assert!(text.lines().count() > 5, "{text}");
    }
}

#[tokio::test]
async fn a_refused_figure_is_kept_and_named_at_its_field() {
    let app = TestApp::new().await;
    let path = "/calculators/distillation?wash_strength_percent_vol=8,5&product_strength_percent_mass=97";
    let answer = app.get(path).await;
    assert_eq!(answer.status, 422);
    let html = answer.text();
    assert!(
        html.contains("value=\"8,5\"") && html.contains("value=\"97\""),
        "{html}"
    );
    assert!(html.contains("id=\"f-wash_strength_percent_vol-err\""), "{html}");
    assert!(html.contains("href=\"#f-wash_strength_percent_vol\""), "{html}");
    assert_eq!(app.get("/calculators/distillation.csv").await.status, 400);
}

#[tokio::test]
async fn a_blend_takes_a_stored_pathway() {
    let app = TestApp::new().await;
    let (one, _) = app.stores_chain().await;
    let one = of_pages(&one);
    let html = page(&app, &one).await;
    let id = one.rsplit('/').next().expect("an id");
    let path = format!("/calculators/blend?pathway={id}");
    assert!(html.contains(&format!("href=\"{path}\"")), "{html}");
    let html = page(&app, &path).await;
    assert!(
        html.contains("g CO<sub>2</sub>e/MJ of E10") && html.contains("net of &quot;"),
        "{html}"
    );
    let gone = app
        .get("/calculators/blend?pathway=0197d3c8-5b9e-7cc1-9f5e-2a3b4c5d6e7f")
        .await;
    assert_eq!(gone.status, 422);
    assert!(gone.text().contains("There is no such pathway."));
}
