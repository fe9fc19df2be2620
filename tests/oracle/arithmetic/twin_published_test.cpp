// Twins against worked sequences and tables of the handbooks; tests/published/README.md has the marks.
#include <bit>
#include <cmath>
#include <sstream>

#include "oracle/arithmetic/state_search.hpp"
#include "tests/oracle/arithmetic/twin_support.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Ratio {
    int numerator = 0, denominator = 1;
    explicit Ratio(const std::string& text) {
        char slash = 0;
        std::istringstream stream(text);
        stream >> numerator;
        if (stream >> slash) stream >> denominator;
    }
    double value() const { return static_cast<double>(numerator) / denominator; }
    bool is_exact() const { return (denominator & (denominator - 1)) == 0; }
};

/// y[n] = c1 y[n-1] + c2 y[n-2] + x[n] in i16 words, for coefficients that are stored exactly or `nudge` larger.
///
/// The tables have exact fractions. A coefficient like 9/10 is no multiple of any 2^-f: stored, it is a little larger
/// in size (nudge > 0) or smaller, by 2^-30, with 2^-50 of error. Products of numbers below 1000 with it lie within
/// 2^-20 of the exact ones, which are multiples of 1/20 at least, so only those that are whole or halves move
/// across an edge; the tests say which side is the rounding's own.
DescribedChain recursion(double c1, double c2, double nudge, const char* rounding, const char* place = "sum") {
    const double scale = 1.0 + nudge * 0x1p-30;
    const auto stage = biquads({{1.0, 0.0, 0.0, -c1 * scale, -c2 * scale}}, {{"coefficient_fraction_bits", whole(50)},
                                                                             {"rounding", std::string(rounding)},
                                                                             {"rounding_at", std::string(place)}});
    return described_chain({stage}, "i16", "i16");
}

const char* rounding_of(const std::string& text) {
    if (text == "round half away from zero") return "half-away";
    if (text == "round half up (add half, shift)") return "half-up";
    if (text == "magnitude truncation") return "toward-zero";
    return "floor";
}

Codes silent_from(const DescribedChain& chain, const std::vector<std::int64_t>& state, std::size_t samples) {
    const auto twin = make_twin(chain);
    REQUIRE(twin != nullptr);
    REQUIRE(twin->set_state(state));
    return run(*twin, Codes(samples, 0));
}

}  // namespace

TEST_CASE("published: zero-input sequences of the first order, each rounding") {
    // COMPUTED for the set-ups of Oppenheim and Schafer (MEMORY) and of Proakis and Manolakis, section 9.6 (SEEN).
    const CsvTable table("limit-cycle-first-order.csv");
    int compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const Ratio a(table.text(row, "coefficient a"));
        const std::string rounding = rounding_of(table.text(row, "quantiser"));
        // Ties move away from zero and whole numbers stay below the next one with a coefficient that is a little
        // larger; for the other roundings of positive numbers too. The sequences of fractions have no negative numbers.
        const double nudge = a.is_exact() ? 0.0 : 1.0;
        std::istringstream sequence(table.text(row, "y[0..23]"));
        std::vector<Code> expected;
        for (Code y = 0; sequence >> y;) expected.push_back(y);
        REQUIRE(expected.size() == 24);
        const Codes got = silent_from(recursion(a.value(), 0.0, nudge, rounding.c_str()), {0, 0, expected[0], 0}, 23);
        INFO("row " << row << ", a = " << a.value() << ", " << rounding);
        CHECK(got == Codes(expected.begin() + 1, expected.end()));
        ++compared;
    }
    CHECK(compared == 36);
}

TEST_CASE("published: dead bands of the first order by exhaustive search over the twin's states") {
    // COMPUTED by exhaustive search with exact fractions; the bound 0.5 / (1 - |a|) is Jackson's (MEMORY).
    const CsvTable table("dead-band-first-order.csv");
    const auto signed_largest = [](const DescribedChain& chain, std::int64_t limit) {
        const auto cycles = zero_input_cycles(chain, std::vector<std::int64_t>{0, 0, limit, 0});
        REQUIRE(cycles);
        REQUIRE_FALSE(cycles->empty());
        return cycles->front();
    };
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const Ratio a(table.text(row, "coefficient a"));
        const auto limit = static_cast<std::int64_t>(4.0 * table.number(row, "bound")) + 8;
        INFO("a = " << a.value());
        // Ties away from zero: a coefficient that is a little larger has them.
        const auto away = signed_largest(recursion(a.value(), 0.0, a.is_exact() ? 0.0 : 1.0, "half-away"), limit);
        CHECK(away.largest() == std::llabs(static_cast<std::int64_t>(table.number(row, "brute-force largest"))));
        CHECK(static_cast<double>(away.largest()) == table.number(row, "floor of bound"));
        // Floor: whole products of negative numbers stay whole with one that is a little smaller.
        const auto floor = signed_largest(recursion(a.value(), 0.0, a.is_exact() ? 0.0 : -1.0, "floor"), limit);
        CHECK(static_cast<double>(floor.lowest) == table.number(row, "same, two's-complement"));
        CHECK(floor.highest <= 0);
        const auto toward_zero = signed_largest(recursion(a.value(), 0.0, 0.0, "toward-zero"), limit);
        CHECK(static_cast<double>(toward_zero.largest()) == table.number(row, "magnitude truncation"));
        if (!a.is_exact()) continue;  // half up has ties on either side
        const auto up = signed_largest(recursion(a.value(), 0.0, 0.0, "half-up"), limit);
        CHECK(up.largest() == std::llabs(static_cast<std::int64_t>(table.number(row, "same, round half up"))));
    }
}

TEST_CASE("published: dead bands of the second order by exhaustive search over the twin's states") {
    // COMPUTED by exhaustive search over start states within +-max(3 k + 6, 20), k Jackson's estimate (MEMORY).
    const CsvTable table("dead-band-second-order.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const Ratio a1(table.text(row, "a1")), a2(table.text(row, "a2"));
        const auto k = static_cast<std::int64_t>(table.number(row, "Jackson"));
        const std::int64_t limit = std::max<std::int64_t>(3 * k + 6, 20);
        const double nudge = a1.is_exact() && a2.is_exact() ? 0.0 : 1.0;
        INFO("a1 = " << a1.value() << ", a2 = " << a2.value());
        const auto check = [&](const char* place, double largest, double period) {
            const auto cycles = zero_input_cycles(recursion(a1.value(), a2.value(), nudge, "half-away", place),
                                                  std::vector<std::int64_t>{0, 0, limit, limit});
            REQUIRE(cycles);
            REQUIRE_FALSE(cycles->empty());
            CHECK(static_cast<double>(cycles->front().largest()) == largest);
            // Cycles of one size can have several periods; the table has the one that was found first.
            bool has_period = false;
            for (const ZeroInputCycle& cycle : *cycles) {
                has_period = has_period || (static_cast<double>(cycle.largest()) == largest &&
                                            static_cast<double>(cycle.period_samples) == period);
            }
            CHECK(has_period);
        };
        check("product", table.number(row, "brute force max |y| on a cycle"), table.number(row, "its period"));
        const double single = table.number(row, "brute force max |y|, single");
        const auto cycles = zero_input_cycles(recursion(a1.value(), a2.value(), nudge, "half-away"),
                                              std::vector<std::int64_t>{0, 0, limit, limit});
        REQUIRE(cycles);
        CHECK(static_cast<double>(cycles->front().largest()) == single);
    }
}

TEST_CASE("published: the overflow oscillation of a 4-bit section depends on its ties, and saturation ends it") {
    // Oppenheim and Schafer's example (MEMORY), the sequences COMPUTED: 4-bit words, a1 = 3/4, a2 = -3/4,
    // y[-1] = 3/4, y[-2] = -3/4, in units of 1/8.
    const auto from = [](const char* rounding, Overflow overflow) {
        DescribedChain chain = recursion(0.75, -0.75, 0.0, rounding, "product");
        chain.stages[0].state.bits = 4;
        chain.stages[0].state.overflow = overflow;
        return silent_from(chain, {0, 0, 6, -6}, overflow == Overflow::wrap ? 8 : 12);
    };
    CHECK(from("half-away", Overflow::wrap) == Codes{-6, 6, -6, 6, -6, 6, -6, 6});
    CHECK(from("half-up", Overflow::wrap) == Codes{-6, -8, -1, 5, 5, 0, -4, -3});
    CHECK(from("half-away", Overflow::saturate) == Codes{7, 0, -5, -4, 1, 4, 2, -1, -3, -1, 1, 2});
}

TEST_CASE("published: a float32 sum that runs on") {
    // COMPUTED in IEEE single, left to right; the bound is Higham's, chapter 4 (MEMORY).
    const CsvTable table("float32-accumulation.csv");
    FilterStage stage{BiquadCascade{{{1.0, 0.0, 0.0, -1.0, 0.0}}}, std::nullopt};
    stage.kind = "biquad-cascade";
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const auto twin = twin_of({stage}, "f32", "f32");
        const auto addend = static_cast<float>(table.number(row, "addend (decimal)"));
        const auto count = static_cast<std::size_t>(table.number(row, "count"));
        const Codes in(100000, std::bit_cast<Code>(addend));
        Codes out(in.size());
        for (std::size_t done = 0; done < count; done += in.size()) {
            out.resize(std::min(in.size(), count - done));
            twin->process(std::span(in).first(out.size()), out);
        }
        INFO("row " << row);
        CHECK(std::bit_cast<float>(out.back()) == static_cast<float>(table.number(row, "naive")));
    }
}
