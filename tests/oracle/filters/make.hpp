// Stages from the words of a plan.
#pragma once

#include <initializer_list>
#include <string>
#include <string_view>

#include "tests/oracle/support.hpp"

namespace halflsb::testing {

struct Given {
    const char* name;
    ParameterValue value;
};

inline ParameterValues words(std::initializer_list<Given> given) {
    ParameterValues values;
    for (const auto& [name, value] : given) values.set(name, value);
    return values;
}

inline Outcome<FilterStage> make(std::string_view kind, std::initializer_list<Given> given,
                                 const StageContext& context = {}) {
    return make_stage(kind, words(given), context);
}

/// The whole message; "accepted" when there is none.
inline std::string refusal(std::string_view kind, std::initializer_list<Given> given,
                           const StageContext& context = {}) {
    const auto outcome = make(kind, given, context);
    if (outcome) return "accepted";
    if (outcome.error().kind != ErrorKind::input) return "wrong kind";
    return to_text(outcome.error());
}

inline std::int64_t whole(int number) { return number; }

inline BiquadSection section_of(const FilterStage& stage) {
    return std::get<BiquadCascade>(stage.design).sections.at(0);
}

}  // namespace halflsb::testing
