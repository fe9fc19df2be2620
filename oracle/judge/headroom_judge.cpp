#include "oracle/judge/headroom_judge.hpp"

#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/judge/error_figures.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/headroom_reach.hpp"
#include "oracle/judge/off_samples.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

class HeadroomJudge final : public RuleJudge {
public:
    HeadroomJudge(const HeadroomRule& rule, const Rule& asked, const JudgedChannel& channel, const ErrorEnds& ends)
        : rule_(rule),
          asked_(asked),
          channel_(channel),
          ends_(ends),
          // The ends are compared after rounding where they are limits (verdict.hpp): no sample is off for less.
          slack_(1e-8 * ends.largest()),
          samples_(channel.plan.signal.output, ends),
          watch_(channel.plan.signal.output),
          // After anything but a reset nobody knows the state to the bit.
          twin_holds_(channel.the_case.start == Start::reset) {}

    void add(const AlignedBlock& block) override;
    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    bool is_off(const AlignedBlock& block, std::size_t i, double twin);
    std::string driven_text() const;

    const HeadroomRule& rule_;
    const Rule& asked_;
    JudgedChannel channel_;
    ErrorEnds ends_;
    double slack_;
    OffSamples samples_;
    FirstBadWatch watch_;
    bool twin_holds_;  ///< every sample that is not off equalled it
    std::int64_t judged_ = 0, exempt_ = 0, first_off_ = -1;
    std::vector<double> twin_values_;
};

/// Counts what cannot be told.
bool HeadroomJudge::is_off(const AlignedBlock& block, std::size_t i, double twin) {
    const bool has_twin = !twin_values_.empty();
    const bool equals_twin = has_twin && block.codes[i] == block.reference.twin[i];
    bool off = false;
    if (block.reference.exempt.empty() || block.reference.exempt[i] == 0) {
        const double error = block.values[i] - block.reference.declared[i];
        off = !(error >= ends_.lowest - slack_ && error <= ends_.highest + slack_);
        ++judged_;
    } else if (has_twin && twin_holds_) {
        off = std::fabs(block.values[i] - twin) > ends_.highest - ends_.lowest + slack_;
        ++judged_;
    } else {
        ++exempt_;
    }
    if (!off && !equals_twin) twin_holds_ = false;
    return off;
}

void HeadroomJudge::add(const AlignedBlock& block) {
    const std::size_t count = block.codes.size();
    twin_values_.resize(block.reference.twin.size());
    values_of(channel_.plan.signal.output, block.reference.twin, twin_values_);
    for (std::size_t i = 0; i < count; ++i) {
        samples_.add(block.values[i]);
        const double twin = twin_values_.empty() ? 0.0 : twin_values_[i];
        if (!is_off(block, i, twin)) continue;
        const bool is_exempt = !block.reference.exempt.empty() && block.reference.exempt[i] != 0;
        samples_.add_off(block.values[i], is_exempt ? twin : block.reference.declared[i], block.reference.design[i]);
        if (first_off_ < 0) first_off_ = block.first_index + static_cast<std::int64_t>(i);
    }
    watch_.add(block.first_index, block.reference.codes, block.reference.declared, block.codes, first_off_);
}

/// The nodes that this case is about.
std::string HeadroomJudge::driven_text() const {
    std::string names;
    for (const DrivenNode& reach : driven_nodes(channel_.plan, channel_.the_case, channel_.channel)) {
        if (reach.ratio < driven_least_ratio) continue;
        names += (names.empty() ? "" : "; ") + reach.node + " to " + brief(100.0 * reach.ratio) + " %";
    }
    return names.empty() ? "" : "of the worst that any input can do, the stimulus drives " + names;
}

RuleVerdict HeadroomJudge::verdict(const RailWatch* rails) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "declared", {}, {}, watch_.found()};
    if (judged_ == 0) {
        verdict.reason = exempt_ > 0 ? exempt_text(exempt_, rails) : "no sample was compared";
        return verdict;
    }
    const std::int64_t others = samples_.others();
    const bool is_another_fault = others > samples_.clipped() + samples_.wrapped();
    verdict.figures.push_back(
        at_most("clipped", static_cast<double>(samples_.clipped()), rule_.max_clipped_samples, "samples"));
    verdict.figures.push_back(
        at_most("wrapped", static_cast<double>(samples_.wrapped()), rule_.max_wrapped_samples, "samples"));
    for (JudgedFigure& figure : verdict.figures) {
        if (is_another_fault && figure.verdict == Verdict::fail) figure.verdict = Verdict::undecided;
    }
    verdict.verdict = worst_of(verdict.figures);
    if (others > 0) {
        verdict.reason = std::to_string(others) + (others == 1 ? " sample errs" : " samples err") +
                         " otherwise than by clipping or wrapping; rules error and exact say what";
        verdict.verdict = std::max(verdict.verdict, Verdict::undecided);
    } else {
        verdict.reason = driven_text();
    }
    if (exempt_ > 0) verdict.reason += (verdict.reason.empty() ? "" : "; ") + exempt_text(exempt_, rails);
    if (verdict.verdict == Verdict::pass) verdict.first_bad.reset();
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const HeadroomRule&, bool is_driven) {
    return {.design = is_driven, .twin = is_driven, .rails = is_driven};
}

std::unique_ptr<RuleJudge> make_judge(const HeadroomRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    const auto derived = derived_limits(channel.plan, channel.the_case, channel.channel);
    if (!derived) return nullptr;  // check() has refused it
    return std::make_unique<HeadroomJudge>(rule, asked, channel, derived->error);
}

}  // namespace halflsb
