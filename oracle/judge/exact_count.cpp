#include "oracle/judge/exact_count.hpp"

#include <algorithm>
#include <cmath>
#include <string>

namespace halflsb {

ExactCount::ExactCount(const SampleFormat& output) : output_(output), watch_(output) {}

void ExactCount::add(std::int64_t first_index, std::span<const Code> stimulus, std::span<const Code> twin,
                     std::span<const Code> response) {
    if (twin.size() != response.size()) return;  // no twin: the reader refuses the rule, and it never passes
    for (std::size_t i = 0; i < response.size(); ++i) {
        if (response[i] == twin[i]) continue;
        if (differing_++ == 0) first_ = first_index + static_cast<std::int64_t>(i);
        largest_lsb_ =
            std::max(largest_lsb_, std::fabs(static_cast<double>(response[i]) - static_cast<double>(twin[i])));
    }
    samples_ += static_cast<std::int64_t>(response.size());
    twin_values_.resize(twin.size());
    values_of(output_, twin, twin_values_);
    watch_.add(first_index, stimulus, twin_values_, response, first_);
}

RuleVerdict ExactCount::verdict(const Rule& rule) const {
    RuleVerdict verdict{rule, Verdict::undecided, "twin", {}, {}, watch_.found()};
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
                        differing_ == 0,
                        {}};
    figure.margin = judged(0.0 - *figure.value);
    verdict.verdict = figure.passed ? Verdict::pass : Verdict::fail;
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

}  // namespace halflsb
