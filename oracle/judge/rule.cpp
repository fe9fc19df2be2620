#include "oracle/judge/rule.hpp"

#include <cmath>

#include "oracle/measure/lag.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

Error refuse(std::string parameter, std::string problem, std::string remedy) {
    return {ErrorKind::input, std::move(parameter), std::move(problem), std::move(remedy)};
}

struct LimitWords {
    std::string_view lsb, ratio, unit;
};
constexpr LimitWords largest_words{"max_lsb", "max_ratio", "max_unit"};
constexpr LimitWords rms_words{"rms_lsb", "rms_ratio", "rms_unit"};
constexpr LimitWords bias_words{"bias_lsb", "bias_ratio", "bias_unit"};

/// One limit in one of its three units; the widest sensible one is full scale.
Outcome<std::optional<Limit>> read_limit(const ParameterValues& values, const Recipe& recipe, const LimitWords& words,
                                         const RuleContext& context) {
    std::optional<Limit> limit;
    std::string_view seen;
    for (const auto& [name, in] :
         {std::pair{words.lsb, Limit::In::lsb}, std::pair{words.ratio, Limit::In::full_scale_ratio},
          std::pair{words.unit, Limit::In::unit}}) {
        const auto number = values.number(recipe, name);
        const bool is_derived = values.text(recipe, name) == "derived";
        if (!number && !is_derived) continue;
        if (limit) {
            return refuse(std::string(name),
                          "the same limit is given twice, as " + std::string(seen) + " and as " + std::string(name),
                          "keep one of the two");
        }
        if (in == Limit::In::lsb && !context.output_has_lsb) {
            return refuse(std::string(name), "an f32 output has no LSB",
                          "use " + std::string(words.ratio) + " or " + std::string(words.unit));
        }
        if (in == Limit::In::unit && !context.full_scale_unit) {
            return refuse(std::string(name), "nothing says what full scale is worth in the unit",
                          "set full_scale_unit in [signal], or use " + std::string(words.ratio));
        }
        if (is_derived) {
            limit = Limit{0.0, in, true};
            seen = name;
            continue;
        }
        const double widest = in == Limit::In::lsb                ? context.output_full_scale_lsb
                              : in == Limit::In::full_scale_ratio ? 1.0
                                                                  : std::fabs(*context.full_scale_unit);
        if (!(*number <= widest)) {
            return refuse(std::string(name),
                          number_text(*number) + " is wider than full scale (" + number_text(widest) + ")",
                          "a limit that wide judges nothing; give the error that the design allows");
        }
        limit = Limit{*number, in};
        seen = name;
    }
    return limit;
}

Outcome<Rule> make_error_rule(const ParameterValues& values, const Recipe& recipe, const RuleContext& context) {
    ErrorRule rule;
    for (const auto& [words, target] : {std::pair{largest_words, &rule.largest}, std::pair{rms_words, &rule.rms},
                                        std::pair{bias_words, &rule.bias}}) {
        auto limit = read_limit(values, recipe, words, context);
        if (!limit) return limit.error();
        *target = *limit;
    }
    rule.min_snr_db = values.number(recipe, "min_snr_db");
    if (!rule.largest && !rule.rms && !rule.bias && !rule.min_snr_db) {
        return refuse("kind", "a rule of kind \"error\" without a limit judges nothing",
                      "give at least one of max_lsb, rms_lsb, bias_lsb (or _ratio, _unit) and min_snr_db");
    }
    return Rule{rule, {}};
}

Outcome<Rule> make_latency_rule(const ParameterValues& values, const Recipe& recipe) {
    LatencyRule rule;
    rule.expected_samples = static_cast<int>(*values.integer(recipe, "latency_samples"));
    return Rule{rule, {}};
}

Outcome<Rule> make_unchanged_rule(const ParameterValues& values, const Recipe& recipe, const RuleContext& context) {
    UnchangedRule rule;
    rule.baseline = values.text(recipe, "baseline").value_or("baseline");
    auto largest = read_limit(values, recipe, largest_words, context);
    if (!largest) return largest.error();
    rule.largest = *largest;
    return Rule{rule, {}};
}

Outcome<Rule> make_response_rule(const ParameterValues& values, const Recipe& recipe, const RuleContext& context) {
    ResponseRule rule;
    rule.relative_to_design = values.text(recipe, "relative_to") == "design";
    const double nyquist_hz = context.rate_hz / 2.0;
    for (const auto& row : values.rows("bands")) {
        if (row.size() != 4)
            return refuse("bands", "a band has four numbers", "give from_hz, to_hz and min_db or max_db");
        ResponseBand band{row[0], row[1], std::nullopt, std::nullopt};
        const std::string name = number_text(band.from_hz) + " to " + number_text(band.to_hz) + " Hz";
        if (!(band.from_hz >= 0.0) || !(band.to_hz >= band.from_hz)) {
            return refuse("bands", "the band " + name + " runs backwards",
                          "from_hz must be at least 0 and at most to_hz");
        }
        if (!(band.to_hz <= nyquist_hz)) {
            return refuse("bands", "the band " + name + " ends above Nyquist (" + number_text(nyquist_hz) + " Hz)",
                          "end it at " + number_text(nyquist_hz) + " Hz or below");
        }
        if (std::isfinite(row[2])) band.min_db = row[2];
        if (std::isfinite(row[3])) band.max_db = row[3];
        if (!band.min_db && !band.max_db)
            return refuse("bands", "the band " + name + " has no limit", "give min_db, max_db or both");
        if (band.min_db && band.max_db && !(*band.min_db <= *band.max_db)) {
            return refuse("bands",
                          "the limits of the band " + name + " cross: min_db " + number_text(*band.min_db) +
                              " is above max_db " + number_text(*band.max_db),
                          "exchange them");
        }
        rule.bands.push_back(band);
    }
    if (rule.bands.empty())
        return refuse("bands", "a response rule without bands judges nothing", "give at least one band");
    return Rule{rule, {}};
}

}  // namespace

std::string to_text(const PlanPosition& position) {
    return position.file + ":" + std::to_string(position.line) + ":" + std::to_string(position.column);
}

const std::vector<Recipe>& rule_recipes() {
    const auto limit = [](std::string_view name, std::string_view unit, std::string_view help) {
        return Parameter{.name = name, .type = ParameterType::real, .unit = unit, .minimum = 0.0, .help = help};
    };
    const auto derivable = [limit](std::string_view name, std::string_view unit, std::string_view help) {
        Parameter parameter = limit(name, unit, help);
        parameter.choices = {"derived"};
        return parameter;
    };
    static const std::vector<Recipe> recipes{
        {"error",
         "Response minus declared reference, over all samples; give at least one limit.",
         {
             derivable("max_lsb", "LSB", "Largest error allowed, in steps of the output format."),
             derivable("max_ratio", "of full scale",
                       "Largest error allowed, as a fraction of the output's full scale."),
             derivable("max_unit", "unit", "Largest error allowed, in the unit of [signal]."),
             derivable("rms_lsb", "LSB", "Root mean square of the error allowed."),
             derivable("rms_ratio", "of full scale", "Root mean square of the error allowed."),
             derivable("rms_unit", "unit", "Root mean square of the error allowed."),
             derivable("bias_lsb", "LSB", "Mean of the error allowed, either sign."),
             derivable("bias_ratio", "of full scale", "Mean of the error allowed, either sign."),
             derivable("bias_unit", "unit", "Mean of the error allowed, either sign."),
             {.name = "min_snr_db",
              .type = ParameterType::real,
              .unit = "dB",
              .help = "Power of the reference over power of the error, at least; an exact match passes."},
         }},
        {"latency",
         "Whole-sample delay of the response behind the reference; the filter's own delay is not latency.",
         {
             {.name = "latency_samples",
              .type = ParameterType::integer,
              .unit = "samples",
              .minimum = -lag_window_samples,
              .maximum = lag_window_samples,
              .required = true,
              .help = "The delay that is right; every case without this rule is held to 0."},
         }},
        {"response",
         "Gain against limits in bands, from a noise, chirp, sine or multitone stimulus, judged against the design.",
         {
             {.name = "bands",
              .type = ParameterType::bands,
              .required = true,
              .help = "Array of {from_hz, to_hz, min_db, max_db}; one of min_db and max_db may be left out."},
             {.name = "relative_to",
              .type = ParameterType::choice,
              .choices = {"absolute", "design"},
              .help = "Whether the limits hold for the gain itself or for its deviation from the design."},
         }},
        {"unchanged",
         "The response equals that of an accepted run (halflsb accept); needs no oracle.",
         {
             {.name = "baseline",
              .type = ParameterType::text,
              .unit = "characters",
              .maximum = 200,
              .help = "Folder of the baseline, below the root; \"baseline\" when left out."},
             limit("max_lsb", "LSB", "Largest difference allowed; none when left out: bit for bit."),
         }},
        {"exact",
         "The response equals what the declared arithmetic returns, bit for bit; needs all of it said "
         "(docs/arithmetic.md).",
         {}},
    };
    return recipes;
}

std::string_view kind_name(const Rule& rule) { return rule_recipes()[rule.kind.index()].name; }

Outcome<Rule> make_rule(std::string_view kind, const ParameterValues& values, const RuleContext& context) {
    const Recipe* recipe = find_recipe(rule_recipes(), kind);
    if (recipe == nullptr)
        return refuse("kind", "there is no rule \"" + std::string(kind) + "\"",
                      "use error, latency, response, unchanged or exact");
    if (kind == "error") return make_error_rule(values, *recipe, context);
    if (kind == "latency") return make_latency_rule(values, *recipe);
    if (kind == "unchanged") return make_unchanged_rule(values, *recipe, context);
    if (kind == "exact") return Rule{ExactRule{}, {}};
    return make_response_rule(values, *recipe, context);
}

}  // namespace halflsb
