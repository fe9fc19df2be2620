#include "runner/record/prediction_json.hpp"

#include <catch2/catch.hpp>
#include <limits>

using namespace halflsb;

namespace {
constexpr double endless = std::numeric_limits<double>::infinity();
}

TEST_CASE("prediction json: what is infinite or not told is null, never a word", "[record]") {
    Prediction prediction;
    PredictedFilter filter;
    filter.dc_gain_db = -endless;
    filter.l1_norm = endless;
    filter.response = {{0.0, 0.0, -endless, std::numeric_limits<double>::quiet_NaN(), std::nullopt, std::nullopt}};
    filter.arithmetic = PredictedArithmetic{};
    filter.arithmetic->error.upper = endless;
    filter.arithmetic->nodes = {PredictedNode{}};
    filter.arithmetic->nodes.front().worst = endless;
    prediction.filters = {filter};
    const Json json = prediction_json(prediction);
    const Json& told = json.at("filters").at(0);
    CHECK(told.at("dc_gain_db").is_null());
    CHECK(told.at("l1_norm").is_null());
    CHECK(told.at("response").at(0).at("design_db").is_null());
    CHECK(told.at("response").at(0).at("declared_db").is_null());
    CHECK(told.at("response").at(0).at("group_delay_samples").is_null());
    CHECK(told.at("price").is_null());
    CHECK(told.at("arithmetic").at("error").at("upper").is_null());
    CHECK(told.at("arithmetic").at("error").at("largest").is_null());
    CHECK(told.at("arithmetic").at("error").at("lower") == 0.0);
    CHECK(told.at("arithmetic").at("silence").is_null());
    const Json& node = told.at("arithmetic").at("nodes").at(0);
    CHECK(node.at("worst_steps").is_null());
    CHECK(node.at("rail_ratio").is_null());
    CHECK(node.at("bits").is_null());
    CHECK(node.at("stimulus_signs").is_null());
    CHECK(node.at("stimulus_reaches_steps").is_null());
    CHECK(json.at("sight").is_null());
}

TEST_CASE("prediction json: a drawing is a list for each quantity, all of one length", "[record]") {
    Prediction prediction;
    prediction.filters = {PredictedFilter{}};
    prediction.filters.front().plot = {{0.0, 0.0, 1.0, 2.0, 0.0, 7.5}, {600.0, 0.5, -endless, 3.0, std::nullopt, {}}};
    const Json plot = prediction_json(prediction).at("filters").at(0).at("plot");
    CHECK(plot.at("frequency_hz") == Json({0.0, 600.0}));
    CHECK(plot.at("design_db") == Json({Json(1.0), Json(nullptr)}));
    CHECK(plot.at("declared_db") == Json({2.0, 3.0}));
    CHECK(plot.at("phase_degrees") == Json({Json(0.0), Json(nullptr)}));
    CHECK(plot.at("group_delay_samples") == Json({Json(7.5), Json(nullptr)}));
}

TEST_CASE("prediction json: each answer has its word", "[record]") {
    Prediction prediction;
    prediction.sight = PredictedSight{};
    prediction.sight->sensitivity.changes = {{"a", ChangeSeen::Answer::seen, "error", "step", 3, 1.0},
                                             {"b", ChangeSeen::Answer::unseen, "", "", 2, 1.0},
                                             {"c", ChangeSeen::Answer::same, "", "", 0, 0.0}};
    const Json changes = prediction_json(prediction).at("sight").at("changes");
    CHECK(changes.at(0).at("answer") == "seen");
    CHECK(changes.at(0).at("rule") == "error");
    CHECK(changes.at(1).at("answer") == "unseen");
    CHECK(changes.at(1).at("rule").is_null());
    CHECK(changes.at(2).at("answer") == "same");
}
