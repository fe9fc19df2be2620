// Figures of a response to one sine: SINAD, ENOB, THD, SFDR (IEEE 1241 and IEEE 1057; the standards' text from
// memory), of the whole record. For a sine alone; settling must be left out by the caller.
//
//     NAD    = mean square of the record less offset and fitted sine (divided by N)
//     SINAD  = 10 lg (amplitude^2 / 2 / NAD)                      noise, distortion and spurs; offset not
//     THD    = sqrt(power sum of the harmonics / power of the fundamental), orders 2 .. highest; dB: 20 lg of it
//     ENOB   = log2(2 full_scale / sqrt(12 NAD))                  from the rms residual; holds at any level
//     ENOB'  = (SINAD - 10 lg 1.5) / (20 lg 2)                    from SINAD; falls with the level
//     SFDR   = 10 lg (power of the fundamental / power of the largest other line), spur.hpp says how it is found
//
// Both ENOB agree when amplitude = full_scale; below full scale ENOB is the one to judge (it equals ENOB' with
// 20 lg(full_scale / amplitude) added to SINAD). Stimulus and filter share the sample clock, so the frequency is
// known exactly and the fit has three parameters unless asked for four. Coherent frequencies are not needed.
// Harmonics that fold onto something else are named, and not counted twice (harmonics.hpp).
//
// Standard uncertainties, by the delta method; a = amplitude, K = 10 / ln 10, s = variance of the rest / N:
//     u^2(NAD)   = 2 R^2 / (N - columns) + sum u^2(P_h)           R mean square without harmonics: chi square
//     u^2(SINAD) = K^2 (u^2(NAD) / NAD^2 + u^2(P) / P^2)          P = a^2 / 2, u^2(P) = 4 s P + 4 s^2
//     u^2(THD)   = K^2 (sum u^2(P_h) / (sum P_h)^2 + u^2(P) / P^2)
//     u(ENOB)    = u(NAD) / (2 ln 2 NAD)
//     u^2(SFDR)  = K^2 (u^2(P_spur) / P_spur^2 + u^2(P) / P^2)
// They assume that what is left after the harmonics is like white Gaussian noise. Coloured noise has fewer degrees
// of freedom, so its SINAD is less sure than said; a large spur is counted as noise, so all is surer than said.
// A quantised coherent sine has neither: its residual repeats with the period and every run gives the same figures.
// In the figures of an ideal quantiser the uncertainty then says how far they may lie from the uniform-noise model.
#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <vector>

#include "oracle/measure/harmonics.hpp"
#include "oracle/measure/sine_fit.hpp"

namespace halflsb {

inline constexpr std::size_t tone_least_samples = 64;
inline constexpr std::size_t tone_most_samples = std::size_t{1} << 20;

struct ToneQuestion {
    double cycles_per_sample = 0.0;    ///< of the stimulus, within [1 / N, 1/2 - 1 / N]
    bool fits_frequency = false;       ///< four parameters: for a source with a clock of its own
    int highest_harmonic = 10;         ///< 10: the nine of IEEE 1241 (from memory); 1 for none
    std::optional<double> full_scale;  ///< peak of a full-scale sine, in the samples' unit; without it no ENOB
};

/// A figure is missing where it cannot be said.
struct ToneFigures {
    SineFit fundamental;
    std::vector<Harmonic> harmonics;
    /// The residual is not above the arithmetic of doubles (2^-46 of amplitude and offset): a perfect sine, and
    /// no figure below can be said.
    bool is_perfect = false;
    std::optional<Figure> sinad_db;
    std::optional<Figure> enob_bits, enob_of_sinad_bits;
    std::optional<Figure> thd_db, thd_percent;  ///< missing when no harmonic has a place of its own
    /// The THD that noise alone would show on average: a THD near it says nothing about harmonics.
    double thd_of_noise_percent = 0.0;
    std::optional<Figure> sfdr_db;
    double spur_cycles_per_sample = 0.0;
    bool spur_is_line = false;  ///< else the largest of the noise
};

struct ToneAnswer {
    std::optional<ToneFigures> figures;
    ToneFault fault = ToneFault::none;  ///< none exactly when there are figures
};

/// `no_tone`: noise alone reaches that amplitude once in 10^6 records or more often, or it is below 2^-40 of
/// the largest sample.
/// Memory: 24 bytes a sample of the power of two that holds the record, so 24 MiB for the longest, for the time of
/// the call. Cost: half a second for the longest record and ten harmonics.
ToneAnswer measure_tone(const ToneQuestion& question, std::span<const double> samples);

/// Collects the record, 8 bytes a sample; what is beyond tone_most_samples is not kept, and the answer is
/// `too_long`. Any split into blocks gives the same figures, bit for bit.
class ToneMeasure {
public:
    explicit ToneMeasure(ToneQuestion question) : question_(question) {}
    void add(std::span<const double> response);
    ToneAnswer value() const;

private:
    ToneQuestion question_;
    std::vector<double> record_;
    bool is_too_long_ = false;
};

}  // namespace halflsb
