//! What the window may ask for: each command hands on to the engine and maps the error. Names and
//! arguments are those of `desktop/ui/src/backend/tauri.ts`; the list for the capability stands in
//! `names.rs`.

use crate::choose;
use crate::desk::{Desk, aside, now_s};
use brimstead_engine::window::records::{
    Decision, ImportCorrection, ImportDone, ImportView, InstrumentInfo, LimitProposal, LimitsView,
    LogView, Signature, SiteCheckView, SiteTextView, WorkStep,
};
use brimstead_engine::window::views::{
    Against, ChartView, ContoursView, Failure, FaultView, Field, Hidden, MomentView, Opened,
    Picture, ReadingView, SectionView, Theme, Units, WorkingView,
};
use brimstead_engine::window::{ReadingChart, Session, site_check as check};
use std::path::PathBuf;
use tauri::ipc::Channel;
use tauri::path::BaseDirectory;
use tauri::{AppHandle, Manager, State, command};

type Answer<T> = Result<T, Failure>;

/// Folder of the demo among the program's own files.
const DEMO: &str = "data-demo";

#[command]
pub async fn open_demo(
    app: AppHandle,
    desk: State<'_, Desk>,
    run: Option<String>,
) -> Answer<Opened> {
    let folder = app.path().resolve(DEMO, BaseDirectory::Resource).unwrap_or(PathBuf::from(DEMO));
    let open = move |progress: brimstead_engine::window::Progress<'_>| {
        Ok(((), Session::open_demo(&folder, run.as_deref(), now_s(), progress)?))
    };
    Ok(desk.replace(open).await?.1)
}

#[command]
pub async fn open_store(desk: State<'_, Desk>, path: PathBuf) -> Answer<Opened> {
    desk.was_chosen(std::slice::from_ref(&path))?;
    let opened =
        desk.replace(move |progress| Ok(((), Session::open_store(&path, now_s(), progress)?)));
    Ok(opened.await?.1)
}

#[command]
pub async fn new_store(
    app: AppHandle,
    desk: State<'_, Desk>,
    text: String,
    who: String,
    why: String,
) -> Answer<Option<Opened>> {
    let Some(path) = choose::new_store(app).await? else { return Ok(None) };
    let signature = Signature { who, why };
    let made = desk.replace(move |progress| {
        Ok(((), Session::new_store(&path, &text, &signature, now_s(), progress)?))
    });
    Ok(Some(made.await?.1))
}

#[command]
pub fn opened(desk: State<'_, Desk>) -> Option<Opened> {
    desk.session().ok().map(|session| session.opened())
}

#[command]
pub fn follow_work(desk: State<'_, Desk>, channel: Channel<WorkStep>) {
    desk.follow(channel);
}

#[command]
pub fn cancel_work(desk: State<'_, Desk>) {
    desk.cancel();
}

#[command]
pub async fn choose_readings(app: AppHandle, desk: State<'_, Desk>) -> Answer<Vec<PathBuf>> {
    let paths = choose::readings(app).await?;
    Ok(desk.remember(paths))
}

#[command]
pub async fn choose_store(app: AppHandle, desk: State<'_, Desk>) -> Answer<Option<PathBuf>> {
    let path = choose::store(app).await?;
    Ok(desk.remember(path.into_iter().collect()).pop())
}

#[command]
pub async fn moment(desk: State<'_, Desk>, time_ms: f64, units: Units) -> Answer<MomentView> {
    desk.ask(move |session| Ok(session.moment(time_ms, units))).await
}

#[command]
pub async fn section(desk: State<'_, Desk>, units: Units) -> Answer<SectionView> {
    desk.ask(move |session| Ok(session.section(units))).await
}

#[command]
pub async fn contours(
    desk: State<'_, Desk>,
    field: Field,
    time_ms: f64,
    units: Units,
) -> Answer<ContoursView> {
    desk.ask(move |session| session.contours(field, time_ms, units)).await
}

#[command]
pub async fn fill_line(
    desk: State<'_, Desk>,
    width: f64,
    height: f64,
    theme: Theme,
    units: Units,
) -> Answer<ChartView> {
    let picture = Picture { width, height, theme };
    desk.ask(move |session| session.fill_line(picture, units)).await
}

#[command]
pub async fn reading(
    desk: State<'_, Desk>,
    id: String,
    time_ms: f64,
    units: Units,
) -> Answer<ReadingView> {
    desk.ask(move |session| session.reading(&id, time_ms, units)).await
}

#[command]
#[allow(clippy::too_many_arguments)] // Each is a key of the message from the window.
pub async fn reading_chart(
    desk: State<'_, Desk>,
    id: String,
    against: Against,
    time_ms: f64,
    width: f64,
    height: f64,
    theme: Theme,
    units: Units,
    range: Option<(f64, f64)>,
    hidden: Vec<Hidden>,
) -> Answer<ChartView> {
    let asked = ReadingChart { id, against, time_ms, range, hidden };
    let picture = Picture { width, height, theme };
    desk.ask(move |session| session.reading_chart(&asked, picture, units)).await
}

#[command]
pub async fn working(
    desk: State<'_, Desk>,
    id: String,
    time_ms: f64,
    units: Units,
) -> Answer<WorkingView> {
    desk.ask(move |session| session.working(&id, time_ms, units)).await
}

#[command]
pub async fn faults(desk: State<'_, Desk>, time_ms: f64, units: Units) -> Answer<Vec<FaultView>> {
    desk.ask(move |session| Ok(session.faults(time_ms, units))).await
}

#[command]
pub async fn instruments(desk: State<'_, Desk>, units: Units) -> Answer<Vec<InstrumentInfo>> {
    desk.ask(move |session| Ok(session.instruments(units))).await
}

#[command]
pub async fn log(desk: State<'_, Desk>, units: Units) -> Answer<LogView> {
    desk.ask(move |session| session.log(units)).await
}

#[command]
pub async fn decide(
    desk: State<'_, Desk>,
    decision: Decision,
    time_ms: f64,
    who: String,
    why: String,
    units: Units,
) -> Answer<LogView> {
    let by = Signature { who, why };
    desk.ask(move |session| session.decide(decision, time_ms, &by, now_s(), units)).await
}

#[command]
pub async fn note(
    desk: State<'_, Desk>,
    id: Option<String>,
    time_ms: f64,
    who: String,
    text: String,
    units: Units,
) -> Answer<LogView> {
    desk.ask(move |session| session.note(id.as_deref(), time_ms, (&who, &text), now_s(), units))
        .await
}

#[command]
pub async fn limits(desk: State<'_, Desk>, units: Units) -> Answer<LimitsView> {
    desk.ask(move |session| session.limits(units)).await
}

#[command]
#[allow(clippy::too_many_arguments)] // Each is a key of the message from the window.
pub async fn propose_limits(
    desk: State<'_, Desk>,
    text: String,
    who: String,
    why: String,
    approvers: Vec<String>,
    effective: String,
    loosens: bool,
    units: Units,
) -> Answer<LimitsView> {
    let proposal = LimitProposal { text, who, why, approvers, effective, loosens };
    desk.ask(move |session| session.propose_limits(&proposal, now_s(), units)).await
}

#[command]
pub async fn import_preview(
    desk: State<'_, Desk>,
    paths: Vec<PathBuf>,
    corrections: Vec<ImportCorrection>,
) -> Answer<ImportView> {
    desk.was_chosen(&paths)?;
    desk.ask(move |session| session.import_preview(&paths, &corrections)).await
}

#[command]
pub async fn import_commit(
    desk: State<'_, Desk>,
    paths: Vec<PathBuf>,
    corrections: Vec<ImportCorrection>,
    who: String,
    why: String,
) -> Answer<ImportDone> {
    desk.was_chosen(&paths)?;
    let (session, by) = (desk.session()?, Signature { who, why });
    let stored = desk.replace(move |progress| {
        session.import_commit(&paths, &corrections, &by, now_s(), progress)
    });
    Ok(stored.await?.0)
}

#[command]
pub async fn site_text(desk: State<'_, Desk>) -> Answer<SiteTextView> {
    desk.ask(Session::site_text).await
}

#[command]
pub async fn site_check(text: String, units: Units) -> Answer<SiteCheckView> {
    aside(move || Ok(check(&text, units))).await
}

#[command]
pub async fn site_save(
    desk: State<'_, Desk>,
    text: String,
    who: String,
    why: String,
) -> Answer<SiteTextView> {
    let (session, by) = (desk.session()?, Signature { who, why });
    let saved = desk.replace(move |progress| session.site_save(&text, &by, now_s(), progress));
    Ok(saved.await?.0)
}
