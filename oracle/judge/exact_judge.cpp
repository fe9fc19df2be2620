#include "oracle/judge/exact_judge.hpp"

#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/arithmetic/described.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/leftover.hpp"

namespace halflsb {
namespace {

class ExactJudge final : public RuleJudge {
public:
    ExactJudge(const Rule& asked, const SampleFormat& output) : asked_(asked), output_(output), watch_(output) {}
    void add(const AlignedBlock& block) override;
    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    const Rule& asked_;
    SampleFormat output_;
    FirstBadWatch watch_;
    std::int64_t samples_ = 0, differing_ = 0, first_ = -1;
    double largest_lsb_ = 0.0;
    std::vector<double> twin_values_;
};

void ExactJudge::add(const AlignedBlock& block) {
    const std::span<const Code> twin = block.reference.twin, response = block.codes;
    if (twin.size() != response.size()) return;  // no twin: the reader refuses the rule, and it never passes
    for (std::size_t i = 0; i < response.size(); ++i) {
        if (response[i] == twin[i]) continue;
        if (differing_++ == 0) first_ = block.first_index + static_cast<std::int64_t>(i);
        largest_lsb_ =
            std::max(largest_lsb_, std::fabs(static_cast<double>(response[i]) - static_cast<double>(twin[i])));
    }
    samples_ += static_cast<std::int64_t>(response.size());
    twin_values_.resize(twin.size());
    values_of(output_, twin, twin_values_);
    watch_.add(block.first_index, block.reference.codes, twin_values_, response, first_);
}

RuleVerdict ExactJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "twin", {}, {}, watch_.found()};
    if (samples_ == 0) {
        verdict.reason = "no sample was compared";
        return verdict;
    }
    JudgedFigure figure{"differing samples",
                        judged(static_cast<double>(differing_)),
                        0.0,
                        std::nullopt,
                        "samples",
                        false,
                        pass_or_fail(differing_ == 0),
                        {}};
    figure.margin = judged(0.0 - *figure.value);
    verdict.verdict = figure.verdict;
    verdict.figures.push_back(std::move(figure));
    if (differing_ == 0) {
        verdict.reason = "every sample equals the declared arithmetic";
        return verdict;
    }
    verdict.reason = std::to_string(differing_) + " of " + std::to_string(samples_) +
                     (differing_ == 1 ? " samples differs" : " samples differ") + " from the declared arithmetic";
    if (output_.has_lsb()) {
        verdict.reason += (differing_ == 1 ? ", by " : ", by up to ") +
                          std::to_string(static_cast<std::int64_t>(largest_lsb_)) + " LSB";
    }
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const ExactRule&, bool) { return {.twin = true}; }

std::unique_ptr<RuleJudge> make_judge(const ExactRule&, const Rule& asked, const JudgedChannel& channel) {
    return std::make_unique<ExactJudge>(asked, channel.plan.signal.output);
}

void check(const ExactRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    bool forgets = true;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto result = describe(chain_of(plan, the_case, channel), plan.signal.input, plan.signal.output,
                                     plan.signal.output_per_input);
        if (!result.described) return;  // the reader has refused it
        if (const auto& missing = result.described->missing) {
            const bool is_alone = result.described->stages.size() == 1;
            refusals.push_back({asked.position,
                                "exact needs the whole arithmetic, and " +
                                    (is_alone ? "" : "of stage " + std::to_string(missing->stage + 1) + " ") +
                                    missing->error.problem,
                                missing->error.remedy});
            return;
        }
        const auto samples = samples_to_forget(*result.described);
        forgets = forgets && samples && *samples <= the_case.start_samples;
    }
    if (the_case.start == Start::running || (the_case.start == Start::flush && !forgets)) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" starts " +
                                (the_case.start == Start::running ? "running" : "with a flush") +
                                ", which leaves the firmware in a state that nobody knows to the bit",
                            "start it with \"reset\", or write the rule in another case"});
    }
}

}  // namespace halflsb
