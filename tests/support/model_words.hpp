// How docs/wire.md 2.4 lays a sample out in bytes, for the model board: written from that page alone, byte by
// byte, so that it shares nothing with stimuli/sample_format.
#pragma once

#include <cstdint>
#include <stdexcept>
#include <vector>

namespace halflsb::test {

class ModelWords {
public:
    /// `format`: the byte of a filter's page.
    explicit ModelWords(int format)
        : number_(format & 0x1F), layout_(format >> 5 & 3), is_big_endian_((format & 0x80) != 0) {
        if (number_ < 1 || number_ > 11 || layout_ > 2) throw std::logic_error("the model knows no such format");
    }

    std::size_t bytes() const {
        constexpr std::size_t containers[] = {0, 2, 4, 2, 4, 4, 1, 1, 4, 1, 2, 2};
        return layout_ == packed ? 3 : containers[static_cast<std::size_t>(number_)];
    }
    int bits() const {
        constexpr int words[] = {0, 16, 32, 16, 32, 32, 8, 8, 24, 8, 12, 16};
        return words[static_cast<std::size_t>(number_)];
    }
    /// Offset binary: what stands for zero.
    std::int64_t zero() const { return number_ >= 9 ? std::int64_t{1} << (bits() - 1) : 0; }

    std::int64_t read(const std::vector<std::uint8_t>& from, std::size_t at) const {
        std::uint64_t container = 0;
        for (std::size_t k = 0; k < bytes(); ++k) container |= std::uint64_t{from.at(at + k)} << (8 * place(k));
        if (layout_ == left) container >>= spare_bits();
        const std::uint64_t word = container & mask();
        const bool is_negative = number_ <= 8 && (word >> (bits() - 1) & 1) != 0;
        return static_cast<std::int64_t>(word) - (is_negative ? std::int64_t{1} << bits() : 0);
    }
    void write(std::vector<std::uint8_t>& to, std::int64_t code) const {
        // Right: signed words are sign-extended, unsigned ones have zeros above.
        std::uint64_t container = static_cast<std::uint64_t>(code);
        if (number_ >= 9 || layout_ == left) container &= mask();
        if (layout_ == left) container <<= spare_bits();
        std::vector<std::uint8_t> word(bytes());
        for (std::size_t k = 0; k < bytes(); ++k) word[k] = static_cast<std::uint8_t>(container >> (8 * place(k)));
        to.insert(to.end(), word.begin(), word.end());
    }

private:
    static constexpr int left = 1, packed = 2;
    std::size_t place(std::size_t k) const { return is_big_endian_ ? bytes() - 1 - k : k; }
    std::uint64_t mask() const { return (std::uint64_t{1} << bits()) - 1; }
    int spare_bits() const { return static_cast<int>(8 * bytes()) - bits(); }

    int number_, layout_;
    bool is_big_endian_;
};

}  // namespace halflsb::test
