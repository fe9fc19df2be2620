#include "stimuli/philox.hpp"

#include <catch2/catch.hpp>
#include <set>

using namespace halflsb;

TEST_CASE("philox: the known answers of its authors", "[stimuli]") {
    // SEEN: the "philox4x32 10" lines of the file kat_vectors that Salmon et al. publish with the method.
    CHECK(philox4x32_10({0, 0, 0, 0}, {0, 0}) == PhiloxCounter{0x6627e8d5, 0xe169c58d, 0xbc57ac4c, 0x9b00dbd8});
    CHECK(philox4x32_10({0xffffffff, 0xffffffff, 0xffffffff, 0xffffffff}, {0xffffffff, 0xffffffff}) ==
          PhiloxCounter{0x408f276d, 0x41c83b0e, 0xa20bc7c6, 0x6d5451fd});
    CHECK(philox4x32_10({0x243f6a88, 0x85a308d3, 0x13198a2e, 0x03707344}, {0xa4093822, 0x299f31d0}) ==
          PhiloxCounter{0xd16cfe09, 0x94fdcceb, 0x5001e420, 0x24126ea1});
}

TEST_CASE("philox: a sequence is the pairs one after the other, low word first", "[stimuli]") {
    const auto pair = random_pair(0, RandomPurpose::noise, 0);
    CHECK(pair[0] == 0xe169c58d6627e8d5);  // the first known answer above
    CHECK(pair[1] == 0x9b00dbd8bc57ac4c);
    for (std::uint64_t index : {0ULL, 1ULL, 2ULL, 7ULL, 8'589'934'591ULL, 8'589'934'592ULL}) {
        CHECK(random_bits(9, RandomPurpose::noise, index) ==
              random_pair(9, RandomPurpose::noise, index / 2)[index % 2]);
    }
}

TEST_CASE("philox: seed, purpose, stream and every part of the index lead elsewhere", "[stimuli]") {
    std::set<std::uint64_t> seen;
    std::size_t drawn = 0;
    for (const std::uint64_t seed : {0ULL, 1ULL, 1ULL << 32, 1ULL << 52}) {
        for (const auto purpose : {RandomPurpose::noise, RandomPurpose::phases}) {
            for (const std::uint32_t stream : {0U, 1U, 1U << 31}) {
                for (const std::uint64_t index : {0ULL, 1ULL, 2ULL, 1ULL << 33, 1ULL << 34}) {
                    seen.insert(random_bits(seed, purpose, index, stream));
                    ++drawn;
                }
            }
        }
    }
    CHECK(seen.size() == drawn);
}
