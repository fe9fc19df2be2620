// The rules a plan can ask for. Closed set; each kind's words, units and ranges stand in its own file, the recipes of
// all in rule_recipes() and nowhere else.
//
// A kind says two things of itself. is_exact: its figures are facts of the capture; else they are random, and it takes
// its share of the plan's alpha. ends_early: it can be decided before the last sample. A kind that holds without
// knowing what the filter should return says needs_no_oracle too.
#pragma once

#include <string_view>
#include <variant>
#include <vector>

#include "oracle/rules/companion_rules.hpp"
#include "oracle/rules/crosstalk_rule.hpp"
#include "oracle/rules/deadline_rule.hpp"
#include "oracle/rules/drift_rule.hpp"
#include "oracle/rules/error_rule.hpp"
#include "oracle/rules/exact_rule.hpp"
#include "oracle/rules/headroom_rule.hpp"
#include "oracle/rules/latency_rule.hpp"
#include "oracle/rules/noise_rule.hpp"
#include "oracle/rules/plan_position.hpp"
#include "oracle/rules/response_rule.hpp"
#include "oracle/rules/rule_words.hpp"
#include "oracle/rules/silence_rule.hpp"
#include "oracle/rules/tone_rule.hpp"
#include "oracle/rules/transition_rule.hpp"
#include "oracle/rules/unchanged_rule.hpp"

namespace halflsb {

struct Rule {
    std::variant<ErrorRule, LatencyRule, ResponseRule, ToneRule, TransitionRule, NoiseRule, SilenceRule, DriftRule,
                 UnchangedRule, ExactRule,                        //
                 RepeatRule, BlocksRule, ShiftRule, LinearityRule,  //
                 DeadlineRule, CrosstalkRule, HeadroomRule>
        kind;
    PlanPosition position;
};

/// In the order of the variant.
const std::vector<Recipe>& rule_recipes();
std::string_view kind_name(const Rule& rule);
/// Whether rules of the kind compare with what the filter should return.
bool needs_oracle(std::string_view kind);
bool needs_oracle(const Rule& rule);
/// What the rule has sent beside its case; the base is not named yet. Of most kinds nothing.
std::vector<Companion> companions_of(const Rule& rule);

/// An Error's place is the name of the parameter to blame. Bands arrive as rows of
/// {from_hz, to_hz, min_db or -inf, max_db or +inf}.
Outcome<Rule> make_rule(std::string_view kind, const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
