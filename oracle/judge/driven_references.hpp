// What the driven channel of a case could leave in another one, sample by sample of the response.
#pragma once

#include <cstdint>
#include <span>
#include <string>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/sent_block.hpp"

namespace halflsb {

class DrivenReferences {
public:
    /// The case drives one channel; `idle` is another one, counted from 1. Plan and case must outlive the references.
    DrivenReferences(const Plan& plan, const Case& the_case, int idle);

    /// The stimulus as sent, through the idle channel's filter, and through the driven one's where that is another.
    std::size_t count() const { return values_.size(); }
    std::string name(std::size_t reference) const;
    /// From `first_index` of the response at a lag of 0, `count` samples; zeros before index 0. In order: what was
    /// taken is gone. Good until the next call.
    std::vector<std::span<const double>> take(std::int64_t first_index, std::size_t count);

private:
    void make_more();

    int idle_, driven_;
    CaseRates rates_;
    SentBlock sent_;
    ReferenceSource through_idle_, through_driven_;
    std::int64_t sent_samples_ = 0;
    std::int64_t first_ = 0;  ///< index of the first one that is there
    std::vector<std::vector<double>> values_;
};

}  // namespace halflsb
