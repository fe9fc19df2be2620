#include "tests/mutants/trial.hpp"

#include <algorithm>
#include <chrono>
#include <cstdio>
#include <cstdlib>
#include <random>

#include "oracle/explain/channel_search.hpp"
#include "oracle/explain/probes.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/companion_case.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/standard_set.hpp"
#include "tests/support/fake_files.hpp"

namespace halflsb::mutants {
namespace {

[[noreturn]] void give_up(const std::string& why) {
    std::fprintf(stderr, "%s\n", why.c_str());
    std::abort();
}

std::vector<Code> of_channel(const std::vector<Code>& codes, std::size_t channel, std::size_t width) {
    std::vector<Code> one;
    one.reserve(codes.size() / width);
    for (std::size_t i = channel; i < codes.size(); i += width) one.push_back(codes[i]);
    return one;
}

std::vector<Code> sent_codes(const Plan& plan, const Case& the_case) {
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    std::vector<Code> sent(length * static_cast<std::size_t>(plan.signal.channels));
    fill_case_codes(plan, the_case, 0, sent);
    return sent;
}

BaseResponse base_of(const std::vector<Code>& codes, std::size_t width) {
    BaseResponse base;
    base.samples = static_cast<std::int64_t>(codes.size() / width);
    base.block_samples = 240;
    base.read = [&codes, width](std::int64_t first, std::span<Code> out) -> Outcome<void> {
        std::copy_n(codes.begin() + first * static_cast<std::ptrdiff_t>(width), out.size(), out.begin());
        return {};
    };
    return base;
}

std::string failure_of(const Plan& plan, const Case& the_case, const std::vector<Code>& codes, BaseResponse base) {
    CaseJudge judge(plan, the_case, false, std::move(base));
    const auto width = static_cast<std::size_t>(plan.signal.channels);
    for (std::size_t first = 0; first < codes.size(); first += 256 * width)
        judge.add(std::span(codes).subspan(first, std::min(256 * width, codes.size() - first)));
    const auto judgement = judge.finish([&](std::int64_t first, std::span<Code> out) -> Outcome<void> {
        std::copy_n(codes.begin() + first * static_cast<std::ptrdiff_t>(width), out.size(), out.begin());
        return {};
    });
    if (!judgement) give_up(judgement.error().problem);
    for (const RuleVerdict& verdict : judgement->rules)
        if (verdict.verdict == Verdict::fail) return the_case.name + ": " + std::string(kind_name(verdict.rule));
    return "";
}

}  // namespace

Plan plan_of(const FilterUnderTest& filter) {
    FakeFiles files;
    files.contents["plan.toml"] = filter.plan;
    auto read = read_plan("plan.toml", files);
    if (const auto* problems = std::get_if<ReadProblems>(&read))
        give_up(filter.name + ": " + problems->texts.front() + "\n" + filter.plan);
    Plan plan = std::get<Plan>(std::move(read));
    std::erase_if(plan.cases, [](const Case& the_case) {
        return std::find(the_case.labels.begin(), the_case.labels.end(), long_label) != the_case.labels.end();
    });
    return plan;
}

std::vector<std::vector<Code>> responses_of(Board& board, const Plan& plan) {
    const auto width = static_cast<std::size_t>(plan.signal.channels);
    std::vector<std::vector<Code>> all;
    for (const Case& the_case : plan.cases) {
        if (the_case.start != Start::reset) give_up("a case of the standard set does not begin with a reset");
        const std::vector<Code> sent = sent_codes(plan, the_case);
        std::vector<Code> back;
        board.reset();
        board.process(sent, back);
        const CaseRates rates(plan, the_case);
        const auto instants = static_cast<std::size_t>(rates.returned(the_case.stimulus->length_samples()));
        while (!back.empty() && back.size() < instants * width) back.push_back(back[back.size() - width]);
        back.resize(instants * width);
        all.push_back(std::move(back));
    }
    return all;
}

std::string first_failure(const Plan& plan, const std::vector<std::vector<Code>>& responses) {
    const auto width = static_cast<std::size_t>(plan.signal.channels);
    for (std::size_t i = 0; i < plan.cases.size(); ++i) {
        const Case& the_case = plan.cases[i];
        BaseResponse base;
        if (the_case.companion) {
            const auto found = std::find_if(plan.cases.begin(), plan.cases.end(),
                                            [&](const Case& other) { return other.name == the_case.companion->base; });
            if (found == plan.cases.end()) give_up("a companion without its base");
            base = base_of(responses[static_cast<std::size_t>(found - plan.cases.begin())], width);
        }
        if (std::string failure = failure_of(plan, the_case, responses[i], std::move(base)); !failure.empty())
            return failure;
    }
    return "";
}

Explained explained(const Plan& plan, const std::vector<std::vector<Code>>& responses) {
    // The lengths of ExplainedLength (runner/explain_run.hpp).
    constexpr std::int64_t case_samples = 65'536, channel_samples = 1 << 21;
    const auto width = static_cast<std::size_t>(plan.signal.channels);
    std::vector<std::vector<ChannelCapture>> captures(width);
    std::int64_t samples = 0;
    for (std::size_t i = 0; i < plan.cases.size() && samples < channel_samples; ++i) {
        const Case& the_case = plan.cases[i];
        const CaseRates rates(plan, the_case);
        const std::int64_t sent = std::min(the_case.stimulus->length_samples(), case_samples);
        const std::int64_t returned = rates.returned(sent);
        const std::vector<Code> codes = sent_codes(plan, the_case);
        for (std::size_t c = 0; c < width; ++c) {
            ChannelCapture one;
            one.case_name = the_case.name;
            one.sent = of_channel(codes, c, width);
            one.sent.resize(static_cast<std::size_t>(sent));
            one.response = of_channel(responses[i], c, width);
            one.response.resize(static_cast<std::size_t>(returned));
            captures[c].push_back(std::move(one));
        }
        samples += returned;
    }
    std::vector<ChannelBoard> boards(width);
    for (std::size_t c = 0; c < width; ++c) {
        boards[c].declared.filter = chain_of_channel(plan.filter, static_cast<int>(c) + 1);
        boards[c].captures = &captures[c];
    }
    Explained result;
    for (std::size_t c = 0; c < width; ++c) {
        const auto start = std::chrono::steady_clock::now();
        CaptureSet set(plan.signal, captures[c]);
        const bool is_wrong = !set.until_first_wrong(boards[c].declared).is_exact();
        if (auto cause = is_wrong && width > 1 ? channel_cause(plan.signal, boards, c) : std::nullopt) {
            result.finding.kind = FindingKind::found;
            result.finding.search.classes.push_back({{std::move(*cause)}, ""});
        } else {
            result.finding = find_cause(boards[c].declared, set, [] { return true; });
        }
        result.seconds += std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
        if (result.finding.kind != FindingKind::as_declared) break;
    }
    return result;
}

std::vector<std::vector<Code>> further_stimuli(const Signal& signal) {
    const auto width = static_cast<std::size_t>(signal.channels);
    std::vector<std::vector<Code>> all;
    for (const Probe& probe : probes_for(signal)) {
        std::vector<Code> codes;
        for (std::size_t n = 0; n < probe.codes.size(); ++n)
            for (std::size_t c = 0; c < width; ++c) codes.push_back(probe.codes[(n + c * 1021) % probe.codes.size()]);
        all.push_back(std::move(codes));
    }
    if (!signal.input.has_lsb()) return all;
    std::mt19937_64 random(20261203);
    const std::int64_t half = std::int64_t{1} << (signal.input.word_bits - 1);
    std::vector<Code> noise(65536 * width);
    for (Code& code : noise)
        code = static_cast<Code>((static_cast<std::int64_t>(random() >> 32) & (2 * half - 1)) - half);
    all.push_back(std::move(noise));
    return all;
}

std::vector<std::vector<Code>> further_responses(Board& board, const std::vector<std::vector<Code>>& stimuli) {
    std::vector<std::vector<Code>> all;
    for (const std::vector<Code>& codes : stimuli) {
        all.emplace_back();
        board.reset();
        board.process(codes, all.back());
    }
    return all;
}

}  // namespace halflsb::mutants
