// Boards that return another number of samples than they got.
#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

namespace halflsb {
namespace {

test::ModelBoard::Filter changing(int up, int down, int phase) {
    test::ModelBoard::Filter filter;
    filter.name = "changing";
    filter.up = up;
    filter.down = down;
    filter.phase = phase;
    return filter;
}

ReturnedCount count_of(int up, int down, int phase) {
    return [=](std::int64_t sent) { return (sent + down - 1 - phase) / down * up; };
}

/// Each kept sample, and zeros behind it.
std::vector<Code> expected_of(int up, int down, int phase, std::int64_t first, std::int64_t count) {
    std::vector<Code> codes;
    for (std::int64_t n = 0; n < count; ++n) {
        if (n % down != phase) continue;
        codes.push_back(test::code_at(first + n));
        codes.insert(codes.end(), static_cast<std::size_t>(up - 1), 0);
    }
    return codes;
}

}  // namespace

TEST_CASE("rates: every sample of a board that returns fewer or more comes back in order", "[wire]") {
    struct Rate {
        int up, down, phase;
    };
    for (const Rate rate :
         {Rate{1, 8, 0}, Rate{1, 8, 7}, Rate{3, 1, 0}, Rate{3, 2, 1}, Rate{1, 300, 0}, Rate{2, 2, 0}}) {
        for (const int block : {1, 5, 64}) {
            test::Bench bench;
            bench.board.filters = {changing(rate.up, rate.down, rate.phase)};
            bench.limits.block_samples = block;
            REQUIRE(bench.open(0, count_of(rate.up, rate.down, rate.phase)));
            const auto streamed = test::stream(bench.session(), 1200, bench.clock);
            CAPTURE(rate.up, rate.down, rate.phase, block, streamed.error ? to_text(*streamed.error) : "");
            CHECK_FALSE(streamed.error);
            CHECK(streamed.is_in_order);
            CHECK(streamed.samples == expected_of(rate.up, rate.down, rate.phase, 0, 1200));
            CHECK(bench.board.processed_samples == 1200);
        }
    }
}

TEST_CASE("rates: a reset starts the group of a decimator anew", "[wire]") {
    test::Bench bench;
    bench.board.filters = {changing(1, 4, 3)};
    bench.limits.block_samples = 16;
    REQUIRE(bench.open(0, count_of(1, 4, 3)));
    const auto streamed = test::stream(bench.session(), 200, bench.clock, {10, 51});
    CHECK_FALSE(streamed.error);
    auto expected = expected_of(1, 4, 3, 0, 10);
    for (const auto& part : {expected_of(1, 4, 3, 10, 41), expected_of(1, 4, 3, 51, 149)})
        expected.insert(expected.end(), part.begin(), part.end());
    CHECK(streamed.samples == expected);
}

TEST_CASE("rates: a board that returns with another input of the group has broken the stream", "[wire]") {
    test::Bench bench;
    bench.board.filters = {changing(1, 4, 3)};
    bench.limits.block_samples = 6;
    REQUIRE(bench.open(0, count_of(1, 4, 0)));
    const auto streamed = test::stream(bench.session(), 100, bench.clock);
    REQUIRE(streamed.error);
    CHECK(streamed.error->kind == ErrorKind::bench);
    CHECK(streamed.error->problem ==
          "the board answered block 0 (samples 0 to 5) with 1 sample; the plan's filter returns 2 for them");
    CHECK(
        streamed.error->remedy ==
        "say in the plan which input of each group a decimator returns with (phase_samples), or correct the firmware: "
        "it answers each block with what came of it, docs/wire.md 3");
}

TEST_CASE("rates: blocks are asked so small that the answer fits the largest frame", "[wire]") {
    test::Bench bench;
    bench.board.max_block_samples = 65535;
    bench.board.filters = {changing(40, 1, 0)};
    bench.limits.block_samples = 65535;
    std::uint64_t asked = 0;
    bench.board.instead = [&](std::uint8_t type, const test::Bytes& body, test::Bytes&) {
        if (type == 0x02) asked = test::ModelBoard::number(body, 5, 2);
        return false;
    };
    REQUIRE(bench.open(0, count_of(40, 1, 0)));
    CHECK(asked == 262140 / (2 * 40));
}

TEST_CASE("rates: the greeting says how many samples come back", "[wire]") {
    test::Bench bench;
    bench.board.filters = {changing(3, 2, 0), test::ModelBoard::Filter{}};
    const auto greeting = bench.session().greet();
    REQUIRE(greeting);
    CHECK(greeting->filters[0].up == 3);
    CHECK(greeting->filters[0].down == 2);
    CHECK(greeting->filters[1].up == 1);
    CHECK(greeting->filters[1].down == 1);

    test::Bench zero;
    zero.board.filters = {changing(0, 2, 0)};
    const auto refused = zero.session().greet();
    REQUIRE_FALSE(refused);
    CHECK(refused.error().problem ==
          "the board's greeting cannot be used: filter 0 (\"changing\"): it returns 0 samples for 2");
}

TEST_CASE("rates: the cost of a stream counts what comes back", "[wire]") {
    // 25 blocks of 8 samples: 25 answers with one sample each, then 50 of 4 samples with 12.
    CHECK(wire_cost(200, 8, {2, 2, 1, 8}).bytes_to_host == 25 * wire_cost(1, 1, {2, 2, 1, 1}).bytes_to_host);
    CHECK(wire_cost(200, 4, {2, 2, 3, 1}).bytes_to_host == wire_cost(600, 12, {2, 2, 1, 1}).bytes_to_host);
    CHECK(wire_cost(200, 8, {2, 2, 1, 8}).bytes_to_board == wire_cost(200, 8, {2, 2, 1, 1}).bytes_to_board);
    // Half of the answers are empty.
    CHECK(wire_cost(200, 4, {2, 2, 1, 8}).bytes_to_host ==
          25 * (wire_cost(1, 1, {2, 2, 1, 1}).bytes_to_host + wire_cost(1, 1, {2, 0, 1, 1}).bytes_to_host));
}

}  // namespace halflsb
