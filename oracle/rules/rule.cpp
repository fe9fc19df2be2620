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
    {error_recipe, made<make_error_rule>},           {latency_recipe, made<make_latency_rule>},
    {response_recipe, made<make_response_rule>},     {tone_recipe, made<make_tone_rule>},
    {transition_recipe, made<make_transition_rule>}, {noise_recipe, made<make_noise_rule>},
    {silence_recipe, made<make_silence_rule>},       {drift_recipe, made<make_drift_rule>},
    {unchanged_recipe, made<make_unchanged_rule>},   {exact_recipe, made<make_exact_rule>},
    {deadline_recipe, made<make_deadline_rule>},     {crosstalk_recipe, made<make_crosstalk_rule>},
    {headroom_recipe, made<make_headroom_rule>},
};
static_assert(std::size(kinds) == std::variant_size_v<decltype(Rule::kind)>);

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

bool needs_reference(std::string_view kind) {
    constexpr std::string_view without[] = {"unchanged", "deadline"};
    return std::find(std::begin(without), std::end(without), kind) == std::end(without);
}

Outcome<Rule> make_rule(std::string_view kind, const ParameterValues& values, const RuleContext& context) {
    for (const RuleKind& known : kinds) {
        if (known.recipe().name == kind) return known.make(values, context);
    }
    return refused_word("kind", "there is no rule \"" + std::string(kind) + "\"", "use " + all_kinds());
}

}  // namespace halflsb
