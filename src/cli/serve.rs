//! `serve`: opens the data, listens, says where, and stops in order when asked.

use super::{people, print, say};
use crate::app::App;
use crate::clock::Clock;
use crate::config::Config;
use crate::people::pages::gate::Door;
use crate::store::{FILE, FolderLock};
use crate::web::extract::Limits;
use crate::web::metrics::Metrics;
use crate::web::patience::Patient;
use crate::web::{Shell, router};
use crate::{library, telemetry};
use anyhow::Context;
use std::future::Future;
use std::path::Path;
use std::time::Duration;
use tokio::net::TcpListener;

/// Runs until it is asked to stop.
pub(super) fn run(config: &Config) -> anyhow::Result<()> {
    telemetry::begin(&config.log, config.log_format)?;
    running(async {
        // Better no start than a door that people believe to be there.
        anyhow::ensure!(
            config.oidc.is_none(),
            "oidc_issuer is set, and sign-in by OpenID Connect is not built yet: take the setting out"
        );
        let folder = config.data.clone();
        std::fs::create_dir_all(&folder)
            .with_context(|| format!("the folder {} cannot be made", folder.display()))?;
        // Held until the program ends, however it ends.
        let _alone = FolderLock::take(&folder)?;
        let app = open(&folder)
            .await?
            .keeping_evidence_in(config.evidence_store.clone());
        if let Some(first) = &config.first_administrator {
            people::first_of_settings(&app, first).await?;
        }
        if !people::anybody(&app).await? {
            say(&format!(
                "Nobody can sign in yet. Make the first administrator: wheelwort people add --data {} --name \"NAME\" \
                 --sign-in-name NAME --role administrator --role preparer",
                folder.display()
            ));
        }
        serve(app, config, door(config)).await
    })
}

/// How people come in, as the settings say.
pub(super) fn door(config: &Config) -> Door {
    Door {
        trusted_proxies: config.trusted_proxies.clone(),
        secure_cookies: config.cookies_are_secure(),
        demo: None,
    }
}

/// Runs the program's threads.
pub(super) fn running(work: impl Future<Output = anyhow::Result<()>>) -> anyhow::Result<()> {
    tokio::runtime::Builder::new_multi_thread()
        .enable_all()
        .build()
        .context("no threads could be started")?
        .block_on(work)
}

/// Opens the data in a folder.
pub(super) async fn open(folder: &Path) -> anyhow::Result<App> {
    let file = folder.join(FILE);
    App::open(&file, Clock::system(), library::book())
        .await
        .with_context(|| format!("the data in {} cannot be opened", folder.display()))
}

/// Listens, says where, and serves until it is asked to stop; then finishes what runs and closes the data.
pub(super) async fn serve(app: App, config: &Config, door: Door) -> anyhow::Result<()> {
    let served = until_asked_to_stop(app.clone(), config, door).await;
    // Also after a failure: what was answered is kept either way, but an orderly end leaves one file behind.
    if tokio::time::timeout(config.stop_within, app.close())
        .await
        .is_err()
    {
        tracing::error!("the data could not be closed in time; nothing that was answered is lost");
    }
    served
}

async fn until_asked_to_stop(app: App, config: &Config, door: Door) -> anyhow::Result<()> {
    let listener = TcpListener::bind(config.listen)
        .await
        .with_context(|| format!("cannot listen on {}", config.listen))?;
    let address = listener.local_addr().context("the address is not known")?;
    if !address.ip().is_loopback() {
        say(&format!(
            "Caution: {address} can be reached from other machines, and passwords and tokens travel in the clear: put a \
             proxy with TLS before it."
        ));
    }
    if let Some(address) = config.metrics_listen {
        serve_metrics(&app, address).await?;
    }
    let shell = Shell {
        limits: Limits {
            body_bytes: config.body_bytes,
            batch_lines: config.batch_lines,
            evidence_bytes: config.evidence_bytes,
            ..Limits::default()
        },
        at_once: config.requests_at_once,
        timeout: config.request_timeout,
        door,
        ..Shell::default()
    };
    // Longer than any answer may take to begin.
    let patience = config.request_timeout + Duration::from_secs(15);
    let patient = Patient::new(listener, config.connections, patience);
    let (stop, mut stopped) = tokio::sync::watch::channel(false);
    let mut asked = stopped.clone();
    let service = crate::web::serve(patient, router(app, shell), async move {
        let _ = asked.wait_for(|stop| *stop).await;
    });
    let service = tokio::spawn(service);
    let signals = signals().context("signals cannot be heard")?;
    // The socket listens already: whoever reads this line is answered.
    print(format!("http://{address}").as_bytes());
    signals.await;
    tracing::info!("asked to stop: no new requests, finishing those that run");
    let _ = stop.send(true);
    let _ = stopped.changed().await;
    match tokio::time::timeout(config.stop_within, service).await {
        Err(_) => tracing::warn!("some requests did not end in time and were cut off"),
        Ok(ended) => ended
            .context("the service stopped")?
            .context("the service failed")?,
    }
    Ok(())
}

/// Serves `/metrics` on an address of its own, until the program ends.
async fn serve_metrics(app: &App, address: std::net::SocketAddr) -> anyhow::Result<()> {
    let metrics = Metrics::begin(app.clone()).context("measurements cannot begin")?;
    let listener = TcpListener::bind(address)
        .await
        .with_context(|| format!("cannot listen on {address} for measurements"))?;
    let address = listener.local_addr().context("the address is not known")?;
    say(&format!("Measurements: http://{address}/metrics"));
    tokio::spawn(metrics.clone().keep_up());
    let patient = Patient::new(listener, 16, Duration::from_secs(15));
    tokio::spawn(crate::web::serve(
        patient,
        metrics.router(),
        std::future::pending(),
    ));
    Ok(())
}

/// Completes when the program is asked to stop.
#[cfg(unix)]
fn signals() -> std::io::Result<impl Future<Output = ()>> {
    use tokio::signal::unix::{SignalKind, signal};
    let (mut interrupt, mut terminate) = (signal(SignalKind::interrupt())?, signal(SignalKind::terminate())?);
    Ok(async move {
        tokio::select! {
            _ = interrupt.recv() => {}
            _ = terminate.recv() => {}
        }
    })
}

/// Completes when the program is asked to stop.
#[cfg(not(unix))]
fn signals() -> std::io::Result<impl Future<Output = ()>> {
    Ok(async {
        let _ = tokio::signal::ctrl_c().await;
    })
}
