// What every fuzz target shares. A target is one function over bytes: libFuzzer calls it in builds of kind
// fuzz (tests/fuzz/run), replay.cpp over the committed corpus in every other kind.
#pragma once

#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <span>
#include <string>

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size);

namespace halflsb::fuzz {

/// Not assert(): a release build must stop here too.
inline void require(bool holds, const char* property, const std::string& details = {}) {
    if (holds) return;
    std::fprintf(stderr, "property does not hold: %s\n%s\n", property, details.c_str());
    std::abort();
}

inline std::span<const std::byte> bytes_of(const std::uint8_t* data, std::size_t size) {
    return std::as_bytes(std::span(data, size));
}

}  // namespace halflsb::fuzz
