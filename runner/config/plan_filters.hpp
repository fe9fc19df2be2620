// [arithmetic] and [[filter]] of a plan, and the designs that follow at the rate of a case.
#pragma once

#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

/// The stages as the plan gives them. Corners in Hz give another design at another rate, so each rate has its own
/// chain; many cases share one, and it is made once.
class PlanFilters {
public:
    struct Stage {
        std::string kind;
        ParameterValues values;
        StageArithmetic arithmetic;
        bool depends_on_rate = false;  ///< something is given in Hz or s
    };

    /// At the rate of the signal; empty when the filter is unknown.
    FilterChain chain;
    std::vector<PlanPosition> positions;  ///< of the stages in the chain
    bool is_unknown = false;
    std::vector<Stage> stages;

    /// Whether another rate makes another design.
    bool depends_on_rate() const;
    /// The chain at the rate of a case, or the error of the first stage that has none.
    const Outcome<FilterChain>& at_rate(double rate_hz, const Signal& signal) const;
    /// Zeros that leave nothing of what went before, on the channel that needs the most; nullopt: no number does.
    std::optional<std::int64_t> flush_samples_at(double rate_hz, const Signal& signal) const;

private:
    mutable std::map<double, Outcome<FilterChain>> chains_;
    mutable std::map<double, std::optional<std::int64_t>> flushes_;
};

/// Every [[filter]] in order, or nullopt after a report. Without a signal a stage with corners in Hz is not made.
std::optional<PlanFilters> read_filters(ReadContext& context, TableReader& top, const Signal* signal);

}  // namespace halflsb
