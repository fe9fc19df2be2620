// Gains of published weightings in closed form.
#pragma once

#include "oracle/rules/response_mask.hpp"

namespace halflsb {

/// In dB. A and C: 0 dB at 1 kHz, from the poles of IEC 61672-1 (its table of design goals, rounded to 0.1 dB, agrees
/// with them at the exact frequencies 1000 * 10^(n / 10)). K: the two sections that ITU-R BS.1770 gives for 48 kHz,
/// below 24 kHz, at its own gain: 0.691 dB at 997 Hz. 0 for none. Minus infinity at 0 Hz of a weighting.
double nominal_db(NominalCurve curve, double hz);

}  // namespace halflsb
