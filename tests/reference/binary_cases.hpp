// Cases travel between the reference checks and their programs as plain doubles in the machine's own
// byte order: no text, so no digit is lost and no locale matters.
#pragma once

#include <cstddef>
#include <cstdio>
#include <cstdlib>
#include <initializer_list>
#include <span>
#include <vector>

namespace halflsb::reference {

/// The next number of standard input; nothing at its end.
inline bool read_number(double& number) { return std::fread(&number, sizeof number, 1, stdin) == 1; }

/// A number that must be there.
inline double number() {
    double value = 0.0;
    if (!read_number(value)) {
        std::fputs("the case ends too early\n", stderr);
        std::exit(1);
    }
    return value;
}

inline std::size_t count() { return static_cast<std::size_t>(number()); }

/// A count, then as many numbers.
inline std::vector<double> numbers() {
    std::vector<double> list(count());
    for (double& value : list) value = number();
    return list;
}

inline void write_numbers(std::span<const double> list) {
    std::fwrite(list.data(), sizeof(double), list.size(), stdout);
}
inline void write_numbers(std::initializer_list<double> list) { write_numbers(std::span(list.begin(), list.size())); }

}  // namespace halflsb::reference
