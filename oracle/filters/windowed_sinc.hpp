// FIR filters by the window method: the ideal response, cut to a length by a window.
//
// With m = n - (N - 1) / 2 and, for each pass band from f1 to f2 (cycles a sample, 0 and 1/2 at the ends),
//     h[n] = w[n] sum over the bands of (2 f2 sinc(2 f2 m) - 2 f1 sinc(2 f1 m)), sinc(x) = sin(pi x) / (pi x),
// (S. W. Smith, The Scientist and Engineer's Guide to Digital Signal Processing, chapter 16, equations 16-1 and 16-2
// for low-pass, Hamming and Blackman), divided by the gain at zero frequency where that is in the first pass band, at
// half the rate for a high-pass, at the mean of from and to for a band-pass: what SciPy's firwin does. The corners are
// the points of half amplitude, -6.02 dB, but for the window's ripple.
//
// Windows over N - 1 steps, x = n / (N - 1): hann 0.5 - 0.5 cos 2 pi x; hamming 0.54 - 0.46 cos 2 pi x; blackman 0.42 -
// 0.5 cos 2 pi x + 0.08 cos 4 pi x; kaiser I0(beta sqrt(1 - (2 x - 1)^2)) / I0(beta) (Kaiser 1974, from memory).
#pragma once

#include "oracle/filters/filter.hpp"
#include "oracle/filters/recursive_design.hpp"

namespace halflsb {

enum class Window { rectangular, hann, hamming, blackman, kaiser };

struct WindowedSinc {
    ResponseShape shape = ResponseShape::low_pass;
    int taps = 1;                                          ///< odd for high-pass and band-stop, see is_type_2
    double lower_hz = 0.0, upper_hz = 0.0, rate_hz = 1.0;  ///< as in RecursiveDesign
    Window window = Window::hamming;
    double kaiser_beta = 0.0;  ///< 0 .. 50
};

/// An even number of symmetric taps has no gain at half the rate, whatever they are.
bool is_type_2(const WindowedSinc& design);

/// Symmetric to the last bit. Empty where the gain by which the taps are divided is below 1e-6 of the sum of their
/// sizes: so few taps cannot pass this band.
Fir designed_taps(const WindowedSinc& design);

}  // namespace halflsb
