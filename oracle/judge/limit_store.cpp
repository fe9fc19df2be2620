#include "oracle/judge/limit_store.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/filters/flush.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/settling.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t rms_samples = 65536;
constexpr std::size_t most_chains = 64, most_leftovers = 256, most_stimuli = std::size_t{1} << 16;

/// Only what is drawn independently from sample to sample is white.
bool is_white_noise(const Case& the_case) { return the_case.shape == "noise" && !the_case.stimulus_values.has("add"); }

double measured_rms(const Plan& plan, const Case& the_case) {
    const auto count = static_cast<std::size_t>(std::min(the_case.stimulus->length_samples(), rms_samples));
    std::vector<Code> codes(count);
    std::vector<double> values(count);
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, 0, codes);
    values_of(plan.signal.input, codes, values);
    double sum = 0.0;
    for (const double value : values) sum += value * value;
    return std::sqrt(sum / static_cast<double>(count));
}

}  // namespace

std::shared_ptr<LimitStore> make_limit_store() { return std::make_shared<LimitStore>(); }

double LimitStore::rms_of_input(const Plan& plan, const Case& the_case) {
    const auto found = rms_.find(the_case.stimulus.get());
    if (found != rms_.end() && found->second.input == plan.signal.input &&
        found->second.quantise == plan.signal.quantise)
        return found->second.rms;
    if (rms_.size() >= most_stimuli) rms_.clear();
    const double rms = measured_rms(plan, the_case);
    rms_[the_case.stimulus.get()] = {the_case.stimulus, plan.signal.input, plan.signal.quantise, rms};
    return rms;
}

LimitStore::KnownChain& LimitStore::known_chain(FilterChain chain, const Signal& signal) {
    for (const auto& known : chains_) {
        if (known->input == signal.input && known->output == signal.output &&
            known->output_per_input == signal.output_per_input && known->chain == chain)
            return *known;
    }
    if (chains_.size() >= most_chains) chains_.erase(chains_.begin());
    auto described = describe(chain, signal.input, signal.output, signal.output_per_input).described;
    auto known = std::make_unique<KnownChain>(KnownChain{
        std::move(chain), signal.input, signal.output, signal.output_per_input, std::nullopt, std::nullopt, {}});
    if (described) known->deriver.emplace(std::move(*described));
    chains_.push_back(std::move(known));
    return *chains_.back();
}

Leftover LimitStore::leftover_of(KnownChain& known, const Plan& plan, const Case& the_case) {
    const LeftoverUse use = leftover_use(plan, the_case);
    for (const auto& [other, left] : known.leftovers) {
        if (other == use) return left;
    }
    if (known.leftovers.size() >= most_leftovers) known.leftovers.clear();
    const Leftover left = leftover(known.deriver->chain(), plan, the_case);
    known.leftovers.emplace_back(use, left);
    return left;
}

std::optional<std::int64_t> LimitStore::settling_samples(const Plan& plan, const Case& the_case, int channel,
                                                         double full_scale, double half_step) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    KnownChain& known = known_chain(chain, plan.signal);
    const double ratio = half_step / full_scale;
    for (const auto& settling : known.settlings) {
        if (settling.ratio == ratio) return settling.samples;
    }
    std::optional<std::int64_t> most = 0;
    // The board runs the rounded coefficients, whose poles may be the slower ones.
    for (const FilterChain& run : {chain, declared_chain(chain)}) {
        const auto samples =
            most ? flush_samples_within(run, full_scale, half_step, longest_settling_samples) : std::nullopt;
        most = samples ? std::optional(std::max(*most, *samples)) : std::nullopt;
    }
    known.settlings.push_back({ratio, most});
    return most;
}

BoundUse LimitStore::bound_use(const Plan& plan, const Case& the_case, int channel) {
    BoundUse use;
    use.samples = std::max<std::int64_t>(judged_samples(plan, the_case), 1);
    use.has_past = the_case.start != Start::reset;
    use.noise_like = is_driven(the_case, channel) && is_white_noise(the_case);
    if (use.noise_like) use.input_rms = rms_of_input(plan, the_case);
    return use;
}

std::optional<DescribedChain> LimitStore::described(const Plan& plan, const Case& the_case, int channel) {
    const KnownChain& known = known_chain(chain_of(plan, the_case, channel), plan.signal);
    if (!known.deriver) return std::nullopt;
    return known.deriver->chain();
}

std::optional<SilenceBound> LimitStore::silence_bound(const Plan& plan, const Case& the_case, int channel) {
    KnownChain& known = known_chain(chain_of(plan, the_case, channel), plan.signal);
    if (!known.deriver) return std::nullopt;
    if (!known.silence) known.silence = halflsb::silence_bound(known.deriver->chain(), 0);
    return known.silence;
}

std::optional<ErrorBound> LimitStore::judged_bound(const Plan& plan, const Case& the_case, int channel) {
    KnownChain& known = known_chain(chain_of(plan, the_case, channel), plan.signal);
    if (!known.deriver) return std::nullopt;
    ErrorBound bound = known.deriver->derive(bound_use(plan, the_case, channel));
    const Leftover left = leftover_of(known, plan, the_case);
    bound.lower -= left.largest;
    bound.upper += left.largest;
    bound.rms += left.rms;
    bound.worst_rms += left.rms;
    for (double* lower : {&bound.bias_lower, &bound.worst_bias_lower}) *lower -= left.bias;
    for (double* upper : {&bound.bias_upper, &bound.worst_bias_upper}) *upper += left.bias;
    // A clipped mean of what is left is one of sizes, as its bound is.
    bound.clipped_bias_lower -= left.bias;
    bound.clipped_bias_upper += left.bias;
    return bound;
}

}  // namespace halflsb
