// The rules that need no oracle and compare two captures of one run: repeat, blocks, shift, linearity. Each asks for
// companions of its case (companion.hpp).
#pragma once

#include <concepts>
#include <cstdint>
#include <optional>
#include <vector>

#include "oracle/rules/companion.hpp"
#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// The same, sent again.
struct RepeatRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::optional<Limit> largest;  ///< none: bit for bit
};

/// The same in another split into blocks.
struct BlocksRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::vector<std::int64_t> block_samples;  ///< a companion each
    std::optional<Limit> largest;             ///< none: bit for bit
};

/// The same later, zeros before.
struct ShiftRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::vector<std::int64_t> by_samples;  ///< a companion each
    std::optional<Limit> largest;          ///< none: bit for bit
};

/// Scaled, or added to itself later.
struct LinearityRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::vector<std::int64_t> by_ratio;    ///< a companion each
    std::vector<std::int64_t> by_samples;  ///< likewise: the stimulus, and so much later itself added to it
    std::optional<Limit> largest;          ///< none: derived from the arithmetic
    std::optional<Limit> bias;
};

const Recipe& repeat_recipe();
const Recipe& blocks_recipe();
const Recipe& shift_recipe();
const Recipe& linearity_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<RepeatRule> make_repeat_rule(const ParameterValues& values, const RuleContext& context);
Outcome<BlocksRule> make_blocks_rule(const ParameterValues& values, const RuleContext& context);
Outcome<ShiftRule> make_shift_rule(const ParameterValues& values, const RuleContext& context);
Outcome<LinearityRule> make_linearity_rule(const ParameterValues& values, const RuleContext& context);

/// What each rule has sent beside its case; the base is not named yet.
std::vector<Companion> companions_of(const RepeatRule& rule);
std::vector<Companion> companions_of(const BlocksRule& rule);
std::vector<Companion> companions_of(const ShiftRule& rule);
std::vector<Companion> companions_of(const LinearityRule& rule);

/// Kinds of rule that ask for companions.
template <class Kind>
concept AsksForCompanions = requires(const Kind& kind) { companions_of(kind); };

}  // namespace halflsb
