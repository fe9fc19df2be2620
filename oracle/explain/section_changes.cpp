#include "oracle/explain/section_changes.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <utility>

namespace halflsb {
namespace {

constexpr double usual_bits = 5.0;  ///< what everybody has done once

/// b0 b1 b2 a1 a2 in the order and with the signs in which tables have them: feedback is added.
using Table = std::array<double, 5>;
constexpr std::array<const char*, 5> names = {"b0", "b1", "b2", "a1", "a2"};

Table table_of(const BiquadSection& s) { return {s.b0, s.b1, s.b2, -s.a1, -s.a2}; }
BiquadSection section_of(const Table& t) { return {t[0], t[1], t[2], -t[3], -t[4]}; }

class SectionChanges {
public:
    SectionChanges(const BiquadSection& section, std::optional<int> stored_bits)
        : section_(section), bits_(stored_bits) {}

    std::vector<NamedSection> all() {
        signs();
        order();
        steps();
        normalisations();
        frequencies();
        return std::move(found_);
    }

private:
    template <class Alter>
    void with(std::string what, double price_bits, const Alter& alter) {
        BiquadSection changed = section_;
        alter(changed);
        for (const double c : table_of(changed))
            if (!std::isfinite(c)) return;
        found_.push_back({std::move(what), price_bits, changed});
    }

    double step() const { return bits_ ? std::ldexp(1.0, -*bits_) : 0.0; }
    double stored(double c) const { return bits_ ? std::round(std::ldexp(c, *bits_)) * step() : c; }

    void signs() {
        with("a1 with the opposite sign", usual_bits, [](BiquadSection& s) { s.a1 = -s.a1; });
        with("a2 with the opposite sign", usual_bits, [](BiquadSection& s) { s.a2 = -s.a2; });
        with("a1 and a2 with the opposite sign", usual_bits - 1.0, [](BiquadSection& s) {
            s.a1 = -s.a1;
            s.a2 = -s.a2;
        });
        with("b1 with the opposite sign", usual_bits + 1.0, [](BiquadSection& s) { s.b1 = -s.b1; });
        with("b2 left out", usual_bits + 2.0, [](BiquadSection& s) { s.b2 = 0.0; });
        with("a2 left out", usual_bits + 2.0, [](BiquadSection& s) { s.a2 = 0.0; });
    }

    void order() {
        with("b0 and b2 exchanged", usual_bits, [](BiquadSection& s) { std::swap(s.b0, s.b2); });
        with("a1 and a2 exchanged", usual_bits, [](BiquadSection& s) { std::swap(s.a1, s.a2); });
        with("x[n-1] written before x[n-2] was kept: both are the same sample", usual_bits, [this](BiquadSection& s) {
            s.b1 = stored(s.b1) + stored(s.b2);
            s.b2 = 0.0;
        });
        with("y[n-1] written before y[n-2] was kept: both are the same sample", usual_bits, [this](BiquadSection& s) {
            s.a1 = stored(s.a1) + stored(s.a2);
            s.a2 = 0.0;
        });
        with("b and a exchanged", usual_bits + 1.0, [](BiquadSection& s) {
            const BiquadSection of = s;
            s = {1.0 / of.b0, of.a1 / of.b0, of.a2 / of.b0, of.b1 / of.b0, of.b2 / of.b0};
        });
        for (std::size_t by = 1; by < names.size(); ++by) {
            Table table = table_of(section_);
            std::rotate(table.begin(), table.begin() + static_cast<std::ptrdiff_t>(by), table.end());
            read_as(table, names.size() - by);
        }
        Table table = table_of(section_);
        std::reverse(table.begin(), table.end());
        with("the table b0 b1 b2 a1 a2 read as a2 a1 b2 b1 b0", usual_bits + 2.0,
             [&](BiquadSection& s) { s = section_of(table); });
    }

    /// The first place of the table is taken for names[first].
    void read_as(const Table& table, std::size_t first) {
        std::string what = "the table b0 b1 b2 a1 a2 read as";
        for (std::size_t i = 0; i < names.size(); ++i) what += std::string(" ") + names[(first + i) % names.size()];
        with(what, usual_bits + 1.0, [&](BiquadSection& s) { s = section_of(table); });
    }

    void steps() {
        if (!bits_) return;
        for (std::size_t i = 0; i < names.size(); ++i) {
            for (const int by : {1, -1}) {
                Table table = table_of(section_);
                for (double& c : table) c = stored(c);
                table[i] += by * step();
                with(std::string(names[i]) + " one step " + (by > 0 ? "larger" : "smaller"), usual_bits + 3.0,
                     [&](BiquadSection& s) { s = section_of(table); });
            }
        }
    }

    /// Of a section made from poles at alpha as the bilinear designs have it (a0 = 1 + alpha, a2 = (1 - alpha) / a0):
    /// a0 = 2 / (1 + a2).
    void normalisations() {
        double largest = 0.0;
        for (const double c : table_of(section_)) largest = std::max(largest, std::fabs(c));
        scaled("coefficients divided by the largest of them", usual_bits, {1, 1, 1, 1, 1}, 1.0 / largest);
        const double a0 = 2.0 / (1.0 + section_.a2);
        scaled("b0 divided by a0 once more", usual_bits + 1.0, {1, 0, 0, 0, 0}, 1.0 / a0);
        scaled("b divided by a0 once more", usual_bits + 1.0, {1, 1, 1, 0, 0}, 1.0 / a0);
        scaled("a1 and a2 divided by a0 once more", usual_bits + 1.0, {0, 0, 0, 1, 1}, 1.0 / a0);
        scaled("b and a divided by a0 once more", usual_bits + 1.0, {1, 1, 1, 1, 1}, 1.0 / a0);
        scaled("b0 not divided by a0", usual_bits + 1.0, {1, 0, 0, 0, 0}, a0);
        scaled("b not divided by a0", usual_bits + 1.0, {1, 1, 1, 0, 0}, a0);
        scaled("a1 and a2 not divided by a0", usual_bits + 1.0, {0, 0, 0, 1, 1}, a0);
        scaled("b and a not divided by a0", usual_bits + 1.0, {1, 1, 1, 1, 1}, a0);
    }

    void scaled(const char* what, double price_bits, const std::array<int, 5>& which, double by) {
        Table table = table_of(section_);
        for (std::size_t i = 0; i < table.size(); ++i)
            if (which[i] != 0) table[i] *= by;
        with(what, price_bits, [&](BiquadSection& s) { s = section_of(table); });
    }

    /// By the bilinear transform backward and forward again: s = (1 - 1/z) / (1 + 1/z) / K with K = tan(w / 2), w the
    /// angle of the poles' frequency (Oppenheim and Schafer, "Discrete-Time Signal Processing", from memory).
    void frequencies() {
        const double square = (1.0 + section_.a1 + section_.a2) / (1.0 - section_.a1 + section_.a2);
        if (!(square > 0.0)) return;
        const double k = std::sqrt(square);
        // tan of twice, and of half, the angle whose tangent is k.
        if (k < 1.0) at_frequency("designed for twice the frequency", k, 2.0 * k / (1.0 - square));
        at_frequency("designed for half the frequency", k, (std::sqrt(1.0 + square) - 1.0) / k);
    }

    void at_frequency(const char* what, double from, double to) {
        const double ratio = from / to;
        with(what, usual_bits + 0.5, [&](BiquadSection& s) {
            const Table b = moved({s.b0, s.b1, s.b2}, ratio), a = moved({1.0, s.a1, s.a2}, ratio);
            s = {b[0] / a[0], b[1] / a[0], b[2] / a[0], a[1] / a[0], a[2] / a[0]};
        });
    }
    static Table moved(const std::array<double, 3>& c, double ratio) {
        const double s0 = (c[0] + c[1] + c[2]) / 4.0, s1 = ratio * (c[0] - c[2]) / 2.0,
                     s2 = ratio * ratio * (c[0] - c[1] + c[2]) / 4.0;
        return {s2 + s1 + s0, 2.0 * (s0 - s2), s2 - s1 + s0, 0.0, 0.0};
    }

    const BiquadSection& section_;
    std::optional<int> bits_;
    std::vector<NamedSection> found_;
};

}  // namespace

std::vector<NamedSection> section_changes(const BiquadSection& section, std::optional<int> stored_bits) {
    return SectionChanges(section, stored_bits).all();
}

}  // namespace halflsb
