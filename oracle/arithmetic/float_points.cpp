#include "oracle/arithmetic/float_points.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/chain_elements.hpp"
#include "oracle/arithmetic/float_sum.hpp"

namespace halflsb {

namespace {

using namespace float32;
using Place = RoundingPoint::Place;

constexpr double unlimited = std::numeric_limits<double>::infinity();

/// What the loop of an element makes of its own errors; 1 where there is none.
double loop_gain_of(const ChainElement& element) {
    if (!element.is_recursive()) return 1.0;
    if (const Comb* comb = element.comb()) return 1.0 / (1.0 - std::fabs(comb->feedback));
    return l1_norm(element.loop());
}

/// How large an error can get on its way through an element; `gain` is that of the whole of it.
double reach_of(Place place, double loop_gain, double gain) {
    if (place == Place::loop) return loop_gain;
    return place == Place::entry ? gain : 1.0;
}

class ElementPoints {
public:
    /// `error_in` bounds the error of what comes in.
    ElementPoints(const ChainElement& element, const ExactChain& exact, const FloatUse& use, double error_in)
        : element_(element),
          stage_(*element.stage),
          use_(use),
          gain_(l1_norm(element.exact)),
          loop_gain_(loop_gain_of(element)),
          error_out_(error_in * gain_) {
        const auto level = [&](std::size_t stages, std::size_t sections) {
            FilterChain path(exact.stages.begin(), exact.stages.begin() + static_cast<std::ptrdiff_t>(stages));
            if (sections > 0) {
                auto cascade = std::get<BiquadCascade>(exact.stages[stages].design);
                cascade.sections.resize(sections);
                FilterStage part;
                part.design = cascade;
                path.push_back(part);
            }
            return use.largest_input * l1_norm(path) * beyond_first_order;
        };
        const bool is_section = std::holds_alternative<BiquadCascade>(element.exact.front().design);
        in_ = (is_section ? level(element.node.stage, element.node.section)
                          : level(exact.first_of[element.stage_index], 0)) +
              error_in;
        out_ = (is_section ? level(element.node.stage, element.node.section + 1) : level(element.node.stage + 1, 0)) +
               error_out_;
        output_path_.assign(exact.stages.begin(), exact.stages.begin() + static_cast<std::ptrdiff_t>(
                                                                             exact.first_of[element.stage_index + 1]));
        state_ = element.has_sums() ? in_ * loop_gain_ * beyond_first_order : 0.0;
    }

    /// Of what goes out, errors that came in included; after find().
    double error_out() const { return error_out_; }

    std::vector<RoundingPoint> find() {
        const FilterDesign& design = element_.exact.front().design;
        add_input();
        if (const auto* fir = std::get_if<Fir>(&design)) of_taps(fir->taps);
        if (const auto* decimator = std::get_if<FirDecimator>(&design)) of_taps(decimator->taps);
        if (const auto* interpolator = std::get_if<FirInterpolator>(&design)) of_taps(interpolator->taps);
        if (const auto* average = std::get_if<MovingAverage>(&design)) of_average(average->points);
        if (const auto* median = std::get_if<Median>(&design)) {
            SumError mean(false);
            if (median->points % 2 == 0) mean.add_whole(in_), mean.add_whole(in_);
            add("mean", Place::behind, mean);
        }
        // What an integrator loses, no comb takes away again.
        if (std::holds_alternative<CicDecimator>(design) || std::holds_alternative<CicInterpolator>(design))
            push("registers", Place::behind, unlimited, 1);
        if (element_.comb() != nullptr) of_comb(*element_.comb());
        if (element_.has_sums()) of_sums();
        add_output();
        return std::move(points_);
    }

private:
    bool is_first_of_stage() const { return element_.node.section == 0; }

    /// Input words that a float32 does not hold exactly.
    void add_input() {
        if (stage_.in.is_float || !is_first_of_stage() || stage_.in.word.bits <= 25) return;
        const double error = unit * in_;
        push("input", Place::entry, error, 1);
        in_ += error;
        out_ += error * gain_;
        state_ += error * loop_gain_;
    }

    void of_taps(const std::vector<double>& taps) {
        SumError sum(stage_.fused);
        const bool turned = stage_.summation == Summation::oldest_first;
        for (std::size_t k = 0; k < taps.size(); ++k) {
            sum.add_product(in_ * std::fabs(taps[turned ? taps.size() - 1 - k : k]));
        }
        add("sum", Place::behind, sum);
    }

    void of_average(int points) {
        // Whole numbers of steps of the input word: exact as long as the sum, and what the running one holds
        // in between, is below 2^24 of them.
        const bool is_exact =
            !stage_.in.is_float && std::ldexp(static_cast<double>(points) + 1.0, stage_.in.word.bits - 1) <= 0x1p24;
        double error = 0.0;
        if (!is_exact && stage_.structure == Structure::running_sum) {
            // e[n] <= (1 + u)^2 e[n-1] + ((1 + u)^2 - 1) W, W a bound of the window and one sample.
            const double window = (points + 1.0) * in_;
            error = window * std::expm1(2.0 * unit * static_cast<double>(use_.samples)) / points;
        } else if (!is_exact) {
            SumError sum(true);
            for (int k = 0; k < points; ++k) sum.add_whole(in_);
            error = sum.value() / points;
        }
        if (error > 0.0) push("sum", Place::behind, error, points);
        const bool is_shift = (points & (points - 1)) == 0;
        if (!is_shift) push("division", Place::behind, unit * beyond_first_order * out_ + smallest, 1);
    }

    void of_comb(const Comb& comb) {
        SumError sum(stage_.fused);
        sum.add_product(in_ * std::fabs(comb.direct));
        sum.add_product(in_ * std::fabs(comb.forward));
        sum.add_product(out_ * std::fabs(comb.feedback));
        push("sum", Place::loop, with_own_errors(sum.value(), out_), sum.count());
    }

    void of_sums() {
        const auto b = [&](std::size_t k) {
            return k < element_.forward.size() ? std::fabs(element_.forward[k]) : 0.0;
        };
        const auto a = [&](std::size_t k) {
            return k <= element_.feedback.size() ? std::fabs(element_.feedback[k - 1]) : 0.0;
        };
        const std::size_t order = std::max(element_.forward.size() - 1, element_.feedback.size());
        SumError sum(stage_.fused);
        switch (stage_.structure) {
            case Structure::direct_2: {
                sum.add_whole(in_);
                for (std::size_t k = 1; k <= order; ++k) sum.add_product(a(k) * state_);
                const double error = with_own_errors(sum.value(), state_);
                push("state", Place::entry, error, sum.count());
                out_ += error * gain_;
                SumError out(stage_.fused);
                for (std::size_t k = 0; k <= order; ++k) out.add_product(b(k) * state_);
                add("output", Place::behind, out);
                break;
            }
            case Structure::transposed_2: {
                const double all = with_own_errors(sum_of_transposed(order, b, a), out_);
                push("sums", Place::loop, all, static_cast<int>(3 * order + 1));
                break;
            }
            case Structure::difference: {
                // d = x - s, p = C d, s + p.
                const double d = in_ + out_, p = b(0) * d;
                const double rounded = b(0) * d + (stage_.fused ? 0.0 : p) + out_ + p;
                push("sum", Place::loop, with_own_errors(unit * beyond_first_order * rounded + 3.0 * smallest, out_),
                     3);
                break;
            }
            case Structure::leak: {
                const double x = b(0) * in_, s = b(0) * out_;
                const double rounded = (stage_.fused ? 0.0 : x + s) + (out_ + x) + (out_ + x + s);
                push("sum", Place::loop, with_own_errors(unit * beyond_first_order * rounded + 4.0 * smallest, out_),
                     4);
                break;
            }
            default:
                for (std::size_t k = 0; k <= order; ++k) sum.add_product(b(k) * in_);
                for (std::size_t k = 1; k <= order; ++k) sum.add_product(a(k) * out_);
                push("sum", Place::loop, with_own_errors(sum.value(), out_), sum.count());
        }
    }

    /// y = s1 + b0 x; s_k = (s_k+1 + b_k x) + C_k y: all errors reach the sum of y.
    template <class Forward, class Feedback>
    double sum_of_transposed(std::size_t order, Forward b, Feedback a) const {
        double next = 0.0, all = 0.0;
        for (std::size_t k = order; k > 0; --k) {
            SumError state(stage_.fused);
            if (k < order) state.add_whole(next);
            state.add_product(b(k) * in_);
            state.add_product(a(k) * out_);
            // A first product that is fused with a state is rounded with the sum alone; counted as if by itself.
            all += state.value() + (stage_.fused ? unit * b(k) * in_ : 0.0);
            next += b(k) * in_ + a(k) * out_;
        }
        SumError output(stage_.fused);
        output.add_whole(next);
        output.add_product(b(0) * in_);
        return all + output.value() + (stage_.fused ? unit * b(0) * in_ : 0.0);
    }

    /// Back to whole words.
    void add_output() {
        if (stage_.out.is_float || !element_.is_last_of_stage) return;
        const double step = step_of(stage_.out.word);
        RoundingPoint& point = push("output", Place::behind, 0.0, 1);
        point.step = step;
        point.error = rounding_error_of_inexact(stage_.rounding).times(step);
        point.variance_each = point.error.variance;
        error_out_ += step;
    }

    void add(const char* what, Place place, const SumError& sum) {
        if (sum.value() > 0.0) push(what, place, sum.value(), sum.count());
    }

    /// The numbers that a loop feeds back hold what it has made of its own errors. Those grow with the numbers at most
    /// in proportion: e (1 + E / numbers) with E = gain e (1 + E / numbers). Where E comes near the numbers themselves
    /// nothing is known of them.
    double with_own_errors(double error, double& numbers) const {
        if (!element_.is_recursive() || error == 0.0) return error;
        const double part = error * loop_gain_ / numbers;
        if (!(part < 0.5)) return unlimited;
        numbers /= 1.0 - part;
        return error / (1.0 - part);
    }

    RoundingPoint& push(const char* what, Place place, double error, int count) {
        if (error > 0.0) error_out_ += error * reach_of(place, loop_gain_, gain_);
        RoundingPoint point;
        point.name = element_.name + ", " + what;
        point.stage = element_.stage_index;
        point.node = element_.node;
        point.node.in_feedback = place == Place::loop;
        point.place = place;
        point.step = unit * out_;
        point.is_float = what != std::string_view("output");
        point.parts = unlimited;
        point.count = count;
        point.error = {-error, error, -error, error, true, 0.0};
        // The model knows no distribution of these: no noise stands above them.
        point.factor = point.is_float ? 0.0 : 1.0;
        if (!point.is_float) point.from_input = output_path_;
        points_.push_back(std::move(point));
        return points_.back();
    }

    const ChainElement& element_;
    const DescribedStage& stage_;
    const FloatUse& use_;
    double gain_, loop_gain_, error_out_;
    double in_ = 0.0, out_ = 0.0, state_ = 0.0;
    FilterChain output_path_;
    std::vector<RoundingPoint> points_;
};

/// Largest error that the points of an element of integers put into its result.
double error_of_integers(const ChainElement& element, const std::vector<RoundingPoint>& points, double gain) {
    const double loop_gain = loop_gain_of(element);
    double error = 0.0;
    for (const RoundingPoint& point : points) {
        if (point.stage != element.stage_index || point.node.section != element.node.section) continue;
        const double reach = reach_of(point.place, loop_gain, gain);
        error += point.error.largest() * reach * (point.saves_fraction ? 2.0 : 1.0);
    }
    return error;
}

}  // namespace

std::vector<RoundingPoint> float_points(const DescribedChain& chain, const ExactChain& exact, const FloatUse& use) {
    std::vector<RoundingPoint> all;
    const auto elements = chain_elements(chain, exact);
    if (std::none_of(elements.begin(), elements.end(), [](const ChainElement& e) { return !e.is_integer(); }))
        return all;
    const std::vector<RoundingPoint> of_integers = rounding_points(chain, exact);
    double error = 0.0;
    for (const ChainElement& element : elements) {
        if (element.is_integer()) {
            const double gain = l1_norm(element.exact);
            error = error * gain + error_of_integers(element, of_integers, gain);
            continue;
        }
        ElementPoints points(element, exact, use, error);
        for (RoundingPoint& point : points.find()) all.push_back(std::move(point));
        // Where no limit is told any more, what follows adds nothing to that.
        error = std::isfinite(points.error_out()) ? points.error_out() : 0.0;
    }
    return all;
}

}  // namespace halflsb
