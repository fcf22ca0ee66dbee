//! A browser driven over WebDriver (W3C): just the commands these tests need, spoken with the HTTP client at hand.

use serde_json::{Value, json};
use std::process::{Child, Command, Stdio};
use std::time::Duration;

/// The key of element references (W3C WebDriver, section "Elements").
const ELEMENT: &str = "element-6066-11e4-a52e-4f735466cecf";

/// A running chromedriver; it ends when this is dropped.
pub struct Driver {
    process: Child,
    base: String,
    http: reqwest::Client,
}

impl Drop for Driver {
    fn drop(&mut self) {
        let _ = self.process.kill();
        let _ = self.process.wait();
    }
}

/// A session: one browser window.
pub struct Browser<'d> {
    driver: &'d Driver,
    session: String,
    _profile: tempfile::TempDir,
}

/// How a browser is set up.
#[derive(Clone, Copy)]
pub struct Setup {
    pub width: u32,
    pub dark: bool,
    pub script: bool,
}

impl Driver {
    /// Starts chromedriver on a free port.
    pub async fn start() -> Driver {
        let port = std::net::TcpListener::bind("127.0.0.1:0")
            .and_then(|listener| listener.local_addr())
            .expect("a free port")
            .port();
        let process = Command::new("chromedriver")
            .arg(format!("--port={port}"))
            .stdout(Stdio::null())
            .stderr(Stdio::null())
            .spawn()
            .expect("chromedriver: install the Debian packages chromium and chromium-driver");
        let driver = Driver {
            process,
            base: format!("http://127.0.0.1:{port}"),
            http: {
                // The client wants to know who would encrypt, also where nothing is encrypted.
                let _ = rustls::crypto::ring::default_provider().install_default();
                reqwest::Client::new()
            },
        };
        for _ in 0..200 {
            if driver
                .http
                .get(format!("{}/status", driver.base))
                .send()
                .await
                .is_ok()
            {
                return driver;
            }
            tokio::time::sleep(Duration::from_millis(50)).await;
        }
        panic!("chromedriver does not answer");
    }

    async fn send(&self, path: &str, body: Value) -> Value {
        let answer = self
            .http
            .post(format!("{}{path}", self.base))
            .json(&body)
            .send()
            .await;
        let answer: Value = answer
            .expect("chromedriver answers")
            .json()
            .await
            .expect("in JSON");
        let value = answer["value"].clone();
        assert!(value.get("error").is_none(), "{path}: {value}");
        value
    }

    /// Opens a browser.
    pub async fn open(&self, setup: Setup) -> Browser<'_> {
        let profile = tempfile::tempdir().expect("a folder");
        let mut args = vec![
            "--headless=new".to_owned(),
            "--no-sandbox".to_owned(),
            "--disable-gpu".to_owned(),
            "--disable-quic".to_owned(),
            "--no-first-run".to_owned(),
            "--disable-background-networking".to_owned(),
            "--disable-component-update".to_owned(),
            "--disable-sync".to_owned(),
            "--disable-dev-shm-usage".to_owned(),
            format!("--user-data-dir={}", profile.path().display()),
            format!("--window-size={},1000", setup.width),
        ];
        if setup.dark {
            args.push("--blink-settings=preferredColorScheme=0".to_owned());
        }
        let mut options = json!({ "args": args });
        if !setup.script {
            options["prefs"] = json!({ "profile.managed_default_content_settings.javascript": 2 });
        }
        let wanted = json!({ "capabilities": { "alwaysMatch": { "browserName": "chrome", "goog:chromeOptions": options } } });
        let made = self.send("/session", wanted).await;
        let browser = Browser {
            driver: self,
            session: made["sessionId"].as_str().expect("a session").to_owned(),
            _profile: profile,
        };
        // A headless window is never narrower than 500 px: the page is told its width as a phone would be.
        let metrics =
            json!({ "width": setup.width, "height": 1000, "deviceScaleFactor": 1, "mobile": false });
        browser
            .devtools("Emulation.setDeviceMetricsOverride", metrics)
            .await;
        browser
    }
}

impl Browser<'_> {
    async fn send(&self, command: &str, body: Value) -> Value {
        self.driver
            .send(&format!("/session/{}/{command}", self.session), body)
            .await
    }

    /// A command of the developer tools.
    pub async fn devtools(&self, name: &str, parameters: Value) -> Value {
        self.send("goog/cdp/execute", json!({ "cmd": name, "params": parameters }))
            .await
    }

    /// Opens an address.
    pub async fn goto(&self, address: &str) {
        self.send("url", json!({ "url": address })).await;
    }

    /// Asks the page with a script of the test (works where the page's own scripts are off).
    pub async fn ask(&self, script: &str) -> Value {
        self.send("execute/sync", json!({ "script": script, "args": [] }))
            .await
    }

    /// Asks with a script that answers later: it calls its last argument.
    pub async fn ask_later(&self, script: &str) -> Value {
        self.send("execute/async", json!({ "script": script, "args": [] }))
            .await
    }

    /// Waits until a script gives true: a form that is sent takes its time.
    pub async fn until(&self, script: &str) {
        for _ in 0..100 {
            if self.ask(script).await == true {
                return;
            }
            tokio::time::sleep(Duration::from_millis(50)).await;
        }
        panic!("never true: {script}");
    }

    /// The element that a selector finds; waits for it a while.
    pub async fn find(&self, css: &str) -> String {
        let there = format!(
            "return document.querySelector({}) !== null",
            Value::String(css.to_owned())
        );
        self.until(&there).await;
        let found = self
            .send("element", json!({ "using": "css selector", "value": css }))
            .await;
        found[ELEMENT].as_str().expect("an element").to_owned()
    }

    /// Presses keys, wherever the focus is: texts are typed, `\u{e004}` is Tab, `\u{e007}` is Enter.
    pub async fn keys(&self, text: &str) {
        let presses: Vec<Value> = text
            .chars()
            .flat_map(|key| {
                [
                    json!({ "type": "keyDown", "value": key.to_string() }),
                    json!({ "type": "keyUp", "value": key.to_string() }),
                ]
            })
            .collect();
        self.send(
            "actions",
            json!({ "actions": [{ "type": "key", "id": "keyboard", "actions": presses }] }),
        )
        .await;
    }

    /// The whole text of an element.
    pub async fn text(&self, css: &str) -> String {
        let element = self.find(css).await;
        let path = format!(
            "{}/session/{}/element/{element}/text",
            self.driver.base, self.session
        );
        let answer: Value = self
            .driver
            .http
            .get(path)
            .send()
            .await
            .expect("answers")
            .json()
            .await
            .expect("JSON");
        answer["value"].as_str().unwrap_or_default().to_owned()
    }

    /// Clicks an element.
    pub async fn click(&self, css: &str) {
        let element = self.find(css).await;
        self.send(&format!("element/{element}/click"), json!({})).await;
    }

    /// Prints the page; the PDF in base64.
    pub async fn print(&self) -> String {
        self.send("print", json!({}))
            .await
            .as_str()
            .unwrap_or_default()
            .to_owned()
    }

    /// Ends the session.
    pub async fn close(self) {
        let path = format!("{}/session/{}", self.driver.base, self.session);
        let _ = self.driver.http.delete(path).send().await;
    }
}
