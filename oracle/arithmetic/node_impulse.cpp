#include "oracle/arithmetic/node_impulse.hpp"

#include <algorithm>
#include <charconv>
#include <utility>

#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/arithmetic/family.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

using Samples = std::vector<double>;

Samples through(const FilterChain& chain, Samples in) {
    Samples out(in.size());
    make_filter(chain)->process(in, out);
    return out;
}

FilterStage bare(FilterDesign design) { return {std::move(design), std::nullopt, {}, "", {}}; }

double at(const std::vector<double>& list, std::size_t k) { return k < list.size() ? list[k] : 0.0; }

/// What comes in, what the sum comes to, and the coefficients between.
struct Piece {
    const DescribedStage* stage = nullptr;
    FilterDesign design;
    Samples in, sum;
    std::vector<double> b, a;  ///< a[0] = 1; empty without feedback
};

Piece piece_of(const DescribedStage& stage, const FilterDesign& design, const FilterChain& chain, const Samples& in) {
    Piece piece{&stage, design, in, through(chain, in), {}, {}};
    if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
        const BiquadSection& s = cascade->sections.front();
        piece.b = {s.b0, s.b1, s.b2};
        piece.a = {1.0, s.a1, s.a2};
    } else if (const auto* recursion = std::get_if<Recursion>(&design)) {
        piece.b = recursion->b;
        piece.a = recursion->a;
    }
    return piece;
}

/// sum over k of list[k] signal[n - k + first], k from first on.
Samples delayed_sum(const std::vector<double>& list, std::size_t first, const Samples& signal) {
    Samples sum(signal.size(), 0.0);
    for (std::size_t k = first; k < list.size(); ++k) {
        for (std::size_t n = k - first; n < sum.size(); ++n) sum[n] += list[k] * signal[n - (k - first)];
    }
    return sum;
}

/// 1 / A(z).
Samples state_of_direct_2(const Piece& piece) {
    if (std::holds_alternative<Recursion>(piece.design)) return through({bare(Recursion{{1.0}, piece.a})}, piece.in);
    return through({bare(BiquadCascade{{{1.0, 0.0, 0.0, at(piece.a, 1), at(piece.a, 2)}}})}, piece.in);
}

Samples state_of_transposed(const Piece& piece, std::size_t k) {
    Samples state = delayed_sum(piece.b, k, piece.in);
    const Samples back = delayed_sum(piece.a, k, piece.sum);
    for (std::size_t n = 0; n < state.size(); ++n) state[n] -= back[n];
    return state;
}

Samples accumulator_of(const Piece& piece) {
    Samples signal = piece.sum;
    if (const auto* average = std::get_if<MovingAverage>(&piece.design)) {
        signal = through({bare(*average)}, piece.in);
        for (double& value : signal) value *= average->points;
    } else if (piece.stage->structure == Structure::difference) {
        for (std::size_t n = 0; n < signal.size(); ++n) {
            signal[n] = piece.b.front() * (piece.in[n] - (n > 0 ? piece.sum[n - 1] : 0.0));
        }
    }
    return signal;
}

/// The sum of a moving average after the oldest has gone and before the newest comes.
Samples window_rest(const Piece& piece) {
    Samples rest = accumulator_of(piece);
    for (std::size_t n = 0; n < rest.size(); ++n) rest[n] -= piece.in[n];
    return rest;
}

Samples signal_at(const Piece& piece, std::string_view what) {
    const bool is_direct_2 = piece.stage->structure == Structure::direct_2 && !piece.a.empty();
    if (what == "output") return piece.sum;
    if (what == "accumulator") return accumulator_of(piece);
    if (what == "accumulator less the oldest") return window_rest(piece);
    if (what == "feedback accumulator") return state_of_direct_2(piece);
    if (what == "state") return is_direct_2 ? state_of_direct_2(piece) : piece.sum;
    constexpr std::string_view of = "accumulator of ", state = "state ";
    if (what.starts_with(of)) what.remove_prefix(of.size());
    if (!what.starts_with(state)) return {};
    what.remove_prefix(state.size());
    std::size_t k = 0;
    if (std::from_chars(what.data(), what.data() + what.size(), k).ec != std::errc() || k == 0) return {};
    return state_of_transposed(piece, k);
}

/// The part of `node` behind "name, "; none: it is another place's.
std::optional<std::string_view> rest_behind(const std::string& node, const std::string& name) {
    if (!node.starts_with(name + ", ")) return std::nullopt;
    return std::string_view(node).substr(name.size() + 2);
}

}  // namespace

std::vector<double> node_impulse(const DescribedChain& chain, const std::string& node, std::size_t length) {
    if (length == 0) return {};
    const ExactChain exact = exact_chain(chain);
    Samples signal(length, 0.0);
    signal.front() = 1.0;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const DescribedStage& stage = chain.stages[i];
        const auto begin = exact.stages.begin();
        const FilterChain whole(begin + static_cast<std::ptrdiff_t>(exact.first_of[i]),
                                begin + static_cast<std::ptrdiff_t>(exact.first_of[i + 1]));
        if (!is_linear(whole) || changes_rate(whole)) return {};
        const std::string name = "stage " + std::to_string(i + 1);
        if (const auto* cascade = std::get_if<BiquadCascade>(&whole.front().design)) {
            const bool is_named = family_of(stage.stage) == Family::sections;
            for (std::size_t j = 0; j < cascade->sections.size(); ++j) {
                const BiquadCascade section{{cascade->sections[j]}};
                const std::string place = is_named ? name + ", section " + std::to_string(j + 1) : name;
                const Piece piece = piece_of(stage, section, {bare(section)}, signal);
                if (const auto what = rest_behind(node, place)) return signal_at(piece, *what);
                signal = piece.sum;
            }
        } else {
            const Piece piece = piece_of(stage, whole.front().design, whole, signal);
            if (const auto what = rest_behind(node, name)) return signal_at(piece, *what);
            signal = piece.sum;
        }
    }
    return {};
}

}  // namespace halflsb
