#include "runner/record/prediction_json.hpp"

#include <utility>

namespace halflsb {

namespace {

Json count_json(std::optional<int> count) { return count ? Json(*count) : Json(nullptr); }

Json point_json(const PredictedPoint& point) {
    return {{"frequency_hz", number_json(point.frequency_hz)},
            {"cycles_per_sample", number_json(point.cycles_per_sample)},
            {"design_db", number_json(point.design_db)},
            {"declared_db", number_json(point.declared_db)},
            {"phase_degrees", number_json(point.phase_degrees)},
            {"group_delay_samples", number_json(point.group_delay_samples)}};
}

/// A column for each quantity: some hundred points would be some thousand lines of objects.
Json plot_json(const std::vector<PredictedPoint>& points) {
    Json plot = {{"frequency_hz", Json::array()},
                 {"design_db", Json::array()},
                 {"declared_db", Json::array()},
                 {"phase_degrees", Json::array()},
                 {"group_delay_samples", Json::array()}};
    for (const PredictedPoint& point : points) {
        const Json row = point_json(point);
        for (auto& [key, column] : plot.items()) column.push_back(row.at(key));
    }
    return plot;
}

Json price_json(const PredictedPrice& price) {
    return {{"passband_db", number_json(price.passband_db)},
            {"gain_difference_db", number_json(price.gain_difference_db)},
            {"gain_difference_hz", number_json(price.at_hz)},
            {"output_difference", number_json(price.output_difference)},
            {"design_dc_gain", number_json(price.design_dc_gain)},
            {"declared_dc_gain", number_json(price.declared_dc_gain)},
            {"design_pole_radius", number_json(price.design_pole_radius)},
            {"declared_pole_radius", number_json(price.declared_pole_radius)}};
}

Json predicted_error_json(const PredictedError& error) {
    return {{"lower", number_json(error.lower)},           {"upper", number_json(error.upper)},
            {"largest", number_json(error.largest())},     {"rms", number_json(error.rms)},
            {"bias_lower", number_json(error.bias_lower)}, {"bias_upper", number_json(error.bias_upper)},
            {"is_statistical", error.is_statistical},      {"why", error.why}};
}

Json term_json(const PredictedTerm& term) {
    return {{"point", term.name},
            {"count", term.count},
            {"step", number_json(term.step)},
            {"lowest_steps", number_json(term.lowest)},
            {"highest_steps", number_json(term.highest)},
            {"l1_norm", number_json(term.l1)},
            {"noise_gain", number_json(term.noise_gain)},
            {"dc_gain", number_json(term.dc_gain)},
            {"lower", number_json(term.lower)},
            {"upper", number_json(term.upper)},
            {"formula", term.formula}};
}

Json node_json(const PredictedNode& node) {
    return {{"node", node.name},
            {"bits", count_json(node.bits)},
            {"fraction_bits", node.fraction_bits},
            {"overflow", name_of(node.overflow)},
            {"worst_steps", number_json(node.worst)},
            {"error_steps", number_json(node.error)},
            {"rail_ratio", node.bits ? number_json(node.rail_ratio) : Json(nullptr)},
            {"can_be_reached", node.is_reachable},
            {"effect", name_of(node.effect)},
            {"bits_needed", count_json(node.bits_needed)},
            {"integer_bits_needed", count_json(node.integer_bits_needed)},
            {"stimulus_signs", text_json(node.signs)},
            {"stimulus_samples", node.signs.size()},
            {"stimulus_reaches_steps", node.signs.empty() ? Json(nullptr) : number_json(node.reached)}};
}

Json silence_json(const PredictedSilence& silence) {
    Json estimates = Json::array(), searched = nullptr;
    if (silence.searched) {
        searched = {{"lowest_code", silence.searched->lowest},
                    {"highest_code", silence.searched->highest},
                    {"period_samples", silence.searched->period_samples}};
    }
    for (const PredictedSilence::Estimate& estimate : silence.estimates) {
        estimates.push_back({{"place", estimate.name},
                             {"step", number_json(estimate.step)},
                             {"oscillation_steps", estimate.oscillation},
                             {"constant_steps", estimate.constant}});
    }
    return {{"lower", number_json(silence.lower)}, {"upper", number_json(silence.upper)},
            {"lowest_code", silence.lowest_code},  {"highest_code", silence.highest_code},
            {"searched", std::move(searched)},     {"estimates", std::move(estimates)}};
}

Json arithmetic_json(const PredictedArithmetic& told) {
    Json assumed = Json::array(), terms = Json::array(), cases = Json::array(), nodes = Json::array(),
         registers = Json::array(), coefficients = Json::array();
    for (const PredictedAssumption& stage : told.assumed)
        assumed.push_back({{"stage", stage.stage}, {"taken", stage.taken}});
    for (const PredictedTerm& term : told.terms) terms.push_back(term_json(term));
    for (const PredictedCaseError& one : told.cases)
        cases.push_back({{"name", one.name}, {"samples", one.samples}, {"error", predicted_error_json(one.error)}});
    for (const PredictedNode& node : told.nodes) nodes.push_back(node_json(node));
    for (const PredictedRegister& one : told.registers) {
        registers.push_back({{"register", one.name},
                             {"bits", count_json(one.bits)},
                             {"fraction_bits", one.fraction_bits},
                             {"overflow", name_of(one.overflow)},
                             {"bits_needed", one.bits_needed},
                             {"discarded_bits", one.discarded_bits},
                             {"may_discard_bits", count_json(one.may_discard_bits)}});
    }
    for (const PredictedCoefficients& stage : told.coefficients) {
        coefficients.push_back({{"stage", stage.stage},
                                {"fraction_bits", stage.fraction_bits},
                                {"bits_needed", stage.bits_needed},
                                {"bits", count_json(stage.bits)}});
    }
    return {{"assumed", std::move(assumed)},
            {"largest_if_rounding_said", number_json(told.largest_if_rounding_said)},
            {"terms", std::move(terms)},
            {"reference_error", number_json(told.reference_error)},
            {"error", predicted_error_json(told.error)},
            {"cases", std::move(cases)},
            {"nodes", std::move(nodes)},
            {"registers", std::move(registers)},
            {"coefficients", std::move(coefficients)},
            {"silence", told.silence ? silence_json(*told.silence) : Json(nullptr)}};
}

Json filter_json(const PredictedFilter& filter) {
    Json response = Json::array(), warnings = Json::array(), steps = Json::array();
    for (const PredictedPoint& point : filter.response) response.push_back(point_json(point));
    for (const RecursionWarning& warning : filter.warnings) {
        warnings.push_back(
            {{"stage", warning.stage}, {"order", warning.order}, {"recursion_loss", number_json(warning.loss)}});
    }
    for (const double value : filter.step_response) steps.push_back(number_json(value));
    return {{"channels", filter.channels},
            {"stages", filter.stages},
            {"largest_pole_radius", number_json(filter.largest_pole_radius)},
            {"l1_norm", number_json(filter.l1_norm)},
            {"dc_gain_db", number_json(filter.dc_gain_db)},
            {"corner_hz", number_json(filter.corner_hz)},
            {"missing", text_json(filter.missing)},
            {"response", std::move(response)},
            {"plot", plot_json(filter.plot)},
            {"step_response", std::move(steps)},
            {"price", filter.price ? price_json(*filter.price) : Json(nullptr)},
            {"warnings", std::move(warnings)},
            {"arithmetic", filter.arithmetic ? arithmetic_json(*filter.arithmetic) : Json(nullptr)}};
}

std::string_view answer_name(ChangeSeen::Answer answer) {
    if (answer == ChangeSeen::Answer::seen) return "seen";
    return answer == ChangeSeen::Answer::unseen ? "unseen" : "same";
}

Json sight_json(const PredictedSight& sight) {
    Json changes = Json::array();
    for (const ChangeSeen& change : sight.sensitivity.changes) {
        changes.push_back({{"change", change.change},
                           {"answer", answer_name(change.answer)},
                           {"rule", text_json(change.rule)},
                           {"case", text_json(change.case_name)},
                           {"differing_samples", change.differing},
                           {"largest", number_json(change.largest_lsb)}});
    }
    Json promise_fails = nullptr;
    if (!sight.sensitivity.failing_rule.empty())
        promise_fails = {{"rule", sight.sensitivity.failing_rule}, {"case", sight.sensitivity.failing_case}};
    return {{"unknown", text_json(sight.sensitivity.unknown)},
            {"promise_fails", std::move(promise_fails)},
            {"rounding_is_assumed", sight.rounding_is_assumed},
            {"has_exact_rule", sight.has_exact_rule},
            {"cases", sight.cases},
            {"cases_left_out", sight.cases_left_out},
            {"samples", sight.sensitivity.samples},
            {"is_cut", sight.sensitivity.is_cut},
            {"changes", std::move(changes)}};
}

}  // namespace

Json prediction_json(const Prediction& prediction) {
    Json filters = Json::array(), cases = Json::array();
    for (const PredictedFilter& filter : prediction.filters) filters.push_back(filter_json(filter));
    for (const PredictedCase& predicted : prediction.cases) {
        cases.push_back({{"name", predicted.name},
                         {"samples", predicted.samples},
                         {"latency_told", predicted.latency_told},
                         {"wire_s", number_json(predicted.wire_s)}});
    }
    return {{"title", text_json(prediction.title)},
            {"plan_file", prediction.plan_file},
            {"signal", signal_json(prediction.signal)},
            {"error_unit", prediction.signal.output.has_lsb() ? "lsb" : "value"},
            {"filters", std::move(filters)},
            {"sight", prediction.sight ? sight_json(*prediction.sight) : Json(nullptr)},
            {"wire_s", number_json(prediction.wire_s)},
            {"cases", std::move(cases)}};
}

}  // namespace halflsb
