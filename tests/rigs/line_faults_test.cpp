#include "rigs/virtual-board/line_faults.hpp"

#include <catch2/catch.hpp>
#include <numeric>

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
