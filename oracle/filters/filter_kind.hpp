// One kind of filter in the catalogue, and what the makers of all kinds share. Private to this room.
#pragma once

#include <initializer_list>
#include <optional>
#include <string>
#include <string_view>

#include "oracle/filters/filter.hpp"

namespace halflsb {

inline constexpr std::string_view fraction_bits_name = "coefficient_fraction_bits";
inline constexpr double most_fraction_bits = 62.0;
inline constexpr double largest_coefficient = 1e9;

/// What is wrong with the coefficients as they are used; nullopt when they are fine.
using Complaint = std::optional<std::string> (*)(const FilterStage&);
using DesignMaker = Outcome<FilterDesign> (*)(const Recipe&, const ParameterValues&, const StageContext&);

struct FilterKind {
    Recipe recipe;
    DesignMaker make = nullptr;     ///< refuses a design that cannot be, before any rounding
    Complaint complaint = nullptr;  ///< asked again after rounding; none: the kind has no coefficients
};

// The kinds, in the *_kinds.cpp and *_kind.cpp of this folder.
FilterKind moving_average_kind();
FilterKind fir_kind();
FilterKind biquad_cascade_kind();
FilterKind one_pole_kind();
FilterKind dc_blocker_kind();
FilterKind notch_kind();
FilterKind comb_kind();
FilterKind iir_kind();
FilterKind median_kind();
FilterKind cic_decimator_kind();
FilterKind cic_interpolator_kind();
FilterKind fir_decimator_kind();
FilterKind fir_interpolator_kind();
FilterKind windowed_sinc_kind();
FilterKind butterworth_kind();
FilterKind chebyshev_kind();
FilterKind equaliser_kind();
FilterKind weighting_kind();
FilterKind octave_band_kind();

Error refuse(std::string_view place, std::string problem, std::string remedy);
/// The shortest text that reads back as the same number.
std::string text_of(double number);
std::string text_of(std::size_t number);
/// Nine digits: a pole radius.
std::string text_of_radius(double radius);

/// Which one of several ways to say the same was taken; refused unless it is exactly one.
Outcome<std::string> one_of(const ParameterValues& values, std::initializer_list<std::string_view> names);
/// A number beyond +-largest_coefficient, or none at all.
std::optional<Error> unusable_number(std::string_view place, double number);
/// A frequency must lie below half the sample rate.
std::optional<Error> beyond_nyquist(std::string_view place, double frequency_hz, double rate_hz);
/// Those of taps or taps_file, of which one is given: 1 .. `most` usable numbers, not all 0.
Outcome<std::vector<double>> taps_from(const ParameterValues& values, std::size_t most);
/// Of a stage with taps, whether it changes the rate or not.
std::optional<std::string> complaint_about_taps(const FilterStage& stage);
/// The first section that is unstable or passes nothing.
std::optional<std::string> complaint_about_sections(const FilterStage& stage);

Parameter fraction_bits_parameter();
Parameter coefficients_parameter(std::string_view name, ParameterType type, std::string_view help);

}  // namespace halflsb
