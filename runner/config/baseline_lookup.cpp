// The baseline of a plan's case, held to the plan.
#include <algorithm>
#include <span>

#include "oracle/judge/case_rates.hpp"
#include "runner/config/baseline_file.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/sha256.hpp"
#include "runner/world/stimulus_sha256.hpp"
#include "stimuli/npy.hpp"

namespace halflsb {

namespace {

constexpr std::string_view accept_remedy = "accept a good run with halflsb accept RUN";

std::string shown_folder(const std::string& path) { return path.ends_with('/') ? path : path + "/"; }

std::string hash_of(const SampleFormat& format, std::span<const Code> codes) {
    const auto digest = make_code_digest();
    digest->add(format, codes);
    return digest->value();
}

/// Whether every hash that covers only kept codes is theirs.
bool hashes_agree(const SampleFormat& format, const BaselineCase& entry, std::span<const Code> kept,
                  std::size_t channels) {
    if (entry.kept_samples == entry.samples && hash_of(format, kept) != entry.response_sha256) return false;
    if (entry.block_samples == 0) return true;
    for (std::int64_t block = 0; block * entry.block_samples < entry.kept_samples; ++block) {
        const std::int64_t from = block * entry.block_samples, to = std::min(from + entry.block_samples, entry.samples);
        if (to > entry.kept_samples) break;
        const auto part =
            kept.subspan(static_cast<std::size_t>(from) * channels, static_cast<std::size_t>(to - from) * channels);
        if (hash_of(format, part) != entry.block_sha256[static_cast<std::size_t>(block)]) return false;
    }
    return true;
}

}  // namespace

const BaselineFiles::Folder& BaselineFiles::folder_at(const std::string& path, Place place) {
    const auto [at, is_new] = folders_.try_emplace(path);
    Folder& folder = at->second;
    if (!is_new) return folder;
    const std::string file = shown_folder(path) + baseline_file_name;
    auto bytes = context_.read_named_file(file, largest_named_file_bytes);
    if (!bytes) {
        // A path that leads out of the root is refused whether there is something or not.
        const bool is_inside = !path.starts_with('/') && ("/" + path + "/").find("/../") == std::string::npos;
        folder.is_missing = is_inside && !context_.files.exists(context_.root + "/" + file);
        folder.is_refused = !folder.is_missing;
        if (folder.is_refused) {
            context_.problems.add(place, "baseline = " + quoted(path) + ": " + printable(bytes.error().problem),
                                  printable(bytes.error().remedy));
        }
        return folder;
    }
    auto read = read_baseline(SourceText(context_.root + "/" + file, std::string(*bytes)), context_.files);
    if (auto* baseline = std::get_if<Baseline>(&read)) {
        folder.baseline = std::move(*baseline);
    } else {
        folder.is_refused = true;
        for (std::string& text : std::get<ReadProblems>(read).texts)
            context_.problems.add_rendered(place, std::move(text));
    }
    return folder;
}

std::string BaselineFiles::difference(const Plan& plan, const Case& the_case, const Baseline& baseline,
                                      const BaselineCase& entry) const {
    const auto differs = [](const std::string& what, const std::string& then, const std::string& now) {
        return what + " " + then + ", now " + now;
    };
    if (baseline.output.name != plan.signal.output.name)
        return differs("its output was", std::string(baseline.output.name), std::string(plan.signal.output.name));
    if (baseline.channels != plan.signal.channels) {
        return differs("its channels were", std::to_string(baseline.channels), std::to_string(plan.signal.channels));
    }
    const std::int64_t length = returned_samples(plan, the_case);
    if (entry.samples != length)
        return differs("its samples were", std::to_string(entry.samples), std::to_string(length));
    if (stimulus_sha256(plan, the_case, the_case.stimulus->length_samples()) != entry.stimulus_sha256)
        return "its stimulus was another one";
    return {};
}

std::optional<std::vector<Code>> BaselineFiles::kept_codes(const UnchangedRule& rule, const Baseline& baseline,
                                                           const BaselineCase& entry, Place place) {
    const std::string path = shown_folder(rule.baseline) + entry.kept;
    const auto refuse = [&](const std::string& problem, std::string_view remedy) {
        context_.problems.add(place, quoted(path) + " of case " + quoted(entry.name) + ": " + printable(problem),
                              printable(remedy));
        return std::nullopt;
    };
    const auto bytes = context_.read_named_file(path, largest_named_file_bytes);
    if (!bytes) return refuse(bytes.error().problem, damaged_remedy);
    const auto data = std::as_bytes(std::span(*bytes));
    const auto header = parse_npy_header(data);
    if (!header) return refuse(header.error().place + ": " + header.error().problem, damaged_remedy);
    const NpyType type = npy_type_of(baseline.output);
    if (header->type != type || header->channels != baseline.channels || header->count != entry.kept_samples) {
        return refuse("it holds " + std::to_string(header->count) + " x " + std::to_string(header->channels) + " of " +
                          std::string(descriptor_of(header->type)) + ", wanted " + std::to_string(entry.kept_samples) +
                          " x " + std::to_string(baseline.channels) + " of " + std::string(descriptor_of(type)),
                      damaged_remedy);
    }
    const std::size_t count =
        static_cast<std::size_t>(entry.kept_samples) * static_cast<std::size_t>(baseline.channels);
    // By division: a header may claim any count.
    const std::size_t there = data.size() - header->data_offset;
    if (there / bytes_of(type) != count || there % bytes_of(type) != 0)
        return refuse("it holds " + std::to_string(there) + " bytes of samples, not what its header says",
                      damaged_remedy);
    std::vector<Code> codes(count);
    from_npy_bytes(baseline.output, data.subspan(header->data_offset), codes);
    if (!hashes_agree(baseline.output, entry, codes, static_cast<std::size_t>(baseline.channels)))
        return refuse("its samples are not those whose SHA-256 baseline.toml states", damaged_remedy);
    return codes;
}

void BaselineFiles::take(const Plan& plan, const Case& the_case, Place place, UnchangedRule& rule) {
    const Folder& folder = folder_at(rule.baseline, place);
    if (folder.is_refused) return;
    const std::string where = printable(shown_folder(rule.baseline));
    if (folder.is_missing) {
        rule.missing = "no baseline yet at " + where + ": " + std::string(accept_remedy);
        return;
    }
    const Baseline& baseline = *folder.baseline;
    const auto entry = std::find_if(baseline.cases.begin(), baseline.cases.end(),
                                    [&](const BaselineCase& e) { return e.name == the_case.name; });
    if (entry == baseline.cases.end()) {
        rule.missing =
            "the baseline at " + where + " has no case " + quoted(the_case.name) + ": " + std::string(accept_remedy);
        return;
    }
    if (const std::string what = difference(plan, the_case, baseline, *entry); !what.empty()) {
        // As long as it stands there no run can be made that could take its place.
        const bool all_differ =
            baseline.output.name != plan.signal.output.name || baseline.channels != plan.signal.channels;
        const std::string obstacle = all_differ ? where : "this case from " + where + baseline_file_name;
        context_.problems.add(
            place, "the baseline at " + where + " accepted case " + quoted(the_case.name) + " otherwise: " + what,
            "take the change back, or remove " + obstacle + ", check again and accept that run");
        return;
    }
    const bool is_whole = entry->kept_samples == entry->samples;
    if (rule.largest && rule.largest->number > 0.0 && !is_whole) {
        context_.problems.add(place,
                              "max_lsb needs every sample of case " + quoted(the_case.name) + ", the baseline at " +
                                  where + " kept " + std::to_string(entry->kept_samples) + " of " +
                                  std::to_string(entry->samples),
                              "leave max_lsb out: the whole response is then compared bit for bit; or accept the run "
                              "again with --samples " +
                                  std::to_string(entry->samples));
        return;
    }
    auto kept = kept_codes(rule, baseline, *entry, place);
    if (!kept) return;
    auto accepted = std::make_shared<AcceptedResponse>();
    accepted->origin = printable(rule.baseline) + ", accepted " + printable(baseline.accepted_utc);
    accepted->stimulus_sha256 = entry->stimulus_sha256;
    accepted->response_sha256 = entry->response_sha256;
    accepted->samples = entry->samples;
    accepted->kept = std::move(*kept);
    accepted->block_samples = entry->block_samples;
    accepted->block_sha256 = entry->block_sha256;
    accepted->make_digest = [] { return make_code_digest(); };
    rule.accepted = std::move(accepted);
}

}  // namespace halflsb
