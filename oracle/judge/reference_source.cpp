#include "oracle/judge/reference_source.hpp"

#include "oracle/arithmetic/declared.hpp"

namespace halflsb {

ReferenceSource::ReferenceSource(const Plan& plan, const Case& the_case, int channel, bool with_design)
    : signal_(plan.signal) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    declared_filter_ = make_declared_filter(chain, plan.signal.output, plan.signal.output_per_input);
    if (with_design) design_filter_ = make_filter(chain);
}

ReferenceBlock ReferenceSource::next(std::span<const Code> codes) {
    values_.resize(codes.size());
    declared_.resize(codes.size());
    values_of(signal_.input, codes, values_);
    declared_filter_->process(values_, declared_);
    if (signal_.output_per_input != 1.0) {
        for (double& value : values_) value *= signal_.output_per_input;
    }
    if (design_filter_) {
        design_.resize(codes.size());
        design_filter_->process(values_, design_);
    }
    const ReferenceBlock block{next_index_, codes, values_, declared_, design_};
    next_index_ += static_cast<std::int64_t>(codes.size());
    return block;
}

}  // namespace halflsb
