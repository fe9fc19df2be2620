// What the references say of the codes that a channel got, block by block from index 0.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <vector>

#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/arithmetic/twin.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// All spans have the same length and belong to the same indices, those of the response.
struct ReferenceBlock {
    std::int64_t first_index = 0;
    std::span<const Code> codes;  ///< sent; where the rate changes the newest one when the sample was returned
    /// Values of the codes, times output_per_input. Where the rate changes, what a filter without memory would return:
    /// of a decimator each `down`-th, of an interpolator `up` times the value and zeros behind it, so that the base
    /// image has the size of the input.
    std::span<const double> stimulus;
    std::span<const double> declared;
    std::span<const double> design;  ///< empty when it was not asked for
    std::span<const Code> twin;      ///< output codes of the declared arithmetic; empty when it was not asked for
    /// Not 0 where a rail may be reached, so that derived limits claim nothing; empty when it was not asked for.
    std::span<const std::uint8_t> exempt;

    ReferenceBlock first(std::size_t count) const;
    /// Without the first `count`.
    ReferenceBlock after(std::size_t count) const;
};

/// What a judge wants beside the declared reference.
struct WantedReferences {
    bool design = false, twin = false, rails = false;
};

class ReferenceSource {
public:
    /// Of one channel, counted from 1: all references start from rest. The plan must outlive the source.
    ReferenceSource(const Plan& plan, const Case& the_case, int channel, WantedReferences wanted);
    /// `codes` are the channel's next ones, in whole rate cycles; the block is good until the next call, and no longer
    /// than they are.
    ReferenceBlock next(std::span<const Code> codes);
    /// Nothing unless the rails were asked for.
    const RailWatch* rails() const { return rails_ ? &*rails_ : nullptr; }

private:
    /// Where the rate changes: codes and stimulus as the response has them.
    void to_returned(std::span<const Code> codes, std::size_t returned);

    const Signal& signal_;
    CaseRates rates_;
    std::vector<std::size_t> newest_sent_;  ///< of each sample that a rate cycle returns
    std::unique_ptr<Filter> declared_filter_, design_filter_;
    std::int64_t next_index_ = 0;
    std::vector<double> values_, declared_, design_, returned_values_;
    std::vector<Code> returned_codes_;
    std::unique_ptr<Twin> twin_;
    std::vector<Code> twin_codes_;
    std::optional<RailWatch> rails_;
    std::vector<std::uint8_t> exempt_;
};

}  // namespace halflsb
