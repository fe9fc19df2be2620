#include "runner/explain_run.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

#include "oracle/explain/channel_search.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/case_rates.hpp"
#include "runner/record/capture_file.hpp"
#include "runner/report/people.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

/// What one channel got and returned in all cases that were looked at.
struct ChannelCaptures {
    std::vector<ChannelCapture> captures;
    std::int64_t samples = 0;
    double peak_ratio = 0.0;
};

double peak_ratio_of(const SampleFormat& format, const std::vector<Code>& codes) {
    double peak = 0.0;
    for (const Code code : codes) peak = std::max(peak, std::abs(value_of(format, code)));
    return std::min(1.0, peak / full_scale_value(format));
}

class Gathering {
public:
    Gathering(int channels, const Files& files, const ExplainedLength& length)
        : files_(files), length_(length), channels_(static_cast<std::size_t>(channels)) {}

    Outcome<void> add(const RunPart& part) {
        for (const Judgement::Match& match : part.judgement.matches) {
            if (auto added = add(part, match); !added) return added;
        }
        return {};
    }

    std::vector<ChannelCaptures>& channels() { return channels_; }
    std::vector<std::string>& left_out() { return left_out_; }

private:
    Outcome<void> add(const RunPart& part, const Judgement::Match& match) {
        const Case& the_case = part.plan.cases[match.case_index];
        if (const std::string why = why_not(the_case, *match.recorded); !why.empty()) {
            left_out_.push_back(printable(the_case.name) + ": " + why);
            state_is_known_ = false;
            return {};
        }
        return read(part, the_case, *match.recorded);
    }

    std::string why_not(const Case& the_case, const CaseResult& recorded) const {
        if (recorded.verdict == CaseVerdict::invalid) return "its capture is not whole";
        if (the_case.filter) return "at its rate the filter has another design";
        if (the_case.start == Start::running && !state_is_known_)
            return "it goes on in a state that nobody knows, the case before was not looked at to its end";
        if (channels_.front().samples >= length_.channel_samples) return "the cases before it are enough";
        return "";
    }

    Outcome<void> read(const RunPart& part, const Case& the_case, const CaseResult& recorded) {
        const Signal& signal = part.plan.signal;
        const std::string shown = part.record.path_of(recorded.capture_file);
        const auto path = path_inside(files_, part.record.folder, recorded.capture_file);
        if (!path) return path.error();
        auto capture = CaptureFile::open(files_, *path, shown, signal.output, signal.channels);
        if (!capture) return capture.error();
        const CaseRates rates(part.plan, the_case);
        const std::int64_t sent = std::min(recorded.stimulus.samples, length_.case_samples);
        const std::int64_t returned = std::min(rates.returned(sent), capture->samples());
        state_is_known_ = sent == recorded.stimulus.samples;
        const auto width = channels_.size();
        std::vector<Code> codes_in(static_cast<std::size_t>(sent) * width),
            codes_out(static_cast<std::size_t>(returned) * width);
        fill_case_codes(part.plan, the_case, 0, codes_in);
        if (auto got = capture->read(0, codes_out); !got) return got.error();
        for (std::size_t c = 0; c < width; ++c) {
            ChannelCapture one;
            one.case_name = the_case.name;
            one.start = the_case.start;
            one.start_samples = the_case.start == Start::flush ? recorded.start_samples : the_case.start_samples;
            one.sent = of_channel(codes_in, c);
            one.response = of_channel(codes_out, c);
            channels_[c].samples += returned;
            channels_[c].peak_ratio = std::max(channels_[c].peak_ratio, peak_ratio_of(signal.input, one.sent));
            channels_[c].captures.push_back(std::move(one));
        }
        return {};
    }

    std::vector<Code> of_channel(const std::vector<Code>& codes, std::size_t channel) const {
        std::vector<Code> one;
        for (std::size_t i = channel; i < codes.size(); i += channels_.size()) one.push_back(codes[i]);
        return one;
    }

    const Files& files_;
    ExplainedLength length_;
    std::vector<ChannelCaptures> channels_;
    std::vector<std::string> left_out_;
    bool state_is_known_ = true;
};

bool is_same(const EquivalenceClass& a, const EquivalenceClass& b) {
    return std::equal(
        a.members.begin(), a.members.end(), b.members.begin(), b.members.end(),
        [](const Candidate& ours, const Candidate& theirs) { return ours.hypothesis == theirs.hypothesis; });
}

/// What is unknown of two channels is not known to be the same.
bool is_same(const Finding& a, const Finding& b) {
    const auto &ours = a.search.classes, &theirs = b.search.classes;
    return a.kind != FindingKind::unknown && a.kind == b.kind && a.is_inferred == b.is_inferred &&
           a.search.declared.hypothesis == b.search.declared.hypothesis &&
           std::equal(ours.begin(), ours.end(), theirs.begin(), theirs.end(),
                      [](const EquivalenceClass& one, const EquivalenceClass& other) { return is_same(one, other); });
}

/// What one channel does to another is looked at before all that a channel may do alone.
Finding finding_of(const Signal& signal, const std::vector<ChannelBoard>& boards, std::size_t channel,
                   const std::function<bool()>& go_on) {
    CaptureSet captures(signal, *boards[channel].captures);
    if (boards.size() > 1) {
        const CaptureFit declared = captures.until_first_wrong(boards[channel].declared);
        const bool is_wrong = declared.could_run && !declared.is_exact();
        if (auto cause = is_wrong ? channel_cause(signal, boards, channel) : std::nullopt) {
            Finding finding;
            finding.kind = FindingKind::found;
            finding.search.declared = {{boards[channel].declared, {}, 0.0}, declared};
            finding.search.classes.push_back({{std::move(*cause)}, ""});
            return finding;
        }
    }
    return find_cause(boards[channel].declared, captures, go_on);
}

std::vector<PlanPosition> positions_of(const Plan& plan, int channel) {
    std::vector<PlanPosition> positions;
    for (const std::size_t stage : stages_of_channel(plan.filter, channel))
        if (stage < plan.filter_positions.size()) positions.push_back(plan.filter_positions[stage]);
    return positions;
}

}  // namespace

Outcome<Explanation> explain_runs(const std::vector<RunPart>& parts, const Files& files,
                                  const std::function<bool(int channel)>& go_on, const ExplainedLength& length,
                                  const StartBoards* begin_with) {
    const RecordedRun& record = parts.front().record;
    const Plan& plan = parts.front().plan;
    if (plan.filter_is_unknown) {
        return Error{ErrorKind::input, plan.file, "its filter is unknown: there is nothing to explain the response by",
                     "say kind and design of the filter in a plan, and capture with it"};
    }
    Gathering gathering(plan.signal.channels, files, length);
    for (const RunPart& part : parts) {
        if (auto added = gathering.add(part); !added) return added.error();
    }
    Explanation explanation;
    explanation.folder = record.folder;
    explanation.plan_file = plan.file;
    explanation.title = plan.title;
    explanation.left_out = std::move(gathering.left_out());
    const auto width = gathering.channels().size();
    std::vector<std::vector<ChannelCapture>> captures(width);
    std::vector<ChannelBoard> boards(width);
    for (std::size_t c = 0; c < width; ++c) {
        captures[c] = std::move(gathering.channels()[c].captures);
        boards[c].declared.filter = chain_of_channel(plan.filter, static_cast<int>(c) + 1);
        if (begin_with != nullptr && (*begin_with)[c]) boards[c].declared = *(*begin_with)[c];
        boards[c].captures = &captures[c];
    }
    for (std::size_t c = 0; c < width && !captures[c].empty(); ++c) {
        if (begin_with != nullptr && !(*begin_with)[c]) continue;
        ExplainedChannels explained;
        explained.is_since_a_run = begin_with != nullptr;
        const int channel = static_cast<int>(c) + 1;
        explained.channels = {channel};
        explained.samples = gathering.channels()[c].samples;
        explained.peak_ratio = gathering.channels()[c].peak_ratio;
        explained.stages = positions_of(plan, channel);
        for (const ChannelCapture& capture : captures[c]) explained.cases.push_back(capture.case_name);
        explained.finding = finding_of(plan.signal, boards, c, [&] { return go_on(channel); });
        const auto same =
            std::find_if(explanation.channels.begin(), explanation.channels.end(),
                         [&](const ExplainedChannels& other) { return is_same(other.finding, explained.finding); });
        if (same != explanation.channels.end())
            same->channels.push_back(channel);
        else
            explanation.channels.push_back(std::move(explained));
    }
    return explanation;
}

Outcome<std::vector<ChannelCapture>> channel_captures(const RunPart& part, const Files& files, int channel) {
    Gathering gathering(part.plan.signal.channels, files, {});
    if (auto added = gathering.add(part); !added) return added.error();
    return std::move(gathering.channels()[static_cast<std::size_t>(channel) - 1].captures);
}

}  // namespace halflsb
