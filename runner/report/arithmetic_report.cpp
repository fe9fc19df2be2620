#include "runner/report/arithmetic_report.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_case_lines = 12;
constexpr std::size_t field_columns = 9;

std::string range_text(double lower, double upper) { return rounded_text(lower) + " .. " + rounded_text(upper); }

/// Figures at the output. A millionth of an LSB is what the reference's own double precision adds: none for people.
class Figures {
public:
    explicit Figures(const Signal& signal) : negligible_(signal.output.has_lsb() ? 1e-6 : 0.0) {}
    std::string one(double value) const { return std::fabs(value) < negligible_ ? "0" : rounded_text(value); }
    std::string range(double lower, double upper) const { return one(lower) + " .. " + one(upper); }
    bool is_told(double value) const { return value > 0.0 && value >= negligible_; }

private:
    double negligible_;
};

std::string effect_text(RailEffect effect) {
    switch (effect) {
        case RailEffect::clip:
            return "reaches its rail and clips there as the reference does";
        case RailEffect::exempt:
            return "reaches its rail; derived limits leave out the samples that this touches";
        case RailEffect::lost:
            break;
    }
    return "reaches its rail; no derived limit holds from there on";
}

/// A heading that lines up with "signal" and "filter".
std::string field(const TextStyle& style, std::string_view key, const std::string& value) {
    return labelled(style, key, value, field_columns);
}

std::string sums_text(const PredictedError& error, const Figures& figures, const std::string& unit) {
    return "error " + figures.range(error.lower, error.upper) + ", rms " + figures.one(error.rms) + ", bias " +
           figures.range(error.bias_lower, error.bias_upper) + unit;
}

std::string cases_text(const std::vector<PredictedCaseError>& cases, const Figures& figures, const TextStyle& style) {
    if (cases.empty()) return "";
    Table table{{{"case", false, 0},
                 {"samples", true, 1},
                 {"error", true, 0},
                 {"rms", true, 0},
                 {"bias", true, 0},
                 {"rms and bias", false, 2}},
                {},
                2};
    for (std::size_t i = 0; i < std::min(cases.size(), most_case_lines); ++i) {
        const PredictedCaseError& one = cases[i];
        table.rows.push_back({printable(one.name), std::to_string(one.samples),
                              figures.range(one.error.lower, one.error.upper), figures.one(one.error.rms),
                              figures.range(one.error.bias_lower, one.error.bias_upper), one.error.why});
    }
    std::string text = laid_out(style, table);
    if (cases.size() > most_case_lines)
        text += "  and " + std::to_string(cases.size() - most_case_lines) + " more, with --json\n";
    return text;
}

std::string registers_text(const std::vector<PredictedRegister>& registers, const TextStyle& style) {
    if (registers.empty()) return "";
    Table table{{{"register of a CIC", false, 0},
                 {"bits", true, 0},
                 {"fraction", true, 2},
                 {"bits needed", true, 0},
                 {"discarded", true, 1},
                 {"may discard", true, 3}},
                {},
                2};
    bool wraps = false, has_rule = false;
    for (const PredictedRegister& one : registers) {
        wraps = wraps || one.overflow == Overflow::wrap;
        has_rule = has_rule || one.may_discard_bits;
        table.rows.push_back({one.name, one.bits ? std::to_string(*one.bits) : "any", std::to_string(one.fraction_bits),
                              std::to_string(one.bits_needed), std::to_string(one.discarded_bits),
                              one.may_discard_bits ? std::to_string(*one.may_discard_bits) : "-"});
    }
    std::string text = laid_out(style, table);
    if (wraps) text += wrapped(style, "what wraps inside a CIC comes back while each register has the bits needed", 2);
    if (has_rule) {
        text += wrapped(style,
                        "may discard: low bits from the LSB of the input, by Hogenauer's rule (1981): all such errors "
                        "together have the variance of the output's rounding",
                        2);
    }
    return text;
}

}  // namespace

std::string unit_text(const Signal& signal) { return signal.output.has_lsb() ? " LSB" : ""; }

std::string assumed_text(const PredictedArithmetic& told, const Signal& signal, const std::string& channels,
                         const TextStyle& style) {
    std::string text;
    for (const PredictedAssumption& stage : told.assumed) {
        std::string line = channels + "stage " + std::to_string(stage.stage) + ", where the plan says nothing: ";
        for (std::size_t i = 0; i < stage.taken.size(); ++i) line += (i == 0 ? "" : ", ") + stage.taken[i];
        text += field(style, text.empty() ? "assumed" : "", line);
    }
    if (told.largest_if_rounding_said) {
        const auto [now, then] = compared_text(told.error.largest(), *told.largest_if_rounding_said);
        text += wrapped(style,
                        channels + "rounding = \"half-up\" in the plan would make the largest error " + then +
                            unit_text(signal) + " in place of " + now,
                        field_columns);
    }
    return text;
}

std::string bound_text(const PredictedArithmetic& told, const Signal& signal, const TextStyle& style) {
    const std::string unit = unit_text(signal);
    const Figures figures(signal);
    std::string text =
        "error    " + std::string("response less declared reference, at most, while no rail is reached") + "\n";
    if (!told.terms.empty()) {
        Table table{{{"point", false, 0},
                     {"step" + (unit.empty() ? std::string() : "," + unit), true, 2},
                     {"error in steps", true, 0},
                     {"sum |h|", true, 0},
                     {"sum h^2", true, 1},
                     {"sum h", true, 1},
                     {"at the output" + (unit.empty() ? std::string() : "," + unit), true, 0}},
                    {},
                    2};
        std::vector<std::string> formulas;
        for (const PredictedTerm& term : told.terms) {
            const std::string errors = term.count > 1 ? std::to_string(term.count) + " errors, " : "";
            table.rows.push_back({term.name, rounded_text(term.step),
                                  term.lowest ? errors + range_text(*term.lowest, *term.highest) : "-",
                                  rounded_text(term.l1), rounded_text(term.noise_gain), rounded_text(term.dc_gain),
                                  figures.range(term.lower, term.upper)});
            if (std::find(formulas.begin(), formulas.end(), term.formula) == formulas.end())
                formulas.push_back(term.formula);
        }
        text += laid_out(style, table);
        for (const std::string& formula : formulas) text += wrapped(style, "at the output: " + formula, 2);
    } else {
        text += "  no number is shortened anywhere\n";
    }
    if (figures.is_told(told.reference_error))
        text += "  the double precision of the reference itself: " + rounded_text(told.reference_error) + unit + "\n";
    text += wrapped(style, sums_text(told.error, figures, unit) + " (" + told.error.why + ")", 2);
    return text + cases_text(told.cases, figures, style);
}

std::string headroom_text(const PredictedArithmetic& told, const TextStyle& style) {
    if (told.nodes.empty()) return "";
    Table table{{{"node", false, 0},
                 {"bits", true, 0},
                 {"fraction", true, 2},
                 {"worst steps", true, 0},
                 {"error", true, 3},
                 {"of the rail", true, 0},
                 {"bits needed", true, 0},
                 {"integer", true, 1},
                 {"stimulus", true, 4}},
                {},
                2};
    bool has_stimuli = false;
    for (const PredictedNode& node : told.nodes) {
        has_stimuli = has_stimuli || !node.signs.empty();
        table.rows.push_back({node.name, node.bits ? std::to_string(*node.bits) : "any",
                              std::to_string(node.fraction_bits), rounded_text(node.worst), rounded_text(node.error),
                              node.bits ? rounded_text(node.rail_ratio) : "-",
                              node.bits_needed ? std::to_string(*node.bits_needed) : "none",
                              node.integer_bits_needed ? std::to_string(*node.integer_bits_needed) : "-",
                              node.signs.empty() ? "-" : std::to_string(node.signs.size())});
    }
    std::string text = "headroom the largest level of each node, for any input of full scale, in steps of its word\n";
    text += laid_out(style, table);
    for (const PredictedNode& node : told.nodes) {
        if (node.is_reachable) text += wrapped(style, node.name + " " + effect_text(node.effect), 2);
    }
    if (has_stimuli) {
        text += wrapped(style,
                        "what drives a node hardest: full scale times the signs of its impulse response, reversed, so "
                        "many samples; the signs are in the answer of --json, and shape = \"signs\" sends them",
                        2);
    }
    text += registers_text(told.registers, style);
    for (const PredictedCoefficients& stage : told.coefficients) {
        text += "  coefficients of stage " + std::to_string(stage.stage) + ": " + std::to_string(stage.bits_needed) +
                " bits needed at " + std::to_string(stage.fraction_bits) + " fraction bits" +
                (stage.bits ? ", " + std::to_string(*stage.bits) + " said" : "") + "\n";
    }
    return text;
}

std::string silence_text(const PredictedArithmetic& told, const Signal& signal, const TextStyle& style) {
    if (!told.silence) return "";
    const PredictedSilence& silence = *told.silence;
    std::string text;
    if (silence.lowest_code == 0 && silence.highest_code == 0) {
        text = field(style, "silence", "nothing remains when the input has ended: proven");
    } else {
        text = field(style, "silence",
                     "what remains when the input has ended is proven to lie in " +
                         Figures(signal).range(silence.lower, silence.upper) + unit_text(signal));
    }
    if (silence.searched) {
        text += wrapped(style,
                        "every state was tried: codes " + std::to_string(silence.searched->lowest) + " .. " +
                            std::to_string(silence.searched->highest) + ", the widest cycle of " +
                            counted(silence.searched->period_samples, "sample", "samples"),
                        field_columns);
    }
    for (const PredictedSilence::Estimate& estimate : silence.estimates) {
        text += wrapped(style,
                        "estimate, no bound (Jackson 1969), " + estimate.name + ": an oscillation of " +
                            std::to_string(estimate.oscillation) + ", a constant of " +
                            std::to_string(estimate.constant) + " steps of its state",
                        field_columns);
    }
    return text;
}

}  // namespace halflsb
