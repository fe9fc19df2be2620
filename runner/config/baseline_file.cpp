#include "runner/config/baseline_file.hpp"

#include <algorithm>
#include <set>

#include "runner/config/baseline_words.hpp"
#include "runner/world/nearest.hpp"

namespace halflsb {

namespace {

bool is_sha256(std::string_view text) {
    return text.size() == 64 && text.find_first_not_of("0123456789abcdef") == std::string_view::npos;
}

void check_hash(TableReader& reader, const ParameterValues& values, const Recipe& recipe, std::string_view key) {
    const auto text = values.text(recipe, key);
    if (text && !is_sha256(*text)) {
        reader.refuse(reader.place_of(key), std::string(key) + " = " + quoted(*text) + " is no SHA-256",
                      damaged_remedy);
    }
}

/// What may be empty: facts that the accepted run did not know.
void read_facts(TableReader& top) {
    for (const std::string_view key : {"tool_version", "board_serial", "build_id", "plan_sha256"}) {
        const TomlEntry* entry = top.entry(key);
        if (entry == nullptr) {
            top.refuse(top.place(), "the file has no " + std::string(key), damaged_remedy);
        } else if (entry->value.kind != TomlValue::Kind::text) {
            top.refuse(entry->value.place, std::string(key) + " is " + kind_text(entry->value) + ", wanted a string",
                       damaged_remedy);
        }
    }
}

std::vector<std::string> read_hashes(TableReader& reader, std::string_view key) {
    std::vector<std::string> hashes;
    const TomlEntry* entry = reader.entry(key);
    if (entry == nullptr || entry->value.kind != TomlValue::Kind::array) {
        reader.refuse(reader.place_of(key), "[[case]] has no list " + std::string(key), damaged_remedy);
        return hashes;
    }
    for (const TomlValue& item : entry->value.items) {
        if (item.kind == TomlValue::Kind::text && is_sha256(item.text)) {
            hashes.push_back(item.text);
        } else {
            reader.refuse(item.place, "in " + std::string(key) + " stands something that is no SHA-256",
                          damaged_remedy);
            return hashes;
        }
    }
    return hashes;
}

/// Sizes that cannot belong together.
void check_sizes(TableReader& reader, const BaselineCase& entry) {
    if (entry.kept_samples > entry.samples) {
        reader.refuse(reader.place_of("kept_samples"),
                      "kept_samples = " + std::to_string(entry.kept_samples) +
                          " is more than samples = " + std::to_string(entry.samples),
                      damaged_remedy);
        return;
    }
    if (entry.kept_samples < entry.samples && entry.block_samples == 0) {
        reader.refuse(reader.place_of("block_samples"),
                      "block_samples is 0, but only " + std::to_string(entry.kept_samples) + " of " +
                          std::to_string(entry.samples) + " samples are kept",
                      damaged_remedy);
        return;
    }
    const std::int64_t stretches = entry.block_samples == 0 ? 0 : (entry.samples - 1) / entry.block_samples + 1;
    if (static_cast<std::int64_t>(entry.block_sha256.size()) != stretches) {
        reader.refuse(reader.place_of("block_sha256"),
                      "block_sha256 has " + std::to_string(entry.block_sha256.size()) + " hashes, " +
                          std::to_string(entry.samples) + " samples in stretches of " +
                          std::to_string(entry.block_samples) + " make " + std::to_string(stretches),
                      damaged_remedy);
    }
}

std::optional<BaselineCase> read_entry(ReadContext& context, const TomlValue& table, const TableReader& top) {
    TableReader reader(context, table, "[[case]]", &top);
    const Recipe& recipe = baseline_case_recipe();
    const ParameterValues values = reader.parameters(recipe);
    BaselineCase entry;
    entry.block_sha256 = read_hashes(reader, "block_sha256");
    reader.refuse_unknown_keys();
    check_hash(reader, values, recipe, "stimulus_sha256");
    check_hash(reader, values, recipe, "response_sha256");
    entry.kept = values.text(recipe, "kept").value_or("");
    if (entry.kept.find('/') != std::string::npos) {
        reader.refuse(reader.place_of("kept"), "kept = " + quoted(entry.kept) + " is not in the baseline's folder",
                      damaged_remedy);
    }
    if (!reader.is_clean()) return std::nullopt;
    entry.name = *values.text(recipe, "name");
    entry.samples = *values.integer(recipe, "samples");
    entry.stimulus_sha256 = *values.text(recipe, "stimulus_sha256");
    entry.response_sha256 = *values.text(recipe, "response_sha256");
    entry.kept_samples = *values.integer(recipe, "kept_samples");
    entry.block_samples = *values.integer(recipe, "block_samples");
    check_sizes(reader, entry);
    if (!reader.is_clean()) return std::nullopt;
    return entry;
}

}  // namespace

std::variant<Baseline, ReadProblems> read_baseline(const SourceText& source, const Files& files) {
    if (auto problem = source.not_text()) return ReadProblems{{std::move(*problem)}};
    const auto tree = parse_toml(source);
    if (const auto* problem = std::get_if<std::string>(&tree)) return ReadProblems{{*problem}};
    Problems problems(source);
    ReadContext context{problems, files, "", std::nullopt};
    TableReader top(context, std::get<TomlValue>(tree), "");
    const Recipe& recipe = baseline_recipe();
    const ParameterValues values = top.parameters(recipe);
    read_facts(top);
    Baseline baseline;
    std::set<std::string> names;
    for (const TomlValue* table : top.tables("case")) {
        auto entry = read_entry(context, *table, top);
        if (!entry) continue;
        if (!names.insert(entry->name).second)
            problems.add(table->place, "two cases are called " + quoted(entry->name), damaged_remedy);
        baseline.cases.push_back(std::move(*entry));
    }
    top.refuse_unknown_keys();
    if (problems.count() > 0) return problems.sorted();
    baseline.accepted_utc = *values.text(recipe, "accepted_utc");
    baseline.output = *sample_format(*values.text(recipe, "output"));
    baseline.channels = static_cast<int>(*values.integer(recipe, "channels"));
    return baseline;
}

}  // namespace halflsb
