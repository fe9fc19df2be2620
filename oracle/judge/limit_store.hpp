// What was derived from the arithmetic of a plan, kept so that a thousand cases of one filter cost one derivation.
//
// Entries are found by value (stages with all their words, formats, gain; samples, start), so a plan that was changed
// or copied finds what is right for it, and nothing that is told hangs on what was asked before. Plans that share one
// belong to one thread. At most 64 filters are kept.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <tuple>
#include <unordered_map>
#include <vector>

#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/limit_cycle.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

class LimitStore {
public:
    /// What a case of this channel (counted from 1) is held to, in values at gain 1: the bound, with what may be left
    /// of the case before. nullopt where the arithmetic cannot be described.
    std::optional<ErrorBound> judged_bound(const Plan& plan, const Case& the_case, int channel);
    /// What the arithmetic of a channel says; nullopt where it cannot be described.
    std::optional<DescribedChain> described(const Plan& plan, const Case& the_case, int channel);
    /// settling.hpp says of what, and what is left of it: half_step over full_scale.
    std::optional<std::int64_t> settling_samples(const Plan& plan, const Case& the_case, int channel, double full_scale,
                                                 double half_step);
    /// What may remain in silence; nullopt where the arithmetic cannot be described.
    std::optional<SilenceBound> silence_bound(const Plan& plan, const Case& the_case, int channel);
    BoundUse bound_use(const Plan& plan, const Case& the_case, int channel);

private:
    struct KnownChain {
        FilterChain chain;
        SampleFormat input, output;
        double output_per_input;
        std::optional<BoundDeriver> deriver;  ///< none: cannot be described
        std::optional<SilenceBound> silence;  ///< once it was asked for; nothing was searched
        std::vector<std::pair<LeftoverUse, Leftover>> leftovers;
        struct Settling {
            double ratio;  ///< half_step over full_scale
            std::optional<std::int64_t> samples;
        };
        std::vector<Settling> settlings = {};
    };
    struct KnownRms {
        std::shared_ptr<const Stimulus> stimulus;  ///< held, so that no other gets its address
        SampleFormat input;
        Rounding quantise;
        double rms;
    };
    KnownChain& known_chain(FilterChain chain, const Signal& signal);
    Leftover leftover_of(KnownChain& known, const Plan& plan, const Case& the_case);
    double rms_of_input(const Plan& plan, const Case& the_case);

    std::vector<std::unique_ptr<KnownChain>> chains_;
    std::unordered_map<const Stimulus*, KnownRms> rms_;
};

}  // namespace halflsb
