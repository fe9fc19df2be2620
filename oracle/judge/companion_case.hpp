// The case that a companion is (oracle/rules/companion.hpp), made from its base.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// The base's codes, scaled, delayed and added; silent before. As long as the answer to it is known from that to the
/// base. Codes beyond the input's word are cut to it: companion_check.cpp refuses what has some.
std::shared_ptr<const Stimulus> companion_stimulus(const Signal& signal, std::shared_ptr<const Stimulus> base,
                                                   const Companion& companion);

/// `rule` is one of the base's, `companion` one of companions_of() it. The same start, settings and labels; no rule
/// but this.
Case companion_case(const Plan& plan, const Case& base, const Rule& rule, Companion companion);

/// The case without the rules that ask for companions, and those companions in the order of its rules.
std::vector<Case> with_companions(const Plan& plan, Case base);

/// Most samples of the case that are sent together where the board takes `granted`.
std::int64_t sent_block_samples(const Case& the_case, std::int64_t granted);

}  // namespace halflsb
