#include "oracle/rules/rule.hpp"

#include <algorithm>
#include <utility>

namespace halflsb {
namespace {

using MakeRule = Outcome<Rule> (*)(const ParameterValues& values, const RuleContext& context);

template <auto make>
Outcome<Rule> made(const ParameterValues& values, const RuleContext& context) {
    auto kind = make(values, context);
    if (!kind) return kind.error();
    return Rule{std::move(*kind), {}};
}

struct RuleKind {
    const Recipe& (*recipe)();
    MakeRule make;
};

/// In the order of the variant.
constexpr RuleKind kinds[] = {
    {error_recipe, made<make_error_rule>},
    {latency_recipe, made<make_latency_rule>},
    {response_recipe, made<make_response_rule>},
    {tone_recipe, made<make_tone_rule>},
    {transition_recipe, made<make_transition_rule>},
    {noise_recipe, made<make_noise_rule>},
    {silence_recipe, made<make_silence_rule>},
    {drift_recipe, made<make_drift_rule>},
    {unchanged_recipe, made<make_unchanged_rule>},
    {exact_recipe, made<make_exact_rule>},
    {repeat_recipe, made<make_repeat_rule>},
    {blocks_recipe, made<make_blocks_rule>},
    {shift_recipe, made<make_shift_rule>},
    {linearity_recipe, made<make_linearity_rule>},
    {deadline_recipe, made<make_deadline_rule>},
    {crosstalk_recipe, made<make_crosstalk_rule>},
    {headroom_recipe, made<make_headroom_rule>},
};
static_assert(std::size(kinds) == std::variant_size_v<decltype(Rule::kind)>);

template <class Kind>
constexpr bool has_no_oracle = requires { Kind::needs_no_oracle; };

/// In the order of the variant.
template <class... Kinds>
std::vector<bool> oracles_wanted(const std::variant<Kinds...>*) {
    return {!has_no_oracle<Kinds>...};
}

/// "error, latency or exact"
std::string all_kinds() {
    std::string names;
    for (std::size_t i = 0; i < std::size(kinds); ++i) {
        if (i > 0) names += i + 1 == std::size(kinds) ? " or " : ", ";
        names += kinds[i].recipe().name;
    }
    return names;
}

}  // namespace

std::string to_text(const PlanPosition& position) {
    return position.file + ":" + std::to_string(position.line) + ":" + std::to_string(position.column);
}

const std::vector<Recipe>& rule_recipes() {
    static const std::vector<Recipe> recipes = [] {
        std::vector<Recipe> all;
        for (const RuleKind& kind : kinds) all.push_back(kind.recipe());
        return all;
    }();
    return recipes;
}

std::string_view kind_name(const Rule& rule) { return kinds[rule.kind.index()].recipe().name; }

bool needs_oracle(std::string_view kind) {
    static const std::vector<bool> wanted = oracles_wanted(static_cast<const decltype(Rule::kind)*>(nullptr));
    for (std::size_t i = 0; i < std::size(kinds); ++i) {
        if (kinds[i].recipe().name == kind) return wanted[i];
    }
    return true;
}

bool needs_oracle(const Rule& rule) { return needs_oracle(kind_name(rule)); }

std::vector<Companion> companions_of(const Rule& rule) {
    return std::visit(
        [](const auto& kind) -> std::vector<Companion> {
            if constexpr (AsksForCompanions<std::decay_t<decltype(kind)>>) {
                return companions_of(kind);
            } else {
                return {};
            }
        },
        rule.kind);
}

Outcome<Rule> make_rule(std::string_view kind, const ParameterValues& values, const RuleContext& context) {
    for (const RuleKind& known : kinds) {
        if (known.recipe().name == kind) return known.make(values, context);
    }
    return refused_word("kind", "there is no rule \"" + std::string(kind) + "\"", "use " + all_kinds());
}

}  // namespace halflsb
