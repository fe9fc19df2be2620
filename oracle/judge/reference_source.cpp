#include "oracle/judge/reference_source.hpp"

#include <algorithm>

#include "oracle/arithmetic/declared.hpp"

namespace halflsb {

ReferenceBlock ReferenceBlock::first(std::size_t count) const {
    const auto head = [count](auto span) { return span.first(std::min(count, span.size())); };
    return {first_index, head(codes), head(stimulus), head(declared), head(design), head(twin)};
}

ReferenceBlock ReferenceBlock::after(std::size_t count) const {
    const auto rest = [count](auto span) { return span.subspan(std::min(count, span.size())); };
    return {first_index + static_cast<std::int64_t>(std::min(count, codes.size())),
            rest(codes),
            rest(stimulus),
            rest(declared),
            rest(design),
            rest(twin)};
}

WantedReferences wanted_references(const Case& the_case, int channel) {
    WantedReferences wanted;
    for (const Rule& rule : the_case.rules) {
        wanted.design =
            wanted.design || (is_driven(the_case, channel) && std::holds_alternative<ResponseRule>(rule.kind));
        wanted.twin = wanted.twin || std::holds_alternative<ExactRule>(rule.kind);
    }
    return wanted;
}

ReferenceSource::ReferenceSource(const Plan& plan, const Case& the_case, int channel, WantedReferences wanted)
    : signal_(plan.signal) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    declared_filter_ = make_declared_filter(chain, plan.signal.output, plan.signal.output_per_input);
    if (wanted.design) design_filter_ = make_filter(chain);
    if (!wanted.twin) return;
    const auto described =
        describe(chain, plan.signal.input, plan.signal.output, plan.signal.output_per_input).described;
    if (described) twin_ = make_twin(*described);
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
    if (twin_) {
        twin_codes_.resize(codes.size());
        twin_->process(codes, twin_codes_);
    }
    const ReferenceBlock block{next_index_, codes, values_, declared_, design_, twin_codes_};
    next_index_ += static_cast<std::int64_t>(codes.size());
    return block;
}

}  // namespace halflsb
