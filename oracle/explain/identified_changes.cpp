#include "oracle/explain/identified_changes.hpp"

#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/explain/linear_fit.hpp"

namespace halflsb {
namespace {

/// Further from a step of the grid than this share of it, the next one is tried too.
constexpr double sure_share = 0.25;
constexpr std::size_t most_unsure = 5;
/// A table that is longer than it should be shows so.
constexpr std::size_t more_taps = 4;
constexpr double price_bits = 8.0, price_bits_per_coefficient = 8.0, most_price_bits = 80.0;

struct Coefficient {
    std::string name;
    double declared = 0.0, seen = 0.0;
};

std::vector<Coefficient> listed(const char* letter, const std::vector<double>& declared,
                                const std::vector<double>& seen, std::size_t first) {
    std::vector<Coefficient> list;
    for (std::size_t k = first; k < std::max(declared.size(), seen.size()); ++k) {
        list.push_back(
            {letter + std::to_string(k), k < declared.size() ? declared[k] : 0.0, k < seen.size() ? seen[k] : 0.0});
    }
    return list;
}

/// In steps of the word, as the firmware's table has them.
std::string text_of(const std::vector<Coefficient>& differing, std::size_t of, int fraction_bits) {
    constexpr std::size_t most_told = 5;
    const auto steps = [&](double value) { return std::to_string(std::llround(std::ldexp(value, fraction_bits))); };
    std::string text;
    for (std::size_t i = 0; i < std::min(differing.size(), most_told); ++i) {
        text += (i == 0 ? "" : ", ") + differing[i].name + " = " + steps(differing[i].seen) + " in place of " +
                steps(differing[i].declared);
    }
    text += ", in steps of 2^-" + std::to_string(fraction_bits);
    if (differing.size() > most_told)
        text += ": " + std::to_string(differing.size()) + " of " + std::to_string(of) + " coefficients are others";
    return text;
}

class Identified {
public:
    Identified(const Hypothesis& from, const CaptureSet& captures) : from_(from), captures_(captures) {}

    std::vector<Hypothesis> all() {
        if (from_.board.filter.size() != 1 || !stage().coefficient_fraction_bits) return {};
        step_ = std::ldexp(1.0, -*stage().coefficient_fraction_bits);
        if (const auto* fir = std::get_if<Fir>(&stage().design)) {
            look(fir->taps.size() + more_taps, 0, listed("h", fir->taps, {}, 0), {});
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&stage().design)) {
            if (cascade->sections.size() != 1) return {};
            const BiquadSection& s = cascade->sections.front();
            look(3, 2, listed("b", {s.b0, s.b1, s.b2}, {}, 0), listed("a", {1.0, s.a1, s.a2}, {}, 1));
        } else if (const auto* recursion = std::get_if<Recursion>(&stage().design)) {
            look(recursion->b.size(), recursion->a.size() - 1, listed("b", recursion->b, {}, 0),
                 listed("a", recursion->a, {}, 1));
        }
        return std::move(found_);
    }

private:
    const FilterStage& stage() const { return from_.board.filter.front(); }

    void look(std::size_t forward, std::size_t back, std::vector<Coefficient> b, const std::vector<Coefficient>& a) {
        const auto fit = fit_linear(captures_, forward, back);
        if (!fit) return;
        while (b.size() < forward) b.push_back({"h" + std::to_string(b.size()), 0.0, 0.0});
        std::vector<Coefficient> all;
        for (std::size_t k = 0; k < b.size(); ++k) all.push_back({b[k].name, b[k].declared, fit->b[k]});
        for (std::size_t k = 0; k < a.size(); ++k) all.push_back({a[k].name, a[k].declared, fit->a[k + 1]});
        std::vector<std::size_t> unsure;
        for (std::size_t i = 0; i < all.size(); ++i)
            if (std::abs(all[i].seen / step_ - std::round(all[i].seen / step_)) > sure_share) unsure.push_back(i);
        if (unsure.size() > most_unsure) return;
        for (std::size_t choice = 0; choice < (std::size_t{1} << unsure.size()); ++choice) {
            std::vector<Coefficient> taken = all;
            for (std::size_t i = 0; i < all.size(); ++i) taken[i].seen = std::round(all[i].seen / step_) * step_;
            for (std::size_t u = 0; u < unsure.size(); ++u) {
                if ((choice >> u & 1) == 0) continue;
                const double exact = all[unsure[u]].seen / step_;
                taken[unsure[u]].seen = (std::round(exact) + (exact > std::round(exact) ? 1.0 : -1.0)) * step_;
            }
            add(taken, b.size());
        }
    }

    void add(const std::vector<Coefficient>& taken, std::size_t forward) {
        std::vector<Coefficient> differing;
        for (const Coefficient& one : taken)
            if (std::round(one.declared / step_) * step_ != one.seen) differing.push_back(one);
        if (differing.empty()) return;
        Hypothesis made = from_;
        put(made.board.filter.front(), taken, forward);
        const double price =
            std::min(most_price_bits, price_bits + price_bits_per_coefficient * static_cast<double>(differing.size()));
        add_changed(from_, std::move(made),
                    {Slot::filter, 0, text_of(differing, taken.size(), *stage().coefficient_fraction_bits),
                     "the table of coefficients", price},
                    found_);
    }

    static void put(FilterStage& stage, const std::vector<Coefficient>& taken, std::size_t forward) {
        const auto seen = [&](std::size_t i) { return taken[i].seen; };
        if (auto* fir = std::get_if<Fir>(&stage.design)) {
            fir->taps.clear();
            for (std::size_t k = 0; k < taken.size(); ++k) fir->taps.push_back(seen(k));
            while (fir->taps.size() > 1 && fir->taps.back() == 0.0) fir->taps.pop_back();
        } else if (auto* cascade = std::get_if<BiquadCascade>(&stage.design)) {
            cascade->sections.front() = {seen(0), seen(1), seen(2), seen(3), seen(4)};
        } else if (auto* recursion = std::get_if<Recursion>(&stage.design)) {
            for (std::size_t k = 0; k < forward; ++k) recursion->b[k] = seen(k);
            for (std::size_t k = forward; k < taken.size(); ++k) recursion->a[k - forward + 1] = seen(k);
        }
    }

    const Hypothesis& from_;
    const CaptureSet& captures_;
    double step_ = 1.0;
    std::vector<Hypothesis> found_;
};

}  // namespace

std::vector<Hypothesis> identified_changes(const Hypothesis& from, const CaptureSet& captures) {
    return Identified(from, captures).all();
}

}  // namespace halflsb
