#include "oracle/arithmetic/cic_registers.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/cic.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

/// Words of one bit hold no sign beside a number.
constexpr int narrowest = 2;

std::string text_of(int number) { return std::to_string(number); }

Error refuse(std::string_view word, std::string problem, std::string remedy) {
    return {ErrorKind::input, std::string(word), std::move(problem), std::move(remedy)};
}

/// N, and by how many bits the numbers grow; nothing for another kind of filter.
struct Shape {
    int order = 0, growth = 0;
};
std::optional<Shape> shape_of(const DescribedStage& stage) {
    const auto of = [](const auto& design) { return Shape{design.order, growth_bits(design)}; };
    if (const auto* decimator = std::get_if<CicDecimator>(&stage.stage.design)) return of(*decimator);
    if (const auto* interpolator = std::get_if<CicInterpolator>(&stage.stage.design)) return of(*interpolator);
    return std::nullopt;
}

/// The discards of a decimator change what its last comb comes to, in LSB of the input, by less than this.
double largest_discarded(const DescribedStage& stage) {
    const auto* design = std::get_if<CicDecimator>(&stage.stage.design);
    if (design == nullptr) return 0.0;
    double error = 0.0, before = 1.0;
    for (std::size_t k = 0; k < stage.discarded_bits.size(); ++k) {
        const int j = static_cast<int>(k) + 1, sums = std::max(design->order - j + 1, 0);
        const double step = std::ldexp(1.0, stage.discarded_bits[k]);
        // Each sum passes at most its window times what comes, each difference twice.
        error += (step - before) *
                 std::ldexp(std::pow(window_of(*design), sums), std::min(j - 1, 2 * design->order - j + 1));
        before = step;
    }
    return error;
}

/// Of a register without discards.
int bits_needed(const DescribedStage& stage, int growth) {
    const int held = stage.in.word.bits + growth;
    const double error = largest_discarded(stage);
    if (error == 0.0) return held;
    const auto* design = std::get_if<CicDecimator>(&stage.stage.design);
    const double largest = std::ldexp(gain_of_sums(*design), stage.in.word.bits - 1) + error;
    int bits = held;
    while (std::ldexp(1.0, bits - 1) < largest) ++bits;
    return bits;
}

std::optional<Error> registers_too_narrow(const DescribedStage& stage, const Shape& shape) {
    if (stage.state.bits == wide_bits || stage.in.word.bits == wide_bits) return std::nullopt;
    // Hogenauer (1981), equation 11: what the registers must hold so that their wrapping cancels out.
    const int needed = stage.in.word.bits + shape.growth;
    if (stage.state.bits >= needed) return std::nullopt;
    return refuse("state_bits",
                  "registers of " + text_of(stage.state.bits) + " bits are too narrow for " +
                      text_of(stage.in.word.bits) + "-bit samples that grow by " + text_of(shape.growth) + " bits",
                  "state_bits = " + text_of(needed) + " would do");
}

std::optional<Error> discards_that_cannot_be(const DescribedStage& stage, const Shape& shape) {
    const std::vector<int>& discarded = stage.discarded_bits;
    if (discarded.empty()) return std::nullopt;
    const int count = static_cast<int>(discarded.size()), registers = 2 * shape.order;
    if (count != registers) {
        const std::string order = text_of(shape.order);
        return refuse("discarded_bits",
                      text_of(count) + (count == 1 ? " number" : " numbers") + " for the " + text_of(registers) +
                          " registers of a cic of order " + order,
                      "give " + text_of(registers) + ", one for each integrator, then each comb" +
                          (count == registers + 1 ? "; what the output discards is shift_bits" : ""));
    }
    for (int k = 1; k < count; ++k) {
        const int here = discarded[static_cast<std::size_t>(k)], before = discarded[static_cast<std::size_t>(k) - 1];
        if (here >= before) continue;
        return refuse("discarded_bits",
                      name_of_cic_register(shape.order, k + 1) + " discards " + text_of(here) + " bits, " +
                          name_of_cic_register(shape.order, k) + " before it has none of the lowest " + text_of(before),
                      "count all from the LSB of the input: " + text_of(before) + " or more");
    }
    if (stage.in.word.bits == wide_bits) return std::nullopt;
    const int bits = cic_register_bits(stage), most = bits - narrowest;
    if (discarded.back() <= most) return std::nullopt;
    const auto first = std::find_if(discarded.begin(), discarded.end(), [&](int here) { return here > most; });
    return refuse("discarded_bits",
                  name_of_cic_register(shape.order, static_cast<int>(first - discarded.begin()) + 1) + " discards " +
                      text_of(*first) + " of " + text_of(bits) + " bits",
                  text_of(most) + " or less would do");
}

/// sum h^2 from the input of register j to the last comb.
double power_to_last_comb(const CicDecimator& design, int j) {
    const int order = design.order, sums = std::max(order - j + 1, 0);
    const auto window = static_cast<std::size_t>(window_of(design));
    const int combs = std::min(j - 1, 2 * order - j + 1);
    // Combs at the rate of the input see it each R M samples; those of their own rate each M: their squares are alike.
    std::vector<double> h(window * static_cast<std::size_t>(order) + 1, 0.0);
    h[0] = 1.0;
    for (int k = 0; k < combs; ++k) {
        for (std::size_t n = h.size(); n-- > window;) h[n] -= h[n - window];
    }
    MovingSum sum(window);
    for (int k = 0; k < sums; ++k) {
        sum.reset();
        sum.process(h, h);
    }
    double power = 0.0;
    for (const double value : h) power += value * value;
    return power;
}

}  // namespace

std::string name_of_cic_register(int order, int j) {
    return j <= order ? "integrator " + text_of(j) : "comb " + text_of(j - order);
}

int cic_register_bits(const DescribedStage& stage) {
    if (stage.state.bits != wide_bits) return stage.state.bits;
    const auto shape = shape_of(stage);
    return shape ? bits_needed(stage, shape->growth) : wide_bits;
}

std::vector<CicRegister> cic_registers(const DescribedStage& stage) {
    std::vector<CicRegister> registers;
    const auto shape = shape_of(stage);
    if (!shape || stage.number == NumberKind::float32 || stage.in.word.bits == wide_bits) return registers;
    const int needed = bits_needed(stage, shape->growth);
    const bool combs_first = std::holds_alternative<CicInterpolator>(stage.stage.design);
    for (int j = 1; j <= 2 * shape->order; ++j) {
        const int at = combs_first ? (j + shape->order - 1) % (2 * shape->order) + 1 : j;
        const int discarded = stage.discarded_bits.empty() ? 0 : stage.discarded_bits[static_cast<std::size_t>(j) - 1];
        Word word = stage.state;
        word.fraction_bits -= discarded;
        if (word.bits != wide_bits) word.bits -= discarded;
        registers.push_back({name_of_cic_register(shape->order, at), discarded, word, needed - discarded});
    }
    return registers;
}

std::optional<Error> registers_that_cannot_be(const DescribedStage& stage) {
    const auto shape = shape_of(stage);
    if (!shape) return std::nullopt;
    if (auto error = registers_too_narrow(stage, *shape)) return error;
    return discards_that_cannot_be(stage, *shape);
}

FilterChain path_from_register(const CicDecimator& design, int j) {
    FilterChain path;
    FilterStage stage;
    const int sums = std::max(design.order - j + 1, 0), combs = std::min(j - 1, 2 * design.order - j + 1);
    if (sums > 0) {
        stage.design = CicDecimator{sums, design.factor, design.delay_samples, 0, design.phase_samples};
        path.push_back(stage);
    }
    // (1 - z^-M)^combs / divisor, at the rate of the output.
    const auto delay = static_cast<std::size_t>(design.delay_samples);
    Fir fir{{1.0 / divisor_of(design)}};
    for (int k = 0; k < combs; ++k) {
        fir.taps.resize(fir.taps.size() + delay, 0.0);
        for (std::size_t n = fir.taps.size(); n-- > delay;) fir.taps[n] -= fir.taps[n - delay];
    }
    stage.design = fir;
    path.push_back(stage);
    return path;
}

std::vector<int> hogenauer_discards(const CicDecimator& design, double output_lsb) {
    std::vector<int> discards;
    // sigma_T^2 = output_lsb^2 / 12, shared by 2N sources: B_j = floor(-log2 F_j + log2 sigma_T + log2(6 / N) / 2).
    const double shared = std::log2(output_lsb) - 0.5 * std::log2(12.0) + 0.5 * std::log2(6.0 / design.order);
    for (int j = 1; j <= 2 * design.order; ++j) {
        const double bits = std::floor(shared - 0.5 * std::log2(power_to_last_comb(design, j)));
        discards.push_back(std::max(static_cast<int>(bits), 0));
    }
    return discards;
}

}  // namespace halflsb
