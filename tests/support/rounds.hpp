// How often a random test draws. A round costs many times as much under the sanitizers at -O0, and they look for
// what a hundred rounds show as well as a thousand: unless HALFLSB_FULL_COUNTS is set, as tests/run long does, they
// draw a tenth. Every other build draws all.
#pragma once

#include <cstdlib>

namespace halflsb::test {

constexpr bool is_sanitized() {
#if defined(__SANITIZE_ADDRESS__)
    return true;
#elif defined(__has_feature)
#if __has_feature(address_sanitizer)
    return true;
#else
    return false;
#endif
#else
    return false;
#endif
}

inline bool draws_all_rounds() { return !is_sanitized() || std::getenv("HALFLSB_FULL_COUNTS") != nullptr; }

inline int rounds_of(int all) { return draws_all_rounds() ? all : all / 10; }

}  // namespace halflsb::test
