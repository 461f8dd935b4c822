//! The shipped shows: their texts, what they are about, and their small pictures.

use crate::dom;
use crate::drawing::Drawing;
use crate::keep::Source;
use crate::protocol::Facts;
use leptos::prelude::*;
use serde::{Deserialize, Serialize};

/// Where small pictures are kept between visits, for one build.
const KEPT: &str = "fallaround.cards";

/// One shipped show.
#[derive(Debug, Clone, PartialEq)]
pub struct Card {
    /// Its text.
    pub source: Source,
    /// The request that the worker answers.
    pub run: Option<u32>,
    /// What it is about.
    pub facts: Option<Facts>,
    /// Its small picture.
    pub picture: Option<Drawing>,
}

#[derive(Debug, Default, Serialize, Deserialize)]
struct KeptCards {
    build: String,
    cards: Vec<KeptCard>,
}

#[derive(Debug, Serialize, Deserialize)]
struct KeptCard {
    source: Source,
    facts: Facts,
    picture: Drawing,
}

/// The list of them, in the order of the folder.
#[derive(Debug, Clone, Copy)]
pub struct Shows {
    /// The shows.
    pub cards: RwSignal<Vec<Card>>,
    /// Why there are none; empty: there are, or they are still being read.
    pub missing: RwSignal<String>,
}

impl Default for Shows {
    fn default() -> Self {
        Self::new()
    }
}

impl Shows {
    /// None yet.
    pub fn new() -> Self {
        Self { cards: RwSignal::new(Vec::new()), missing: RwSignal::new(String::new()) }
    }

    /// Reads the shipped shows. `ask` asks the worker about a text and gives the request's number.
    pub async fn read(self, ask: impl Fn(String) -> u32) {
        match sources().await {
            Ok(sources) => {
                let kept = kept_cards();
                let cards =
                    sources.into_iter().map(|source| match kept.iter().find(|card| card.source == source) {
                        Some(card) => Card {
                            source,
                            run: None,
                            facts: Some(card.facts.clone()),
                            picture: Some(card.picture.clone()),
                        },
                        None => {
                            Card { run: Some(ask(source.text.clone())), source, facts: None, picture: None }
                        }
                    });
                self.cards.set(cards.collect());
            }
            Err(error) => self.missing.set(format!("The shows that come with it can't be read: {error}")),
        }
    }

    /// The title of a shipped show, once the worker has said it.
    pub fn title_of(&self, source: &Source) -> Option<String> {
        self.cards.with_untracked(|cards| {
            let card = cards.iter().find(|card| card.source == *source)?;
            card.facts.as_ref().map(|facts| facts.title.clone())
        })
    }

    /// The worker says what a text is about.
    pub fn facts(&self, run: u32, facts: Facts) {
        self.cards.update(|cards| {
            cards
                .iter_mut()
                .filter(|card| card.run == Some(run))
                .for_each(|card| card.facts = Some(facts.clone()));
        });
    }

    /// The worker gives the small picture of a text.
    pub fn picture(&self, run: u32, picture: Drawing) {
        self.cards.update(|cards| {
            cards
                .iter_mut()
                .filter(|card| card.run == Some(run))
                .for_each(|card| card.picture = Some(picture.clone()));
        });
        if self.cards.with_untracked(|cards| cards.iter().all(|card| card.picture.is_some())) {
            self.keep();
        }
    }

    /// A text can't be shown. It stays in the list under its file name; opening it says why.
    pub fn failed(&self, run: u32) {
        self.cards.update(|cards| {
            for card in cards.iter_mut().filter(|card| card.run == Some(run)) {
                let facts = Facts { title: card.source.name.clone(), ..Facts::default() };
                card.facts.get_or_insert(facts);
            }
        });
    }

    fn keep(&self) {
        let Some(build) = dom::build() else { return };
        let cards = self.cards.with_untracked(|cards| {
            let kept = cards.iter().filter_map(|card| {
                let (facts, picture) = (card.facts.clone()?, card.picture.clone()?);
                Some(KeptCard { source: card.source.clone(), facts, picture })
            });
            kept.collect()
        });
        if let Ok(text) = serde_json::to_string(&KeptCards { build, cards }) {
            // Without it they are made again at the next visit.
            drop(dom::keep(KEPT, &text));
        }
    }
}

/// What this very build kept; pictures of another build might no longer be true.
fn kept_cards() -> Vec<KeptCard> {
    let kept: Option<KeptCards> = dom::kept(KEPT).and_then(|text| serde_json::from_str(&text).ok());
    kept.filter(|kept| dom::build().as_ref() == Some(&kept.build)).map(|kept| kept.cards).unwrap_or_default()
}

async fn sources() -> Result<Vec<Source>, dom::DomError> {
    let index = dom::fetch_text("scenarios/index.json").await?;
    let names: Vec<String> = serde_json::from_str(&index)
        .map_err(|error| dom::DomError::new("reading the list of shows", &error.to_string().into()))?;
    let mut sources = Vec::with_capacity(names.len());
    for name in names {
        let text = dom::fetch_text(&format!("scenarios/{name}")).await?;
        sources.push(Source { name, text }.dated(dom::wall_ms()));
    }
    Ok(sources)
}
