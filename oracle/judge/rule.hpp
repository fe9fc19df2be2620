// The rules a plan can ask for. Closed set; each kind's words, units and ranges stand in
// rule_recipes() and nowhere else.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/judge/accepted_response.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Where in which file something was asked for; line and column count from 1.
struct PlanPosition {
    std::string file;
    int line = 0;
    int column = 0;
    bool operator==(const PlanPosition&) const = default;
};

/// "plan.toml:12:3"
std::string to_text(const PlanPosition& position);

/// A limit as the plan wrote it. `in` decides what one unit is worth as a value of the signal.
struct Limit {
    enum class In { lsb, full_scale_ratio, unit };
    double number = 0.0;
    In in = In::lsb;
    bool is_derived = false;  ///< from the declared arithmetic, for the case and the channel; there is no number then
    bool operator==(const Limit&) const = default;
};

/// Response minus declared reference. At least one limit is set.
struct ErrorRule {
    std::optional<Limit> largest, rms, bias;  ///< not negative; bias limits |mean|
    std::optional<double> min_snr_db;
};

/// Whole-sample delay of the response behind the reference, exactly this many.
struct LatencyRule {
    int expected_samples = 0;  ///< within the lag window
    bool implicit = false;     ///< the one each case has without asking
};

/// Gain in dB between limits over a band, both edges included.
struct ResponseBand {
    double from_hz = 0.0, to_hz = 0.0;
    std::optional<double> min_db, max_db;  ///< at least one
};

struct ResponseRule {
    std::vector<ResponseBand> bands;
    bool relative_to_design = false;  ///< the bands limit the gain itself, or its deviation from the design
};

/// The response equals that of an accepted run, bit for bit or within a limit; needs no oracle.
struct UnchangedRule {
    std::string baseline;                              ///< folder below the root
    std::optional<Limit> largest;                      ///< none: bit for bit
    std::shared_ptr<const AcceptedResponse> accepted;  ///< of the case; nullptr: the baseline has none
    std::string missing;                               ///< then: why, and what to do
};

/// The response equals what the declared arithmetic returns, bit for bit.
struct ExactRule {};

struct Rule {
    std::variant<ErrorRule, LatencyRule, ResponseRule, UnchangedRule, ExactRule> kind;
    PlanPosition position;
};

const std::vector<Recipe>& rule_recipes();
std::string_view kind_name(const Rule& rule);

/// What the ranges of a rule depend on.
struct RuleContext {
    double rate_hz = 1.0;
    bool output_has_lsb = true;
    double output_full_scale_lsb = 0.0;  ///< full scale in LSB; a limit beyond it is refused
    std::optional<double> full_scale_unit;
};

/// An Error's place is the name of the parameter to blame. Bands arrive as rows of
/// {from_hz, to_hz, min_db or -inf, max_db or +inf}.
Outcome<Rule> make_rule(std::string_view kind, const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
