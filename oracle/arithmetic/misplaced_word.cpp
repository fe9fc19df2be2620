// Which words of an arithmetic a kind of filter has.
#include <algorithm>
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/family.hpp"

namespace halflsb {

namespace {

bool is_one_of(std::string_view word, const std::vector<std::string_view>& words) {
    return std::find(words.begin(), words.end(), word) != words.end();
}

/// What a stage is that lacks the word, and what else would have it.
struct Lacking {
    std::string_view stage, remedy;
};

Lacking lacking_of(const FilterStage& stage, std::string_view word) {
    const Family family = family_of(stage);
    if (family == Family::average && word == "summation")
        return {"a running sum", "leave it out, or give structure = \"fresh-sum\""};
    if (is_one_of(word, {"coefficient_bits", "coefficient_rounding"})) {
        if (family == Family::average)
            return {"a moving average without a reciprocal", "leave it out, or give division = \"reciprocal\""};
        if (is_by_shift(stage))
            return {"a one-pole that shifts", "leave it out, or give coefficient with coefficient_fraction_bits"};
    }
    if (family == Family::cic && word == "accumulator_bits")
        return {text_of(family), "give state_bits, the width of its registers"};
    return {text_of(family), "leave it out"};
}

std::string structures_text(Family family) {
    std::string text;
    for (const Structure structure : structures_of(family))
        text += (text.empty() ? "\"" : ", \"") + std::string(name_of(structure)) + "\"";
    return text;
}

const std::vector<std::string_view> words_of_integers{
    "rounding_at",      "fraction_saving",           "coefficient_bits",
    "accumulator_bits", "accumulator_fraction_bits", "accumulator_overflow",
    "state_bits",       "state_fraction_bits",       "state_overflow",
    "discarded_bits",   "output_rounding",           "feedback_coefficients"};

}  // namespace

bool has_word(const FilterStage& stage, std::string_view word) {
    const Family family = family_of(stage);
    const bool has_products = family != Family::average && family != Family::median && family != Family::cic;
    const bool has_states = has_products && family != Family::fir;
    if (family == Family::cic && (word == "state_bits" || word == "state_overflow")) return true;
    if (word == "discarded_bits") return std::holds_alternative<CicDecimator>(stage.design);
    if (family == Family::median || family == Family::cic)
        return is_one_of(word, {"number", "rounding", "output_overflow", "stage_format"});
    if (is_one_of(word, {"state_bits", "state_fraction_bits", "state_overflow", "output_rounding"})) return has_states;
    if (word == "feedback_coefficients")
        return family == Family::sections || family == Family::recursion || family == Family::comb;
    if (word == "division") return family == Family::average;
    if (word == "summation")
        return family == Family::fir || (family == Family::average && structure_of(stage) == Structure::fresh_sum);
    if (word == "rounding_at") return has_products && family != Family::one_pole;
    if (is_one_of(word, {"coefficient_bits", "coefficient_rounding"}))
        return !is_by_shift(stage) && (family != Family::average || stage.arithmetic.division == Division::reciprocal);
    return true;
}

std::optional<Error> misplaced_word(const FilterStage& stage, const ParameterValues& own) {
    const Family family = family_of(stage);
    const bool is_float = stage.arithmetic.number == NumberKind::float32;
    const auto refuse = [](std::string_view word, std::string problem, std::string remedy) {
        return Error{ErrorKind::input, std::string(word), std::move(problem), std::move(remedy)};
    };
    for (const Parameter& parameter : arithmetic_recipe().parameters) {
        const std::string_view word = parameter.name;
        if (!own.has(word)) continue;
        if (word == "structure" && has_word(stage, word) && structure_of(stage) != stage.arithmetic.structure) {
            return refuse(word,
                          std::string(text_of(family)) + " has no structure \"" +
                              std::string(name_of(*stage.arithmetic.structure)) + "\"",
                          "it has " + structures_text(family));
        }
        if (is_float && is_one_of(word, words_of_integers)) {
            return refuse(word, std::string(word) + " says nothing of float32", "leave it out");
        }
        if (!is_float && word == "multiply_add") {
            return refuse(word, "multiply_add needs number = \"float32\"",
                          "give number = \"float32\", or leave it out");
        }
        if (word == "discarded_bits" && std::holds_alternative<CicInterpolator>(stage.design)) {
            return refuse(word, "a cic-interpolator discards no bits: its integrators would add up what it lost",
                          "leave it out");
        }
        if (!has_word(stage, word)) {
            const Lacking lacking = lacking_of(stage, word);
            return refuse(word, std::string(word) + " says nothing of " + std::string(lacking.stage),
                          std::string(lacking.remedy));
        }
        if (word == "rounding_at" && stage.arithmetic.rounding_at == RoundingAt::output &&
            (family != Family::sections || structure_of(stage) != Structure::direct_1)) {
            return refuse(word, "only sections in direct-1 shorten at the output alone",
                          "give rounding_at = \"sum\" or \"product\"");
        }
    }
    return std::nullopt;
}

}  // namespace halflsb
