#include "oracle/judge/reference_source.hpp"

#include "oracle/arithmetic/declared.hpp"

namespace halflsb {

ReferenceSource::ReferenceSource(const Plan& plan, const Case& the_case, bool with_design)
    : signal_(plan.signal),
      stimulus_(the_case.stimulus),
      declared_filter_(make_declared_filter(plan.filter, plan.signal.output, plan.signal.output_per_input)),
      design_filter_(with_design ? make_filter(plan.filter) : nullptr) {}

ReferenceBlock ReferenceSource::next(std::size_t count) {
    codes_.resize(count);
    values_.resize(count);
    declared_.resize(count);
    fill_codes(*stimulus_, signal_.input, signal_.quantise, next_index_, codes_);
    values_of(signal_.input, codes_, values_);
    declared_filter_->process(values_, declared_);
    if (signal_.output_per_input != 1.0) {
        for (double& value : values_) value *= signal_.output_per_input;
    }
    if (design_filter_) {
        design_.resize(count);
        design_filter_->process(values_, design_);
    }
    const ReferenceBlock block{next_index_, codes_, values_, declared_, design_};
    next_index_ += static_cast<std::int64_t>(count);
    return block;
}

}  // namespace halflsb
