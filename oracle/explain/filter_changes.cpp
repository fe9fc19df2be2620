#include "oracle/explain/filter_changes.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <utility>

#include "oracle/explain/coefficient_changes.hpp"
#include "oracle/explain/section_changes.hpp"

namespace halflsb {
namespace {

constexpr double usual_bits = 5.0;  ///< what everybody has done once

class FilterChanges {
public:
    explicit FilterChanges(const Hypothesis& from) : from_(from) {}

    std::vector<Hypothesis> all() {
        for (stage_ = 0; stage_ < from_.board.filter.size(); ++stage_) {
            std::visit([this](const auto& design) { of(design); }, stage().design);
            starts();
        }
        if (from_.board.filter.size() > 1) stages();
        bypass();
        return std::move(found_);
    }

private:
    using Alter = std::function<void(FilterStage&)>;

    const FilterStage& stage() const { return from_.board.filter[stage_]; }

    void add(std::string what, std::string look_at, double price_bits, const Alter& alter) {
        Hypothesis made = from_;
        alter(made.board.filter[stage_]);
        finish(std::move(made), std::move(what), std::move(look_at), price_bits);
    }

    void finish(Hypothesis made, std::string what, std::string look_at, double price_bits) {
        add_changed(from_, std::move(made), {Slot::filter, stage_, std::move(what), std::move(look_at), price_bits},
                    found_);
    }

    // Numbers of points and factors.

    void of(const MovingAverage& average) {
        const int points = average.points;
        for (const int other : {points - 1, points + 1, points * 2, points / 2}) {
            if (other < 1) continue;
            const bool is_near = other == points - 1 || other == points + 1;
            window(other, other, is_near ? usual_bits + 1.0 : usual_bits + 3.0);
            if (is_near) window(other, points, usual_bits);
            window(points, other, is_near ? usual_bits + 1.0 : usual_bits + 0.5);
        }
    }

    void window(int points, int divisor, double price_bits) {
        Hypothesis made = from_;
        FilterStage& changed = made.board.filter[stage_];
        std::get<MovingAverage>(changed.design).points = points;
        const bool is_own = divisor == points;
        // A shift is a division by a power of two: the same numbers.
        if (changed.arithmetic.division == Division::shift) changed.arithmetic.division = Division::divide;
        if (!is_own) {
            if (made.board.sum != SumChange{}) return;
            made.board.sum = {stage_, 0, divisor};
        }
        finish(std::move(made),
               "a window of " + std::to_string(points) + " points" +
                   (is_own ? "" : ", divided by " + std::to_string(divisor)),
               "the length of the ring and the comparison that ends it; the divisor or the shift of the sum",
               price_bits);
    }

    void of(const Median& median) {
        for (const int other : {median.points - 1, median.points + 1, median.points - 2, median.points + 2}) {
            if (other < 1) continue;
            add("a median of " + std::to_string(other) + " points", "the length of the window", usual_bits,
                [=](FilterStage& changed) { std::get<Median>(changed.design).points = other; });
        }
    }

    void of(const CicDecimator& cic) {
        cic_changes(cic);
        phases(cic.factor, cic.phase_samples, &CicDecimator::phase_samples);
    }
    void of(const CicInterpolator& cic) { cic_changes(cic); }

    template <class Cic>
    void cic_changes(const Cic& cic) {
        for (const int by : {-1, 1}) {
            if (cic.order + by >= 1) {
                add("an order of " + std::to_string(cic.order + by), "the number of integrators and combs", usual_bits,
                    [=](FilterStage& changed) { std::get<Cic>(changed.design).order += by; });
            }
            if (cic.delay_samples + by >= 1) {
                add("a comb delay of " + std::to_string(cic.delay_samples + by), "the delay lines of the combs",
                    usual_bits + 1.0, [=](FilterStage& changed) { std::get<Cic>(changed.design).delay_samples += by; });
            }
            if (cic.shift_bits) {
                add("a shift of " + std::to_string(*cic.shift_bits + by) + " bits",
                    "the shift that takes the gain back", usual_bits,
                    [=](FilterStage& changed) { *std::get<Cic>(changed.design).shift_bits += by; });
            }
        }
    }

    template <class Design>
    void phases(int factor, int phase, int Design::*member) {
        for (int other = 0; other < std::min(factor, 64); ++other) {
            if (other == phase) continue;
            add("the sample kept of each " + std::to_string(factor) + " is number " + std::to_string(other + 1) +
                    ", not " + std::to_string(phase + 1),
                "the count of the decimator", usual_bits + std::log2(factor),
                [=](FilterStage& changed) { std::get<Design>(changed.design).*member = other; });
        }
    }

    // Taps.

    void of(const Fir&) { taps<Fir>(); }
    void of(const FirDecimator& fir) {
        taps<FirDecimator>();
        phases(fir.factor, fir.phase_samples, &FirDecimator::phase_samples);
    }
    void of(const FirInterpolator&) { taps<FirInterpolator>(); }

    template <class Design>
    void taps() {
        const auto with = [this](std::string what, double price_bits, std::function<void(std::vector<double>&)> alter) {
            add(std::move(what), "the table of taps and the loop over it", price_bits,
                [alter](FilterStage& changed) { alter(std::get<Design>(changed.design).taps); });
        };
        const auto count = std::get<Design>(stage().design).taps.size();
        with("the taps in the opposite order of time", usual_bits,
             [](auto& list) { std::reverse(list.begin(), list.end()); });
        with("a zero before the first tap: one sample late", usual_bits + 1.0,
             [](auto& list) { list.insert(list.begin(), 0.0); });
        with("all taps negated", usual_bits + 2.0, [](auto& list) {
            for (double& tap : list) tap = -tap;
        });
        if (count < 2) return;
        with("the last tap left out", usual_bits, [](auto& list) { list.back() = 0.0; });
        with("the first tap left out", usual_bits, [](auto& list) { list.front() = 0.0; });
        with("the first tap left out, the others one earlier", usual_bits + 1.0,
             [](auto& list) { list.erase(list.begin()); });
        for (std::size_t k = 0; k < std::min<std::size_t>(count, 512); ++k) {
            with("tap " + std::to_string(k) + " with the opposite sign", usual_bits + 1.0 + std::log2(count),
                 [k](auto& list) { list[k] = -list[k]; });
        }
    }

    // Sections.

    void of(const BiquadCascade& cascade) {
        const std::size_t count = cascade.sections.size();
        for (std::size_t i = 0; i < count; ++i) {
            const double which = std::log2(static_cast<double>(count));
            const std::string of = count > 1 ? "section " + std::to_string(i + 1) + ": " : "";
            for (const NamedSection& each : section_changes(cascade.sections[i], stage().coefficient_fraction_bits)) {
                add(of + each.what, "the table of coefficients, its order and what computes it",
                    each.price_bits + which,
                    [&](FilterStage& changed) { std::get<BiquadCascade>(changed.design).sections[i] = each.section; });
            }
        }
        if (count < 2) return;
        add("the sections in the opposite order", "the order of the table", usual_bits + 1.0, [](FilterStage& changed) {
            auto& list = std::get<BiquadCascade>(changed.design).sections;
            std::reverse(list.begin(), list.end());
        });
        for (std::size_t i = 0; i < count; ++i) {
            add("section " + std::to_string(i + 1) + " left out", "the count of sections",
                usual_bits + std::log2(count), [i](FilterStage& changed) {
                    auto& list = std::get<BiquadCascade>(changed.design).sections;
                    list.erase(list.begin() + static_cast<std::ptrdiff_t>(i));
                });
        }
    }

    void of(const Recursion&) {
        add("the feedback with the opposite sign", "the sign of the stored a", usual_bits, [](FilterStage& changed) {
            auto& a = std::get<Recursion>(changed.design).a;
            for (std::size_t k = 1; k < a.size(); ++k) a[k] = -a[k];
        });
        add("b in the opposite order", "the table of b", usual_bits, [](FilterStage& changed) {
            auto& b = std::get<Recursion>(changed.design).b;
            std::reverse(b.begin(), b.end());
        });
    }

    void of(const Comb& comb) {
        for (const int by : {-1, 1}) {
            if (comb.delay_samples + by < 1) continue;
            add("a delay of " + std::to_string(comb.delay_samples + by) + " samples", "the length of the delay line",
                usual_bits, [by](FilterStage& changed) { std::get<Comb>(changed.design).delay_samples += by; });
        }
        add("the feedback with the opposite sign", "the sign of the stored coefficient", usual_bits,
            [](FilterStage& changed) {
                auto& c = std::get<Comb>(changed.design);
                c.feedback = -c.feedback;
            });
        add("the delayed input with the opposite sign", "the sign of the stored coefficient", usual_bits,
            [](FilterStage& changed) {
                auto& c = std::get<Comb>(changed.design);
                c.forward = -c.forward;
            });
    }

    void starts() {
        const auto start = [this](Initial initial, const char* what) {
            if (initial == stage().initial) return;
            add(what, "what a reset writes into the state", usual_bits, [initial](FilterStage& changed) {
                changed.initial = initial;
                // Until the window is full the divisor is no power of two; the numbers are those of a division.
                if (initial == Initial::growing && changed.arithmetic.division == Division::shift)
                    changed.arithmetic.division = Division::divide;
            });
        };
        start(Initial::zeros, "a start from zeros");
        start(Initial::first_sample, "a start as if the first sample had always been there");
        if (std::holds_alternative<MovingAverage>(stage().design))
            start(Initial::growing, "a start with the mean of the samples so far");
    }

    void stages() {
        if (from_.board.sum != SumChange{}) return;  // it names a stage by its place
        for (stage_ = 0; stage_ < from_.board.filter.size(); ++stage_) {
            Hypothesis made = from_;
            made.board.filter.erase(made.board.filter.begin() + static_cast<std::ptrdiff_t>(stage_));
            finish(std::move(made), "left out", "whether the stage is called", usual_bits);
        }
    }

    void bypass() {
        FilterStage through;
        through.design = Fir{{1.0}};
        through.kind = "fir";
        through.arithmetic.rounding = Rounding::floor;
        set_coefficient_fraction_bits(through, 0);
        Hypothesis made = from_;
        made.board.filter = {through};
        made.board.sum = {};
        stage_ = 0;
        finish(std::move(made), "the input goes past the filter", "the condition under which the filter is called",
               usual_bits - 1.0);
    }

    const Hypothesis& from_;
    std::size_t stage_ = 0;
    std::vector<Hypothesis> found_;
};

}  // namespace

std::vector<Hypothesis> filter_changes(const Hypothesis& from) { return FilterChanges(from).all(); }

}  // namespace halflsb
