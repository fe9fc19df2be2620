#include "oracle/explain/probes.hpp"

#include <algorithm>
#include <bit>
#include <cstdint>

#include "oracle/explain/board_model.hpp"

namespace halflsb {
namespace {

constexpr std::size_t usual_samples = 4096;

class ProbeMaker {
public:
    explicit ProbeMaker(const SampleFormat& format) : format_(format) {}

    std::vector<Probe> all() {
        noise("noise over the whole range", 1.0);
        noise("noise of half the range", 0.5);
        noise("noise of a thousandth of the range", 1e-3);
        impulses();
        wave("a step to half the range", [](std::size_t n) { return n < 3 ? 0.0 : 0.5; });
        wave("a step to half the range below zero", [](std::size_t n) { return n < 3 ? 0.0 : -0.5; });
        wave("a ramp over the whole range",
             [](std::size_t n) { return -1.0 + 2.0 * static_cast<double>(n) / usual_samples; });
        wave("a slow square over the whole range", [](std::size_t n) { return n / 512 % 2 == 0 ? 1.0 : -1.0; });
        wave("a burst and then silence", [this](std::size_t n) { return n < 512 ? uniform() : 0.0; });
        return std::move(probes_);
    }

private:
    Code code(double ratio) const { return code_of(format_, ratio * full_scale_value(format_), Rounding::half_up); }

    /// -1 .. 1; the constants are those of Knuth's MMIX generator (from memory), the upper bits alone are used.
    double uniform() {
        state_ = state_ * 6364136223846793005ULL + 1442695040888963407ULL;
        return static_cast<double>(static_cast<std::int64_t>(state_) >> 11) * 0x1p-52;
    }

    void noise(const char* what, double level) {
        wave(what, [&](std::size_t) { return level * uniform(); });
    }

    template <class Ratio>
    void wave(const char* what, const Ratio& ratio) {
        Probe probe{what, {}};
        for (std::size_t n = 0; n < usual_samples; ++n) probe.codes.push_back(code(ratio(n)));
        probes_.push_back(std::move(probe));
    }

    /// What makes odd coefficients ties, and the corner of two's complement.
    void impulses() {
        if (!format_.has_lsb()) {
            wave("an impulse", [](std::size_t n) { return n == 3 ? 1.0 : 0.0; });
            return;
        }
        const Code zero = zero_code(format_);
        Probe probe{"impulses of each power of two, of either sign", {}};
        for (int bit = 0; bit < format_.word_bits - 1; ++bit) {
            for (const std::int64_t sign : {1, -1}) {
                probe.codes.push_back(static_cast<Code>(zero + sign * (std::int64_t{1} << bit)));
                probe.codes.resize(probe.codes.size() + 127, zero);
            }
        }
        probe.codes.push_back(static_cast<Code>(zero - (std::int64_t{1} << (format_.word_bits - 1))));
        probe.codes.resize(probe.codes.size() + 127, zero);
        probes_.push_back(std::move(probe));
    }

    const SampleFormat& format_;
    std::uint64_t state_ = 1;
    std::vector<Probe> probes_;
};

}  // namespace

std::vector<Probe> probes_for(const SampleFormat& format) { return ProbeMaker(format).all(); }

std::optional<std::string> separating_probe(const BoardDescription& a, const BoardDescription& b, const Signal& signal,
                                            const std::vector<Probe>& probes) {
    const auto first = BoardModel::make(a, signal), second = BoardModel::make(b, signal);
    if (first == nullptr || second == nullptr) return std::nullopt;
    std::vector<Code> from_first, from_second;
    for (const Probe& probe : probes) {
        from_first.clear();
        from_second.clear();
        first->begin_case(Start::reset, 0);
        second->begin_case(Start::reset, 0);
        first->process(probe.codes, from_first);
        second->process(probe.codes, from_second);
        const std::size_t count = std::min(from_first.size(), from_second.size());
        if (!std::equal(from_first.begin(), from_first.begin() + static_cast<std::ptrdiff_t>(count),
                        from_second.begin()))
            return probe.what;
    }
    return std::nullopt;
}

}  // namespace halflsb
