#include "oracle/rules/companion_rules.hpp"
#include "stimuli/samples_text.hpp"

#include <algorithm>
#include <string>

namespace halflsb {
namespace {

constexpr std::int64_t largest_ratio = 100, longest_shift_samples = 1'000'000, largest_block_samples = 65535;
constexpr std::size_t most_companions = 16;

Parameter list_word(std::string_view name, std::string_view unit, std::int64_t least, std::int64_t most,
                    std::string_view help) {
    return {.name = name,
            .type = ParameterType::integers,
            .unit = unit,
            .minimum = static_cast<double>(least),
            .maximum = static_cast<double>(most),
            .help = help};
}

Parameter bit_for_bit_word() {
    return limit_word("max_lsb", "LSB", "Largest difference allowed; none when left out: bit for bit.");
}

/// Each number once, and not too many.
Outcome<std::vector<std::int64_t>> read_list(const ParameterValues& values, std::string_view name) {
    std::vector<std::int64_t> list;
    for (const double number : values.numbers(name)) {
        const auto whole = static_cast<std::int64_t>(number);
        if (std::find(list.begin(), list.end(), whole) != list.end()) {
            return refused_word(std::string(name), std::to_string(whole) + " is there twice", "keep one of the two");
        }
        list.push_back(whole);
    }
    if (list.size() > most_companions) {
        return refused_word(std::string(name),
                            std::to_string(list.size()) + " numbers, and each sends the stimulus once more",
                            "give at most " + std::to_string(most_companions));
    }
    return list;
}

Companion shifted(std::int64_t samples) {
    return {{}, {{1, samples}}, 0, "shift " + std::to_string(samples), samples_text(samples) + " later"};
}

}  // namespace

const Recipe& repeat_recipe() {
    static const Recipe recipe{"repeat",
                               "The stimulus is sent again from the same start state, and the response is the same; "
                               "needs no oracle.",
                               {bit_for_bit_word()}};
    return recipe;
}

const Recipe& blocks_recipe() {
    static const Recipe recipe{
        "blocks",
        "The stimulus is sent again in smaller blocks, and the response is the same; needs no oracle.",
        {list_word("block_samples", "samples", 1, largest_block_samples,
                   "Most samples sent together, a run each; [1] when left out."),
         bit_for_bit_word()}};
    return recipe;
}

const Recipe& shift_recipe() {
    static const Recipe recipe{
        "shift",
        "The stimulus is sent again later, zeros before it, and the response is the same, so much later; needs no "
        "oracle.",
        {list_word("by_samples", "samples", 1, longest_shift_samples, "How much later, a run each; [1] when left out."),
         bit_for_bit_word()}};
    return recipe;
}

const Recipe& linearity_recipe() {
    static const Recipe recipe{
        "linearity",
        "The stimulus is sent again, scaled or added to itself, and the response follows. Of a known arithmetic the "
        "limit is derived when left out; of any other give one.",
        {list_word("by_ratio", "", -largest_ratio, largest_ratio,
                   "Gain, a run each; [-1] when neither this nor by_samples is given."),
         list_word("by_samples", "samples", 1, longest_shift_samples,
                   "A run each: the stimulus, and so many samples later itself added to it."),
         limit_word("max_lsb", "LSB", "Largest difference, in steps of the output format."),
         limit_word("max_ratio", "of full scale", "Largest difference, as a fraction of the output's full scale."),
         limit_word("max_unit", "unit", "Largest difference, in the unit of [signal]."),
         limit_word("bias_lsb", "LSB", "Largest size of the mean difference, in steps of the output format."),
         limit_word("bias_ratio", "of full scale",
                    "Largest size of the mean difference, as a fraction of the output's full scale."),
         limit_word("bias_unit", "unit", "Largest size of the mean difference, in the unit of [signal].")}};
    return recipe;
}

Outcome<RepeatRule> make_repeat_rule(const ParameterValues& values, const RuleContext& context) {
    auto largest = read_limit(values, repeat_recipe(), largest_words, context);
    if (!largest) return largest.error();
    return RepeatRule{*largest};
}

Outcome<BlocksRule> make_blocks_rule(const ParameterValues& values, const RuleContext& context) {
    auto largest = read_limit(values, blocks_recipe(), largest_words, context);
    if (!largest) return largest.error();
    auto list = read_list(values, "block_samples");
    if (!list) return list.error();
    if (list->empty()) list->push_back(1);
    return BlocksRule{std::move(*list), *largest};
}

Outcome<ShiftRule> make_shift_rule(const ParameterValues& values, const RuleContext& context) {
    auto largest = read_limit(values, shift_recipe(), largest_words, context);
    if (!largest) return largest.error();
    auto list = read_list(values, "by_samples");
    if (!list) return list.error();
    if (list->empty()) list->push_back(1);
    return ShiftRule{std::move(*list), *largest};
}

Outcome<LinearityRule> make_linearity_rule(const ParameterValues& values, const RuleContext& context) {
    constexpr LimitWords bias_words{"bias_lsb", "bias_ratio", "bias_unit"};
    auto largest = read_limit(values, linearity_recipe(), largest_words, context);
    if (!largest) return largest.error();
    auto bias = read_limit(values, linearity_recipe(), bias_words, context);
    if (!bias) return bias.error();
    auto ratios = read_list(values, "by_ratio");
    if (!ratios) return ratios.error();
    if (std::find(ratios->begin(), ratios->end(), 0) != ratios->end())
        return refused_word("by_ratio", "0 times the stimulus is silence", "give -1, or 2");
    auto shifts = read_list(values, "by_samples");
    if (!shifts) return shifts.error();
    if (ratios->empty() && shifts->empty()) ratios->push_back(-1);
    return LinearityRule{std::move(*ratios), std::move(*shifts), *largest, *bias};
}

std::vector<Companion> companions_of(const RepeatRule&) { return {{{}, {{1, 0}}, 0, "repeat", "again"}}; }

std::vector<Companion> companions_of(const BlocksRule& rule) {
    std::vector<Companion> all;
    for (const std::int64_t block : rule.block_samples)
        all.push_back({{}, {{1, 0}}, block, "blocks " + std::to_string(block), "in blocks of " + samples_text(block)});
    return all;
}

std::vector<Companion> companions_of(const ShiftRule& rule) {
    std::vector<Companion> all;
    for (const std::int64_t samples : rule.by_samples) all.push_back(shifted(samples));
    return all;
}

std::vector<Companion> companions_of(const LinearityRule& rule) {
    std::vector<Companion> all;
    for (const std::int64_t gain : rule.by_ratio) {
        const std::string number = std::to_string(gain);
        all.push_back({{}, {{gain, 0}}, 0, "linearity " + number, "times " + number});
    }
    for (const std::int64_t samples : rule.by_samples) {
        all.push_back({{},
                       {{1, 0}, {1, samples}},
                       0,
                       "linearity, " + std::to_string(samples) + " later added",
                       "and itself " + samples_text(samples) + " later"});
    }
    return all;
}

}  // namespace halflsb
