// Designs filters for designs_test.py by the words of a plan. A case is: kind, its list of numbers, the sample rate, a
// list of ascending frequencies in cycles a sample. Kinds and their numbers, `response` counting low-pass, high-pass,
// band-pass, band-stop:
//   0 butterworth    response order lower upper
//   1 chebyshev      response order lower upper ripple
//   2 windowed-sinc  response taps lower upper window beta
//   3 audio-eq       type frequency way width gain
//   4 weighting      curve
//   5 octave-band    fraction midband order
//   6 sections       b0 b1 b2 a1 a2 ...      7 fir taps      8 comb delay direct forward feedback      9 moving average
// The answer is: how many coefficients, the coefficients (taps, or five a section); at each frequency the real and
// imaginary part of the response, the group delay and the unwrapped phase; noise power gain, positive and
// negative sum.
#include <array>

#include "oracle/filters/closed_forms.hpp"
#include "oracle/filters/filter.hpp"
#include "oracle/filters/node_path.hpp"
#include "tests/reference/binary_cases.hpp"

using namespace halflsb;
using namespace halflsb::reference;

namespace {

using Numbers = std::vector<double>;

template <std::size_t count>
std::string word(const std::array<const char*, count>& words, double index) {
    return words.at(static_cast<std::size_t>(index));
}

std::int64_t whole(double number) { return static_cast<std::int64_t>(number); }

FilterStage made(const char* kind, const ParameterValues& values, double rate_hz) {
    const auto stage = make_stage(kind, values, {.rate_hz = rate_hz});
    if (stage) return *stage;
    std::fprintf(stderr, "%s: %s\n", kind, to_text(stage.error()).c_str());
    std::exit(1);
}

ParameterValues band_words(const Numbers& list) {
    ParameterValues values;
    values.set("response", word<4>({"low-pass", "high-pass", "band-pass", "band-stop"}, list.at(0)));
    if (list[0] < 2.0) {
        values.set("corner_hz", list.at(2));
    } else {
        values.set("from_hz", list.at(2));
        values.set("to_hz", list.at(3));
    }
    return values;
}

FilterStage recursive(const char* kind, const Numbers& list, double rate_hz) {
    ParameterValues values = band_words(list);
    values.set("order", whole(list.at(1)));
    if (list.size() > 4) values.set("ripple_db", list[4]);
    return made(kind, values, rate_hz);
}

FilterStage windowed_sinc(const Numbers& list, double rate_hz) {
    ParameterValues values = band_words(list);
    values.set("taps", whole(list.at(1)));
    values.set("window", word<5>({"rectangular", "hann", "hamming", "blackman", "kaiser"}, list.at(4)));
    if (list[4] == 4.0) values.set("kaiser_beta", list.at(5));
    return made("windowed-sinc", values, rate_hz);
}

FilterStage equaliser(const Numbers& list, double rate_hz) {
    ParameterValues values;
    values.set("type", word<8>({"low-pass", "high-pass", "band-pass", "band-pass-skirt", "all-pass", "peaking",
                                "low-shelf", "high-shelf"},
                               list.at(0)));
    values.set("frequency_hz", list.at(1));
    values.set(word<3>({"q", "bandwidth_octaves", "shelf_slope"}, list.at(2)), list.at(3));
    if (list[0] >= 5.0) values.set("gain_db", list.at(4));
    return made("audio-eq", values, rate_hz);
}

FilterStage weighting(const Numbers& list, double rate_hz) {
    ParameterValues values;
    values.set("curve", word<3>({"A", "C", "K"}, list.at(0)));
    return made("weighting", values, rate_hz);
}

FilterStage octave_band(const Numbers& list, double rate_hz) {
    ParameterValues values;
    values.set("fraction", whole(list.at(0)));
    values.set("midband_hz", list.at(1));
    values.set("order", whole(list.at(2)));
    return made("octave-band", values, rate_hz);
}

FilterDesign sections(const Numbers& list) {
    BiquadCascade cascade;
    for (std::size_t i = 0; i + 5 <= list.size(); i += 5) {
        cascade.sections.push_back({list[i], list[i + 1], list[i + 2], list[i + 3], list[i + 4]});
    }
    return cascade;
}

FilterStage read_stage() {
    const auto kind = static_cast<int>(number());
    const Numbers list = numbers();
    const double rate_hz = number();
    switch (kind) {
        case 0:
            return recursive("butterworth", list, rate_hz);
        case 1:
            return recursive("chebyshev", list, rate_hz);
        case 2:
            return windowed_sinc(list, rate_hz);
        case 3:
            return equaliser(list, rate_hz);
        case 4:
            return weighting(list, rate_hz);
        case 5:
            return octave_band(list, rate_hz);
        case 6:
            return {sections(list), std::nullopt};
        case 7:
            return {Fir{list}, std::nullopt};
        case 8:
            return {Comb{static_cast<int>(list.at(0)), list.at(1), list.at(2), list.at(3)}, std::nullopt};
        default:
            return {MovingAverage{static_cast<int>(list.at(0))}, std::nullopt};
    }
}

Numbers coefficients_of(const FilterDesign& design) {
    if (const auto* fir = std::get_if<Fir>(&design)) return fir->taps;
    Numbers list;
    if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
        for (const BiquadSection& s : cascade->sections) list.insert(list.end(), {s.b0, s.b1, s.b2, s.a1, s.a2});
    }
    return list;
}

}  // namespace

int main() {
    // A case begins with its kind; the end of the input is the end.
    for (int next = std::getchar(); next != EOF; next = std::getchar()) {
        std::ungetc(next, stdin);
        const FilterChain chain{read_stage()};
        const Numbers frequencies = numbers();
        const Numbers coefficients = coefficients_of(chain[0].design);
        write_numbers({static_cast<double>(coefficients.size())});
        write_numbers(coefficients);
        const Numbers phases = unwrapped_phase(chain, frequencies);
        for (std::size_t i = 0; i < frequencies.size(); ++i) {
            const auto h = response_at(chain, frequencies[i]);
            write_numbers({h.real(), h.imag(), group_delay_samples(chain, frequencies[i]), phases[i]});
        }
        const SignedSums sums = signed_sums(chain);
        write_numbers({noise_power_gain(chain), sums.positive, sums.negative});
    }
}
