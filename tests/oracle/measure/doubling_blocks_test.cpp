#include "oracle/measure/doubling_blocks.hpp"

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

DoublingBlocks<2>::Terms index_and_one(std::size_t n) { return {static_cast<double>(n), 1.0}; }

}  // namespace

TEST_CASE("blocks: two full neighbours become one when there is no room", "[measure]") {
    DoublingBlocks<2> blocks(4);
    CHECK((blocks.blocks() == 0 && blocks.samples() == 0));
    blocks.add(4, index_and_one);
    CHECK((blocks.blocks() == 4 && blocks.block_samples() == 1 && blocks.samples() == 4));
    CHECK(blocks.sum(3, 0) == 3.0);
    blocks.add(1, [](std::size_t) { return index_and_one(4); });
    CHECK((blocks.blocks() == 3 && blocks.block_samples() == 2 && blocks.samples() == 5));
    CHECK((blocks.samples_in(1) == 2 && blocks.samples_in(2) == 1));
    CHECK((blocks.sum(0, 0) == 1.0 && blocks.sum(1, 0) == 5.0 && blocks.sum(2, 0) == 4.0));
    CHECK((blocks.sum(0) == 10.0 && blocks.sum(1) == 5.0));
}

TEST_CASE("blocks: every block has its own consecutive samples, after any number of them", "[measure]") {
    for (std::size_t length = 1; length < 300; ++length) {
        DoublingBlocks<2> blocks(8);
        blocks.add(length, index_and_one);
        REQUIRE(blocks.samples() == static_cast<std::int64_t>(length));
        REQUIRE((blocks.blocks() <= 8 && (length < 8 || blocks.blocks() > 4)));
        double first = 0.0;
        for (std::size_t b = 0; b < blocks.blocks(); ++b) {
            const auto count = static_cast<double>(blocks.samples_in(b));
            REQUIRE(blocks.sum(b, 1) == count);
            REQUIRE(blocks.sum(b, 0) == count * first + 0.5 * count * (count - 1.0));
            first += count;
        }
        REQUIRE(first == static_cast<double>(length));
    }
}

TEST_CASE("blocks: joining keeps what the sums have compensated", "[measure]") {
    // Blocks that hold 1e16 + 1 and -1e16: only their lost parts know of the 1.
    DoublingBlocks<1> blocks(4);
    const double terms[] = {1e16, 1.0, 1.0, -1e16};
    blocks.add(4, [&](std::size_t n) { return DoublingBlocks<1>::Terms{terms[n]}; });
    blocks.add(5, [](std::size_t) { return DoublingBlocks<1>::Terms{0.0}; });
    CHECK(blocks.block_samples() == 4);
    CHECK(blocks.sum(0, 0) == 2.0);
    CHECK(blocks.sum(0) == 2.0);
}

TEST_CASE("blocks: any split gives the same sums, bit for bit", "[measure]") {
    const auto samples = noise(10007, 91);
    const auto term_from = [&](std::size_t first) {
        return [&samples, first](std::size_t i) {
            const double x = samples[first + i];
            return DoublingBlocks<2>::Terms{x, x * x};
        };
    };
    DoublingBlocks<2> whole;
    whole.add(samples.size(), term_from(0));
    for (const Split split : every_split) {
        DoublingBlocks<2> blocks;
        for_blocks(split, samples.size(),
                   [&](std::size_t first, std::size_t count) { blocks.add(count, term_from(first)); });
        REQUIRE(blocks.blocks() == whole.blocks());
        for (std::size_t b = 0; b < whole.blocks(); ++b) {
            REQUIRE((blocks.sum(b, 0) == whole.sum(b, 0) && blocks.sum(b, 1) == whole.sum(b, 1)));
        }
    }
}
