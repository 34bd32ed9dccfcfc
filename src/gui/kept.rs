//! What is made of a study for a page or the picture, kept from frame to frame for as long as nothing changes.

use crate::findings::Findings;
use eframe::egui;
use std::sync::Arc;

/// What was made in the last frame where findings and key are the same, else what `make` gives. `name` tells users of
/// this apart; one value is kept for each.
pub fn kept<K, V>(
    ctx: &egui::Context,
    name: &'static str,
    findings: &Arc<Findings>,
    key: K,
    make: impl FnOnce() -> V,
) -> Arc<V>
where
    K: PartialEq + Clone + Send + Sync + 'static,
    V: Send + Sync + 'static,
{
    let id = egui::Id::unique(("kept", name));
    // The findings are kept too, so that their address cannot come to mean other ones.
    if let Some((of, with, value)) = ctx.data(|d| d.get_temp::<(Arc<Findings>, K, Arc<V>)>(id))
        && Arc::ptr_eq(&of, findings)
        && with == key
    {
        return value;
    }
    let value = Arc::new(make());
    ctx.data_mut(|d| d.insert_temp(id, (Arc::clone(findings), key, Arc::clone(&value))));
    value
}
