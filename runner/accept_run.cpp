#include "runner/accept_run.hpp"

#include <algorithm>
#include <memory>
#include <set>
#include <variant>

#include "runner/baseline_samples.hpp"
#include "runner/record/capture_file.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/report/people.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/npy.hpp"

namespace halflsb {
namespace {

constexpr std::size_t most_files_waiting = 256;

std::vector<const UnchangedRule*> unchanged_rules(const Case& the_case) {
    std::vector<const UnchangedRule*> rules;
    for (const Rule& rule : the_case.rules) {
        if (const auto* unchanged = std::get_if<UnchangedRule>(&rule.kind)) rules.push_back(unchanged);
    }
    return rules;
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

/// A plan may name files up to a size, and this will be one.
Outcome<void> check_kept_size(const Signal& signal, const BaselineCase& made) {
    constexpr auto most = static_cast<std::int64_t>(largest_named_file_bytes);
    if (kept_bytes(signal, made.kept_samples) <= most) return {};
    const std::int64_t instant = kept_bytes(signal, 1) - kept_bytes(signal, 0);
    return Error{ErrorKind::input, "case '" + printable(made.name) + "'",
                 "its " + count_text(made.kept_samples) + " kept samples would take " +
                     count_text(kept_bytes(signal, made.kept_samples)) + " bytes, and a plan reads files of at most " +
                     count_text(most),
                 "accept with --samples " + std::to_string((most - kept_bytes(signal, 0)) / instant) + " or fewer"};
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
        auto made = describe_case(*capture, plan, recorded, wish.kept_samples);
        if (!made) return made.error();
        if (auto enough = check_all_kept(plan.cases[match.case_index], made->samples, made->kept_samples); !enough)
            return enough.error();
        if (auto fits = check_kept_size(plan.signal, *made); !fits) return fits.error();
        made->kept = kept_name(match, recorded.name, taken);
        AcceptedCase one{AcceptedCase::State::new_case, recorded.name, std::nullopt, {}};
        const auto old = known.find(recorded.name);
        if (old != known.end() && comparable) {
            auto compared = compare_with_before(*capture, plan, *old->second, *made, *folder, files);
            if (!compared) return compared.error();
            one = std::move(*compared);
        } else if (old != known.end()) {
            one.state = AcceptedCase::State::changed;
            one.difference = "its codes are of another format than before";
        }
        const bool kept_already =
            one.state == AcceptedCase::State::same && *old->second == *made &&
            kept_samples_stand_there(*capture, plan.signal, made->kept_samples, *folder + "/" + made->kept, files);
        if (!kept_already) writes.push_back({capture, made->kept, made->kept_samples});
        content.cases.push_back(std::move(*made));
        accepted.cases.push_back(std::move(one));
    }
    accepted.cases.insert(accepted.cases.end(), stays.begin(), stays.end());
    std::stable_sort(content.cases.begin(), content.cases.end(),
                     [](const BaselineCase& a, const BaselineCase& b) { return a.kept < b.kept; });
    const std::string text = baseline_toml(content);
    const std::string toml = *folder + "/" + baseline_file_name;
    if (text.size() > largest_named_file_bytes) {
        return Error{ErrorKind::input, toml,
                     "it would have " + count_text(static_cast<std::int64_t>(text.size())) +
                         " bytes, and a plan reads files of at most " +
                         count_text(static_cast<std::int64_t>(largest_named_file_bytes)),
                     "accept with more --samples, so that fewer cases need hashes of stretches, or split the plan"};
    }
    if (auto folders = files.make_directories(*folder); !folders) return folders.error();
    // Nothing takes its name before all of it is on the disk: the old baseline stays whole when there is no room.
    std::vector<std::unique_ptr<OutputFile>> waiting;
    const auto commit = [&waiting]() -> Outcome<void> {
        for (const auto& file : waiting) {
            if (auto done = file->commit(); !done) return done;
        }
        waiting.clear();
        return {};
    };
    for (const Write& write : writes) {
        // Descriptors are few.
        if (waiting.size() >= most_files_waiting) {
            if (auto done = commit(); !done) return done.error();
        }
        auto file = write_kept_samples(*write.capture, plan.signal, write.samples, *folder + "/" + write.file, files);
        if (!file) return file.error();
        waiting.push_back(std::move(*file));
        accepted.written_bytes += kept_bytes(plan.signal, write.samples);
        ++accepted.written_files;
    }
    auto file = files.open_output(toml);
    if (!file) return file.error();
    if (auto put = (*file)->write(std::as_bytes(std::span(text))); !put) return put.error();
    waiting.push_back(std::move(*file));
    if (auto done = commit(); !done) return done.error();
    accepted.written_bytes += static_cast<std::int64_t>(text.size());
    ++accepted.written_files;
    return accepted;
}

}  // namespace halflsb
