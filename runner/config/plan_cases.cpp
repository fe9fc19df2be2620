// [[case]] of a plan.
#include <algorithm>
#include <limits>

#include "runner/config/plan_each.hpp"
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_words.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

/// TOML's trap: [case.stimulus] belongs to the [[case]] above it, so one that follows a rule was meant for
/// a case whose header is missing.
void refuse_stimulus_after_rule(TableReader& reader, const TomlValue& stimulus, const ReadRules& rules) {
    if (stimulus.is_inline || !rules.first || stimulus.place < *rules.first) return;
    reader.refuse(stimulus.place, "a stimulus after a rule of the same case: is a [[case]] missing above it?",
                  "start the next case with [[case]] and its name; within a case the stimulus stands before the rules");
}

bool is_label(std::string_view text) {
    return !text.empty() && text.size() <= most_label_characters && std::all_of(text.begin(), text.end(), [](char c) {
        return (c >= '0' && c <= '9') || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || c == '-' || c == '_';
    });
}

std::vector<std::string> read_labels(TableReader& reader) {
    std::vector<std::string> labels;
    const TomlEntry* entry = reader.entry(labels_word);
    if (entry == nullptr) return labels;
    constexpr std::string_view how = "write labels = [\"quick\"]";
    if (entry->value.kind != TomlValue::Kind::array) {
        reader.refuse(entry->value.place, "labels is " + kind_text(entry->value) + ", wanted a list of strings", how);
        return labels;
    }
    if (entry->value.items.empty())
        reader.refuse(entry->value.place, "labels is empty", "give a label, or leave it out");
    for (const TomlValue& item : entry->value.items) {
        if (item.kind != TomlValue::Kind::text) {
            reader.refuse(item.place, "in labels stands " + kind_text(item) + ", wanted strings", how);
        } else if (!is_label(item.text)) {
            reader.refuse(item.place, quoted(item.text) + " is no label",
                          "use letters, digits, - and _, at most " + std::to_string(most_label_characters));
        } else if (std::find(labels.begin(), labels.end(), item.text) != labels.end()) {
            reader.refuse(item.place, "the label " + quoted(item.text) + " is there twice", "keep one of the two");
        } else {
            labels.push_back(item.text);
        }
    }
    return labels;
}

std::vector<CaseSetting> read_settings(ReadContext& context, TableReader& reader) {
    std::vector<CaseSetting> settings;
    const TomlValue* table = reader.table(settings_word, false);
    if (table == nullptr) return settings;
    if (table->entries.empty()) reader.refuse(table->place, "settings is empty", "give a setting, or leave it out");
    constexpr auto lowest = std::numeric_limits<std::int32_t>::min(),
                   highest = std::numeric_limits<std::int32_t>::max();
    for (const TomlEntry& entry : table->entries) {
        const std::string name = "the setting " + quoted(entry.key);
        if (entry.key.empty() || printable(entry.key) != entry.key || columns_of(entry.key) > most_setting_characters) {
            reader.refuse(entry.key_place, name + " is no name that a board can have",
                          "give 1 to " + std::to_string(most_setting_characters) + " characters that can be seen");
        } else if (entry.value.kind != TomlValue::Kind::integer) {
            reader.refuse(entry.value.place, name + " is " + kind_text(entry.value) + ", wanted a whole number",
                          "write " + entry.key + " = 1; the board's greeting says which settings there are");
        } else if (entry.value.integer < lowest || entry.value.integer > highest) {
            reader.refuse(entry.value.place,
                          name + " = " + std::to_string(entry.value.integer) + " does not fit the 32 bits of a setting",
                          "give a number from " + std::to_string(lowest) + " to " + std::to_string(highest));
        } else {
            settings.push_back(
                {entry.key, static_cast<std::int32_t>(entry.value.integer), context.position_of(entry.value.place)});
        }
    }
    return settings;
}

Start start_from(std::string_view word) {
    for (const Start start : {Start::flush, Start::running}) {
        if (word == name_of(start)) return start;
    }
    return Start::reset;
}

/// `start` and `discard_samples` against each other and the length of the stimulus.
void read_start(TableReader& reader, const ParameterValues& values, const Stimulus* stimulus,
                const PlanPosition& discard_position, Case& the_case) {
    const Recipe& recipe = case_recipe();
    // One of a wrong word was reported, and contradicts nothing.
    const auto was_refused = [&](std::string_view key) { return reader.entry(key) != nullptr && !values.has(key); };
    if (was_refused("start")) return;
    the_case.start = start_from(*values.text(recipe, "start"));
    const auto discard = values.integer(recipe, "discard_samples");
    if (the_case.start != Start::running) {
        if (discard) {
            reader.refuse(reader.place_of("discard_samples"),
                          "discard_samples with start = \"" + std::string(name_of(the_case.start)) +
                              "\", where every sample counts",
                          "leave it out, or write start = \"running\"");
        }
        return;
    }
    if (!discard) {
        if (!was_refused("discard_samples")) {
            reader.refuse(reader.place_of("start"), "start = \"running\" without discard_samples",
                          "say how many leading samples no rule looks at, because of what went before: "
                          "discard_samples = 256");
        }
        return;
    }
    the_case.start_samples = *discard;
    the_case.discard_position = discard_position;
    if (stimulus != nullptr && !(*discard < stimulus->length_samples())) {
        reader.refuse(reader.place_of("discard_samples"),
                      "discard_samples = " + std::to_string(*discard) + " leaves nothing of " +
                          std::to_string(stimulus->length_samples()) + " samples",
                      "discard fewer, or lengthen the stimulus");
    }
}

/// What another rate, or a flush, makes of the filter.
void read_filter_at(TableReader& reader, const PlanFacts& facts, double rate_hz, Case& the_case) {
    if (facts.signal == nullptr || facts.filters == nullptr) return;
    const bool is_flush = the_case.start == Start::flush;
    if (facts.filters->is_unknown) {
        if (is_flush) {
            reader.refuse(reader.place_of("start"),
                          "start = \"flush\" needs the length of the filter's memory, and the filter is unknown",
                          "write start = \"reset\", or \"running\" with discard_samples");
        }
        return;
    }
    if (the_case.rate_hz && facts.filters->depends_on_rate()) {
        const Outcome<FilterChain>& design = facts.filters->at_rate(rate_hz, *facts.signal);
        if (!design) {
            reader.refuse(reader.place_of("rate_hz"),
                          "at " + number_text(rate_hz) + " Hz the filter has no design: " + design.error().problem,
                          "give another rate, or leave the case out");
            return;
        }
        the_case.filter = *design;
    }
    if (!is_flush) return;
    const auto samples = facts.filters->flush_samples_at(rate_hz, *facts.signal);
    if (samples) {
        the_case.start_samples = *samples;
    } else {
        reader.refuse(reader.place_of("start"),
                      "start = \"flush\" would never end: this filter forgets too slowly, or not at all",
                      "write start = \"reset\", or \"running\" with discard_samples");
    }
}

class CaseReader {
public:
    CaseReader(ReadContext& context, const TomlValue& table, const TableReader& top, const PlanFacts& facts)
        : context_(context), facts_(facts), reader_(context, table, "[[case]]", &top) {
        read_.place = table.place;
        read_.the_case.position = context.position_of(table.place);
    }

    ReadCase read(std::optional<std::uint64_t> seed) {
        const Recipe& recipe = case_recipe();
        const ParameterValues values = reader_.parameters(recipe);
        read_name(values);
        Case& the_case = read_.the_case;
        the_case.purpose = values.text(recipe, "purpose").value_or("");
        the_case.rate_hz = values.number(recipe, "rate_hz");
        the_case.labels = read_labels(reader_);
        // Known before its inner tables are read, so that a key of the case under their headers is told from
        // an unknown one.
        reader_.entry(each_word);
        const TomlValue* stimulus_table = reader_.table("stimulus", true);
        the_case.settings = read_settings(context_, reader_);

        const double rate_hz = the_case.rate_hz.value_or(facts_.signal == nullptr ? 1.0 : facts_.signal->rate_hz);
        const auto nyquist_hz = context_.nyquist_hz;
        if (the_case.rate_hz) context_.nyquist_hz = rate_hz / 2.0;
        std::optional<ReadStimulus> stimulus;
        if (stimulus_table != nullptr)
            stimulus = read_stimulus(context_, *stimulus_table, reader_, facts_.signal, rate_hz, seed);
        ReadRules rules = read_rules(context_, reader_, facts_, the_case.rate_hz);
        context_.nyquist_hz = nyquist_hz;

        if (stimulus_table != nullptr) refuse_stimulus_after_rule(reader_, *stimulus_table, rules);
        read_start(reader_, values, stimulus ? stimulus->stimulus.get() : nullptr,
                   context_.position_of(reader_.place_of("discard_samples")), the_case);
        read_filter_at(reader_, facts_, rate_hz, the_case);
        reader_.refuse_unknown_keys();
        read_.is_clean = reader_.is_clean() && stimulus && rules.is_clean;
        if (!read_.is_clean) return std::move(read_);
        const TomlEntry* length = stimulus_table->find("length_samples");
        the_case.length_position = context_.position_of(length != nullptr ? length->key_place : stimulus_table->place);
        the_case.shape = stimulus->shape;
        the_case.channel = stimulus->channel;
        the_case.stimulus_values = std::move(stimulus->values);
        the_case.stimulus = std::move(stimulus->stimulus);
        the_case.rules = std::move(rules.rules);
        return std::move(read_);
    }

private:
    void read_name(const ParameterValues& values) {
        if (!values.has("name")) return;
        read_.the_case.name = *values.text(case_recipe(), "name");
        read_.name_place = reader_.place_of("name");
    }

    ReadContext& context_;
    const PlanFacts& facts_;
    TableReader reader_;
    ReadCase read_;
};

}  // namespace

ReadCase read_case(ReadContext& context, const TomlValue& table, const TableReader& top, const PlanFacts& facts,
                   std::optional<std::uint64_t> seed) {
    return CaseReader(context, table, top, facts).read(seed);
}

}  // namespace halflsb
