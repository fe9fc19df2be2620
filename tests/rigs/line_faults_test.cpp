#include "rigs/virtual-board/line_faults.hpp"

#include <catch2/catch.hpp>
#include <numeric>

using halflsb::board::FirstStream;
using halflsb::board::SpoiltDirection;

namespace {

std::vector<std::uint8_t> passed_in_pieces(SpoiltDirection direction, std::size_t count, std::size_t piece) {
    std::vector<std::uint8_t> bytes(count), out;
    std::iota(bytes.begin(), bytes.end(), std::uint8_t{1});
    for (std::size_t at = 0; at < count; at += piece) {
        direction.append(bytes.data() + at, std::min(piece, count - at), out);
    }
    return out;
}

}  // namespace

TEST_CASE("line faults: each nth byte is meant, however the bytes come", "[rigs]") {
    for (std::size_t piece : {1u, 3u, 10u}) {
        INFO("pieces of " << piece);
        CHECK(passed_in_pieces({0, 0, 0}, 5, piece) == std::vector<std::uint8_t>{1, 2, 3, 4, 5});
        CHECK(passed_in_pieces({0, 3, 0}, 10, piece) == std::vector<std::uint8_t>{1, 2, 4, 5, 7, 8, 10});
        CHECK(passed_in_pieces({0, 0, 4}, 8, piece) == std::vector<std::uint8_t>{1, 2, 3, 4, 4, 5, 6, 7, 8, 8});
        CHECK(passed_in_pieces({2, 0, 0}, 6, piece) == std::vector<std::uint8_t>{1, 2 ^ 1, 3, 4 ^ 2, 5, 6 ^ 4});
    }
}

TEST_CASE("first stream: its answers are told from all others, until another START is answered", "[rigs]") {
    using Answer = std::vector<std::uint8_t>;
    const Answer greeting = {0, 9, 0x81, 7, 0}, started = {0, 12, 0x82, 1, 0}, again = {0, 12, 0x82, 2, 0};
    const Answer response = {9, 0x90, 1, 0}, done = {9, 0x91, 1, 0}, expect = {4, 0x92, 1, 0}, refused = {5, 0xFF, 0};
    FirstStream first;
    CHECK_FALSE(first.has({}));
    CHECK_FALSE(first.has(greeting));
    CHECK_FALSE(first.has(started));
    for (const Answer& answer : {response, done, expect}) CHECK(first.has(answer));
    CHECK_FALSE(first.has(refused));
    CHECK_FALSE(first.has(greeting));
    CHECK_FALSE(first.has(started));  // the same START, asked again
    CHECK(first.has(response));
    CHECK_FALSE(first.has(again));
    for (const Answer& answer : {response, done, expect}) CHECK_FALSE(first.has(answer));
    CHECK_FALSE(first.has(started));
    CHECK_FALSE(first.has(response));
}
