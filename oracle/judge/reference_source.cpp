#include "oracle/judge/reference_source.hpp"

#include <algorithm>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/derived_limits.hpp"

namespace halflsb {

ReferenceBlock ReferenceBlock::first(std::size_t count) const {
    const auto head = [count](auto span) { return span.first(std::min(count, span.size())); };
    return {first_index, head(codes), head(stimulus), head(declared), head(design), head(twin), head(exempt)};
}

ReferenceBlock ReferenceBlock::after(std::size_t count) const {
    const auto rest = [count](auto span) { return span.subspan(std::min(count, span.size())); };
    return {first_index + static_cast<std::int64_t>(std::min(count, codes.size())),
            rest(codes),
            rest(stimulus),
            rest(declared),
            rest(design),
            rest(twin),
            rest(exempt)};
}

WantedReferences wanted_references(const Case& the_case, int channel) {
    WantedReferences wanted;
    for (const Rule& rule : the_case.rules) {
        wanted.design =
            wanted.design || (is_driven(the_case, channel) && std::holds_alternative<ResponseRule>(rule.kind));
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        wanted.rails = wanted.rails || (error != nullptr && is_derived(*error));
        wanted.twin = wanted.twin || std::holds_alternative<ExactRule>(rule.kind);
    }
    return wanted;
}

ReferenceSource::ReferenceSource(const Plan& plan, const Case& the_case, int channel, WantedReferences wanted)
    : signal_(plan.signal) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    const auto described = described_channel(plan, the_case, channel);
    // The reader refuses what cannot be described; the design stands in so that nothing falls.
    declared_filter_ = described ? make_declared_filter(*described, plan.signal.output_per_input) : make_filter(chain);
    if (wanted.design) design_filter_ = make_filter(chain);
    if (wanted.twin && described) twin_ = make_twin(*described);
    if (wanted.rails && described) rails_.emplace(*described);
}

ReferenceBlock ReferenceSource::next(std::span<const Code> codes) {
    values_.resize(codes.size());
    declared_.resize(codes.size());
    values_of(signal_.input, codes, values_);
    declared_filter_->process(values_, declared_);
    if (rails_) {
        exempt_.resize(codes.size());
        rails_->add(values_, exempt_);
    }
    if (signal_.output_per_input != 1.0) {
        for (double& value : values_) value *= signal_.output_per_input;
    }
    if (design_filter_) {
        design_.resize(codes.size());
        design_filter_->process(values_, design_);
    }
    if (twin_) {
        twin_codes_.resize(codes.size());
        twin_->process(codes, twin_codes_);
    }
    const ReferenceBlock block{next_index_, codes, values_, declared_, design_, twin_codes_, exempt_};
    next_index_ += static_cast<std::int64_t>(codes.size());
    return block;
}

}  // namespace halflsb
