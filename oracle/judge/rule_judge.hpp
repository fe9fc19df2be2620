// Judges one rule on one channel of a case, as the response comes, in constant memory.
//
// Each kind of rule has its judge in a file of its own, with three functions beside it: what it wants to see, the
// judge, and what a case must be to be judged by it at all. rule_kinds.hpp chooses among them; a kind without them does
// not compile.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/plots.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/verdict.hpp"

namespace halflsb {

/// Samples of the response, and what the references say of them at the lag of the pass. All spans have one length.
struct AlignedBlock {
    std::int64_t first_index = 0;  ///< of the response
    ReferenceBlock reference;
    std::span<const Code> codes;
    std::span<const double> values;  ///< of the codes
};

class RuleJudge {
public:
    virtual ~RuleJudge() = default;
    /// The next samples that are judged, in order.
    virtual void add(const AlignedBlock& block) = 0;
    /// Nothing that may follow changes the verdict.
    virtual bool is_decided() const { return false; }
    /// No more samples follow. Once, before the verdict.
    virtual void finish() {}
    /// On all that was added. `rails` are those of the reference; nullptr when nobody asked for them.
    virtual RuleVerdict verdict(const RailWatch* rails) const = 0;
    /// Appends what a person would want to see of it, or adds its limits to what is there: the plots of samples over
    /// time come first. Only where the channel wants plots, and after finish().
    virtual void plot(CasePlots&) const {}
};

/// What a judge is made from; all of it outlives the judge.
struct JudgedChannel {
    const Plan& plan;
    const Case& the_case;
    int channel;            ///< counted from 1
    DerivedLimits derived;  ///< asked_limits() of the channel
    int lag_samples = 0;    ///< of the pass that adds to it
    bool wants_plots = false;

    bool is_driven() const { return halflsb::is_driven(the_case, channel); }
};

}  // namespace halflsb
