//! `pintle list TOPIC [WORD]`.

use super::specs::Flag;
use super::{Context, Output, exit, json_text};
use pintle::nearest::did_you_mean;
use pintle::render::list::{self, Topic};

pub(super) fn run(context: &Context<'_>) -> Output {
    let word = context.word(0);
    let Some(topic) = Topic::from_word(word) else {
        let topics = Topic::ALL.map(Topic::word);
        let hint = did_you_mean(word, topics).unwrap_or_else(|| format!("there are {}", topics.join(", ")));
        return Output::failed(exit::USAGE, format!("nothing is listed under `{word}`; {hint}"));
    };
    let filter = context.arguments.words.get(1).map(String::as_str);
    let entries = list::entries(topic, filter);
    let mut output = Output::sound(match context.has(Flag::Json) {
        true => json_text(&list::json(&entries)),
        false => list::text(topic, &entries, context.out_colour()),
    });
    if let (true, Some(filter), false) = (entries.is_empty(), filter, context.has(Flag::Quiet)) {
        let names = list::names(topic);
        let hint =
            did_you_mean(filter, names.iter().map(String::as_str)).map_or(String::new(), |hint| format!("; {hint}"));
        output.stderr = format!("note: none of the {} mentions `{filter}`{hint}\n", topic.word());
    }
    output
}
