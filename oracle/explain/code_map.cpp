#include "oracle/explain/code_map.hpp"

#include <algorithm>
#include <array>
#include <cstddef>

namespace halflsb {
namespace {

/// What the host writes or reads as `format` and the board the other way: the same bytes.
Code as_bytes(const SampleFormat& from, const SampleFormat& to, Code code) {
    std::array<std::byte, 4> bytes{};
    const std::span<std::byte> word(bytes.data(), from.word_bytes());
    to_wire_bytes(from, std::span<const Code>(&code, 1), word);
    Code read = 0;
    from_wire_bytes(to, word, std::span<Code>(&read, 1));
    return read;
}

Code narrowed(std::int64_t number) { return static_cast<Code>(static_cast<std::uint32_t>(number)); }

/// The changed number of a number, both around zero.
std::int64_t changed(const CodeMap& map, std::int64_t half_range, std::int64_t x) {
    const auto held = [half_range](std::int64_t number) { return std::clamp(number, -half_range, half_range - 1); };
    const std::int64_t range = 2 * half_range;
    switch (map.kind) {
        case CodeMapKind::negated:
            return held(-x);
        case CodeMapKind::negated_wrapping:
            return x == -half_range ? x : -x;
        case CodeMapKind::negative_is_above:
            return x < 0 ? x + range : x;
        case CodeMapKind::complemented:
            return -x - 1;
        case CodeMapKind::offset_kept:
            return x + half_range;
        case CodeMapKind::offset_missing:
            return x - half_range;
        case CodeMapKind::top_bit_inverted:
            return x < 0 ? x + half_range : x - half_range;
        case CodeMapKind::sign_lost:
            return x < 0 ? x + half_range : x;
        case CodeMapKind::negative_is_top:
            return x < 0 ? half_range - 1 : x;
        case CodeMapKind::negative_is_zero:
            return std::max<std::int64_t>(x, 0);
        case CodeMapKind::low_bits_cleared:
            return (x >> map.amount) * (std::int64_t{1} << map.amount);
        case CodeMapKind::moved_up:
            return held(x * (std::int64_t{1} << map.amount));
        case CodeMapKind::moved_up_wrapping: {
            const std::int64_t moved = (x * (std::int64_t{1} << map.amount)) & (range - 1);
            return moved >= half_range ? moved - range : moved;
        }
        case CodeMapKind::moved_down:
            return x >> map.amount;
        case CodeMapKind::clamped: {
            const std::int64_t half = half_range >> map.amount;
            return std::clamp(x, -half, half - 1);
        }
        case CodeMapKind::lowest_raised:
            return std::max(x, 1 - half_range);
        case CodeMapKind::raised:
            return held(x + map.amount);
        default:
            return x;
    }
}

Code halves_swapped(Code code) {
    const auto bits = static_cast<std::uint32_t>(code);
    return static_cast<Code>(bits << 16 | bits >> 16);
}

void change_codes(const CodeMap& map, const SampleFormat& format, std::span<Code> codes) {
    const std::int64_t zero = zero_code(format), half_range = std::int64_t{1} << (format.word_bits - 1);
    for (Code& code : codes) {
        if (map.kind == CodeMapKind::halves_swapped) {
            code = halves_swapped(code);
        } else {
            code = narrowed(changed(map, half_range, code - zero) + zero);
        }
    }
}

}  // namespace

void apply(const CodeMap& map, const SampleFormat& format, std::span<Code> codes) {
    if (map.kind == CodeMapKind::none) return;
    if (map.kind == CodeMapKind::other_layout) {
        for (Code& code : codes) code = as_bytes(format, map.layout, code);
    } else {
        change_codes(map, format, codes);
    }
}

void apply_at_output(const CodeMap& map, const SampleFormat& format, std::span<Code> codes) {
    if (map.kind == CodeMapKind::none) return;
    if (map.kind == CodeMapKind::other_layout) {
        for (Code& code : codes) code = as_bytes(map.layout, format, code);
    } else {
        change_codes(map, format, codes);
        for (Code& code : codes) code = as_bytes(format, format, code);
    }
}

std::vector<NamedCodeMap> code_maps_of(const SampleFormat& format) {
    std::vector<NamedCodeMap> maps;
    const auto add = [&](CodeMapKind kind, int amount, std::string what, double price_bits) {
        maps.push_back({{kind, amount, format}, std::move(what), price_bits});
    };
    if (format.word_bytes() > 1) {
        const ByteOrder other = format.byte_order == ByteOrder::little ? ByteOrder::big : ByteOrder::little;
        if (const auto layout = with_layout(format, format.justification, other)) {
            maps.push_back(
                {{CodeMapKind::other_layout, 0, *layout}, "the bytes of each word in the opposite order", 6});
        }
    }
    if (format.word_bytes() == 4) add(CodeMapKind::halves_swapped, 0, "the 16-bit halves of each word exchanged", 8);
    if (!format.has_lsb()) return maps;
    for (const Justification other : {Justification::left, Justification::right}) {
        if (other == format.justification || format.justification == Justification::packed) continue;
        if (const auto layout = with_layout(format, other, format.byte_order)) {
            const std::string what = other == Justification::left ? "words left-justified" : "words right-justified";
            maps.push_back({{CodeMapKind::other_layout, 0, *layout}, what, 6});
        }
    }
    add(CodeMapKind::negated, 0, "the opposite sign", 5);
    add(CodeMapKind::negated_wrapping, 0,
        "the opposite sign in two's complement, in which the lowest number is its own opposite", 5.5);
    add(CodeMapKind::complemented, 0, "each bit inverted", 7);
    add(CodeMapKind::offset_kept, 0, "half the range added to each number", 6);
    add(CodeMapKind::offset_missing, 0, "half the range subtracted from each number", 6);
    add(CodeMapKind::top_bit_inverted, 0, "the top bit inverted (offset binary for two's complement)", 6);
    add(CodeMapKind::sign_lost, 0, "the sign bit cleared", 7);
    add(CodeMapKind::negative_is_top, 0, "negative numbers read as unsigned and held at the top", 7);
    add(CodeMapKind::negative_is_above, 0, "negative numbers taken as unsigned ones, beyond the top", 6.5);
    add(CodeMapKind::negative_is_zero, 0, "negative numbers discarded", 8);
    add(CodeMapKind::lowest_raised, 0, "the lowest code not used", 9);
    for (int amount = 1; amount < format.word_bits && amount <= 16; ++amount) {
        const std::string bits = amount == 1 ? "the lowest bit" : "the lowest " + std::to_string(amount) + " bits";
        add(CodeMapKind::low_bits_cleared, amount, bits + " cleared", 7.0 + amount / 4.0);
        add(CodeMapKind::clamped, amount, "held within " + std::to_string(format.word_bits - amount) + " bits",
            8.0 + amount / 4.0);
        if (amount > 8) continue;
        const std::string times = std::to_string(1 << amount);
        add(CodeMapKind::moved_up, amount, "times " + times, 8.0 + amount / 4.0);
        add(CodeMapKind::moved_up_wrapping, amount, "times " + times + ", the upper bits lost", 9.0 + amount / 4.0);
        add(CodeMapKind::moved_down, amount, "divided by " + times, 8.0 + amount / 4.0);
    }
    for (const int steps : {1, -1}) {
        add(CodeMapKind::raised, steps,
            std::to_string(steps > 0 ? steps : -steps) + " LSB " + (steps > 0 ? "added" : "subtracted"), 8.0);
    }
    return maps;
}

}  // namespace halflsb
