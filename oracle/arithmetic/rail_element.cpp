#include "oracle/arithmetic/rail_element.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/reference_error.hpp"
#include "oracle/filters/cic.hpp"

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
        element.has_sums() && element.is_integer() && element.stage->structure == Structure::direct_2;
    sum_level_ =
        input.is_clipped ? input.level * l1_norm(element.exact) : input.full_scale * bounds.gain_to_sum(element);
    sum_error_ = bounds.error_at_sum(element, is_direct_2);
    out_error_ = bounds.error_at_sum(element, true);
    if (is_direct_2) {
        const FilterChain to_state = element.loop();
        state_level_ =
            input.is_clipped ? input.level * l1_norm(to_state) : input.full_scale * bounds.gain_to_state(element);
        state_error_ = bounds.error_at_state(element);
        state_filter_ = make_filter(to_state);
    }
    const bool is_one_rate = std::holds_alternative<Fir>(element.exact.front().design) ||
                             std::holds_alternative<MovingAverage>(element.exact.front().design) ||
                             element.has_sums() || element.comb() != nullptr;
    if (!element.is_integer() || !is_one_rate) {
        if (element.is_integer()) of_rate_changer(element.exact.front().design);
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
    if (element.has_sums()) reach_back_ = std::max(reach_back_, 2 * order() + 1);
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

std::vector<RailElement::PartialTerm> RailElement::forward_terms(Place of) const {
    std::vector<PartialTerm> terms;
    for (std::size_t k = 0; k < element_.forward.size(); ++k) terms.push_back({forward(k), k, of});
    return terms;
}

void RailElement::add(const std::string& name, const Word& word, Place place, double worst, double error,
                      RailEffect effect, std::vector<PartialTerm> terms) {
    if (word.bits == wide_bits) return;
    RailNode node{element_.name + ", " + name, word, worst, error, effect, false};
    node.is_watched = !(worst + error <= highest_value(word));
    for (const PartialTerm& term : terms) reach_back_ = std::max(reach_back_, term.delay);
    rails_.push_back({place, lowest_value(word) + error, highest_value(word) - error, std::move(terms)});
    nodes_.push_back(std::move(node));
}

// A sum that wraps is right when its end is; one that saturates must not leave its word on the way either.
void RailElement::add_sum(const std::string& name, const Word& word, Place place, double worst, double error,
                          RailEffect effect, std::vector<PartialTerm> terms) {
    const DescribedStage& stage = *element_.stage;
    if (stage.fraction_saving) error += step_of(stage.state);
    if (word.overflow == Overflow::wrap) {
        add(name, word, place, worst, error, effect);
        return;
    }
    // Each product may have been shortened, by a step at most.
    double level = 0.0, drift = static_cast<double>(terms.size()) * step_of(word);
    if (stage.fraction_saving) drift += step_of(stage.state);
    for (const PartialTerm& term : terms) {
        level += std::fabs(term.coefficient) * level_of(term.of);
        drift += std::fabs(term.coefficient) * error_of(term.of);
    }
    add(name, word, {Source::partial}, level, drift, effect, std::move(terms));
}

void RailElement::of_fir(const Fir& fir) {
    const DescribedStage& stage = *element_.stage;
    std::vector<PartialTerm> terms;
    for (std::size_t k = 0; k < fir.taps.size(); ++k) terms.push_back({fir.taps[k], k, {Source::input}});
    if (stage.summation == Summation::oldest_first) std::reverse(terms.begin(), terms.end());
    const int products = element_.in.fraction_bits + stage.coefficient_fraction_bits;
    add_sum("accumulator", accumulator(products, stage.out.word.fraction_bits), {Source::sum}, sum_level_, sum_error_,
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
        add("accumulator", word, {Source::window}, worst, error, behind());
    } else if (stage.structure == Structure::running_sum) {
        // The oldest goes before the newest comes; a sum that was clipped once stays wrong.
        add("accumulator", word, {Source::window}, worst, error, RailEffect::lost);
        add("accumulator less the oldest", word, {Source::window_rest}, worst, error, RailEffect::lost);
    } else {
        std::vector<PartialTerm> terms;
        for (int k = 0; k < points; ++k) terms.push_back({1.0, static_cast<std::size_t>(k), {Source::input}});
        if (stage.summation == Summation::oldest_first) std::reverse(terms.begin(), terms.end());
        add("accumulator", word, {Source::partial}, worst, error, behind(), std::move(terms));
    }
    add_output(out_error_, false);
}

void RailElement::of_loop() {
    const DescribedStage& stage = *element_.stage;
    const Word& state = stage.state;
    const int words = std::max(element_.in.fraction_bits, state.fraction_bits) + stage.coefficient_fraction_bits;
    const Word sum = accumulator(words, state.fraction_bits);
    if (stage.structure == Structure::difference) {
        const double k = forward(0);
        add("accumulator", sum, {Source::product}, std::fabs(k) * (input_.level + sum_level_),
            std::fabs(k) * (input_.error + sum_error_) + step_of(state), RailEffect::lost);
    } else if (stage.structure != Structure::leak) {
        std::vector<PartialTerm> terms;
        if (const Comb* comb = element_.comb()) {
            const auto delay = static_cast<std::size_t>(comb->delay_samples);
            terms = {{comb->direct, 0, {Source::input}},
                     {comb->forward, delay, {Source::input}},
                     {-comb->feedback, delay, {Source::held}}};
        } else {
            terms = forward_terms({Source::input});
            for (std::size_t k = 1; k <= element_.feedback.size(); ++k) {
                terms.push_back({-feedback(k), k, {Source::held}});
            }
        }
        add_sum("accumulator", sum, {Source::sum}, sum_level_, sum_error_, RailEffect::lost, std::move(terms));
    }
    const bool contracts = is_only_one_ && element_.is_first_order() && state.overflow == Overflow::saturate;
    add("state", state, {Source::sum}, sum_level_, sum_error_, contracts ? RailEffect::clip : RailEffect::lost);
    if (element_.shortens_to_output() && !same_words(state, stage.out.word)) add_output(out_error_, false);
}

void RailElement::of_direct_2() {
    const DescribedStage& stage = *element_.stage;
    const int products = stage.state.fraction_bits + stage.coefficient_fraction_bits;
    std::vector<PartialTerm> terms{{1.0, 0, {Source::input}}};
    for (std::size_t k = 1; k <= element_.feedback.size(); ++k) terms.push_back({-feedback(k), k, {Source::state}});
    add_sum("feedback accumulator",
            accumulator(std::max(element_.in.fraction_bits, products), stage.state.fraction_bits), {Source::state},
            state_level_, state_error_, RailEffect::lost, std::move(terms));
    add("state", stage.state, {Source::state}, state_level_, state_error_, RailEffect::lost);
    add_sum("accumulator", accumulator(products, stage.out.word.fraction_bits), {Source::sum}, sum_level_, sum_error_,
            behind(), forward_terms({Source::state}));
    add_output(out_error_, false);
}

void RailElement::of_transposed() {
    const DescribedStage& stage = *element_.stage;
    const int products =
        std::max(element_.in.fraction_bits, stage.out.word.fraction_bits) + stage.coefficient_fraction_bits;
    const auto sum_of = [&](int target) { return accumulator(std::max(products, stage.state.fraction_bits), target); };
    const auto lost = RailEffect::lost;
    add_sum("accumulator", sum_of(stage.out.word.fraction_bits), {Source::sum}, sum_level_, sum_error_, lost,
            {{1.0, 1, {Source::transposed, 1}}, {forward(0), 0, {Source::input}}});
    add_output(out_error_, true);
    for (std::size_t k = 1; k <= order(); ++k) {
        const Place place{Source::transposed, k};
        const std::string name = "state " + std::to_string(k);
        std::vector<PartialTerm> terms;
        if (k < order()) terms.push_back({1.0, 1, {Source::transposed, k + 1}});
        terms.push_back({forward(k), 0, {Source::input}});
        terms.push_back({-feedback(k), 0, {Source::sum}});
        add_sum("accumulator of " + name, sum_of(stage.state.fraction_bits), place, level_of(place), error_of(place),
                lost, std::move(terms));
        add(name, stage.state, place, level_of(place), error_of(place), lost);
    }
}

// What such an element sums on its way is not followed: where a word of it could be left nothing is claimed at all.
void RailElement::of_rate_changer(const FilterDesign& design) {
    const DescribedStage& stage = *element_.stage;
    const auto never_safe = [&] { rails_.back().lowest = HUGE_VAL; };
    const auto of_taps = [&](const std::vector<double>& taps) {
        const int products = element_.in.fraction_bits + stage.coefficient_fraction_bits;
        const Word sum = accumulator(products, stage.out.word.fraction_bits);
        if (sum.bits == wide_bits) return;
        double size = 0.0;
        for (const double tap : taps) size += std::fabs(tap);
        const double level = std::max(input_.level, -lowest_value(element_.in));
        const double drift = static_cast<double>(taps.size() + 1) * std::max(step_of(sum), step_of(stage.out.word));
        add("accumulator", sum, {Source::sum}, size * level, size * input_.error + drift, RailEffect::lost);
        never_safe();
    };
    if (const auto* decimator = std::get_if<FirDecimator>(&design)) of_taps(decimator->taps);
    if (const auto* interpolator = std::get_if<FirInterpolator>(&design)) of_taps(interpolator->taps);
    const auto* cic = std::get_if<CicDecimator>(&design);
    if (cic == nullptr || stage.state.bits == wide_bits) return;
    if (stage.state.overflow == Overflow::saturate) {
        // Integrators that saturate never come back.
        add("registers", stage.state, {Source::sum}, HUGE_VAL, 0.0, RailEffect::lost);
        never_safe();
    } else if (!stage.discarded_bits.empty()) {
        // Registers that hold the last sum wrap and lose nothing; with what was discarded it may be a little larger.
        Word last = stage.state;
        last.bits -= stage.discarded_bits.back();
        last.fraction_bits -= stage.discarded_bits.back();
        points_over_gain_ = divisor_of(*cic);
        add(name_of_cic_register(cic->order, 2 * cic->order), last, {Source::window}, sum_level_ * points_over_gain_,
            sum_error_ * points_over_gain_, behind());
    }
}

void RailElement::add_output(double error, bool comes_back) {
    const DescribedStage& stage = *element_.stage;
    if (stage.out.is_float) return;
    const Word& out = stage.out.word;
    const bool saturates = out.overflow == Overflow::saturate, is_recursive = element_.is_recursive();
    // Where nothing has erred before and no fraction is kept, an error that is clipped is a smaller one.
    const bool errs_first = element_.is_integer() && !is_recursive && input_.error == 0.0 && !input_.is_clipped &&
                            !stage.fraction_saving && element_.is_last_of_stage && element_.stage_index == 0;
    RailEffect effect = behind();
    if (saturates && (element_.is_last || errs_first)) effect = RailEffect::clip;
    if (comes_back) effect = RailEffect::lost;
    add("output", out, {Source::sum}, sum_level_, error, effect);
}

}  // namespace halflsb
