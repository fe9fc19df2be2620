#include "runner/judge_run.hpp"

#include <algorithm>
#include <map>
#include <set>

#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/rule_kinds.hpp"
#include "runner/base_capture.hpp"
#include "runner/record/capture_file.hpp"
#include "runner/report/people.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/stimulus_sha256.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t block_samples = 4096;
constexpr std::size_t most_names_listed = 20;

std::string listed(const std::vector<std::string>& names) {
    std::string text;
    for (std::size_t i = 0; i < std::min(names.size(), most_names_listed); ++i)
        text += (i > 0 ? ", '" : "'") + printable(names[i]) + "'";
    if (names.size() > most_names_listed) text += " and " + std::to_string(names.size() - most_names_listed) + " more";
    return text;
}

/// What the whole plan must have in common with the run.
Outcome<void> check_signal(const RecordedRun& record, const Plan& plan) {
    const auto differs = [&](const std::string& what, const std::string& recorded, const std::string& asked) {
        return Error{ErrorKind::input, plan.file,
                     "the run was captured with " + what + " " + recorded + ", this plan says " + asked,
                     "judge with a plan of the same signal, or capture anew with halflsb check"};
    };
    const Signal& signal = plan.signal;
    const RecordedSignal& recorded = record.signal;
    if (signal.input.name != recorded.input)
        return differs("input", printable(recorded.input), std::string(signal.input.name));
    if (signal.output.name != recorded.output)
        return differs("output", printable(recorded.output), std::string(signal.output.name));
    if (signal.channels != recorded.channels)
        return differs("channels", std::to_string(recorded.channels), std::to_string(signal.channels));
    const std::string& filter = record.run.board.filter;
    if (!signal.filter.empty() && !filter.empty() && signal.filter != filter)
        return differs("filter", printable(filter), printable(signal.filter));
    return {};
}

std::map<std::string, std::int32_t> by_name(const std::vector<CaseSetting>& settings) {
    std::map<std::string, std::int32_t> values;
    for (const CaseSetting& setting : settings) values[setting.name] = setting.value;
    return values;
}

std::string text_of(const std::vector<CaseSetting>& settings) {
    std::string text;
    for (const auto& [name, value] : by_name(settings))
        text += (text.empty() ? "" : ", ") + printable(name) + " = " + std::to_string(value);
    return text.empty() ? "none" : text;
}

/// Whether the capture answers what the case asks. With the run's own plan it does, unless the record was edited.
Outcome<void> check_question(const RecordedRun& record, const Plan& plan, const Case& the_case,
                             const CaseResult& recorded, bool another_plan) {
    const auto refused = [&](const std::string& problem) {
        return Error{ErrorKind::input, another_plan ? to_text(the_case.position) : record.path_of("run.json"),
                     "case '" + printable(the_case.name) + "': " + problem,
                     another_plan ? "the capture answers another question: capture anew with halflsb check"
                                  : "the record does not belong to its plan: it was edited; capture anew"};
    };
    if (recorded.verdict == CaseVerdict::invalid && recorded.stimulus.sha256.empty()) return {};  // nothing to judge
    const double rate_hz = rate_hz_of(plan, the_case), was_hz = recorded.rate_hz.value_or(record.signal.rate_hz);
    if (rate_hz != was_hz)
        return refused("it was captured at " + rounded_text(was_hz, 9) + " Hz, the plan says " +
                       rounded_text(rate_hz, 9) + " Hz");
    if (the_case.start != recorded.start) {
        return refused("it was captured with start = \"" + std::string(name_of(recorded.start)) +
                       "\", the plan says \"" + std::string(name_of(the_case.start)) + "\"");
    }
    if (the_case.start == Start::flush && the_case.start_samples > recorded.start_samples) {
        return refused(std::to_string(recorded.start_samples) + " zeros were sent before it, the plan's filter needs " +
                       std::to_string(the_case.start_samples));
    }
    if (by_name(the_case.settings) != by_name(recorded.settings)) {
        return refused("it was captured with settings " + text_of(recorded.settings) + ", the plan says " +
                       text_of(the_case.settings));
    }
    const auto same_question = [](const std::optional<Companion>& a, const std::optional<Companion>& b) {
        if (!a || !b) return a.has_value() == b.has_value();
        return a->base == b->base && a->terms == b->terms && a->block_samples == b->block_samples;
    };
    if (!same_question(the_case.companion, recorded.companion)) {
        return refused(recorded.companion ? "it was sent to be compared with case '" +
                                                printable(recorded.companion->base) + "', the plan says otherwise"
                                          : "it was sent for itself, and the plan wants it compared with case '" +
                                                printable(the_case.companion->base) + "'");
    }
    const std::int64_t sent = recorded.stimulus.samples, length = the_case.stimulus->length_samples();
    const bool may_be_shorter = may_end_early(plan, the_case) && sent > 0;
    if (may_be_shorter ? sent > length : sent != length) {
        return refused(counted(recorded.stimulus.samples, "sample was", "samples were") +
                       " sent, the plan's stimulus has " + count_text(length) +
                       (sent < length ? ", and its rules want all of them" : ""));
    }
    if (stimulus_sha256(plan, the_case, sent) != recorded.stimulus.sha256)
        return refused("the plan's stimulus is not the one that was sent: the SHA-256 of their codes differ");
    return {};
}

/// What a companion is held against: another capture of the record.
Outcome<BaseResponse> recorded_base(const RecordedRun& record, const Plan& plan, const Case& the_case,
                                    const Files& files) {
    if (!the_case.companion) return BaseResponse{};
    const CaseResult* const base = result_named(record.run.cases, the_case.companion->base);
    std::string path;
    if (base != nullptr && !base->capture_file.empty()) {
        const auto inside = path_inside(files, record.folder, base->capture_file);
        if (!inside) return inside.error();
        path = *inside;
    }
    return base_response(the_case, base, path, base == nullptr ? "" : record.path_of(base->capture_file), plan.signal,
                         record.run.board.block_samples, files);
}

/// A case that was not captured is no pass: the reason stands where that of an interrupted run does.
void account_for(RunResult& run, const std::vector<std::string>& missing, const std::vector<std::string>& surplus,
                 const std::string& folder, bool same_selection) {
    if (!surplus.empty())
        run.warnings.push_back("captures that no case of the plan asks for were not judged: " + listed(surplus));
    if (missing.empty()) {
        if (!same_selection) run.ended_by.reset();
    } else if (!same_selection || !run.ended_by) {
        run.ended_by = Error{ErrorKind::bench, folder,
                             counted(static_cast<std::int64_t>(missing.size()), "case has", "cases have") +
                                 " no capture in this run: " + listed(missing),
                             "capture with halflsb check"};
    }
}

/// What the run kept of the board's ticks; a run without them leaves the rules that want them undecided.
Outcome<void> add_recorded_ticks(const RecordedRun& record, const Case& the_case, const CaseResult& result,
                                 const Files& files, CaseJudge& judge) {
    if (!wants_ticks(the_case) || result.ticks_file.empty()) return {};
    const auto path = path_inside(files, record.folder, result.ticks_file);
    if (!path) return path.error();
    auto kept = CaptureFile::open(files, *path, record.path_of(result.ticks_file), format_of_ticks(), columns_of_ticks);
    if (!kept) return kept.error();
    std::vector<Code> codes;
    for (std::int64_t first = 0; first < kept->samples(); first += block_samples) {
        codes.resize(static_cast<std::size_t>(std::min(block_samples, kept->samples() - first) * columns_of_ticks));
        if (auto read = kept->read(first, codes); !read) return read.error();
        judge.add_ticks({record.run.board.tick_hz, record.run.board.tick_bits}, ticks_of_codes(codes));
    }
    return {};
}

}  // namespace

Outcome<std::vector<std::size_t>> recorded_cases(const RecordedRun& record, const Plan& plan) {
    std::map<std::string, std::size_t> places;
    for (std::size_t index = 0; index < plan.cases.size(); ++index) places[plan.cases[index].name] = index;
    std::vector<std::size_t> selected;
    for (const std::string& name : record.run.cases_planned) {
        const auto found = places.find(name);
        if (found == places.end()) {
            return Error{ErrorKind::input, record.path_of("run.json"),
                         "it names the case '" + printable(name) + "', which its plan does not have",
                         "the record was edited; capture anew with halflsb check"};
        }
        selected.push_back(found->second);
    }
    std::sort(selected.begin(), selected.end());
    return selected;
}

Outcome<Judgement> match_captures(const RecordedRun& record, const Plan& plan, bool another_plan,
                                  const std::vector<std::size_t>& selected) {
    if (auto same = check_signal(record, plan); !same) return same.error();
    Judgement judgement;
    judgement.another_plan = another_plan;
    RunResult& run = judgement.run;
    run = record.run;
    run.cases.clear();
    run.cases_planned.clear();
    run.folder = record.folder;
    run.title = plan.title;
    run.plan_file = plan.file;
    run.signal = plan.signal;
    std::map<std::string, const CaseResult*> captured;
    for (const CaseResult& result : record.run.cases) captured[result.name] = &result;
    std::vector<std::string> missing, surplus;
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        run.cases_planned.push_back(the_case.name);
        const auto found = captured.find(the_case.name);
        if (found == captured.end()) {
            missing.push_back(the_case.name);
            continue;
        }
        if (auto same = check_question(record, plan, the_case, *found->second, another_plan); !same)
            return same.error();
        if (interrupted()) return interrupted_error(record.folder);
        judgement.matches.push_back({index, found->second});
    }
    if (another_plan) {
        std::set<std::string> known;
        for (const Case& the_case : plan.cases) known.insert(the_case.name);
        for (const CaseResult& result : record.run.cases) {
            if (known.count(result.name) == 0) surplus.push_back(result.name);
        }
    }
    account_for(run, missing, surplus, record.folder, run.cases_planned == record.run.cases_planned);
    return judgement;
}

Outcome<CaseResult> judge_capture(const RecordedRun& record, const Plan& plan, const Judgement::Match& match,
                                  const Files& files, CasePlots* plots) {
    const Case& the_case = plan.cases[match.case_index];
    CaseResult result = *match.recorded;
    result.number = match.case_index + 1;
    result.returned_per_sent = returned_per_sent(plan, the_case);
    result.companion = the_case.companion;
    result.stimulus.values = the_case.stimulus_values;  // equal codes were sent, whichever words made them
    if (result.verdict == CaseVerdict::invalid) return result;
    const std::string shown = record.path_of(result.capture_file);
    const auto path = path_inside(files, record.folder, result.capture_file);
    if (!path) return path.error();
    auto capture = CaptureFile::open(files, *path, shown, plan.signal.output, plan.signal.channels);
    if (!capture) return capture.error();
    const bool ended_early = result.stimulus.samples < the_case.stimulus->length_samples();
    const std::int64_t length = ended_early ? result.stimulus.samples : returned_samples(plan, the_case);
    if (capture->samples() != length) {
        const bool as_sent = length == result.stimulus.samples;
        return Error{ErrorKind::input, shown,
                     "it holds " + counted(capture->samples(), "sample", "samples") +
                         (as_sent ? ", its stimulus had " : ", the plan's filter returns ") + count_text(length),
                     "the record was edited; capture anew with halflsb check"};
    }
    auto base = recorded_base(record, plan, the_case, files);
    if (!base) return base.error();
    CaseJudge judge(plan, the_case, plots != nullptr, std::move(*base));
    std::vector<Code> codes;
    for (std::int64_t first = 0; first < length; first += block_samples) {
        if (interrupted()) return interrupted_error("case \"" + result.name + "\"");
        codes.resize(static_cast<std::size_t>(std::min(block_samples, length - first) * plan.signal.channels));
        if (auto read = capture->read(first, codes); !read) return read.error();
        judge.add(codes);
    }
    if (auto added = add_recorded_ticks(record, the_case, result, files, judge); !added) return added.error();
    if (ended_early && !judge.is_decided()) {
        return Error{ErrorKind::input, to_text(the_case.position),
                     "case '" + printable(the_case.name) + "': " + counted(length, "sample was", "samples were") +
                         " sent of " + count_text(the_case.stimulus->length_samples()) +
                         ", until its rules were decided; those of this plan are not",
                     "capture anew with halflsb check"};
    }
    auto judged = judge.finish([&](std::int64_t first, std::span<Code> again) -> Outcome<void> {
        if (interrupted()) return interrupted_error("case \"" + result.name + "\"");
        return capture->read(first, again);
    });
    if (!judged) return judged.error();
    result.rules = std::move(judged->rules);
    result.latency_told = judged->latency_told;
    if (plots != nullptr) *plots = std::move(judged->plots);
    result.verdict = verdict_of(result.rules);
    return result;
}

}  // namespace halflsb
