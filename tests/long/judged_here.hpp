// What the long runs of a CaseJudge without a board share: the responses, and the memory they took.
#pragma once

#include <array>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <fstream>
#include <string>
#include <utility>

#include "oracle/judge/case_judge.hpp"

namespace halflsb::test {

[[noreturn]] inline void give_up(const std::string& why) {
    std::fprintf(stderr, "%s\n", why.c_str());
    std::exit(1);
}

/// Of this program's own memory. Not getrusage(): its peak is that of the process before exec, too, and a
/// large parent would hide growth.
inline double peak_mib() {
    std::ifstream status("/proc/self/status");
    for (std::string word; status >> word;) {
        double kib = 0.0;
        if (word == "VmHWM:" && status >> kib) return kib / 1024.0;
    }
    give_up("/proc/self/status tells no peak");
}

template <class T>
T value_of(Outcome<T> outcome) {
    if (!outcome) give_up(to_text(outcome.error()));
    return std::move(outcome).value();
}

inline constexpr std::size_t averaged_points = 16;

/// The mean of the last 16 codes, rounded half up, as firmware would: a sum that runs.
class MovingAverageBoard {
public:
    Code step(Code in) {
        sum_ += in - line_[at_];
        line_[at_] = in;
        at_ = (at_ + 1) % averaged_points;
        const std::int64_t rounded = sum_ + static_cast<std::int64_t>(averaged_points / 2);
        return static_cast<Code>(rounded >= 0 ? rounded / 16 : -((-rounded + 15) / 16));
    }

private:
    std::array<std::int64_t, averaged_points> line_{};
    std::size_t at_ = 0;
    std::int64_t sum_ = 0;
};

}  // namespace halflsb::test
