// The parts of a plan, one function a part; plan_file.cpp puts them together. Inside this room only.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/plan_filters.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

/// [signal], or nullopt after a report.
std::optional<Signal> read_signal(ReadContext& context, TableReader& top);

/// What the cases and their rules depend on; nullptr where it could not be read.
struct PlanFacts {
    const Signal* signal = nullptr;
    const PlanFilters* filters = nullptr;
};

/// A list of rules, at the top or of one case. Without a signal only words, types and ranges are checked.
/// `rate_hz` is that of the case, where it has its own.
struct ReadRules {
    std::vector<Rule> rules;
    std::optional<Place> first;  ///< where the first one stands
    bool is_clean = true;
};
ReadRules read_rules(ReadContext& context, TableReader& outer, const PlanFacts& facts,
                     std::optional<double> rate_hz = std::nullopt);

/// [case.stimulus], or nullopt after a report.
struct ReadStimulus {
    std::string shape;
    ParameterValues values;
    std::optional<int> channel;
    std::shared_ptr<const Stimulus> stimulus;
};
std::optional<ReadStimulus> read_stimulus(ReadContext& context, const TomlValue& table, const TableReader& outer,
                                          const Signal* signal, double rate_hz, std::optional<std::uint64_t> seed);

struct ReadCase {
    Case the_case;
    Place place;
    std::optional<Place> name_place;
    bool is_clean = false;  ///< then it has a stimulus; its rules are its own only
};
ReadCase read_case(ReadContext& context, const TomlValue& table, const TableReader& top, const PlanFacts& facts,
                   std::optional<std::uint64_t> seed);

/// What can be said only once the rules for every case are with the cases: bands above the Nyquist of a case's own
/// rate, a case of an unknown filter that no rule looks at; and the baselines of the rules `unchanged` are read.
void finish_cases(ReadContext& context, Plan& plan);

}  // namespace halflsb
