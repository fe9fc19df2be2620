#include "oracle/judge/reference_source.hpp"

#include <algorithm>
#include <cassert>

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

ReferenceSource::ReferenceSource(const Plan& plan, const Case& the_case, int channel, WantedReferences wanted)
    : signal_(plan.signal), rates_(plan, the_case) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    const auto described = described_channel(plan, the_case, channel);
    // The reader refuses what cannot be described; the design stands in so that nothing falls.
    declared_filter_ = described ? make_declared_filter(*described, plan.signal.output_per_input) : make_filter(chain);
    if (wanted.design) design_filter_ = make_filter(chain);
    if (wanted.twin && described) twin_ = make_twin(*described);
    if (wanted.rails && described) rails_.emplace(*described);
    if (!rates_.changes()) return;
    for (std::int64_t index = 0; index < rates_.cycle().outputs; ++index)
        newest_sent_.push_back(static_cast<std::size_t>(rates_.newest_sent(index)));
}

void ReferenceSource::to_returned(std::span<const Code> codes, std::size_t returned) {
    const auto sent_in_cycle = static_cast<std::size_t>(rates_.cycle().inputs);
    const auto up = static_cast<std::size_t>(rates_.ratio().up), down = static_cast<std::size_t>(rates_.ratio().down);
    returned_codes_.resize(returned);
    returned_values_.resize(returned);
    for (std::size_t i = 0; i < returned; ++i) {
        const std::size_t cycle = i / newest_sent_.size(), at = i % newest_sent_.size();
        returned_codes_[i] = codes[cycle * sent_in_cycle + newest_sent_[at]];
        returned_values_[i] = i * down % up == 0 ? static_cast<double>(up) * values_[i * down / up] : 0.0;
    }
}

ReferenceBlock ReferenceSource::next(std::span<const Code> codes) {
    assert(static_cast<std::int64_t>(codes.size()) % rates_.cycle().inputs == 0);
    const std::size_t returned = declared_filter_->outputs_for(codes.size());
    values_.resize(codes.size());
    declared_.resize(returned);
    values_of(signal_.input, codes, values_);
    declared_filter_->process(values_, declared_);
    if (rails_) {
        exempt_.resize(returned);
        rails_->add(values_, exempt_);
    }
    if (signal_.output_per_input != 1.0) {
        for (double& value : values_) value *= signal_.output_per_input;
    }
    if (design_filter_) {
        design_.resize(returned);
        design_filter_->process(values_, design_);
    }
    if (twin_) {
        twin_codes_.resize(returned);
        twin_->process(codes, twin_codes_);
    }
    ReferenceBlock block{next_index_, codes, values_, declared_, design_, twin_codes_, exempt_};
    if (rates_.changes()) {
        to_returned(codes, returned);
        block.codes = returned_codes_;
        block.stimulus = returned_values_;
    }
    next_index_ += static_cast<std::int64_t>(returned);
    return block;
}

}  // namespace halflsb
