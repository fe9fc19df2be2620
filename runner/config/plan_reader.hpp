// The parts of a plan, one function a part; plan_file.cpp puts them together. Inside this room only.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

/// [signal], or nullopt after a report.
std::optional<Signal> read_signal(ReadContext& context, TableReader& top);
/// Every [[filter]] in order, or nullopt after a report.
std::optional<FilterChain> read_filters(ReadContext& context, TableReader& top);

/// A list of rules, at the top or of one case. Without a signal only words, types and ranges are checked.
struct ReadRules {
    std::vector<Rule> rules;
    std::optional<Place> first;  ///< where the first one stands
    bool is_clean = true;
};
ReadRules read_rules(ReadContext& context, TableReader& outer, const Signal* signal);

struct ReadCase {
    Case the_case;
    Place place;
    std::optional<Place> name_place;
    bool has_rules = false;  ///< some of its own stand in the file
    bool is_clean = false;   ///< then it has a stimulus; its rules are its own only
};
ReadCase read_case(ReadContext& context, const TomlValue& table, const TableReader& top, const Signal* signal,
                   std::optional<std::uint64_t> seed);

}  // namespace halflsb
