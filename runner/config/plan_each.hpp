// [case.each]: one case for each combination of values, the last key varying fastest. An expanded case is a
// copy of the case's table with the values put in under their paths, each at the place where it stands in the
// list, so whatever the reader says of it points there.
//
//     [case.each]
//     "stimulus.level_ratio" = [0.1, 0.5]                 # "tare step, level_ratio 0.1, speed slow"
//     speed = [{ name = "slow", rate_hz = 600.0 }, { name = "fast", rate_hz = 1200.0 }]
#pragma once

#include <cstddef>
#include <optional>
#include <vector>

#include "runner/config/plan_axes.hpp"
#include "runner/config/problems.hpp"
#include "runner/config/toml_tree.hpp"

namespace halflsb {

/// The most cases a plan may have once all of them are expanded.
inline constexpr std::size_t most_cases = 10'000;
/// The most values that they may hold together: a long list in a case is there once for each combination.
inline constexpr std::size_t most_case_values = 5'000'000;

class CaseExpansion {
public:
    /// Both must outlive this. What is wrong with [case.each] is reported to `problems`.
    CaseExpansion(const TomlValue& case_table, Problems& problems);

    bool is_clean() const { return each_axes_.is_clean; }
    /// Combinations; 1 without [case.each]. A double, because the product may be beyond any integer.
    double count() const;
    /// Values in all of the expanded tables together.
    double value_count() const;
    /// The index-th of count(); nullopt after a report that its name is too long.
    std::optional<TomlValue> at(std::size_t index, Problems& problems) const;
    const TomlValue& table() const { return table_; }
    /// Of [case.each], or of the case.
    Place place() const;

private:
    const TomlValue& table_;
    const TomlEntry* each_;
    EachAxes each_axes_;
};

/// Reports a plan of more than most_cases cases or most_case_values values, at the case that goes beyond. Each case
/// holds the rules for every case too, `common_rules` of them.
bool has_too_many(const std::vector<CaseExpansion>& cases, std::size_t common_rules, Problems& problems);

}  // namespace halflsb
