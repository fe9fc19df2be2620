#include "runner/compare_runs.hpp"

#include <algorithm>
#include <cmath>

#include "runner/record/capture_file.hpp"
#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/stimulus_sha256.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t piece_samples = 4096;

Outcome<void> check_signals(const RunPart& before, const RunPart& after) {
    const Signal &one = before.plan.signal, &other = after.plan.signal;
    const auto differs = [&](const std::string& what, const std::string& was, const std::string& is) {
        return Error{ErrorKind::input, after.record.folder,
                     "its " + what + " is " + is + ", that of " + printable(before.record.folder) + " is " + was,
                     "compare runs of one signal"};
    };
    if (one.input.name != other.input.name)
        return differs("input", std::string(one.input.name), std::string(other.input.name));
    if (one.output.name != other.output.name)
        return differs("output", std::string(one.output.name), std::string(other.output.name));
    if (one.channels != other.channels)
        return differs("number of channels", std::to_string(one.channels), std::to_string(other.channels));
    return {};
}

/// Of a case that both runs have: the samples that can be compared, or why none.
struct Comparable {
    std::int64_t sent = 0;
    std::string why_not;
};

std::vector<std::pair<std::string, std::int32_t>> sorted_settings(const CaseResult& recorded) {
    std::vector<std::pair<std::string, std::int32_t>> settings;
    for (const CaseSetting& setting : recorded.settings) settings.emplace_back(setting.name, setting.value);
    std::sort(settings.begin(), settings.end());
    return settings;
}

Comparable comparable(const RunPart& before, const Judgement::Match& one, const RunPart& after,
                      const Judgement::Match& other) {
    const CaseResult &was = *one.recorded, &is = *other.recorded;
    if (was.verdict == CaseVerdict::invalid) return {0, "its capture of the run before is not whole"};
    if (is.verdict == CaseVerdict::invalid) return {0, "its capture of the run after is not whole"};
    const Case &case_before = before.plan.cases[one.case_index], &case_after = after.plan.cases[other.case_index];
    if (rate_hz_of(before.plan, case_before) != rate_hz_of(after.plan, case_after)) return {0, "the rates differ"};
    if (was.start != is.start || was.start_samples != is.start_samples) return {0, "the starts differ"};
    if (sorted_settings(was) != sorted_settings(is)) return {0, "the settings differ"};
    const std::int64_t sent = std::min(was.stimulus.samples, is.stimulus.samples);
    if (stimulus_sha256(before.plan, case_before, sent) != stimulus_sha256(after.plan, case_after, sent))
        return {0, "other samples were sent"};
    return {sent, ""};
}

/// Sums of one channel while both captures are read.
class Differences {
public:
    Differences(const SampleFormat& format, int channel) : format_(format) { result_.channel = channel; }

    void add(std::int64_t index, Code before, Code after) {
        ++samples_;
        if (before == after) return;
        const double was = shown(before), is = shown(after), difference = is - was;
        // Of f32 two codes may be one value, or none.
        if (was == is || (std::isnan(was) && std::isnan(is))) return;
        if (result_.different++ == 0) {
            result_.first_index = index;
            result_.before = was;
            result_.after = is;
        }
        if (!std::isfinite(difference)) return;
        sum_ += difference;
        sum_of_squares_ += difference * difference;
        if (std::abs(difference) > std::abs(result_.largest)) {
            result_.largest = difference;
            result_.largest_index = index;
        }
    }

    ComparedChannel result() {
        if (samples_ > 0) {
            result_.mean = sum_ / static_cast<double>(samples_);
            result_.rms = std::sqrt(sum_of_squares_ / static_cast<double>(samples_));
        }
        return result_;
    }

private:
    double shown(Code code) const {
        const double value = value_of(format_, code);
        return format_.has_lsb() ? value / lsb_value(format_) : value;
    }

    const SampleFormat& format_;
    ComparedChannel result_;
    std::int64_t samples_ = 0;
    double sum_ = 0.0, sum_of_squares_ = 0.0;
};

Outcome<CaptureFile> open_capture(const RunPart& part, const CaseResult& recorded, const Files& files) {
    const auto path = path_inside(files, part.record.folder, recorded.capture_file);
    if (!path) return path.error();
    return CaptureFile::open(files, *path, part.record.path_of(recorded.capture_file), part.plan.signal.output,
                             part.plan.signal.channels);
}

Outcome<ComparedCase> compare_case(const RunPart& before, const CaseResult& was, const RunPart& after,
                                   const CaseResult& is, const Files& files) {
    auto one = open_capture(before, was, files);
    if (!one) return one.error();
    auto other = open_capture(after, is, files);
    if (!other) return other.error();
    const Signal& signal = before.plan.signal;
    const auto width = static_cast<std::size_t>(signal.channels);
    std::vector<Differences> channels;
    for (std::size_t c = 0; c < width; ++c) channels.emplace_back(signal.output, static_cast<int>(c) + 1);
    ComparedCase compared{was.name, std::min(one->samples(), other->samples()), one->samples(), other->samples(), {}};
    std::vector<Code> codes_before, codes_after;
    for (std::int64_t index = 0; index < compared.samples; index += piece_samples) {
        const auto count = static_cast<std::size_t>(std::min(piece_samples, compared.samples - index));
        codes_before.resize(count * width);
        codes_after.resize(count * width);
        if (auto read = one->read(index, codes_before); !read) return read.error();
        if (auto read = other->read(index, codes_after); !read) return read.error();
        for (std::size_t i = 0; i < codes_before.size(); ++i)
            channels[i % width].add(index + static_cast<std::int64_t>(i / width), codes_before[i], codes_after[i]);
    }
    for (Differences& channel : channels) compared.channels.push_back(channel.result());
    return compared;
}

const Judgement::Match* match_named(const RunPart& part, const std::string& name) {
    for (const Judgement::Match& match : part.judgement.matches)
        if (match.recorded->name == name) return &match;
    return nullptr;
}

Outcome<void> compare_cases(const RunPart& before, const RunPart& after, const Files& files, Comparison& comparison) {
    const auto leave_out = [&](const std::string& name, const std::string& why) {
        comparison.left_out.push_back(printable(name) + ": " + why);
    };
    for (const Judgement::Match& one : before.judgement.matches) {
        const std::string& name = one.recorded->name;
        const Judgement::Match* const other = match_named(after, name);
        if (other == nullptr) {
            leave_out(name, "only in the run before");
            continue;
        }
        const Comparable both = comparable(before, one, after, *other);
        if (!both.why_not.empty()) {
            leave_out(name, both.why_not);
            continue;
        }
        auto compared = compare_case(before, *one.recorded, after, *other->recorded, files);
        if (!compared) return compared.error();
        comparison.cases.push_back(std::move(*compared));
    }
    for (const Judgement::Match& other : after.judgement.matches)
        if (match_named(before, other.recorded->name) == nullptr)
            leave_out(other.recorded->name, "only in the run after");
    return {};
}

/// What the board of a channel is, where one reproduces its captures without another channel's help.
const BoardDescription* board_of(const ExplainedChannels& one) {
    const SearchResult& search = one.finding.search;
    if (one.finding.kind == FindingKind::as_declared) return &search.declared.hypothesis.board;
    if (search.classes.empty()) return nullptr;
    const Hypothesis& first = search.classes.front().members.front().hypothesis;
    const bool is_alone = std::none_of(first.changes.begin(), first.changes.end(),
                                       [](const Change& change) { return change.slot == Slot::channels; });
    return is_alone ? &first.board : nullptr;
}

Outcome<void> explain_change(const RunPart& before, const RunPart& after, const Files& files,
                             const std::function<bool(int channel)>& go_on, Comparison& comparison) {
    if (before.plan.filter_is_unknown) {
        comparison.not_explained.push_back("the plan of the run before knows no filter");
        return {};
    }
    auto was = explain_runs({before}, files, go_on);
    if (!was) return was.error();
    StartBoards boards(static_cast<std::size_t>(before.plan.signal.channels));
    for (const ExplainedChannels& one : was->channels) {
        const BoardDescription* const board = board_of(one);
        for (const int channel : one.channels) {
            if (board != nullptr) {
                boards[static_cast<std::size_t>(channel) - 1] = *board;
            } else {
                comparison.not_explained.push_back("channel " + std::to_string(channel) +
                                                   ": what its board did before is not known");
            }
        }
    }
    comparison.board_before = std::move(*was);
    auto change = explain_runs({after}, files, go_on, {}, &boards);
    if (!change) return change.error();
    comparison.change = std::move(*change);
    return {};
}

ComparedRun facts_of(const RunPart& part) {
    return {part.record.folder, part.plan.file, part.record.run.started_utc, part.record.run.board.build_id};
}

}  // namespace

Outcome<Comparison> compare_runs(const RunPart& before, const RunPart& after, const Files& files,
                                 const std::function<bool(int channel)>& go_on) {
    if (auto same = check_signals(before, after); !same) return same.error();
    Comparison comparison;
    comparison.before = facts_of(before);
    comparison.after = facts_of(after);
    comparison.has_lsb = before.plan.signal.output.has_lsb();
    if (auto done = compare_cases(before, after, files, comparison); !done) return done.error();
    if (comparison.cases.empty()) {
        return Error{ErrorKind::input, after.record.folder,
                     "no case of it can be compared with one of " + printable(before.record.folder) +
                         (comparison.left_out.empty() ? "" : ": " + comparison.left_out.front()),
                     "compare runs of one plan"};
    }
    if (!comparison.differs()) return comparison;
    if (auto done = explain_change(before, after, files, go_on, comparison); !done) return done.error();
    return comparison;
}

}  // namespace halflsb
