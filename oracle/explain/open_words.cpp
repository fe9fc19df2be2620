#include "oracle/explain/open_words.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

#include "oracle/arithmetic/described.hpp"
#include "oracle/explain/coefficient_changes.hpp"

namespace halflsb {
namespace {

// What a choice costs is how seldom firmware has it: a judgement, not a measurement.

using Alter = std::function<void(FilterStage&)>;

constexpr std::pair<Rounding, double> roundings[] = {{Rounding::floor, 1.0},
                                                     {Rounding::half_up, 1.0},
                                                     {Rounding::toward_zero, 2.0},
                                                     {Rounding::half_away, 3.0},
                                                     {Rounding::half_even, 3.5}};
constexpr std::pair<Rounding, double> coefficient_roundings[] = {{Rounding::half_away, 0.0},
                                                                 {Rounding::toward_zero, 1.5},
                                                                 {Rounding::floor, 3.0},
                                                                 {Rounding::half_up, 3.0},
                                                                 {Rounding::half_even, 4.0}};

void leave_out(FilterStage&) {}

double largest_coefficient(const FilterDesign& design) {
    double largest = 0.0;
    const auto look = [&](const std::vector<double>& list) {
        for (const double c : list) largest = std::max(largest, std::fabs(c));
    };
    if (const auto* fir = std::get_if<Fir>(&design)) look(fir->taps);
    if (const auto* fewer = std::get_if<FirDecimator>(&design)) look(fewer->taps);
    if (const auto* more = std::get_if<FirInterpolator>(&design)) look(more->taps);
    if (const auto* comb = std::get_if<Comb>(&design)) look({comb->direct, comb->forward, comb->feedback});
    if (const auto* recursion = std::get_if<Recursion>(&design)) {
        look(recursion->b);
        look(recursion->a);
    }
    if (const auto* cascade = std::get_if<BiquadCascade>(&design))
        for (const BiquadSection& s : cascade->sections) look({s.b0, s.b1, s.b2, s.a1, s.a2});
    return largest;
}

class StageWords {
public:
    StageWords(const FilterChain& chain, const Signal& signal, std::size_t stage, const DescribedStage& described,
               std::vector<OpenWord>& words)
        : chain_(chain), signal_(signal), stage_(stage), described_(described), words_(words) {}

    void add_all() {
        numbers();
        if (described_.number == NumberKind::float32) {
            structures_and_states();
            return;
        }
        coefficients();
        shortening();
        structures_and_states();
        divisions();
        formats();
        signs();
        output_rounding();
        overflows();
        accumulators();
    }

private:
    const StageArithmetic& said() const { return chain_[stage_].arithmetic; }
    bool has(std::string_view word) const { return has_word(chain_[stage_], word); }

    void add(std::vector<WordChoice> choices) {
        if (choices.size() < 2) return;
        std::stable_sort(choices.begin(), choices.end(),
                         [](const WordChoice& a, const WordChoice& b) { return a.price_bits < b.price_bits; });
        words_.push_back({stage_, std::move(choices)});
    }

    /// A board that is given whole numbers may compute in float.
    void numbers() {
        const bool is_float = described_.number == NumberKind::float32;
        if (!has("multiply_add") || (!is_float && said().number)) return;
        std::vector<WordChoice> choices;
        if (!is_float) choices.push_back({0.0, leave_out});
        for (const bool fused : {false, true}) {
            for (const Summation order : {Summation::newest_first, Summation::oldest_first}) {
                choices.push_back(
                    {(is_float ? 0.0 : 8.0) + (fused ? 2.0 : 0.0) + (order == Summation::oldest_first ? 2.0 : 0.0),
                     [=](FilterStage& stage) {
                         if (!is_float) stage.arithmetic.number = NumberKind::float32;
                         if (fused) stage.arithmetic.fused_multiply_add = true;
                         if (order == Summation::oldest_first) stage.arithmetic.summation = order;
                     }});
            }
        }
        add(std::move(choices));
    }

    void coefficients() {
        const bool is_rounding_open = has("coefficient_rounding") && said().coefficient_rounding == Rounding::half_away;
        std::vector<std::pair<std::optional<int>, double>> stored;
        if (described_.coefficients_are_said) {
            stored.push_back({std::nullopt, 0.0});
        } else {
            const double largest = largest_coefficient(chain_[stage_].design);
            const int whole = largest < 1.0 ? 0 : static_cast<int>(std::floor(std::log2(largest))) + 1;
            for (int bits = 4; bits <= 32; ++bits) {
                const bool fills_word = bits + whole == 15 || bits + whole == 31;
                const bool is_usual = bits == 14 || bits == 15 || bits == 30 || bits == 31;
                stored.push_back({bits, fills_word ? 1.0 : is_usual ? 1.5 : 4.0});
            }
        }
        std::vector<WordChoice> choices;
        for (const auto& [bits, bits_price] : stored) {
            for (const auto& [rounding, rounding_price] : coefficient_roundings) {
                choices.push_back({bits_price + rounding_price, [bits = bits, rounding = rounding](FilterStage& stage) {
                                       if (bits) set_coefficient_fraction_bits(stage, *bits);
                                       stage.arithmetic.coefficient_rounding = rounding;
                                   }});
                if (!is_rounding_open) break;
            }
        }
        add(std::move(choices));
    }

    /// How results are shortened, where, and what becomes of the rest.
    void shortening() {
        std::vector<std::pair<std::optional<Rounding>, double>> ways;
        if (said().rounding || !has("rounding"))
            ways.push_back({std::nullopt, 0.0});
        else
            ways.assign(std::begin(roundings), std::end(roundings));
        std::vector<std::pair<std::optional<RoundingAt>, double>> places{{std::nullopt, 0.0}};
        if (has("rounding_at") && !said().rounding_at) {
            places.push_back({RoundingAt::product, 3.0});
            places.push_back({RoundingAt::output, 3.0});
        }
        std::vector<WordChoice> choices;
        for (const auto& [rounding, rounding_price] : ways) {
            for (const auto& [place, place_price] : places) {
                for (const bool saves : {false, true}) {
                    if (saves && (said().fraction_saving || !has("fraction_saving"))) continue;
                    choices.push_back({rounding_price + place_price + (saves ? 3.0 : 0.0),
                                       [rounding = rounding, place = place, saves](FilterStage& stage) {
                                           if (rounding) stage.arithmetic.rounding = rounding;
                                           if (place) stage.arithmetic.rounding_at = place;
                                           if (saves) stage.arithmetic.fraction_saving = true;
                                       }});
                }
            }
        }
        add(std::move(choices));
    }

    bool has_structure(Structure structure) const {
        FilterChain changed = chain_;
        changed[stage_].arithmetic.structure = structure;
        const auto made = describe(changed, signal_.input, signal_.output, signal_.output_per_input).described;
        return made && made->stages[stage_].structure == structure;
    }

    void structures_and_states() {
        std::vector<std::pair<std::optional<Structure>, double>> structures{{std::nullopt, 0.0}};
        if (has("structure") && !said().structure) {
            for (const Structure other :
                 {Structure::direct_1, Structure::direct_2, Structure::transposed_2, Structure::running_sum,
                  Structure::fresh_sum, Structure::difference, Structure::leak}) {
                if (other != described_.structure && has_structure(other)) structures.push_back({other, 2.5});
            }
        }
        struct State {
            int bits = 0, fraction_bits = 0;
            double price_bits = 0.0;
        };
        std::vector<State> states{{}};
        const bool are_states_open = described_.number == NumberKind::integer && has("state_fraction_bits") &&
                                     !said().state_fraction_bits && !said().state_bits;
        if (are_states_open) {
            const int own = described_.out.word.fraction_bits, word = std::min(described_.out.word.bits, 32);
            for (int fraction_bits = std::max(0, own - 31); fraction_bits <= own + 34; ++fraction_bits) {
                const int more = fraction_bits - own;
                if (more == 0) continue;
                const int bits = word + more <= 32 ? 32 : 64;
                states.push_back({bits, fraction_bits, more == 16 ? 3.0 : more > 0 ? 5.0 : 7.0});
            }
            for (const int bits : {32, 64}) states.push_back({bits, own, 4.0});
        }
        std::vector<WordChoice> choices;
        for (const auto& [structure, structure_price] : structures) {
            for (const State& state : states) {
                choices.push_back({structure_price + state.price_bits, [structure = structure, state](FilterStage& s) {
                                       if (structure) s.arithmetic.structure = structure;
                                       if (state.bits == 0) return;
                                       s.arithmetic.state_bits = state.bits;
                                       s.arithmetic.state_fraction_bits = state.fraction_bits;
                                   }});
            }
        }
        add(std::move(choices));
    }

    void divisions() {
        if (!has("division") || said().division) return;
        std::vector<WordChoice> choices{{0.0, leave_out}};
        for (int bits = 4; bits <= 32; ++bits) {
            for (const auto& [rounding, rounding_price] : coefficient_roundings) {
                const bool is_usual = bits == 15 || bits == 16 || bits == 31 || bits == 32;
                choices.push_back(
                    {(is_usual ? 3.0 : 5.0) + rounding_price, [bits, rounding = rounding](FilterStage& stage) {
                         stage.arithmetic.division = Division::reciprocal;
                         set_coefficient_fraction_bits(stage, bits);
                         stage.arithmetic.coefficient_rounding = rounding;
                     }});
            }
        }
        add(std::move(choices));
    }

    /// Words between two stages: those of an end of the chain, or the usual ones of its family.
    void formats() {
        if (described_.words_are_said) return;
        std::vector<WordChoice> choices;
        const auto offer = [&](const SampleFormat& format) {
            choices.push_back({choices.empty() ? 0.0 : 2.0,
                               [format](FilterStage& stage) { stage.arithmetic.stage_format = format; }});
        };
        offer(signal_.output);
        offer(signal_.input);
        for (const char* name : {"q15", "q31", "i16", "i32"}) {
            const SampleFormat format = *sample_format(name);
            if (format.family == signal_.output.family) offer(format);
        }
        add(std::move(choices));
    }

    void signs() {
        if (!has("feedback_coefficients") || said().feedback_coefficients) return;
        add({{0.0, leave_out}, {2.0, [](FilterStage& stage) {
                                    stage.arithmetic.feedback_coefficients = FeedbackCoefficients::subtracted;
                                }}});
    }

    void output_rounding() {
        if (!has("output_rounding") || said().output_rounding) return;
        std::vector<WordChoice> choices{{0.0, leave_out}};
        for (const auto& [rounding, price] : roundings)
            choices.push_back({3.0 + price, [rounding = rounding](FilterStage& stage) {
                                   stage.arithmetic.output_rounding = rounding;
                               }});
        add(std::move(choices));
    }

    void overflows() {
        std::vector<std::optional<Overflow>> states{std::nullopt};
        if (has("state_overflow") && !said().state_overflow) {
            states.push_back(Overflow::saturate);
            states.push_back(Overflow::wrap);
        }
        std::vector<WordChoice> choices;
        for (const Overflow output : {Overflow::saturate, Overflow::wrap}) {
            if (output == Overflow::wrap && said().output_overflow == Overflow::wrap) continue;
            for (const auto& state : states) {
                choices.push_back(
                    {(output == Overflow::wrap ? 3.0 : 0.0) + (state ? 4.0 : 0.0), [=](FilterStage& stage) {
                         if (output == Overflow::wrap) stage.arithmetic.output_overflow = output;
                         if (state) stage.arithmetic.state_overflow = state;
                     }});
            }
        }
        add(std::move(choices));
    }

    void accumulators() {
        if (has("accumulator_fraction_bits") && !said().accumulator_fraction_bits) {
            std::vector<WordChoice> choices{{0.0, leave_out}};
            for (int bits = 0; bits <= 48; ++bits)
                choices.push_back(
                    {6.0, [bits](FilterStage& stage) { stage.arithmetic.accumulator_fraction_bits = bits; }});
            add(std::move(choices));
        }
        if (!has("accumulator_bits") || said().accumulator_bits) return;
        std::vector<WordChoice> choices{{0.0, leave_out}};
        for (int bits = 8; bits <= 63; ++bits) {
            const double price = bits == 16 || bits == 32 || bits == 40 ? 4.0 : 7.0;
            choices.push_back({price, [bits](FilterStage& stage) { stage.arithmetic.accumulator_bits = bits; }});
            choices.push_back({price + 1.0, [bits](FilterStage& stage) {
                                   stage.arithmetic.accumulator_bits = bits;
                                   stage.arithmetic.accumulator_overflow = Overflow::saturate;
                               }});
        }
        add(std::move(choices));
    }

    const FilterChain& chain_;
    const Signal& signal_;
    std::size_t stage_;
    const DescribedStage& described_;
    std::vector<OpenWord>& words_;
};

}  // namespace

std::vector<OpenWord> open_words(const FilterChain& chain, const Signal& signal) {
    std::vector<OpenWord> words;
    const auto described = describe(chain, signal.input, signal.output, signal.output_per_input).described;
    if (!described) return words;
    for (std::size_t i = 0; i < chain.size(); ++i) StageWords(chain, signal, i, described->stages[i], words).add_all();
    return words;
}

}  // namespace halflsb
