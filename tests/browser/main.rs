//! The pages in a real browser: nothing overflows, the keyboard reaches everything, script is not needed, the rows of the
//! ladder sit on its rungs, and pages print.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    reason = "a test fails by panicking"
)]

mod driver;

use driver::{Browser, Driver, Setup};
use serde_json::{Value, json};
use std::net::SocketAddr;
use std::sync::Arc;
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::core::documents::Pathway;
use wheelwort::evidence;
use wheelwort::people::pages::gate::{DemoDoor, Door};
use wheelwort::people::{NewPerson, Role};
use wheelwort::web::{Shell, patience::Patient, router, serve};
use wheelwort::{demo, library, pathways, people};

/// The service with its demonstration data, on a free port; the pathway that is looked at.
struct Site {
    address: SocketAddr,
    one: String,
    compare: String,
    person: String,
    _folder: tempfile::TempDir,
}

/// A short file as the evidence of that id; the same again is no second one.
async fn attach(app: &App, id: String) {
    let mut incoming = evidence::Incoming::begin(app).await.expect("begun");
    incoming.add(b"Made up for a test.").await.expect("taken");
    let naming = evidence::Naming {
        id: Some(id),
        file_name: "bill.txt".to_owned(),
        media_type: "text/plain".to_owned(),
        note: None,
    };
    let arrived = incoming.arrived().await.expect("arrived");
    evidence::attach(app, arrived, naming).await.expect("attached");
}

impl Site {
    async fn open() -> Site {
        let folder = tempfile::tempdir().expect("a folder");
        let app = App::open(
            &folder.path().join("wheelwort.db"),
            Clock::system(),
            library::book(),
        )
        .await
        .expect("opens");
        demo::load(&app).await.expect("the demonstration");
        let sample = include_bytes!("../../src/pathways/pages/samples/wheat.json");
        let wheat = Pathway::from_bytes(sample).expect("a pathway");
        for place in pathways::rows::Rows::of(&wheat).evidence {
            attach(&app, place.evidence).await;
        }
        let one = pathways::create(&app, wheat.clone(), None)
            .await
            .expect("stored")
            .id;
        let other = Pathway {
            name: "Second".to_owned(),
            ..wheat
        };
        let two = pathways::create(&app, other, None).await.expect("stored").id;
        let person = NewPerson {
            name: "Ines Marsh".to_owned(),
            sign_in_name: "ines".to_owned(),
            roles: [Role::Administrator, Role::Preparer, Role::Approver].into(),
            audit: None,
            password: Some("barley tram seven".to_owned()),
        };
        let person = people::add(&app, person).await.expect("added").person.id;
        // Whoever comes from this machine is signed in, as in the demonstration.
        let door = Door {
            demo: Some(Arc::new(DemoDoor::new(vec![(person, "the preparer")]))),
            ..Door::default()
        };
        let shell = Shell {
            door,
            ..Shell::default()
        };
        let listener = tokio::net::TcpListener::bind("127.0.0.1:0")
            .await
            .expect("a port");
        let address = listener.local_addr().expect("an address");
        let patient = Patient::new(listener, 64, std::time::Duration::from_secs(30));
        tokio::spawn(serve(patient, router(app, shell), std::future::pending()));
        Site {
            address,
            one: format!("/pathways/{one}"),
            compare: format!("/compare?ids={one},{two}"),
            person: format!("/people/{person}"),
            _folder: folder,
        }
    }

    async fn goto(&self, browser: &Browser<'_>, path: &str) {
        browser.goto(&format!("http://{}{path}", self.address)).await;
    }

    fn pages(&self) -> Vec<String> {
        vec![
            "/".to_owned(),
            "/pathways/new".to_owned(),
            self.one.clone(),
            format!("{}?carbon=in-line", self.one),
            format!("{}/workings?open=all", self.one),
            format!("{}/stages/grains", self.one),
            format!("{}/stages/haul-in", self.one),
            format!("{}/document", self.one),
            format!("{}/revisions/1", self.one),
            self.compare.clone(),
            "/factors?q=nitrate".to_owned(),
            "/factors/eu-2022-996/fert_n_an".to_owned(),
            "/materials/wheat".to_owned(),
            "/evidence".to_owned(),
            "/evidence/EV-2026-201".to_owned(),
            "/rule-sets".to_owned(),
            "/rule-sets/eu-2018-2001".to_owned(),
            format!("{}/defaults", self.one),
            "/audit-trail".to_owned(),
            "/calculators".to_owned(),
            "/calculators/alcoholometry?strength=96&strength_is=percent_vol&quantity=1000&quantity_is=litres".to_owned(),
            "/calculators/distillation?wash_strength_percent_vol=12&product_strength_percent_mass=94&coupling_factor=0.5"
                .to_owned(),
            "/calculators/dehydration?feed_strength_percent_mass=80&product_strength_percent_mass=1,5".to_owned(),
            "/calculators/fermentation?starch_kg=600&efficiency_percent=92&feedstock_kg=1000".to_owned(),
            format!("/calculators/blend?pathway={}", self.one.rsplit('/').next().unwrap_or_default()),
            "/api".to_owned(),
            "/sign-in".to_owned(),
            "/me".to_owned(),
            "/me/password".to_owned(),
            "/people".to_owned(),
            self.person.clone(),
            "/nowhere".to_owned(),
        ]
    }
}

const SETUP: Setup = Setup {
    width: 1280,
    dark: false,
    script: true,
};

/// What sticks out of the page sideways: nothing may, except inside boxes that scroll.
const OVERFLOW: &str = "
    const wide = document.documentElement.clientWidth;
    const out = [...document.querySelectorAll('body *')].filter(e => {
        const r = e.getBoundingClientRect();
        return r.width > 0 && r.right > wide + 1 && !e.closest('.box, .vh, svg, .skip') && getComputedStyle(e).position !== 'absolute';
    }).map(e => e.tagName + '.' + e.className + ' ' + Math.round(e.getBoundingClientRect().right));
    return { scroll: document.documentElement.scrollWidth - wide, out: out.slice(0, 5),
             ground: getComputedStyle(document.body).backgroundColor };";

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn nothing_overflows_in_light_and_dark() {
    let (site, driver) = (Site::open().await, Driver::start().await);
    let mut grounds = Vec::new();
    for dark in [false, true] {
        for width in [360, 768, 1280] {
            let browser = driver.open(Setup { width, dark, ..SETUP }).await;
            for path in site.pages() {
                site.goto(&browser, &path).await;
                let found = browser.ask(OVERFLOW).await;
                assert!(found["scroll"].as_i64() <= Some(0), "{path} at {width}: {found}");
                assert_eq!(found["out"], json!([]), "{path} at {width}");
                grounds.push((dark, found["ground"].clone()));
            }
            browser.close().await;
        }
    }
    let light = &grounds[0].1;
    assert!(
        grounds.iter().all(|(dark, ground)| *dark != (ground == light)),
        "dark is dark, light is light"
    );
}

/// What the rules of WCAG 2.2 at level AA find against a page: rule and the elements, each with its reason.
const RULES: &str = "
    const done = arguments[arguments.length - 1];
    axe.run(document, { runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'], resultTypes: ['violations'] })
        .then(found => done(found.violations.map(v => v.id + ': ' + v.nodes.slice(0, 3)
            .map(n => n.target.join(' ') + ' (' + n.failureSummary.replace(/\\s+/g, ' ') + ')').join('; '))),
            error => done([String(error)]));";

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn nothing_is_found_against_wcag() {
    let file = std::env::var("AXE_CORE").expect(
        "AXE_CORE names axe.min.js: bash tests/all browser installs it, or npm install axe-core anywhere",
    );
    let axe = std::fs::read_to_string(file).expect("axe-core");
    let (site, driver) = (Site::open().await, Driver::start().await);
    let mut found = Vec::new();
    for (dark, width) in [(false, 1280), (true, 1280), (false, 390)] {
        let browser = driver.open(Setup { width, dark, ..SETUP }).await;
        // First, that something would be found: a picture without words.
        site.goto(&browser, "/").await;
        browser.ask(&axe).await;
        browser
            .ask("document.querySelector('main').append(document.createElement('img'))")
            .await;
        let planted = browser.ask_later(RULES).await;
        assert!(planted.to_string().contains("image-alt"), "{planted}");
        for path in site.pages() {
            site.goto(&browser, &path).await;
            browser.ask(&axe).await;
            let broken = browser.ask_later(RULES).await;
            for one in broken.as_array().expect("a list") {
                found.push(format!("{path} at {width}, dark {dark}: {one}"));
            }
        }
        browser.close().await;
    }
    assert!(found.is_empty(), "{}", found.join("\n"));
}

/// The focus, by name of the field or text of the link or button.
const FOCUS: &str = "const e = document.activeElement; return [e.name || '', e.value || '', e.textContent.trim(), getComputedStyle(e).outlineStyle];";

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_figure_is_edited_and_saved_by_keyboard_alone() {
    let (site, driver) = (Site::open().await, Driver::start().await);
    let browser = driver.open(SETUP).await;
    site.goto(&browser, &site.one).await;
    let before = browser.text(".verdict").await;
    site.goto(&browser, &format!("{}/stages/grains", site.one)).await;
    tab_to(&browser, |focus| focus[0] == "/inputs/0/amount").await;
    // Select all, then type over it; Enter saves, whatever field it is pressed in.
    browser.ask("document.activeElement.select()").await;
    browser.keys("250\u{e007}").await;
    let notice = browser.text(".done").await;
    assert!(
        notice.contains("Saved as revision 2.") && notice.contains("higher than revision 1"),
        "{notice}"
    );
    site.goto(&browser, &site.one).await;
    assert_ne!(browser.text(".verdict").await, before);
    browser.close().await;
}

async fn tab_to(browser: &Browser<'_>, there: impl Fn(&Value) -> bool) {
    for _ in 0..120 {
        browser.keys("\u{e004}").await;
        let focus = browser.ask(FOCUS).await;
        assert_ne!(focus[3], "none", "the focus is seen: {focus}");
        if there(&focus) {
            return;
        }
    }
    panic!("the keyboard does not get there");
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_factor_is_looked_up_with_script_off() {
    let (site, driver) = (Site::open().await, Driver::start().await);
    let browser = driver
        .open(Setup {
            script: false,
            ..SETUP
        })
        .await;
    site.goto(&browser, &format!("{}/stages/grains", site.one)).await;
    browser.click("#f-inputs-1-factor").await;
    browser.ask("document.activeElement.select()").await;
    browser.keys("sweden").await;
    browser.click("button[value='search:/inputs/1/factor']").await;
    browser.click("#f-inputs-1-factor-found button").await;
    let chosen =
        "return document.querySelector('#f-inputs-1-factor').value.startsWith('eu-2022-996/elec_sweden')";
    browser.until(chosen).await;
    browser.click("button.go").await;
    let notice = browser.text(".done").await;
    assert!(
        notice.contains("lower than revision 1") && notice.contains("Drying the grains"),
        "{notice}"
    );
    browser.close().await;
}

/// For each row of the table its middle, and for each rung of the picture its middle.
const RUNGS: &str = "
    const middle = e => { const r = e.getBoundingClientRect(); return r.top + r.height / 2; };
    const rows = [...document.querySelectorAll('.ladder-pair tbody tr')];
    const svg = document.querySelector('.only-wide svg');
    const lines = svg.querySelector('path.rung').getAttribute('d').match(/M[\\d.]+ [\\d.]+/g).map(m => +m.split(' ')[1]);
    const box = svg.getBoundingClientRect(), scale = box.height / svg.viewBox.baseVal.height;
    const ys = [...new Set(lines)].sort((a, b) => a - b).map(y => box.top + y * scale);
    const mids = ys.slice(1).map((y, i) => (y + ys[i]) / 2);
    return { rows: rows.map(middle), rungs: mids };";

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn table_rows_sit_on_the_rungs() {
    let (site, driver) = (Site::open().await, Driver::start().await);
    for width in [1280, 1440, 1600] {
        let browser = driver.open(Setup { width, ..SETUP }).await;
        site.goto(&browser, &site.one).await;
        let found = browser.ask(RUNGS).await;
        let list = |name: &str| -> Vec<f64> {
            found[name]
                .as_array()
                .expect("a list")
                .iter()
                .filter_map(Value::as_f64)
                .collect()
        };
        let (rows, rungs) = (list("rows"), list("rungs"));
        assert_eq!(rows.len(), rungs.len(), "{found}");
        for (row, rung) in rows.iter().zip(&rungs) {
            assert!(
                (row - rung).abs() <= 1.0,
                "at {width}: row {row}, rung {rung}: {found}"
            );
        }
        browser.close().await;
    }
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn pages_print() {
    let (site, driver) = (Site::open().await, Driver::start().await);
    let browser = driver.open(SETUP).await;
    for path in [
        site.one.clone(),
        format!("{}/workings", site.one),
        site.compare.clone(),
    ] {
        site.goto(&browser, &path).await;
        let pdf = browser.print().await;
        // "%PDF-" in base64; an empty page is far smaller.
        assert!(
            pdf.starts_with("JVBERi0") && pdf.len() > 20_000,
            "{path}: {} characters",
            pdf.len()
        );
        browser
            .devtools("Emulation.setEmulatedMedia", json!({ "media": "print" }))
            .await;
        let shown = browser
            .ask("return getComputedStyle(document.querySelector('.mast nav')).display")
            .await;
        assert_eq!(shown, "none", "{path}: the navigation stays off paper");
        browser
            .devtools("Emulation.setEmulatedMedia", json!({ "media": "" }))
            .await;
    }
    browser.close().await;
}
