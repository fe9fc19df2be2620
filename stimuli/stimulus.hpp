// A known signal: a pure function of its parameters and of the sample's index, so that a span can be
// filled from anywhere and twice, and gives the same codes on every machine and compiler.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"
#include "stimuli/rounding.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// Where a stimulus has power; a response rule asks before anything is streamed.
struct Spectrum {
    struct Band {
        double from_cycles_per_sample = 0.0, to_cycles_per_sample = 0.0;
    };
    /// Where power is continuous, ascending and apart.
    std::vector<Band> bands = {};
    /// Single lines, cycles per sample, ascending.
    std::vector<double> tones = {};
    /// Stretches of equal length, one after the other, in which the tones have phases of their own. A single one is
    /// the whole record, and neither its start nor its length is said.
    struct Realisations {
        std::int64_t first_sample = 0;  ///< of the first one, an index of the stimulus
        std::int64_t samples = 0;       ///< of each
        std::int64_t count = 1;
        bool operator==(const Realisations&) const = default;
    };
    Realisations realisations = {};
    /// From this index on the stimulus is nothing but its tones and a constant; none where it never is, or where nobody
    /// says.
    std::optional<std::int64_t> steady_from_sample = {};
};

class Stimulus {
public:
    virtual ~Stimulus() = default;
    /// Values for the indices first_index, first_index + 1, ... as ratios of full scale (1.0 is full
    /// scale, so the top code is 1 - 1 LSB and the quantiser saturates there). Indices outside
    /// 0 .. length_samples() - 1 are silent. Never NaN.
    virtual void fill(std::int64_t first_index, std::span<double> ratios) const = 0;
    virtual std::int64_t length_samples() const = 0;
    virtual Spectrum spectrum() const = 0;
};

/// What the shapes need to know of the signal.
struct StimulusContext {
    double rate_hz = 1.0;                        ///< frequencies are given in Hz; Nyquist is rate_hz / 2
    SampleFormat input;                          ///< level_codes are codes of this format
    std::optional<double> full_scale_unit = {};  ///< what full scale of the input means; levels in the unit need it
    /// Of a stimulus inside another that gives no length of its own.
    std::optional<std::int64_t> default_length_samples = {};
};

/// Every shape with its parameters; the only place their words stand.
const std::vector<Recipe>& stimulus_recipes();

/// An Error's place is the name of the parameter to blame.
Outcome<std::unique_ptr<const Stimulus>> make_stimulus(std::string_view shape, const ParameterValues& values,
                                                       const StimulusContext& context);

/// Whether a file stands in a stimulus, at any depth: its samples are no function of the plan's words, so a
/// run keeps the codes themselves.
bool is_explicit(std::string_view shape, const ParameterValues& values);

/// The codes that are sent: the stimulus quantised to the input format. This is what both the board
/// and the oracle get.
void fill_codes(const Stimulus& stimulus, const SampleFormat& format, Rounding rounding, std::int64_t first_index,
                std::span<Code> codes);

}  // namespace halflsb
