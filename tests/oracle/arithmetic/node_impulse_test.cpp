#include "oracle/arithmetic/node_impulse.hpp"

#include "oracle/arithmetic/rail_watch.hpp"
#include "tests/oracle/arithmetic/twin_support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

/// A section whose poles ring, b and a exact in 6 bits.
constexpr double b0 = 0.25, b1 = -0.5, b2 = 0.125, a1 = -1.25, a2 = 0.75;

DescribedChain section_in(const char* structure) {
    return described_chain({biquads({{b0, b1, b2, a1, a2}}, {{"rounding", std::string("floor")},
                                                             {"coefficient_fraction_bits", std::int64_t{6}},
                                                             {"accumulator_bits", std::int64_t{40}},
                                                             {"structure", std::string(structure)}})});
}

/// y and the states of the section by the equations of docs/arithmetic.md, written out once more.
struct Equations {
    std::vector<double> y, w, s1, s2;
    explicit Equations(std::size_t length) {
        double x1 = 0.0, x2 = 0.0, y1 = 0.0, y2 = 0.0, w1 = 0.0, w2 = 0.0;
        for (std::size_t n = 0; n < length; ++n) {
            const double x = n == 0 ? 1.0 : 0.0;
            const double out = b0 * x + b1 * x1 + b2 * x2 - a1 * y1 - a2 * y2, state = x - a1 * w1 - a2 * w2;
            // What the states hold after this sample.
            s2.push_back(b2 * x - a2 * out);
            s1.push_back((n == 0 ? 0.0 : s2[n - 1]) + b1 * x - a1 * out);
            y.push_back(out);
            w.push_back(state);
            x2 = x1, x1 = x, y2 = y1, y1 = out, w2 = w1, w1 = state;
        }
    }
};

void check_same(const std::vector<double>& h, const std::vector<double>& expected) {
    REQUIRE(h.size() == expected.size());
    for (std::size_t n = 0; n < h.size(); ++n) {
        INFO("sample " << n);
        CHECK_THAT(h[n], Catch::WithinAbs(expected[n], 1e-14));
    }
}

}  // namespace

TEST_CASE("node impulse: the nodes of a section answer as its equations say, in every structure", "[arithmetic]") {
    const Equations expected(60);
    const DescribedChain direct = section_in("direct-1"), second = section_in("direct-2"),
                         transposed = section_in("transposed-2");
    check_same(node_impulse(direct, "stage 1, section 1, accumulator", 60), expected.y);
    check_same(node_impulse(direct, "stage 1, section 1, state", 60), expected.y);
    check_same(node_impulse(second, "stage 1, section 1, state", 60), expected.w);
    check_same(node_impulse(second, "stage 1, section 1, feedback accumulator", 60), expected.w);
    check_same(node_impulse(second, "stage 1, section 1, output", 60), expected.y);
    check_same(node_impulse(transposed, "stage 1, section 1, state 1", 60), expected.s1);
    check_same(node_impulse(transposed, "stage 1, section 1, accumulator of state 2", 60), expected.s2);
}

TEST_CASE("node impulse: an accumulator of a moving average holds the sum, not the mean", "[arithmetic]") {
    const auto chain = described_chain(
        {promised_stage("moving-average", {{"points", std::int64_t{4}}}, {{"rounding", std::string("floor")}})});
    check_same(node_impulse(chain, "stage 1, accumulator", 6), {1, 1, 1, 1, 0, 0});
    check_same(node_impulse(chain, "stage 1, accumulator less the oldest", 6), {0, 1, 1, 1, 0, 0});
    check_same(node_impulse(chain, "stage 1, output", 6), {0.25, 0.25, 0.25, 0.25, 0, 0});
}

TEST_CASE("node impulse: full scale times its sum is the worst case of every node that no partial sum exceeds",
          "[arithmetic]") {
    for (const char* structure : {"direct-1", "direct-2", "transposed-2"}) {
        const DescribedChain chain = section_in(structure);
        const RailWatch watch(chain);
        const auto& nodes = watch.nodes();
        REQUIRE(nodes.size() >= 2);
        for (const RailNode& node : nodes) {
            INFO(structure << ": " << node.name);
            double sum = 0.0;
            for (const double value : node_impulse(chain, node.name, 600)) sum += std::fabs(value);
            REQUIRE(sum > 0.0);
            // Of the states of transposed-2 the watch takes |b x| + |a y|, which no input need reach.
            const bool is_state_of_transposed = node.name.find("state ") != std::string::npos;
            if (is_state_of_transposed) {
                CHECK(sum <= node.worst_case * (1.0 + 1e-12));
            } else {
                CHECK_THAT(sum, Catch::WithinRel(node.worst_case, 1e-9));
            }
        }
    }
}

TEST_CASE("node impulse: nothing for a node that is not there and behind a median", "[arithmetic]") {
    CHECK(node_impulse(section_in("direct-1"), "stage 2, output", 8).empty());
    CHECK(node_impulse(section_in("direct-1"), "stage 1, section 1, state 0", 8).empty());
    const auto median = described_chain(
        {promised_stage("median", {{"points", std::int64_t{3}}}, {{"rounding", std::string("floor")}})});
    CHECK(node_impulse(median, "stage 1, output", 8).empty());
}
