//! Prints the JSON Schema of a site file:
//! `cargo run -p brimstead-engine --example site_schema > desktop/engine/site.schema.json`.

fn main() -> Result<(), serde_json::Error> {
    println!("{}", serde_json::to_string_pretty(&brimstead_engine::site::schema())?);
    Ok(())
}
