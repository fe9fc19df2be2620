#include "oracle/explain/said_words.hpp"

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

std::vector<std::string> said_words(const FilterStage& stage) {
    const StageArithmetic& said = stage.arithmetic;
    std::vector<std::string> words;
    const auto add = [&](std::string_view word, const std::string& value) {
        if (has_word(stage, word)) words.push_back(std::string(word) + " = " + value);
    };
    const auto named = [&](std::string_view word, auto value) { add(word, "\"" + std::string(name_of(value)) + "\""); };
    const auto if_named = [&](std::string_view word, const auto& value) {
        if (value) named(word, *value);
    };
    const auto if_number = [&](std::string_view word, const std::optional<int>& value) {
        if (value) add(word, std::to_string(*value));
    };
    if_named("number", said.number);
    if_named("structure", said.structure);
    if_number("coefficient_bits", said.coefficient_bits);
    if_number("coefficient_fraction_bits", said.coefficient_fraction_bits);
    if (said.coefficient_rounding != Rounding::half_away) named("coefficient_rounding", said.coefficient_rounding);
    if_named("feedback_coefficients", said.feedback_coefficients);
    if_number("accumulator_bits", said.accumulator_bits);
    if_number("accumulator_fraction_bits", said.accumulator_fraction_bits);
    if_named("accumulator_overflow", said.accumulator_overflow);
    if_named("rounding_at", said.rounding_at);
    if_named("rounding", said.rounding);
    if_named("output_rounding", said.output_rounding);
    if (said.fraction_saving) add("fraction_saving", *said.fraction_saving ? "\"on\"" : "\"off\"");
    if_number("state_bits", said.state_bits);
    if_number("state_fraction_bits", said.state_fraction_bits);
    if_named("state_overflow", said.state_overflow);
    if (!said.discarded_bits.empty()) {
        std::string list;
        for (const int bits : said.discarded_bits) list += (list.empty() ? "" : ", ") + std::to_string(bits);
        add("discarded_bits", "[" + list + "]");
    }
    if (said.output_overflow != Overflow::saturate) named("output_overflow", said.output_overflow);
    if (said.stage_format) add("stage_format", "\"" + std::string(said.stage_format->name) + "\"");
    if_named("division", said.division);
    if (said.fused_multiply_add) add("multiply_add", *said.fused_multiply_add ? "\"fused\"" : "\"separate\"");
    if_named("summation", said.summation);
    return words;
}

}  // namespace halflsb
