// The words in which a plan says what a designed filter lets through: response with corner_hz, or from_hz and to_hz.
// And the search for a number that would do. Private to this room.
#pragma once

#include <functional>
#include <string_view>
#include <vector>

#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/recursive_design.hpp"

namespace halflsb {

inline constexpr double least_design_hz = 1e-9;
inline constexpr double largest_design_hz = 1e9;

std::string_view name_of(ResponseShape shape);
inline bool is_band(ResponseShape shape) {
    return shape == ResponseShape::band_pass || shape == ResponseShape::band_stop;
}

/// response, corner_hz, from_hz, to_hz.
std::vector<Parameter> band_parameters();
Parameter frequency_parameter(std::string_view name, std::string_view help);

struct Band {
    ResponseShape shape = ResponseShape::low_pass;
    double lower_hz = 0.0, upper_hz = 0.0;  ///< as in RecursiveDesign
};

/// Refuses words that do not go with the response, corners not below half the rate, and a band that ends before it
/// begins. The values already fit the table.
Outcome<Band> band_from(const Recipe& recipe, const ParameterValues& values, double rate_hz);

/// A number between `bad` and `good`, both positive, that does and is near the first that does, in three digits where
/// they do too. `does(good)` holds.
double first_that_does(double bad, double good, const std::function<bool(double)>& does);

/// Six digits, rounded up or down, for a limit that is to be kept; or to the nearest.
std::string rounded_text(double value, bool up);
std::string near_text(double value);

/// Whether second-order sections in double precision hold the design: loss_of is at most most_loss.
bool is_held(const std::vector<BiquadSection>& sections);
/// " at 48000 samples a second can lose 3e-07 of its gain in double precision", or that it cannot be held at all.
std::string not_held(const std::vector<BiquadSection>& sections, double rate_hz);

}  // namespace halflsb
