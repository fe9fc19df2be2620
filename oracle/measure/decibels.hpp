// Decibels of an amplitude ratio, and back.
#pragma once

#include <cmath>
#include <numbers>

namespace halflsb {

inline double db_of_amplitude(double ratio) { return 20.0 * std::log10(ratio); }
inline double amplitude_of_db(double db) { return std::pow(10.0, db / 20.0); }
/// d(20 lg x) = this dx / x.
inline constexpr double db_per_neper = 20.0 / std::numbers::ln10;

}  // namespace halflsb
