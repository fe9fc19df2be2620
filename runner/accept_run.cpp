#include "runner/accept_run.hpp"

#include <algorithm>
#include <memory>
#include <set>
#include <variant>

#include "runner/record/capture_file.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t read_samples = 4096;

std::vector<const UnchangedRule*> unchanged_rules(const Case& the_case) {
    std::vector<const UnchangedRule*> rules;
    for (const Rule& rule : the_case.rules) {
        if (const auto* unchanged = std::get_if<UnchangedRule>(&rule.kind)) rules.push_back(unchanged);
    }
    return rules;
}

/// Calls `take` with the codes of instants `from` .. `to` - 1, in blocks.
template <class Take>
Outcome<void> read_through(CaptureFile& capture, int channels, std::int64_t from, std::int64_t to, Take take) {
    std::vector<Code> codes;
    for (std::int64_t first = from; first < to; first += read_samples) {
        if (interrupted()) return interrupted_error("accept");
        codes.resize(static_cast<std::size_t>(std::min(read_samples, to - first) * channels));
        if (auto read = capture.read(first, codes); !read) return read;
        if (auto taken = take(first, codes); !taken) return taken;
    }
    return {};
}

Outcome<std::string> digest_of(CaptureFile& capture, const Signal& signal, std::int64_t from, std::int64_t to) {
    const auto digest = make_code_digest();
    auto read = read_through(capture, signal.channels, from, to,
                             [&](std::int64_t, std::span<const Code> codes) -> Outcome<void> {
                                 digest->add(signal.output, codes);
                                 return {};
                             });
    if (!read) return read.error();
    return digest->value();
}

Outcome<std::vector<std::string>> block_digests(CaptureFile& capture, const Signal& signal, std::int64_t block) {
    std::vector<std::string> digests;
    for (std::int64_t from = 0; from < capture.samples(); from += block) {
        auto digest = digest_of(capture, signal, from, std::min(from + block, capture.samples()));
        if (!digest) return digest.error();
        digests.push_back(std::move(*digest));
    }
    return digests;
}

Outcome<BaselineCase> describe(CaptureFile& capture, const Plan& plan, const CaseResult& recorded,
                               std::int64_t kept_samples) {
    BaselineCase made;
    made.name = recorded.name;
    made.samples = capture.samples();
    made.stimulus_sha256 = recorded.stimulus.sha256;
    made.kept_samples = std::min(made.samples, kept_samples);
    auto whole = digest_of(capture, plan.signal, 0, made.samples);
    if (!whole) return whole.error();
    made.response_sha256 = std::move(*whole);
    if (made.kept_samples < made.samples) {
        made.block_samples = (made.samples - 1) / most_baseline_blocks + 1;
        auto blocks = block_digests(capture, plan.signal, made.block_samples);
        if (!blocks) return blocks.error();
        made.block_sha256 = std::move(*blocks);
    }
    return made;
}

/// Where a response first differs from what was accepted before: to the sample while that is kept, else to the stretch.
Outcome<AcceptedCase> compare(CaptureFile& capture, const Plan& plan, const BaselineCase& before,
                              const BaselineCase& now, const std::string& folder, const Files& files) {
    AcceptedCase accepted{AcceptedCase::State::changed, now.name, std::nullopt, {}};
    if (before.stimulus_sha256 != now.stimulus_sha256 || before.samples != now.samples) {
        accepted.difference = "it has another stimulus than before";
        return accepted;
    }
    if (before.response_sha256 == now.response_sha256) {
        accepted.state = AcceptedCase::State::same;
        return accepted;
    }
    const int channels = plan.signal.channels;
    auto kept =
        CaptureFile::open(files, folder + "/" + before.kept, folder + "/" + before.kept, plan.signal.output, channels);
    if (!kept) {
        accepted.difference = "the samples that were kept before cannot be read";
        return accepted;
    }
    std::vector<Code> old;
    auto read = read_through(
        capture, channels, 0, std::min(kept->samples(), now.samples),
        [&](std::int64_t first, std::span<const Code> codes) -> Outcome<void> {
            if (accepted.first_different_samples) return {};
            old.resize(codes.size());
            if (auto got = kept->read(first, old); !got) return got;
            const auto at =
                static_cast<std::size_t>(std::mismatch(codes.begin(), codes.end(), old.begin()).first - codes.begin());
            if (at == codes.size()) return {};
            const auto width = static_cast<std::size_t>(channels);
            accepted.first_different_samples = first + static_cast<std::int64_t>(at / width);
            accepted.difference = "first different sample " + count_text(*accepted.first_different_samples);
            if (channels > 1) accepted.difference += " on channel " + std::to_string(at % width + 1);
            const auto shown = [&](Code code) {
                return plan.signal.output.has_lsb() ? std::to_string(code)
                                                    : rounded_text(value_of(plan.signal.output, code), 9);
            };
            accepted.difference += ", was " + shown(old[at]) + ", is " + shown(codes[at]);
            return {};
        });
    if (!read) return read.error();
    if (accepted.first_different_samples) return accepted;
    accepted.difference = "it differs beyond the " + count_text(kept->samples()) + " samples that were kept";
    if (before.block_samples > 0) {
        auto blocks = block_digests(capture, plan.signal, before.block_samples);
        if (!blocks) return blocks.error();
        const auto common = std::min(blocks->size(), before.block_sha256.size());
        for (std::size_t i = 0; i < common; ++i) {
            if ((*blocks)[i] == before.block_sha256[i]) continue;
            const std::int64_t from = static_cast<std::int64_t>(i) * before.block_samples;
            const std::int64_t last = std::min(from + before.block_samples, now.samples) - 1;
            accepted.difference =
                from == last ? "first different sample " + count_text(from)
                             : "first different sample between " + count_text(from) + " and " + count_text(last);
            break;
        }
    }
    return accepted;
}

Outcome<std::int64_t> write_kept(CaptureFile& capture, const Signal& signal, std::int64_t samples,
                                 const std::string& path, Files& files) {
    auto file = files.open_output(path);
    if (!file) return file.error();
    const NpyType type = npy_type_of(signal.output);
    if (auto put = (*file)->write(npy_header(type, samples, signal.channels)); !put) return put.error();
    std::vector<std::byte> bytes;
    auto read = read_through(capture, signal.channels, 0, samples,
                             [&](std::int64_t, std::span<const Code> codes) -> Outcome<void> {
                                 bytes.resize(codes.size() * bytes_of(type));
                                 to_npy_bytes(signal.output, codes, bytes);
                                 return (*file)->write(bytes);
                             });
    if (!read) return read.error();
    if (auto done = (*file)->commit(); !done) return done.error();
    return static_cast<std::int64_t>(npy_header_bytes) +
           samples * signal.channels * static_cast<std::int64_t>(bytes_of(type));
}

/// The folder below the root, made where it is missing, with no part of it leading out of the root: a plan names it,
/// and a plan is not trusted.
Outcome<std::string> folder_below(const AcceptWish& wish, Files& files) {
    const auto refused = [&](const std::string& problem) {
        return Error{ErrorKind::input, wish.root + "/" + wish.baseline, problem,
                     "the plan's baseline must be a folder below the root"};
    };
    if (wish.baseline.empty() || wish.baseline.front() == '/' || wish.baseline.find('\0') != std::string::npos)
        return refused("it is no relative path");
    const std::string root = files.resolved(wish.root);
    const std::string prefix = root == "/" ? root : root + "/";
    for (std::size_t from = 0; from <= wish.baseline.size();) {
        const std::size_t slash = std::min(wish.baseline.find('/', from), wish.baseline.size());
        if (wish.baseline.compare(from, slash - from, "..") == 0) return refused("it holds \"..\"");
        const std::string part = wish.root + "/" + wish.baseline.substr(0, slash);
        if (files.exists(part)) {
            const std::string real = files.resolved(part);
            if (real != root && real.compare(0, prefix.size(), prefix) != 0)
                return refused("it leads out of the root, to " + (real.empty() ? "nowhere" : printable(real)));
        }
        from = slash + 1;
    }
    std::string folder = wish.root + "/" + wish.baseline;
    while (folder.ends_with('/')) folder.pop_back();
    return folder;
}

/// A name that no case that stays has taken.
std::string kept_name(const Judgement::Match& match, const std::string& name, std::set<std::string>& taken) {
    std::string number = std::to_string(match.case_index + 1);
    number.insert(0, number.size() < 3 ? 3 - number.size() : 0, '0');
    const std::string stem = number + "-" + file_name_part(name);
    std::string file = stem + ".npy";
    for (int i = 2; !taken.insert(file).second; ++i) file = stem + "-" + std::to_string(i) + ".npy";
    return file;
}

/// max_lsb compares every sample: a hash cannot tell by how much one differs.
Outcome<void> check_all_kept(const Case& the_case, std::int64_t samples, std::int64_t kept) {
    for (const UnchangedRule* rule : unchanged_rules(the_case)) {
        if (!rule->largest || rule->largest->number <= 0.0 || kept >= samples) continue;
        return Error{ErrorKind::input, "case '" + printable(the_case.name) + "'",
                     "its unchanged rule has max_lsb, which needs all of its " + count_text(samples) +
                         " samples kept, and " + count_text(kept) + " would be",
                     "accept with --samples " + std::to_string(samples)};
    }
    return {};
}

}  // namespace

std::optional<Error> refusal_of_accept(const RunResult& judged, const Plan& plan) {
    const bool any = std::any_of(plan.cases.begin(), plan.cases.end(),
                                 [](const Case& the_case) { return !unchanged_rules(the_case).empty(); });
    if (!any) {
        return Error{ErrorKind::input, plan.file, "no rule of this plan asks for an unchanged response",
                     "add to the plan:\n    [[rule]]\n    kind = \"unchanged\"\n    baseline = \"baseline\""};
    }
    std::vector<std::string> reasons;
    for (const CaseResult& result : judged.cases) {
        const std::string name = "case '" + printable(result.name) + "': ";
        if (result.verdict == CaseVerdict::invalid)
            reasons.push_back(name +
                              "its capture is invalid: " + (result.invalid ? printable(result.invalid->problem) : ""));
        for (const RuleVerdict& rule : result.rules) {
            if (rule.verdict == Verdict::pass || std::holds_alternative<UnchangedRule>(rule.rule.kind)) continue;
            reasons.push_back(name + "rule " + rule_title(rule) + " of " + printable(to_text(rule.rule.position)) +
                              (rule.verdict == Verdict::fail ? " fails" : " is undecided"));
        }
    }
    for (std::size_t i = judged.cases.size(); i < judged.cases_planned.size(); ++i)
        reasons.push_back("case '" + printable(judged.cases_planned[i]) + "': it was not captured");
    if (judged.ended_by && reasons.empty())
        reasons.push_back("it was ended early: " + printable(judged.ended_by->problem));
    if (reasons.empty()) return std::nullopt;
    std::string problem = "this run cannot be accepted:";
    for (const std::string& reason : reasons) problem += "\n    " + reason;
    return Error{ErrorKind::input, judged.folder, problem,
                 "only a whole run whose other rules pass becomes a baseline"};
}

std::map<std::string, std::vector<Judgement::Match>> cases_by_baseline(const Plan& plan,
                                                                       const std::vector<Judgement::Match>& matches) {
    std::map<std::string, std::vector<Judgement::Match>> groups;
    for (const Judgement::Match& match : matches) {
        std::set<std::string> named;
        for (const UnchangedRule* rule : unchanged_rules(plan.cases[match.case_index])) {
            if (named.insert(rule->baseline).second) groups[rule->baseline].push_back(match);
        }
    }
    return groups;
}

Outcome<AcceptedBaseline> accept_baseline(const RecordedRun& record, const Plan& plan,
                                          const std::vector<Judgement::Match>& matches,
                                          const std::optional<BaselineContent>& before, const AcceptWish& wish,
                                          Files& files) {
    auto folder = folder_below(wish, files);
    if (!folder) return folder.error();
    BaselineContent content{plan.title,
                            wish.accepted_utc,
                            wish.tool_version,
                            record.run.board.serial,
                            record.run.board.build_id,
                            record.run.plan_sha256,
                            std::string(plan.signal.output.name),
                            plan.signal.channels,
                            {}};
    std::map<std::string, const BaselineCase*> known;
    std::set<std::string> here, taken;
    for (const Judgement::Match& match : matches) here.insert(match.recorded->name);
    AcceptedBaseline accepted;
    accepted.folder = *folder;
    std::vector<AcceptedCase> stays;
    for (const BaselineCase& one : before ? before->cases : std::vector<BaselineCase>{}) {
        if (here.count(one.name) > 0) continue;
        content.cases.push_back(one);
        taken.insert(one.kept);
        stays.push_back({AcceptedCase::State::stays, one.name, std::nullopt, {}});
    }
    if (before) {
        for (const BaselineCase& one : before->cases) known[one.name] = &one;
        if (!stays.empty() && (before->output != content.output || before->channels != content.channels)) {
            return Error{ErrorKind::input, *folder + "/" + baseline_file_name,
                         "it is of " + printable(before->output) + " in " +
                             counted(before->channels, "channel", "channels") + ", the run of " + content.output +
                             " in " + std::to_string(content.channels) + ", and it has cases that are not in this run",
                         "remove that folder to begin anew, or name another baseline in the plan"};
        }
    }
    const bool comparable = before && before->output == content.output && before->channels == content.channels;
    struct Write {
        std::shared_ptr<CaptureFile> capture;
        std::string file;
        std::int64_t samples;
    };
    std::vector<Write> writes;
    for (const Judgement::Match& match : matches) {
        const CaseResult& recorded = *match.recorded;
        const auto path = path_inside(files, record.folder, recorded.capture_file);
        if (!path) return path.error();
        auto opened = CaptureFile::open(files, *path, record.path_of(recorded.capture_file), plan.signal.output,
                                        plan.signal.channels);
        if (!opened) return opened.error();
        const auto capture = std::make_shared<CaptureFile>(std::move(*opened));
        auto made = describe(*capture, plan, recorded, wish.kept_samples);
        if (!made) return made.error();
        if (auto enough = check_all_kept(plan.cases[match.case_index], made->samples, made->kept_samples); !enough)
            return enough.error();
        made->kept = kept_name(match, recorded.name, taken);
        AcceptedCase one{AcceptedCase::State::new_case, recorded.name, std::nullopt, {}};
        const auto old = known.find(recorded.name);
        if (old != known.end() && comparable) {
            auto compared = compare(*capture, plan, *old->second, *made, *folder, files);
            if (!compared) return compared.error();
            one = std::move(*compared);
        } else if (old != known.end()) {
            one.state = AcceptedCase::State::changed;
            one.difference = "its codes are of another format than before";
        }
        const bool kept_already =
            one.state == AcceptedCase::State::same && *old->second == *made && files.exists(*folder + "/" + made->kept);
        if (!kept_already) writes.push_back({capture, made->kept, made->kept_samples});
        content.cases.push_back(std::move(*made));
        accepted.cases.push_back(std::move(one));
    }
    accepted.cases.insert(accepted.cases.end(), stays.begin(), stays.end());
    std::stable_sort(content.cases.begin(), content.cases.end(),
                     [](const BaselineCase& a, const BaselineCase& b) { return a.kept < b.kept; });
    if (auto folders = files.make_directories(*folder); !folders) return folders.error();
    for (const Write& write : writes) {
        auto bytes = write_kept(*write.capture, plan.signal, write.samples, *folder + "/" + write.file, files);
        if (!bytes) return bytes.error();
        accepted.written_bytes += *bytes;
        ++accepted.written_files;
    }
    const std::string text = baseline_toml(content);
    if (auto put = files.write(*folder + "/" + baseline_file_name, text); !put) return put.error();
    accepted.written_bytes += static_cast<std::int64_t>(text.size());
    ++accepted.written_files;
    return accepted;
}

}  // namespace halflsb
