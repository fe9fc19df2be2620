#include "runner/config/standard_set.hpp"

#include <algorithm>
#include <cmath>
#include <set>
#include <vector>

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/node_impulse.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/filters/filter.hpp"
#include "oracle/filters/rates.hpp"
#include "runner/config/toml_text.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

/// Of a filter that never forgets; then errors stand long enough to be seen.
constexpr std::int64_t endless_memory_samples = 4096;
/// Longer ones are not waited for: at 1 kHz this is a minute.
constexpr std::int64_t longest_memory_samples = 65536;
constexpr std::size_t most_nodes = 8;
constexpr std::size_t longest_signs = 4096;

/// One stimulus, its words as TOML: the lines of a table, or an inline table.
struct Words {
    std::vector<std::string> entries;

    Words& add(std::string_view key, std::string value) {
        entries.push_back(std::string(key) + " = " + std::move(value));
        return *this;
    }
    Words& add(std::string_view key, double value) { return add(key, number_text(value)); }
    Words& add(std::string_view key, std::int64_t value) { return add(key, std::to_string(value)); }
    std::string joined(std::string_view separator) const {
        std::string text;
        for (const std::string& entry : entries) text += (text.empty() ? "" : std::string(separator)) + entry;
        return text;
    }
};

Words shape(std::string_view name) { return Words{}.add("shape", '"' + std::string(name) + '"'); }
Words placed(std::string_view name, std::int64_t length_samples) {
    return shape(name).add("length_samples", length_samples);
}
/// Levels are written with a fraction, so that TOML takes them for real numbers.
Words at_level(Words words, double ratio) {
    const std::string text = number_text(ratio);
    const bool is_real = text.find_first_of(".e") != std::string::npos;
    return words.add("level_ratio", is_real ? text : text + ".0");
}
Words sequence(const std::vector<Words>& parts) {
    std::string list = "[\n";
    for (const Words& part : parts) list += "    { " + part.joined(", ") + " },\n";
    return shape("sequence").add("parts", list + "]");
}

class StandardSet {
public:
    StandardSet(const Signal& signal, const PlanFilters& filters) : signal_(signal), chain_(filters.chain) {
        const auto forgets = filters.flush_samples_at(signal.rate_hz, signal);
        memory_ = std::clamp<std::int64_t>(forgets.value_or(endless_memory_samples), 16, longest_memory_samples);
    }

    std::string text() {
        add_quiet();
        add_impulses();
        add_steps();
        add_noise_and_ramp();
        add_after_loud();
        add_full_scale();
        add_tail();
        add_again();
        add_channels();
        add_levels();
        add_long_run();
        return text_;
    }

private:
    void add(std::string_view name, std::string_view purpose, Words stimulus, std::string_view label = {}) {
        text_ += "[[case]]\nname    = \"" + std::string(name) + "\"\npurpose = \"" + std::string(purpose) + "\"\n";
        if (!label.empty()) text_ += "labels  = [\"" + std::string(label) + "\"]\n";
        text_ += "[case.stimulus]\n" + stimulus.joined("\n") + "\n";
        const std::string unit = limit_unit();
        text_ += "[[case.rule]]\nkind = \"error\"\n";
        for (const std::string_view what : {"max", "rms", "bias"})
            text_ += std::string(what) + "_" + unit + " = \"derived\"\n";
        text_ += "[[case.rule]]\nkind = \"exact\"\n\n";
    }

    /// A case that ends in silence.
    void add_silent(std::string_view name, std::string_view purpose, Words stimulus) {
        add(name, purpose, std::move(stimulus));
        text_ += "[[case.rule]]\nkind = \"silence\"\nmax_" + limit_unit() + " = \"derived\"\n\n";
    }
    std::string limit_unit() const { return signal_.output.has_lsb() ? "lsb" : "ratio"; }

    /// A level of so many codes; of a format without codes the same part of 16 bits.
    Words codes(Words words, std::int64_t count) const {
        if (!signal_.input.has_lsb()) return at_level(std::move(words), static_cast<double>(count) / 32768.0);
        return words.add("level_codes", count);
    }
    std::int64_t full_scale_codes() const {
        return std::int64_t{1} << ((signal_.input.has_lsb() ? signal_.input.word_bits : 16) - 1);
    }

    void add_quiet() {
        add_silent("silence", "an offset, noise of its own, memory that a reset does not clear",
                   placed("silence", memory_ + 1024));
    }

    /// Apart by lengths that are odd and even, so that they meet other places of a ring and of an unrolled loop.
    void add_impulses() {
        const std::int64_t apart = std::min<std::int64_t>(memory_, 4096) + 61;
        std::vector<Words> parts;
        const auto next = [&] {
            const auto count = static_cast<std::int64_t>(parts.size());
            return placed("impulse", apart + count);
        };
        const std::int64_t middle = std::min<std::int64_t>(1000, full_scale_codes() / 4);
        parts.push_back(codes(next(), middle));
        parts.push_back(at_level(next(), 1.0));
        parts.push_back(at_level(next(), -1.0));
        parts.push_back(codes(next(), -full_scale_codes() + 1));
        for (const std::int64_t tie : ties()) {
            parts.push_back(codes(next(), tie));
            parts.push_back(codes(next(), -tie));
        }
        parts.push_back(codes(next(), middle));
        parts.push_back(codes(next(), 1));
        add("impulses",
            "coefficients, their order and number, ties of the rounding, the product of the two lowest codes",
            sequence(parts));
    }

    /// An impulse of half the step that is shifted out makes each odd coefficient a tie.
    std::vector<std::int64_t> ties() const {
        std::set<std::int64_t> all;
        for (const FilterStage& stage : chain_) {
            const int bits = stage.coefficient_fraction_bits.value_or(0);
            if (bits > 0 && bits < 31 && (std::int64_t{1} << (bits - 1)) < full_scale_codes())
                all.insert(std::int64_t{1} << (bits - 1));
        }
        return {all.begin(), all.end()};
    }

    void add_steps() {
        const std::int64_t length = memory_ + 256;
        const std::int64_t small = std::min<std::int64_t>(20, full_scale_codes() / 4);
        add("step up", "the start-up, the final value, a dead band", at_level(placed("step", length), 0.5));
        add("step down", "the same for negative numbers: a shift in place of a division",
            at_level(placed("step", length), -0.5));
        add("small step up", "a dead band that swallows small inputs", codes(placed("step", length), small));
        add("small step down", "the same for negative numbers", codes(placed("step", length), -small));
    }

    /// Where the largest output stays inside its word, so that every derived limit holds.
    double quiet_level() const {
        if (!is_linear(chain_)) return 0.5;
        double most = 0.0;
        for (int channel = 1; channel <= signal_.channels; ++channel)
            most = std::max(most, l1_norm(chain_of_channel(chain_, channel), 1e-3));
        const double level = std::min(0.5, 0.9 / most);
        // Two digits are enough, downwards.
        const double step = std::pow(10.0, std::floor(std::log10(level)) - 1.0);
        return std::isfinite(level) && level > 0.0 ? std::floor(level / step) * step : 0.5;
    }

    void add_noise_and_ramp() {
        const std::int64_t length = std::max<std::int64_t>(65536, 4 * memory_);
        add("noise", "rounding, coefficients, order of the samples: whatever changes the response at all",
            at_level(placed("noise", length), quiet_level()));
        const std::int64_t ramp = std::clamp<std::int64_t>(2 * full_scale_codes(), 4096, 65536);
        add("ramp", "lost, repeated and stale samples, a clipped or folded range, each code once",
            placed("ramp", ramp).add("from_ratio", std::string("-1.0")).add("to_ratio", std::string("1.0")));
        add("noise at full scale", "an accumulator that is too narrow, an output that wraps",
            at_level(placed("noise", 32768), 1.0));
    }

    void add_after_loud() {
        add_silent("silence after full scale", "state that outlives a reset", placed("silence", memory_ + 256));
    }

    void add_full_scale() {
        const std::int64_t period = 2 * std::clamp<std::int64_t>(memory_, 64, 8192);
        const auto square = [&](double level) {
            return at_level(placed("square", 2 * period).add("period_samples", period), level);
        };
        add("slow square at full scale", "overflow of states and sums, the release from clipping", square(1.0));
        add("slow square at half scale", "overflow within the range that is promised", square(0.5));
        add_worst_cases();
    }

    /// Of the output, and of each inner node that some input can drive beyond its word.
    void add_worst_cases() {
        if (!is_linear(chain_) || changes_rate(chain_)) return;
        std::set<std::string> written;
        const FilterChain own = chain_of_channel(chain_, 1);
        add_worst_case("the output", impulse_response(own, signs_length()), written);
        const auto result = describe(own, signal_.input, signal_.output, signal_.output_per_input);
        if (!result.described || !signal_.input.has_lsb()) return;
        const RailWatch rails(*result.described);
        for (const RailNode& node : rails.nodes()) {
            if (!node.is_watched || written.size() >= most_nodes) continue;
            add_worst_case(node.name, node_impulse(*result.described, node.name, signs_length()), written);
        }
    }
    std::size_t signs_length() const { return std::min(static_cast<std::size_t>(memory_), longest_signs); }

    void add_worst_case(const std::string& node, const std::vector<double>& h, std::set<std::string>& written) {
        std::string signs;
        for (std::size_t n = h.size(); n-- > 0;) signs += h[n] < 0.0 ? '-' : h[n] > 0.0 ? '+' : '0';
        signs.erase(0, std::min(signs.find_first_not_of('0'), signs.size()));
        if (signs.empty() || !written.insert(signs).second) return;
        const auto length = static_cast<std::int64_t>(signs.size());
        const auto pattern = [&](double level) {
            return at_level(placed("signs", length).add("signs", '"' + signs + '"'), level);
        };
        const Words quiet = placed("silence", memory_ + 64);
        add("hardest for " + node, "the input that drives it the furthest, at full and at half scale",
            sequence({pattern(1.0), quiet, pattern(0.5), quiet}));
        if (signal_.output.has_lsb()) text_ += "[[case.rule]]\nkind = \"headroom\"\n\n";
    }

    void add_tail() {
        const std::int64_t loud = std::max<std::int64_t>(memory_, 512);
        add_silent("silence after noise", "a limit cycle, a dead band, a value that stays",
                   sequence({at_level(placed("noise", loud), quiet_level()), placed("silence", 2 * memory_ + 512)}));
    }

    /// Short: it travels three times in all, once of them in many small frames. 7 samples divide no block that a board
    /// is likely to take.
    void add_again() {
        add("noise, sent again", "the response that the next two are compared with",
            at_level(placed("noise", memory_ + 1024), quiet_level()));
        text_ += "[[case.rule]]\nkind = \"repeat\"\n[[case.rule]]\nkind = \"blocks\"\nblock_samples = [7]\n\n";
    }

    void add_channels() {
        if (signal_.channels < 2) return;
        for (int channel = 1; channel <= signal_.channels; ++channel) {
            add("channel " + std::to_string(channel) + " alone", "channels that are exchanged or leak into each other",
                at_level(placed("noise", 8192 + memory_), quiet_level()).add("channel", std::int64_t{channel}));
            text_ += "[[case.rule]]\nkind = \"crosstalk\"\nmax_" + limit_unit() + " = \"derived\"\n\n";
        }
    }

    /// Where the filter lets the most through, off the exact fractions of the rate.
    double loudest_hz() const {
        constexpr int steps = 97;
        double best = 1.0, most = -1.0;
        for (int i = 1; i < steps; ++i) {
            const double gain = std::abs(response_at(chain_of_channel(chain_, 1), 0.5 * i / steps));
            if (gain > most) {
                most = gain;
                best = i;
            }
        }
        return 0.5 * best / steps * signal_.rate_hz;
    }

    void add_levels() {
        if (!is_linear(chain_)) return;
        const double hz = loudest_hz();
        for (const auto& [name, level] : {std::pair("full scale", 1.0), {"a tenth", 0.1}, {"a thousandth", 0.001}}) {
            add("sine at " + std::string(name), "a gain or an overflow that hangs on the level",
                at_level(placed("sine", memory_ + 4096).add("frequency_hz", hz), level));
        }
    }

    void add_long_run() {
        const double level = quiet_level() / 2.0;
        const auto noise = [&](std::int64_t seed) {
            return at_level(placed("noise", 499'000).add("seed", seed), level);
        };
        add("long run", "errors that build up, an outlier that stays in a sum, faults that are rare",
            sequence(
                {noise(1), at_level(placed("impulse", 1000), -1.0), noise(2), placed("silence", 1000 + 2 * memory_)}),
            long_label);
    }

    const Signal& signal_;
    const FilterChain& chain_;
    std::int64_t memory_ = 0;
    std::string text_;
};

}  // namespace

std::string standard_set_text(const Signal& signal, const PlanFilters& filters) {
    return StandardSet(signal, filters).text();
}

}  // namespace halflsb
