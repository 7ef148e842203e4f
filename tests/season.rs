use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::season::stretch::Stretch;
use tailvane::time::Instant;
const PLAN: &str = r#"{ "tailvane_plan": 1, "comet": { "name": "Invented comet Alder", "elements": {
    "perihelion_distance_au": 0.62, "eccentricity": 1.0003, "inclination_deg": 63.0, "ascending_node_deg": 62.0,
    "argument_of_perihelion_deg": 118.0, "perihelion_time": "2031-02-22.18374 TT", "epoch": "2031-02-10.0 TT" } } }"#;
#[test]
fn quick() {
    let engine = Engine::new(Plan::parse(PLAN).unwrap()).unwrap();
    let stretch = Stretch::new(Instant::from_tdb_days(11000.0), Instant::from_tdb_days(11730.0)).unwrap();
    for _ in 0..3 {
        let start = std::time::Instant::now();
        let mut search = engine.season_search(stretch);
        search.advance(1e9);
        let season = search.season();
        println!("{:?} {} looks {}", start.elapsed(), season.events.len(), season.strengths.len());
    }
    let mut search = engine.season_search(stretch);
    search.advance(1e9);
    for e in search.season().events {
        println!(
            "{} {} {:?} {} {} {:.1} min",
            e.time.utc_iso_ms(),
            e.kind.words(),
            e.value,
            e.unit,
            e.note,
            e.uncertainty_days * 1440.0
        );
    }
}
