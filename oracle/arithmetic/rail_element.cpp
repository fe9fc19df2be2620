#include "oracle/arithmetic/rail_element.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/reference_error.hpp"

namespace halflsb {

namespace {

bool same_words(const Word& a, const Word& b) { return a.bits == b.bits && a.fraction_bits == b.fraction_bits; }

}  // namespace

RailElement::RailElement(const ChainElement& element, const NodeBounds& bounds, const ElementInput& input,
                         bool is_only_one, bool behind_can_forget)
    : element_(element),
      is_only_one_(is_only_one),
      behind_can_forget_(behind_can_forget),
      input_(input),
      filter_(element) {
    const bool is_direct_2 =
        element.section() != nullptr && element.is_integer() && element.stage->structure == Structure::direct_2;
    sum_level_ =
        input.is_clipped ? input.level * l1_norm(element.exact) : input.full_scale * bounds.gain_to_sum(element);
    sum_error_ = bounds.error_at_sum(element, is_direct_2);
    out_error_ = bounds.error_at_sum(element, true);
    if (is_direct_2) {
        const BiquadSection& s = *element.section();
        const FilterChain to_state{FilterStage{BiquadCascade{{{1.0, 0.0, 0.0, s.a1, s.a2}}}, std::nullopt, {}, "", {}}};
        state_level_ =
            input.is_clipped ? input.level * l1_norm(to_state) : input.full_scale * bounds.gain_to_state(element);
        state_error_ = bounds.error_at_state(element);
        state_filter_ = make_filter(to_state);
    }
    if (!element.is_integer()) {
        add_output(out_error_, false);
    } else if (const auto* fir = std::get_if<Fir>(&element.exact.front().design)) {
        of_fir(*fir);
    } else if (const auto* average = std::get_if<MovingAverage>(&element.exact.front().design)) {
        of_average(average->points);
    } else if (is_direct_2) {
        of_direct_2();
    } else if (element.stage->structure == Structure::transposed_2) {
        of_transposed();
    } else {
        of_loop();
    }
    output_ = input;
    output_.level = sum_level_;
    output_.error = out_error_;
    for (const RailNode& node : nodes_) {
        if (node.is_watched && node.effect == RailEffect::clip) {
            output_.is_clipped = true;
            output_.level = std::min(output_.level, -lowest_value(node.word));
        }
    }
    reset();
}

// --- which rails there are

Word RailElement::accumulator(int terms, int target) const {
    const DescribedStage& stage = *element_.stage;
    return {stage.accumulator_bits, accumulator_fraction_bits_of(stage, terms, target), stage.accumulator_overflow};
}

void RailElement::add(const char* name, const Word& word, Source source, double worst, double error, RailEffect effect,
                      std::vector<PartialTerm> terms) {
    if (word.bits == wide_bits) return;
    RailNode node{element_.name + ", " + name, word, worst, error, effect, false};
    node.is_watched = !(worst + error <= highest_value(word));
    for (const PartialTerm& term : terms) reach_back_ = std::max(reach_back_, term.delay);
    rails_.push_back({source, lowest_value(word) + error, highest_value(word) - error, std::move(terms)});
    nodes_.push_back(std::move(node));
}

// A sum that wraps is right when its end is; one that saturates must not leave its word on the way either.
void RailElement::add_sum(const char* name, const Word& word, Source source, double worst, double error,
                          RailEffect effect, std::vector<PartialTerm> terms) {
    const DescribedStage& stage = *element_.stage;
    if (stage.fraction_saving) error += step_of(stage.state);
    if (word.overflow == Overflow::wrap) {
        add(name, word, source, worst, error, effect);
        return;
    }
    // Each product may have been shortened, by a step at most.
    double level = 0.0, drift = static_cast<double>(terms.size()) * step_of(word);
    if (stage.fraction_saving) drift += step_of(stage.state);
    for (const PartialTerm& term : terms) {
        level += std::fabs(term.coefficient) * level_of(term.of);
        drift += std::fabs(term.coefficient) * error_of(term.of);
    }
    add(name, word, Source::partial, level, drift, effect, std::move(terms));
}

void RailElement::of_fir(const Fir& fir) {
    const DescribedStage& stage = *element_.stage;
    std::vector<PartialTerm> terms;
    for (std::size_t k = 0; k < fir.taps.size(); ++k) terms.push_back({fir.taps[k], k, Source::input});
    if (stage.summation == Summation::oldest_first) std::reverse(terms.begin(), terms.end());
    const int products = element_.in.fraction_bits + stage.coefficient_fraction_bits;
    add_sum("accumulator", accumulator(products, stage.out.word.fraction_bits), Source::sum, sum_level_, sum_error_,
            behind(), std::move(terms));
    add_output(out_error_, false);
}

void RailElement::of_average(int points) {
    const DescribedStage& stage = *element_.stage;
    const double gain = element_.exact.size() > 1 ? std::get<Fir>(element_.exact[1].design).taps.front() : 1.0;
    points_over_gain_ = points / gain;
    const Word word{stage.accumulator_bits, element_.in.fraction_bits, stage.accumulator_overflow};
    const double worst = sum_level_ * std::fabs(points_over_gain_), error = points * input_.error;
    if (word.overflow == Overflow::wrap) {
        add("accumulator", word, Source::window, worst, error, behind());
    } else if (stage.structure == Structure::running_sum) {
        // The oldest goes before the newest comes; a sum that was clipped once stays wrong.
        add("accumulator", word, Source::window, worst, error, RailEffect::lost);
        add("accumulator less the oldest", word, Source::window_rest, worst, error, RailEffect::lost);
    } else {
        std::vector<PartialTerm> terms;
        for (int k = 0; k < points; ++k) terms.push_back({1.0, static_cast<std::size_t>(k), Source::input});
        if (stage.summation == Summation::oldest_first) std::reverse(terms.begin(), terms.end());
        add("accumulator", word, Source::partial, worst, error, behind(), std::move(terms));
    }
    add_output(out_error_, false);
}

void RailElement::of_loop() {
    const DescribedStage& stage = *element_.stage;
    const Word& state = stage.state;
    const int words = std::max(element_.in.fraction_bits, state.fraction_bits) + stage.coefficient_fraction_bits;
    const Word sum = accumulator(words, state.fraction_bits);
    if (stage.structure == Structure::difference) {
        const double k = element_.section()->b0;
        add("accumulator", sum, Source::product, std::fabs(k) * (input_.level + sum_level_),
            std::fabs(k) * (input_.error + sum_error_) + step_of(state), RailEffect::lost);
    } else if (stage.structure != Structure::leak) {
        std::vector<PartialTerm> terms;
        if (const BiquadSection* s = element_.section()) {
            terms = {{s->b0, 0, Source::input},
                     {s->b1, 1, Source::input},
                     {s->b2, 2, Source::input},
                     {-s->a1, 1, Source::held},
                     {-s->a2, 2, Source::held}};
        } else {
            const auto& comb = std::get<Comb>(element_.exact.front().design);
            const auto delay = static_cast<std::size_t>(comb.delay_samples);
            terms = {{comb.direct, 0, Source::input},
                     {comb.forward, delay, Source::input},
                     {-comb.feedback, delay, Source::held}};
        }
        add_sum("accumulator", sum, Source::sum, sum_level_, sum_error_, RailEffect::lost, std::move(terms));
    }
    const bool contracts = is_only_one_ && element_.is_first_order() && state.overflow == Overflow::saturate;
    add("state", state, Source::sum, sum_level_, sum_error_, contracts ? RailEffect::clip : RailEffect::lost);
    if (element_.shortens_to_output() && !same_words(state, stage.out.word)) add_output(out_error_, false);
}

void RailElement::of_direct_2() {
    const DescribedStage& stage = *element_.stage;
    const BiquadSection& s = *element_.section();
    const int products = stage.state.fraction_bits + stage.coefficient_fraction_bits;
    add_sum("feedback accumulator",
            accumulator(std::max(element_.in.fraction_bits, products), stage.state.fraction_bits), Source::state,
            state_level_, state_error_, RailEffect::lost,
            {{1.0, 0, Source::input}, {-s.a1, 1, Source::state}, {-s.a2, 2, Source::state}});
    add("state", stage.state, Source::state, state_level_, state_error_, RailEffect::lost);
    add_sum("accumulator", accumulator(products, stage.out.word.fraction_bits), Source::sum, sum_level_, sum_error_,
            behind(), {{s.b0, 0, Source::state}, {s.b1, 1, Source::state}, {s.b2, 2, Source::state}});
    add_output(out_error_, false);
}

void RailElement::of_transposed() {
    const DescribedStage& stage = *element_.stage;
    const BiquadSection& s = *element_.section();
    const int products =
        std::max(element_.in.fraction_bits, stage.out.word.fraction_bits) + stage.coefficient_fraction_bits;
    const auto sum_of = [&](int target) { return accumulator(std::max(products, stage.state.fraction_bits), target); };
    const auto lost = RailEffect::lost;
    add_sum("accumulator", sum_of(stage.out.word.fraction_bits), Source::sum, sum_level_, sum_error_, lost,
            {{1.0, 1, Source::state_1}, {s.b0, 0, Source::input}});
    add_output(out_error_, true);
    const auto add_state = [&](const char* name, Source source, std::vector<PartialTerm> terms) {
        add_sum("accumulator of a state", sum_of(stage.state.fraction_bits), source, level_of(source), error_of(source),
                lost, std::move(terms));
        add(name, stage.state, source, level_of(source), error_of(source), lost);
    };
    add_state("state 1", Source::state_1,
              {{1.0, 1, Source::state_2}, {s.b1, 0, Source::input}, {-s.a1, 0, Source::sum}});
    add_state("state 2", Source::state_2, {{s.b2, 0, Source::input}, {-s.a2, 0, Source::sum}});
}

void RailElement::add_output(double error, bool comes_back) {
    const DescribedStage& stage = *element_.stage;
    if (stage.out.is_float) return;
    const Word& out = stage.out.word;
    const bool saturates = out.overflow == Overflow::saturate, is_recursive = element_.is_recursive();
    // Where nothing has erred before and no fraction is kept, an error that is clipped is a smaller one.
    const bool errs_first = !is_recursive && input_.error == 0.0 && !input_.is_clipped && !stage.fraction_saving &&
                            element_.is_last_of_stage && element_.stage_index == 0;
    RailEffect effect = behind();
    if (saturates && (element_.is_last || errs_first)) effect = RailEffect::clip;
    if (comes_back) effect = RailEffect::lost;
    add("output", out, Source::sum, sum_level_, error, effect);
}

// --- running

double RailElement::level_of(Source source) const {
    const BiquadSection* s = element_.section();
    switch (source) {
        case Source::input:
            return input_.level;
        case Source::state:
            return state_level_;
        case Source::state_1:
            return (std::fabs(s->b1) + std::fabs(s->b2)) * input_.level +
                   (std::fabs(s->a1) + std::fabs(s->a2)) * sum_level_;
        case Source::state_2:
            return std::fabs(s->b2) * input_.level + std::fabs(s->a2) * sum_level_;
        default:
            return sum_level_;
    }
}

double RailElement::error_of(Source source) const {
    const BiquadSection* s = element_.section();
    const double steps = 4.0 * step_of(element_.stage->state);
    switch (source) {
        case Source::input:
            return input_.error;
        case Source::state:
            return state_error_;
        case Source::state_1:
            return (std::fabs(s->b1) + std::fabs(s->b2)) * input_.error +
                   (std::fabs(s->a1) + std::fabs(s->a2)) * sum_error_ + steps;
        case Source::state_2:
            return std::fabs(s->b2) * input_.error + std::fabs(s->a2) * sum_error_ + steps;
        default:
            return sum_error_;
    }
}

bool RailElement::is_watched() const {
    return std::any_of(nodes_.begin(), nodes_.end(), [](const RailNode& node) { return node.is_watched; });
}

void RailElement::reset() {
    filter_.reset();
    if (state_filter_) state_filter_->reset();
    // One sample more than is looked at: the states of transposed-2 are made of a sample before.
    in_.assign(reach_back_ + 1, 0.0);
    sums_.assign(reach_back_ + 1, 0.0);
    states_.assign(reach_back_ + 1, 0.0);
}

double RailElement::value_at(Source source, std::size_t n) const {
    const BiquadSection* s = element_.section();
    switch (source) {
        case Source::input:
            return in_[n];
        case Source::state:
        case Source::held:
            return states_[n];
        case Source::state_1:
            return s->b2 * in_[n - 1] - s->a2 * sums_[n - 1] + s->b1 * in_[n] - s->a1 * sums_[n];
        case Source::state_2:
            return s->b2 * in_[n] - s->a2 * sums_[n];
        default:
            return sums_[n];
    }
}

bool RailElement::leaves_rail(const Rail& rail, std::size_t n) const {
    const auto leaves = [&](double value) { return !(value >= rail.lowest && value <= rail.highest); };
    switch (rail.source) {
        case Source::window:
            return leaves(sums_[n] * points_over_gain_);
        case Source::window_rest:
            return leaves(sums_[n] * points_over_gain_ - in_[n]);
        case Source::product:
            return leaves(element_.section()->b0 * (in_[n] - states_[n - 1]));
        case Source::partial: {
            double sum = 0.0;
            for (const PartialTerm& term : rail.terms) {
                sum += term.coefficient * value_at(term.of, n - term.delay);
                if (leaves(sum)) return true;
            }
            return false;
        }
        default:
            return leaves(value_at(rail.source, n));
    }
}

void RailElement::process(std::span<const double> in, std::span<double> out, std::span<std::uint8_t> reached) {
    const std::size_t past = reach_back_ + 1, count = in.size();
    for (auto* series : {&in_, &sums_, &states_}) {
        // Keep the last `past` samples of what was there.
        series->erase(series->begin(), series->end() - static_cast<std::ptrdiff_t>(past));
        series->resize(past + count);
    }
    std::copy(in.begin(), in.end(), in_.begin() + static_cast<std::ptrdiff_t>(past));
    filter_.process(in, std::span(sums_).subspan(past), std::span(states_).subspan(past), out);
    if (state_filter_) state_filter_->process(in, std::span(states_).subspan(past));
    std::fill(reached.begin(), reached.end(), std::uint8_t{0});
    for (std::size_t r = 0; r < rails_.size(); ++r) {
        if (!nodes_[r].is_watched) continue;
        for (std::size_t n = 0; n < count; ++n) {
            if (reached[n] != 0 && nodes_[reached[n] - 1].effect >= nodes_[r].effect) continue;
            if (leaves_rail(rails_[r], past + n)) reached[n] = static_cast<std::uint8_t>(r + 1);
        }
    }
}

}  // namespace halflsb
