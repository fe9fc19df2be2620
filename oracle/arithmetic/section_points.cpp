// Which sums each structure has, and where they go: docs/arithmetic.md, "Stages".
#include "oracle/arithmetic/section_points.hpp"

#include <algorithm>

namespace halflsb {

namespace {

using Place = RoundingPoint::Place;

/// What state k of a section in transposed-2 adds up to, of white noise at the section's input. With a0 = 1 and S_k the
/// sum before its delay, S_k = sum over j >= k of z^-(j - k) (b_j X - a_j Y); as B X = A Y, that is
/// z^k sum over j < k of z^-j (a_j B - b_j A) / A times X.
FilterStage signal_of_state(const SectionCoefficients& s, std::size_t k, std::size_t order) {
    std::vector<double> b = s.forward, a{1.0};
    a.insert(a.end(), s.feedback.begin(), s.feedback.end());
    b.resize(2 * order + 1, 0.0);
    a.resize(2 * order + 1, 0.0);
    std::vector<double> numerator(order, 0.0);
    for (std::size_t m = 0; m < order; ++m) {
        for (std::size_t j = 0; j < k; ++j) numerator[m] += a[j] * b[m + k - j] - b[j] * a[m + k - j];
    }
    a.resize(order + 1);
    FilterStage stage;
    if (std::all_of(numerator.begin(), numerator.end(), [](double c) { return c == 0.0; })) {
        stage.design = Fir{{0.0}};
    } else if (order <= 2) {
        numerator.resize(2, 0.0);
        a.resize(3, 0.0);
        stage.design = BiquadCascade{{{numerator[0], numerator[1], 0.0, a[1], a[2]}}};
    } else {
        stage.design = Recursion{std::move(numerator), std::move(a)};
    }
    return stage;
}

/// Of a direct form whose sum keeps `step_bits` of fraction: what the sum moves by from one sample to the next, without
/// whole steps. `fed_back` is the word that a1, a2 ... multiply; what is fed back is B / A of the section's input, or
/// 1 / A (`is_state`), where the forward products come later.
FilterStage moving_sum(const SectionCoefficients& s, const Word& in, const Word& fed_back, int step_bits,
                       bool is_state) {
    std::vector<double> a{1.0};
    a.insert(a.end(), s.feedback.begin(), s.feedback.end());
    const std::vector<double> b = is_state ? std::vector<double>{1.0} : s.forward;
    std::vector<double> numerator(b.size() + a.size(), 0.0);
    for (std::size_t j = 0; j < b.size() && !is_state; ++j)
        for (std::size_t k = 0; k < a.size(); ++k) numerator[j + k] += moving_part(b[j], in, step_bits) * a[k];
    for (std::size_t k = 1; k < a.size(); ++k)
        for (std::size_t j = 0; j < b.size(); ++j) numerator[j + k] -= moving_part(a[k], fed_back, step_bits) * b[j];
    for (std::size_t k = numerator.size() - 1; k > 0; --k) numerator[k] -= numerator[k - 1];
    FilterStage stage;
    stage.design = Recursion{std::move(numerator), std::move(a)};
    return stage;
}

class SectionPoints {
public:
    explicit SectionPoints(StageSums& stage_sums) : here_(stage_sums) {}

    void find(const SectionCoefficients& s, std::size_t j, bool is_last) {
        bool stays_wide = false;
        here_.find_spare_of_state(s.forward, s.feedback);
        if (here_.stage.structure == Structure::direct_2) {
            of_direct_2(s, j);
        } else if (here_.stage.structure == Structure::transposed_2) {
            of_transposed(s, j);
        } else {
            if (here_.stage.structure == Structure::direct_1) of_direct_1(s, j);
            if (here_.stage.structure == Structure::difference) of_difference(s);
            if (here_.stage.structure == Structure::leak) of_leak(s.forward.front());
            stays_wide = here_.stage.rounding_at == RoundingAt::output && !is_last;
            if (!stays_wide) here_.add_output(j);
        }
        here_.in = stays_wide ? here_.stage.state : here_.stage.out.word;
        here_.in_may_lean = here_.may_lean();
        if (stays_wide) {
            here_.in_spare = here_.state_spare;
        } else {
            here_.set_spare_out(here_.result_bits);
        }
    }

private:
    FilterChain remainder_of(const SectionCoefficients& s, const SumTarget& target, const Word& fed_back,
                             bool is_state) const {
        FilterChain path = target.from_input_of_terms;
        path.push_back(moving_sum(s, here_.in, fed_back, target.fraction_bits, is_state));
        return path;
    }

    std::vector<Term> terms_of(const std::vector<double>& forward, const Word& word) const {
        std::vector<Term> terms;
        for (const double b : forward) terms.push_back(here_.term(b, word));
        return terms;
    }

    void of_direct_1(const SectionCoefficients& s, std::size_t j) {
        SumTarget target = here_.at_section("sum", j, Place::loop);
        target.saves_fraction = here_.stage.fraction_saving;
        target.fraction_bits = here_.stage.state.fraction_bits;
        target.remainder = remainder_of(s, target, here_.stage.state, false);
        std::vector<Term> terms = terms_of(s.forward, here_.in);
        for (const double a : s.feedback) terms.push_back(here_.feedback(a, here_.stage.state));
        here_.sums.add_sum(std::move(terms), target);
    }

    void of_direct_2(const SectionCoefficients& s, std::size_t j) {
        const Word& state = here_.stage.state;
        SumTarget first = here_.at_section("state", j, Place::entry);
        first.saves_fraction = here_.stage.fraction_saving;
        first.fraction_bits = state.fraction_bits;
        first.from_input = first.from_input_of_feedback = path_to_state(here_.exact.stages, first.node);
        first.remainder = remainder_of(s, first, state, true);
        std::vector<Term> terms{here_.whole(here_.in)};
        for (const double a : s.feedback) terms.push_back(here_.feedback(a, state));
        here_.sums.add_sum(std::move(terms), first);
        SumTarget second = here_.at_section("output", j, Place::behind);
        second.saves_fraction = here_.stage.fraction_saving;
        second.rounding = here_.stage.output_rounding;
        second.from_input_of_terms = first.from_input;
        second.multiplies_input = false;
        here_.sums.add_sum(terms_of(s.forward, state), second);
    }

    // What the states lose comes in at the summing point of y, a sample or more later.
    void of_transposed(const SectionCoefficients& s, std::size_t j) {
        const std::size_t order = std::max(s.forward.size() - 1, s.feedback.size());
        SumTarget output = here_.at_section("output", j, Place::loop);
        const auto to_state = [&](std::size_t k) {
            FilterChain path = output.from_input_of_terms;
            if (k <= order) path.push_back(signal_of_state(s, k, order));
            return path;
        };
        output.from_input_of_state = to_state(1);
        output.remainder = remainder_of(s, output, here_.stage.out.word, false);
        here_.sums.add_sum({here_.whole(here_.stage.state), here_.term(s.forward.front(), here_.in)}, output);
        for (std::size_t k = 1; k <= order; ++k) {
            SumTarget state = here_.at_section("state " + std::to_string(k), j, Place::loop);
            state.fraction_bits = here_.stage.state.fraction_bits;
            state.from_input = to_state(k);
            state.from_input_of_state = to_state(k + 1);
            std::vector<Term> terms;
            if (k < order) terms.push_back(here_.whole(here_.stage.state));
            if (k < s.forward.size()) terms.push_back(here_.term(s.forward[k], here_.in));
            if (k <= s.feedback.size()) terms.push_back(here_.feedback(s.feedback[k - 1], here_.stage.out.word));
            here_.sums.add_sum(std::move(terms), state);
        }
    }

    void of_difference(const SectionCoefficients& s) {
        const Word difference{wide_bits, std::max(here_.in.fraction_bits, here_.stage.state.fraction_bits)};
        SumTarget target = here_.at_section("product", 0, Place::loop);
        target.fraction_bits = here_.stage.state.fraction_bits;
        target.multiplies_input = false;
        target.remainder = remainder_of(s, target, here_.stage.state, false);
        here_.sums.add_sum({here_.term(s.forward.front(), difference)}, target);
    }

    void of_leak(double k) {
        SumTarget target = here_.at_section("product of input", 0, Place::loop);
        target.fraction_bits = here_.stage.state.fraction_bits;
        here_.sums.add_product(here_.term(k, here_.in), target, 1.0);
        target.what = "product of state";
        target.from_input_of_terms = target.from_input;
        target.multiplies_input = false;
        here_.sums.add_product(here_.term(k, here_.stage.state), target, -1.0);
    }

    StageSums& here_;
};

}  // namespace

void add_section(StageSums& stage_sums, const SectionCoefficients& section, std::size_t section_index, bool is_last) {
    SectionPoints(stage_sums).find(section, section_index, is_last);
}

}  // namespace halflsb
